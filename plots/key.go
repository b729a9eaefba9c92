package plots

import (
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// entry is one line of a key.
type entry struct {
	label string
	draw  func(c draw.Canvas, at vg.Point)
}

const (
	swatchWidth = vg.Length(15) // of the sample before a label, with its gap
	entryGap    = vg.Length(12)
)

// longestEntry is what a label of a key is shortened to.
const longestEntry = 4.5 * vg.Centimeter

func swatch(s draw.GlyphStyle) func(draw.Canvas, vg.Point) {
	return func(c draw.Canvas, at vg.Point) { c.DrawGlyphNoClip(s, at) }
}

func stroke(s draw.LineStyle) func(draw.Canvas, vg.Point) {
	return func(c draw.Canvas, at vg.Point) { c.StrokeLine2(s, at.X-6, at.Y, at.X+6, at.Y) }
}

func (e *entry) width() vg.Length {
	style := textStyle(smallSize, ink, text.XLeft, text.YCenter)
	return swatchWidth + style.Width(shorten(e.label, longestEntry, style))
}

// keyRows breaks a key into rows of the width.
func keyRows(key []entry, width vg.Length) [][]entry {
	var rows [][]entry
	for _, e := range key {
		n := len(rows)
		if n > 0 && keyWidth(rows[n-1])+entryGap+e.width() <= width {
			rows[n-1] = append(rows[n-1], e)
		} else {
			rows = append(rows, []entry{e})
		}
	}
	return rows
}

func keyWidth(row []entry) vg.Length {
	w := vg.Length(len(row)-1) * entryGap
	for i := range row {
		w += row[i].width()
	}
	return w
}

// drawKey draws one row, beginning at x, its middle at y.
func drawKey(c draw.Canvas, row []entry, x, y vg.Length) {
	style := textStyle(smallSize, ink, text.XLeft, text.YCenter)
	for i := range row {
		row[i].draw(c, vg.Point{X: x + 6, Y: y})
		c.FillText(style, vg.Point{X: x + swatchWidth, Y: y}, shorten(row[i].label, longestEntry, style))
		x += row[i].width() + entryGap
	}
}
