package plots

import (
	"fmt"
	"image"
	"image/color"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

const (
	// mostMapped is up to how many channels a map of all pairs can be looked at.
	mostMapped = 400
	// Cells from this size on hold their number.
	numberedCell = vg.Length(21)
	largestCell  = vg.Length(46)
	keyHeight    = vg.Length(30)
)

// shade is white for no correlation and darkens faster for positive than for negative
// ones. So that the sign survives grey print too, negative cells also bear a stroke.
func shade(r float64) color.RGBA {
	if r >= 0 {
		return mix(white, kept, r)
	}
	return mix(white, against, -r)
}

var correlationMap = Picture{Name: "correlation-map",
	Caption: "Correlations of all pairs of channels, like channels beside one another: dark teal for together, ochre with a stroke or a number below 0 for opposite, white for none.",
	ready: func(m *Material) bool {
		p := len(m.Decomposition.Channels)
		return p >= 2 && p <= mostMapped && len(m.Correlations) > 0
	},
	check: checkCorrelations,
	words: func(m *Material, _ int) (title, subtitle string) {
		p := len(m.Decomposition.Channels)
		pair, r := strongestPair(m.Correlations, p)
		subtitle = fmt.Sprintf("strongest: %s and %s, %s", brief(m.Decomposition.Channels[pair[0]]), brief(m.Decomposition.Channels[pair[1]]), written("%+.3f", r))
		if every := namedEvery(m); every > 1 {
			subtitle += fmt.Sprintf("; one name in %d is shown", every)
		}
		return fmt.Sprintf("Correlations of %d channels, like beside like", p), subtitle
	},
	height: func(m *Material, _ int) vg.Length {
		names, side := mapSize(m)
		return side + names + keyHeight
	},
	draw: func(m *Material, _ int, c draw.Canvas) {
		d := m.Decomposition
		p := len(d.Channels)
		names, side := mapSize(m)
		cell, every := side/vg.Length(p), namedEvery(m)
		order := channelOrder(m)
		left, top := c.Min.X+names, c.Max.Y
		area := vg.Rectangle{Min: vg.Point{X: left, Y: top - side}, Max: vg.Point{X: left + side, Y: top}}
		c.DrawImage(area, cells(m.Correlations, order, cell < numberedCell))
		if cell >= numberedCell {
			writeCells(c, m.Correlations, order, area)
		}
		style := textStyle(smallSize, ink, text.XRight, text.YCenter)
		turned := style
		turned.Rotation = math.Pi / 2
		for i := 0; i < p; i += every {
			name := shorten(named(d.Channels[order[i]]), names-labelGap, style)
			middle := (vg.Length(i) + .5) * cell
			c.FillText(style, vg.Point{X: left - labelGap, Y: top - middle}, name)
			c.FillText(turned, vg.Point{X: left + middle, Y: top - side - labelGap}, name)
		}
		mapKey(c, left, c.Min.Y, 6*vg.Centimeter)
	}}

// mapSize is the room for names and the side of the map.
func mapSize(m *Material) (names, side vg.Length) {
	p := vg.Length(len(m.Decomposition.Channels))
	names = widest(m.Decomposition.Channels, 3.6*vg.Centimeter, textStyle(smallSize, ink, 0, 0)) + labelGap + 1
	return names, min(inner-names, p*largestCell)
}

// namedEvery is how many channels share one name, so that names do not overlap.
func namedEvery(m *Material) int {
	_, side := mapSize(m)
	return int(math.Ceil(float64(smallSize * 1.08 * vg.Length(len(m.Decomposition.Channels)) / side)))
}

const (
	mapPixels  = 960 // of the side of a map, about
	mostPixels = 48  // of the side of a cell
)

// cells paints the map, p×p cells of the same whole number of pixels; stroked marks the
// negative ones.
func cells(r []float64, order []int, stroked bool) *image.RGBA {
	p := len(order)
	size := max(4, min(mapPixels/p, mostPixels))
	img := image.NewRGBA(image.Rect(0, 0, p*size, p*size))
	for i, a := range order {
		for j, b := range order {
			paintCell(img, j*size, i*size, size, r[a*p+b], stroked)
		}
	}
	return img
}

// leastStroked is the correlation below which a cell bears a stroke: weaker ones are
// nearly white anyway.
const leastStroked = -.15

// paintCell paints one square of pixels.
func paintCell(img *image.RGBA, x0, y0, size int, r float64, stroked bool) {
	gap := 0
	if size >= 16 {
		gap = max(1, size/24)
	}
	c := shade(r)
	stroked = stroked && r < leastStroked
	for y := range size {
		row := img.Pix[img.PixOffset(x0, y0+y):][:4*size]
		for x := range size {
			at := c
			if x >= size-gap || y >= size-gap || stroked && onStroke(x, y, size) {
				at = white
			}
			row[4*x], row[4*x+1], row[4*x+2], row[4*x+3] = at.R, at.G, at.B, at.A
		}
	}
}

// onStroke tells whether a pixel lies on the stroke across a cell, from low left to high
// right.
func onStroke(x, y, size int) bool {
	off, half := 2*(x+y-size+1), max(size/9, 1)
	return x*5 > size && x*5 < 4*size && off < half && -off <= half
}

// writeCells writes the correlations into cells that have room.
func writeCells(c draw.Canvas, r []float64, order []int, area vg.Rectangle) {
	p := len(order)
	cell := area.Size().X / vg.Length(p)
	for i, a := range order {
		for j, b := range order {
			v := r[a*p+b]
			style := textStyle(smallSize, ink, text.XCenter, text.YCenter)
			if v > .5 {
				style.Color = white
			}
			label := written("%.2f", v)
			x, y := area.Min.X+(vg.Length(j)+.5)*cell, area.Max.Y-(vg.Length(i)+.5)*cell
			c.FillText(style, vg.Point{X: x, Y: y}, label)
		}
	}
}

func strongestPair(r []float64, p int) (pair [2]int, value float64) {
	for i := range p {
		for j := i + 1; j < p; j++ {
			if pair[1] == 0 || math.Abs(r[i*p+j]) > math.Abs(value) {
				pair, value = [2]int{i, j}, r[i*p+j]
			}
		}
	}
	return pair, value
}

// mapKey draws the scale of shades from -1 to 1.
func mapKey(c draw.Canvas, left, low, width vg.Length) {
	const steps, size = 20, 16
	img := image.NewRGBA(image.Rect(0, 0, size*(2*steps+1), size))
	for i := range 2*steps + 1 {
		paintCell(img, size*i, 0, size, float64(i-steps)/steps, true)
	}
	c.DrawImage(vg.Rectangle{Min: vg.Point{X: left, Y: low + 10}, Max: vg.Point{X: left + width, Y: low + 10 + width/(2*steps+1)}}, img)
	small := textStyle(smallSize, ink, text.XCenter, text.YBottom)
	for i, align := range []text.XAlignment{text.XLeft, text.XCenter, text.XRight} {
		small.XAlign = align
		c.FillText(small, vg.Point{X: left + width*vg.Length(i)/2, Y: low}, []string{"−1", "0", "+1"}[i])
	}
}

func checkCorrelations(m *Material, _ int) error {
	p := len(m.Decomposition.Channels)
	if err := counts("correlations", len(m.Correlations), p*p); err != nil {
		return err
	}
	return allFinite("correlation", m.Correlations)
}
