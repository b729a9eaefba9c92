package plots

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"image/png"
	"io"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pca"
	"axisfold/pca/reduce"
	"axisfold/pca/retain"
	"axisfold/pcr"
)

// material makes something of everything there is to draw, p channels and k components
// kept, from rows made here.
func material(t testing.TB, p, k int, matrix pca.Matrix, names func(j int) string) *Material {
	t.Helper()
	rng := rand.New(rand.NewPCG(uint64(p), uint64(k)))
	n := 300
	data := make([]float64, 0, n*(p+1))
	for range n {
		u, v, w := rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()
		for j := range p {
			sign := float64(1 - 2*(j%2))
			data = append(data, sign*(u*float64(j%3)+v*float64(j%5)/2)+w*float64(j%7)/4+rng.NormFloat64()*.7)
		}
		data = append(data, 2*u-v+rng.NormFloat64())
	}
	o := pca.Options{Matrix: matrix}
	var x []int
	for j := range p {
		o.Names = append(o.Names, names(j))
		x = append(x, j)
		method := pca.UnitNormal
		if matrix == pca.Covariance {
			method = pca.CenterOnly
		}
		o.Methods = append(o.Methods, method)
	}
	b := pca.NewBuilder(p+1, pca.CrossProducts, 0)
	whole := b.Summarize(data, n)
	var folds []*pca.Summary
	for f := range 5 {
		folds = append(folds, b.Summarize(data[f*60*(p+1):(f+1)*60*(p+1)], 60))
	}
	fit, err := pcr.Fit(whole, folds, x, []int{p}, pcr.Options{Predictors: o, Responses: []string{"outcome"},
		Choice: pcr.Given, Components: min(k, p), Order: pcr.ByVariance, Confidence: .95})
	if err != nil {
		t.Fatal(err)
	}
	d := fit.Decomposition
	m := &Material{Decomposition: d, TotalRows: 5000, Regression: fit, Confidence: .95, Units: []string{"m"}}
	m.Verdict = retain.Verdict{Rule: "parallel", Setting: "percentile 95", Components: min(k, p)}
	m.Overview = []retain.Verdict{m.Verdict, {Rule: "share", Setting: "at_least 0.9", Components: p}, {Rule: "evidence", Abstains: true}}
	for a := range d.Values {
		m.Verdict.Reference = append(m.Verdict.Reference, d.Total/float64(p)*(1.3-.6*float64(a)/float64(p)))
	}
	if p > 1 && p <= 30 { // the curve of a hundred channels takes a while
		if m.Reduction, err = reduce.Choose(whole.Pick(x), nil, reduce.Options{Names: o.Names, Size: (p + 1) / 2, ExactUpTo: 8}); err != nil {
			t.Fatal(err)
		}
		m.Rebuild = .95
	}
	m.Correlations = whole.Pick(x).Correlations()
	m.SimilarOrder = pca.SimilarOrder(m.Correlations, p)
	m.ScoreRows, m.GroupNames = n, []string{"early", "late", "night shift"}
	observed, predicted := make([]float64, n), make([]float64, n)
	half := make([]float64, n)
	rows := make([]float64, 0, n*p)
	for i := range n {
		rows = append(rows, data[i*(p+1):i*(p+1)+p]...)
		observed[i] = data[i*(p+1)+p]
		m.Groups = append(m.Groups, i%3)
	}
	m.ChannelSample, m.ChannelRows = rows, n
	fit.NewPredictor(0, .95, false).Predict(predicted, half, rows, n)
	m.Observed, m.Predicted = [][]float64{observed}, [][]float64{predicted}
	if p >= 2 {
		m.Scores = make([]float64, 2*n)
		spare := make([]float64, n)
		d.NewScorer([]int{0, 1}).Scores(m.Scores, spare, spare, rows, n)
	}
	return m
}

func plainName(j int) string { return fmt.Sprintf("channel_%d", j+1) }

type closing struct{ *bytes.Buffer }

func (closing) Close() error { return nil }

func drawAll(t testing.TB, m *Material, formats ...string) map[string][]byte {
	t.Helper()
	files := map[string]*bytes.Buffer{}
	if err := Draw(m, formats, func(name string) (io.WriteCloser, error) {
		files[name] = &bytes.Buffer{}
		return closing{files[name]}, nil
	}); err != nil {
		t.Fatal(err)
	}
	out := map[string][]byte{}
	for name, b := range files {
		out[name] = b.Bytes()
	}
	return out
}

// Every picture in every format at sizes from one channel to a hundred, for both
// matrices; the same material gives the same bytes. With AXISFOLD_PICTURES naming a
// folder the PNGs are kept there to look at.
func TestAllPictures(t *testing.T) {
	for _, p := range []int{1, 2, 4, 30, 100} {
		for _, k := range []int{0, 1, 2, 8} {
			for _, matrix := range []pca.Matrix{pca.Correlation, pca.Covariance} {
				if k == 8 && p < 100 || k == 2 && p == 100 || k < 2 && p > 4 || matrix == pca.Covariance && (k != 2 || p > 4) {
					continue
				}
				m := material(t, p, k, matrix, plainName)
				first := drawAll(t, m, Formats...)
				want := len(Pictures) * 3
				if m.Verdict.Components < 2 {
					want -= 2 * 3 // neither plane
				}
				if p == 1 {
					want -= 3 * 3 // no map of one channel, and none to drop
				}
				if p > 30 {
					want -= 2 * 3 // no choice of channels was made
				}
				if len(first) != want {
					t.Errorf("p=%d k=%d: %d files, want %d", p, k, len(first), want)
				}
				for name, b := range first {
					if len(b) < 500 {
						t.Errorf("p=%d k=%d: %s has %d bytes", p, k, name, len(b))
					}
				}
				if p == 30 && k == 2 {
					for name, b := range drawAll(t, m, Formats...) {
						if !bytes.Equal(b, first[name]) {
							t.Errorf("%s differs when drawn again", name)
						}
					}
				}
				if dir := os.Getenv("AXISFOLD_PICTURES"); dir != "" {
					for name, b := range first {
						if strings.HasSuffix(name, ".png") {
							os.WriteFile(filepath.Join(dir, fmt.Sprintf("p%d-k%d-%s-%s", p, k, matrix, name)), b, 0o666)
						}
					}
				}
			}
		}
	}
}

// What a reader must be able to see is there: as many pixels of the colour of kept bars as
// the roots kept ask for, none when nothing is kept.
func TestScreeMarksWhatIsKept(t *testing.T) {
	count := func(k int) int {
		b := drawAll(t, material(t, 10, k, pca.Correlation, plainName), "png")["scree.png"]
		picture, err := png.Decode(bytes.NewReader(b))
		if err != nil {
			t.Fatal(err)
		}
		return pixels(picture, kept)
	}
	legend := count(0)
	if one, four := count(1), count(4); legend > 400 || one < legend+1000 || four < one+1000 {
		t.Errorf("pixels of kept bars: %d for none, %d for one, %d for four", legend, one, four)
	}
}

func pixels(picture image.Image, c color.RGBA) int {
	n := 0
	for y := picture.Bounds().Min.Y; y < picture.Bounds().Max.Y; y++ {
		for x := picture.Bounds().Min.X; x < picture.Bounds().Max.X; x++ {
			r, g, b, _ := picture.At(x, y).RGBA()
			if uint8(r>>8) == c.R && uint8(g>>8) == c.G && uint8(b>>8) == c.B {
				n++
			}
		}
	}
	return n
}

// Placed labels touch neither one another nor a point nor an edge.
func TestLabelsDoNotCollide(t *testing.T) {
	for _, p := range []int{4, 30, 60, 100} {
		m := material(t, p, 2, pca.Correlation, plainName)
		d := m.Decomposition
		canvas, err := newCanvas("svg", pageWidth, pageWidth)
		if err != nil {
			t.Fatal(err)
		}
		f := squareFrame(draw.New(canvas), 1.12)
		points := make([]vg.Point, p)
		for j := range p {
			points[j] = f.at(d.Loading(j, 0), d.Loading(j, 1))
		}
		placed, unlabelled := placeLabels(f, d.Channels, points)
		if len(placed)+unlabelled != p || len(placed) < min(p, 20) {
			t.Errorf("p=%d: %d placed, %d not", p, len(placed), unlabelled)
		}
		for i, a := range placed {
			for _, b := range placed[:i] {
				if a.box.Min.X < b.box.Max.X && b.box.Min.X < a.box.Max.X && a.box.Min.Y < b.box.Max.Y && b.box.Min.Y < a.box.Max.Y {
					t.Errorf("p=%d: %q and %q overlap", p, a.text, b.text)
				}
			}
		}
	}
}

// The two main colours differ in lightness, so that grey print keeps them apart; so do
// a strong positive and a strong negative correlation.
func TestColoursSurviveGreyPrint(t *testing.T) {
	light := func(c color.RGBA) float64 {
		return (.2126*float64(c.R) + .7152*float64(c.G) + .0722*float64(c.B)) / 255
	}
	if d := light(against) - light(kept); d < .25 {
		t.Errorf("kept and compared differ by %.2f in lightness", d)
	}
	if d := light(pale) - light(kept); d < .25 {
		t.Errorf("kept and left out differ by %.2f", d)
	}
	if d := light(shade(-1)) - light(shade(1)); d < .25 {
		t.Errorf("negative and positive differ by %.2f", d)
	}
}

// Names of any length and script are drawn without a crash, and fit.
func TestDifficultNames(t *testing.T) {
	names := []string{"", strings.Repeat("very_long_name_", 6), "Temperatur °C µ", "Δp √2 ½", "流量計 α", "a\nb\tc", "\xff\xfe", "<&>\"'"}
	m := material(t, len(names), 3, pca.Correlation, func(j int) string { return names[j] })
	files := drawAll(t, m, Formats...)
	if dir := os.Getenv("AXISFOLD_PICTURES"); dir != "" {
		os.WriteFile(filepath.Join(dir, "names-loadings.png"), files["loadings.png"], 0o666)
	}
}

func TestRefusals(t *testing.T) {
	open := func(string) (io.WriteCloser, error) { t.Error("opened a file"); return nil, io.ErrClosedPipe }
	if err := Draw(&Material{}, Formats, open); err == nil || !strings.Contains(err.Error(), "nothing was decomposed") {
		t.Errorf("empty: %v", err)
	}
	m := material(t, 3, 2, pca.Correlation, plainName)
	m.Decomposition.Values[1] = math.NaN()
	if err := Draw(m, Formats, open); err == nil || !strings.Contains(err.Error(), "number 2 of the eigenvalues is NaN") {
		t.Errorf("NaN: %v", err)
	}
	m = material(t, 3, 2, pca.Correlation, plainName)
	if err := Draw(m, []string{"gif"}, open); err == nil || !strings.Contains(err.Error(), `unknown format "gif"`) {
		t.Errorf("format: %v", err)
	}
}

func BenchmarkDraw(b *testing.B) {
	m := material(b, 60, 4, pca.Correlation, plainName)
	b.Run("p=60/formats=svg+png", func(b *testing.B) {
		for b.Loop() {
			drawAll(b, m, "svg", "png")
		}
	})
}
