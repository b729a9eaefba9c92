package table

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"testing"
)

// BenchmarkRead reads 60,000 rows of 50 channels with six to eight digits, by this package
// and the plain way.
func BenchmarkRead(b *testing.B) {
	var text bytes.Buffer
	rng := rand.New(rand.NewPCG(5, 6))
	for j := range 50 {
		fmt.Fprintf(&text, "%sch%d", []string{"", ","}[min(j, 1)], j)
	}
	for range 60000 {
		for j := range 50 {
			text.WriteByte("\n,"[min(j, 1)])
			text.Write(strconv.AppendFloat(nil, rng.NormFloat64()*200, 'f', 4+j%4, 64))
		}
	}
	path := filepath.Join(b.TempDir(), "x.csv")
	if err := os.WriteFile(path, text.Bytes(), 0o666); err != nil {
		b.Fatal(err)
	}
	for _, threads := range []int{1, 2} {
		b.Run(fmt.Sprintf("format=csv/reader=axisfold/threads=%d", threads), func(b *testing.B) {
			b.SetBytes(int64(text.Len()))
			b.ReportAllocs()
			for b.Loop() {
				t, err := Open(b.Context(), Options{Files: []string{path}})
				if err != nil {
					b.Fatal(err)
				}
				if err := t.Each(b.Context(), threads, func(int, *Block) error { return nil }, func(*Block) error { return nil }); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
	b.Run("format=csv/reader=encoding-csv/threads=1", func(b *testing.B) {
		b.SetBytes(int64(text.Len()))
		b.ReportAllocs()
		for b.Loop() {
			file, err := os.Open(path)
			if err != nil {
				b.Fatal(err)
			}
			r := csv.NewReader(file)
			r.ReuseRecord = true
			r.Read()
			row := make([]float64, 50)
			for {
				cells, err := r.Read()
				if err == io.EOF {
					break
				}
				if err != nil {
					b.Fatal(err)
				}
				for j, c := range cells {
					if row[j], err = strconv.ParseFloat(c, 64); err != nil {
						b.Fatal(err)
					}
				}
			}
			file.Close()
		}
	})
}
