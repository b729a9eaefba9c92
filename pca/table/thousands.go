package table

import (
	"bytes"
	"fmt"
	"slices"
	"strings"
)

// thousandsMarks are the marks that stand between groups of three digits. Blanks and
// apostrophes have typographic forms too.
var thousandsMarks = map[string][]string{
	"comma":      {","},
	"point":      {"."},
	"space":      {" ", "\u00a0", "\u2009", "\u202f"},
	"apostrophe": {"'", "\u2019"},
}

// checkThousands refuses marks that another setting uses for something else.
func checkThousands(o *Options) error {
	point := "point"
	if o.DecimalComma {
		point = "comma"
	}
	switch {
	case o.Thousands == "":
		return nil
	case thousandsMarks[o.Thousands] == nil:
		return &Error{Kind: WrongInput, Problem: fmt.Sprintf("unknown thousands mark %q; known: comma, point, space, apostrophe", o.Thousands)}
	case o.Thousands == point:
		return &Error{Kind: WrongInput, Problem: fmt.Sprintf("the decimal sign and the thousands mark are both the %s", point), Hint: "set read.decimal too"}
	case o.Thousands == "space" && o.Separator == " ":
		return &Error{Kind: WrongInput, Problem: "blanks cannot stand both between cells and between thousands"}
	}
	return nil
}

// ungrouped appends the cell without its thousands marks, where those stand between one to
// three digits and full groups of three, before the decimal sign.
func (d *dialect) ungrouped(to, cell []byte) (plain []byte, ok bool) {
	digits, marks := 0, 0
	first := ""
	for i := 0; i < len(cell); {
		c := cell[i]
		mark := ""
		for _, m := range d.thousands {
			if strings.HasPrefix(string(cell[i:min(len(cell), i+len(m))]), m) {
				mark = m
			}
		}
		switch {
		case mark != "":
			if digits == 0 || digits > 3 || marks > 0 && (digits != 3 || mark != first) {
				return nil, false
			}
			first = mark
			marks++
			digits = 0
			i += len(mark)
			continue
		case c >= '0' && c <= '9':
			digits++
		case (c == '-' || c == '+') && i == 0:
		default:
			if marks == 0 || digits != 3 {
				return nil, false
			}
			return append(to, cell[i:]...), true
		}
		to = append(to, c)
		i++
	}
	return to, marks > 0 && digits == 3
}

// fortranExponent tells whether the D at text[i] is the exponent of a double in Fortran: after
// a mantissa with a point, or before a sign. 12D3 may be a label.
func fortranExponent(text []byte, i int) bool {
	before, after := text[:i], text[i+1:]
	signed := len(after) > 0 && (after[0] == '+' || after[0] == '-')
	return i > 0 && len(after) > 0 && (signed || bytes.ContainsAny(before, ".,")) && !bytes.ContainsAny(before, "eEdD")
}

// numberHint says what would make a number of a cell that is none.
func (d *dialect) numberHint(cell []byte) string {
	if d.point == '.' && looksDecimalComma(cell) {
		hint := "set read.decimal: comma if the table writes decimals with a comma"
		if d.thousands == nil && grouped(cell, d.point) == "comma" {
			hint += ", read.thousands: comma if it groups thousands with it"
		}
		return hint
	}
	if d.thousands == nil {
		if mark := grouped(cell, d.point); mark != "" {
			return "set read.thousands: " + mark + " if the table groups thousands so"
		}
	}
	rest := bytes.Trim(cell, "%$€£¥ \u00a0")
	if _, ok := parseNumber(rest, d.point); ok && len(rest) < len(cell) {
		return "per cent and currency signs make it text: take them off, or name the column in read.leave_out"
	}
	return ""
}

// grouped is the name of the mark that would make a cell a number, empty for none.
func grouped(cell []byte, point byte) string {
	for _, name := range []string{"comma", "point", "space", "apostrophe"} {
		if marks := thousandsMarks[name]; !slices.Contains(marks, string(point)) {
			d := dialect{point: point, thousands: marks}
			if _, ok := d.value(cell); ok {
				return name
			}
		}
	}
	return ""
}
