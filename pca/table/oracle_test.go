package table

import (
	"encoding/csv"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// plainRead is the plain way to read a table: encoding/csv splits rows, strconv reads
// numbers. It is the specification of what Each gives for tables without stray quotes.
func plainRead(text string, separator rune, comma bool, missing []string) (data []float64, lines []int, err error) {
	r := csv.NewReader(strings.NewReader(strings.TrimPrefix(text, "\ufeff")))
	r.Comma = separator
	r.FieldsPerRecord = 0
	if _, err := r.Read(); err != nil {
		return nil, nil, err
	}
	for {
		cells, err := r.Read()
		if cells == nil {
			break
		}
		if err != nil {
			return nil, nil, err
		}
		line, _ := r.FieldPos(0)
		row, empty := make([]float64, len(cells)), true
		for j, cell := range cells {
			cell = strings.Trim(cell, " \t")
			empty = empty && cell == ""
			if row[j], err = plainNumber(cell, comma, missing); err != nil {
				return nil, nil, fmt.Errorf("line %d: %w", line, err)
			}
		}
		if !empty {
			data, lines = append(data, row...), append(lines, line)
		}
	}
	return data, lines, nil
}

func plainNumber(cell string, comma bool, missing []string) (float64, error) {
	for _, m := range missing {
		if cell == m {
			return math.NaN(), nil
		}
	}
	if comma {
		if strings.Contains(cell, ".") {
			return 0, fmt.Errorf("%q", cell)
		}
		cell = strings.Replace(cell, ",", ".", 1)
	}
	if strings.Trim(cell, "+-.0123456789eE") != "" {
		return 0, fmt.Errorf("%q", cell)
	}
	v, err := strconv.ParseFloat(cell, 64)
	if err != nil {
		return 0, err
	}
	for _, m := range missing {
		if code, err := strconv.ParseFloat(m, 64); err == nil && code == v {
			return math.NaN(), nil
		}
	}
	return v, nil
}

// randomTable writes numbers every way they are written.
func randomTable(rng *rand.Rand, separator string, comma, quotes bool, ends string) string {
	width := 1 + rng.IntN(5)
	var b strings.Builder
	if rng.IntN(3) == 0 {
		b.WriteString("\ufeff")
	}
	for j := range width {
		if j > 0 {
			b.WriteString(separator)
		}
		name := "c" + strconv.Itoa(j)
		if quotes && rng.IntN(3) == 0 {
			name = `"` + name + ` ""x""` + ends + `more"` // a quoted line end in the header
		}
		b.WriteString(name)
	}
	b.WriteString(ends)
	rows := 1 + rng.IntN(30)
	for i := range rows {
		if rng.IntN(9) == 0 {
			b.WriteString(ends)
		}
		empty := i > 0 && width > 1 && rng.IntN(12) == 0
		for j := range width {
			if j > 0 {
				b.WriteString(separator)
			}
			if empty {
				continue
			}
			v := rng.NormFloat64() * math.Pow(10, float64(rng.IntN(40)-20))
			text := strconv.FormatFloat(v, "feg"[rng.IntN(3)], rng.IntN(20)-1, 64)
			switch rng.IntN(16) {
			case 0:
				text = []string{"NA", "-999", "-999.0", "-9.99e2", "-999.00"}[rng.IntN(5)]
			case 1:
				text = "+" + strings.TrimPrefix(text, "-")
			case 2:
				text = []string{"0", "-0", ".5", "5.", "-.5e1", "00012.50", "9007199254740993", "1e22", "1e23"}[rng.IntN(9)]
			case 3:
				text = strconv.FormatUint(rng.Uint64(), 10) + strconv.Itoa(rng.IntN(1000))
			}
			if comma {
				text = strings.Replace(text, ".", ",", 1)
			}
			if rng.IntN(8) == 0 {
				text += strings.Repeat(" ", 1+rng.IntN(3))
			}
			if quotes && rng.IntN(4) == 0 {
				text = `"` + []string{"", " "}[rng.IntN(2)] + text + `"`
			} else if rng.IntN(8) == 0 {
				text = " " + text
			}
			b.WriteString(text)
		}
		if i < rows-1 || rng.IntN(2) == 0 {
			b.WriteString(ends)
		}
	}
	return b.String()
}

// Each agrees with the plain way bit for bit, and on the line of every row, whatever the
// size of the pieces and the number of threads.
func TestOracle(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	missing := []string{"", "NA", "-999"}
	path := filepath.Join(t.TempDir(), "x.csv")
	for n := range 300 {
		separator := []string{",", ";", "\t", "|"}[rng.IntN(4)]
		comma := separator != "," && rng.IntN(2) == 0
		ends := []string{"\n", "\r\n"}[rng.IntN(2)]
		text := randomTable(rng, separator, comma, n%2 == 0, ends)
		want, lines, err := plainRead(text, rune(separator[0]), comma, missing)
		if err != nil {
			t.Fatalf("plain way: %v\n%q", err, text)
		}
		if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
		o := Options{Files: []string{path}, Separator: separator, DecimalComma: comma, Missing: missing}
		for _, pieces := range []int{1, 2, 3, 5, 8, 13, 64, 999, chunkBytes} {
			got, err := collect(o, pieces, 1+rng.IntN(8))
			if len(want) == 0 {
				continue
			}
			if err != nil {
				t.Fatalf("pieces=%d: %v\n%q", pieces, err, text)
			}
			if len(got.data) != len(want) {
				t.Fatalf("pieces=%d: %d numbers, plain way %d\n%q", pieces, len(got.data), len(want), text)
			}
			for i := range want {
				if math.Float64bits(got.data[i]) != math.Float64bits(want[i]) && !(math.IsNaN(got.data[i]) && math.IsNaN(want[i])) {
					t.Fatalf("pieces=%d: number %d is %v, plain way %v\n%q", pieces, i, got.data[i], want[i], text)
				}
			}
			checkLines(t, o, pieces, lines, text)
		}
	}
}

// checkLines lets work find fault with one row and compares the line of the error.
func checkLines(t *testing.T, o Options, pieces int, lines []int, text string) {
	t.Helper()
	tab, err := openWith(t.Context(), o, openFile, pieces)
	if err != nil {
		t.Fatal(err)
	}
	n := len(lines) / 2
	err = tab.Each(t.Context(), 2, func(int, *Block) error { return nil }, func(b *Block) error {
		if i := n - int(b.Row); i >= 0 && i < b.Rows {
			return b.Problem(i, 0, "is at fault", "")
		}
		return nil
	})
	e, ok := err.(*Error)
	if !ok || e.Line != lines[n] {
		t.Fatalf("pieces=%d: row %d: %v; plain way line %d\n%q", pieces, n, err, lines[n], text)
	}
}

// A quote within an unquoted cell is text and swallows no line end.
func TestStrayQuotes(t *testing.T) {
	text := "size,a\n5\" pipe,1\n 6\" \"x\",2\nplain,3\n\"q\",4\n"
	for pieces := 1; pieces <= len(text)+1; pieces++ {
		got, err := collect(Options{Files: []string{writeFile(t, "x.csv", text)}, Groups: "size"}, pieces, 2)
		if err != nil || !sameNumbers(got.data, []float64{1, 2, 3, 4}) || fmt.Sprintf("%q", got.groups) != `["5\" pipe" "6\" \"x\"" "plain" "q"]` {
			t.Fatalf("pieces=%d: %v %q %v", pieces, got.data, got.groups, err)
		}
	}
}
