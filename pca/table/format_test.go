package table

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/parquet-go/parquet-go"
)

// The format comes from the first bytes, whatever the name says; else from the name.
func TestFormatOfFiles(t *testing.T) {
	type row struct{ A, B float64 }
	dir := t.TempDir()
	path := filepath.Join(dir, "x.csv")
	if err := parquet.WriteFile(path, []row{{1, 2}, {3, 4}}); err != nil {
		t.Fatal(err)
	}
	for name, from := range map[string]string{"y.txt": database(t, "create table x (a real, b real)", "insert into x values (1, 2), (3, 4)"),
		"z.dat": book(t, rowsOf("Sheet1", []any{"a", "b"}, []any{1, 2}, []any{3, 4})), "x.csv": path, "v.TSV": writeFile(t, "v", "a\tb\n1\t2\n3\t4\n")} {
		content, err := os.ReadFile(from)
		if err != nil {
			t.Fatal(err)
		}
		got, err := collect(Options{Files: []string{writeFile(t, name, string(content))}}, chunkBytes, 2)
		if err != nil || !sameNumbers(got.data, []float64{1, 2, 3, 4}) {
			t.Errorf("%s: %v", name, err)
		}
	}
	// Files of several formats are one table when their columns are the same.
	text := filepath.Join(dir, "y.csv")
	if err := os.WriteFile(text, []byte("B,A\n6,5\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	got, err := collect(Options{Files: []string{path, text}}, chunkBytes, 2)
	if err != nil || !sameNumbers(got.data, []float64{1, 2, 3, 4, 5, 6}) {
		t.Errorf("%v %v", got, err)
	}
}

// Settings that mean nothing to a format are refused: nobody is to believe they did.
func TestSettingsOfFormats(t *testing.T) {
	text := writeFile(t, "x.csv", "a,b\n1,2\n")
	db := database(t, "create table x (a real)", "insert into x values (1)")
	sheet := book(t, rowsOf("Sheet1", []any{"a", "b"}, []any{1, 2}))
	for _, c := range []struct {
		o    Options
		want string
	}{
		{Options{Files: []string{text}, Query: "select 1"}, "read.query means nothing to the format csv"},
		{Options{Files: []string{text}, Sheet: "S"}, "read.sheet means nothing to the format csv"},
		{Options{Files: []string{db}, NoHeader: true}, "read.header means nothing to the format sqlite"},
		{Options{Files: []string{db}, UnitsRow: true}, "read.units_row means nothing to the format sqlite"},
		{Options{Files: []string{sheet}, Separator: ";"}, "read.separator means nothing to the format xlsx"},
		{Options{Files: []string{sheet}, Query: "select 1"}, "read.query means nothing to the format xlsx"},
		{Options{Format: "postgres", Query: "select 1", Comment: "#"}, "read.comment means nothing to the format postgres"},
	} {
		_, err := collect(c.o, chunkBytes, 1)
		if err == nil || !strings.HasSuffix(err.Error(), c.want) {
			t.Errorf("%v, want %s", err, c.want)
		}
	}
}
