package configs

import (
	"errors"
	"strings"
	"testing"
	"unicode/utf8"
)

// FuzzLoad: no text brings the loader down; an error has its place in the text; and
// whatever loads is written back as the same settings.
func FuzzLoad(f *testing.F) {
	loaded := 0
	for _, text := range []string{start, whole, resolvedWhole, resolvedStart} {
		f.Add(text, "")
		f.Add(text, "draw.formats=[png]")
		loaded++
	}
	for _, c := range errorTests {
		f.Add(c.text, strings.Join(c.sets, "\x00"))
	}
	for _, seed := range []string{
		"axisfold: 1\nread: {files: a, missing: [~, null, 0x10, 1e5, .nan, 2024-01-31, \"\\0\", \"\\u2028\"]}\n",
		"axisfold: +1\nseed: -0\nread: {files: |\n  two\n  lines\n}\n",
		"\ufeffaxisfold: 1\r\nread:\r\n  files: a.csv\r\n",
		"%YAML 1.1\n---\naxisfold: 1\nread: {files: >-\n folded\n text}\n...\n",
		"? axisfold\n: 1\n? read\n: ? files\n  : a\n",
		"axisfold: 1\nread: {files: a}\nstandardize: {channels: {? [a]: b, *c : d}}\n",
		"axisfold: 1\nread: &a {files: x, <<: *a}\n",
		"{",
	} {
		f.Add(seed, "")
	}
	if loaded == 0 {
		f.Fatal("no seed loads")
	}
	f.Fuzz(func(t *testing.T, text, sets string) {
		var flags []string
		if sets != "" {
			flags = strings.Split(sets, "\x00")
		}
		file, err := Parse("pump.yaml", []byte(text), flags)
		if err == nil {
			roundTrip(t, file)
			return
		}
		var all Errors
		if file != nil || !errors.As(err, &all) || len(all) == 0 || len(all) > mostErrors {
			t.Fatalf("file %v with error %v", file, err)
		}
		lines := strings.Count(text, "\n") + strings.Count(text, "\r") + strings.Count(text, "\u0085") +
			strings.Count(text, "\u2028") + strings.Count(text, "\u2029") + 1
		for _, e := range all {
			if e.Flag == "" && (e.Line < 1 || e.Line > lines || e.Column < 0) {
				t.Errorf("line %d, column %d of %d lines: %v", e.Line, e.Column, lines, e)
			}
			if e.Problem == "" || e.File != "pump.yaml" {
				t.Errorf("%+v", e)
			}
		}
	})
}

// FuzzNames: whatever a column, a path or a code is called, it is written back as it is.
func FuzzNames(f *testing.F) {
	for _, name := range awkward {
		f.Add(name)
	}
	if len(awkward) == 0 {
		f.Fatal("no seeds")
	}
	f.Fuzz(func(t *testing.T, name string) {
		if name != "" && utf8.ValidString(name) {
			roundTrip(t, named(t, name))
		}
	})
}
