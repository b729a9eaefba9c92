package plots

import (
	"fmt"
	"image/color"
	"math"
	"strconv"
	"strings"
	"sync"
	"unicode"

	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// fonts holds the Liberation family, which comes with the drawing library.
var fonts = sync.OnceValue(func() *font.Cache { return font.NewCache(liberation.Collection()) })

func face(size vg.Length, bold bool) font.Font {
	f := font.Font{Typeface: "Liberation", Variant: "Sans", Size: size}
	if bold {
		f.Weight = xfont.WeightBold
	}
	return f
}

func textStyle(size vg.Length, c color.Color, x text.XAlignment, y text.YAlignment) text.Style {
	return text.Style{Color: c, Font: face(size, false), XAlign: x, YAlign: y, Handler: text.Plain{Fonts: fonts()}}
}

// shorten cuts a text in its middle until it fits the width.
func shorten(s string, width vg.Length, style text.Style) string {
	s = drawable(s)
	if style.Width(s) <= width {
		return s
	}
	runes := []rune(s)
	cut := func(keep int) string {
		left := (keep + 1) / 2
		return strings.TrimRight(string(runes[:left]), " ") + "…" + strings.TrimLeft(string(runes[len(runes)-(keep-left):]), " ")
	}
	low, high := 0, len(runes)-1 // the most letters that fit, by halving
	for low < high {
		if keep := (low + high + 1) / 2; style.Width(cut(keep)) <= width {
			low = keep
		} else {
			high = keep - 1
		}
	}
	return cut(low)
}

// brief is a name for use inside a sentence.
func brief(name string) string {
	return shorten(named(name), 4.2*vg.Centimeter, textStyle(textSize, ink, 0, 0))
}

// named stands in for a name that would leave nothing to see.
func named(s string) string {
	if strings.TrimSpace(drawable(s)) == "" {
		return "(no name)"
	}
	return s
}

// widest is the width of the longest name, at most limit.
func widest(names []string, limit vg.Length, style text.Style) vg.Length {
	w := vg.Length(0)
	for _, n := range names {
		w = max(w, style.Width(drawable(named(n))))
	}
	return min(w, limit)
}

// wrap breaks a text into at most most lines of the width, the last one shortened.
func wrap(s string, width vg.Length, style text.Style, most int) []string {
	words := strings.Fields(drawable(s))
	var lines []string
	for len(words) > 0 {
		n := 1
		for n < len(words) && style.Width(strings.Join(words[:n+1], " ")) <= width {
			n++
		}
		if len(lines) == most-1 {
			n = len(words)
		}
		lines = append(lines, shorten(strings.Join(words[:n], " "), width, style))
		words = words[n:]
	}
	return lines
}

// drawable shows a box for what the font has no letter for, and for scripts written from
// right to left, whose order would be lost. What has no width and no letter is dropped;
// every kind of blank becomes a space.
func drawable(s string) string {
	plain := true
	for i := range len(s) {
		plain = plain && s[i] >= ' ' && s[i] <= '~'
	}
	if plain {
		return s
	}
	f := fonts().Lookup(face(textSize, false), textSize).Face
	var buf sfnt.Buffer
	return strings.Map(func(r rune) rune {
		if r < ' ' || unicode.IsSpace(r) {
			return ' '
		}
		if unicode.Is(unicode.Cf, r) {
			return -1
		}
		if g, err := f.GlyphIndex(&buf, r); err == nil && g != 0 && !unicode.In(r, unicode.Hebrew, unicode.Arabic) {
			return r
		}
		if unicode.Is(unicode.Mn, r) {
			return -1
		}
		return '□'
	}, s)
}

func percent(share float64) string {
	if share > 0 && share < .0005 {
		return "under 0.1 %"
	}
	return fmt.Sprintf("%.1f %%", 100*share)
}

var signs = strings.NewReplacer("e-0", "e−", "e+0", "e", "e+", "e", "-", "−")

// written is fmt's form of v with true minus signs, short exponents and no sign before
// what rounds to 0.
func written(form string, v float64) string {
	s := fmt.Sprintf(form, v)
	if strings.Trim(s, "+-0.") == "" {
		s = strings.TrimLeft(s, "+-")
	}
	return signs.Replace(s)
}

// number writes v with the given significant digits.
func number(v float64, digits int) string {
	return written("%."+strconv.Itoa(digits)+"g", v)
}

// numbers labels the multiples of step: all with the same decimals, large ones grouped by
// thin spaces, very large and very small ones with an exponent.
func numbers(values []float64, step float64) []string {
	top := 0.0
	for _, v := range values {
		top = math.Max(top, math.Abs(v))
	}
	places := max(0, -int(math.Floor(math.Log10(step)+1e-9)))
	exponent := 0
	if top >= 1e7 || step < 1e-4 {
		exponent = int(math.Floor(math.Log10(top)))
		places = max(0, exponent-int(math.Floor(math.Log10(step)+1e-9)))
	}
	out := make([]string, len(values))
	for i, v := range values {
		if math.Abs(v) < step/2 {
			out[i] = "0"
			continue
		}
		s := grouped(strconv.FormatFloat(math.Abs(v)/math.Pow(10, float64(exponent)), 'f', places, 64))
		if exponent != 0 {
			s += "e" + strings.Replace(strconv.Itoa(exponent), "-", "−", 1)
		}
		if v < 0 {
			s = "−" + s
		}
		out[i] = s
	}
	return out
}

// grouped puts thin spaces between thousands, from five figures on.
func grouped(s string) string {
	whole, fraction, dotted := strings.Cut(s, ".")
	if len(whole) < 5 {
		return s
	}
	out := ""
	for len(whole) > 3 {
		out = "\u2009" + whole[len(whole)-3:] + out
		whole = whole[:len(whole)-3]
	}
	out = whole + out
	if dotted {
		out += "." + fraction
	}
	return out
}
