package table

import (
	"bytes"
	"compress/gzip"
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync/atomic"
	"testing"
	"time"

	"github.com/klauspost/compress/zstd"
)

var errBroken = errors.New("the disk is gone")

// failing is a reader whose nth read fails; the others give a few bytes each.
type failing struct {
	r    io.Reader
	left *int
	size int
}

func (f *failing) Read(p []byte) (int, error) {
	if *f.left--; *f.left == 0 {
		return 0, errBroken
	}
	return f.r.Read(p[:min(len(p), f.size)])
}

func (f *failing) Close() error { return nil }

func someRows(n int) string {
	var b strings.Builder
	b.WriteString("a,b,c\n")
	for i := range n {
		fmt.Fprintf(&b, "%d,%g,%d\n", i, float64(i)/7, -i)
	}
	return b.String()
}

func gzipped(t testing.TB, text string) []byte {
	t.Helper()
	var b bytes.Buffer
	w := gzip.NewWriter(&b)
	w.Write([]byte(text))
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func zstandard(t testing.TB, text string) []byte {
	t.Helper()
	var b bytes.Buffer
	w, err := zstd.NewWriter(&b)
	if err != nil {
		t.Fatal(err)
	}
	w.Write([]byte(text))
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// The 1st, 2nd, 3rd ... read fails, in the head, in a pass and under compression: the
// error surfaces every time, and no pass ends well on a part of the rows.
func TestFailingReads(t *testing.T) {
	text := someRows(2500)
	for name, content := range map[string][]byte{"x.csv": []byte(text), "x.csv.gz": gzipped(t, text), "x.csv.zst": zstandard(t, text)} {
		path := writeFile(t, name, string(content))
		size := max(64, len(content)/40)
		for n := 1; ; n++ {
			left := n
			open := func(string) (io.ReadCloser, error) {
				return &failing{bytes.NewReader(content), &left, size}, nil
			}
			rows := int64(0)
			tab, err := openWith(t.Context(), Options{Files: []string{path}}, open, 512)
			if err == nil {
				err = tab.Each(t.Context(), 3, func(int, *Block) error { return nil }, func(b *Block) error {
					rows += int64(b.Rows)
					return nil
				})
			}
			if err == nil {
				if left <= 0 {
					t.Fatalf("%s: read %d failed and nobody noticed", name, n)
				}
				if rows != 2500 {
					t.Fatalf("%s: %d rows", name, rows)
				}
				break
			}
			var e *Error
			if !errors.As(err, &e) || e.Kind != BadContent || !strings.Contains(err.Error(), errBroken.Error()) {
				t.Fatalf("%s: read %d: %v", name, n, err)
			}
		}
	}
}

// Compressed tables read as the plain ones do, also in several members and under a name
// that does not tell; cut off anywhere they are an error, never a shorter table.
func TestCompressed(t *testing.T) {
	text := someRows(3000)
	plain, err := collect(Options{Files: []string{writeFile(t, "x.csv", text)}}, 512, 2)
	if err != nil {
		t.Fatal(err)
	}
	z, s := gzipped(t, text), zstandard(t, text)
	members := append(gzipped(t, text[:1234]), gzipped(t, text[1234:])...)
	frames := append(zstandard(t, text[:1234]), zstandard(t, text[1234:])...)
	for name, content := range map[string][]byte{"a.csv.gz": z, "b.csv": z, "c.csv.gz": members, "d.csv.zst": s, "e.dat": s, "f.csv.zst": frames} {
		got, err := collect(Options{Files: []string{writeFile(t, name, string(content))}}, 512, 2)
		if err != nil || !sameNumbers(got.data, plain.data) {
			t.Errorf("%s: %v", name, err)
		}
	}
	for _, content := range [][]byte{z, s} {
		for cut := 1; cut < len(content); cut += 1 + len(content)/60 {
			_, err := collect(Options{Files: []string{writeFile(t, "x.csv.gz", string(content[:cut]))}}, 512, 2)
			if err == nil {
				t.Fatalf("cut off at %d of %d: no error", cut, len(content))
			}
		}
		bad := slices.Clone(content)
		bad[len(bad)-3] ^= 0x40 // in the checksum
		if _, err := collect(Options{Files: []string{writeFile(t, "x.csv.gz", string(bad))}}, 512, 2); err == nil {
			t.Error("damaged checksum: no error")
		}
	}
}

// The earliest error in file order is the one reported, whatever finishes first.
func TestEarliestError(t *testing.T) {
	lines := strings.Split(someRows(3000), "\n")
	for _, bad := range []int{1200, 1201, 1700, 2900} {
		lines[bad] = "1,oops,3"
	}
	path := writeFile(t, "x.csv", strings.Join(lines, "\n"))
	for threads := 1; threads <= 8; threads++ {
		for range 10 {
			tab, err := openWith(t.Context(), Options{Files: []string{path}}, openFile, 300)
			if err != nil {
				t.Fatal(err)
			}
			err = tab.Each(t.Context(), threads, func(_ int, b *Block) error {
				if b.Index == 40 {
					time.Sleep(time.Millisecond)
				}
				return nil
			}, func(*Block) error { return nil })
			if e, ok := err.(*Error); !ok || e.Line != 1201 {
				t.Fatalf("%d threads: %v, want line 1201", threads, err)
			}
		}
	}
}

// Blocks, their boundaries and their order are the same for every number of threads, and
// Row is known in work from the second pass on.
func TestThreads(t *testing.T) {
	path := writeFile(t, "x.csv", someRows(5000))
	var want []string
	for threads := 1; threads <= 8; threads++ {
		tab, err := openWith(t.Context(), Options{Files: []string{path}, Time: "a"}, openFile, 777)
		if err != nil {
			t.Fatal(err)
		}
		for pass := range 2 {
			var got []string
			var wrong atomic.Int32
			err := tab.Each(t.Context(), threads, func(worker int, b *Block) error {
				if worker < 0 || worker >= threads || pass == 1 && fmt.Sprint(b.Row) != string(b.Time(0)) {
					wrong.Add(1)
				}
				var keep []int32
				for i := range int32(b.Rows) {
					if i%3 != 1 {
						keep = append(keep, i)
					}
				}
				b.Keep(keep)
				b.Result = b.Index
				return nil
			}, func(b *Block) error {
				for i := range b.Rows {
					if ordinal := fmt.Sprint(b.Row + int64(b.Offset[i])); ordinal != string(b.Time(i)) {
						t.Errorf("row %s is told to be %s", b.Time(i), ordinal)
					}
				}
				got = append(got, fmt.Sprint(b.Result, b.Row, b.Count, b.Rows, b.Data))
				return nil
			})
			if err != nil || wrong.Load() != 0 {
				t.Fatalf("%d threads: %v, %d wrong", threads, err, wrong.Load())
			}
			if want == nil {
				want = got
			}
			if !slices.Equal(got, want) {
				t.Fatalf("%d threads: other blocks", threads)
			}
		}
	}
}

// Errors, panics and cancellation in work and merge end a pass and leave nobody waiting.
func TestPassEnds(t *testing.T) {
	path := writeFile(t, "x.csv", someRows(5000))
	stop := errors.New("stop")
	ok := func(int, *Block) error { return nil }
	fine := func(*Block) error { return nil }
	cases := []struct {
		name  string
		work  func(int, *Block) error
		merge func(*Block) error
		want  string
	}{
		{"work", func(_ int, b *Block) error { return at(b, 9, stop) }, fine, "stop"},
		{"merge", ok, func(b *Block) error { return at(b, 9, stop) }, "stop"},
		{"panic in work", func(_ int, b *Block) error { return at(b, 9, nil) }, fine, "boom"},
		{"panic in merge", ok, func(b *Block) error { return at(b, 9, nil) }, "boom"},
		{"row in work", func(_ int, b *Block) error { return fault(b, 4321) }, fine, `x.csv:4323: column 2 "b": is at fault`},
		{"row in merge", ok, func(b *Block) error { return fault(b, 4321) }, `x.csv:4323: column 2 "b": is at fault`},
	}
	for _, c := range cases {
		for _, threads := range []int{1, 4} {
			tab, err := openWith(t.Context(), Options{Files: []string{path}}, openFile, 500)
			if err != nil {
				t.Fatal(err)
			}
			if err := tab.Each(t.Context(), threads, ok, fine); err != nil {
				t.Fatal(err)
			}
			err = within(t, c.name, func() error { return tab.Each(t.Context(), threads, c.work, c.merge) })
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("%s: %v", c.name, err)
			}
		}
	}
	for _, inWork := range []bool{true, false} {
		tab, err := openWith(t.Context(), Options{Files: []string{path}}, openFile, 500)
		if err != nil {
			t.Fatal(err)
		}
		ctx, cancel := context.WithCancel(t.Context())
		seen := 0
		err = within(t, "cancel", func() error {
			return tab.Each(ctx, 2, func(_ int, b *Block) error {
				if inWork && b.Index == 5 {
					cancel()
				}
				return nil
			}, func(b *Block) error {
				if !inWork && b.Index == 5 {
					cancel()
				}
				seen++
				return nil
			})
		})
		cancel()
		if !errors.Is(err, context.Canceled) || seen > 40 {
			t.Errorf("cancelled: %v after %d blocks", err, seen)
		}
	}
}

func at(b *Block, index int, err error) error {
	if b.Index == index {
		if err == nil {
			panic("boom")
		}
		return err
	}
	return nil
}

func fault(b *Block, row int64) error {
	if i := row - b.Row; i >= 0 && i < int64(b.Rows) {
		return b.Problem(int(i), 1, "is at fault", "")
	}
	return nil
}

func within(t *testing.T, name string, f func() error) error {
	t.Helper()
	done := make(chan error, 1)
	go func() { done <- f() }()
	select {
	case err := <-done:
		return err
	case <-time.After(20 * time.Second):
		t.Fatalf("%s: the pass does not end", name)
		return nil
	}
}

// A file that changed between two passes is an error, grown or only touched.
func TestChanged(t *testing.T) {
	for name, change := range map[string]func(path string) error{
		"grown":   func(path string) error { return os.WriteFile(path, []byte(someRows(40000)), 0o666) },
		"shrunk":  func(path string) error { return os.WriteFile(path, []byte(someRows(2)), 0o666) },
		"touched": func(path string) error { return os.Chtimes(path, time.Time{}, time.Now().Add(time.Hour)) },
		"gone":    os.Remove,
	} {
		path := writeFile(t, "x.csv", someRows(2000))
		tab, err := openWith(t.Context(), Options{Files: []string{path}}, openFile, 500)
		if err != nil {
			t.Fatal(err)
		}
		ok, fine := func(int, *Block) error { return nil }, func(*Block) error { return nil }
		if err := tab.Each(t.Context(), 2, ok, fine); err != nil {
			t.Fatal(err)
		}
		if err := change(path); err != nil {
			t.Fatal(err)
		}
		var e *Error
		if err := tab.Each(t.Context(), 2, ok, fine); !errors.As(err, &e) || e.File != path {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// A file that grows while a later pass reads it is an error too.
func TestGrowing(t *testing.T) {
	path := writeFile(t, "x.csv", someRows(2000))
	tab, err := openWith(t.Context(), Options{Files: []string{path}}, openFile, 500)
	if err != nil {
		t.Fatal(err)
	}
	ok, fine := func(int, *Block) error { return nil }, func(*Block) error { return nil }
	if err := tab.Each(t.Context(), 1, ok, fine); err != nil {
		t.Fatal(err)
	}
	err = tab.Each(t.Context(), 1, func(_ int, b *Block) error {
		if b.Index == 0 {
			return os.WriteFile(path, []byte(someRows(40000)), 0o666)
		}
		return nil
	}, fine)
	if err == nil || !strings.Contains(err.Error(), "changed while it was being read") {
		t.Errorf("%v", err)
	}
}

// A held table gives back what was put in, in blocks that no thread count moves.
func TestHeld(t *testing.T) {
	path := writeFile(t, "x.csv", someRows(5000))
	tab, err := openWith(t.Context(), Options{Files: []string{path}, Time: "a", Groups: "c"}, openFile, 700)
	if err != nil {
		t.Fatal(err)
	}
	held := NewHeld(tab.Columns())
	err = tab.Each(t.Context(), 3, func(_ int, b *Block) error {
		var keep []int32
		for i := range int32(b.Rows) {
			if i%5 != 2 {
				keep = append(keep, i)
			}
		}
		b.Keep(keep)
		return nil
	}, func(b *Block) error { held.Append(b); return nil })
	if err != nil {
		t.Fatal(err)
	}
	var want string
	for threads := 1; threads <= 8; threads++ {
		var got strings.Builder
		rows := 0
		err := held.Each(t.Context(), threads, func(_ int, b *Block) error {
			for i := range b.Data {
				b.Data[i] *= 2 // must not reach the table
			}
			return nil
		}, func(b *Block) error {
			for i := range b.Rows {
				ordinal := b.Row + int64(b.Offset[i])
				if fmt.Sprint(ordinal) != string(b.Time(i)) || fmt.Sprint(-ordinal) != string(b.Group(i)) || b.Data[i] != 2*(float64(ordinal)/7) {
					t.Fatalf("row %d: %s %s %v", ordinal, b.Time(i), b.Group(i), b.Data[i])
				}
			}
			rows += b.Rows
			fmt.Fprintln(&got, b.Index, b.Row, b.Rows)
			return nil
		})
		if err != nil || rows != held.Len() || len(held.Matrix()) != rows*len(held.Columns()) {
			t.Fatalf("%v, %d rows", err, rows)
		}
		if want == "" {
			want = got.String()
		}
		if got.String() != want {
			t.Errorf("%d threads: other blocks", threads)
		}
	}
	err = held.Each(t.Context(), 2, func(_ int, b *Block) error { return b.Problem(3, 0, "is at fault", "") }, func(*Block) error { return nil })
	if err == nil || !strings.Contains(err.Error(), `x.csv:6: column 2 "b": is at fault`) {
		t.Errorf("error about a row of a held table: %v", err)
	}
}

// Faults met while this package was checked, each with the behaviour promised.
func TestManners(t *testing.T) {
	wide := func(n int) string {
		cells := make([]string, n)
		for j := range cells {
			cells[j] = fmt.Sprintf("channel_%024d", j)
		}
		head := strings.Join(cells, ",")
		for j := range cells {
			cells[j] = "1.25"
		}
		return head + "\n" + strings.Join(cells, ",") + "\n"
	}
	nan := math.NaN()
	cases := []struct {
		name, text string
		o          Options
		data       []float64
		problem    string
	}{
		{"empty rows without a missing code", "a,b\n1,2\n,\n3,4\n  ,\t\n \n", Options{Missing: []string{}}, []float64{1, 2, 3, 4}, ""},
		{"row of quoted empties", "a,b\n1,2\n\"\",\"\"\n3,4\n", Options{}, []float64{1, 2, 3, 4}, ""},
		{"row of missing codes stays", "a,b\n1,2\nNA,NA\n", Options{}, []float64{1, 2, nan, nan}, ""},
		{"empty columns without a missing code", "a,\n1,\n2,\n", Options{Missing: []string{}}, []float64{1, 2}, ""},
		{"one column", "a\n1\n2\n", Options{}, []float64{1, 2}, ""},
		{"lone carriage return at the end", "a,b\r\n1,2\r\n3,4\r", Options{}, []float64{1, 2, 3, 4}, ""},
		{"missing code by value", "a,b\n-999.000,2\n-9.99e2,4\n", Options{Missing: []string{"-999"}}, []float64{nan, 2, nan, 4}, ""},
		{"infinite only where asked", "a,b\ninf,2\n1,4\n", Options{Missing: []string{"inf"}}, []float64{nan, 2, 1, 4}, ""},
		{"more digits than 64 bits hold", "a,b\n18446744073709551617,2\n36893488147419103233.5,4\n", Options{}, []float64{18446744073709551617, 2, 36893488147419103233.5, 4}, ""},
		{"two thirds text", "a,b\n1,2\nx,3\ny,4\n", Options{}, []float64{2, 3, 4}, ""},
		{"half text", "a,b\n1,2\nx,4\n", Options{}, nil, `x.csv:3: column 1 "a": "x" is not a number`},
		{"open quote", "a,b\n1,2\n3,4\n\"5,6\n7,8\n", Options{}, nil, "x.csv:4: column 1 \"a\": a quote is never closed"},
		{"hexadecimal float", "a,b\n1,2\n0x1p4,4\n5,6\n", Options{}, nil, `x.csv:3: column 1 "a": "0x1p4" is not a number`},
		{"underscore", "a,b\n1,2\n1_000,4\n5,6\n", Options{}, nil, `x.csv:3: column 1 "a": "1_000" is not a number`},
		{"point under decimal comma", "a;b\n1;2\n1.5;4\n5;6\n", Options{DecimalComma: true}, nil, `x.csv:3: column 1 "a": "1.5" is not a number`},
		{"infinite with blanks under quotes", "a,b\n1,2\n\" -Infinity\",4\n5,6\n", Options{}, nil, `x.csv:3: column 1 "a": "-Infinity" is not a finite number`},
		{"names are numbers but for an empty one", "1,2,\n3,4,\n", Options{}, nil, "x.csv:1: the header holds only numbers"},
		{"separator of two bytes", "a,b\n1,2\n", Options{Separator: "::"}, nil, `separator "::"`},
		{"separator is the decimal comma", "a,b\n1,2\n", Options{Separator: ",", DecimalComma: true}, nil, `separator ","`},
		{"separator is a quote", "a,b\n1,2\n", Options{Separator: `"`}, nil, `separator "\""`},
		{"time twice", "s,a\nx,1\n", Options{Time: "s", Groups: "s"}, []float64{1}, ""},
		{"wide", wide(30000), Options{}, slices.Repeat([]float64{1.25}, 30000), ""},
		{"very wide", wide(270_000), Options{}, slices.Repeat([]float64{1.25}, 270_000), ""},
		{"comment marker cut", "a,b\n1,2\n// no, \"quote\n3,4\n", Options{Comment: "//"}, []float64{1, 2, 3, 4}, ""},
	}
	for _, c := range cases {
		path := writeFile(t, "x.csv", c.text)
		c.o.Files = []string{path}
		for _, pieces := range []int{1, 7, chunkBytes} {
			if len(c.text) > 1<<16 && pieces < 100 {
				continue
			}
			got, err := collect(c.o, pieces, 2)
			switch {
			case c.problem == "" && err != nil:
				t.Errorf("%s pieces=%d: %v", c.name, pieces, err)
			case c.problem == "" && !sameNumbers(got.data, c.data):
				t.Errorf("%s pieces=%d: %d numbers, want %d", c.name, pieces, len(got.data), len(c.data))
			case c.problem != "" && (err == nil || !strings.Contains(strings.ReplaceAll(err.Error(), filepath.Dir(path)+"/", ""), c.problem)):
				t.Errorf("%s pieces=%d: %v\nwant %s", c.name, pieces, err, c.problem)
			}
		}
	}
}

// Globs are taken in the folder given, whatever its own name holds; folders that match
// are passed over; what cannot be read twice is refused.
func TestFolders(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run [3]*")
	if err := os.MkdirAll(filepath.Join(dir, "z.csv"), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, "a.csv"), []byte("a,b\n1,2\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	got, err := collect(Options{Dir: dir, Files: []string{"*.csv"}}, chunkBytes, 1)
	if err != nil || len(got.data) != 2 {
		t.Errorf("%v", err)
	}
	r, w, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	defer r.Close()
	w.Write([]byte("a,b\n1,2\n"))
	w.Close()
	_, err = collect(Options{Files: []string{fmt.Sprintf("/dev/fd/%d", r.Fd())}}, chunkBytes, 1)
	if err == nil || !strings.Contains(err.Error(), "is not a regular file") {
		t.Errorf("pipe: %v", err)
	}
}

// A row longer than the bound is an error that says so, and does not fill the memory.
func TestLongRow(t *testing.T) {
	endless := func(string) (io.ReadCloser, error) {
		return io.NopCloser(io.MultiReader(strings.NewReader(someRows(2000)+"\"open"), repeat("1,2,3\n"))), nil
	}
	path := writeFile(t, "x.csv", someRows(1))
	tab, err := openWith(t.Context(), Options{Files: []string{path}}, endless, chunkBytes)
	if err != nil {
		t.Fatal(err)
	}
	err = tab.Each(t.Context(), 2, func(int, *Block) error { return nil }, func(*Block) error { return nil })
	if e, ok := err.(*Error); !ok || !strings.Contains(e.Problem, "64 MiB") || e.Line != 2002 {
		t.Errorf("%v", err)
	}
}

type repeat string

func (r repeat) Read(p []byte) (int, error) {
	n := 0
	for n+len(r) <= len(p) {
		n += copy(p[n:], r)
	}
	if n == 0 {
		n = copy(p, r[:1])
	}
	return n, nil
}
