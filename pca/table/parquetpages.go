package table

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"

	"github.com/andybalholm/brotli"
	"github.com/klauspost/compress/gzip"
	"github.com/parquet-go/parquet-go/encoding/thrift"
	parquetformat "github.com/parquet-go/parquet-go/format"
)

// Bounds on pages: a few bytes can claim to be gigabytes. A page holds at most 2^26
// values (a whole row group of a column that is one value fits), and what it unpacks to
// is known before it is unpacked.
const (
	mostPageBytes  = 1 << 30 // of all columns at once
	mostPageValues = 1 << 26
	longestHeader  = 16 << 20
)

// pageFacts are what a data page has room for.
type pageFacts struct {
	plain bool  // each value takes its width
	bytes int64 // for values, at most
}

// checkPages walks the page headers of a column in a row group and returns facts about the
// data pages, and about the most memory that one page takes.
func checkPages(at io.ReaderAt, m *parquetformat.ColumnMetaData) (facts []pageFacts, largest int64, err error) {
	start := m.DataPageOffset
	if m.DictionaryPageOffset > 0 && m.DictionaryPageOffset < start {
		start = m.DictionaryPageOffset
	}
	if start < 0 || m.TotalCompressedSize < 0 {
		return nil, 0, errors.New("its place in the file is below zero")
	}
	dictionary := int64(0)
	for place, end := start, start+m.TotalCompressedSize; place < end; {
		h, size, err := pageHeader(at, place, end)
		if err != nil {
			return nil, 0, err
		}
		place += size
		values := int64(h.DataPageHeader.V.NumValues) + int64(h.DataPageHeaderV2.V.NumValues) + int64(h.DictionaryPageHeader.V.NumValues)
		packed, unpacked := int64(h.CompressedPageSize), int64(h.UncompressedPageSize)
		switch {
		case packed < 0 || unpacked < 0 || values < 0:
			return nil, 0, errors.New("a page has a size below zero")
		case packed > end-place:
			return nil, 0, io.ErrUnexpectedEOF
		case unpacked > mostPageBytes:
			return nil, 0, fmt.Errorf("a page unpacks to %d MiB, more than %d MiB", unpacked>>20, mostPageBytes>>20)
		case values > mostPageValues:
			return nil, 0, fmt.Errorf("a page holds %d values, more than %d", values, mostPageValues)
		}
		if err := checkUnpacked(at, place, packed, h, m.Codec); err != nil {
			return nil, 0, err
		}
		size = unpacked + 8*values
		if h.Type == parquetformat.DictionaryPage {
			dictionary = size
		} else {
			largest = max(largest, size)
			v1, v2 := h.DataPageHeader.V, h.DataPageHeaderV2
			p := pageFacts{v1.Encoding == parquetformat.Plain, unpacked}
			if v2.Valid {
				p = pageFacts{v2.V.Encoding == parquetformat.Plain, unpacked - int64(v2.V.RepetitionLevelsByteLength) - int64(v2.V.DefinitionLevelsByteLength)}
			}
			facts = append(facts, p)
		}
		place += packed
	}
	return facts, largest + dictionary, nil
}

// pageHeader reads the header at a place and tells its size.
func pageHeader(at io.ReaderAt, place, end int64) (*parquetformat.PageHeader, int64, error) {
	for take := int64(512); ; take *= 8 {
		text := make([]byte, min(take, end-place))
		if _, err := at.ReadAt(text, place); err != nil && err != io.EOF {
			return nil, 0, err
		}
		var protocol thrift.CompactProtocol
		r := protocol.NewReaderFromBytes(text)
		h := new(parquetformat.PageHeader)
		err := thrift.NewDecoder(r).Decode(h)
		if err == nil {
			return h, int64(r.BytesRead()), nil
		}
		if take >= end-place || take >= longestHeader {
			return nil, 0, fmt.Errorf("reading the header of a page: %w", err)
		}
	}
}

// checkUnpacked finds out what a page unpacks to, where its size leaves room for more
// than the bound: the header may say less than the truth.
func checkUnpacked(at io.ReaderAt, place, packed int64, h *parquetformat.PageHeader, codec parquetformat.CompressionCodec) error {
	levels := int64(0)
	if v := h.DataPageHeaderV2; v.Valid { // stand before what is compressed
		if v.V.IsCompressed.Valid && !v.V.IsCompressed.V {
			return nil
		}
		levels = int64(v.V.RepetitionLevelsByteLength) + int64(v.V.DefinitionLevelsByteLength)
	}
	if levels < 0 || levels > packed {
		return errors.New("the levels of a page are longer than the page")
	}
	body := io.NewSectionReader(at, place+levels, packed-levels)
	if codec == parquetformat.Lz4Raw && packed > levels {
		return checkLZ4(body)
	}
	// The most that each codec can make of a byte.
	most := map[parquetformat.CompressionCodec]int64{parquetformat.Snappy: 22, parquetformat.Gzip: 1032, parquetformat.Zstd: 1 << 15, parquetformat.Brotli: 1 << 20}[codec]
	if packed*most <= mostPageBytes {
		return nil
	}
	switch codec {
	case parquetformat.Snappy:
		var first [binary.MaxVarintLen32]byte
		n, _ := io.ReadFull(body, first[:])
		if size, k := binary.Uvarint(first[:n]); k <= 0 || size > mostPageBytes {
			return errors.New("a page of snappy data unpacks to too much")
		}
	case parquetformat.Zstd:
		return checkZstd(body)
	case parquetformat.Gzip:
		z, err := gzip.NewReader(body)
		if err != nil {
			return err
		}
		return count(z)
	case parquetformat.Brotli:
		return count(brotli.NewReader(body))
	}
	return nil
}

// count unpacks and forgets.
func count(r io.Reader) error {
	n, err := io.Copy(io.Discard, io.LimitReader(r, mostPageBytes+1))
	if err == nil && n > mostPageBytes {
		err = fmt.Errorf("a page unpacks to more than %d MiB", mostPageBytes>>20)
	}
	return err
}

// checkLZ4 walks a block of lz4 data (lz4_Block_format.md) and adds up what it unpacks to:
// the library takes any fault in it for too little room, and takes ever more.
func checkLZ4(r *io.SectionReader) error {
	block := make([]byte, r.Size())
	if _, err := io.ReadFull(r, block); err != nil {
		return err
	}
	bad := errors.New("a page holds damaged lz4 data")
	at, total := 0, 0
	length := func(n int) int { // of literals or a match, with the bytes that go on counting
		if n == 15 {
			for at < len(block) {
				b := int(block[at])
				at++
				if n += b; b < 255 {
					return n
				}
			}
		}
		return n
	}
	for at < len(block) {
		token := int(block[at])
		at++
		literals := length(token >> 4)
		if literals > len(block)-at {
			return bad
		}
		at += literals
		total += literals
		if at == len(block) {
			break // the last sequence has no match
		}
		if len(block)-at < 2 {
			return bad
		}
		back := int(binary.LittleEndian.Uint16(block[at:]))
		at += 2
		if back == 0 || back > total {
			return bad
		}
		if total += 4 + length(token&15); total > mostPageBytes {
			return errors.New("a page of lz4 data unpacks to too much")
		}
		if at == len(block) {
			return bad
		}
	}
	return nil
}

// checkZstd adds up what the blocks of zstd data can hold at most (RFC 8878, 3.1.1.2):
// their headers tell without unpacking.
func checkZstd(r *io.SectionReader) error {
	total, place := int64(0), int64(0)
	var b [18]byte
	for place < r.Size() {
		n, _ := r.ReadAt(b[:], place)
		if n < 6 {
			return io.ErrUnexpectedEOF
		}
		if skippableFrame(b[:4]) {
			place += 8 + int64(binary.LittleEndian.Uint32(b[4:]))
			continue
		}
		// Magic, descriptor, window, dictionary, content size: 3.1.1.1.
		descriptor := b[4]
		size := int64(5) + []int64{0, 1, 2, 4}[descriptor&3] + []int64{0, 2, 4, 8}[descriptor>>6]
		if descriptor&0x20 == 0 {
			size++ // window
		} else if descriptor>>6 == 0 {
			size++ // a content size of one byte
		}
		place += size
		for last := false; !last; {
			if n, _ := r.ReadAt(b[:3], place); n < 3 {
				return io.ErrUnexpectedEOF
			}
			block := int64(b[0]) | int64(b[1])<<8 | int64(b[2])<<16
			last = block&1 == 1
			kind, length := block>>1&3, block>>3
			place += 3
			switch kind {
			case 0: // as it is
				total, place = total+length, place+length
			case 1: // one byte again and again
				total, place = total+length, place+1
			default: // compressed, of at most 128 KiB
				total, place = total+1<<17, place+length
			}
			if total > 2*mostPageBytes {
				return errors.New("a page of zstd data unpacks to too much")
			}
		}
		if descriptor&4 != 0 {
			place += 4 // checksum
		}
	}
	return nil
}
