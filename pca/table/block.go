package table

import (
	"context"
)

// Column is a numeric channel of a table.
type Column struct {
	Name     string
	Unit     string
	Position int // in the file, from 1
}

// Note says what was done with a column, or with rows when Column is empty.
type Note struct{ Column, Text string }

// Rows is a table that can be gone through block by block, again and again.
type Rows interface {
	// Columns are the numeric channels, in the order of the data.
	Columns() []Column
	// Each calls work for blocks on several goroutines (worker is below threads) and then
	// merge for the same blocks, one at a time and in row order. The first error in row
	// order ends it. Blocks and what they hold are reused after merge returns.
	Each(ctx context.Context, threads int, work func(worker int, b *Block) error, merge func(b *Block) error) error
}

// Block is a run of consecutive rows.
type Block struct {
	Index int
	// Row is the number of the first data row among all of the table, from 0. It is known
	// in merge, and in work too once the table has been gone through before.
	Row int64
	// Count is the number of data rows that were read; Rows may be fewer after Keep.
	Count int
	Rows  int
	Width int
	// Data is Rows×Width row-major; NaN is missing.
	Data []float64
	// Offset is the place of each row after Row.
	Offset []int32
	// Result is the caller's: set in work, read in merge.
	Result any

	text   []byte
	cells  cells  // in place of text, of typed tables
	extra  []byte // unescaped text of quoted cells
	times  []span
	groups []span
	lines  []int32 // physical line of each row, from the block's first; of a held table, its row
	held   *Held   // the rows come from there
	pieces pieces  // the text or the cells come from there
	file   string
	// counted is what a line is called where it is not a line of text.
	counted string
	names   []Column
	line    int // physical line of the block's first, from 1; known in merge
	newBy   int // physical lines in the block
	short   int // rows that ended early
	blank   int // rows without any value that were passed over
	// remarks counts what the notes tell of values; digest identifies the values of a
	// table that may change between passes. Both are nil mostly.
	remarks map[remark]int64
	digest  []byte
	err     error
	failed  bool // err comes from reading, there is no text

	layout   *layout
	skipHead int // rows of header and units at the start of the text
}

// span is a piece of text, or of extra when quoted.
type span struct {
	from, to int32
	quoted   bool
}

func (b *Block) slice(s span) []byte {
	if s.quoted {
		return b.extra[s.from:s.to]
	}
	return b.text[s.from:s.to]
}

// Time is the text of row i in the time column, valid until merge returns.
func (b *Block) Time(i int) []byte { return b.slice(b.times[i]) }

// Group is the text of row i in the group column, valid until merge returns.
func (b *Block) Group(i int) []byte { return b.slice(b.groups[i]) }

// Keep drops all rows but those at the given positions, which must ascend.
func (b *Block) Keep(rows []int32) {
	w := b.Width
	for to, from := range rows {
		copy(b.Data[to*w:to*w+w], b.Data[int(from)*w:int(from)*w+w])
		b.Offset[to] = b.Offset[from]
		if b.lines != nil {
			b.lines[to] = b.lines[from]
		}
		if b.times != nil {
			b.times[to] = b.times[from]
		}
		if b.groups != nil {
			b.groups[to] = b.groups[from]
		}
	}
	b.Rows = len(rows)
	b.Data = b.Data[:b.Rows*w]
}

// Problem returns an error about the value in row i, column j of the columns the table
// has. Each completes it with the line, so work must return it as it is: the text of an
// error that wraps it would hold the wrong line.
func (b *Block) Problem(i, j int, problem, hint string) error {
	e := &Error{Kind: BadContent, File: b.file, Line: int(b.lines[i]), Column: b.names[j].Position,
		Name: b.names[j].Name, Problem: problem, Hint: hint, counted: b.counted}
	if b.held != nil {
		e.File, e.Line, e.counted = b.held.place(int(b.lines[i]))
		e.absolute = true
	}
	return e
}

// place is the file and the line of row i, and what a line is called; right in merge.
func (b *Block) place(i int) (file string, line int, counted string) {
	if b.held != nil {
		return b.held.place(int(b.lines[i]))
	}
	return b.file, b.line - 1 + int(b.lines[i]), b.counted
}
