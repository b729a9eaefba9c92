package table

import (
	"bytes"
	"fmt"
	"io"
	"path/filepath"
	"strconv"
	"strings"
)

// How much of a file is looked at to tell columns of numbers from columns of text.
const (
	sampleRows  = 1000
	sampleBytes = 8 << 20
)

// head is what the beginning of a file tells.
type head struct {
	file    string // what errors call it
	counted string // what a line is called; empty: a line of text
	// unordered: nothing says in which order the rows come.
	unordered bool
	dialect   *dialect
	names     []string
	unnamed   []bool
	units     []string
	sample    []sampleColumn
	bytes     int  // of mark, header and units
	rows      int  // of header and units, of text
	looked    bool // whether the first row holds names, so they may be numbers
	labels    bool // the first column has labels of rows, which the header does not name
	form      form
	notes     []Note
}

// readHead looks at the beginning of a file.
func readHead(o *Options, open opener, file string, separator byte) (*head, error) {
	f := form{encoding: encoding(o.Encoding), turned: o.ChannelsInRows}
	h, err := f.readHead(o, open, file, separator)
	if h == nil && err == nil {
		// Not UTF-8 after all.
		f.encoding = latin1Text
		h, err = f.readHead(o, open, file, separator)
	}
	if err != nil {
		return nil, f.named(err)
	}
	h.form = f
	if f.turned {
		h.counted = turnedCell
	}
	if f.note != "" {
		h.notes = append(h.notes, Note{Text: filepath.Base(file) + " " + f.note})
	}
	return h, nil
}

// readHead returns neither head nor error where the text turns out not to be UTF-8.
func (f *form) readHead(o *Options, open opener, file string, separator byte) (*head, error) {
	s, err := f.open(o, open, file, separator)
	if err != nil {
		return nil, err
	}
	defer s.Close()
	text := make([]byte, 0, 1<<16)
	whole := false
	// A row or two may be longer than the whole sample of an ordinary table.
	for lines := 0; lines < sampleRows+3 && len(text) < sampleBytes || lines < 3 && len(text) < 3*longestRow; {
		if cap(text)-len(text) < 1<<15 {
			text = append(text, make([]byte, cap(text))...)[:len(text)]
		}
		n, err := s.Read(text[len(text):cap(text)])
		lines += bytes.Count(text[len(text):len(text)+n], []byte{'\n'})
		text = text[:len(text)+n]
		if err == io.EOF {
			text = append(text, '\n')
			whole = true
			break
		}
		if err != nil {
			return nil, readError(file, err)
		}
	}
	if f.encoding == autoEncoding {
		if line := notUTF8(text); line > 0 && bytes.IndexByte(text, 0) < 0 {
			f.note = latin1Text.assumed(line)
			return nil, nil
		}
	}
	mark := len(text)
	text = bytes.TrimPrefix(text, byteOrderMark)
	mark -= len(text)
	if i := bytes.IndexByte(text, 0); i >= 0 {
		return nil, &Error{Kind: BadContent, File: file, Line: 1 + bytes.Count(text[:i], []byte{'\n'}),
			Problem: "holds a NUL byte, so it is not text", Hint: "was it cut off, or is it in another format?"}
	}
	h := &head{file: file, dialect: newDialect(o, f.separator)}
	text = text[:bytes.LastIndexByte(text, '\n')+1]
	if len(text) == 0 {
		return nil, &Error{Kind: BadContent, File: file, Line: 1, Problem: "goes on for 64 MiB without a line end", Hint: "this is not a table"}
	}
	err = h.read(o, text, whole)
	h.bytes += mark
	return h, err
}

// separatorOf is the separator asked for, that of the format, or the candidate that the
// first line holds most often outside quotes; a blank stands for runs of blanks.
func separatorOf(o *Options, ofFormat byte, text []byte) byte {
	if o.Separator != "" {
		return o.Separator[0]
	}
	if ofFormat != 0 {
		return ofFormat
	}
	best, most := byte(','), 0
	for _, candidate := range []byte(",;\t|") {
		if candidate == ',' && o.DecimalComma {
			continue
		}
		count, quoted := 0, false
		for _, c := range firstLine(o, text) {
			switch {
			case c == '"':
				quoted = !quoted
			case c == candidate && !quoted:
				count++
			}
		}
		if count > most {
			best, most = candidate, count
		}
	}
	if most == 0 && o.Thousands != "space" && blankSeparated(o, text) {
		return ' '
	}
	return best
}

// firstLine is the first line that is neither blank nor a comment.
func firstLine(o *Options, text []byte) []byte {
	for line := range bytes.Lines(text) {
		if len(bytes.TrimSpace(line)) == 0 || o.Comment != "" && bytes.HasPrefix(line, []byte(o.Comment)) {
			continue
		}
		return line
	}
	return nil
}

// read takes names, units and the sample from the text, which ends with a line end; whole
// tells whether it is all of the file.
func (h *head) read(o *Options, text []byte, whole bool) error {
	rows := &rowReader{d: h.dialect, text: text}
	_, line, ok := rows.next()
	if !ok {
		return &Error{Kind: BadContent, File: h.file, Problem: "is empty"}
	}
	if rows.open {
		return &Error{Kind: BadContent, File: h.file, Line: line, Problem: openQuoteProblem, Hint: openQuoteHint}
	}
	rows = &rowReader{d: h.dialect, text: text}
	if err := h.nameRows(o, rows); err != nil {
		return err
	}
	h.units = make([]string, len(h.names))
	if o.UnitsRow {
		units, line, ok := rows.next()
		if ok && len(units) != len(h.names) {
			return &Error{Kind: BadContent, File: h.file, Line: line, Problem: fmt.Sprintf("%d units, expected %d", len(units), len(h.names))}
		}
		copy(h.units, units)
		h.rows++
	}
	h.bytes = rows.at
	h.sample = make([]sampleColumn, len(h.names))
	count := 0
	for ; count < sampleRows; count++ {
		cells, line, ok := rows.next()
		if !ok {
			break
		}
		if rows.open {
			if !whole {
				break // the sample ends within a quoted cell
			}
			return h.openQuote(len(cells), line)
		}
		if h.dialect.short && len(cells) < len(h.names) {
			cells = append(cells, make([]string, len(h.names)-len(cells))...)
		}
		if len(cells) != len(h.names) {
			if strings.TrimSpace(strings.Join(cells, "")) == "" {
				continue
			}
			return &Error{Kind: BadContent, File: h.file, Line: line, Problem: fmt.Sprintf("%d cells, expected %d", len(cells), len(h.names)),
				Hint: "a cell may hold the separator without quotes, or the row is cut off"}
		}
		for j, c := range cells {
			h.sample[j].add([]byte(c), h.dialect)
		}
	}
	if count == 0 {
		return &Error{Kind: BadContent, File: h.file, Problem: "has a header but no rows"}
	}
	return nil
}

// openQuote is the error about a row whose nth cell never ends.
func (h *head) openQuote(n, line int) error {
	e := &Error{Kind: BadContent, File: h.file, Line: line, Problem: openQuoteProblem, Hint: openQuoteHint}
	if n <= len(h.names) {
		e.Column, e.Name = n, h.names[n-1]
	}
	return e
}

// header checks the names.
func (h *head) header(cells []string, line int) error {
	numbers, unnamed := 0, 0
	for _, name := range cells {
		if name == "" {
			unnamed++
		} else if _, ok := parseNumber([]byte(name), h.dialect.point); ok {
			numbers++
		}
	}
	// Before the look for duplicates: rows of numbers often hold one twice.
	if !h.looked && numbers > 0 && numbers+unnamed == len(cells) {
		return &Error{Kind: BadContent, File: h.file, Line: line, counted: h.counted, Problem: "the header holds only numbers", Hint: "set read.header: false if the table has no header"}
	}
	seen := map[string]int{}
	for j, name := range cells {
		if name == "" {
			h.unnamed[j] = true
			name = "column_" + strconv.Itoa(j+1)
		}
		if before, ok := seen[name]; ok {
			return &Error{Kind: BadContent, File: h.file, Line: line, Column: j + 1, Name: name, counted: h.counted,
				Problem: fmt.Sprintf("has the same name as column %d", before), Hint: "give every column a name of its own"}
		}
		seen[name] = j + 1
		h.names = append(h.names, name)
	}
	return nil
}

// rowReader splits rows into cells the plain way, for heads.
type rowReader struct {
	d    *dialect
	text []byte
	at   int
	line int
	open bool
}

// next returns the cells of the next row; open is set when a quote in it is not closed.
func (r *rowReader) next() (cells []string, line int, ok bool) {
	r.open = false
	for r.at < len(r.text) {
		rest := r.text[r.at:]
		end := bytes.IndexByte(rest, '\n')
		r.line++
		if r.d.startsComment(rest) || len(bytes.TrimSpace(rest[:end])) == 0 {
			r.at += end + 1
			continue
		}
		line = r.line
		for {
			var extra []byte
			text, end, quoted, fault := r.d.cell(r.text, r.at, &extra)
			r.open = r.open || fault == openQuote
			cells = append(cells, string(trim(text)))
			if quoted {
				r.line += bytes.Count(r.text[r.at:end], []byte{'\n'})
			}
			r.at = end + 1
			if r.text[end] == '\n' {
				return cells, line, true
			}
		}
	}
	return nil, 0, false
}
