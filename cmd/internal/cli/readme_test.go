package cli

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// inScratch makes a folder with the project's configs and testdata in it and goes there,
// so that what run files write stays out of the project.
func inScratch(t *testing.T) {
	t.Helper()
	root, err := filepath.Abs("../../..")
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	for _, name := range []string{"configs", "testdata"} {
		if err := os.Symlink(filepath.Join(root, name), filepath.Join(dir, name)); err != nil {
			t.Fatal(err)
		}
	}
	t.Chdir(dir)
}

// Every command block of the README does what it shows: a line "$ axisfold ..." is run,
// and what follows is its output, "..." standing for any number of lines.
func TestReadme(t *testing.T) {
	text, err := os.ReadFile("../../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	inScratch(t)
	blocks := 0
	for i, block := range strings.Split(string(text), "```") {
		if i%2 == 0 || !strings.HasPrefix(strings.TrimSpace(block), "$ ") {
			continue
		}
		blocks++
		command, want, _ := strings.Cut(strings.TrimSpace(block), "\n")
		args := strings.Fields(strings.TrimPrefix(command, "$ "))
		if args[0] != "axisfold" {
			t.Fatalf("%s: not a command of ours", command)
		}
		var out, errs bytes.Buffer
		if status := Main(args[1:], nil, &out, &errs); status != 0 {
			t.Fatalf("%s: status %d\n%s", command, status, errs.String())
		}
		if missing := matchLines(want, out.String()); missing != "" {
			t.Errorf("%s: the output lacks, in its place:\n%s\n\noutput:\n%s", command, missing, out.String())
		}
	}
	if blocks == 0 {
		t.Error("the README shows no command")
	}
}

// matchLines returns the first wanted line that the output does not have where it should.
func matchLines(want, got string) string {
	lines := strings.Split(strings.TrimRight(got, "\n"), "\n")
	at, anywhere := 0, false
	for line := range strings.Lines(want) {
		line = strings.TrimRight(line, "\n")
		if line == "..." {
			anywhere = true
			continue
		}
		found := false
		for ; at < len(lines); at++ {
			if lines[at] == line {
				found = true
				at++
				break
			}
			if !anywhere {
				break
			}
		}
		if !found {
			return line
		}
		anywhere = false
	}
	return ""
}

// Every ready-made run file runs, and check finds it in order.
func TestReadyMadeRunFiles(t *testing.T) {
	inScratch(t)
	files, err := filepath.Glob("configs/*.yaml")
	if err != nil || len(files) < 3 {
		t.Fatalf("%d run files, %v", len(files), err)
	}
	for _, file := range files {
		for _, command := range []string{"check", "run"} {
			var out, errs bytes.Buffer
			if status := Main([]string{command, file}, nil, &out, &errs); status != 0 {
				t.Errorf("%s %s: status %d\n%s", command, file, status, errs.String())
			}
		}
	}
}
