package table

import (
	"context"
	"io"
	"runtime"
)

// heldRows is the number of rows in a block of a held table.
const heldRows = 1024

// Held is a table kept in memory.
type Held struct {
	columns []Column
	pieces  [][]float64 // as appended, until they are joined
	data    []float64
	row     []int64
	times   texts
	groups  texts
	lines   []int // physical line of each row in its file
	files   []heldFile
}

// heldFile says from which row on the rows come from a file.
type heldFile struct {
	name    string
	from    int
	counted string
}

// texts keeps many short texts in one piece of memory.
type texts struct {
	all  []byte
	ends []int
}

func (t *texts) add(s []byte) {
	t.all = append(t.all, s...)
	t.ends = append(t.ends, len(t.all))
}

func (t *texts) at(i int) []byte {
	from := 0
	if i > 0 {
		from = t.ends[i-1]
	}
	return t.all[from:t.ends[i]]
}

// NewHeld makes an empty held table of the given columns.
func NewHeld(columns []Column) *Held { return &Held{columns: columns} }

// Append copies the rows of a block, whose width must be that of the columns.
func (h *Held) Append(b *Block) {
	if b.Width != len(h.columns) {
		panic("table: block and held table differ in width")
	}
	for i := range b.Rows {
		file, line, counted := b.place(i)
		if n := len(h.files); n == 0 || h.files[n-1].name != file {
			h.files = append(h.files, heldFile{file, h.Len() + i, counted})
		}
		h.lines = append(h.lines, line)
	}
	// Kept piece by piece: growing one slice would copy a large table several times.
	h.pieces = append(h.pieces, append([]float64(nil), b.Data...))
	for i := range b.Rows {
		h.row = append(h.row, b.Row+int64(b.Offset[i]))
		if b.times != nil {
			h.times.add(b.Time(i))
		}
		if b.groups != nil {
			h.groups.add(b.Group(i))
		}
	}
}

// Len is the number of rows.
func (h *Held) Len() int { return len(h.row) }

// Matrix is the data, Len×columns row-major; it must not be changed.
func (h *Held) Matrix() []float64 {
	h.join()
	return h.data
}

func (h *Held) join() {
	if len(h.pieces) == 0 {
		return
	}
	joined := make([]float64, 0, h.Len()*len(h.columns))
	joined = append(joined, h.data...)
	for i, piece := range h.pieces {
		joined = append(joined, piece...)
		h.pieces[i] = nil
	}
	h.data, h.pieces = joined, nil
}

// Group is the text of row i in the group column.
func (h *Held) Group(i int) []byte { return h.groups.at(i) }

// Columns are the columns given to NewHeld.
func (h *Held) Columns() []Column { return h.columns }

// Each goes through the rows in blocks of heldRows; see Rows.
func (h *Held) Each(ctx context.Context, threads int, work func(worker int, b *Block) error, merge func(b *Block) error) error {
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	h.join()
	next := 0
	return inOrder(ctx, threads, func(b *Block) error {
		if b == nil {
			return nil
		}
		from := next * heldRows
		if from >= h.Len() {
			return io.EOF
		}
		h.fill(b, from, min(from+heldRows, h.Len()))
		b.Index = next
		next++
		return nil
	}, work, func(b *Block) error {
		if b.err != nil {
			return b.err
		}
		return merge(b)
	})
}

// fill makes b the rows from..to. Blocks get a copy: work may change them.
func (h *Held) fill(b *Block, from, to int) {
	w := len(h.columns)
	b.Width, b.Rows, b.Count, b.names, b.held = w, to-from, to-from, h.columns, h
	b.Data = append(b.Data[:0], h.data[from*w:to*w]...)
	b.Row = h.row[from]
	b.Offset, b.lines, b.text, b.times, b.groups = b.Offset[:0], b.lines[:0], b.text[:0], b.times[:0], b.groups[:0]
	keep := func(t *texts, i int) span {
		start := int32(len(b.text))
		b.text = append(b.text, t.at(i)...)
		return span{from: start, to: int32(len(b.text))}
	}
	for i := from; i < to; i++ {
		b.Offset = append(b.Offset, int32(h.row[i]-b.Row))
		b.lines = append(b.lines, int32(i))
		if len(h.times.ends) > 0 {
			b.times = append(b.times, keep(&h.times, i))
		}
		if len(h.groups.ends) > 0 {
			b.groups = append(b.groups, keep(&h.groups, i))
		}
	}
}

// place is the file and the line from which row i came, and what a line is called there.
func (h *Held) place(i int) (file string, line int, counted string) {
	for _, f := range h.files {
		if f.from <= i {
			file, counted = f.name, f.counted
		}
	}
	return file, h.lines[i], counted
}
