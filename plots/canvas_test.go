package plots

import (
	"bytes"
	"image/color"
	"math"
	"regexp"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"

	"axisfold/pca"
)

// No file holds the time it was written at, and pages are 16 cm wide.
func TestFormats(t *testing.T) {
	files := drawAll(t, material(t, 5, 2, pca.Correlation, plainName), Formats...)
	dates := regexp.MustCompile(`Date \(D:(\d{8})`)
	for name, b := range files {
		switch {
		case strings.HasSuffix(name, ".pdf"):
			found := dates.FindAllSubmatch(b, -1)
			if !bytes.HasPrefix(b, []byte("%PDF-")) || len(found) != 2 {
				t.Errorf("%s: %d dates, want 2", name, len(found))
			}
			for _, f := range found {
				if string(f[1]) != "20000101" {
					t.Errorf("%s: date %s", name, f[1])
				}
			}
		case strings.HasSuffix(name, ".svg"):
			s := string(b)
			if !strings.Contains(s, `width="453.54pt"`) || !strings.Contains(s, `L453.54,0L453.54,`) {
				t.Errorf("%s begins %.200s", name, s)
			}
			if strings.Contains(s, "<!--") || strings.Contains(s, "family:Liberation") || strings.Contains(s, "image/jpg") {
				t.Errorf("%s is not tidied", name)
			}
			if strings.Count(s, "<text") != strings.Count(s, ",Arial,") {
				t.Errorf("%s: texts without a second choice of font", name)
			}
		case !bytes.HasPrefix(b, []byte("\x89PNG")):
			t.Errorf("%s is no PNG", name)
		}
	}
}

// Arcs become curves that keep to the circle.
func TestRounded(t *testing.T) {
	var path vg.Path
	path.Move(vg.Point{X: 13, Y: 5})
	path.Arc(vg.Point{X: 10, Y: 5}, 3, 0, 2*math.Pi)
	path.Close()
	out := rounded(path)
	from, curves := path[0].Pos, 0
	for _, c := range out {
		if c.Type == vg.ArcComp {
			t.Fatal("an arc is left")
		}
		if c.Type == vg.CurveComp {
			curves++
			for i := range 11 {
				u := vg.Length(i) / 10
				v := 1 - u
				x := v*v*v*from.X + 3*v*v*u*c.Control[0].X + 3*v*u*u*c.Control[1].X + u*u*u*c.Pos.X
				y := v*v*v*from.Y + 3*v*v*u*c.Control[0].Y + 3*v*u*u*c.Control[1].Y + u*u*u*c.Pos.Y
				if r := away(vg.Point{X: x, Y: y}, vg.Point{X: 10, Y: 5}); math.Abs(float64(r)/3-1) > .0003 {
					t.Errorf("curve %d at %.1f: radius %.5f, want 3", curves, u, r)
				}
			}
		}
		from = c.Pos
	}
	if curves != 4 {
		t.Errorf("%d curves, want 4", curves)
	}
}

// A colour seen through keeps its hue on a PDF page.
func TestStraight(t *testing.T) {
	r, g, b, a := straight{color.NRGBAModel.Convert(fade(against, .5)).(color.NRGBA)}.RGBA()
	for i, v := range []uint32{r, g, b} {
		want := []uint8{against.R, against.G, against.B}[i]
		if d := int(v>>8) - int(want); d < -2 || d > 2 {
			t.Errorf("part %d: %d, want %d", i, v>>8, want)
		}
	}
	if a>>8 != 128 {
		t.Errorf("opacity %d, want 128", a>>8)
	}
}
