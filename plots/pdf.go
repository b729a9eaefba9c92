package plots

import (
	"image"
	"image/color"
	"image/draw"
	"math"
	"time"

	"codeberg.org/go-pdf/fpdf"
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
	gonumfont "gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/vgpdf"
)

// A date of its own in every file would make equal pictures differ.
func init() {
	day := time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC)
	fpdf.SetDefaultCreationDate(day)
	fpdf.SetDefaultModificationDate(day)
	fpdf.SetDefaultCatalogSort(true)
}

// pdfPage is a PDF page whose text is drawn as the outlines of its letters: every letter
// that the font has comes out, on any machine, and no font need be embedded. (The page's
// own text knows one Western code page only.) It also mends what the page below gets
// wrong: colours that are seen through come out too dark, circles with corners, and
// images upside down.
type pdfPage struct{ *vgpdf.Canvas }

func (p pdfPage) SetColor(c color.Color) {
	p.Canvas.SetColor(straight{color.NRGBAModel.Convert(c).(color.NRGBA)})
}

// straight hands its colour on as it is, not darkened by its opacity.
type straight struct{ color.NRGBA }

func (s straight) RGBA() (r, g, b, a uint32) {
	return uint32(s.R) * 0x101, uint32(s.G) * 0x101, uint32(s.B) * 0x101, uint32(s.A) * 0x101
}

func (p pdfPage) Fill(path vg.Path)   { p.Canvas.Fill(rounded(path)) }
func (p pdfPage) Stroke(path vg.Path) { p.Canvas.Stroke(rounded(path)) }

// rounded replaces arcs by cubic curves over at most a quarter turn, which stay within
// 0.03 % of the radius.
func rounded(path vg.Path) vg.Path {
	var out vg.Path
	for _, c := range path {
		if c.Type != vg.ArcComp {
			out = append(out, c)
			continue
		}
		n := int(math.Ceil(math.Abs(c.Angle)/(math.Pi/2) - 1e-9))
		step := c.Angle / float64(n)
		reach := 4. / 3 * math.Tan(step/4)
		at := func(angle, ahead float64) vg.Point {
			s, co := math.Sincos(angle)
			return vg.Point{X: c.Pos.X + c.Radius*vg.Length(co-ahead*s), Y: c.Pos.Y + c.Radius*vg.Length(s+ahead*co)}
		}
		if len(out) == 0 {
			out.Move(at(c.Start, 0))
		} else {
			out.Line(at(c.Start, 0))
		}
		for i := range n {
			from, to := c.Start+float64(i)*step, c.Start+float64(i+1)*step
			out.CubeTo(at(from, reach), at(to, -reach), at(to, 0))
		}
	}
	return out
}

func (p pdfPage) DrawImage(r vg.Rectangle, img image.Image) {
	b := img.Bounds()
	turned := image.NewRGBA(b)
	for y := range b.Dy() {
		draw.Draw(turned, image.Rect(b.Min.X, b.Min.Y+y, b.Max.X, b.Min.Y+y+1), img, image.Pt(b.Min.X, b.Max.Y-1-y), draw.Src)
	}
	p.Canvas.DrawImage(r, turned)
}

// FillString draws the outlines of the letters of s, its base line starting at pt.
func (p pdfPage) FillString(f gonumfont.Face, pt vg.Point, s string) {
	var buf sfnt.Buffer
	em := fixed.Int26_6(f.Face.UnitsPerEm()) // one unit of the font a pixel's 64th
	scale := f.Font.Size / vg.Length(em)
	x := vg.Length(0)
	var path vg.Path
	at := func(q fixed.Point26_6) vg.Point {
		return vg.Point{X: pt.X + x + vg.Length(q.X)*scale, Y: pt.Y - vg.Length(q.Y)*scale}
	}
	previous, hasPrevious := sfnt.GlyphIndex(0), false
	for _, r := range s {
		glyph, err := f.Face.GlyphIndex(&buf, r)
		if err != nil {
			continue
		}
		if hasPrevious {
			if kern, err := f.Face.Kern(&buf, previous, glyph, em, font.HintingNone); err == nil {
				x += vg.Length(kern) * scale
			}
		}
		segments, err := f.Face.LoadGlyph(&buf, glyph, em, nil)
		if err == nil {
			open := false
			for _, g := range segments {
				switch g.Op {
				case sfnt.SegmentOpMoveTo:
					if open {
						path.Close()
					}
					path.Move(at(g.Args[0]))
					open = true
				case sfnt.SegmentOpLineTo:
					path.Line(at(g.Args[0]))
				case sfnt.SegmentOpQuadTo:
					path.QuadTo(at(g.Args[0]), at(g.Args[1]))
				case sfnt.SegmentOpCubeTo:
					path.CubeTo(at(g.Args[0]), at(g.Args[1]), at(g.Args[2]))
				}
			}
			if open {
				path.Close()
			}
		}
		if advance, err := f.Face.GlyphAdvance(&buf, glyph, em, font.HintingNone); err == nil {
			x += vg.Length(advance) * scale
		}
		previous, hasPrevious = glyph, true
	}
	if len(path) > 0 {
		p.Fill(path)
	}
}
