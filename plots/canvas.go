package plots

import (
	"io"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgpdf"
	"gonum.org/v1/plot/vg/vgsvg"
)

// Formats lists the formats, the default first.
var Formats = []string{"svg", "png", "pdf"}

const pixelsPerInch = 160

type canvas interface {
	vg.CanvasSizer
	io.WriterTo
}

// newCanvas makes a white page of one of Formats.
func newCanvas(format string, w, h vg.Length) canvas {
	switch format {
	case "svg":
		c := svgPage{vgsvg.New(w, h)}
		fill(draw.New(c), white, 0, 0, w, h) // the others are white of their own
		return c
	case "png":
		return vgimg.PngCanvas{Canvas: vgimg.NewWith(vgimg.UseWH(w, h), vgimg.UseDPI(pixelsPerInch))}
	case "pdf":
		return pdfPage{vgpdf.New(w, h)}
	}
	panic("plots: no canvas for format " + format)
}
