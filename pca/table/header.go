package table

import (
	"fmt"
	"math"
	"slices"
)

// Forms of a header beside one row of names.
const (
	autoHeader   = "auto"
	doubleHeader = "double"
)

// nameRows takes the names from the first rows of a text. The reader stands after them then.
func (h *head) nameRows(o *Options, rows *rowReader) error {
	start := *rows
	first, line, _ := rows.next()
	none := o.NoHeader
	if o.Header == autoHeader && !none {
		ahead := *rows
		second, _, _ := ahead.next()
		h.looked = true
		if none = h.isData(first, second); none {
			h.notes = append(h.notes, Note{Text: "the first row holds numbers where the others do, so it was read as data; read.header says otherwise"})
		}
	}
	if none {
		*rows = start
		for j := range first {
			h.names = append(h.names, fmt.Sprintf("column_%d", j+1))
		}
		h.unnamed = make([]bool, len(first))
		return nil
	}
	h.rows = 1
	if o.Header == doubleHeader {
		second, at, ok := rows.next()
		if !ok || len(second) != len(first) {
			return &Error{Kind: BadContent, File: h.file, Line: at, Problem: fmt.Sprintf("the second row of the header has %d cells, expected %d", len(second), len(first))}
		}
		first = joined(first, second)
		h.rows = 2
	}
	first = h.completed(first, *rows)
	h.unnamed = make([]bool, len(first))
	return h.header(first, line)
}

// isData tells whether the first row is one of data: wherever the second holds a number, it
// does too. Evenly spaced names, such as wavelengths and years, are a header all the same.
func (h *head) isData(first, second []string) bool {
	if len(first) != len(second) {
		return false
	}
	var values []float64
	for j, c := range second {
		if _, ok := parseNumber([]byte(c), h.dialect.point); !ok {
			continue
		}
		v, ok := h.dialect.value([]byte(first[j]))
		if !ok {
			return false
		}
		if !math.IsNaN(v) {
			values = append(values, v)
		}
	}
	return len(values) > 0 && !evenlySpaced(values)
}

// evenlySpaced tells names that are numbers from data: many at even distances, or years.
func evenlySpaced(values []float64) bool {
	if len(values) < 2 {
		return false
	}
	step := values[1] - values[0]
	years := step == 1
	for i, v := range values {
		years = years && v >= 1800 && v <= 2200 && v == math.Trunc(v)
		if i > 0 && !(math.Abs(v-values[i-1]-step) <= 1e-6*math.Abs(step)) || step == 0 {
			return false
		}
	}
	return years || len(values) >= 8
}

// joined makes one name of two; a name above an empty cell goes on to the right.
func joined(above, below []string) []string {
	out := make([]string, len(above))
	over := ""
	for j := range above {
		if above[j] != "" {
			over = above[j]
		}
		switch {
		case over == "" || below[j] == "" && above[j] == "":
			out[j] = below[j]
		case below[j] == "":
			out[j] = over
		default:
			out[j] = over + " " + below[j]
		}
	}
	return out
}

// completed gives a header that is one name short of every row after it the name that it
// lacks: that of labels of rows, which some programs leave out, or of an empty last column.
func (h *head) completed(names []string, rows rowReader) []string {
	count, empty := 0, true
	for ; count < 20; count++ {
		cells, _, ok := rows.next()
		if !ok || rows.open {
			break
		}
		if len(cells) != len(names)+1 {
			return names
		}
		empty = empty && cells[len(names)] == ""
	}
	switch {
	case count == 0:
		return names
	case empty:
		return append(names, "")
	}
	h.labels = true
	return slices.Insert(names, 0, "")
}
