package table

import (
	"context"
	"io"
)

// delimited is a file of text with separators between cells.
type delimited struct {
	*setting
	h          *head
	compressed bool
}

// openDelimited opens text; a separator of 0 is looked up in the header.
func openDelimited(separator byte) func(context.Context, *setting, string) (part, error) {
	return func(_ context.Context, s *setting, file string) (part, error) {
		h, err := readHead(s.options, s.open, file, separator)
		if err != nil {
			return nil, err
		}
		first, err := firstBytes(s.open, file)
		if err != nil {
			return nil, err
		}
		return &delimited{s, h, isGzip(first) || isZstd(first)}, nil
	}
}

func (d *delimited) head() *head { return d.h }

func (d *delimited) start(context.Context, *layout) (pieces, error) {
	s, err := d.h.form.open(d.options, d.open, d.h.file, 0)
	if err != nil {
		return nil, err
	}
	c := &chunker{r: s, file: d.h.file, dialect: d.h.dialect, size: d.h.bytes + d.pieces}
	return &textPieces{d, s, c}, nil
}

// textPieces is a pass over a delimited file.
type textPieces struct {
	of     *delimited
	stream *stream
	cut    *chunker
}

func (t *textPieces) next(b *Block) error {
	b.skipHead = 0
	if t.cut.lines == 0 {
		b.skipHead = t.of.h.rows
	} else {
		t.cut.size = t.of.pieces
	}
	text, err := t.cut.next(b.text)
	if err != nil {
		return err
	}
	if text == nil {
		return io.EOF
	}
	b.text = text
	return nil
}

func (t *textPieces) parse(p *parser, b *Block) error { return p.parse(b, b.layout) }

func (t *textPieces) Close() error {
	if err := t.stream.Close(); err != nil {
		return readError(t.of.h.file, err)
	}
	return nil
}

// headRows is how many rows stand before the data.
func (o *Options) headRows() int {
	n := 1
	if o.NoHeader {
		n = 0
	}
	if o.UnitsRow {
		n++
	}
	return n
}
