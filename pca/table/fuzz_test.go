package table

import (
	"errors"
	"os"
	"path/filepath"
	"testing"
)

// FuzzRead: whatever the bytes are, reading ends with numbers or an Error, and both are
// the same for every size of pieces and number of threads. Seeds are in testdata/fuzz.
func FuzzRead(f *testing.F) {
	seeds, err := filepath.Glob("testdata/fuzz/FuzzRead/*")
	if err != nil || len(seeds) == 0 {
		f.Fatalf("no seeds: %v", err)
	}
	f.Fuzz(func(t *testing.T, text []byte, comma bool) {
		path := filepath.Join(t.TempDir(), "x.csv")
		if err := os.WriteFile(path, text, 0o666); err != nil {
			t.Fatal(err)
		}
		o := Options{Files: []string{path}, DecimalComma: comma, Comment: "#", Missing: []string{"", "NA", "-9"}}
		sameInPieces(t, o, 1, 3, 17)
	})
}

// sameInPieces reads a table whole and in pieces of the given sizes: numbers or an Error,
// the same each time.
func sameInPieces(t *testing.T, o Options, sizes ...int) {
	t.Helper()
	want, wantErr := collect(o, chunkBytes, 1)
	for _, pieces := range sizes {
		got, err := collect(o, pieces, 3)
		var e *Error
		switch {
		case err != nil && !errors.As(err, &e):
			t.Fatalf("pieces=%d: %v", pieces, err)
		case (err == nil) != (wantErr == nil) || err != nil && err.Error() != wantErr.Error():
			t.Fatalf("pieces=%d: %v, whole: %v", pieces, err, wantErr)
		case err == nil && !sameNumbers(got.data, want.data):
			t.Fatalf("pieces=%d: %v, whole: %v", pieces, got.data, want.data)
		}
	}
}
