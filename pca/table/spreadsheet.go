package table

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"
)

var zipMagic = []byte("PK\x03\x04")

// What a sheet may hold at most (ECMA-376, 18.3.1.73 and 18.3.1.4, as spreadsheet programs
// have it).
const (
	mostSheetRows    = 1 << 20
	mostSheetColumns = 1 << 14
)

// openSpreadsheet opens a sheet of an Office Open XML workbook: the one named by
// read.sheet, or the only one that holds a table.
func openSpreadsheet(ctx context.Context, s *setting, file string) (part, error) {
	first, err := firstBytes(s.open, file)
	if err != nil {
		return nil, err
	}
	if !bytes.HasPrefix(first, zipMagic) {
		e := &Error{Kind: BadContent, File: file, Problem: "does not begin as an .xlsx spreadsheet does"}
		if bytes.HasPrefix(first, []byte("\xd0\xcf\x11\xe0")) {
			e.Problem, e.Hint = "is an encrypted spreadsheet, or one in the old binary format", "save it as .xlsx without a password"
		}
		return nil, e
	}
	b, err := openWorkbook(s.open, file)
	if err != nil {
		return nil, err
	}
	defer b.Close()
	sheet, err := b.choose(s.options.Sheet)
	if err != nil {
		return nil, err
	}
	g := &grid{passBlank: true}
	if g.h, err = sheetHead(s.options, b, sheet); err != nil {
		return nil, err
	}
	width, heads := len(g.h.names), s.options.headRows()
	g.open = func(context.Context) (rowReading, error) {
		b, err := openWorkbook(s.open, file)
		if err != nil {
			return nil, err
		}
		r, err := b.rows(sheet)
		if err != nil {
			b.Close()
			return nil, err
		}
		return &sheetPass{book: b, rows: r, file: g.h.file, width: width, skip: heads}, nil
	}
	return g, g.sample(ctx)
}

// choose finds the sheet.
func (b *workbook) choose(name string) (*sheet, error) {
	var all, full []string
	var only *sheet
	for i := range b.sheets {
		s := &b.sheets[i]
		all = append(all, s.name)
		if name != "" && s.name == name {
			return s, nil
		}
		if name != "" || s.hidden {
			continue
		}
		holds, err := b.holdsTable(s)
		if err != nil {
			return nil, err
		}
		if holds {
			full, only = append(full, s.name), s
		}
	}
	switch {
	case name != "":
		return nil, &Error{Kind: WrongInput, File: b.file, Problem: fmt.Sprintf("has no sheet %q", name), Hint: "its sheets are " + strings.Join(all, ", ")}
	case len(full) == 0:
		return nil, &Error{Kind: BadContent, File: b.file, Problem: "has no sheet with a header and rows"}
	case len(full) > 1:
		return nil, &Error{Kind: WrongInput, File: b.file, Problem: "several sheets hold tables: " + strings.Join(full, ", "), Hint: "name one in read.sheet"}
	}
	return only, nil
}

// holdsTable tells whether a sheet has two rows with values.
func (b *workbook) holdsTable(s *sheet) (bool, error) {
	r, err := b.rows(s)
	if err != nil {
		return false, err
	}
	defer r.Close()
	for rows := 0; rows < 2; {
		row, err := r.next()
		if err == io.EOF {
			return false, nil
		}
		if err != nil {
			return false, err
		}
		if row.filled() > 0 {
			rows++
		}
	}
	return true, nil
}

// sheetHead takes names and units from the first rows that hold anything. A table is as
// wide as its header; without one, as its first rows.
func sheetHead(o *Options, b *workbook, s *sheet) (*head, error) {
	r, err := b.rows(s)
	if err != nil {
		return nil, err
	}
	defer r.Close()
	h := &head{file: b.file + ": sheet " + strconv.Quote(s.name), counted: "row", dialect: newDialect(o, 0)}
	var texts [][]string
	var lines []int
	width := 0
	for len(texts) < max(1, o.headRows()) || o.NoHeader && len(texts) < 100 {
		row, err := r.next()
		if err == io.EOF {
			break
		}
		if err != nil {
			return nil, err
		}
		n := row.filled()
		if n == 0 {
			continue
		}
		if len(texts) == 0 || o.NoHeader {
			width = max(width, n)
		}
		texts, lines = append(texts, row.shown()), append(lines, row.line)
	}
	if len(texts) == 0 {
		return nil, &Error{Kind: BadContent, File: h.file, Problem: "is empty"}
	}
	for i := range texts {
		texts[i] = append(texts[i], make([]string, max(0, width-len(texts[i])))...)
	}
	h.units, h.unnamed = make([]string, width), make([]bool, width)
	if o.NoHeader {
		for j := range width {
			h.names = append(h.names, "column_"+strconv.Itoa(j+1))
		}
	} else {
		if err := h.header(texts[0][:width], lines[0]); err != nil {
			return nil, err
		}
		texts = texts[1:]
	}
	if o.UnitsRow && len(texts) > 0 {
		if len(texts[0]) > width {
			return nil, &Error{Kind: BadContent, File: h.file, Problem: fmt.Sprintf("%d units, expected %d", len(texts[0]), width)}
		}
		copy(h.units, texts[0])
	}
	return h, nil
}

// sheetPass is a pass over the rows of a sheet.
type sheetPass struct {
	book        *workbook
	rows        *sheetRows
	file        string
	width, skip int
}

func (p *sheetPass) next(to *cells) error {
	row, err := p.rows.next()
	for err == nil && (p.skip > 0 || row.filled() == 0) {
		if row.filled() > 0 {
			p.skip--
		}
		row, err = p.rows.next()
	}
	if err != nil {
		return err
	}
	if n := row.filled(); n > p.width {
		return &Error{Kind: BadContent, File: p.file, Line: row.line, counted: "row", absolute: true, Problem: fmt.Sprintf("%d cells, expected %d", n, p.width),
			Hint: "a header names every column; a sheet holds one table and nothing beside it"}
	}
	to.addRow(row.line)
	for i, j := range row.columns {
		if x := row.all[i]; x.kind >= textCell {
			to.setText(j, x.kind, row.textOf(&x))
		} else {
			*to.at(j) = x
		}
	}
	return nil
}

// late tells what is known only at the end of the sheet.
func (p *sheetPass) late() []Note {
	if p.rows.merged == 0 {
		return nil
	}
	return []Note{{Text: fmt.Sprintf("%d stretches of merged cells: only the first cell of each holds its value, the others are gaps", p.rows.merged)}}
}

func (p *sheetPass) Close() error {
	err := p.rows.Close()
	if other := p.book.Close(); err == nil {
		err = other
	}
	return err
}

// sheetRow is one row: the cells there are and their columns.
type sheetRow struct {
	line    int
	columns []int // of each cell, ascending
	cells
}

// filled is one more than the last column that holds a value.
func (r *sheetRow) filled() int {
	for i, j := range slices.Backward(r.columns) {
		if x := &r.all[i]; x.kind != emptyCell && (x.kind != textCell || len(trim(r.textOf(x))) > 0) {
			return j + 1
		}
	}
	return 0
}

// shown are the values as text, up to the last filled.
func (r *sheetRow) shown() []string {
	out := make([]string, r.filled())
	for i, j := range r.columns {
		if j < len(out) {
			out[j] = string(trim(r.appendShown(nil, &r.all[i])))
		}
	}
	return out
}
