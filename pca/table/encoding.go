package table

import (
	"bufio"
	"bytes"
	"fmt"
	"io"
	"unicode/utf16"
	"unicode/utf8"
)

// encoding is how the characters of a text are stored.
type encoding string

const (
	autoEncoding encoding = ""
	utf8Text     encoding = "utf-8"
	utf16Text    encoding = "utf-16" // the byte order is looked up
	latin1Text   encoding = "latin-1"
	utf16Little  encoding = "utf-16 with the low byte first"
	utf16Big     encoding = "utf-16 with the high byte first"
)

// Encodings lists what Options.Encoding may be, beside empty.
func Encodings() []string { return []string{string(utf8Text), string(utf16Text), string(latin1Text)} }

// encodingBytes is how much of a text is looked at for its encoding.
const encodingBytes = 4096

// encodingOf tells the encoding from how a text begins. Without a mark, a text is UTF-16
// when half its bytes are as good as all zero, which no text of numbers in another encoding has.
func encodingOf(asked encoding, first []byte) encoding {
	if asked == utf8Text || asked == latin1Text {
		return asked
	}
	switch {
	case bytes.HasPrefix(first, []byte{0xff, 0xfe}):
		return utf16Little
	case bytes.HasPrefix(first, []byte{0xfe, 0xff}):
		return utf16Big
	}
	var zeros [2]int
	for i, c := range first {
		if c == 0 {
			zeros[i%2]++
		}
	}
	half := len(first) / 2
	switch {
	case half >= 4 && zeros[0] == 0 && 10*zeros[1] >= 9*half:
		return utf16Little
	case half >= 4 && zeros[1] == 0 && 10*zeros[0] >= 9*half:
		return utf16Big
	case asked == utf16Text:
		return utf16Little // RFC 2781 leaves it open; what most programs write
	}
	return autoEncoding
}

// decoded is the text as UTF-8.
func decoded(r *bufio.Reader, file string, e encoding) io.Reader {
	switch e {
	case latin1Text:
		return &refilled{fill: func(out []byte) ([]byte, error) { return fromLatin1(out, r) }}
	case utf16Little, utf16Big:
		u := &utf16Reader{r: r, file: file, big: e == utf16Big, line: 1}
		return &refilled{fill: u.fill}
	}
	return r
}

// windows1252 is what the bytes 0x80 to 0x9f mean where they are no control characters
// (WHATWG Encoding Standard, index windows-1252, which is also its latin1).
var windows1252 = [32]rune{
	0x20ac, 0x81, 0x201a, 0x0192, 0x201e, 0x2026, 0x2020, 0x2021, 0x02c6, 0x2030, 0x0160, 0x2039, 0x0152, 0x8d, 0x017d, 0x8f,
	0x90, 0x2018, 0x2019, 0x201c, 0x201d, 0x2022, 0x2013, 0x2014, 0x02dc, 0x2122, 0x0161, 0x203a, 0x0153, 0x9d, 0x017e, 0x0178,
}

// fromLatin1 turns some Windows-1252, which holds Latin-1, into UTF-8.
func fromLatin1(out []byte, r *bufio.Reader) ([]byte, error) {
	if _, err := r.Peek(1); err != nil {
		return out, err
	}
	some, _ := r.Peek(r.Buffered())
	for _, c := range some {
		switch {
		case c < 0x80:
			out = append(out, c)
		case c < 0xa0:
			out = utf8.AppendRune(out, windows1252[c-0x80])
		default:
			out = utf8.AppendRune(out, rune(c))
		}
	}
	_, err := r.Discard(len(some))
	return out, err
}

// utf16Reader turns UTF-16 into UTF-8; its mark becomes that of UTF-8.
type utf16Reader struct {
	r    *bufio.Reader
	file string
	big  bool
	line int
}

func (u *utf16Reader) fill(out []byte) ([]byte, error) {
	for len(out) == 0 || u.r.Buffered() >= 4 {
		c, err := u.unit()
		if err != nil {
			return out, err
		}
		if utf16.IsSurrogate(c) {
			low, err := u.unit()
			if err != nil && err != io.EOF {
				return out, err
			}
			c = utf16.DecodeRune(c, low)
			if err == io.EOF || c == utf8.RuneError {
				return out, &Error{Kind: BadContent, File: u.file, Line: u.line, absolute: true,
					Problem: "holds half a character of UTF-16", Hint: "the file is damaged, or in another encoding: see read.encoding"}
			}
		}
		if c == '\n' {
			u.line++
		}
		out = utf8.AppendRune(out, c)
	}
	return out, nil
}

// unit reads two bytes.
func (u *utf16Reader) unit() (rune, error) {
	a, err := u.r.ReadByte()
	if err != nil {
		return 0, err
	}
	b, err := u.r.ReadByte()
	if err == io.EOF {
		return 0, &Error{Kind: BadContent, File: u.file, Line: u.line, absolute: true,
			Problem: "ends in the middle of a character of UTF-16", Hint: "the copy is incomplete"}
	}
	if err != nil {
		return 0, err
	}
	if u.big {
		a, b = b, a
	}
	return rune(b)<<8 | rune(a), nil
}

// notUTF8 finds the first line that is not UTF-8 in a text; 0 for none. A character that
// the end of the text cuts does not count.
func notUTF8(text []byte) (line int) {
	if utf8.Valid(text) {
		return 0
	}
	line = 1
	for len(text) > 0 {
		r, size := utf8.DecodeRune(text)
		if r == utf8.RuneError && size == 1 {
			if !utf8.FullRune(text) {
				return 0
			}
			return line
		}
		if r == '\n' {
			line++
		}
		text = text[size:]
	}
	return 0
}

// assumed is the note about an encoding that nobody asked for and no mark says.
func (e encoding) assumed(line int) string {
	if line > 0 {
		return fmt.Sprintf("is not UTF-8 (line %d), so it was read as Latin-1 (Windows-1252); read.encoding says otherwise", line)
	}
	return fmt.Sprintf("was read as %s, as its zero bytes show", e)
}

// notUTF8Problem words that a text carried through is not UTF-8 where the head was.
const notUTF8Problem, notUTF8Hint = "is not UTF-8, as the lines before it are", "set read.encoding: latin-1 if it is Latin-1 (Windows-1252)"
