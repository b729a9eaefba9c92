package report

import (
	"bytes"
	"io"
	"strconv"
	"strings"
)

// csvWriter builds the lines of a comma-separated table (RFC 4180, line feed ends).
type csvWriter struct {
	b     []byte
	start bool
}

func (w *csvWriter) sep() {
	if w.start {
		w.b = append(w.b, ',')
	}
	w.start = true
}

func (w *csvWriter) text(s string) *csvWriter {
	w.sep()
	w.b = AppendCell(w.b, s)
	return w
}

func (w *csvWriter) number(v float64) *csvWriter {
	w.sep()
	w.b = appendNumber(w.b, v)
	return w
}

func (w *csvWriter) whole(v int64) *csvWriter {
	w.sep()
	w.b = strconv.AppendInt(w.b, v, 10)
	return w
}

func (w *csvWriter) flag(v bool) *csvWriter {
	w.sep()
	w.b = strconv.AppendBool(w.b, v)
	return w
}

func (w *csvWriter) end() {
	w.b = append(w.b, '\n')
	w.start = false
}

func (w *csvWriter) header(names ...string) {
	for _, n := range names {
		w.text(n)
	}
	w.end()
}

func (w *csvWriter) to(out io.Writer) error {
	_, err := io.Copy(out, bytes.NewReader(w.b))
	return err
}

// AppendCell appends a text cell, quoted where it holds a comma, quote or line end.
func AppendCell(b []byte, s string) []byte {
	if !strings.ContainsAny(s, ",\"\r\n") {
		return append(b, s...)
	}
	b = append(b, '"')
	for i := range len(s) {
		if s[i] == '"' {
			b = append(b, '"')
		}
		b = append(b, s[i])
	}
	return append(b, '"')
}
