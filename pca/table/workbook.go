package table

import (
	"archive/zip"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"os"
	"path"
	"strconv"
	"strings"
	"time"
)

// Bounds on what a workbook unpacks to: a few bytes can claim to be gigabytes.
const (
	longestPart  = 256 << 20 // of what is kept: texts, styles, the list of sheets
	longestSheet = 8 << 30   // of what is gone through
)

// workbook is an Office Open XML spreadsheet (ECMA-376, Part 1).
type workbook struct {
	file   string
	from   io.Closer
	zip    *zip.Reader
	sheets []sheet
	epoch  time.Time // day 0
	dates  []dateStyle
	texts  []string
}

// sheet is a worksheet of a workbook.
type sheet struct {
	name, part string
	hidden     bool
}

// openWorkbook reads all but the sheets.
func openWorkbook(open opener, file string) (*workbook, error) {
	from, err := open(file)
	if err != nil {
		return nil, pathError(file, err)
	}
	b := &workbook{file: file, from: from, epoch: time.Date(1899, 12, 30, 0, 0, 0, 0, time.UTC)}
	at, ok := from.(io.ReaderAt)
	info, err := os.Stat(file)
	if err == nil && !ok {
		err = errors.New("cannot be read at any place")
	}
	if err == nil {
		b.zip, err = zip.NewReader(at, info.Size())
	}
	if err == nil {
		err = b.index()
	}
	if err != nil {
		from.Close()
		return nil, b.damaged(err)
	}
	return b, nil
}

func (b *workbook) Close() error { return b.from.Close() }

// damaged words an error of the container or its XML.
func (b *workbook) damaged(err error) error {
	var own *Error
	if errors.As(err, &own) {
		return err
	}
	e := &Error{Kind: BadContent, File: b.file, Problem: "the spreadsheet is damaged: " + err.Error()}
	if errors.Is(err, zip.ErrFormat) || errors.Is(err, io.ErrUnexpectedEOF) || errors.Is(err, io.EOF) {
		e.Hint = "the copy may be incomplete"
	}
	return e
}

// part opens one part of the container; a missing one is an error.
func (b *workbook) part(name string, most int64) (io.ReadCloser, error) {
	for _, f := range b.zip.File {
		if !strings.EqualFold(strings.TrimPrefix(f.Name, "/"), name) {
			continue
		}
		if f.UncompressedSize64 > uint64(most) {
			return nil, &Error{Kind: BadContent, File: b.file, Problem: fmt.Sprintf("%s unpacks to %d MiB, more than %d MiB", name, f.UncompressedSize64>>20, most>>20)}
		}
		r, err := f.Open()
		if err != nil {
			return nil, b.damaged(err)
		}
		return &unpacked{r, int64(f.UncompressedSize64)}, nil
	}
	return nil, &Error{Kind: BadContent, File: b.file, Problem: "is no spreadsheet: it lacks " + name}
}

// unpacked stops a part that gives more than its entry says: the bound looked at that.
type unpacked struct {
	io.ReadCloser
	left int64
}

func (u *unpacked) Read(p []byte) (int, error) {
	n, err := u.ReadCloser.Read(p)
	if u.left -= int64(n); u.left < 0 {
		return 0, errors.New("a part is longer than its entry says")
	}
	return n, err
}

// decode reads a whole part.
func (b *workbook) decode(name string, into any) error {
	r, err := b.part(name, longestPart)
	if err != nil {
		return err
	}
	defer r.Close()
	if err := xml.NewDecoder(r).Decode(into); err != nil {
		return err
	}
	_, err = io.Copy(io.Discard, r) // the checksum stands at the end
	return err
}

// relations are what a part refers to: id to kind and target.
type relations struct {
	All []struct {
		ID     string `xml:"Id,attr"`
		Type   string `xml:"Type,attr"`
		Target string `xml:"Target,attr"`
	} `xml:"Relationship"`
}

// index reads the list of sheets, styles and shared texts.
func (b *workbook) index() error {
	var top relations
	if err := b.decode("_rels/.rels", &top); err != nil {
		return err
	}
	main := "xl/workbook.xml"
	for _, r := range top.All {
		if strings.HasSuffix(r.Type, "/officeDocument") {
			main = strings.TrimPrefix(r.Target, "/")
		}
	}
	var book struct {
		Properties struct {
			Date1904 string `xml:"date1904,attr"`
		} `xml:"workbookPr"`
		Sheets []struct {
			Name  string     `xml:"name,attr"`
			State string     `xml:"state,attr"`
			Attrs []xml.Attr `xml:",any,attr"` // the id, whose namespace has two forms
		} `xml:"sheets>sheet"`
	}
	if err := b.decode(main, &book); err != nil {
		return err
	}
	if book.Properties.Date1904 == "1" || book.Properties.Date1904 == "true" {
		b.epoch = time.Date(1904, 1, 1, 0, 0, 0, 0, time.UTC)
	}
	var links relations
	if err := b.decode(path.Join(path.Dir(main), "_rels", path.Base(main)+".rels"), &links); err != nil {
		return err
	}
	target := func(text string) string {
		if strings.HasPrefix(text, "/") {
			return text[1:]
		}
		return path.Join(path.Dir(main), text)
	}
	for _, r := range links.All {
		var err error
		switch {
		case strings.HasSuffix(r.Type, "/styles"):
			err = b.readStyles(target(r.Target))
		case strings.HasSuffix(r.Type, "/sharedStrings"):
			err = b.readTexts(target(r.Target))
		case strings.HasSuffix(r.Type, "/worksheet"):
			for _, s := range book.Sheets {
				for _, a := range s.Attrs {
					if a.Name.Local == "id" && a.Value == r.ID {
						b.sheets = append(b.sheets, sheet{s.Name, target(r.Target), s.State != "" && s.State != "visible"})
					}
				}
			}
		}
		if err != nil {
			return err
		}
	}
	if len(b.sheets) == 0 {
		return errors.New("it has no worksheet")
	}
	return nil
}

// readTexts reads the texts that cells share.
func (b *workbook) readTexts(name string) error {
	r, err := b.part(name, longestPart)
	if err != nil {
		return err
	}
	defer r.Close()
	d := xml.NewDecoder(r)
	for {
		token, err := d.Token()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return err
		}
		if e, ok := token.(xml.StartElement); ok && e.Name.Local == "si" {
			var item richText
			if err := d.DecodeElement(&item, &e); err != nil {
				return err
			}
			b.texts = append(b.texts, item.text())
		}
	}
}

// richText is a text, whole or in runs; readings beside it (rPh) are no part of it.
type richText struct {
	Plain string `xml:"t"`
	Runs  []struct {
		Text string `xml:"t"`
	} `xml:"r"`
}

func (t *richText) text() string {
	out := t.Plain
	for _, r := range t.Runs {
		out += r.Text
	}
	return out
}

// columnNumber reads the letters of a reference such as AB12: columns from 0.
func columnNumber(ref string) (column, row int, ok bool) {
	i := 0
	for ; i < len(ref) && i < 4 && ref[i]|0x20 >= 'a' && ref[i]|0x20 <= 'z'; i++ {
		column = column*26 + int(ref[i]|0x20-'a') + 1
	}
	row, err := strconv.Atoi(ref[i:])
	return column - 1, row, i > 0 && err == nil && column <= mostSheetColumns
}
