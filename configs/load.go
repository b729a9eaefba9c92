package configs

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"reflect"

	"gopkg.in/yaml.v3"
)

// mostBytes bounds a run file: a table given by mistake is not read to its end.
const mostBytes = 4 << 20

// Load reads the run file at path and applies the overrides, each section.key=value, in
// their order. On failure the error is an [Errors].
func Load(path string, sets []string) (*File, error) {
	text, err := read(path)
	if err != nil {
		problem := err.Error()
		var system *fs.PathError
		if errors.As(err, &system) {
			problem = system.Err.Error()
		}
		return nil, Errors{{File: path, Problem: problem}}
	}
	return Parse(path, text, sets)
}

func read(path string) ([]byte, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	if info, err := f.Stat(); err == nil && info.IsDir() {
		return nil, errors.New("is a folder, expected a run file")
	}
	text, err := io.ReadAll(io.LimitReader(f, mostBytes+1))
	if err == nil && len(text) > mostBytes {
		return nil, fmt.Errorf("is larger than %d MiB, expected a run file", mostBytes>>20)
	}
	return text, err
}

// Parse is Load on the text of a run file; path names it in messages and places it.
func Parse(path string, text []byte, sets []string) (*File, error) {
	root, problem := document(text)
	if root == nil && problem == nil {
		problem = &Error{Line: 1, Column: 1, Problem: "is empty, expected a run file", Hint: `a run file begins with "axisfold: 1"`}
	}
	if problem != nil {
		problem.File = path
		return nil, Errors{problem}
	}
	l := &loader{file: &File{Path: path, given: map[string]bool{}},
		flags: map[*yaml.Node]string{}, places: map[string]*yaml.Node{}, bad: map[string]bool{}}
	for _, s := range sets {
		l.override(root, s)
	}
	if entries, ok := l.entries("", root); ok {
		l.fill("", sections, root, entries, reflect.ValueOf(l.file).Elem(), nil)
	}
	l.finish()
	if len(l.problems) > 0 {
		return nil, l.problems.ordered()
	}
	return l.file, nil
}

// loader turns the tree of a YAML document into a File and collects what is wrong.
type loader struct {
	file     *File
	problems Errors
	flags    map[*yaml.Node]string // overrides, by the nodes they made
	places   map[string]*yaml.Node // where each path has its value
	bad      map[string]bool       // paths whose value is not to be trusted
	follow   []func()              // defaults that depend on the rest
}

// fail reports a problem with the value of a path, which is then out of further checks.
func (l *loader) fail(at *yaml.Node, path, hint, problem string, args ...any) {
	l.bad[path] = true
	l.report(at, hint, problem, args...)
}

// report records a problem at a node.
func (l *loader) report(at *yaml.Node, hint, problem string, args ...any) {
	e := &Error{File: l.file.Path, Problem: fmt.Sprintf(problem, args...), Hint: hint}
	if flag, ok := l.flags[at]; ok {
		e.Flag = flag
	} else {
		e.Line, e.Column = at.Line, at.Column
	}
	l.problems = append(l.problems, e)
}

// finish works out the defaults that depend on the rest of the file, and checks what
// depends on several settings.
func (l *loader) finish() {
	for _, f := range l.follow {
		f()
	}
	for _, c := range checks {
		if l.trusted(c.paths) {
			c.check(l)
		}
	}
}
