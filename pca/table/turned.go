package table

import (
	"bytes"
	"errors"
	"fmt"
	"io"
)

// turnedBytes bounds the text of a table stored transposed, which is held in memory.
const turnedBytes = 1 << 30

// turnedCell is what the rows of a table are called where each of its lines holds a channel.
const turnedCell = "cell"

// turner gives a table whose lines are channels as lines of rows. It holds the text and one
// place in it for each line.
type turner struct {
	r    io.Reader
	d    *dialect
	file string

	text  []byte
	next  []int // where the next cell of each line starts
	line  []int // physical lines
	row   int
	ended bool
}

// fill makes the next row.
func (t *turner) fill(out []byte) ([]byte, error) {
	if t.text == nil {
		if err := t.load(); err != nil {
			return nil, err
		}
	}
	if t.ended || len(t.next) == 0 {
		return nil, io.EOF
	}
	return t.turn(out)
}

// load reads the text and finds its lines.
func (t *turner) load() error {
	text, err := io.ReadAll(io.LimitReader(t.r, turnedBytes+1))
	if err != nil {
		return err
	}
	if len(text) > turnedBytes {
		return &Error{Kind: BadContent, File: t.file, Problem: "is longer than 1 GiB, and a table with channels in rows is held in memory", Hint: "store it with channels in columns"}
	}
	if len(text) == 0 || text[len(text)-1] != '\n' {
		text = append(text, '\n')
	}
	t.text = text
	var scratch []byte
	line := 1
	for i := 0; i < len(text); {
		end := i + bytes.IndexByte(text[i:], '\n')
		if t.d.startsComment(text[i:]) || len(bytes.TrimSpace(text[i:end])) == 0 {
			i, line = end+1, line+1
			continue
		}
		t.next, t.line = append(t.next, i), append(t.line, line)
		if bytes.IndexByte(text[i:end], '"') >= 0 {
			// A quoted cell may hold line ends.
			fault := wellQuoted
			for at := i; ; at = end + 1 {
				scratch = scratch[:0]
				if _, end, _, fault = t.d.cell(text, at, &scratch); text[end] == '\n' {
					break
				}
			}
			if fault == openQuote {
				return &Error{Kind: BadContent, File: t.file, Line: line, absolute: true, Problem: openQuoteProblem, Hint: openQuoteHint}
			}
		}
		line += bytes.Count(text[i:end+1], []byte{'\n'})
		i = end + 1
	}
	return nil
}

// turn takes one cell of every line.
func (t *turner) turn(out []byte) ([]byte, error) {
	var scratch []byte
	for i, from := range t.next {
		scratch = scratch[:0]
		_, end, _, _ := t.d.cell(t.text, from, &scratch)
		last := t.text[end] == '\n'
		if i == 0 {
			t.ended = last
		} else if last != t.ended {
			return nil, t.ragged(i)
		}
		if i > 0 {
			out = append(out, t.d.separator)
		}
		out = append(out, bytes.TrimRight(t.text[from:end], "\r")...)
		t.next[i] = end + 1
	}
	t.row++
	return append(out, '\n'), nil
}

// ragged is the error about a line with more or fewer cells than the first.
func (t *turner) ragged(line int) error {
	count := func(from int) int {
		var scratch []byte
		for n := t.row + 1; ; n++ {
			_, end, _, _ := t.d.cell(t.text, from, &scratch)
			if t.text[end] == '\n' {
				return n
			}
			from = end + 1
		}
	}
	found := count(t.next[line])
	expected := t.row + 1
	if !t.ended {
		expected = count(t.next[0]) + 1
	}
	return &Error{Kind: BadContent, File: t.file, Line: t.line[line], absolute: true,
		Problem: fmt.Sprintf("%d cells, expected %d as in the first line", found, expected), Hint: "the line is cut off, or read.orientation is wrong"}
}

// named places an error in a table with channels in rows.
func (f *form) named(err error) error {
	var e *Error
	if f.turned && errors.As(err, &e) && !e.absolute && e.Line > 0 {
		e.counted = turnedCell
	}
	return err
}
