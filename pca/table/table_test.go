package table

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"axisfold/testdata/published"
)

// defaultMissing are the codes a run file starts from.
var defaultMissing = []string{"", "NA", "NaN", "nan", "null"}

func writeFile(t testing.TB, name, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

// collected is a table read whole.
type collected struct {
	columns []Column
	data    []float64
	rows    []int64
	times   []string
	groups  []string
	notes   []Note
}

func collect(o Options, pieces, threads int) (*collected, error) {
	if o.Missing == nil {
		o.Missing = defaultMissing
	}
	t, err := openWith(context.Background(), o, openFile, pieces)
	if err != nil {
		return nil, err
	}
	return gather(t, threads, o)
}

func gather(t *Table, threads int, o Options) (*collected, error) {
	c := &collected{columns: t.Columns()}
	err := t.Each(context.Background(), threads, func(int, *Block) error { return nil }, func(b *Block) error {
		c.data = append(c.data, b.Data...)
		for i := range b.Rows {
			c.rows = append(c.rows, b.Row+int64(b.Offset[i]))
			if o.Time != "" {
				c.times = append(c.times, string(b.Time(i)))
			}
			if o.Groups != "" {
				c.groups = append(c.groups, string(b.Group(i)))
			}
		}
		return nil
	})
	c.notes = t.Notes()
	return c, err
}

// sameNumbers compares bit for bit, all NaN being one.
func sameNumbers(a, b []float64) bool {
	return slices.EqualFunc(a, b, func(x, y float64) bool { return x == y || math.IsNaN(x) && math.IsNaN(y) })
}

// Tables in many dialects, made from known numbers, read back bit for bit with pieces of
// any size and any number of threads.
func TestDialects(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	for _, separator := range []string{",", ";", "\t", "|"} {
		for _, comma := range []bool{false, true} {
			if comma && separator == "," {
				continue
			}
			for _, ends := range []string{"\n", "\r\n"} {
				for _, quotes := range []bool{false, true} {
					for _, final := range []bool{false, true} {
						name := fmt.Sprintf("sep=%q comma=%v ends=%q quotes=%v final=%v", separator, comma, ends, quotes, final)
						checkDialect(t, rng, name, separator, comma, ends, quotes, final)
					}
				}
			}
		}
	}
}

func checkDialect(t *testing.T, rng *rand.Rand, name, separator string, comma bool, ends string, quotes, final bool) {
	t.Helper()
	want := &collected{}
	var b strings.Builder
	b.WriteString("\ufeff")
	b.WriteString("# made up" + ends + "stamp" + separator + "a" + separator + `"b, ""x"""` + separator + "label" + separator + "c" + ends)
	b.WriteString(separator + "bar" + separator + " m3/h " + separator + separator + "°C" + ends)
	number := func() string {
		v := math.Round(rng.NormFloat64()*1e6) / math.Pow(10, float64(rng.IntN(7)))
		if rng.IntN(20) == 0 {
			v *= 1e30
		}
		text := strconv.FormatFloat(v, 'f', -1, 64)
		if rng.IntN(5) == 0 {
			text = strconv.FormatFloat(v, 'e', -1, 64)
		}
		if rng.IntN(9) == 0 {
			want.data = append(want.data, math.NaN())
			return []string{"", "NA", "-999", " -999 ", "NA "}[rng.IntN(5)]
		}
		want.data = append(want.data, v)
		if comma {
			text = strings.Replace(text, ".", ",", 1)
		}
		if rng.IntN(8) == 0 {
			text = " " + text + " "
		}
		if quotes && rng.IntN(4) == 0 {
			text = `"` + text + `"`
		}
		return text
	}
	for i := range 60 {
		if i%17 == 3 {
			b.WriteString("# a remark with a \" quote" + ends)
		}
		if i%13 == 5 {
			b.WriteString(ends)
		}
		if i%19 == 7 {
			b.WriteString(strings.Repeat(separator, 4) + ends)
		}
		label, text := "north", "north"
		if quotes && i%3 == 0 {
			label = "south \"" + separator + "\n side"
			text = `"` + strings.ReplaceAll(label, `"`, `""`) + `"`
		} else if i%5 == 0 {
			label, text = `5" pipe`, `5" pipe`
		}
		want.groups = append(want.groups, label)
		want.times = append(want.times, fmt.Sprintf("t%d", i))
		cells := []string{fmt.Sprintf("t%d", i), number(), number(), text, number()}
		b.WriteString(strings.Join(cells, separator))
		if i < 59 || final {
			b.WriteString(ends)
		}
	}
	o := Options{Files: []string{writeFile(t, "x.csv", b.String())}, DecimalComma: comma, Comment: "#", UnitsRow: true,
		Missing: []string{"", "NA", "-999"}, Time: "stamp", Groups: "label"}
	for _, pieces := range []int{1, 7, 100, 1000, chunkBytes} {
		for _, threads := range []int{1, 3} {
			got, err := collect(o, pieces, threads)
			if err != nil {
				t.Fatalf("%s pieces=%d: %v", name, pieces, err)
			}
			if !sameNumbers(got.data, want.data) || !slices.Equal(got.times, want.times) || !slices.Equal(got.groups, want.groups) {
				t.Fatalf("%s pieces=%d threads=%d: read\n%v %q\nwant\n%v %q", name, pieces, threads, got.data, got.groups, want.data, want.groups)
			}
			if got.columns[1] != (Column{`b, "x"`, "m3/h", 3}) {
				t.Fatalf("%s: column %+v", name, got.columns[1])
			}
		}
	}
}

// The quick number reader agrees with strconv bit for bit on decimal texts of 1 to 19
// digits, and is the one that reads most of them.
func TestScanNumber(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 14))
	quick, all := 0, 0
	for range 2_000_000 {
		digits := 1 + rng.IntN(19)
		text := make([]byte, 0, 32)
		if rng.IntN(3) == 0 {
			text = append(text, '-')
		}
		point := rng.IntN(digits + 2)
		for i := range digits {
			if i == point {
				text = append(text, '.')
			}
			text = append(text, byte('0'+rng.IntN(10)))
		}
		want, err := strconv.ParseFloat(string(text), 64)
		if err != nil {
			t.Fatal(err)
		}
		all++
		got, end, ok := scanNumber(append(text, '\n'), 0, '.')
		if ok {
			quick++
			if math.Float64bits(got) != math.Float64bits(want) || end != len(text) {
				t.Fatalf("%s read as %v, strconv %v", text, got, want)
			}
		}
		if slow, ok := parseNumber(text, '.'); !ok || math.Float64bits(slow) != math.Float64bits(want) {
			t.Fatalf("%s read slowly as %v, strconv %v", text, slow, want)
		}
	}
	if quick*10 < all*7 {
		t.Errorf("quick for %d of %d texts only", quick, all)
	}
}

// UCI Machine Learning Repository 360 (De Vito et al. 2008, Sens. Actuators B 129:750):
// semicolons, decimal comma, CRLF, -200 for missing with the counts printed in the
// source, two empty columns and 114 empty last lines.
func TestAirQuality(t *testing.T) {
	o := Options{Files: []string{published.Path(t, "reference/air_quality/AirQualityUCI.csv")}, DecimalComma: true,
		Missing: []string{"", "-200"}, Time: "Date"}
	got, err := collect(o, chunkBytes, 2)
	if err != nil {
		t.Fatal(err)
	}
	if len(got.rows) != 9357 || len(got.columns) != 13 {
		t.Fatalf("%d rows of %d channels, want 9357 of 13", len(got.rows), len(got.columns))
	}
	want := map[string]int{"CO(GT)": 1683, "NMHC(GT)": 8443, "NOx(GT)": 1639, "NO2(GT)": 1642}
	for j, c := range got.columns {
		n := 0
		for i := j; i < len(got.data); i += len(got.columns) {
			if math.IsNaN(got.data[i]) {
				n++
			}
		}
		expected, named := want[c.Name]
		if !named {
			expected = 366
		}
		if n != expected {
			t.Errorf("%s: %d missing, printed %d", c.Name, n, expected)
		}
	}
	notes := fmt.Sprint(got.notes)
	for _, text := range []string{"114 empty rows", "column_16 left out: no name and no values", "Time left out: text"} {
		if !strings.Contains(notes, text) {
			t.Errorf("no note %q in %s", text, notes)
		}
	}
}

// US arrests has a column of text; Fisher's iris too.
func TestTextColumns(t *testing.T) {
	for file, want := range map[string]string{"us_arrests_1973": "State", "iris_fisher": "species"} {
		got, err := collect(Options{Files: []string{published.Path(t, "reference/classic/"+file+".csv")}}, chunkBytes, 2)
		if err != nil {
			t.Fatal(err)
		}
		if len(got.columns) != 4 || len(got.notes) != 1 || got.notes[0].Column != want || !strings.HasPrefix(got.notes[0].Text, "left out: text (") {
			t.Errorf("%s: %d columns, notes %v", file, len(got.columns), got.notes)
		}
	}
}

func TestErrors(t *testing.T) {
	many := "a,b\n" + strings.Repeat("1,2\n", 3000)
	cases := []struct {
		name, text string
		o          Options
		want, hint string
	}{
		{"empty", "", Options{}, "x.csv: is empty", ""},
		{"header only", "a,b\n", Options{}, "x.csv: has a header but no rows", ""},
		{"header and units only", "a,b\nm,s\n", Options{UnitsRow: true}, "x.csv: has a header but no rows", ""},
		{"ragged", "a,b\n1,2\n3\n", Options{}, "x.csv:3: 1 cells, expected 2", "a cell may hold the separator"},
		{"too many", "a,b\n1,2\n3,4,5\n", Options{}, "x.csv:3: 3 cells, expected 2", ""},
		{"ragged late", many + "3\n", Options{}, "x.csv:3002: 1 cells, expected 2", ""},
		{"text late", many + "3,n/a\n", Options{}, `x.csv:3002: column 2 "b": "n/a" is not a number`, `add "n/a" to read.missing`},
		{"text in numbers", "a,b\n1,2\n3,x\n5,6\n", Options{}, `x.csv:3: column 2 "b": "x" is not a number`, ""},
		{"infinite", "a,b\n1,2\n3,Inf\n", Options{}, `x.csv:3: column 2 "b": "Inf" is not a finite number`, ""},
		{"overflow", "a,b\n1,2\n1e999,4\n", Options{}, `x.csv:3: column 1 "a": "1e999" is not a finite number`, ""},
		{"hexadecimal", "a,b\n1,2\n0x10,4\n5,6\n", Options{}, `x.csv:3: column 1 "a": "0x10" is not a number`, ""},
		{"not missing", "a,b\n1,2\nNA,4\n5,6\n", Options{Missing: []string{"-"}}, `x.csv:3: column 1 "a": "NA" is not a number`, ""},
		{"duplicate names", "a,b,a\n1,2,3\n", Options{}, `x.csv:1: column 3 "a": has the same name as column 1`, ""},
		{"no header", "1,2\n3,4\n", Options{}, "x.csv:1: the header holds only numbers", "set read.header: false"},
		{"only text", "a,b\nx,y\nz,u\n", Options{}, "x.csv: holds no column of numbers", ""},
		{"decimal comma", "a;b\n1;2\n1,5;3\n2;3\n4;5\n5;6\n", Options{}, `x.csv:3: column 1 "a": "1,5" is not a number`, "read.decimal: comma"},
		{"NUL", "a,b\n1,2\n3,\x00\n", Options{}, "x.csv:3: holds a NUL byte, so it is not text", ""},
		{"after quote", "a,b\n1,2\n\"3\"x,4\n", Options{}, `x.csv:3: column 1 "a": text follows the closing quote of "3"`, ""},
		{"unknown time", "alpha,b\n1,2\n", Options{Time: "alhpa"}, `x.csv: has no column "alhpa"`, `the nearest column is "alpha"`},
		{"unknown left out", "alpha,b\n1,2\n", Options{LeaveOut: []string{"z*"}}, `x.csv: read.leave_out: no column matches "z*"`, "the columns are alpha, b"},
		{"utf-16 without rows", "\xff\xfea\x00,\x00", Options{}, "x.csv: has a header but no rows", ""},
		{"utf-16 cut in two", "\xff\xfea\x00\n\x001\x00\n\x002", Options{}, "x.csv:3: ends in the middle of a character of UTF-16", "the copy is incomplete"},
		{"half a utf-16 pair", "\xff\xfea\x00\n\x00\x00\xd8\n\x00", Options{}, "x.csv:2: holds half a character of UTF-16", "the file is damaged, or in another encoding: see read.encoding"},
		{"damaged gzip", "\x1f\x8b\x08\x00nonsense", Options{}, "x.csv: ", ""},
		{"format", "a\n1\n", Options{Format: "xls"}, `unknown format "xls"; known: csv, tsv, parquet, xlsx, sqlite, postgres`, ""},
	}
	for _, c := range cases {
		for _, pieces := range []int{1, 9, chunkBytes} {
			o := c.o
			path := writeFile(t, "x.csv", c.text)
			o.Dir, o.Files = filepath.Dir(path), []string{"x.csv"}
			_, err := collect(o, pieces, 2)
			var e *Error
			if !errors.As(err, &e) {
				t.Errorf("%s: %v", c.name, err)
				continue
			}
			text := strings.ReplaceAll(err.Error(), filepath.Dir(path)+string(filepath.Separator), "")
			exact := text == c.want || strings.HasSuffix(c.want, ": ") && strings.HasPrefix(text, c.want)
			if !exact || !strings.Contains(e.Hint, c.hint) {
				t.Errorf("%s: %s (hint: %s)\nwant %s (hint: %s)", c.name, text, e.Hint, c.want, c.hint)
			}
		}
	}
}

func TestPaths(t *testing.T) {
	dir := t.TempDir()
	for _, name := range []string{"b.csv", "a.csv", "c.txt"} {
		os.WriteFile(filepath.Join(dir, name), []byte("x,y\n1,2\n"), 0o666)
	}
	os.WriteFile(filepath.Join(dir, "other.tsv"), []byte("y\tz\n1\t2\n"), 0o666)
	for want, files := range map[string][]string{
		"no such file or directory":               {"none.csv"},
		"no file matches":                         {"z*.csv"},
		"is a folder":                             {"."},
		"is named twice, so its rows would count": {"*.csv", "a.csv"},
		`column 2 "z": is not a column of a.csv`:  {"a.csv", "other.tsv"},
		"is not a pattern for file names":         {"[.csv"},
		"no files named":                          nil,
	} {
		_, err := collect(Options{Dir: dir, Files: files}, chunkBytes, 1)
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v: %v, want %s", files, err, want)
		}
	}
	got, err := collect(Options{Dir: dir, Files: []string{"*.csv", "c.txt"}}, chunkBytes, 1)
	if err != nil || !slices.Equal(got.data, []float64{1, 2, 1, 2, 1, 2}) || !slices.Equal(got.rows, []int64{0, 1, 2}) {
		t.Errorf("%+v, %v", got, err)
	}
}

// Several files are one table; columns are matched by name, and errors name the right
// line of the right file.
func TestSeveralFiles(t *testing.T) {
	dir := t.TempDir()
	os.WriteFile(filepath.Join(dir, "1.csv"), []byte("a,b\n1,2\n3,4\n"), 0o666)
	os.WriteFile(filepath.Join(dir, "2.csv"), []byte("b,a\n6,5\n8,x\n"), 0o666)
	_, err := collect(Options{Dir: dir, Files: []string{"*.csv"}}, chunkBytes, 2)
	if err == nil || !strings.HasSuffix(err.Error(), `2.csv:3: column 2 "a": "x" is not a number`) {
		t.Errorf("%v", err)
	}
	got, err := collect(Options{Dir: dir, Files: []string{"*.csv"}, Missing: []string{"x"}}, chunkBytes, 2)
	if err != nil || !sameNumbers(got.data, []float64{1, 2, 3, 4, 5, 6, math.NaN(), 8}) {
		t.Errorf("%v %v", got, err)
	}
}
