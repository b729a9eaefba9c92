package plots

import (
	"image/color"
	"math"
	"testing"
)

// linear undoes the transfer curve of sRGB (IEC 61966-2-1).
func linear(c uint8) float64 {
	v := float64(c) / 255
	if v <= .04045 {
		return v / 12.92
	}
	return math.Pow((v+.055)/1.055, 2.4)
}

// lab is CIE L*a*b* of linear sRGB under D65 (IEC 61966-2-1, CIE 15).
func lab(c [3]float64) [3]float64 {
	f := func(t float64) float64 {
		if t > 216./24389 {
			return math.Cbrt(t)
		}
		return (24389./27*t + 16) / 116
	}
	x := f((.4124*c[0] + .3576*c[1] + .1805*c[2]) / .9505)
	y := f(.2126*c[0] + .7152*c[1] + .0722*c[2])
	z := f((.0193*c[0] + .1192*c[1] + .9505*c[2]) / 1.089)
	return [3]float64{116*y - 16, 500 * (x - y), 200 * (y - z)}
}

// eyes simulate full protanopia, deuteranopia and tritanopia on linear sRGB: Machado,
// Oliveira & Fernandes 2009, IEEE TVCG 15:1291, severity 1 (matrices from memory; their
// rows add up to 1, as grey must stay grey).
var eyes = map[string][9]float64{
	"usual":        {1, 0, 0, 0, 1, 0, 0, 0, 1},
	"protanopia":   {.152286, 1.052583, -.204868, .114503, .786281, .099216, -.003882, -.048116, 1.051998},
	"deuteranopia": {.367322, .860646, -.227968, .280085, .672501, .047413, -.011820, .042940, .968881},
	"tritanopia":   {1.255528, -.076749, -.178779, -.078411, .930809, .147602, .004733, .691367, .303900},
}

func seen(c color.RGBA, eye [9]float64) [3]float64 {
	in := [3]float64{linear(c.R), linear(c.G), linear(c.B)}
	var out [3]float64
	for i := range out {
		out[i] = math.Max(0, math.Min(1, eye[3*i]*in[0]+eye[3*i+1]*in[1]+eye[3*i+2]*in[2]))
	}
	return lab(out)
}

func lightness(c color.RGBA) float64 { return seen(c, eyes["usual"])[0] }

func apart(a, b color.RGBA, eye [9]float64) float64 {
	x, y := seen(a, eye), seen(b, eye)
	return math.Sqrt((x[0]-y[0])*(x[0]-y[0]) + (x[1]-y[1])*(x[1]-y[1]) + (x[2]-y[2])*(x[2]-y[2]))
}

// Colours that stand for different things differ in grey print and for every kind of eye;
// groups less in grey, where their shapes help.
func TestColoursToldApart(t *testing.T) {
	pairs := []struct {
		what string
		a, b color.RGBA
	}{{"kept and compared with", kept, against}, {"kept and left out", kept, pale}, {"negative and positive", shade(-1), shade(1)},
		{"half negative and half positive", shade(-.5), shade(.5)}}
	for _, c := range pairs {
		if d := math.Abs(lightness(c.a) - lightness(c.b)); d < 15 {
			t.Errorf("%s: grey differs by %.0f of 100", c.what, d)
		}
		for name, eye := range eyes {
			if d := apart(c.a, c.b, eye); d < 25 {
				t.Errorf("%s: %.0f apart under %s", c.what, d, name)
			}
		}
	}
	for i, a := range groupColors {
		for j, b := range groupColors[:i] {
			if d := math.Abs(lightness(a) - lightness(b)); d < 9 {
				t.Errorf("groups %d and %d: grey differs by %.0f", j, i, d)
			}
			for name, eye := range eyes {
				if d := apart(a, b, eye); d < 14 {
					t.Errorf("groups %d and %d: %.0f apart under %s", j, i, d, name)
				}
			}
		}
	}
	if len(groupColors) != len(groupShapes) {
		t.Errorf("%d colours, %d shapes", len(groupColors), len(groupShapes))
	}
}

// Small letters have a contrast of 4.5 to 1 with the paper (WCAG 2.1, 1.4.3).
func TestLettersAreDarkEnough(t *testing.T) {
	for name, c := range map[string]color.RGBA{"ink": ink, "quiet": quiet, "ochre": againstInk} {
		y := .2126*linear(c.R) + .7152*linear(c.G) + .0722*linear(c.B)
		if contrast := 1.05 / (y + .05); contrast < 4.5 {
			t.Errorf("%s: %.2f to 1", name, contrast)
		}
	}
}

// The shades run one way from -1 to 0 and from 0 to 1.
func TestShadesRunOneWay(t *testing.T) {
	for i := range 20 {
		r := float64(i) / 20
		if lightness(shade(r)) <= lightness(shade(r+.05)) || lightness(shade(-r)) <= lightness(shade(-r-.05)) {
			t.Errorf("no darker from %.2f to %.2f", r, r+.05)
		}
	}
}
