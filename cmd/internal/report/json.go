package report

import (
	"bytes"
	"encoding/json"
	"io"
)

// writeJSON writes v indented, but lists of numbers on one line: a vector of a hundred
// entries is read as one thing.
func writeJSON(out io.Writer, v any) error {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", " ")
	if err := e.Encode(v); err != nil {
		return err
	}
	_, err := out.Write(joinNumbers(b.Bytes()))
	return err
}

// joinNumbers takes the line ends out of lists that hold only numbers and nulls.
func joinNumbers(in []byte) []byte {
	out := make([]byte, 0, len(in))
	inText := false
	for i := 0; i < len(in); i++ {
		c := in[i]
		out = append(out, c)
		switch {
		case inText && c == '\\':
			i++
			out = append(out, in[i])
		case c == '"':
			inText = !inText
		case c == '[' && !inText:
			end := bytes.IndexAny(in[i+1:], "]\"{[tf")
			if end <= 0 || in[i+1+end] != ']' {
				continue
			}
			for _, piece := range bytes.Fields(in[i+1 : i+1+end]) {
				out = append(out, piece...)
				if piece[len(piece)-1] == ',' {
					out = append(out, ' ')
				}
			}
			i += end
		}
	}
	return out
}
