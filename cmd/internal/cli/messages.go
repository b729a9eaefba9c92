package cli

import (
	"errors"
	"fmt"
	"io"
	"os"

	"axisfold/cmd/internal/run"
	"axisfold/configs"
	"axisfold/pca"
	"axisfold/pca/table"
)

// Manners of messages: one problem a line, lower case, no full stop; where, what was
// read, what was expected; then a line "hint: ..." where one is obvious. All of it goes
// to standard error.

const (
	statusDone        = 0
	statusUnexpected  = 1
	statusUsage       = 2
	statusData        = 3
	statusInterrupted = 130
)

type interrupted struct{}

func (interrupted) Error() string { return "interrupted; nothing was left behind" }

// usageError is a wrong command line.
type usageError struct{ command, problem string }

func (e usageError) Error() string    { return e.problem }
func (e usageError) HintText() string { return fmt.Sprintf("see %s --help", e.command) }

// report prints what went wrong and returns the exit status.
func report(errs io.Writer, err error) int {
	if err == nil {
		return statusDone
	}
	for _, e := range flatten(err) {
		fmt.Fprintf(errs, "axisfold: %s\n", e)
		var hinted interface{ HintText() string }
		if errors.As(e, &hinted) && hinted.HintText() != "" {
			fmt.Fprintf(errs, "hint: %s\n", hinted.HintText())
		}
	}
	return status(err)
}

// flatten lists the problems of an error that holds several.
func flatten(err error) []error {
	if several, ok := err.(interface{ Unwrap() []error }); ok {
		var out []error
		for _, e := range several.Unwrap() {
			out = append(out, flatten(e)...)
		}
		return out
	}
	return []error{err}
}

func status(err error) int {
	var usage usageError
	var config *configs.Error
	var folder *run.FolderError
	var tableError *table.Error
	var data *pca.DataError
	var path *os.PathError
	switch {
	case errors.As(err, &interrupted{}):
		return statusInterrupted
	case errors.As(err, &usage), errors.As(err, &config):
		return statusUsage
	case errors.As(err, &folder):
		if folder.Broken {
			return statusUnexpected
		}
		return statusUsage
	case errors.As(err, &tableError):
		if tableError.Kind == table.WrongInput {
			return statusUsage
		}
		return statusData
	case errors.As(err, &data):
		return statusData
	case errors.As(err, &path):
		return statusUsage
	}
	return statusUnexpected
}
