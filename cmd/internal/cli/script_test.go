package cli

import (
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"axisfold": func() { os.Exit(Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr)) },
	})
}

// The scripts in testdata are the command line as a user types it, one behaviour a file.
// $DATA is the project's testdata folder. "exits 3 axisfold run x.yaml" runs a command,
// asks for its exit status and leaves its output in out.txt and err.txt.
func TestScripts(t *testing.T) {
	root, err := filepath.Abs("../../..")
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir:                 "testdata",
		RequireExplicitExec: true,
		Setup: func(e *testscript.Env) error {
			e.Setenv("DATA", filepath.Join(root, "testdata"))
			return nil
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"exits": exits, "head_is": headIs, "empty": empty, "same_tree": sameTree, "no_partial": noPartial, "for_files": forFiles},
	})
}

// exits runs a command and compares its exit status; what it printed goes to the files
// out.txt and err.txt of the script's folder for grep and cmp.
func exits(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: exits STATUS COMMAND...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	path, err := exec.LookPath(args[1])
	if err != nil {
		path = filepath.Join(strings.Split(ts.Getenv("PATH"), string(os.PathListSeparator))[0], args[1])
	}
	c := exec.Command(path, args[2:]...)
	c.Dir = ts.MkAbs(".")
	c.Env = []string{"PATH=" + ts.Getenv("PATH"), "HOME=" + ts.Getenv("HOME"), "DATA=" + ts.Getenv("DATA"), "TMPDIR=" + ts.Getenv("TMPDIR")}
	var out, errs strings.Builder
	c.Stdout, c.Stderr = &out, &errs
	err = c.Run()
	got := c.ProcessState.ExitCode()
	ts.Check(os.WriteFile(ts.MkAbs("out.txt"), []byte(out.String()), 0o666))
	ts.Check(os.WriteFile(ts.MkAbs("err.txt"), []byte(errs.String()), 0o666))
	if got != want {
		ts.Fatalf("%s", fmt.Sprintf("exit status %d, want %d (%v)\n%s%s", got, want, err, out.String(), errs.String()))
	}
}

// headIs compares the first line of a file.
func headIs(ts *testscript.TestScript, _ bool, args []string) {
	first, _, _ := strings.Cut(ts.ReadFile(args[0]), "\n")
	if first != args[1] {
		ts.Fatalf("first line of %s is %s", args[0], first)
	}
}

func empty(ts *testscript.TestScript, _ bool, args []string) {
	if text := ts.ReadFile(args[0]); text != "" {
		ts.Fatalf("%s holds %q", args[0], text)
	}
}

// forFiles asks that each file exists and holds something.
func forFiles(ts *testscript.TestScript, _ bool, args []string) {
	for _, name := range args[1:] {
		if ts.ReadFile(filepath.Join(args[0], name)) == "" {
			ts.Fatalf("%s is empty", name)
		}
	}
}

// sameTree compares two folders byte for byte.
func sameTree(ts *testscript.TestScript, _ bool, args []string) {
	a, b := tree(ts, args[0]), tree(ts, args[1])
	if len(a) == 0 {
		ts.Fatalf("%s holds no files", args[0])
	}
	for name, text := range a {
		if b[name] != text {
			ts.Fatalf("%s differs", name)
		}
	}
	if len(a) != len(b) {
		ts.Fatalf("%d files and %d", len(a), len(b))
	}
}

func tree(ts *testscript.TestScript, dir string) map[string]string {
	out := map[string]string{}
	root := ts.MkAbs(dir)
	ts.Check(filepath.WalkDir(root, func(path string, d os.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		text, err := os.ReadFile(path)
		rel, _ := filepath.Rel(root, path)
		out[rel] = string(text)
		return err
	}))
	return out
}

// noPartial asks that no run left an unfinished folder behind.
func noPartial(ts *testscript.TestScript, _ bool, args []string) {
	found, err := filepath.Glob(filepath.Join(ts.MkAbs(args[0]), ".*.partial*"))
	ts.Check(err)
	if len(found) > 0 {
		ts.Fatalf("left behind: %v", found)
	}
}
