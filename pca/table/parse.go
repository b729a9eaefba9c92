package table

import (
	"bytes"
	"fmt"
	"math"
	"slices"
	"unicode/utf8"
)

// use says what a column of the file is for.
type use int

const (
	skipped use = iota
	number
	timeText
	groupText
	timeAndGroupText
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
	b.Width, b.Rows, b.Count, b.blank, b.short = width, 0, 0, 0, 0
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
		cells := b.Data[at : at+width]
		gaps := 0
	row:
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
					cell, end, quoted, fault := d.cell(text, i, &b.extra)
					v, ok = d.value(cell)
					if fault == wellQuoted && !ok && len(trim(cell)) == 0 {
						// Where "" is no missing code, an empty row is still no row of data.
						if rowEnd, empty := d.emptyRow(text, start); empty {
							i, gaps = rowEnd, width
							break row
						}
					}
					if fault != wellQuoted || !ok {
						return p.badCell(b, l, c, startLine, cell, fault)
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
				cells[l.to[c]] = v
			case skipped:
				i, line = d.skip(text, i, line, &b.extra)
			default:
				cell, end, quoted, fault := d.cell(text, i, &b.extra)
				if fault != wellQuoted {
					return p.badCell(b, l, c, startLine, cell, fault)
				}
				if !utf8.Valid(cell) {
					return &Error{Kind: BadContent, File: b.file, Line: startLine, Column: c + 1, Name: l.names[c], Problem: notUTF8Problem, Hint: notUTF8Hint}
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
				if l.uses[c] != groupText {
					b.times = append(b.times, s)
				}
				if l.uses[c] != timeText {
					b.groups = append(b.groups, s)
				}
				i = end
			}
			ended := text[i] == '\n'
			if ended != (c == last) {
				if rowEnd, empty := d.emptyRow(text, start); empty {
					i, gaps = rowEnd, width
					break row
				}
				if ended && d.short {
					gaps += b.fill(l, c+1, cells)
					b.short++
					break row
				}
				return p.ragged(b, l, text[start:], startLine)
			}
			if ended {
				break row
			}
			i++
		}
		empty := false
		if gaps >= width {
			_, empty = d.emptyRow(text, start)
		}
		if empty {
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
	head := &rowReader{d: d, text: text, at: len(text) - len(bytes.TrimPrefix(text, byteOrderMark))}
	for range rows {
		head.next()
	}
	return head.at, head.line + 1
}

// skip passes over a cell nobody needs; only quotes make that more than a search.
func (d *dialect) skip(text []byte, i, line int, extra *[]byte) (int, int) {
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
	cell, end, _, _ := d.cell(text, i, extra)
	*extra = (*extra)[:len(*extra)-len(cell)]
	return end, line + bytes.Count(text[i:end], []byte{'\n'})
}

func (p *parser) badCell(b *Block, l *layout, c, line int, cell []byte, fault quoteFault) error {
	cell = trim(cell)
	shown := shorten(string(cell), 40)
	e := &Error{Kind: BadContent, File: b.file, Line: line, Column: c + 1, Name: l.names[c]}
	switch {
	case fault == openQuote:
		e.Problem, e.Hint = openQuoteProblem, openQuoteHint
	case fault == textAfterQuote:
		e.Problem = fmt.Sprintf("text follows the closing quote of %q", shown)
		e.Hint = "a quote within a quoted cell is written twice"
	case infinite(cell, l.dialect.point):
		e.Cell = string(cell)
		e.Problem = fmt.Sprintf("%q is not a finite number", shown)
		e.Hint = fmt.Sprintf("add %q to read.missing if it stands for a missing value", shown)
	default:
		e.Cell = string(cell)
		e.Problem = fmt.Sprintf("%q is not a number", shown)
		e.Hint = fmt.Sprintf("add %q to read.missing if it stands for a missing value, or name the column in read.leave_out", shown)
		if hint := l.dialect.numberHint(cell); hint != "" {
			e.Hint = hint
		}
	}
	return e
}

const (
	openQuoteProblem = "a quote is never closed"
	openQuoteHint    = "a quote within a quoted cell is written twice"
)

// ragged is the error about the row that starts the text.
func (p *parser) ragged(b *Block, l *layout, text []byte, line int) error {
	var extra []byte
	found := 1
	for i := 0; ; i++ {
		_, end, _, fault := l.dialect.cell(text, i, &extra)
		if fault == openQuote {
			return &Error{Kind: BadContent, File: b.file, Line: line, Problem: openQuoteProblem, Hint: openQuoteHint}
		}
		if text[end] == '\n' {
			break
		}
		found++
		i = end
	}
	return &Error{Kind: BadContent, File: b.file, Line: line,
		Problem: fmt.Sprintf("%d cells, expected %d", found, len(l.uses)),
		Hint:    "a cell may hold the separator without quotes, or the row is cut off"}
}

// fill makes gaps of the cells from c on that a row lacks, and counts those of numbers.
func (b *Block) fill(l *layout, c int, cells []float64) (gaps int) {
	for ; c < len(l.uses); c++ {
		switch l.uses[c] {
		case skipped:
		case number:
			cells[l.to[c]] = math.NaN()
			gaps++
		default:
			if l.uses[c] != groupText {
				b.times = append(b.times, span{})
			}
			if l.uses[c] != timeText {
				b.groups = append(b.groups, span{})
			}
		}
	}
	return gaps
}
