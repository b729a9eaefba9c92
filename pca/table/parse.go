package table

import (
	"bytes"
	"fmt"
	"math"
	"slices"
)

// use says what a column of the file is for.
type use int

const (
	skipped use = iota
	number
	timeText
	groupText
)

// layout is how one file's columns become the columns of the table.
type layout struct {
	dialect *dialect
	uses    []use
	to      []int    // number: position among the table's columns
	names   []string // of all columns of the file
}

// parser turns pieces of text into blocks. It holds no state between pieces.
type parser struct {
	columns []Column
	time    bool
	group   bool
}

// parse fills b from b.text. Errors carry the line from the start of the piece.
func (p *parser) parse(b *Block, l *layout) error {
	text := b.text
	width := len(p.columns)
	b.Width, b.Rows, b.Count, b.blank = width, 0, 0, 0
	b.Data, b.Offset, b.lines, b.extra = b.Data[:0], b.Offset[:0], b.lines[:0], b.extra[:0]
	b.times, b.groups = b.times[:0], b.groups[:0]
	d := l.dialect
	line := 1
	last := len(l.uses) - 1
	i := 0
	if b.skipHead > 0 {
		i, line = d.passHead(text, b.skipHead)
	}
	for i < len(text) {
		switch {
		case text[i] == '\n':
			i++
			line++
			continue
		case text[i] == '\r' && text[i+1] == '\n':
			i += 2
			line++
			continue
		case d.comment != nil && d.startsComment(text[i:]):
			i += bytes.IndexByte(text[i:], '\n') + 1
			line++
			continue
		}
		start, startLine := i, line
		at := len(b.Data)
		b.Data = slices.Grow(b.Data, width)[:at+width]
		row := b.Data[at : at+width]
		gaps := 0
		for c := 0; ; c++ {
			switch l.uses[c] {
			case number:
				v, end, ok := scanNumber(text, i, d.point)
				if ok && text[end] == '\r' && text[end+1] == '\n' {
					end++
				}
				if ok && (text[end] == d.separator || text[end] == '\n') {
					i = end
					if len(d.codes) > 0 {
						v = d.coded(v)
						if math.IsNaN(v) {
							gaps++
						}
					}
				} else {
					cell, end, quoted, trailing := d.cell(text, i, &b.extra)
					v, ok = d.value(trim(cell))
					if trailing || !ok {
						return p.badCell(b, l, c, startLine, cell, trailing)
					}
					if quoted {
						line += bytes.Count(text[i:end], []byte{'\n'})
						b.extra = b.extra[:len(b.extra)-len(cell)]
					}
					if math.IsNaN(v) {
						gaps++
					}
					i = end
				}
				row[l.to[c]] = v
			case skipped:
				i, line = d.skip(text, i, line)
			default:
				cell, end, quoted, trailing := d.cell(text, i, &b.extra)
				if trailing {
					return p.badCell(b, l, c, startLine, cell, true)
				}
				s := span{quoted: quoted}
				if quoted {
					line += bytes.Count(text[i:end], []byte{'\n'})
					s.to = int32(len(b.extra))
					s.from = s.to - int32(len(cell))
				} else {
					s.from = int32(i + bytes.Index(text[i:end], cell))
					s.to = s.from + int32(len(cell))
				}
				if l.uses[c] == timeText {
					b.times = append(b.times, s)
				} else {
					b.groups = append(b.groups, s)
				}
				i = end
			}
			if text[i] == '\n' {
				if c < last {
					if blankLine(text[start:i], d.separator) {
						gaps = width + 1
						break
					}
					return p.ragged(b, l, text[start:i], startLine)
				}
				break
			}
			if c == last {
				end := i + bytes.IndexByte(text[i:], '\n')
				return p.ragged(b, l, text[start:end], startLine)
			}
			i++
		}
		if gaps >= width && blankLine(text[start:i], d.separator) {
			// A row without any cell is no row of data.
			b.Data = b.Data[:at]
			b.times, b.groups = b.times[:min(len(b.times), b.Rows)], b.groups[:min(len(b.groups), b.Rows)]
			b.blank++
		} else {
			b.Offset = append(b.Offset, int32(b.Rows))
			b.lines = append(b.lines, int32(startLine))
			b.Rows++
		}
		i++
		line++
	}
	b.Count = b.Rows
	b.newBy = line - 1
	if !p.time {
		b.times = nil
	}
	if !p.group {
		b.groups = nil
	}
	return nil
}

// passHead returns position and line of the first row of data.
func (d *dialect) passHead(text []byte, rows int) (at, line int) {
	head := &rowReader{d: d, text: text, at: len(text) - len(bytes.TrimPrefix(text, []byte("\xef\xbb\xbf")))}
	for range rows {
		head.next()
	}
	return head.at, head.line + 1
}

// skip passes over a cell nobody needs; only quotes make that more than a search.
func (d *dialect) skip(text []byte, i, line int) (int, int) {
	j := i
	for text[j] == ' ' || text[j] == '\t' && d.separator != '\t' {
		j++
	}
	if text[j] != '"' {
		for text[j] != d.separator && text[j] != '\n' {
			j++
		}
		return j, line
	}
	var scratch []byte
	_, end, _, _ := d.cell(text, i, &scratch)
	return end, line + bytes.Count(text[i:end], []byte{'\n'})
}

func blankLine(line []byte, separator byte) bool {
	for _, c := range line {
		if c != separator && c != ' ' && c != '\t' && c != '\r' {
			return false
		}
	}
	return true
}

func (p *parser) badCell(b *Block, l *layout, c, line int, cell []byte, trailing bool) error {
	shown := string(cell)
	if len(shown) > 40 {
		shown = shown[:40] + "…"
	}
	e := &Error{Kind: BadContent, File: b.file, Line: line, Column: c + 1, Name: l.names[c]}
	switch v, finite := looseNumber(cell); {
	case trailing:
		e.Problem = fmt.Sprintf("text follows the closing quote of %q", shown)
		e.Hint = "a quote within a quoted cell is written twice"
	case finite || v != 0:
		e.Problem = fmt.Sprintf("%q is not a finite number", shown)
		e.Hint = fmt.Sprintf("add %q to read.missing if it stands for a missing value", shown)
	default:
		e.Problem = fmt.Sprintf("%q is not a number", shown)
		e.Hint = fmt.Sprintf("add %q to read.missing if it stands for a missing value, or name the column in read.leave_out", shown)
		if l.dialect.point == '.' && looksDecimalComma(cell) {
			e.Hint = "set read.decimal: comma if the table writes decimals with a comma"
		}
	}
	return e
}

func (p *parser) ragged(b *Block, l *layout, row []byte, line int) error {
	var extra []byte
	found := 1
	ended := append(slices.Clone(row), '\n')
	for i := 0; ; i++ {
		_, end, _, _ := l.dialect.cell(ended, i, &extra)
		if ended[end] == '\n' {
			break
		}
		found++
		i = end
	}
	return &Error{Kind: BadContent, File: b.file, Line: line,
		Problem: fmt.Sprintf("%d cells, expected %d", found, len(l.uses)),
		Hint:    "a cell may hold the separator without quotes, or the row is cut off"}
}
