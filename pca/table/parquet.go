package table

import (
	"bytes"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"os"
	"runtime"
	"slices"
	"strings"
	"sync"

	"github.com/parquet-go/parquet-go"
)

var parquetMagic = []byte("PAR1")

// longestFooter bounds what describes the columns and row groups of a file.
const longestFooter = 64 << 20

// parquetFile is a columnar file. Only columns that are used are read.
type parquetFile struct {
	file    string
	open    opener
	h       *head
	columns []parquetColumn
}

// openParquet reads the footer, which holds names and types.
func openParquet(_ context.Context, s *setting, file string) (part, error) {
	first, err := firstBytes(s.open, file)
	if err != nil {
		return nil, err
	}
	if !bytes.HasPrefix(first, parquetMagic) {
		e := &Error{Kind: BadContent, File: file, Problem: "does not begin as a Parquet file does", Hint: "is it another format, or compressed as a whole?"}
		if bytes.HasPrefix(first, []byte("PARE")) {
			e.Problem, e.Hint = "is encrypted", ""
		}
		return nil, e
	}
	f := &parquetFile{file: file, open: s.open}
	o, err := f.connect()
	if err != nil {
		return nil, err
	}
	defer o.from.Close()
	var names []string
	err = f.guarded(func() error {
		for _, c := range leaves(o.data.Root()) {
			names = append(names, strings.Join(c.Path(), "."))
			f.columns = append(f.columns, parquetColumnOf(c))
		}
		return nil
	})
	if err != nil {
		return nil, err
	}
	if f.h, err = queryHead(s.options, file, names); err != nil {
		return nil, err
	}
	for j := range f.columns {
		f.h.sample[j] = f.columns[j].sample()
	}
	if o.data.NumRows() == 0 {
		return nil, &Error{Kind: BadContent, File: file, Problem: "has columns but no rows"}
	}
	return f, nil
}

// leaves are the columns that hold values, of groups too.
func leaves(c *parquet.Column) []*parquet.Column {
	var out []*parquet.Column
	for _, inner := range c.Columns() {
		if inner.Leaf() {
			out = append(out, inner)
		} else {
			out = append(out, leaves(inner)...)
		}
	}
	return out
}

// openedParquet is the file while it is read.
type openedParquet struct {
	from io.Closer
	at   io.ReaderAt
	data *parquet.File
}

func (f *parquetFile) connect() (*openedParquet, error) {
	from, err := f.open(f.file)
	if err != nil {
		return nil, pathError(f.file, err)
	}
	o := &openedParquet{from: from}
	err = f.guarded(func() error {
		info, err := os.Stat(f.file)
		if err != nil {
			return err
		}
		var ok bool
		if o.at, ok = from.(io.ReaderAt); !ok {
			return errors.New("cannot be read at any place")
		}
		if err := checkFooter(o.at, info.Size()); err != nil {
			return err
		}
		o.data, err = parquet.OpenFile(o.at, info.Size(), parquet.SkipPageIndex(true), parquet.SkipBloomFilters(true))
		return err
	})
	if err != nil {
		from.Close()
		return nil, err
	}
	return o, nil
}

// checkFooter looks at the end of the file before memory is set aside for what it says.
func checkFooter(at io.ReaderAt, size int64) error {
	var end [8]byte
	if size < 12 {
		return io.ErrUnexpectedEOF
	}
	if _, err := at.ReadAt(end[:], size-8); err != nil {
		return err
	}
	if !bytes.Equal(end[4:], parquetMagic) {
		return errors.New("it does not end as it should")
	}
	if n := int64(binary.LittleEndian.Uint32(end[:])); n > size-12 || n > longestFooter {
		return fmt.Errorf("its footer claims to take %d bytes", n)
	}
	return nil
}

// guarded words the errors of what it runs, and its panics: the library trusts much of
// what a file says.
func (f *parquetFile) guarded(run func() error) (err error) {
	defer func() {
		if r := recover(); r != nil {
			err = f.damaged(fmt.Errorf("%v", r))
		}
	}()
	if err := run(); err != nil {
		return f.damaged(err)
	}
	return nil
}

func (f *parquetFile) damaged(err error) error {
	var own *Error
	if errors.As(err, &own) {
		return err
	}
	e := &Error{Kind: BadContent, File: f.file, Problem: "cannot be read as Parquet: " + err.Error()}
	if errors.Is(err, io.ErrUnexpectedEOF) || errors.Is(err, io.EOF) || strings.Contains(err.Error(), "end as it should") {
		e.Hint = "the copy may be incomplete"
	}
	return e
}

func (f *parquetFile) head() *head { return f.h }

func (f *parquetFile) start(_ context.Context, l *layout) (pieces, error) {
	o, err := f.connect()
	if err != nil {
		return nil, err
	}
	p := &parquetPass{of: f, opened: o}
	width := 0
	for j, u := range l.uses {
		if u == skipped {
			continue
		}
		p.readers = append(p.readers, &columnReader{of: f, at: j, column: f.columns[j], use: u, to: l.to[j], dialect: l.dialect})
		width = max(width, l.to[j]+1)
	}
	p.size = max(1, min(1<<14, pieceCells/len(p.readers)))
	return p, nil
}

// parquetPass is a pass over the rows, row group by row group.
type parquetPass struct {
	of      *parquetFile
	opened  *openedParquet
	readers []*columnReader
	size    int // rows of a piece
	group   int // the next row group
	left    int // rows left of the one that is read
	rows    int // in the pieces before
}

func (p *parquetPass) next(b *Block) error {
	b.Count = 0
	err := p.of.guarded(func() error {
		for p.left == 0 {
			groups := p.opened.data.RowGroups()
			if p.group == len(groups) {
				return nil
			}
			if err := p.begin(groups[p.group]); err != nil {
				return err
			}
		}
		return p.fill(b, min(p.size, p.left))
	})
	if err == nil && p.left == 0 && b.Count == 0 {
		return io.EOF
	}
	return err
}

// begin turns to a row group.
func (p *parquetPass) begin(g parquet.RowGroup) error {
	p.group++
	p.left = int(g.NumRows())
	chunks := g.ColumnChunks()
	meta := p.opened.data.Metadata().RowGroups[p.group-1]
	total := int64(0)
	for _, r := range p.readers {
		facts, largest, err := checkPages(p.opened.at, &meta.Columns[r.at].MetaData)
		if err != nil {
			return fmt.Errorf("column %q: %w", p.of.h.names[r.at], err)
		}
		if total += largest; total > mostPageBytes {
			return fmt.Errorf("the pages of row group %d take more than %d MiB at once", p.group, mostPageBytes>>20)
		}
		r.turnTo(chunks[r.at].Pages(), facts)
	}
	return nil
}

// fill reads n rows of every column that is used.
func (p *parquetPass) fill(b *Block, n int) error {
	width := 0
	for _, r := range p.readers {
		if r.use == number {
			width++
		}
	}
	b.Width, b.Count, b.remarks = width, n, nil
	b.Data = slices.Grow(b.Data[:0], n*width)[:n*width]
	b.Offset, b.lines, b.extra = b.Offset[:0], b.lines[:0], b.extra[:0]
	b.times, b.groups = b.times[:0], b.groups[:0]
	for i := range n {
		b.Offset, b.lines = append(b.Offset, int32(i)), append(b.lines, int32(i+1))
	}
	if err := p.readAll(b, n); err != nil {
		return err
	}
	var first *Error
	for _, r := range p.readers {
		if r.bad != nil && (first == nil || r.bad.Line < first.Line) {
			first = r.bad
		}
		if r.rounded > 0 {
			if b.remarks == nil {
				b.remarks = map[remark]int64{}
			}
			b.remarks[remark{r.to, roundedRemark}] = r.rounded
		}
	}
	p.left -= n
	if first != nil {
		first.Line += p.rows
		return first
	}
	p.rows += n
	b.newBy = n
	return nil
}

// readAll reads n rows of the columns, those of numbers on all cores: a column goes to its
// own places in the block. Of several errors the first column's counts.
func (p *parquetPass) readAll(b *Block, n int) error {
	errs := make([]error, len(p.readers))
	read := func(i int) {
		errs[i] = p.of.guarded(func() error { return p.readers[i].read(b, n) })
	}
	threads := min(runtime.GOMAXPROCS(0), len(p.readers)/4)
	var wg sync.WaitGroup
	for t := range threads {
		wg.Go(func() {
			for i := t * len(p.readers) / threads; i < (t+1)*len(p.readers)/threads; i++ {
				if p.readers[i].use == number {
					read(i)
				}
			}
		})
	}
	wg.Wait()
	for i, r := range p.readers {
		if threads == 0 || r.use != number {
			read(i)
		}
		var own *Error
		if errors.As(errs[i], &own) {
			own.Problem = fmt.Sprintf("column %q after row %d: %s", p.of.h.names[r.at], p.rows, own.Problem)
			return own
		}
	}
	return nil
}

func (p *parquetPass) parse(q *parser, b *Block) error {
	b.Rows, b.blank = b.Count, 0
	if !q.time {
		b.times = nil
	}
	if !q.group {
		b.groups = nil
	}
	return nil
}

func (p *parquetPass) Close() error {
	err := p.of.guarded(func() error {
		for _, r := range p.readers {
			r.close()
		}
		return nil
	})
	if other := p.opened.from.Close(); err == nil && other != nil {
		err = p.of.damaged(other)
	}
	return err
}
