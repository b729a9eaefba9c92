package table

import (
	"context"
	"crypto/sha256"
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"slices"
)

// pieceCells is about how many values a piece of a grid holds.
const pieceCells = 1 << 16

// longestTexts bounds what the texts of one piece may take.
const longestTexts = 1 << 28

// grid is a part whose format hands out rows of typed values.
type grid struct {
	h *head
	// open begins a pass, before the first row of data.
	open func(ctx context.Context) (rowReading, error)
	// checked grids may change between passes without a trace in a file.
	checked bool
	// passBlank: rows without any value are no rows of data.
	passBlank bool
}

// rowReading hands out rows one after another.
type rowReading interface {
	// next adds one row with its line, counted from 1; io.EOF at the end.
	next(to *cells) error
	Close() error
}

func (g *grid) head() *head { return g.h }

func (g *grid) start(ctx context.Context, _ *layout) (pieces, error) {
	r, err := g.open(ctx)
	if err != nil {
		return nil, err
	}
	return &gridPass{of: g, rows: r, size: max(1, pieceCells/len(g.h.names))}, nil
}

// sample looks at the first rows to tell columns of numbers from others.
func (g *grid) sample(ctx context.Context) error {
	r, err := g.open(ctx)
	if err != nil {
		return err
	}
	defer r.Close()
	h := g.h
	h.sample = make([]sampleColumn, len(h.names))
	var c cells
	for range max(3, min(sampleRows, 16*pieceCells/len(h.names))) {
		c.reset(len(h.names))
		if err := r.next(&c); err == io.EOF {
			break
		} else if err != nil {
			return err
		}
		for j := range c.row(0) {
			h.sample[j].addCell(&c, c.at(j), h.dialect)
		}
	}
	return nil
}

// gridPass is a pass over a grid.
type gridPass struct {
	of    *grid
	rows  rowReading
	size  int // rows of a piece
	lines int // in the pieces before
}

func (g *gridPass) next(b *Block) error {
	c := &b.cells
	c.reset(len(g.of.h.names))
	c.all = slices.Grow(c.all, g.size*c.width)
	for c.rows() < g.size && len(c.text) < longestTexts {
		if err := g.rows.next(c); err == io.EOF {
			break
		} else if err != nil {
			return err
		}
		if c.over {
			return &Error{Kind: BadContent, File: g.of.h.file, Line: c.lines[c.rows()-1], counted: g.of.h.counted, absolute: true, Problem: "its texts take more than 2 GiB"}
		}
	}
	if c.rows() == 0 {
		return io.EOF
	}
	b.lines, b.newBy = b.lines[:0], c.lines[c.rows()-1]-g.lines
	for _, line := range c.lines {
		b.lines = append(b.lines, int32(line-g.lines))
	}
	g.lines += b.newBy
	return nil
}

// late hands on what the format knows at the end.
func (g *gridPass) late() []Note {
	if r, ok := g.rows.(interface{ late() []Note }); ok {
		return r.late()
	}
	return nil
}

func (g *gridPass) Close() error { return g.rows.Close() }

// parse makes rows of the cells. Texts that are carried through go into b.extra.
func (g *gridPass) parse(p *parser, b *Block) error {
	c, l, width := &b.cells, b.layout, len(p.columns)
	b.Width, b.Rows, b.blank, b.remarks = width, 0, 0, nil
	b.Data = slices.Grow(b.Data[:0], c.rows()*width)
	b.Offset, b.extra, b.times, b.groups = b.Offset[:0], b.extra[:0], b.times[:0], b.groups[:0]
	if g.of.checked {
		b.digest = c.digest()
	}
	for i := range c.rows() {
		row := c.row(i)
		if g.of.passBlank && !slices.ContainsFunc(row, func(x cell) bool { return x.kind != emptyCell }) {
			b.blank++
			continue
		}
		at := len(b.Data)
		b.Data = b.Data[:at+width]
		for j := range row {
			x := &row[j]
			switch l.uses[j] {
			case skipped:
			case number:
				v, said, ok := c.value(x, l.dialect)
				if !ok {
					return g.bad(b, j, b.lines[i], x)
				}
				if said != "" {
					if b.remarks == nil {
						b.remarks = map[remark]int64{}
					}
					b.remarks[remark{l.to[j], said}]++
				}
				b.Data[at+l.to[j]] = v
			default:
				s := span{from: int32(len(b.extra)), quoted: true}
				b.extra = c.appendShown(b.extra, x)
				s.to = int32(len(b.extra))
				if l.uses[j] != groupText {
					b.times = append(b.times, s)
				}
				if l.uses[j] != timeText {
					b.groups = append(b.groups, s)
				}
			}
		}
		b.Offset = append(b.Offset, int32(b.Rows))
		b.lines[b.Rows] = b.lines[i]
		b.Rows++
	}
	b.lines = b.lines[:b.Rows]
	b.Count = b.Rows
	if !p.time {
		b.times = nil
	}
	if !p.group {
		b.groups = nil
	}
	return nil
}

// bad is the error about a value that is no number.
func (g *gridPass) bad(b *Block, j int, line int32, x *cell) error {
	e := &Error{Kind: BadContent, File: b.file, Line: int(line), Column: j + 1, Name: b.layout.names[j], counted: b.counted}
	shown := shorten(string(b.cells.appendShown(nil, x)), 40)
	switch {
	case x.kind == numberCell:
		e.Problem = fmt.Sprintf("%s is not a finite number", shown)
	case x.kind == timeCell:
		e.Problem = fmt.Sprintf("%s is a time, not a number", shown)
		e.Hint = "carry the column through with read.time, or name it in read.leave_out"
	case x.kind == bytesCell:
		e.Problem = "bytes are not a number"
		e.Hint = "name the column in read.leave_out"
	default:
		e.Cell = string(b.cells.appendShown(nil, x))
		e.Problem = fmt.Sprintf("%q is not a number", shown)
		e.Hint = fmt.Sprintf("add %q to read.missing if it stands for a missing value, or name the column in read.leave_out", shown)
	}
	return e
}

// digest identifies the values.
func (c *cells) digest() []byte {
	sum := sha256.New()
	var buf []byte
	for i := range c.all {
		x := &c.all[i]
		buf = append(buf, byte(x.kind))
		switch x.kind {
		case emptyCell:
		case numberCell, roundedCell, truthCell:
			buf = binary.LittleEndian.AppendUint64(buf, math.Float64bits(x.number))
		default:
			buf = binary.LittleEndian.AppendUint32(buf, uint32(x.text.to-x.text.from))
			buf = append(buf, c.textOf(x)...)
		}
		if len(buf) > 1<<12 {
			sum.Write(buf)
			buf = buf[:0]
		}
	}
	sum.Write(buf)
	return sum.Sum(nil)
}
