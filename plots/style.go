package plots

import (
	"image/color"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// The house style: dark ink on white; titles of axes lie flat above and below the frame;
// one colour for what is kept or estimated, one for what it is compared with, grey for the
// rest. The two colours differ in lightness as well as in hue, so they can be told apart
// in grey print and by every kind of eye.
var (
	ink        = color.RGBA{0x1d, 0x2a, 0x33, 0xff}
	quiet      = color.RGBA{0x62, 0x6d, 0x76, 0xff}
	grid       = color.RGBA{0xe6, 0xe8, 0xea, 0xff}
	pale       = color.RGBA{0xc3, 0xcb, 0xd0, 0xff}
	white      = color.RGBA{0xff, 0xff, 0xff, 0xff}
	kept       = color.RGBA{0x0f, 0x4c, 0x5c, 0xff} // dark teal
	against    = color.RGBA{0xe0, 0x8e, 0x2b, 0xff} // ochre
	againstInk = color.RGBA{0x9a, 0x58, 0x0b, 0xff} // ochre dark enough for small letters
)

// groupColors and groupShapes go round together. The lightness of the six colours differs
// as well as their hue, and the shapes carry the difference where both fail.
var groupColors = []color.RGBA{
	{0x0f, 0x4c, 0x5c, 0xff}, {0xe0, 0x8e, 0x2b, 0xff}, {0x2d, 0x14, 0x3d, 0xff},
	{0x72, 0x89, 0x35, 0xff}, {0xac, 0xc7, 0xe8, 0xff}, {0xa6, 0x40, 0x51, 0xff},
}

var groupShapes = []draw.GlyphDrawer{draw.CircleGlyph{}, draw.PyramidGlyph{}, draw.BoxGlyph{}, cross{}, draw.CircleGlyph{}, plus{}}

const (
	pageWidth  = 16 * vg.Centimeter
	margin     = vg.Length(10)
	titleSize  = 11
	textSize   = 8.5
	smallSize  = 7.5
	hairline   = vg.Length(0.6)
	strongLine = vg.Length(1.3)
)

func line(c color.Color, w vg.Length, dashes ...vg.Length) draw.LineStyle {
	return draw.LineStyle{Color: c, Width: w, Dashes: dashes}
}

func glyph(c color.Color, radius vg.Length, shape draw.GlyphDrawer) draw.GlyphStyle {
	return draw.GlyphStyle{Color: c, Radius: radius, Shape: shape}
}

func dot(c color.Color, radius vg.Length) draw.GlyphStyle {
	return glyph(c, radius, draw.CircleGlyph{})
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

// cross and plus are marks of two strokes, strong enough to show their colour.
type (
	cross struct{}
	plus  struct{}
)

func (cross) DrawGlyph(c *draw.Canvas, s draw.GlyphStyle, at vg.Point) {
	r := s.Radius * .8
	strokes(c, s, vg.Point{X: at.X - r, Y: at.Y - r}, vg.Point{X: at.X + r, Y: at.Y + r},
		vg.Point{X: at.X - r, Y: at.Y + r}, vg.Point{X: at.X + r, Y: at.Y - r})
}

func (plus) DrawGlyph(c *draw.Canvas, s draw.GlyphStyle, at vg.Point) {
	r := s.Radius * 1.1
	strokes(c, s, vg.Point{X: at.X - r, Y: at.Y}, vg.Point{X: at.X + r, Y: at.Y},
		vg.Point{X: at.X, Y: at.Y - r}, vg.Point{X: at.X, Y: at.Y + r})
}

// strokes draws a line between each pair of points.
func strokes(c *draw.Canvas, s draw.GlyphStyle, ends ...vg.Point) {
	c.SetLineStyle(line(s.Color, s.Radius*.55))
	var path vg.Path
	for i := 0; i < len(ends); i += 2 {
		path.Move(ends[i])
		path.Line(ends[i+1])
	}
	c.Stroke(path)
}
