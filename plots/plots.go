// Package plots draws result structs; it computes nothing that could be found in a table.
//
// [Draw] writes every picture of [Pictures] for which the material holds what it needs,
// in each format asked for. The same material gives the same bytes.
package plots

import (
	"fmt"
	"io"
	"math"
	"strings"
	"time"

	"codeberg.org/go-pdf/fpdf"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgpdf"
	"gonum.org/v1/plot/vg/vgsvg"

	"axisfold/pca"
	"axisfold/pca/reduce"
	"axisfold/pca/retain"
	"axisfold/pca/stability"
	"axisfold/pcr"
)

// Material is what may be drawn; empty parts leave out the pictures that need them.
type Material struct {
	Decomposition *pca.Decomposition
	Verdict       retain.Verdict   // the rule that decided
	Overview      []retain.Verdict // all rules, the deciding one first
	// Correlations is p×p row-major, SimilarOrder the order of the channels in the map.
	Correlations []float64
	SimilarOrder []int
	// Scores is a sample of rows, ScoreRows×2, of TotalRows; Groups their group codes.
	Scores     []float64
	ScoreRows  int
	TotalRows  int64
	Groups     []int
	GroupNames []string
	// LoadingIntervals are p × components kept, row-major; nil without.
	LoadingIntervals []stability.Interval
	Reduction        *reduce.Result
	// ChannelSample is a sample of rows in original units, ChannelRows×p.
	ChannelSample []float64
	ChannelRows   int
	Rebuild       float64 // target of the reduction; 0 without
	Regression    *pcr.Result
	Units         []string // of the responses
	Confidence    float64
	// Observed and Predicted hold the same sample by response.
	Observed, Predicted [][]float64
}

// Picture is one kind of picture.
type Picture struct {
	Name string
	// ready tells whether the material holds what is needed.
	ready func(*Material) bool
	// size is width and height.
	size func(*Material) (w, h vg.Length)
	draw func(m *Material, response int, c draw.Canvas)
	// perResponse pictures are drawn once for every response.
	perResponse bool
}

// Pictures lists all pictures.
var Pictures = []Picture{scree, cumulativeShare, loadings, loadingsPlane, scoresPlane, correlationMap, retention, tradeoff, rebuilt, validation, coefficients, predictions}

// Formats lists the formats, the default first.
var Formats = []string{"svg", "png", "pdf"}

const pixelsPerInch = 160

// Draw writes the pictures through open, which is given names such as "scree.svg".
func Draw(m *Material, formats []string, open func(name string) (io.WriteCloser, error)) error {
	if err := m.check(); err != nil {
		return err
	}
	for i := range Pictures {
		p := &Pictures[i]
		if !p.ready(m) {
			continue
		}
		times := 1
		if p.perResponse {
			times = len(m.Regression.Models)
		}
		for r := range times {
			name := p.Name
			if p.perResponse && times > 1 {
				name += "-" + fileSafe(m.Regression.Models[r].Response, r)
			}
			for _, format := range formats {
				if err := p.write(m, r, format, name+"."+format, open); err != nil {
					return fmt.Errorf("picture %s: %w", name, err)
				}
			}
		}
	}
	return nil
}

func (p *Picture) write(m *Material, response int, format, name string, open func(string) (io.WriteCloser, error)) error {
	w, h := p.size(m)
	canvas, err := newCanvas(format, w, h)
	if err != nil {
		return err
	}
	p.draw(m, response, draw.New(canvas))
	out, err := open(name)
	if err != nil {
		return err
	}
	if _, err := canvas.WriteTo(out); err != nil {
		out.Close()
		return err
	}
	return out.Close()
}

type canvas interface {
	vg.CanvasSizer
	io.WriterTo
}

func newCanvas(format string, w, h vg.Length) (canvas, error) {
	switch format {
	case "svg":
		return vgsvg.New(w, h), nil
	case "png":
		return vgimg.PngCanvas{Canvas: vgimg.NewWith(vgimg.UseWH(w, h), vgimg.UseDPI(pixelsPerInch))}, nil
	case "pdf":
		return outlined{vgpdf.New(w, h)}, nil
	}
	return nil, fmt.Errorf("unknown format %q; known: %s", format, strings.Join(Formats, ", "))
}

// A date of its own in every file would make equal pictures differ.
func init() {
	fixed := time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC)
	fpdf.SetDefaultCreationDate(fixed)
	fpdf.SetDefaultModificationDate(fixed)
	fpdf.SetDefaultCatalogSort(true)
}

// check refuses what cannot be drawn, before anything is written.
func (m *Material) check() error {
	d := m.Decomposition
	if d == nil || len(d.Values) == 0 {
		return fmt.Errorf("pictures: nothing was decomposed")
	}
	for what, list := range map[string][]float64{"eigenvalues": d.Values, "eigenvectors": d.Vectors, "scores": m.Scores, "correlations": m.Correlations, "channels": m.ChannelSample} {
		for i, v := range list {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return fmt.Errorf("pictures: number %d of the %s is %g", i+1, what, v)
			}
		}
	}
	return nil
}

// fileSafe turns a name into part of a file name.
func fileSafe(name string, i int) string {
	out := strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r == '-', r == '_':
			return r
		}
		return '_'
	}, name)
	return fmt.Sprintf("%d-%s", i+1, out)
}

func always(*Material) bool          { return true }
func twoKept(m *Material) bool       { return m.Verdict.Components >= 2 }
func hasRegression(m *Material) bool { return m.Regression != nil && len(m.Regression.Models) > 0 }
func percent(share float64) string   { return fmt.Sprintf("%.1f %%", 100*share) }
func componentName(a int) string     { return fmt.Sprintf("C%d", a+1) }
func axisName(m *Material, a int) string {
	return fmt.Sprintf("%s (%s of the variance)", componentName(a), percent(m.Decomposition.Share(a)))
}

func components(n int) string {
	if n == 1 {
		return "1 component"
	}
	return fmt.Sprintf("%d components", n)
}
