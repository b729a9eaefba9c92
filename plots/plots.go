// Package plots draws result structs; it computes nothing that could be found in a table.
//
// [Draw] writes every picture of [Pictures] for which the material holds what it needs,
// in each format asked for; [Drawings] tells which those are and what to write below
// them. The same material gives the same bytes. Material that cannot be drawn is refused
// before anything is written.
package plots

import (
	"bytes"
	"fmt"
	"io"
	"runtime"
	"slices"
	"strings"
	"sync"
	"sync/atomic"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pca"
	"axisfold/pca/reduce"
	"axisfold/pca/retain"
	"axisfold/pca/rotation"
	"axisfold/pca/stability"
	"axisfold/pcr"
)

// Material is what may be drawn; empty parts leave out the pictures that need them.
type Material struct {
	// Title of the study, written small above every picture; may be empty.
	Title         string
	Decomposition *pca.Decomposition
	Verdict       retain.Verdict   // the rule that decided
	Overview      []retain.Verdict // all rules, the deciding one first
	// Correlations is p×p row-major, SimilarOrder the order in which pictures list the
	// channels; without it they keep the order of the table.
	Correlations []float64
	SimilarOrder []int
	// Tree is how they join into clusters.
	Tree *pca.Tree
	// Scores is a sample of rows, ScoreRows×2 row-major, of TotalRows; Groups their group
	// codes, positions in GroupNames.
	Scores     []float64
	ScoreRows  int
	TotalRows  int64
	Groups     []int
	GroupNames []string
	// LoadingIntervals are p × components kept, row-major; nil without.
	LoadingIntervals []stability.Interval
	Rotation         *rotation.Result
	Reduction        *reduce.Result
	// ChannelSample is a sample of rows in original units, ChannelRows×p row-major.
	ChannelSample []float64
	ChannelRows   int
	Rebuild       float64 // target of the reduction; 0 without
	Regression    *pcr.Result
	Units         []string // of the responses
	Confidence    float64  // of the intervals, in (0,1)
	// Observed and Predicted hold the same sample by response.
	Observed, Predicted [][]float64
}

// Picture is one kind of picture.
type Picture struct {
	Name string
	// Caption says in a sentence or two what is drawn and how to read it.
	Caption string
	// perResponse pictures are drawn once for every response.
	perResponse bool
	// ready tells whether the material holds what is needed.
	ready func(*Material) bool
	// check refuses numbers that cannot be drawn.
	check func(m *Material, response int) error
	// words are what stands above it: what is seen, and how to read it.
	words func(m *Material, response int) (title, subtitle string)
	// height is what draw asks for, below the words.
	height func(m *Material, response int) vg.Length
	draw   func(m *Material, response int, c draw.Canvas)
}

// Pictures lists all pictures.
var Pictures = []Picture{scree, cumulativeShare, loadings, rotatedLoadings, loadingsPlane, scoresPlane, correlationMap, dendrogram, retention, tradeoff, rebuilt, validation, coefficients, coefficientPath, predictions}

// Drawing is one picture of one material.
type Drawing struct {
	Name     string // of its files, without the extension
	Title    string // what is seen
	Caption  string // what is drawn and how to read it
	subtitle string
	picture  *Picture
	response int
}

// Drawings lists what Draw would write, in its order. It fails where Draw would, naming
// the picture and what is wrong with its numbers.
func Drawings(m *Material) ([]Drawing, error) {
	var out []Drawing
	if err := checkDecomposition(m); err != nil {
		return nil, fmt.Errorf("pictures: %w", err)
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
			if times > 1 {
				name += "-" + fileSafe(m.Regression.Models[r].Response, r)
			}
			if err := p.check(m, r); err != nil {
				return nil, fmt.Errorf("picture %s: %w", name, err)
			}
			title, subtitle := p.words(m, r)
			out = append(out, Drawing{Name: name, Title: title, Caption: p.Caption, subtitle: subtitle, picture: p, response: r})
		}
	}
	return out, nil
}

// Draw writes the pictures through open, which is given names such as "scree.svg".
func Draw(m *Material, formats []string, open func(name string) (io.WriteCloser, error)) error {
	for _, f := range formats {
		if !slices.Contains(Formats, f) {
			return fmt.Errorf("pictures: unknown format %q; known: %s", f, strings.Join(Formats, ", "))
		}
	}
	drawings, err := Drawings(m)
	if err != nil {
		return err
	}
	var files []*file
	for i := range drawings {
		for _, format := range formats {
			files = append(files, &file{drawing: &drawings[i], format: format})
		}
	}
	paint(m, files)
	for _, f := range files {
		if err := f.write(open); err != nil {
			return fmt.Errorf("picture %s: %w", f.drawing.Name, err)
		}
	}
	return nil
}

// file is a drawing in one format.
type file struct {
	drawing *Drawing
	format  string
	content bytes.Buffer
	err     error
}

// paint fills the files, on all cores: they do not depend on one another.
func paint(m *Material, files []*file) {
	var wg sync.WaitGroup
	var next atomic.Int64
	for range min(runtime.GOMAXPROCS(0), len(files)) {
		wg.Go(func() {
			for i := next.Add(1) - 1; i < int64(len(files)); i = next.Add(1) - 1 {
				files[i].paint(m)
			}
		})
	}
	wg.Wait()
}

func (f *file) paint(m *Material) {
	d := f.drawing
	head := headLines(m.Title, d.Title, d.subtitle)
	canvas := newCanvas(f.format, pageWidth, pageHeight(head, d.picture.height(m, d.response)))
	d.picture.draw(m, d.response, drawHead(draw.New(canvas), head))
	_, f.err = canvas.WriteTo(&f.content)
}

func (f *file) write(open func(string) (io.WriteCloser, error)) error {
	if f.err != nil {
		return f.err
	}
	out, err := open(f.drawing.Name + "." + f.format)
	if err != nil {
		return err
	}
	if _, err := f.content.WriteTo(out); err != nil {
		out.Close()
		return err
	}
	return out.Close()
}

// longestFilePart bounds a response's part of a file name, which file systems limit.
const longestFilePart = 60

// fileSafe turns the name of response i into part of a file name; its number keeps names
// apart that become alike.
func fileSafe(name string, i int) string {
	out := strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r == '-', r == '_':
			return r
		}
		return '_'
	}, name)
	return fmt.Sprintf("%d-%s", i+1, out[:min(len(out), longestFilePart)])
}
