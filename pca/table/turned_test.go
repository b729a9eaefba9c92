package table

import (
	"bufio"
	"errors"
	"io"
	"os"
	"strconv"
	"strings"
	"testing"

	"axisfold/testdata/published"
)

// words reads a published table of numbers between blanks the plain way.
func words(t *testing.T, name string) (rows [][]float64) {
	f, err := os.Open(published.Path(t, name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	lines := bufio.NewScanner(f)
	lines.Buffer(nil, 1<<20)
	for lines.Scan() {
		var row []float64
		for _, w := range strings.Fields(lines.Text()) {
			v, err := strconv.ParseFloat(w, 64)
			if err != nil {
				t.Fatal(err)
			}
			row = append(row, v)
		}
		rows = append(rows, row)
	}
	return rows
}

// Tennessee Eastman as published: the training set transposed, 52 lines of 500 numbers, the
// test set not, both with runs of blanks and no header; against strings.Fields and strconv.
func TestPublishedBlanks(t *testing.T) {
	for _, x := range []struct {
		name   string
		turned bool
	}{{"d00.dat", true}, {"d00_te.dat", false}, {"d13_te.dat", false}} {
		name := "reference/tep/" + x.name
		rows := words(t, name)
		for _, pieces := range []int{1000, chunkBytes} {
			got, err := collect(Options{Files: []string{published.Path(t, name)}, NoHeader: true, ChannelsInRows: x.turned}, pieces, 2)
			if err != nil {
				t.Fatal(err)
			}
			width := len(got.columns)
			if width != 52 || len(got.data) != 52*max(len(rows), len(rows[0])) && x.turned || !x.turned && len(got.rows) != 960 {
				t.Fatalf("%s: %d channels, %d rows", name, width, len(got.rows))
			}
			for i, v := range got.data {
				r, c := i/width, i%width
				if x.turned {
					r, c = c, r
				}
				if rows[r][c] != v {
					t.Fatalf("%s: row %d, column %d: %v, expected %v", name, r, c, v, rows[r][c])
				}
			}
		}
	}
}

// Lines of channels with labels, units, quotes and gaps read as the table turned round.
func TestTurned(t *testing.T) {
	text := "# made up\nstamp;;t1;t2;t3\n\n\"flow; main\";m3/h;1,5;;-999\r\n\"pres\nsure\";bar;3;4;\"5\"\n"
	o := Options{DecimalComma: true, Comment: "#", Missing: []string{"", "-999"}, UnitsRow: true, Time: "stamp", ChannelsInRows: true}
	o.Files = []string{writeFile(t, "x.csv", text)}
	got, err := collect(o, 3, 2)
	if err != nil {
		t.Fatal(err)
	}
	nan := got.data[2]
	if len(got.columns) != 2 || got.columns[0].Name != "flow; main" || got.columns[1].Unit != "bar" || nan == nan ||
		!sameNumbers(got.data, []float64{1.5, 3, nan, 4, nan, 5}) || strings.Join(got.times, " ") != "t1 t2 t3" {
		t.Error(got)
	}
	for _, x := range []struct{ text, want string }{
		{"a,1,2,3\nb,1,x,2\nc,3,4,5\n", `x.csv: channel 2 "b": cell 3: "x" is not a number`},
		{"a,1,2,3\nb,1,2\nc,3,4,5\n", "x.csv:2: 3 cells, expected 4 as in the first line"},
		{"a,1,2,3\n\nb,1,2,3,4,5\n", "x.csv:3: 6 cells, expected 4 as in the first line"},
		{"a,\"1,2,3\nb,1,2\n", "x.csv:1: a quote is never closed"},
		{"a\nb\n", "x.csv: has a header but no rows"},
		{"", "x.csv: is empty"},
	} {
		_, err := collect(Options{Files: []string{writeFile(t, "x.csv", x.text)}, ChannelsInRows: true}, chunkBytes, 2)
		var e *Error
		if !errors.As(err, &e) || !strings.HasSuffix(err.Error(), x.want) {
			t.Errorf("%q: %v", x.text, err)
		}
	}
}

// Runs of blanks and tabs part cells; quotes hold blanks together.
func TestBlanks(t *testing.T) {
	text := "  a   \"b c\"\td  \r\n\n 1 2.5   \"north \"\"x\"\" hall\"\n\t-3  +4e1  \"\"   \n"
	for _, step := range []int{1, 7, 1000} {
		out, err := io.ReadAll(&refilled{fill: (&blankReader{r: &slowly{strings.NewReader(text), step}, start: true}).fill})
		if want := "a\t\"b c\"\td\n\n1\t2.5\t\"north \"\"x\"\" hall\"\n-3\t+4e1\t\"\"\n"; err != nil || string(out) != want {
			t.Errorf("%q, %v", out, err)
		}
	}
	got, err := collect(Options{Files: []string{writeFile(t, "x.dat", text)}, Groups: "d", Separator: " "}, 3, 2)
	if err != nil || got.columns[1].Name != "b c" || !sameNumbers(got.data, []float64{1, 2.5, -3, 40}) || got.groups[0] != `north "x" hall` {
		t.Error(got, err)
	}
	// Words in the name of one column are no columns.
	got, err = collect(Options{Files: []string{writeFile(t, "x.dat", "flow rate\n1\n2\n")}}, 3, 2)
	if err != nil || len(got.columns) != 1 || got.columns[0].Name != "flow rate" {
		t.Error(got, err)
	}
}

// slowly reads a few bytes at a time.
type slowly struct {
	r    io.Reader
	step int
}

func (s *slowly) Read(p []byte) (int, error) { return s.r.Read(p[:min(len(p), s.step)]) }
