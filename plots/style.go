package plots

import (
	"image/color"
	"math"
	"unicode/utf8"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// The house style: dark ink on white, one colour for what is kept or estimated, one for
// what it is compared with, grey for the rest. The two colours differ in lightness as
// well as in hue, so they can be told apart in grey print and by every kind of eye.
var (
	ink     = color.RGBA{0x1d, 0x2a, 0x33, 0xff}
	quiet   = color.RGBA{0x7c, 0x86, 0x8d, 0xff}
	grid    = color.RGBA{0xe6, 0xe8, 0xea, 0xff}
	pale    = color.RGBA{0xc3, 0xcb, 0xd0, 0xff}
	kept    = color.RGBA{0x0f, 0x4c, 0x5c, 0xff} // dark teal
	against = color.RGBA{0xe0, 0x8e, 0x2b, 0xff} // ochre
)

// groupColors and groupShapes go round together: the shapes carry the difference where
// colours fail.
var groupColors = []color.RGBA{
	{0x0f, 0x4c, 0x5c, 0xff}, {0xe0, 0x8e, 0x2b, 0xff}, {0x7d, 0x9c, 0xc0, 0xff},
	{0x8c, 0x2f, 0x39, 0xff}, {0x6b, 0x7f, 0x3a, 0xff}, {0x9a, 0x8f, 0x97, 0xff},
}

var groupShapes = []draw.GlyphDrawer{draw.CircleGlyph{}, draw.TriangleGlyph{}, draw.BoxGlyph{}, draw.PlusGlyph{}, draw.RingGlyph{}, draw.CrossGlyph{}}

const (
	pageWidth  = 16 * vg.Centimeter
	titleSize  = 11
	textSize   = 8.5
	smallSize  = 7.5
	hairline   = vg.Length(0.6)
	strongLine = vg.Length(1.3)
)

// fonts holds the Liberation family, which comes with the drawing library.
var fonts = font.NewCache(liberation.Collection())

func face(size vg.Length, bold bool) font.Font {
	f := font.Font{Typeface: "Liberation", Variant: "Sans", Size: size}
	if bold {
		f.Weight = xfont.WeightBold
	}
	return f
}

func textStyle(size vg.Length, c color.Color, x text.XAlignment, y text.YAlignment) text.Style {
	return text.Style{Color: c, Font: face(size, false), XAlign: x, YAlign: y, Handler: text.Plain{Fonts: fonts}}
}

// tickStyle is that of numbers below an axis.
var tickStyle = textStyle(smallSize, ink, text.XCenter, text.YTop)

func line(c color.Color, w vg.Length, dashes ...vg.Length) draw.LineStyle {
	return draw.LineStyle{Color: c, Width: w, Dashes: dashes}
}

func fill(c draw.Canvas, col color.Color, x0, y0, x1, y1 vg.Length) {
	c.FillPolygon(col, []vg.Point{{X: x0, Y: y0}, {X: x1, Y: y0}, {X: x1, Y: y1}, {X: x0, Y: y1}})
}

// mix blends from a to b.
func mix(a, b color.RGBA, share float64) color.RGBA {
	share = math.Max(0, math.Min(1, share))
	at := func(x, y uint8) uint8 { return uint8(math.Round(float64(x) + share*(float64(y)-float64(x)))) }
	return color.RGBA{at(a.R, b.R), at(a.G, b.G), at(a.B, b.B), 0xff}
}

// fade makes a colour transparent, premultiplied as color.RGBA asks.
func fade(c color.RGBA, alpha float64) color.RGBA {
	at := func(x uint8) uint8 { return uint8(math.Round(float64(x) * alpha)) }
	return color.RGBA{at(c.R), at(c.G), at(c.B), at(0xff)}
}

// shorten cuts a name in its middle until it fits the width, and replaces what the font
// has no glyph for by a box.
func shorten(s string, width vg.Length, style text.Style) string {
	s = drawable(s)
	if style.Width(s) <= width {
		return s
	}
	runes := []rune(s)
	for keep := len(runes) - 1; keep >= 2; keep-- {
		left := (keep + 1) / 2
		short := string(runes[:left]) + "…" + string(runes[len(runes)-(keep-left):])
		if style.Width(short) <= width {
			return short
		}
	}
	return "…"
}

// drawable keeps Latin, Greek and Cyrillic letters, figures and common signs, which the
// font has, and shows a box for the rest.
func drawable(s string) string {
	out := make([]rune, 0, utf8.RuneCountInString(s))
	for _, r := range s {
		switch {
		case r < ' ' || r == utf8.RuneError:
			out = append(out, ' ')
		case r < 0x530 || r >= 0x2010 && r <= 0x2044 || r >= 0x2070 && r <= 0x2122 || r == 0x25a1:
			out = append(out, r)
		default:
			out = append(out, '□')
		}
	}
	return string(out)
}
