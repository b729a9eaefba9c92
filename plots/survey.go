package plots

import (
	"errors"
	"fmt"
	"image"
	"image/color"
	"io"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pca/survey"
)

// A survey has a picture of its own, beside those of a study: one line a channel, the rows
// of the table along it.

const (
	tallestLine  = vg.Length(13) // of a channel
	lowestLine   = vg.Length(.8)
	linesHeight  = vg.Length(640) // that lines share when they are many
	breakRoom    = vg.Length(9)   // for the marks of breaks above the lines
	levelSteps   = 3.0            // robust standard deviations at which colours end
	mostSurveyed = 5000           // channels that are drawn, the first in the table
)

// lost is the colour of what is missing: none that a level has.
var lost = color.RGBA{0xa6, 0x40, 0x51, 0xff}

// DrawSurvey writes the picture of a survey in one of Formats.
func DrawSurvey(v *survey.Survey, title, format string, out io.Writer) error {
	if !slices.Contains(Formats, format) {
		return fmt.Errorf("pictures: unknown format %q; known: %s", format, strings.Join(Formats, ", "))
	}
	if len(v.Channels) == 0 || len(v.Channels[0].Level) == 0 {
		return errors.New("picture of a survey: it has no channels")
	}
	s := &surveyed{v: v, channels: v.Channels[:min(len(v.Channels), mostSurveyed)]}
	for i := range s.channels {
		s.names = append(s.names, s.channels[i].Name)
	}
	s.line = max(lowestLine, min(tallestLine, linesHeight/vg.Length(len(s.channels))))
	s.every = int(math.Ceil(float64(smallSize * 1.12 / s.line)))
	heading, subtitle := s.words()
	head := headLines(title, heading, subtitle)
	body := s.above() + s.line*vg.Length(len(s.channels)) + 2*rowStep + keyHeight
	c := newCanvas(format, pageWidth, pageHeight(head, body))
	s.draw(drawHead(draw.New(c), head))
	_, err := c.WriteTo(out)
	return err
}

type surveyed struct {
	v        *survey.Survey
	channels []survey.Channel
	names    []string
	line     vg.Length
	every    int // one name is shown for so many channels
}

// above is the room over the lines: for marks, or for half of the first name.
func (s *surveyed) above() vg.Length {
	if len(s.v.Breaks) > 0 {
		return breakRoom
	}
	return smallSize / 2
}

func (s *surveyed) words() (title, subtitle string) {
	cells, missing := int64(0), int64(0)
	worst := &s.channels[0]
	for i := range s.channels {
		c := &s.channels[i]
		cells += c.Count + c.Missing
		missing += c.Missing
		if c.Missing > worst.Missing {
			worst = c
		}
	}
	title = fmt.Sprintf("%d channels over %d rows: level, and what is missing", len(s.channels), s.v.Rows)
	if n := len(s.v.Channels); n > len(s.channels) {
		title = fmt.Sprintf("The first %d of %d channels over %d rows: level, and what is missing", len(s.channels), n, s.v.Rows)
	}
	subtitle = "nothing is missing"
	if missing > 0 {
		subtitle = fmt.Sprintf("%.1f %% of the cells are missing, most in %s (%.1f %%)", 100*float64(missing)/float64(cells), brief(worst.Name), 100*float64(worst.Missing)/float64(s.v.Rows))
	}
	if n := len(s.v.Breaks); n > 0 {
		subtitle += "; many channels change their level at the marks above"
	}
	if s.every > 1 {
		subtitle += fmt.Sprintf("; one name in %d is shown", s.every)
	}
	return title, subtitle
}

func (s *surveyed) draw(c draw.Canvas) {
	style := textStyle(smallSize, ink, text.XRight, text.YCenter)
	room := widest(s.names, 3.6*vg.Centimeter, style)
	left, right := c.Min.X+room+labelGap, c.Max.X-rightInset
	top := c.Max.Y - s.above()
	low := top - s.line*vg.Length(len(s.channels))
	area := vg.Rectangle{Min: vg.Point{X: left, Y: low}, Max: vg.Point{X: right, Y: top}}
	c.DrawImage(area, s.paint())
	for i := 0; i < len(s.names); i += s.every {
		y := top - (vg.Length(i)+.5)*s.line
		c.FillText(style, vg.Point{X: left - labelGap, Y: y}, shorten(named(s.names[i]), room, style))
	}
	place := func(row float64) vg.Length { return left + (right-left)*vg.Length((row-1)/float64(s.v.Rows)) }
	for _, b := range s.v.Breaks {
		x := place(float64(b.Row))
		c.FillPolygon(ink, []vg.Point{{X: x, Y: top + 1}, {X: x - 3, Y: top + 7}, {X: x + 3, Y: top + 7}})
	}
	s.axis(c, place, left, right, low)
	s.key(c, left)
}

// axis numbers the rows below the lines, and says from when to when they are.
func (s *surveyed) axis(c draw.Canvas, place func(float64) vg.Length, left, right, low vg.Length) {
	style := textStyle(smallSize, ink, text.XCenter, text.YTop)
	rows := axis{low: 1, high: float64(s.v.Rows)}
	for _, m := range rows.marked(right-left, func(label string) vg.Length { return style.Width(label) }, 12) {
		x := place(m.at)
		c.StrokeLine2(line(quiet, hairline), x, low, x, low-2)
		c.FillText(style, vg.Point{X: x, Y: low - labelGap}, m.label)
	}
	y := low - labelGap - rowStep
	style = textStyle(smallSize, quiet, text.XRight, text.YTop)
	c.FillText(style, vg.Point{X: right, Y: y}, "row")
	if k := s.v.Clock; k != nil && k.Count > 0 {
		style.XAlign = text.XLeft
		said := fmt.Sprintf("%s to %s", k.Moment(k.First), k.Moment(k.Last))
		c.FillText(style, vg.Point{X: left, Y: y}, shorten(said, right-left-30, style))
	}
}

// key draws the scale of levels and the sign of what is missing.
func (s *surveyed) key(c draw.Canvas, left vg.Length) {
	const steps, size = 12, 16
	width := 5 * vg.Centimeter
	img := image.NewRGBA(image.Rect(0, 0, size*(2*steps+1), size))
	for i := range 2*steps + 1 {
		at := levelShade(float64(i-steps) / steps)
		for x := size * i; x < size*(i+1); x++ {
			for y := range size {
				img.SetRGBA(x, y, at)
			}
		}
	}
	low := c.Min.Y + 10
	c.DrawImage(vg.Rectangle{Min: vg.Point{X: left, Y: low}, Max: vg.Point{X: left + width, Y: low + 7}}, img)
	style := textStyle(smallSize, ink, text.XLeft, text.YBottom)
	for i, align := range []text.XAlignment{text.XLeft, text.XCenter, text.XRight} {
		style.XAlign = align
		c.FillText(style, vg.Point{X: left + width*vg.Length(i)/2, Y: c.Min.Y}, []string{"low", "as usual", "high"}[i])
	}
	style.XAlign = text.XLeft
	x := left + width + 18
	swatch := func(label string, at func(x, y int) color.RGBA) {
		img := image.NewRGBA(image.Rect(0, 0, 2*size, size))
		for y := range size {
			for x := range 2 * size {
				img.SetRGBA(x, y, at(x, y))
			}
		}
		c.DrawImage(vg.Rectangle{Min: vg.Point{X: x, Y: low}, Max: vg.Point{X: x + 14, Y: low + 7}}, img)
		c.FillText(style, vg.Point{X: x, Y: c.Min.Y}, label)
		x += style.Width(label) + 14
	}
	swatch("missing", func(x, y int) color.RGBA { return lostAt(x, y, true) })
	if slices.ContainsFunc(s.channels, func(c survey.Channel) bool { return c.Type == "constant" }) {
		swatch("one value in all rows", func(int, int) color.RGBA { return pale })
	}
}

// levelShade is white for the usual level, teal above and ochre below.
func levelShade(level float64) color.RGBA {
	if level >= 0 {
		return mix(white, kept, level)
	}
	return mix(white, against, -level)
}

// lostAt is a pixel of what is missing: hatched where there is room, so that it differs in
// grey print too.
func lostAt(x, y int, hatched bool) color.RGBA {
	if hatched && (x+y)%6 >= 4 {
		return white
	}
	return lost
}

// paint makes the lines, one column of pixels or more a stretch of rows.
func (s *surveyed) paint() *image.RGBA {
	bins := len(s.channels[0].Level)
	wide := max(1, (1400+bins-1)/bins)
	tall := max(1, int(math.Round(float64(s.line)/72*pixelsPerInch)))
	img := image.NewRGBA(image.Rect(0, 0, bins*wide, tall*len(s.channels)))
	gap := 0
	if tall >= 8 {
		gap = 2
	}
	for i := range s.channels {
		c := &s.channels[i]
		middle, spread := usual(c.Level)
		for b, v := range c.Level {
			shade := white
			if c.Type == "constant" {
				shade = pale
			}
			if spread > 0 && !math.IsNaN(v) {
				shade = levelShade(math.Max(-1, math.Min(1, (v-middle)/spread/levelSteps)))
			}
			// What is missing fills the line from below, as far as its share.
			gone := int(math.Round((1 - c.Filled[b]) * float64(tall-gap)))
			if c.Filled[b] < 1 && tall-gap >= 4 {
				gone = max(gone, 1)
			}
			for y := range tall {
				for x := b * wide; x < (b+1)*wide; x++ {
					at := shade
					switch {
					case y >= tall-gap:
						at = white
					case y >= tall-gap-gone:
						at = lostAt(x, y, tall >= 8)
					}
					img.SetRGBA(x, i*tall+y, at)
				}
			}
		}
	}
	return img
}

// usual is the median of the levels and their robust standard deviation, or the plain one
// where most levels agree.
func usual(levels []float64) (middle, spread float64) {
	var there []float64
	for _, v := range levels {
		if !math.IsNaN(v) {
			there = append(there, v)
		}
	}
	if len(there) == 0 {
		return 0, 0
	}
	slices.Sort(there)
	middle = there[len(there)/2]
	away := make([]float64, len(there))
	squares := 0.0
	for i, v := range there {
		away[i] = math.Abs(v - middle)
		squares += away[i] * away[i]
	}
	slices.Sort(away)
	spread = 1.4826 * away[len(away)/2]
	if spread <= 1e-9*math.Abs(middle) {
		spread = math.Sqrt(squares / float64(len(there)))
	}
	if spread <= 1e-12*math.Abs(middle) || math.IsInf(spread, 0) {
		return middle, 0
	}
	return middle, spread
}
