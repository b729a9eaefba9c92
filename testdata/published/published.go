// Package published reads the reference tables beside it for tests, and counts the
// digits in which a result agrees with a published one. See ../reference/PROVENANCE.md
// for the source of every table.
package published

import (
	"bufio"
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// Path returns the path of a file under testdata, found from any package's test.
func Path(t testing.TB, name string) string {
	t.Helper()
	dir, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	for {
		if _, err := os.Stat(filepath.Join(dir, "go.mod")); err == nil {
			return filepath.Join(dir, "testdata", filepath.FromSlash(name))
		}
		parent := filepath.Dir(dir)
		if parent == dir {
			t.Fatal("no go.mod above the test")
		}
		dir = parent
	}
}

// Table is a numeric table, Rows×len(Names) row-major.
type Table struct {
	Names []string
	Rows  int
	Data  []float64
}

// CSV reads the columns of a comma-separated table that hold numbers in every row.
func CSV(t testing.TB, name string) Table {
	t.Helper()
	f, err := os.Open(Path(t, name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	records, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	head, body := records[0], records[1:]
	var table Table
	table.Rows = len(body)
	var columns []int
	for j, n := range head {
		numeric := true
		for _, r := range body {
			if _, err := strconv.ParseFloat(r[j], 64); err != nil {
				numeric = false
				break
			}
		}
		if numeric {
			columns = append(columns, j)
			table.Names = append(table.Names, n)
		}
	}
	for _, r := range body {
		for _, j := range columns {
			v, _ := strconv.ParseFloat(r[j], 64)
			table.Data = append(table.Data, v)
		}
	}
	return table
}

// Columns returns the named columns as a table of their own.
func (t Table) Columns(names ...string) Table {
	out := Table{Names: names, Rows: t.Rows}
	p := len(t.Names)
	for r := range t.Rows {
		for _, n := range names {
			for j, have := range t.Names {
				if have == n {
					out.Data = append(out.Data, t.Data[r*p+j])
				}
			}
		}
	}
	return out
}

// Digits is the number of decimal digits in which got agrees with want:
// -log10 of the relative error (absolute where want is 0), at most 15.
func Digits(got, want float64) float64 {
	if got == want {
		return 15
	}
	e := math.Abs(got - want)
	if want != 0 {
		e /= math.Abs(want)
	}
	if math.IsNaN(e) {
		return 0
	}
	return math.Max(0, math.Min(15, -math.Log10(e)))
}

// Lines returns the lines of a file.
func Lines(t testing.TB, name string) []string {
	t.Helper()
	f, err := os.Open(Path(t, name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var lines []string
	scanner := bufio.NewScanner(f)
	for scanner.Scan() {
		lines = append(lines, strings.TrimRight(scanner.Text(), "\r"))
	}
	if err := scanner.Err(); err != nil {
		t.Fatal(err)
	}
	return lines
}
