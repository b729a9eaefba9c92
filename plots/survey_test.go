package plots

import (
	"bytes"
	"fmt"
	"image/png"
	"math"
	"strings"
	"testing"

	"axisfold/pca/survey"
)

// surveyOf makes a survey of p channels in n stretches of rows: channel 0 rises, channel 1
// is missing in its second half, the others stay.
func surveyOf(p, n int) *survey.Survey {
	v := &survey.Survey{Rows: int64(10 * n), BinRows: 10, Files: []string{"x.csv"}}
	for j := range p {
		c := survey.Channel{Name: fmt.Sprintf("channel with a long name %d", j), Count: int64(10 * n), Type: "number",
			Level: make([]float64, n), Filled: make([]float64, n)}
		for b := range n {
			c.Level[b], c.Filled[b] = math.Sin(float64(b*(j+1))), 1
			switch {
			case j == 0:
				c.Level[b] = float64(b)
			case j == 1 && b >= n/2:
				c.Level[b], c.Filled[b] = math.NaN(), 0
				c.Missing += 10
			}
		}
		c.Count -= c.Missing
		v.Channels = append(v.Channels, c)
	}
	v.Breaks = []survey.Break{{Row: int64(5 * n), Channels: []string{"a", "b"}}}
	return v
}

// What the lines show is what the levels say: from ochre to teal for a channel that rises,
// the colour of what is missing where it is.
func TestSurveyLines(t *testing.T) {
	v := surveyOf(40, 100)
	s := &surveyed{v: v, channels: v.Channels, line: tallestLine / 4}
	img := s.paint()
	w, h := img.Bounds().Dx(), img.Bounds().Dy()/40
	first, last := img.RGBAAt(0, h/2), img.RGBAAt(w-1, h/2)
	if first.R <= first.B || last.B <= last.R {
		t.Errorf("a rising channel goes from %v to %v", first, last)
	}
	if got := img.RGBAAt(w-1, h+h/2); got != lost {
		t.Errorf("missing is %v", got)
	}
	if got := img.RGBAAt(0, h+h/2); got == lost {
		t.Error("what is there is drawn as missing")
	}
}

func TestDrawSurvey(t *testing.T) {
	for _, p := range []int{1, 4, 30, 1000} {
		v := surveyOf(p, 120)
		if p == 1 {
			v.Breaks = nil
		}
		for _, format := range Formats {
			var a, b bytes.Buffer
			if err := DrawSurvey(v, "x.csv", format, &a); err != nil {
				t.Fatal(err)
			}
			if err := DrawSurvey(v, "x.csv", format, &b); err != nil {
				t.Fatal(err)
			}
			if !bytes.Equal(a.Bytes(), b.Bytes()) {
				t.Errorf("%d channels in %s: not the same bytes twice", p, format)
			}
			switch format {
			case "png":
				img, err := png.Decode(&a)
				if err != nil {
					t.Fatal(err)
				}
				if size := img.Bounds(); size.Dy() > 2400 {
					t.Errorf("%d channels are %d pixels high", p, size.Dy())
				}
			case "svg":
				if !strings.Contains(a.String(), fmt.Sprintf("%d channels over 1200 rows", p)) {
					t.Errorf("%d channels: no title", p)
				}
			}
		}
	}
	if err := DrawSurvey(surveyOf(2, 10), "", "bmp", &bytes.Buffer{}); err == nil {
		t.Error("an unknown format passes")
	}
	if err := DrawSurvey(&survey.Survey{}, "", "png", &bytes.Buffer{}); err == nil {
		t.Error("a survey without channels passes")
	}
}
