package table

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/klauspost/compress/zstd"
	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/compress"
	"github.com/parquet-go/parquet-go/deprecated"
	"github.com/parquet-go/parquet-go/encoding/thrift"
	parquetformat "github.com/parquet-go/parquet-go/format"
)

// Files by other writers, from Apache Parquet's own collection; see PROVENANCE.md. The
// values are from memory: rows count up by month and minute, decimals are 1.00 to 24.00.
func TestPublishedParquet(t *testing.T) {
	var decimals []float64
	for i := range 24 {
		decimals = append(decimals, float64(i+1))
	}
	tenth := float64(float32(1.1))
	plain := func(ids ...float64) (data []float64) {
		for _, id := range ids {
			odd := math.Mod(id, 2)
			data = append(data, id, 1-odd, odd, odd, odd, 10*odd, odd*tenth, odd*10.1)
		}
		return data
	}
	for name, want := range map[string]struct {
		data          []float64
		times, groups string
	}{
		"alltypes_plain": {plain(4, 5, 6, 7, 2, 3, 0, 1), "2009-03-01T00:00:00 2009-03-01T00:01:00 2009-04-01T00:00:00 2009-04-01T00:01:00 2009-02-01T00:00:00 2009-02-01T00:01:00 2009-01-01T00:00:00 2009-01-01T00:01:00",
			"0 1 0 1 0 1 0 1"},
		"alltypes_plain.snappy": {plain(6, 7), "2009-04-01T00:00:00 2009-04-01T00:01:00", "0 1"},
		"datapage_v2.snappy":    {[]float64{1, 2, 1, 2, 3, 1, 3, 4, 1, 4, 5, 0, 5, 2, 1}, "", ""},
		"lz4_raw_compressed":    {[]float64{1593604800, 42, 1593604800, 7.7, 1593604801, 42.125, 1593604801, 7.7}, "", ""},
		"single_nan":            {[]float64{math.NaN()}, "", ""},
		"byte_array_decimal":    {decimals, "", ""},
		"fixed_length_decimal":  {decimals, "", ""},
		"int32_decimal":         {decimals, "", ""},
		"int64_decimal":         {decimals, "", ""},
	} {
		o := Options{Files: []string{filepath.Join("../../testdata/reference/parquet", name+".parquet")}}
		if want.times != "" {
			o.Time, o.Groups = "timestamp_col", "string_col"
		}
		got, err := collect(o, chunkBytes, 2)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if !sameNumbers(got.data, want.data) || strings.Join(got.times, " ") != want.times || strings.Join(got.groups, " ") != want.groups {
			t.Errorf("%s: %v %v %v", name, got.data, got.times, got.groups)
		}
	}
}

// kinds is a row with a column of every kind.
type kinds struct {
	Day      int32     `parquet:"day,date"`
	Moment   time.Time `parquet:"moment,timestamp(microsecond)"`
	Local    int64     `parquet:"local,timestamp(millisecond:local)"`
	Whole    int64     `parquet:"whole"`
	Unsigned uint64    `parquet:"unsigned"`
	Small    uint32    `parquet:"small"`
	Narrow   float32   `parquet:"narrow"`
	Truth    bool      `parquet:"truth"`
	Money    int64     `parquet:"money,decimal(3:18)"`
	Maybe    *float64  `parquet:"maybe,optional"`
	Name     string    `parquet:"name,dict"`
	Many     []float64 `parquet:"many,list"`
	Inner    struct {
		Flow float64 `parquet:"flow"`
	} `parquet:"inner"`
}

func writeKinds(t testing.TB, path string, codec compress.Codec, n, group int) (data []float64) {
	t.Helper()
	var rows []kinds
	for i := range n {
		k := kinds{Day: int32(19000 + i), Moment: time.UnixMicro(1e15 + int64(i)).UTC(), Local: int64(-i), Whole: 1<<53 + int64(i), Unsigned: math.MaxUint64 - uint64(i),
			Small: 1<<32 - 1 - uint32(i), Narrow: float32(i) / 3, Truth: i%2 == 1, Money: int64(i) * 1001, Name: fmt.Sprint("g", i%3), Many: make([]float64, i%4)}
		k.Inner.Flow = float64(i) / 7
		maybe := math.NaN()
		if i%5 != 2 {
			maybe = float64(i) * 1.1
			k.Maybe = &maybe
		}
		rows = append(rows, k)
		data = append(data, float64(k.Whole), float64(k.Unsigned), float64(k.Small), float64(k.Narrow), float64(i%2), float64(k.Money)/1000, maybe, k.Inner.Flow)
	}
	var out bytes.Buffer
	w := parquet.NewGenericWriter[kinds](&out, parquet.Compression(codec), parquet.MaxRowsPerRowGroup(int64(group)), parquet.PageBufferSize(700))
	if _, err := w.Write(rows); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, out.Bytes(), 0o666); err != nil {
		t.Fatal(err)
	}
	return data
}

// Every kind of column, under every compression, with many pages and row groups, on any
// number of threads.
func TestKindsOfParquet(t *testing.T) {
	for name, codec := range map[string]compress.Codec{"none": &parquet.Uncompressed, "snappy": &parquet.Snappy, "gzip": &parquet.Gzip, "zstd": &parquet.Zstd, "lz4": &parquet.Lz4Raw, "brotli": &parquet.Brotli} {
		path := filepath.Join(t.TempDir(), "x.parquet")
		want := writeKinds(t, path, codec, 3000, 1100)
		var notes []string
		for _, threads := range []int{1, 2, 5} {
			got, err := collect(Options{Files: []string{path}, Time: "moment", Groups: "name"}, chunkBytes, threads)
			if err != nil {
				t.Fatalf("%s: %v", name, err)
			}
			if !sameNumbers(got.data, want) {
				t.Fatalf("%s, %d threads: numbers differ", name, threads)
			}
			if got.times[1] != "2001-09-09T01:46:40.000001Z" || got.groups[2999] != "g2" || got.rows[2999] != 2999 {
				t.Errorf("%s: %q %q %d", name, got.times[1], got.groups[2999], got.rows[2999])
			}
			notes = nil
			for _, n := range got.notes {
				notes = append(notes, n.Column+" "+n.Text)
			}
		}
		// Every second whole number beyond 2^53 is odd; of those below 2^64 none within 2^11
		// of it but the 2048th is a double.
		for _, want := range []string{"day left out: times; read.time carries a column through", "many.list.element left out: lists", "truth true and false are read as 1 and 0",
			"whole 1500 whole numbers beyond 2^53 are rounded to the nearest double", "unsigned 2999 whole numbers beyond 2^53 are rounded to the nearest double"} {
			if !slices.Contains(notes, want) {
				t.Errorf("%s: no note %q among %q", name, want, notes)
			}
		}
	}
	path := filepath.Join(t.TempDir(), "x.parquet")
	writeKinds(t, path, &parquet.Snappy, 3, 10)
	for column, want := range map[string]string{"day": "2022-01-08 2022-01-09 2022-01-10", "local": "1970-01-01T00:00:00 1969-12-31T23:59:59.999 1969-12-31T23:59:59.998",
		"unsigned": "18446744073709551615 18446744073709551614 18446744073709551613", "small": "4294967295 4294967294 4294967293", "truth": "false true false", "whole": "9007199254740992 9007199254740993 9007199254740994"} {
		got, err := collect(Options{Files: []string{path}, Time: column}, chunkBytes, 2)
		if err != nil || strings.Join(got.times, " ") != want {
			t.Errorf("%s: %v %v", column, got.times, err)
		}
	}
}

// Halves by their definition (IEEE 754, binary16), decimals beside big fractions.
func TestHalvesAndDecimals(t *testing.T) {
	for bits, want := range map[uint16]float64{0: 0, 0x3c00: 1, 0xc000: -2, 0x7bff: 65504, 1: 0x1p-24, 0x0400: 0x1p-14, 0x3555: 0.333251953125, 0x7c00: math.Inf(1)} {
		if got := half(bits); got != want {
			t.Errorf("%04x: %v, want %v", bits, got, want)
		}
	}
	if !math.IsNaN(half(0x7e00)) {
		t.Error("7e00 is no NaN")
	}
	rng := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		n := new(big.Int).Mul(big.NewInt(rng.Int64()-1<<62), big.NewInt(rng.Int64N(1<<uint(1+rng.IntN(60)))))
		scale := rng.IntN(45) - 5
		power := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(scale, -scale))), nil)
		exact := new(big.Rat).SetFrac(n, power)
		if scale < 0 {
			exact = new(big.Rat).SetInt(new(big.Int).Mul(n, power))
		}
		if want, _ := exact.Float64(); decimal(n, scale) != want {
			t.Fatalf("%v at scale %d: %v, want %v", n, scale, decimal(n, scale), want)
		}
	}
}

// An infinite value is an error with its row, the first in row order whatever its column.
func TestInfiniteInParquet(t *testing.T) {
	type row struct{ A, B float64 }
	rows := make([]row, 40000)
	rows[30001].A, rows[25000].B = math.Inf(1), math.Inf(-1)
	path := filepath.Join(t.TempDir(), "x.parquet")
	if err := parquet.WriteFile(path, rows); err != nil {
		t.Fatal(err)
	}
	_, err := collect(Options{Files: []string{path}}, chunkBytes, 3)
	if want := `x.parquet: row 25001: column 2 "B": -Inf is not a finite number`; err == nil || !strings.HasSuffix(err.Error(), want) {
		t.Errorf("%v", err)
	}
}

// A wide table, whose pieces are a few rows.
func TestWideParquet(t *testing.T) {
	for _, width := range []int{1, 3000} {
		group := parquet.Group{}
		for j := range width {
			group[fmt.Sprintf("c%06d", j)] = parquet.Leaf(parquet.DoubleType)
		}
		path := filepath.Join(t.TempDir(), "x.parquet")
		var out bytes.Buffer
		w := parquet.NewWriter(&out, parquet.NewSchema("x", group))
		row := make(parquet.Row, width)
		for i := range 3 {
			for j := range row {
				row[j] = parquet.DoubleValue(float64(i*width+j)).Level(0, 0, j)
			}
			if _, err := w.WriteRows([]parquet.Row{row}); err != nil {
				t.Fatal(err)
			}
		}
		if err := w.Close(); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, out.Bytes(), 0o666); err != nil {
			t.Fatal(err)
		}
		got, err := collect(Options{Files: []string{path}}, chunkBytes, 2)
		if err != nil {
			t.Fatalf("%d columns: %v", width, err)
		}
		for i, v := range got.data {
			if v != float64(i) {
				t.Fatalf("%d columns: value %d is %v", width, i, v)
			}
		}
	}
}

// A hundred thousand columns are more than the library takes; the reader says so. A text
// repeated by a dictionary is refused before it fills memory.
func TestTooMuchParquet(t *testing.T) {
	if raced {
		t.Skip("one goroutine and hundreds of megabytes: the race detector has nothing to find, and takes minutes")
	}
	meta := parquetformat.FileMetaData{Version: 1, Schema: []parquetformat.SchemaElement{{Name: "root", NumChildren: thrift.New(int32(100000))}}}
	for j := range 100000 {
		meta.Schema = append(meta.Schema, parquetformat.SchemaElement{Name: fmt.Sprint("c", j), Type: thrift.New(parquetformat.Double), RepetitionType: thrift.New(parquetformat.Required)})
	}
	footer, err := thrift.Marshal(new(thrift.CompactProtocol), &meta)
	if err != nil {
		t.Fatal(err)
	}
	file := slices.Concat(parquetMagic, footer, binary.LittleEndian.AppendUint32(nil, uint32(len(footer))), parquetMagic)
	var e *Error
	if _, err := collect(Options{Files: []string{writeFile(t, "x.parquet", string(file))}}, chunkBytes, 1); !errors.As(err, &e) || !strings.Contains(err.Error(), "more than 65534 columns") {
		t.Errorf("%v", err)
	}
	type row struct {
		A float64
		G string `parquet:"G,dict"`
	}
	rows := make([]row, 70)
	for i := range rows {
		rows[i] = row{float64(i), strings.Repeat("g", 1<<20)}
	}
	path := filepath.Join(t.TempDir(), "x.parquet")
	if err := parquet.WriteFile(path, rows); err != nil {
		t.Fatal(err)
	}
	if _, err := collect(Options{Files: []string{path}, Groups: "G"}, chunkBytes, 1); err == nil || !strings.Contains(err.Error(), "texts in 65 rows take more than 64 MiB") {
		t.Errorf("%v", err)
	}
}

// A page that unpacks to far more than its header says is refused before it is unpacked.
func TestParquetBombs(t *testing.T) {
	path := filepath.Join(t.TempDir(), "x.parquet")
	var packed bytes.Buffer
	z, err := zstd.NewWriter(&packed, zstd.WithEncoderLevel(zstd.SpeedBestCompression))
	if err != nil {
		t.Fatal(err)
	}
	zeros := make([]byte, 1<<20)
	for range 3 << 10 { // 3 GiB
		z.Write(zeros)
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	for name, c := range map[string]struct {
		header parquetformat.PageHeader
		body   []byte
		want   string
	}{
		"zstd":   {parquetformat.PageHeader{UncompressedPageSize: 800, CompressedPageSize: int32(packed.Len())}, packed.Bytes(), "zstd data unpacks to too much"},
		"claim":  {parquetformat.PageHeader{UncompressedPageSize: math.MaxInt32, CompressedPageSize: 10}, make([]byte, 10), "unpacks to 2047 MiB, more than 1024 MiB"},
		"values": {parquetformat.PageHeader{UncompressedPageSize: 80, CompressedPageSize: 10}, make([]byte, 10), "holds 1000000000 values"},
		"cut":    {parquetformat.PageHeader{UncompressedPageSize: 80, CompressedPageSize: 800}, make([]byte, 10), "unexpected EOF"},
	} {
		h := c.header
		h.DataPageHeader = thrift.New(parquetformat.DataPageHeader{NumValues: 100})
		if name == "values" {
			h.DataPageHeader.V.NumValues = 1e9
		}
		head, err := thrift.Marshal(new(thrift.CompactProtocol), &h)
		if err != nil {
			t.Fatal(err)
		}
		page := append(head, c.body...)
		kind := parquetformat.Double
		footer, err := thrift.Marshal(new(thrift.CompactProtocol), &parquetformat.FileMetaData{Version: 1, NumRows: 100,
			Schema: []parquetformat.SchemaElement{{Name: "root", NumChildren: thrift.New(int32(1))}, {Name: "a", Type: thrift.New(kind), RepetitionType: thrift.New(parquetformat.Required)}},
			RowGroups: []parquetformat.RowGroup{{NumRows: 100, Columns: []parquetformat.ColumnChunk{{MetaData: parquetformat.ColumnMetaData{Type: kind, Codec: parquetformat.Zstd,
				PathInSchema: []string{"a"}, NumValues: 100, DataPageOffset: 4, TotalCompressedSize: int64(len(page)), Encoding: []parquetformat.Encoding{parquetformat.Plain}}}}}}})
		if err != nil {
			t.Fatal(err)
		}
		file := slices.Concat(parquetMagic, page, footer, binary.LittleEndian.AppendUint32(nil, uint32(len(footer))), parquetMagic)
		if err := os.WriteFile(path, file, 0o666); err != nil {
			t.Fatal(err)
		}
		if _, err := collect(Options{Files: []string{path}}, chunkBytes, 1); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// Types in the older form, by converted types.
func TestOlderTypes(t *testing.T) {
	for older, want := range map[deprecated.ConvertedType]meaning{deprecated.UTF8: meansText, deprecated.Date: meansDate, deprecated.TimestampMicros: meansTime,
		deprecated.Uint32: meansUnsigned, deprecated.Decimal: meansNumber, deprecated.TimeMillis: meansClock} {
		kind := parquetformat.Int32
		switch older {
		case deprecated.UTF8:
			kind = parquetformat.ByteArray
		case deprecated.TimestampMicros:
			kind = parquetformat.Int64
		}
		footer, err := thrift.Marshal(new(thrift.CompactProtocol), &parquetformat.FileMetaData{Version: 1,
			Schema: []parquetformat.SchemaElement{{Name: "root", NumChildren: thrift.New(int32(1))},
				{Name: "a", Type: thrift.New(kind), RepetitionType: thrift.New(parquetformat.Required), ConvertedType: thrift.New(older), Scale: thrift.New(int32(2)), Precision: thrift.New(int32(9))}}})
		if err != nil {
			t.Fatal(err)
		}
		file := slices.Concat(parquetMagic, footer, binary.LittleEndian.AppendUint32(nil, uint32(len(footer))), parquetMagic)
		f, err := parquet.OpenFile(bytes.NewReader(file), int64(len(file)))
		if err != nil {
			t.Fatal(err)
		}
		c := parquetColumnOf(f.Root().Columns()[0])
		if c.meaning != want || older == deprecated.Decimal && c.scale != 2 {
			t.Errorf("converted type %d: %+v", older, c)
		}
	}
}

func BenchmarkReadParquet(b *testing.B) {
	path := filepath.Join(b.TempDir(), "x.parquet")
	group := parquet.Group{}
	for j := range 50 {
		group[fmt.Sprintf("c%02d", j)] = parquet.Compressed(parquet.Leaf(parquet.DoubleType), &parquet.Snappy)
	}
	var out bytes.Buffer
	w := parquet.NewWriter(&out, parquet.NewSchema("x", group))
	rng := rand.New(rand.NewPCG(5, 6))
	record := make(parquet.Row, 50)
	for range 60000 {
		for j := range record {
			record[j] = parquet.DoubleValue(rng.NormFloat64()*200).Level(0, 0, j)
		}
		if _, err := w.WriteRows([]parquet.Row{record}); err != nil {
			b.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		b.Fatal(err)
	}
	if err := os.WriteFile(path, out.Bytes(), 0o666); err != nil {
		b.Fatal(err)
	}
	b.Run("format=parquet/reader=axisfold", func(b *testing.B) {
		b.SetBytes(60000 * 50 * 8)
		b.ReportAllocs()
		for b.Loop() {
			t, err := Open(b.Context(), Options{Files: []string{path}})
			if err != nil {
				b.Fatal(err)
			}
			if err := t.Each(b.Context(), 2, func(int, *Block) error { return nil }, func(*Block) error { return nil }); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// Pages with fewer bytes than their values take are an error, not what memory held before;
// fuzzing found this one: decimals of 11 bytes whose type says 24.
func TestShortPages(t *testing.T) {
	seed, err := os.ReadFile("testdata/fuzz/FuzzParquet/short-page")
	if err != nil {
		t.Fatal(err)
	}
	quoted := strings.TrimSuffix(strings.TrimPrefix(strings.Split(string(seed), "\n")[1], "[]byte("), ")")
	file, err := strconv.Unquote(quoted)
	if err != nil {
		t.Fatal(err)
	}
	_, err = collect(Options{Files: []string{writeFile(t, "x.parquet", file)}}, chunkBytes, 1)
	if err == nil || !strings.Contains(err.Error(), "a page of 270 bytes claims 24 values") {
		t.Errorf("%v", err)
	}
}
