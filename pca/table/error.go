package table

import (
	"errors"
	"fmt"
	"io/fs"
	"strconv"
)

// Kind tells what an Error is about.
type Kind int

const (
	// WrongInput: the files named, or the options, are wrong.
	WrongInput Kind = iota
	// BadContent: a file cannot be used as it is.
	BadContent
)

// Error says where a table went wrong, what was found, and what would mend it. Its text
// is `flows.csv:1042: column 7 "F_in": "n/a" is not a number`.
type Error struct {
	Kind    Kind
	File    string
	Line    int // physical line or row from 1; 0 when the whole file is meant
	Column  int // from 1; 0 when the whole line is meant
	Name    string
	Problem string
	Hint    string
	// Cell is the text of a cell that is no number where one was expected; empty for other
	// errors.
	Cell string

	absolute bool   // Line counts from the start of the file
	counted  string // what Line counts; empty: lines of text
}

func (e *Error) Error() string {
	text := e.File
	switch {
	case e.counted == turnedCell && e.Column > 0 && e.Line > 0:
		return fmt.Sprintf("%s: channel %d %q: cell %d: %s", e.File, e.Column, e.Name, e.Line, e.Problem)
	case e.Line > 0 && e.counted != "":
		text += ": " + e.counted + " " + strconv.Itoa(e.Line)
	case e.Line > 0:
		text += ":" + strconv.Itoa(e.Line)
	}
	if text != "" {
		text += ": "
	}
	if e.Column > 0 {
		text += fmt.Sprintf("column %d %q: ", e.Column, e.Name)
	}
	return text + e.Problem
}

// HintText is what would mend it, empty where nothing is obvious.
func (e *Error) HintText() string { return e.Hint }

// pathError words an error of the file system.
func pathError(file string, err error) *Error {
	problem := err.Error()
	var p *fs.PathError
	if errors.As(err, &p) {
		problem = p.Err.Error()
	}
	return &Error{Kind: WrongInput, File: file, Problem: problem}
}
