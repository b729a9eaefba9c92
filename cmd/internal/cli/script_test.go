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
// asks for its exit status and leaves its output for stdout and stderr.
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
		Cmds: map[string]func(*testscript.TestScript, bool, []string){"exits": exits},
	})
}

// exits runs a command and compares its exit status; what it printed goes to the files
// stdout and stderr of the script's folder for grep and cmp.
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
	ts.Check(os.WriteFile(ts.MkAbs("stdout"), []byte(out.String()), 0o666))
	ts.Check(os.WriteFile(ts.MkAbs("stderr"), []byte(errs.String()), 0o666))
	if got != want {
		ts.Fatalf("%s", fmt.Sprintf("exit status %d, want %d (%v)\n%s%s", got, want, err, out.String(), errs.String()))
	}
}
