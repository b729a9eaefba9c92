package table

import (
	"bytes"
	"errors"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
	"sync/atomic"
	"testing"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/compress"
)

// whole are sound files of every format that is not text, with several blocks or pages.
func wholeFiles(t testing.TB) map[string]string {
	t.Helper()
	out := map[string]string{}
	for name, codec := range map[string]compress.Codec{"none": &parquet.Uncompressed, "snappy": &parquet.Snappy, "gzip": &parquet.Gzip, "zstd": &parquet.Zstd, "lz4": &parquet.Lz4Raw} {
		path := filepath.Join(t.TempDir(), name+".parquet")
		writeKinds(t, path, codec, 300, 110)
		out["parquet "+name] = path
	}
	rows := [][]any{{"a", "b", "c"}}
	statements := []string{"pragma page_size = 1024", "create table x (a real, b real, c text)"}
	for i := range 300 {
		rows = append(rows, []any{float64(i) / 8, -i, "text"})
		statements = append(statements, "insert into x values (1.25, 3.5, 'some text to fill pages')")
	}
	out["xlsx"] = book(t, rowsOf("Sheet1", rows...))
	out["sqlite"] = database(t, statements...)
	return out
}

// A file cut off anywhere is an error that names it; so is a wrong first byte. No bytes
// turned over bring anything but rows or an Error.
func TestDamagedFiles(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	for name, path := range wholeFiles(t) {
		sound, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := collect(Options{Files: []string{path}}, chunkBytes, 2); err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		try := func(what string, text []byte) error {
			if err := os.WriteFile(path, text, 0o666); err != nil {
				t.Fatal(err)
			}
			_, err := collect(Options{Files: []string{path}, Format: formatFor(name)}, chunkBytes, 2)
			var e *Error
			if err != nil && (!errors.As(err, &e) || e.File == "" || e.Problem == "") {
				t.Fatalf("%s, %s: %v", name, what, err)
			}
			return err
		}
		step := max(1, len(sound)/60)
		for n := 0; n < len(sound); n += step {
			if try("cut", sound[:n]) == nil {
				t.Errorf("%s: cut at %d of %d bytes, no error", name, n, len(sound))
			}
		}
		if try("cut by one", sound[:len(sound)-1]) == nil {
			t.Errorf("%s: the last byte is missing, no error", name)
		}
		if try("magic", append([]byte{'X'}, sound[1:]...)) == nil {
			t.Errorf("%s: wrong magic, no error", name)
		}
		for range 150 {
			text := bytes.Clone(sound)
			for range 1 + rng.IntN(4) {
				text[rng.IntN(len(text))] ^= byte(1 << rng.IntN(8))
			}
			try("bits turned over", text)
		}
	}
}

func formatFor(name string) string {
	for _, f := range formats {
		if len(name) >= len(f.name) && name[:len(f.name)] == f.name {
			return f.name
		}
	}
	return ""
}

// failingAt is a file whose nth read fails.
type failingAt struct {
	*os.File
	left *atomic.Int64
}

func (f *failingAt) Read(p []byte) (int, error) {
	if f.left.Add(-1) == 0 {
		return 0, errBroken
	}
	return f.File.Read(p)
}

func (f *failingAt) ReadAt(p []byte, off int64) (int, error) {
	if f.left.Add(-1) == 0 {
		return 0, errBroken
	}
	return f.File.ReadAt(p, off)
}

// The 1st, 2nd, 3rd ... read fails: the error surfaces every time.
func TestFailingReadsAt(t *testing.T) {
	for name, path := range wholeFiles(t) {
		if name == "sqlite" {
			continue // the database opens its file itself
		}
		sound, err := collect(Options{Files: []string{path}}, chunkBytes, 1)
		if err != nil {
			t.Fatal(err)
		}
		for n := 1; ; n++ {
			var left atomic.Int64
			left.Store(int64(n))
			open := func(path string) (io.ReadCloser, error) {
				f, err := os.Open(path)
				return &failingAt{f, &left}, err
			}
			tab, err := openWith(t.Context(), Options{Files: []string{path}}, open, chunkBytes)
			var got *collected
			if err == nil {
				got, err = gather(tab, 2, Options{})
			}
			if left.Load() > 0 {
				if err != nil {
					t.Errorf("%s: %d reads, none failed: %v", name, n, err)
				}
				break
			}
			var e *Error
			switch {
			case err == nil && name == "xlsx" && sameNumbers(got.data, sound.data):
				// A look at the first rows read ahead of what it needed.
			case !errors.As(err, &e):
				t.Errorf("%s: read %d fails: %v", name, n, err)
			}
		}
	}
}
