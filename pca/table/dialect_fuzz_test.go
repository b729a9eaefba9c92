package table

import (
	"os"
	"path/filepath"
	"testing"
)

// FuzzText: whatever the bytes are and however they are to be read, reading ends with numbers
// or an Error, and both are the same for every size of pieces. Seeds are in testdata/fuzz.
func FuzzText(f *testing.F) {
	seeds, err := filepath.Glob("testdata/fuzz/FuzzText/*")
	if err != nil || len(seeds) == 0 {
		f.Fatalf("no seeds: %v", err)
	}
	f.Fuzz(func(t *testing.T, text []byte, how byte) {
		path := filepath.Join(t.TempDir(), "x.csv")
		if err := os.WriteFile(path, text, 0o666); err != nil {
			t.Fatal(err)
		}
		o := Options{Files: []string{path}, Missing: []string{"", "NA"}, ChannelsInRows: how&1 != 0, ShortRows: how&2 != 0,
			Header: []string{"", "auto", "double", "auto"}[how>>2&3], Thousands: []string{"", "comma", "space", "apostrophe"}[how>>4&3],
			Encoding: []string{"", "", "utf-16", "latin-1"}[how>>6&3]}
		sameInPieces(t, o, 1, 17)
	})
}
