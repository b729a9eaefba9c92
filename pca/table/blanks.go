package table

import (
	"bytes"
	"io"
)

// blankReader turns runs of blanks and tabs between cells into one tab, and drops those at
// both ends of a line. What is in quotes stays; lines stay lines.
type blankReader struct {
	r      io.Reader
	in     [1 << 14]byte
	last   byte // written
	start  bool // nothing of the line was written yet
	inside bool // a cell
	gap    bool // blanks after a cell
	quoted bool
}

func (b *blankReader) fill(out []byte) ([]byte, error) {
	n, err := b.r.Read(b.in[:])
	for _, c := range b.in[:n] {
		out = b.put(out, c)
	}
	return out, err
}

func (b *blankReader) put(out []byte, c byte) []byte {
	switch {
	case b.quoted:
		b.quoted = c != '"'
	case c == '\n':
		b.start, b.inside, b.gap = true, false, false
	case c == ' ' || c == '\t' || c == '\r':
		b.gap, b.inside = !b.start, false
		return out
	default:
		if b.gap {
			out = append(out, '\t')
			b.gap = false
		}
		// A quote that was closed and goes on is a quote written twice.
		b.quoted = c == '"' && (!b.inside || b.last == '"')
		b.start, b.inside = false, true
	}
	b.last = c
	return append(out, c)
}

// blankSeparated tells whether nothing but blanks stands between the cells: two cells or
// more in a line, and the same number in all lines after the first.
func blankSeparated(o *Options, text []byte) bool {
	cells, lines := 0, 0
	whole := text[:bytes.LastIndexByte(text, '\n')+1]
	if len(whole) == 0 {
		whole = text
	}
	for line := range bytes.Lines(whole) {
		if len(bytes.TrimSpace(line)) == 0 || o.Comment != "" && bytes.HasPrefix(line, []byte(o.Comment)) {
			continue
		}
		n := len(bytes.Fields(line))
		switch {
		case n < 2:
			return false
		case lines > 1 && n != cells:
			return false
		}
		cells = n
		if lines++; lines == 20 {
			break
		}
	}
	return lines > 1 || cells > 2
}
