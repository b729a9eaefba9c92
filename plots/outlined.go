package plots

import (
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
	gonumfont "gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/vgpdf"
)

// outlined is a PDF page whose text is drawn as the outlines of its letters: every letter
// that the font has comes out, on any machine, and no font need be embedded. (The page's
// own text knows one Western code page only.)
type outlined struct{ *vgpdf.Canvas }

// FillString draws the outlines of the letters of s, its base line starting at pt.
func (o outlined) FillString(f gonumfont.Face, pt vg.Point, s string) {
	var buf sfnt.Buffer
	em := fixed.Int26_6(f.Face.UnitsPerEm()) // one unit of the font a pixel's 64th
	scale := f.Font.Size / vg.Length(em)
	x := vg.Length(0)
	var path vg.Path
	at := func(p fixed.Point26_6) vg.Point {
		return vg.Point{X: pt.X + x + vg.Length(p.X)*scale, Y: pt.Y - vg.Length(p.Y)*scale}
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
		o.Fill(path)
	}
}
