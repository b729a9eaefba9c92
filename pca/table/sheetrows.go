package table

import (
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
)

// sheetRows goes through the rows of a worksheet as they stand in its XML.
type sheetRows struct {
	book   *workbook
	sheet  *sheet
	part   io.ReadCloser
	bound  *bounded
	xml    *xml.Decoder
	row    sheetRow
	ended  bool
	merged int // stretches of merged cells, at the end
	value  []byte
}

// bounded stops a reader that gives too much between two looks.
type bounded struct {
	r    io.Reader
	left int
}

var errTooLong = errors.New("a row takes more than 64 MiB")

func (b *bounded) Read(p []byte) (int, error) {
	if b.left <= 0 {
		return 0, errTooLong
	}
	n, err := b.r.Read(p[:min(len(p), b.left)])
	b.left -= n
	return n, err
}

// rows begins at the first row of a sheet.
func (b *workbook) rows(s *sheet) (*sheetRows, error) {
	part, err := b.part(s.part, longestSheet)
	if err != nil {
		return nil, err
	}
	r := &sheetRows{book: b, sheet: s, part: part, bound: &bounded{part, longestRow}}
	r.xml = xml.NewDecoder(r.bound)
	for {
		e, err := r.element()
		if err != nil {
			part.Close()
			return nil, err
		}
		if e.Name.Local == "sheetData" {
			return r, nil
		}
	}
}

func (r *sheetRows) Close() error {
	if err := r.part.Close(); err != nil {
		return r.book.damaged(err)
	}
	return nil
}

// fault is an error in the row being read.
func (r *sheetRows) fault(problem string, args ...any) error {
	return &Error{Kind: BadContent, File: r.book.file + ": sheet " + strconv.Quote(r.sheet.name), Line: r.row.line, counted: "row", absolute: true,
		Problem: fmt.Sprintf(problem, args...)}
}

// token reads on; the end of the part is not expected.
func (r *sheetRows) token() (xml.Token, error) {
	t, err := r.xml.RawToken()
	if err == io.EOF {
		err = io.ErrUnexpectedEOF
	}
	if err != nil {
		return nil, r.book.damaged(fmt.Errorf("sheet %q after row %d: %w", r.sheet.name, r.row.line, err))
	}
	return t, nil
}

// element is the next that starts.
func (r *sheetRows) element() (*xml.StartElement, error) {
	for {
		t, err := r.token()
		if err != nil {
			return nil, err
		}
		if e, ok := t.(xml.StartElement); ok {
			return &e, nil
		}
	}
}

func attribute(e *xml.StartElement, name string) string {
	for _, a := range e.Attr {
		if a.Name.Local == name && a.Name.Space == "" {
			return a.Value
		}
	}
	return ""
}

// next returns the next row, valid until the one after; io.EOF at the end.
func (r *sheetRows) next() (*sheetRow, error) {
	if r.ended {
		return nil, io.EOF
	}
	r.bound.left = longestRow
	for {
		t, err := r.token()
		if err != nil {
			return nil, err
		}
		switch t := t.(type) {
		case xml.EndElement:
			if t.Name.Local == "sheetData" {
				r.ended = true
				return nil, r.rest()
			}
		case xml.StartElement:
			if t.Name.Local == "row" {
				return r.readRow(&t)
			}
		}
	}
}

// rest reads what follows the rows: so the checksum of the part is checked, too.
func (r *sheetRows) rest() error {
	for {
		r.bound.left = longestRow
		t, err := r.xml.RawToken()
		if err == io.EOF {
			return io.EOF
		}
		if err != nil {
			return r.book.damaged(fmt.Errorf("sheet %q after its rows: %w", r.sheet.name, err))
		}
		if e, ok := t.(xml.StartElement); ok && e.Name.Local == "mergeCell" {
			r.merged++
		}
	}
}

func (r *sheetRows) readRow(e *xml.StartElement) (*sheetRow, error) {
	row, line := &r.row, r.row.line+1
	if text := attribute(e, "r"); text != "" {
		n, err := strconv.Atoi(text)
		if err != nil || n < line || n > mostSheetRows {
			return nil, r.fault("the row after it has number %q", shorten(text, 20))
		}
		line = n
	}
	row.line, row.columns = line, row.columns[:0]
	row.reset(0)
	for {
		t, err := r.token()
		if err != nil {
			return nil, err
		}
		switch t := t.(type) {
		case xml.EndElement:
			if t.Name.Local == "row" {
				return row, nil
			}
		case xml.StartElement:
			if t.Name.Local != "c" {
				continue
			}
			if err := r.readCell(&t); err != nil {
				return nil, err
			}
		}
	}
}

// readCell adds a cell to the row.
func (r *sheetRows) readCell(e *xml.StartElement) error {
	row := &r.row
	column := 0
	if n := len(row.columns); n > 0 {
		column = row.columns[n-1] + 1
	}
	ref := attribute(e, "r")
	if ref != "" {
		at, line, ok := columnNumber(ref)
		if !ok || line != row.line || at < column {
			return r.fault("cell %q is out of place", shorten(ref, 20))
		}
		column = at
	}
	if column >= mostSheetColumns {
		return r.fault("more than %d cells", mostSheetColumns)
	}
	kind, style := attribute(e, "t"), 0
	if text := attribute(e, "s"); text != "" {
		style, _ = strconv.Atoi(text) // an unknown style shows a number
	}
	r.value = r.value[:0]
	formula, solved, inValue, depth := false, false, 0, 1
	for depth > 0 {
		t, err := r.token()
		if err != nil {
			return err
		}
		switch t := t.(type) {
		case xml.StartElement:
			depth++
			switch t.Name.Local {
			case "f":
				formula = true
			case "v":
				inValue, solved = depth, true
			case "t": // of an inline text; not of the readings beside it
				if inValue == 0 && kind == "inlineStr" {
					inValue = depth
				}
			case "rPh":
				inValue = -depth
			}
		case xml.EndElement:
			if inValue == depth || inValue == -depth {
				inValue = 0
			}
			depth--
		case xml.CharData:
			if inValue > 0 {
				r.value = append(r.value, t...)
			}
		}
	}
	row.columns = append(row.columns, column)
	row.all = append(row.all, cell{})
	row.width = 1 // of the cell added last
	if len(r.value) == 0 {
		if formula && !solved {
			row.at(0).kind = unsolvedCell
		}
		return nil
	}
	return r.setCell(kind, style, ref)
}

// setCell makes a value of its text.
func (r *sheetRows) setCell(kind string, style int, ref string) error {
	row, text := &r.row, r.value
	switch kind {
	case "s":
		i, err := strconv.Atoi(string(trim(text)))
		if err != nil || i < 0 || i >= len(r.book.texts) {
			return r.fault("cell %s: text %q of %d", ref, shorten(string(text), 20), len(r.book.texts))
		}
		if len(row.text)+len(r.book.texts[i]) > longestRow { // few bytes can repeat a long text
			return r.fault("its texts take more than %d MiB", longestRow>>20)
		}
		row.setText(0, textCell, []byte(r.book.texts[i]))
	case "str", "inlineStr":
		row.setText(0, textCell, text)
	case "b":
		row.setTruth(0, string(text) == "1" || string(text) == "true")
	case "e":
		row.setText(0, faultCell, text)
	case "d":
		row.setText(0, timeCell, text)
	case "", "n":
		v, ok := readNumber(trim(text), '.')
		if !ok && !math.IsInf(v, 0) {
			return r.fault("cell %s: %q is not a number", ref, shorten(string(text), 40))
		}
		if style >= 0 && style < len(r.book.dates) && r.book.dates[style] != (dateStyle{}) {
			if shown, ok := r.book.appendTime(nil, v, r.book.dates[style]); ok {
				row.setText(0, timeCell, shown)
				return nil
			}
		}
		row.setNumber(0, v)
	default:
		return r.fault("cell %s: values of kind %q are not known", ref, shorten(kind, 20))
	}
	return nil
}
