package table

import (
	"bytes"
	"io"
)

// chunkBytes is about how much text a block holds. It bounds memory and decides where
// blocks end, so changing it changes last digits of sums.
const chunkBytes = 1 << 20

// longestRow bounds a row; a line that goes on longer is no row of a table.
const longestRow = 64 << 20

// byteOrderMark is what some programs write before the first row of UTF-8 text.
var byteOrderMark = []byte("\xef\xbb\xbf")

// chunker cuts a text into pieces that end at row ends.
type chunker struct {
	r       io.Reader
	file    string
	dialect *dialect
	size    int
	carry   []byte // start of the next piece
	ended   bool
	lines   int // physical lines in the pieces before
}

// next returns the next piece, which ends with a line end, in buf (grown as needed); nil
// at the end of the text.
func (c *chunker) next(buf []byte) ([]byte, error) {
	buf = append(buf[:0], c.carry...)
	c.carry = c.carry[:0]
	cut := 0 // row end found so far
	scan := newScanner(c.dialect)
	want := max(c.size, len(buf))
	for !c.ended {
		if cap(buf) < want+1 {
			grown := make([]byte, len(buf), want+want/8+64)
			copy(grown, buf)
			buf = grown
		}
		for len(buf) < want && !c.ended {
			n, err := c.r.Read(buf[len(buf):want])
			buf = buf[:len(buf)+n]
			if err == io.EOF {
				c.ended = true
			} else if err != nil {
				return nil, readError(c.file, err)
			}
		}
		if c.lines == 0 && scan.at == 0 && bytes.HasPrefix(buf, byteOrderMark) {
			scan.at = len(byteOrderMark) // a quote right after it opens a cell
		}
		cut = scan.lastRowEnd(buf)
		if cut > 0 || c.ended {
			break
		}
		if len(buf) >= longestRow {
			return nil, &Error{Kind: BadContent, File: c.file, Line: c.lines + 1, absolute: true, Problem: "the row is longer than 64 MiB", Hint: "a quote may be open, or this is not a table"}
		}
		want = 2 * len(buf)
	}
	if c.ended {
		if len(buf) == 0 {
			return nil, nil
		}
		if buf[len(buf)-1] != '\n' {
			buf = append(buf, '\n')
		}
	} else {
		c.carry = append(c.carry, buf[cut:]...)
		buf = buf[:cut]
	}
	if i := bytes.IndexByte(buf, 0); i >= 0 {
		return nil, c.nul(buf[:i])
	}
	c.lines += bytes.Count(buf, []byte{'\n'})
	return buf, nil
}

func (c *chunker) nul(before []byte) error {
	line := c.lines + bytes.Count(before, []byte{'\n'}) + 1
	return &Error{Kind: BadContent, File: c.file, Line: line, Problem: "holds a NUL byte, so it is not text", Hint: "was it cut off, or is it in another format?"}
}

// scanner finds row ends in a growing buffer that starts at a row start.
type scanner struct {
	d     *dialect
	at    int // bytes looked at
	state scanState
	last  int // last row end
}

type scanState int

const (
	rowStart scanState = iota
	cellStart
	plainCell
	quotedCell
	quoteInQuoted
	commentLine
)

func newScanner(d *dialect) *scanner { return &scanner{d: d} }

// lastRowEnd returns the position after the last row end in b, 0 without.
func (s *scanner) lastRowEnd(b []byte) int {
	if s.state == rowStart && s.at == 0 && bytes.IndexByte(b, '"') < 0 {
		// Without quotes every line end is a row end.
		return bytes.LastIndexByte(b, '\n') + 1
	}
	for ; s.at < len(b); s.at++ {
		c := b[s.at]
		switch s.state {
		case quotedCell:
			if c == '"' {
				s.state = quoteInQuoted
			}
			continue
		case quoteInQuoted:
			if c == '"' {
				s.state = quotedCell
				continue
			}
			s.state = plainCell
		case rowStart:
			if s.d.startsComment(b[s.at:]) {
				s.state = commentLine
			}
		}
		switch {
		case c == '\n':
			s.last = s.at + 1
			s.state = rowStart
		case s.state == commentLine:
		case c == s.d.separator:
			s.state = cellStart
		case c == '"' && s.state != plainCell:
			s.state = quotedCell
		case c == ' ' || c == '\t':
			if s.state == rowStart {
				s.state = cellStart
			}
		default:
			s.state = plainCell
		}
	}
	return s.last
}
