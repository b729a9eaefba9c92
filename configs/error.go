package configs

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// Error is one problem of a run file. Its text has the form `pump.yaml:12:3: problem`.
type Error struct {
	File         string
	Line, Column int    // from 1; 0 when the problem has no such place
	Flag         string // the override that brought it, as given; the place is then not in the file
	Problem      string
	Hint         string // what would mend it; empty where nothing is obvious
}

func (e *Error) Error() string {
	where := e.File
	switch {
	case e.Flag != "":
		where = "--set " + shown(e.Flag)
	case e.Line > 0 && e.Column > 0:
		where = fmt.Sprintf("%s:%d:%d", e.File, e.Line, e.Column)
	case e.Line > 0:
		where = fmt.Sprintf("%s:%d", e.File, e.Line)
	}
	return where + ": " + e.Problem
}

// HintText is what would mend it, empty where nothing is obvious.
func (e *Error) HintText() string { return e.Hint }

// Errors are the problems of a run file in the order of its lines, those of overrides
// after them; at least one and at most 20.
type Errors []*Error

// mostErrors is how many problems are told at once: more than fit on a screen help nobody.
const mostErrors = 20

func (e Errors) Error() string {
	lines := make([]string, len(e))
	for i, one := range e {
		lines[i] = one.Error()
	}
	return strings.Join(lines, "\n")
}

// Unwrap lists the problems one by one.
func (e Errors) Unwrap() []error {
	out := make([]error, len(e))
	for i, one := range e {
		out[i] = one
	}
	return out
}

// ordered sorts by place and cuts the list, saying so.
func (e Errors) ordered() Errors {
	slices.SortStableFunc(e, func(a, b *Error) int {
		switch {
		case a.Flag == "" && b.Flag != "":
			return -1
		case a.Flag != "" && b.Flag == "":
			return 1
		}
		return cmp.Or(a.Line-b.Line, a.Column-b.Column)
	})
	if len(e) <= mostErrors {
		return e
	}
	last := e[mostErrors-1]
	if last.Hint != "" {
		last.Hint += "; "
	}
	last.Hint += fmt.Sprintf("%d more problems are not shown", len(e)-mostErrors)
	return e[:mostErrors]
}
