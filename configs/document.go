package configs

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"regexp"
	"strconv"
	"strings"
	"unicode/utf8"

	"gopkg.in/yaml.v3"
)

// document returns the root of the only YAML document in text, nil when it holds nothing.
func document(text []byte) (root *yaml.Node, problem *Error) {
	if !utf8.Valid(text) {
		before := 0
		for r, n := utf8.DecodeRune(text); r != utf8.RuneError || n > 1; r, n = utf8.DecodeRune(text[before:]) {
			before += n
		}
		return nil, &Error{Line: len(split(text[:before+1])), Problem: "is not UTF-8 text", Hint: "save it as UTF-8"}
	}
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
	if isNull(doc.Content[0]) {
		return nil, nil
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
		line = len(split(reached(text)))
	}
	lines := split(text)
	line = min(line, len(lines)) // the end counts as a line of its own
	return &Error{Line: line, Problem: "is not valid YAML: " + message, Hint: syntaxHint(lines[line-1], message)}
}

func syntaxHint(line, message string) string {
	switch {
	case strings.HasPrefix(strings.TrimLeft(line, " "), "\t"):
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

// breaks are the line ends of YAML 1.1, which the reader counts.
var breaks = regexp.MustCompile("\r\n|[\n\r\u0085\u2028\u2029]")

// split cuts text into lines, at least one.
func split(text []byte) []string {
	lines := breaks.Split(string(text), -1)
	if last := len(lines) - 1; last > 0 && lines[last] == "" {
		return lines[:last]
	}
	return lines
}

// reached is the text that the YAML reader has taken in when it fails, handed one byte at
// a time so that it does not run ahead.
func reached(text []byte) []byte {
	feed := &byteFeed{rest: text}
	decoder := yaml.NewDecoder(feed)
	for {
		var n yaml.Node
		if err := decoder.Decode(&n); err != nil {
			return text[:len(text)-len(feed.rest)]
		}
	}
}

type byteFeed struct{ rest []byte }

func (f *byteFeed) Read(b []byte) (int, error) {
	if len(f.rest) == 0 {
		return 0, io.EOF
	}
	n := copy(b[:min(1, len(b))], f.rest)
	f.rest = f.rest[n:]
	return n, nil
}

// isNull tells whether nothing, or YAML's word for it, stands at a node.
func isNull(n *yaml.Node) bool { return n.Kind == yaml.ScalarNode && n.ShortTag() == "!!null" }

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
