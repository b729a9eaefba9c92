package run

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"axisfold/pca"
	"axisfold/pca/table"
	"axisfold/testdata/published"
)

// Differences of neighbours give nearly the certified lag-one autocorrelation of NIST StRD
// series: the two differ by what the ends of the series weigh, of order 1/n.
func TestFollowingPublished(t *testing.T) {
	for name, want := range map[string]float64{"Lew": -0.307304800605679, "Mavro": 0.937989183438248, "Michelso": 0.535199668621283} {
		u := published.StRDUnivariate(t, name)
		f := newFollowing(1, false)
		b := &table.Block{Rows: len(u.Y), Width: 1, Data: u.Y, Offset: make([]int32, len(u.Y))}
		for i := range u.Y {
			b.Offset[i] = int32(i)
		}
		f.add(b, f.within(b))
		n := float64(len(u.Y))
		if got := f.correlation(0, u.Deviation*u.Deviation); math.Abs(got-want) > 4/n {
			t.Errorf("%s: %.4f, certified %.4f", name, got, want)
		}
	}
}

// Pairs are counted within groups and between rows that stand next to one another, across
// blocks as within them, whatever the size of the blocks and the number of threads.
func TestFollowingPairs(t *testing.T) {
	rng := rand.New(rand.NewPCG(71, 72))
	dir := t.TempDir()
	var text strings.Builder
	text.WriteString("g,a,b\n")
	n, pairs := 60000, int64(0)
	var squares [2]float64
	var before [2]float64
	gap := true
	for i := range n {
		if rng.IntN(50) == 0 {
			text.WriteString("x,1,\n") // a gap
			gap = true
			continue
		}
		group := i / 7000
		if i%7000 == 0 {
			gap = true
		}
		now := [2]float64{math.Round(1000*rng.NormFloat64()) / 8, float64(rng.IntN(100))}
		fmt.Fprintf(&text, "g%d,%g,%g\n", group, now[0], now[1])
		if !gap {
			for j := range now {
				squares[j] += (now[j] - before[j]) * (now[j] - before[j])
			}
			pairs++
		}
		before, gap = now, false
	}
	path := filepath.Join(dir, "x.csv")
	if err := os.WriteFile(path, []byte(text.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	for _, threads := range []int{1, 3} {
		rows, err := table.Open(context.Background(), table.Options{Files: []string{path}, Groups: "g", Missing: []string{""}})
		if err != nil {
			t.Fatal(err)
		}
		r := &roles{columns: rows.Columns(), use: []int{0, 1}, channels: 2, labels: []string{"a", "b"}, grouped: true,
			transforms: []pca.Transform{pca.NoTransform, pca.NoTransform}, methods: []pca.Method{pca.UnitNormal, pca.UnitNormal}}
		got, err := readTable(context.Background(), rows, r, nil, pca.CrossProducts, nil, Options{Threads: threads})
		if err != nil {
			t.Fatal(err)
		}
		f := got.follow
		// Multiples of 1/8 add up without rounding here.
		if f.pairs != pairs || f.squares[0] != squares[0] || f.squares[1] != squares[1] {
			t.Errorf("%d threads: %d pairs, squares %v; expected %d, %v", threads, f.pairs, f.squares, pairs, squares)
		}
	}
}
