package plots

import (
	"bytes"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"axisfold/pca"
	"axisfold/pca/reduce"
	"axisfold/pca/retain"
	"axisfold/pca/rotation"
	"axisfold/pca/stability"
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
	m := &Material{Title: "Invented rows", Decomposition: d, TotalRows: 5000, Regression: fit, Confidence: .95, Units: []string{"m"}}
	m.Verdict = retain.Verdict{Rule: "parallel", Setting: "percentile 95", Components: min(k, p)}
	m.Overview = []retain.Verdict{m.Verdict, {Rule: "share", Setting: "at_least 0.9", Components: p}, {Rule: "laplace-evidence", Abstains: true}}
	if p > 1 && p <= 30 { // the curve of a hundred channels takes a while
		if m.Reduction, err = reduce.Choose(whole.Pick(x), nil, reduce.Options{Names: o.Names, Size: (p + 1) / 2, ExactUpTo: 8}); err != nil {
			t.Fatal(err)
		}
		m.Rebuild = .95
	}
	for j := range p {
		for a := range m.Verdict.Components {
			v := d.Loading(j, a)
			m.LoadingIntervals = append(m.LoadingIntervals, stability.Interval{Estimate: v, Lower: v - .08, Upper: v + .05})
		}
	}
	if k := m.Verdict.Components; k > 1 {
		var loadings []float64
		for j := range p {
			for a := range k {
				loadings = append(loadings, d.Loading(j, a))
			}
		}
		if m.Rotation, err = rotation.Rotate(loadings, k, rotation.Options{Method: rotation.Promax, Power: 4, Starts: 2}); err != nil {
			t.Fatal(err)
		}
	}
	for a := range d.Values {
		m.Verdict.Reference = append(m.Verdict.Reference, d.Total/float64(p)*(1.3-.6*float64(a)/float64(p)))
	}
	m.Correlations = whole.Pick(x).Correlations()
	m.Tree = pca.Cluster(m.Correlations, p)
	m.SimilarOrder = m.Tree.Order
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

// sizes are the numbers of channels and of components kept that pictures are tested with.
func sizes(visit func(p, k int, matrix pca.Matrix)) {
	for _, p := range []int{1, 2, 4, 30, 60, 100} {
		for k := range min(p, 8) + 1 {
			if p >= 30 && k > 2 && k < 6 {
				continue // nothing changes between
			}
			visit(p, k, pca.Correlation)
			if k == 2 {
				visit(p, k, pca.Covariance)
			}
		}
	}
}

// Every picture that the material carries, at sizes from one channel to a hundred (all of
// them are laid out in TestTextsNeitherClippedNorOverlapping); some of them as files.
func TestAllPictures(t *testing.T) {
	sizes(func(p, k int, matrix pca.Matrix) {
		m := material(t, p, k, matrix, plainName)
		drawings, err := Drawings(m)
		if err != nil {
			t.Fatal(err)
		}
		want := len(Pictures)
		if k < 2 {
			want -= 3 // neither plane, nothing to rotate
		}
		if p == 1 {
			want -= 2 // no map and no paths of one channel
		}
		if p < 3 {
			want-- // nothing to tell of how two channels join
		}
		if p == 1 || p > 30 {
			want -= 2 // no choice of channels was made
		}
		if len(drawings) != want {
			t.Errorf("p=%d k=%d: %d pictures, want %d", p, k, len(drawings), want)
		}
		var formats []string // few in PNG, which is slow under a race detector
		switch {
		case p == 4 && k == 2 || os.Getenv(lookAt) != "":
			formats = Formats
		case p == 1 && k == 1, p == 30 && k == 8, p == 100 && k == 2:
			formats = []string{"svg", "pdf"}
		default:
			return
		}
		files := drawAll(t, m, formats...)
		if len(files) != want*len(formats) {
			t.Errorf("p=%d k=%d: %d files, want %d", p, k, len(files), want*len(formats))
		}
		for name, b := range files {
			if len(b) < 500 {
				t.Errorf("p=%d k=%d: %s has %d bytes", p, k, name, len(b))
			}
			keep(fmt.Sprintf("p%d-k%d-%s-%s", p, k, matrix, name), b)
		}
	})
}

// lookAt may name a folder in which the PNGs are kept for people to look at.
const lookAt = "AXISFOLD_PICTURES"

func keep(name string, b []byte) {
	if dir := os.Getenv(lookAt); dir != "" && strings.HasSuffix(name, ".png") {
		os.WriteFile(filepath.Join(dir, name), b, 0o666)
	}
}

// The same material gives the same bytes, and Drawings names what Draw writes.
func TestDeterminism(t *testing.T) {
	m := material(t, 6, 3, pca.Correlation, plainName)
	first, second := drawAll(t, m, Formats...), drawAll(t, m, Formats...)
	drawings, err := Drawings(m)
	if err != nil {
		t.Fatal(err)
	}
	if len(first) != len(drawings)*len(Formats) {
		t.Errorf("%d files of %d drawings", len(first), len(drawings))
	}
	for _, d := range drawings {
		if d.Title == "" || d.Caption == "" {
			t.Errorf("%s: title %q, caption %q", d.Name, d.Title, d.Caption)
		}
		for _, format := range Formats {
			name := d.Name + "." + format
			if b := first[name]; len(b) == 0 || !bytes.Equal(b, second[name]) {
				t.Errorf("%s: %d bytes, then %d others", name, len(b), len(second[name]))
			}
		}
	}
}

// Pictures of several responses carry the response in their name, safe for files.
func TestNamesOfResponses(t *testing.T) {
	m := material(t, 4, 2, pca.Correlation, plainName)
	one := m.Regression.Models[0]
	m.Regression.Models = nil
	for _, name := range []string{"a/b c", "a/b_c", strings.Repeat("µ", 300)} {
		model := *one
		model.Response = name
		m.Regression.Models = append(m.Regression.Models, &model)
		m.Observed, m.Predicted = append(m.Observed, m.Observed[0]), append(m.Predicted, m.Predicted[0])
	}
	files := drawAll(t, m, "svg")
	for _, want := range []string{"validation-1-a_b_c.svg", "coefficients-2-a_b_c.svg", "predictions-3-" + strings.Repeat("_", 60) + ".svg", "scree.svg"} {
		if len(files[want]) == 0 {
			t.Errorf("no %s", want)
		}
	}
	if len(files) != 11+4*3 {
		t.Errorf("%d files, want 23", len(files))
	}
}

func BenchmarkDraw(b *testing.B) {
	for _, p := range []int{10, 60, 100} {
		m := material(b, p, 4, pca.Correlation, plainName)
		b.Run(fmt.Sprintf("p=%d/formats=svg+png", p), func(b *testing.B) {
			for b.Loop() {
				drawAll(b, m, "svg", "png")
			}
		})
	}
}
