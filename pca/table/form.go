package table

import (
	"bufio"
	"bytes"
	"io"
)

// form is how the bytes of a file become rows of delimited UTF-8. What is left to be looked
// up is known once the text was opened for the first time, and stays.
type form struct {
	encoding  encoding
	separator byte // 0: not looked up yet
	blanks    bool // runs of blanks between cells, which become one tab
	turned    bool // a line holds a channel
	note      string
}

// sniffedBytes is how much of a text is looked at for its encoding and separator.
const sniffedBytes = 1 << 16

// open opens the text of a file in this form; ofFormat is the separator that its format
// has, 0 for any.
func (f *form) open(o *Options, open opener, file string, ofFormat byte) (*stream, error) {
	s, err := openText(open, file)
	if err != nil {
		return nil, err
	}
	if err := f.shape(s, o, file, ofFormat); err != nil {
		s.Close()
		return nil, err
	}
	return s, nil
}

// shape puts what the form asks for between the stream and its bytes.
func (f *form) shape(s *stream, o *Options, file string, ofFormat byte) error {
	buffered := bufio.NewReaderSize(s.Reader, sniffedBytes)
	first, err := buffered.Peek(encodingBytes)
	if err != nil && err != io.EOF {
		return readError(file, err)
	}
	if f.encoding == autoEncoding || f.encoding == utf16Text {
		before := f.encoding
		f.encoding = encodingOf(f.encoding, first)
		marked := len(first) > 1 && (first[0] == 0xff || first[0] == 0xfe)
		if f.encoding != before && !marked {
			f.note = f.encoding.assumed(0)
		}
	}
	// For UTF-8 this is the same buffer.
	buffered = bufio.NewReaderSize(decoded(buffered, file, f.encoding), sniffedBytes)
	s.Reader = buffered
	if f.separator == 0 {
		text, err := buffered.Peek(sniffedBytes)
		if err != nil && err != io.EOF {
			return readError(file, err)
		}
		text = bytes.TrimPrefix(text, byteOrderMark)
		f.separator = separatorOf(o, ofFormat, text)
		if f.separator == ' ' {
			f.separator, f.blanks = '\t', true
		}
	}
	if !f.blanks && !f.turned {
		return nil
	}
	if mark, _ := buffered.Peek(len(byteOrderMark)); bytes.Equal(mark, byteOrderMark) {
		buffered.Discard(len(mark))
	}
	if f.blanks {
		s.Reader = &refilled{fill: (&blankReader{r: s.Reader, start: true}).fill}
	}
	if f.turned {
		s.Reader = &refilled{fill: (&turner{r: s.Reader, d: newDialect(o, f.separator), file: file}).fill}
	}
	return nil
}
