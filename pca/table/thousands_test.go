package table

import (
	"errors"
	"math"
	"strconv"
	"strings"
	"testing"
)

// Numbers with marks between thousands read as strconv reads them without; what is not
// grouped in threes is an error, whatever it would be without the marks.
func TestThousands(t *testing.T) {
	for _, x := range []struct {
		mark, name string
		comma      bool
	}{{",", "comma", false}, {".", "point", true}, {" ", "space", true}, {"\u202f", "space", false}, {"'", "apostrophe", false}, {"’", "apostrophe", false}} {
		point := "."
		if x.comma {
			point = ","
		}
		d := newDialect(&Options{Thousands: x.name, DecimalComma: x.comma, Missing: []string{"-1234"}}, ';')
		for _, plain := range []string{"1|234", "-12|345.678", "+123|456|789.5e-3", "0|001", "999", "1234567.25", "1|000|000|000|000|000|001"} {
			want, err := strconv.ParseFloat(strings.ReplaceAll(plain, "|", ""), 64)
			if err != nil {
				t.Fatal(err)
			}
			text := strings.ReplaceAll(strings.ReplaceAll(plain, ".", point), "|", x.mark)
			if v, ok := d.value([]byte(text)); !ok || v != want {
				t.Errorf("%q: %v, expected %v", text, v, want)
			}
		}
		if v, ok := d.value([]byte("-1" + x.mark + "234")); !ok || !math.IsNaN(v) {
			t.Errorf("missing code: %v", v)
		}
		for _, bad := range []string{"1|23", "1234|567", "|123", "1|234|", "1||234", "1|2345", "12|34.5", "1.234|567", "1|234e1|000", "-|123"} {
			text := strings.ReplaceAll(strings.ReplaceAll(bad, ".", point), "|", x.mark)
			if x.mark == " " && strings.Trim(bad, "|") != bad {
				continue // blanks at the ends of a cell mean nothing
			}
			if v, ok := d.value([]byte(text)); ok {
				t.Errorf("%q is no number but was read as %v", text, v)
			}
		}
	}
}

// Exponents of doubles as Fortran writes them (ISO/IEC 1539-1, D edit descriptor).
func TestFortranExponents(t *testing.T) {
	for text, want := range map[string]float64{"1.5D+03": 1500, "-0.25d-2": -0.0025, "1D+2": 100, ".5D1": 5, "12D-1": 1.2} {
		if v, ok := parseNumber([]byte(text), '.'); !ok || v != want {
			t.Errorf("%q: %v", text, v)
		}
		comma := strings.Replace(text, ".", ",", 1)
		if v, ok := parseNumber([]byte(comma), ','); !ok || v != want {
			t.Errorf("%q: %v", comma, v)
		}
	}
	for _, text := range []string{"12D3", "D1", "1.5D", "1.5D+", "1.0D1D1", "1.0E1D+1", "1.0D+1E1", "0x1.8D+1"} {
		if v, ok := parseNumber([]byte(text), '.'); ok {
			t.Errorf("%q is no number but was read as %v", text, v)
		}
	}
	cell := []byte("1.5D+03")
	if parseNumber(cell, '.'); string(cell) != "1.5D+03" {
		t.Errorf("the text became %q", cell)
	}
}

// Cells that a setting would read, or that none does, say so.
func TestNumberHints(t *testing.T) {
	for cell, want := range map[string]string{
		"1'234.5":   "set read.thousands: apostrophe if the table groups thousands so",
		"1,234,567": "set read.thousands: comma if the table groups thousands so",
		"1,234":     "set read.decimal: comma if the table writes decimals with a comma, read.thousands: comma if it groups thousands with it",
		"12%":       "per cent and currency signs make it text: take them off, or name the column in read.leave_out",
		"€ 5":       "per cent and currency signs make it text: take them off, or name the column in read.leave_out",
	} {
		_, err := collect(Options{Files: []string{writeFile(t, "x.csv", "a;b\n1;2\n2;3\n4;"+cell+"\n")}}, 3, 1)
		var e *Error
		if !errors.As(err, &e) || e.Line != 4 || e.Column != 2 || e.Hint != want {
			t.Errorf("%q: %v (hint: %v)", cell, err, e)
		}
	}
	for _, o := range []Options{{Thousands: "comma", DecimalComma: true}, {Thousands: "point"}, {Thousands: "space", Separator: " "}, {Thousands: "dot"}} {
		if _, err := collect(o, 3, 1); err == nil || !strings.Contains(err.Error(), "thousands") {
			t.Errorf("%v: %v", o, err)
		}
	}
	got, err := collect(Options{Files: []string{writeFile(t, "x.csv", "a,b\n\" 1,234.5 \",\"2\"\n")}, Thousands: "comma"}, 3, 1)
	if err != nil || !sameNumbers(got.data, []float64{1234.5, 2}) {
		t.Error(got, err)
	}
}
