package table

import (
	"bufio"
	"io"
)

// form is how the bytes of a file become rows of delimited UTF-8.
type form struct {
	encoding encoding
	note     string // what was assumed, empty for nothing worth telling
}

// open opens the text of a file in this form. What was left to be looked up is known
// afterwards.
func (f *form) open(open opener, file string) (*stream, error) {
	s, err := openText(open, file)
	if err != nil {
		return nil, err
	}
	buffered := bufio.NewReaderSize(s.Reader, encodingBytes)
	first, err := buffered.Peek(encodingBytes)
	if err != nil && err != io.EOF {
		s.Close()
		return nil, readError(file, err)
	}
	before := f.encoding
	if f.encoding == autoEncoding || f.encoding == utf16Text {
		f.encoding = encodingOf(f.encoding, first)
	}
	marked := len(first) > 1 && (first[0] == 0xff || first[0] == 0xfe)
	if f.encoding != before && !marked {
		f.note = f.encoding.assumed(0)
	}
	s.Reader = decoded(buffered, file, f.encoding)
	return s, nil
}
