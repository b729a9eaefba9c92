package plots

import (
	"image"
	"image/color"
	"image/png"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pca"
	"axisfold/pcr"
)

// What a reader must be able to see, measured.

// placedText is a text with the room it takes on the page.
type placedText struct {
	text string
	box  vg.Rectangle
}

// watcher is a canvas that notes where text is written.
type watcher struct {
	turned bool
	texts  []placedText
}

func (w *watcher) Rotate(r float64)                    { w.turned = math.Abs(r-math.Pi/2) < 1e-9 }
func (w *watcher) Pop()                                { w.turned = false }
func (w *watcher) Push()                               {}
func (w *watcher) SetLineWidth(vg.Length)              {}
func (w *watcher) SetLineDash([]vg.Length, vg.Length)  {}
func (w *watcher) SetColor(color.Color)                {}
func (w *watcher) Translate(vg.Point)                  {}
func (w *watcher) Scale(float64, float64)              {}
func (w *watcher) Stroke(vg.Path)                      {}
func (w *watcher) Fill(vg.Path)                        {}
func (w *watcher) DrawImage(vg.Rectangle, image.Image) {}
func (w *watcher) FillString(f font.Face, pt vg.Point, s string) {
	// From a little below the base line to the height of a capital.
	low, high := pt.Y-.2*f.Font.Size, pt.Y+.72*f.Font.Size
	box := vg.Rectangle{Min: vg.Point{X: pt.X, Y: low}, Max: vg.Point{X: pt.X + f.Width(s), Y: high}}
	if w.turned { // a quarter turn to the left takes (x, y) to (-y, x)
		box = vg.Rectangle{Min: vg.Point{X: -high, Y: box.Min.X}, Max: vg.Point{X: -low, Y: box.Max.X}}
	}
	w.texts = append(w.texts, placedText{s, box})
}

// checkTexts draws everything and fails for text that comes close to the edge or touches other text.
func checkTexts(t *testing.T, what string, m *Material) {
	t.Helper()
	drawings, err := Drawings(m)
	if err != nil {
		t.Fatal(err)
	}
	for _, d := range drawings {
		head := headLines(m.Title, d.Title, d.subtitle)
		w, h := vg.Length(pageWidth), pageHeight(head, d.picture.height(m, d.response))
		seen := &watcher{}
		d.picture.draw(m, d.response, drawHead(draw.NewCanvas(seen, w, h), head))
		if len(seen.texts) < 4 {
			t.Errorf("%s, %s: only %d texts", what, d.Name, len(seen.texts))
		}
		const edge = margin * .6
		for i, a := range seen.texts {
			if a.box.Min.X < edge || a.box.Min.Y < edge || a.box.Max.X > w-edge || a.box.Max.Y > h-edge {
				t.Errorf("%s, %s: %q comes close to the edge of the page: %v", what, d.Name, a.text, a.box)
			}
			for _, b := range seen.texts[:i] {
				if overlap(a.box, b.box) {
					t.Errorf("%s, %s: %q and %q overlap", what, d.Name, a.text, b.text)
				}
			}
		}
	}
}

func TestTextsNeitherClippedNorOverlapping(t *testing.T) {
	checkTexts(t, "more than are shown", material(t, 150, 3, pca.Correlation, plainName))
	long := func(j int) string { return strings.Repeat("a_rather_long_name_", 2) + plainName(j) }
	sizes(func(p, k int, matrix pca.Matrix) {
		checkTexts(t, "plain", material(t, p, k, matrix, plainName))
		if k == 2 {
			m := material(t, p, k, matrix, long)
			m.Title = strings.Repeat("a study with a long title ", 12)
			m.Verdict.Note = strings.Repeat("a rule with much to say ", 12)
			m.Regression.Models[0].Response = long(0)
			m.GroupNames = []string{long(1), long(2), long(3)}
			checkTexts(t, "long names", m)
		}
	})
}

// Numbers far from 1, of either kind, stay readable.
func TestTextsOfUnusualNumbers(t *testing.T) {
	for _, factor := range []float64{1e-12, 1e-4, 1e5, 1e12} {
		m := material(t, 6, 3, pca.Covariance, plainName)
		for a := range m.Decomposition.Values {
			m.Decomposition.Values[a] *= factor
			m.Verdict.Reference[a] *= factor
		}
		m.Decomposition.Total *= factor
		for i := range m.Scores {
			m.Scores[i] *= factor
		}
		for i := range m.Observed[0] {
			m.Observed[0][i] = m.Observed[0][i]*factor + 1e3*factor
			m.Predicted[0][i] = m.Predicted[0][i]*factor + 1e3*factor
		}
		for i := range m.Regression.Models[0].Path {
			s := &m.Regression.Models[0].Path[i]
			s.RootMean, s.CV, s.CVError = s.RootMean*factor, s.CV*factor, s.CVError*factor
		}
		checkTexts(t, number(factor, 2), m)
	}
}

// Groups beyond the colours are drawn together, and a response without a closer look,
// without held-out rows or with the mean alone has its words.
func TestTextsOfUnusualMaterial(t *testing.T) {
	m := material(t, 8, 2, pca.Correlation, plainName)
	m.GroupNames = nil
	for g := range 11 {
		m.GroupNames = append(m.GroupNames, "group "+plainName(g))
	}
	for i := range m.Groups {
		m.Groups[i] = i % 11
	}
	model := m.Regression.Models[0]
	for i := range model.Path {
		model.Path[i].CV, model.Path[i].CVError = math.NaN(), math.NaN()
	}
	for i := range model.Terms {
		model.Terms[i].OrdinaryStandardized, model.Terms[i].Lower, model.Terms[i].Upper = math.NaN(), math.NaN(), math.NaN()
	}
	checkTexts(t, "eleven groups", m)
	if g := groupsOf(m); len(g.names) != len(groupColors) || g.names[5] != "6 other groups" || g.of(4) != 4 || g.of(9) != 5 {
		t.Errorf("groups shown: %q; row 4 in %d, row 9 in %d", g.names, g.of(4), g.of(9))
	}
	m.Verdict.Abstains, m.LoadingIntervals = true, nil
	checkTexts(t, "no verdict", m)
	if d, err := Drawings(m); err != nil || d[0].Title != "None of 8 components kept" {
		t.Errorf("%v, %v", d[0].Title, err)
	}
	model.Components, m.Verdict = 0, material(t, 8, 8, pca.Correlation, plainName).Verdict
	for i := range model.Terms {
		model.Terms[i].Standardized = 0
	}
	checkTexts(t, "everything kept, nothing fitted", m)
}

func pngOf(t *testing.T, m *Material, name string) image.Image {
	t.Helper()
	drawings, err := Drawings(m)
	if err != nil {
		t.Fatal(err)
	}
	for i := range drawings {
		if drawings[i].Name == name {
			f := file{drawing: &drawings[i], format: "png"}
			f.paint(m)
			picture, err := png.Decode(&f.content)
			if err != nil {
				t.Fatal(err)
			}
			return picture
		}
	}
	t.Fatalf("no %s", name)
	return nil
}

func pixels(picture image.Image, c color.RGBA) int {
	n := 0
	for y := picture.Bounds().Min.Y; y < picture.Bounds().Max.Y; y++ {
		for x := picture.Bounds().Min.X; x < picture.Bounds().Max.X; x++ {
			if color.RGBAModel.Convert(picture.At(x, y)) == c {
				n++
			}
		}
	}
	return n
}

// Bars of the scree plot have the area that their eigenvalues ask for, by what was kept.
func TestScreeBarsHaveTheirArea(t *testing.T) {
	m := material(t, 10, 4, pca.Correlation, plainName)
	m.Verdict.Reference, m.LoadingIntervals = nil, nil
	d := m.Decomposition
	for a := range d.Values {
		d.Values[a] = 10 - .5*float64(a) // no closer look
	}
	area := func(k int) int {
		m.Verdict.Components = k
		return pixels(pngOf(t, m, "scree"), kept)
	}
	none, whole := area(0), float64(area(10)-area(0))
	all, first := 77.5, 10+9.5+9+8.5
	if got := float64(area(4)-none) / whole; math.Abs(got-first/all) > .02 {
		t.Errorf("four bars of ten cover %.3f of the area, want %.3f", got, first/all)
	}
	if whole < 20000 {
		t.Errorf("ten bars cover %g pixels", whole)
	}
}

// Where the first roots dwarf the others, the cut is still to be seen: the bars left out
// cover more than in the whole picture alone.
func TestScreeLooksCloser(t *testing.T) {
	m := material(t, 10, 2, pca.Correlation, plainName)
	copy(m.Decomposition.Values, []float64{200, 100, .6, .5, .4, .3, .2, .1, .1, .1})
	for a := range m.Verdict.Reference {
		m.Verdict.Reference[a] = 1
	}
	if limit := closer(m, topRoot(m)); limit < 1.2 || limit > 5 {
		t.Errorf("closer look up to %g", limit)
	}
	if n := pixels(pngOf(t, m, "scree"), pale); n < 4000 {
		t.Errorf("bars left out cover %d pixels", n)
	}
	m.Verdict.Components = len(m.Decomposition.Values)
	if limit := closer(m, topRoot(m)); limit != 0 {
		t.Errorf("nothing was cut, but a closer look up to %g", limit)
	}
}

// Loadings of known size and sign: the dark bars are half as long as the ochre ones.
func TestLoadingsBars(t *testing.T) {
	m := material(t, 4, 1, pca.Correlation, plainName)
	m.LoadingIntervals = nil
	d := m.Decomposition
	d.Values[0] = 4
	for j, v := range []float64{.25, -.5, .25, -.5} { // loadings 0.5 and -1
		d.Vectors[j*len(d.Values)] = v
	}
	picture := pngOf(t, m, "loadings")
	dark, ochre := float64(pixels(picture, kept)), float64(pixels(picture, against))
	if ratio := dark / ochre; math.Abs(ratio-.5) > .02 || ochre < 5000 {
		t.Errorf("%g dark and %g ochre pixels", dark, ochre)
	}
}

// A least-squares coefficient far outside neither squashes the others nor leaves the page.
func TestCoefficientsOutside(t *testing.T) {
	m := material(t, 6, 2, pca.Correlation, plainName)
	terms := m.Regression.Models[0].Terms
	for i := range terms {
		terms[i] = pcr.Term{Name: terms[i].Name, Standardized: .1 * float64(i-2), Coefficient: .1 * float64(i-2),
			Lower: .1*float64(i-2) - .05, Upper: .1*float64(i-2) + .05, OrdinaryStandardized: .1}
	}
	terms[1].OrdinaryStandardized, terms[2].OrdinaryStandardized = -12345.6, 1e9
	if limit := coefficientLimit(standardized(m.Regression.Models[0])); limit < .35 || limit > .75 {
		t.Errorf("the frame reaches to %g", limit)
	}
	checkTexts(t, "outside", m)
	seen := &watcher{}
	coefficients.draw(m, 0, draw.NewCanvas(seen, pageWidth, 300))
	all := ""
	for _, w := range seen.texts {
		all += w.text + "\n"
	}
	for _, want := range []string{"−1.23e4", "1e9"} {
		if !strings.Contains(all, want) {
			t.Errorf("no %q among\n%s", want, all)
		}
	}
}

// A closer look at the errors holds the number chosen, the best one and their bars.
func TestValidationLooksCloser(t *testing.T) {
	model := &pcr.Model{Components: 2}
	for k, cv := range []float64{9, 5, 1.1, 1.05, 1, 1.02} {
		model.Path = append(model.Path, pcr.Step{Components: k, RootMean: cv - .1, CV: cv, CVError: .04})
	}
	low, high, ok := closerErrors(model)
	if !ok || low > .9 || low < .7 || high < 1.14 || high > 1.4 {
		t.Errorf("from %g to %g, %v", low, high, ok)
	}
	model.Path[0].CV, model.Path[0].RootMean, model.Path[1].CV, model.Path[1].RootMean = 1.2, 1.1, 1.2, 1.1
	model.Path[2].CV = .4
	if _, _, ok := closerErrors(model); ok {
		t.Error("a closer look where the whole picture shows it")
	}
}

// A long label at the end of an axis makes the frame narrower.
func TestLongLastLabel(t *testing.T) {
	seen := &watcher{}
	f := layout{x: axis{low: 0, high: 1, marks: []mark{{at: 0, label: "0"}, {at: 1, label: "a rather long label"}}}, y: axis{low: 0, high: 1}}.on(draw.NewCanvas(seen, 300, 200))
	for _, w := range seen.texts {
		if w.box.Max.X > 300.01 {
			t.Errorf("%q ends at %v of 300", w.text, w.box.Max.X)
		}
	}
	if f.right > 275 || f.right < 200 {
		t.Errorf("the frame ends at %v", f.right)
	}
}
