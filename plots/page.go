package plots

import (
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// inner is the width within the margins.
const inner = pageWidth - 2*margin

// headLine is a line of the words above a picture.
type headLine struct {
	text  string
	style text.Style
}

func (l headLine) height() vg.Length { return l.style.Font.Size * 1.32 }

// headLines are the words above a picture: what study it belongs to, what is seen, and how
// to read it.
func headLines(study, title, subtitle string) []headLine {
	small := textStyle(smallSize, quiet, text.XLeft, text.YTop)
	strong := textStyle(titleSize, ink, text.XLeft, text.YTop)
	strong.Font = face(titleSize, true)
	plain := textStyle(textSize, quiet, text.XLeft, text.YTop)
	var out []headLine
	for _, part := range []struct {
		text  string
		style text.Style
		most  int
	}{{study, small, 1}, {title, strong, 2}, {subtitle, plain, 2}} {
		for _, l := range wrap(part.text, inner, part.style, part.most) {
			out = append(out, headLine{l, part.style})
		}
	}
	return out
}

// belowHead is the gap between the words and what they are about.
const belowHead = vg.Length(8)

// pageHeight is that of a page with these words above a picture of height body.
func pageHeight(head []headLine, body vg.Length) vg.Length {
	h := 2*margin + belowHead + body
	for _, l := range head {
		h += l.height()
	}
	return h
}

// drawHead draws the words and returns the canvas that is left.
func drawHead(c draw.Canvas, head []headLine) draw.Canvas {
	c = draw.Crop(c, margin, -margin, margin, -margin)
	for _, l := range head {
		c.FillText(l.style, vg.Point{X: c.Min.X, Y: c.Max.Y}, l.text)
		c.Max.Y -= l.height()
	}
	c.Max.Y -= belowHead
	return c
}

// split cuts a canvas in two, one above the other with a gap between them.
func split(c draw.Canvas, share vg.Length) (upper, lower draw.Canvas) {
	const gap = 12
	upper, lower = c, c
	cut := c.Max.Y - share*(c.Max.Y-c.Min.Y)
	upper.Min.Y, lower.Max.Y = cut+gap/2, cut-gap/2
	return upper, lower
}
