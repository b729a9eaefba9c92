package table

import (
	"errors"
	"fmt"
	"io"
	"math"

	"github.com/parquet-go/parquet-go"
)

// columnReader goes through the values of one column.
type columnReader struct {
	of      *parquetFile
	at      int // among the file's columns
	column  parquetColumn
	use     use
	to      int
	dialect *dialect

	pages  parquet.Pages
	facts  []pageFacts // of the pages to come
	page   parquet.Page
	values parquet.ValueReader
	buffer [512]parquet.Value
	unread []parquet.Value

	// Of the rows read last: the first value that is no number, and how many are rounded.
	bad     *Error
	rounded int64
}

func (r *columnReader) turnTo(pages parquet.Pages, facts []pageFacts) {
	r.close()
	r.pages, r.facts = pages, facts
}

// check compares the values that a page claims with the room it has for them: the library
// fills up with what its memory held before.
func (r *columnReader) check(page parquet.Page) error {
	if len(r.facts) == 0 {
		return errors.New("more pages than headers")
	}
	f := r.facts[0]
	r.facts = r.facts[1:]
	if there := page.NumValues() - page.NumNulls(); f.plain && there*r.column.bits > 8*f.bytes {
		return fmt.Errorf("a page of %d bytes claims %d values", f.bytes, there)
	}
	return nil
}

func (r *columnReader) close() {
	r.release()
	if r.pages != nil {
		r.pages.Close()
		r.pages = nil
	}
}

func (r *columnReader) release() {
	if r.page != nil {
		parquet.Release(r.page)
		r.page, r.values = nil, nil
	}
	r.unread = nil
}

// more returns the next values, at most n.
func (r *columnReader) more(n int) ([]parquet.Value, error) {
	for len(r.unread) == 0 {
		if r.values == nil {
			page, err := r.pages.ReadPage()
			if err == io.EOF {
				return nil, io.ErrUnexpectedEOF // the row group has more rows
			}
			if err != nil {
				return nil, err
			}
			r.page, r.values = page, page.Values()
			if err := r.check(page); err != nil {
				return nil, err
			}
		}
		got, err := r.values.ReadValues(r.buffer[:])
		r.unread = r.buffer[:got]
		if err == io.EOF && got == 0 {
			r.release()
		} else if err != nil && err != io.EOF {
			return nil, err
		}
	}
	out := r.unread[:min(n, len(r.unread))]
	r.unread = r.unread[len(out):]
	return out, nil
}

// read puts the next n values where they belong in the block. It notes the first value
// that is no number, in the row counted from 1 in the block.
func (r *columnReader) read(b *Block, n int) error {
	r.bad, r.rounded = nil, 0
	for row := 0; row < n; {
		values, err := r.more(n - row)
		if err != nil {
			return err
		}
		for i := range values {
			v := &values[i]
			if r.use != number {
				if r.carry(b, v); len(b.extra) > longestRow { // few bytes can repeat a long text
					return fmt.Errorf("its texts in %d rows take more than %d MiB", row+1, longestRow>>20)
				}
				row++
				continue
			}
			x := math.NaN()
			if !v.IsNull() {
				var off bool
				if x, off = r.column.number(v); off {
					r.rounded++
				}
				x = r.dialect.coded(x)
			}
			if math.IsInf(x, 0) && r.bad == nil {
				r.bad = &Error{Kind: BadContent, File: r.of.file, Line: row + 1, Column: r.at + 1, Name: r.of.h.names[r.at], counted: "row",
					absolute: true, Problem: fmt.Sprintf("%v is not a finite number", x)}
			}
			b.Data[row*b.Width+r.to] = x
			row++
		}
	}
	return nil
}

// carry takes a value of the time or group column along as text.
func (r *columnReader) carry(b *Block, v *parquet.Value) {
	s := span{from: int32(len(b.extra)), quoted: true}
	if !v.IsNull() {
		b.extra = r.column.appendText(b.extra, v)
	}
	s.to = int32(len(b.extra))
	if r.use != groupText {
		b.times = append(b.times, s)
	}
	if r.use != timeText {
		b.groups = append(b.groups, s)
	}
}
