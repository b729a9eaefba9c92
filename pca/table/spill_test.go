package table

import (
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// seen is what a pass over rows shows, one line per row.
func seen(t *testing.T, rows Rows, threads int, keep func(b *Block)) []string {
	t.Helper()
	var out []string
	err := rows.Each(context.Background(), threads, func(_ int, b *Block) error {
		keep(b)
		return nil
	}, func(b *Block) error {
		for i := range b.Rows {
			line := fmt.Sprintf("%d %d %d %s %s", b.Index, b.Row+int64(b.Offset[i]), b.Count, b.Time(i), b.Group(i))
			for _, v := range b.Data[i*b.Width : (i+1)*b.Width] {
				line += fmt.Sprintf(" %x", math.Float64bits(v))
			}
			out = append(out, line)
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// A spill gives back the blocks that went in, bit for bit, gaps, times and groups too, as
// often as asked and on any number of threads; its file has no name and is bounded.
func TestSpill(t *testing.T) {
	dir := t.TempDir()
	var b strings.Builder
	b.WriteString("t,a,g,b\n")
	for i := range 5000 {
		fmt.Fprintf(&b, "\"%d, o'clock\",%g,g%d,%d\n", i, math.Sqrt(float64(i)), i%7, -i)
		if i%50 == 0 {
			b.WriteString("late,,,7\n")
		}
	}
	if err := os.WriteFile(filepath.Join(dir, "x.csv"), []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	open := func() *Table {
		table, err := openWith(context.Background(), Options{Dir: dir, Files: []string{"x.csv"}, Missing: []string{""}, Time: "t", Groups: "g"}, openFile, 4000)
		if err != nil {
			t.Fatal(err)
		}
		return table
	}
	halve := func(b *Block) { // only every other row is of use
		var rows []int32
		for i := range b.Rows {
			if b.Offset[i]%2 == 0 {
				rows = append(rows, int32(i))
			}
		}
		b.Keep(rows)
	}
	table := open()
	want := seen(t, table, 2, halve)
	s, err := NewSpill(table.Columns(), filepath.Join(dir, "spill"), 1<<20)
	if err != nil {
		t.Fatal(err)
	}
	fill := func(s *Spill) error {
		return open().Each(context.Background(), 2, func(_ int, b *Block) error { halve(b); return nil }, s.Append)
	}
	if err := fill(s); err != nil {
		t.Fatal(err)
	}
	if err := s.Finish(); err != nil {
		t.Fatal(err)
	}
	for threads := 1; threads < 4; threads++ {
		if got := seen(t, s, threads, func(*Block) {}); !slices.Equal(got, want) {
			t.Fatalf("%d threads: %d rows differ from the %d of the table", threads, len(got), len(want))
		}
	}
	if err := s.Close(); err != nil {
		t.Error(err)
	}
	if _, err := os.Stat(filepath.Join(dir, "spill")); err == nil {
		t.Error("the file is still there")
	}
	small, err := NewSpill(table.Columns(), filepath.Join(dir, "small"), 20000)
	if err != nil {
		t.Fatal(err)
	}
	defer small.Close()
	if err := fill(small); err != ErrSpillFull {
		t.Errorf("20 kB hold 5000 rows: %v", err)
	}
}

// Reading again costs more than reading bytes for all but plain text.
func TestCostly(t *testing.T) {
	text := "a,b\n1,2\n"
	for name, content := range map[string][]byte{"x.csv": []byte(text), "x.csv.gz": gzipped(t, text), "x.csv.zst": zstandard(t, text)} {
		path := filepath.Join(t.TempDir(), name)
		if err := os.WriteFile(path, content, 0o666); err != nil {
			t.Fatal(err)
		}
		table, err := Open(context.Background(), Options{Files: []string{path}})
		if err != nil {
			t.Fatal(err)
		}
		if want := name != "x.csv"; table.Costly() != want {
			t.Errorf("%s: costly %v", name, !want)
		}
	}
}
