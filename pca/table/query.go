package table

import (
	"fmt"
	"strings"
)

// checkQuery refuses what is not one query that reads, and tells whether its rows come in
// an order of its own.
func checkQuery(query string) (ordered bool, err error) {
	words, statements := queryWords(query)
	if len(words) == 0 {
		return false, &Error{Kind: WrongInput, Problem: "read.query: is empty"}
	}
	if statements > 1 {
		return false, &Error{Kind: WrongInput, Problem: "read.query: holds several statements, expected one"}
	}
	switch words[0] {
	case "select", "with", "values", "table":
	default:
		return false, &Error{Kind: WrongInput, Problem: fmt.Sprintf("read.query: begins with %q, expected select, with, values or table", words[0])}
	}
	for i := range words[1:] {
		ordered = ordered || words[i] == "order" && words[i+1] == "by"
	}
	return ordered, nil
}

// queryWords lists the words of SQL outside parentheses, in lower case, and counts the
// statements. Names and texts in quotes and comments are passed over.
func queryWords(query string) (words []string, statements int) {
	depth, fresh := 0, true
	for i := 0; i < len(query); {
		c := query[i]
		rest := query[i:]
		switch {
		case strings.HasPrefix(rest, "--"):
			i += indexOr(rest, "\n")
			continue
		case strings.HasPrefix(rest, "/*"):
			i += 2 + indexOr(rest[2:], "*/") + 2
			continue
		case c == ' ' || c == '\t' || c == '\n' || c == '\r':
			i++
			continue
		case c == ';':
			fresh = true
			i++
			continue
		}
		if fresh {
			statements++
			fresh = false
		}
		switch {
		case c == '\'' || c == '"' || c == '`':
			i += 2 + indexOr(rest[1:], string(c))
		case c == '$':
			// $tag$ text $tag$, in PostgreSQL.
			end := strings.IndexByte(rest[1:], '$')
			if end < 0 || strings.Trim(rest[1:end+1], "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_") != "" {
				i++
				break
			}
			tag := rest[:end+2]
			i += 2*len(tag) + indexOr(rest[len(tag):], tag)
		case c == '(' || c == '[':
			depth++
			i++
		case c == ')' || c == ']':
			depth--
			i++
		case isLetter(c):
			n := 1
			for n < len(rest) && (isLetter(rest[n]) || rest[n] >= '0' && rest[n] <= '9') {
				n++
			}
			if depth == 0 {
				words = append(words, strings.ToLower(rest[:n]))
			}
			i += n
		default:
			i++
		}
	}
	return words, statements
}

func isLetter(c byte) bool {
	return c == '_' || c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c >= 0x80
}

// indexOr is where sub begins in s, or its end.
func indexOr(s, sub string) int {
	if i := strings.Index(s, sub); i >= 0 {
		return i
	}
	return len(s)
}

// queryHead is the head of a result: names must differ, or columns could not be told apart.
func queryHead(o *Options, file string, names []string) (*head, error) {
	h := &head{file: file, counted: "row", dialect: newDialect(o, 0), names: names, units: make([]string, len(names)),
		unnamed: make([]bool, len(names)), sample: make([]sampleColumn, len(names))}
	seen := map[string]int{}
	for j, n := range names {
		if before, ok := seen[n]; ok {
			return nil, &Error{Kind: BadContent, File: file, Column: j + 1, Name: n, Problem: fmt.Sprintf("has the same name as column %d", before),
				Hint: "give every column a name of its own with as"}
		}
		seen[n] = j + 1
	}
	if len(names) == 0 {
		return nil, &Error{Kind: BadContent, File: file, Problem: "gives no columns"}
	}
	return h, nil
}
