package table

import (
	"archive/zip"
	"bytes"
	"compress/flate"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/xuri/excelize/v2"
)

// book makes a workbook; set fills it.
func book(t testing.TB, set func(f *excelize.File) error) string {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	if err := set(f); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), "x.xlsx")
	if err := f.SaveAs(path); err != nil {
		t.Fatal(err)
	}
	return path
}

// rowsOf sets rows of values from A1 on.
func rowsOf(sheet string, rows ...[]any) func(f *excelize.File) error {
	return func(f *excelize.File) error {
		for i, row := range rows {
			cell, _ := excelize.CoordinatesToCellName(1, i+1)
			if err := f.SetSheetRow(sheet, cell, &row); err != nil {
				return err
			}
		}
		return nil
	}
}

func noteTexts(notes []Note) []string {
	var out []string
	for _, n := range notes {
		out = append(out, strings.TrimSpace(n.Column+" "+n.Text))
	}
	return out
}

// What cells can hold, as another program (excelize) writes it.
func TestKindsOfCells(t *testing.T) {
	at := time.Date(2024, 2, 29, 13, 45, 30, 0, time.UTC)
	path := book(t, func(f *excelize.File) error {
		rows := [][]any{
			{"flow", "time", "on", "text", "mixed", "formula", "error", "count"},
			{"m3/h", "", "", "", "", "", "", ""},
			{1.5, at, true, "pump", "2.5", 1, 1, int64(1) << 55},
			{-2.25, at.Add(time.Hour), false, "valve", 3, 2, 2, 2},
			{0.1, at.AddDate(0, 0, 1), true, "pump", "NA", 3, 3, 3},
		}
		if err := rowsOf("Sheet1", rows...)(f); err != nil {
			return err
		}
		return errors.Join(f.SetCellFormula("Sheet1", "F4", "F3+1"), f.SetCellFormula("Sheet1", "F5", "NA()"),
			f.MergeCell("Sheet1", "D4", "D5"))
	})
	// The writer keeps the value beside the formula but has no cells that hold errors.
	path = rewrite(t, path, "xl/worksheets/sheet1.xml", func(x string) string {
		x = strings.Replace(x, `<c r="G5"><v>3</v></c>`, `<c r="G5" t="e"><v>#N/A</v></c>`, 1)
		x = strings.Replace(x, `<c r="F4" t="str">`, `<c r="F4">`, 1)
		return strings.Replace(x, `<f>NA()</f><v>3</v>`, `<f>NA()</f>`, 1)
	})
	got, err := collect(Options{Files: []string{path}, UnitsRow: true, Time: "time"}, chunkBytes, 2)
	if err != nil {
		t.Fatal(err)
	}
	nan := math.NaN()
	if want := []float64{1.5, 1, 2.5, 1, 1, 1 << 55, -2.25, 0, 3, 2, 2, 2, 0.1, 1, nan, nan, nan, 3}; !sameNumbers(got.data, want) {
		t.Errorf("%v\n%v", got.data, want)
	}
	if want := "2024-02-29T13:45:30 2024-02-29T14:45:30 2024-03-01T13:45:30"; strings.Join(got.times, " ") != want {
		t.Errorf("%v", got.times)
	}
	if got.columns[0].Unit != "m3/h" {
		t.Errorf("%+v", got.columns[0])
	}
	want := []string{"on true and false are read as 1 and 0", `text left out: text ("pump", "valve")`, "mixed 1 numbers are stored as text",
		"formula 1 formulas without a stored value count as missing; a spreadsheet program stores them when it saves", "error 1 errors of formulas count as missing",
		"1 stretches of merged cells: only the first cell of each holds its value, the others are gaps"}
	for _, w := range want {
		if !slices.Contains(noteTexts(got.notes), w) {
			t.Errorf("no note %q among %q", w, noteTexts(got.notes))
		}
	}
	// The same sheet through the other program's own reader.
	f, err := excelize.OpenFile(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	shown, err := f.GetCellValue("Sheet1", "B3")
	if err != nil || !strings.Contains(shown, "2/29/24") {
		t.Errorf("%q %v", shown, err)
	}
}

// rewrite changes one part of a workbook.
func rewrite(t testing.TB, path, part string, change func(string) string) string {
	t.Helper()
	z, err := zip.OpenReader(path)
	if err != nil {
		t.Fatal(err)
	}
	defer z.Close()
	var out bytes.Buffer
	w := zip.NewWriter(&out)
	w.RegisterCompressor(zip.Deflate, func(to io.Writer) (io.WriteCloser, error) { return flate.NewWriter(to, flate.BestSpeed) })
	found := false
	for _, f := range z.File {
		r, err := f.Open()
		if err != nil {
			t.Fatal(err)
		}
		text, err := io.ReadAll(r)
		if err != nil {
			t.Fatal(err)
		}
		if f.Name == part {
			changed := change(string(text))
			found = changed != string(text)
			text = []byte(changed)
		}
		to, err := w.Create(f.Name)
		if err != nil {
			t.Fatal(err)
		}
		to.Write(text)
	}
	if !found {
		t.Fatalf("%s is as it was", part)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	changed := filepath.Join(t.TempDir(), "x.xlsx")
	if err := os.WriteFile(changed, out.Bytes(), 0o666); err != nil {
		t.Fatal(err)
	}
	return changed
}

// Day numbers: those that ECMA-376, 18.17.4.1, prints, and the day that never was.
func TestDayNumbers(t *testing.T) {
	b := &workbook{epoch: time.Date(1899, 12, 30, 0, 0, 0, 0, time.UTC)}
	later := &workbook{epoch: time.Date(1904, 1, 1, 0, 0, 0, 0, time.UTC)}
	both := dateStyle{true, true}
	for _, c := range []struct {
		b     *workbook
		day   float64
		style dateStyle
		want  string
	}{
		{b, 1, dateStyle{date: true}, "1900-01-01"}, {b, 59, dateStyle{date: true}, "1900-02-28"}, {b, 61, dateStyle{date: true}, "1900-03-01"},
		{b, 2958465, dateStyle{date: true}, "9999-12-31"}, {later, 0, dateStyle{date: true}, "1904-01-01"}, {later, 2957003, dateStyle{date: true}, "9999-12-31"},
		{b, 45351.573611111111, both, "2024-02-29T13:46:00"}, {b, 45351, both, "2024-02-29T00:00:00"}, {b, 0.5, dateStyle{clock: true}, "12:00:00"},
		{b, 45351.9999999999, both, "2024-03-01T00:00:00"},
	} {
		if got, ok := c.b.appendTime(nil, c.day, c.style); !ok || string(got) != c.want {
			t.Errorf("day %v: %s %v, want %s", c.day, got, ok, c.want)
		}
	}
	for _, day := range []float64{-1, math.NaN(), 1e9} {
		if _, ok := b.appendTime(nil, day, both); ok {
			t.Errorf("day %v has a date", day)
		}
	}
	for code, want := range map[string]dateStyle{"yyyy-mm-dd": {date: true}, "h:mm": {clock: true}, "mmm": {date: true}, "0.00": {}, "[h]:mm:ss": {}, "General": {},
		`0" days"`: {}, `d/m/yy\ h:mm`: both, "[$-409]mmmm": {date: true}, "[Red]0.0": {}, "#,##0 \\m": {}, `_(* #,##0_)`: {}} {
		if got := dateStyleOf(code); got != want {
			t.Errorf("%q: %+v, want %+v", code, got, want)
		}
	}
}

// Which sheet, and what is said when that is not clear.
func TestSheets(t *testing.T) {
	two := func(f *excelize.File) error {
		if _, err := f.NewSheet("Spring"); err != nil {
			return err
		}
		return errors.Join(rowsOf("Sheet1", []any{"a", "b"}, []any{1, 2})(f), rowsOf("Spring", []any{}, []any{"c"}, []any{}, []any{3}, []any{}, []any{4})(f))
	}
	path := book(t, two)
	for _, c := range []struct{ sheet, want string }{
		{"", "several sheets hold tables: Sheet1, Spring"}, {"Autumn", `has no sheet "Autumn"`}, {"Sheet1", "[1 2]"}, {"Spring", "[3 4]"},
	} {
		got, err := collect(Options{Files: []string{path}, Sheet: c.sheet}, chunkBytes, 1)
		said := fmt.Sprint(err)
		if err == nil {
			said = fmt.Sprint(got.data)
		}
		if !strings.HasSuffix(said, c.want) {
			t.Errorf("%q: %s", c.sheet, said)
		}
	}
	// Errors about a row name the row of the sheet, past those that are blank.
	tab, err := Open(t.Context(), Options{Files: []string{path}, Sheet: "Spring"})
	if err != nil {
		t.Fatal(err)
	}
	err = tab.Each(t.Context(), 1, func(_ int, b *Block) error { return b.Problem(1, 0, "is wrong", "") }, func(*Block) error { return nil })
	if err == nil || !strings.HasSuffix(err.Error(), `sheet "Spring": row 6: column 1 "c": is wrong`) {
		t.Errorf("%v", err)
	}
	hidden := book(t, func(f *excelize.File) error { return errors.Join(two(f), f.SetSheetVisible("Spring", false)) })
	if got, err := collect(Options{Files: []string{hidden}}, chunkBytes, 1); err != nil || len(got.data) != 2 {
		t.Errorf("a hidden sheet: %v", err)
	}
	if got, err := collect(Options{Files: []string{hidden}, Sheet: "Spring", NoHeader: true}, chunkBytes, 1); err == nil {
		t.Errorf("a name among numbers: %v", got.data)
	}
}

// What is wrong in a sheet, and where.
func TestBadSheets(t *testing.T) {
	for name, c := range map[string]struct {
		rows [][]any
		want string
	}{
		"mixed":  {[][]any{{"a", "b"}, {1, 2}, {1, "broken"}, {1, 3}, {1, 4}}, `x.xlsx: sheet "Sheet1": row 3: column 2 "b": "broken" is not a number`},
		"time":   {[][]any{{"a", "b"}, {1, 2}, {1, 3}, {1, time.Date(2024, 1, 2, 3, 0, 0, 0, time.UTC)}}, `row 4: column 2 "b": 2024-01-02T03:00:00 is a time, not a number`},
		"beside": {[][]any{{"a", "b"}, {1, 2}, {1, 3, "see below"}}, "row 3: 3 cells, expected 2"},
		"twins":  {[][]any{{"a", "a"}, {1, 2}}, `row 1: column 2 "a": has the same name as column 1`},
		"header": {[][]any{{1, 2}, {1, 2}}, "row 1: the header holds only numbers"},
		"empty":  {nil, "has no sheet with a header and rows"},
		"alone":  {[][]any{{"a", "b"}}, "has no sheet with a header and rows"},
	} {
		_, err := collect(Options{Files: []string{book(t, rowsOf("Sheet1", c.rows...))}}, chunkBytes, 2)
		var e *Error
		if !errors.As(err, &e) || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v", name, err)
		}
	}
	good := book(t, rowsOf("Sheet1", []any{"a", "b"}, []any{1, 2}, []any{3, 4}))
	const sheet = "xl/worksheets/sheet1.xml"
	for name, c := range map[string]struct{ part, old, new, want string }{
		"text of none": {sheet, `t="s"><v>0</v>`, `t="s"><v>77</v>`, `cell A1: text "77" of 2`},
		"out of order": {sheet, `r="B2"`, `r="B7"`, `row 2: cell "B7" is out of place`},
		"backwards":    {sheet, `<row r="3"`, `<row r="1"`, `row 2: the row after it has number "1"`},
		"far column":   {sheet, `r="B2"`, `r="ZZZ2"`, `row 2: cell "ZZZ2" is out of place`},
		"no number":    {sheet, `<v>4</v>`, `<v>0x4</v>`, `row 3: cell B3: "0x4" is not a number`},
		"a kind":       {sheet, `<c r="B3"`, `<c r="B3" t="z"`, `values of kind "z" are not known`},
		"cut":          {sheet, `</sheetData>`, ``, "the spreadsheet is damaged"},
		"no sheet":     {"xl/_rels/workbook.xml.rels", `worksheets/sheet1.xml`, `worksheets/none.xml`, "it lacks xl/worksheets/none.xml"},
	} {
		path := rewrite(t, good, c.part, func(x string) string {
			if name == "cut" {
				return x[:strings.Index(x, c.old)]
			}
			return strings.Replace(x, c.old, c.new, 1)
		})
		_, err := collect(Options{Files: []string{path}}, chunkBytes, 2)
		var e *Error
		if !errors.As(err, &e) || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v", name, err)
		}
	}
	for name, text := range map[string]string{"x.xlsx": "a,b\n1,2\n", "y.xls": "\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "z.xlsx": "PK\x03\x04 and nothing more"} {
		_, err := collect(Options{Files: []string{writeFile(t, name, text)}}, chunkBytes, 1)
		var e *Error
		if !errors.As(err, &e) || !strings.Contains(err.Error(), "spreadsheet") {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// A row that unpacks to more than a row can be, and a part that claims too much.
func TestSheetBombs(t *testing.T) {
	if raced {
		t.Skip("one goroutine and hundreds of megabytes: the race detector has nothing to find, and takes minutes")
	}
	good := book(t, rowsOf("Sheet1", []any{"a", "b"}, []any{1, 2}, []any{3, 4}))
	bomb := rewrite(t, good, "xl/worksheets/sheet1.xml", func(x string) string {
		return strings.Replace(x, `<v>4</v>`, `<v>`+strings.Repeat(" ", 80<<20)+`4</v>`, 1)
	})
	if _, err := collect(Options{Files: []string{bomb}}, chunkBytes, 1); err == nil || !strings.Contains(err.Error(), "more than 64 MiB") {
		t.Errorf("%v", err)
	}
	long := strings.Repeat("long ", 3<<20)
	bomb = rewrite(t, good, "xl/sharedStrings.xml", func(x string) string { return strings.Replace(x, "<t>b</t>", "<t>"+long+"</t>", 1) })
	bomb = rewrite(t, bomb, "xl/worksheets/sheet1.xml", func(x string) string {
		return strings.Replace(x, `<v>4</v></c>`, `<v>4</v></c>`+strings.Repeat(`<c t="s"><v>1</v></c>`, 9), 1)
	})
	if _, err := collect(Options{Files: []string{bomb}}, chunkBytes, 1); err == nil || !strings.Contains(err.Error(), "row 3: its texts take more than 64 MiB") {
		t.Errorf("%v", err)
	}
	bomb = rewrite(t, good, "xl/sharedStrings.xml", func(x string) string { return x + strings.Repeat(" ", 257<<20) })
	if _, err := collect(Options{Files: []string{bomb}}, chunkBytes, 1); err == nil || !strings.Contains(err.Error(), "unpacks to 257 MiB, more than 256 MiB") {
		t.Errorf("%v", err)
	}
}

// Long sheets come in several blocks, the same on any number of threads.
func TestLongSheet(t *testing.T) {
	path := filepath.Join(t.TempDir(), "x.xlsx")
	f := excelize.NewFile()
	defer f.Close()
	w, err := f.NewStreamWriter("Sheet1")
	if err != nil {
		t.Fatal(err)
	}
	const rows, width = 3000, 60
	var want []float64
	names := make([]any, width)
	for j := range names {
		names[j] = fmt.Sprint("c", j)
	}
	if err := w.SetRow("A1", names); err != nil {
		t.Fatal(err)
	}
	for i := range rows {
		row := make([]any, width)
		for j := range row {
			v := float64(i*width+j) + 0.25 // the writer keeps 15 digits
			want = append(want, v)
			row[j] = v
		}
		if err := w.SetRow(fmt.Sprint("A", i+2), row); err != nil {
			t.Fatal(err)
		}
	}
	if err := errors.Join(w.Flush(), f.SaveAs(path)); err != nil {
		t.Fatal(err)
	}
	for _, threads := range []int{1, 2, 5} {
		got, err := collect(Options{Files: []string{path}}, chunkBytes, threads)
		if err != nil || !sameNumbers(got.data, want) || got.rows[rows-1] != rows-1 {
			t.Fatalf("%d threads: %v", threads, err)
		}
	}
}
