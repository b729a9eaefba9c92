package configs

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"regexp"
	"strconv"
	"strings"

	"gopkg.in/yaml.v3"
)

// document returns the root of the only YAML document in text, nil when there is none.
func document(text []byte) (root *yaml.Node, problem *Error) {
	decoder := yaml.NewDecoder(bytes.NewReader(text))
	var doc, second yaml.Node
	switch err := decoder.Decode(&doc); {
	case errors.Is(err, io.EOF):
		return nil, nil
	case err != nil:
		return nil, syntaxError(text, err)
	}
	switch err := decoder.Decode(&second); {
	case errors.Is(err, io.EOF):
	case err != nil:
		return nil, syntaxError(text, err)
	default:
		return nil, &Error{Line: second.Line, Column: second.Column, Problem: "a second document begins, expected one run file",
			Hint: `take out the line "---"`}
	}
	return doc.Content[0], nil
}

// numbered is how the YAML reader begins a message when it knows a line.
var numbered = regexp.MustCompile(`^line (\d+): `)

// syntaxError words an error of the YAML reader.
func syntaxError(text []byte, err error) *Error {
	message := strings.TrimPrefix(err.Error(), "yaml: ")
	line := 0
	if m := numbered.FindStringSubmatch(message); m != nil {
		message = message[len(m[0]):]
		line, _ = strconv.Atoi(m[1])
	}
	// Of problems with the structure the reader tells where the structure began, counting
	// lines from 0. For a bracket and for a value that is where to look; for a mapping or
	// a list without brackets it is how far the reader came.
	switch {
	case line > 0 && (strings.HasPrefix(message, "did not find expected ','") || strings.HasPrefix(message, "did not find expected node")):
		line++
	case line == 0 || strings.HasPrefix(message, "did not find expected"):
		line = linesRead(text)
	}
	return &Error{Line: line, Problem: "is not valid YAML: " + message, Hint: syntaxHint(text, line, message)}
}

func syntaxHint(text []byte, line int, message string) string {
	lines := strings.Split(string(text), "\n")
	switch {
	case line <= len(lines) && strings.HasPrefix(strings.TrimLeft(lines[line-1], " "), "\t"):
		return "indent with blanks, not with tabs"
	case strings.HasPrefix(message, "mapping values are not allowed"):
		return `is the line indented like its neighbours? a text that holds ": " needs quotes`
	case strings.HasPrefix(message, "found character that cannot start"):
		return "put the text in quotes"
	case strings.HasPrefix(message, "unknown anchor"):
		return `put a text that begins with "*" in quotes`
	case strings.HasPrefix(message, "did not find expected ','"):
		return "is a bracket left open?"
	case strings.HasPrefix(message, "found unexpected end of stream"):
		return "is a quote left open?"
	case strings.HasPrefix(message, "did not find expected key"):
		return "is the line indented like its neighbours?"
	}
	return ""
}

// linesRead is the line that the YAML reader has reached when it fails, handed one byte
// at a time so that it does not run ahead.
func linesRead(text []byte) int {
	feed := &byteFeed{rest: text, line: 1}
	decoder := yaml.NewDecoder(feed)
	for {
		var n yaml.Node
		if err := decoder.Decode(&n); err != nil {
			return feed.line
		}
	}
}

// byteFeed hands out one byte per read and knows the line of the last one.
type byteFeed struct {
	rest  []byte
	line  int
	ended bool // the last byte ended its line
}

func (f *byteFeed) Read(b []byte) (int, error) {
	if len(f.rest) == 0 || len(b) == 0 {
		return 0, io.EOF
	}
	if f.ended {
		f.line++
	}
	b[0] = f.rest[0]
	f.ended = b[0] == '\n'
	f.rest = f.rest[1:]
	return 1, nil
}

// found words what stands at a node.
func found(n *yaml.Node) string {
	switch n.Kind {
	case yaml.MappingNode:
		return "a mapping"
	case yaml.SequenceNode:
		return "a list"
	}
	switch n.ShortTag() {
	case "!!null":
		return "nothing"
	case "!!bool", "!!int", "!!float":
		return clip(n.Value)
	}
	return fmt.Sprintf("text %q", clip(n.Value))
}
