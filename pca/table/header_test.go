package table

import (
	"math"
	"strings"
	"testing"
)

// Headers of every kind, with the names and the numbers that a reader of the text would
// write down.
func TestHeaders(t *testing.T) {
	nan := math.NaN()
	for _, x := range []struct {
		name, text string
		o          Options
		columns    string
		data       []float64
		note       string
	}{
		{"one name short", "a,b\nx,1,2\ny,3,4\n", Options{}, "a b", []float64{1, 2, 3, 4}, "left out: labels of rows, as the header names one column fewer"},
		{"one name short, labels are numbers", "a b\n1 7 2\n2 3 4\n", Options{}, "a b", []float64{7, 2, 3, 4}, "left out: labels of rows, as the header names one column fewer"},
		{"separators at the ends", "a,b\n1,2,\n3,4,\n", Options{}, "a b", []float64{1, 2, 3, 4}, "left out: no name and no values"},
		{"double", "flow,,bar,\nin,out,p,\n1,2,3,4\n5,6,7,8\n", Options{Header: "double"}, "flow in|flow out|bar p|column_4", []float64{1, 2, 3, 4, 5, 6, 7, 8}, ""},
		{"double and units", "flow,\nin,out\nl,m\n1,2\n", Options{Header: "double", UnitsRow: true}, "flow in|flow out", []float64{1, 2}, ""},
		{"none, found", "x,1,2\ny,3,4\n", Options{Header: "auto"}, "column_2 column_3", []float64{1, 2, 3, 4}, "the first row holds numbers where the others do, so it was read as data; read.header says otherwise"},
		{"names, found", "l,1a,2\ny,3,4\n", Options{Header: "auto"}, "1a 2", []float64{3, 4}, ""},
		{"a gap in the first row", "x,NA,2\ny,3,4\n", Options{Header: "auto"}, "column_2 column_3", []float64{nan, 2, 3, 4}, ""},
		{"years", "place,2019,2020,2021\nA,3,1,2\n", Options{Header: "auto"}, "2019 2020 2021", []float64{3, 1, 2}, ""},
		{"wavelengths", "850,852,854,856,858,860,862,864\n1,7,2,5,3,8,1,9\n", Options{Header: "auto"}, "850 852 854 856 858 860 862 864", []float64{1, 7, 2, 5, 3, 8, 1, 9}, ""},
		{"rows that end early", "a,b,c\n1,2,3\n4\n5,6\n", Options{ShortRows: true}, "a b c", []float64{1, 2, 3, 4, nan, nan, 5, 6, nan}, "rows that end before the last column: 2; what they lack is missing"},
	} {
		for _, pieces := range []int{1, chunkBytes} {
			x.o.Files = []string{writeFile(t, "x.csv", x.text)}
			got, err := collect(x.o, pieces, 2)
			if err != nil {
				t.Errorf("%s: %v", x.name, err)
				continue
			}
			var names []string
			for _, c := range got.columns {
				names = append(names, c.Name)
			}
			joint := " "
			if strings.Contains(x.columns, "|") {
				joint = "|"
			}
			if strings.Join(names, joint) != x.columns || !sameNumbers(got.data, x.data) || x.note != "" && !hasNote(got.notes, x.note) {
				t.Errorf("%s: %q, %v, %v", x.name, names, got.data, got.notes)
			}
		}
	}
	_, err := collect(Options{Files: []string{writeFile(t, "x.csv", "a,b,c\n1,2,3\n4\n")}}, 3, 1)
	if err == nil || !strings.HasSuffix(err.Error(), "x.csv:3: 1 cells, expected 3") {
		t.Errorf("a row that ends early: %v", err)
	}
}
