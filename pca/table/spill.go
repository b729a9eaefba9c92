package table

import (
	"bufio"
	"context"
	"encoding/binary"
	"errors"
	"io"
	"math"
	"os"
	"runtime"
)

// Spill keeps prepared rows in a file between passes, for tables that are slow to read
// again: a pass over it costs no more than reading its bytes.
type Spill struct {
	columns []Column
	file    *os.File
	w       *bufio.Writer
	size    int64
	most    int64
	blocks  []spilled
	record  []byte
}

// spilled is where a block lies in the file.
type spilled struct {
	at          int64
	bytes       int
	row         int64
	rows, count int
}

// ErrSpillFull says that a spill has reached its bound.
var ErrSpillFull = errors.New("the rows take more disk than they may")

// NewSpill makes an empty spill of the given columns in a new file at path, of at most
// most bytes. Where the system allows it the file has no name from then on, so that
// nothing is left behind whatever happens.
func NewSpill(columns []Column, path string, most int64) (*Spill, error) {
	file, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE|os.O_EXCL, 0o600)
	if err != nil {
		return nil, err
	}
	os.Remove(path) // fails where open files cannot be removed; Close tries again
	return &Spill{columns: columns, file: file, w: bufio.NewWriterSize(file, 1<<20), most: most}, nil
}

// Append writes the rows of a block, whose width must be that of the columns. After an
// error the spill is of no use.
func (s *Spill) Append(b *Block) error {
	if b.Width != len(s.columns) {
		panic("table: block and spill differ in width")
	}
	r := s.record[:0]
	for _, v := range b.Data[:b.Rows*b.Width] {
		r = binary.LittleEndian.AppendUint64(r, math.Float64bits(v))
	}
	for _, o := range b.Offset[:b.Rows] {
		r = binary.LittleEndian.AppendUint32(r, uint32(o))
	}
	for _, texts := range [][]span{b.times, b.groups} {
		if len(texts) < b.Rows || b.Rows == 0 { // no such column
			r = append(r, 0)
			continue
		}
		r = append(r, 1)
		for _, t := range texts[:b.Rows] {
			text := b.slice(t)
			r = binary.AppendUvarint(r, uint64(len(text)))
			r = append(r, text...)
		}
	}
	s.record = r
	if s.size+int64(len(r)) > s.most {
		return ErrSpillFull
	}
	s.blocks = append(s.blocks, spilled{at: s.size, bytes: len(r), row: b.Row, rows: b.Rows, count: b.Count})
	s.size += int64(len(r))
	_, err := s.w.Write(r)
	return err
}

// Finish writes what is left; the spill can be gone through from then on.
func (s *Spill) Finish() error { return s.w.Flush() }

// Columns are the columns given to NewSpill.
func (s *Spill) Columns() []Column { return s.columns }

// Each goes through the rows in the blocks in which they were appended; see Rows.
func (s *Spill) Each(ctx context.Context, threads int, work func(worker int, b *Block) error, merge func(b *Block) error) error {
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	next := 0
	return inOrder(ctx, threads, func(b *Block) error {
		if b == nil {
			return nil
		}
		if next == len(s.blocks) {
			return io.EOF
		}
		at := s.blocks[next]
		b.Index, b.Row, b.Rows, b.Count, b.Width, b.names = next, at.row, at.rows, at.count, len(s.columns), s.columns
		next++
		if cap(b.text) < at.bytes {
			b.text = make([]byte, at.bytes)
		}
		b.text = b.text[:at.bytes]
		_, err := s.file.ReadAt(b.text, at.at)
		return err
	}, func(worker int, b *Block) error {
		b.unpack()
		return work(worker, b)
	}, func(b *Block) error {
		if b.err != nil {
			return b.err
		}
		return merge(b)
	})
}

// unpack makes rows of the record in text; what Append wrote needs no doubt.
func (b *Block) unpack() {
	r, at := b.text, 0
	b.Data = b.Data[:0]
	for range b.Rows * b.Width {
		b.Data = append(b.Data, math.Float64frombits(binary.LittleEndian.Uint64(r[at:])))
		at += 8
	}
	b.Offset, b.lines = b.Offset[:0], nil
	for range b.Rows {
		b.Offset = append(b.Offset, int32(binary.LittleEndian.Uint32(r[at:])))
		at += 4
	}
	for _, texts := range []*[]span{&b.times, &b.groups} {
		*texts = (*texts)[:0]
		at++
		if r[at-1] == 0 {
			continue
		}
		for range b.Rows {
			length, n := binary.Uvarint(r[at:])
			at += n
			*texts = append(*texts, span{from: int32(at), to: int32(at) + int32(length)})
			at += int(length)
		}
	}
}

// Close gives the file up.
func (s *Spill) Close() error {
	err := s.file.Close()
	os.Remove(s.file.Name())
	return err
}
