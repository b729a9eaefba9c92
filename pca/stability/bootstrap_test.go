package stability

import (
	"errors"
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	"axisfold/pca"
)

func bootstrap(t *testing.T, blocks []*pca.Summary, o Options) *Result {
	t.Helper()
	res, err := Bootstrap(blocks, whole(blocks, o.Decompose), o)
	if err != nil {
		t.Fatal(err)
	}
	return res
}

func codes(r *Result) string {
	var out []string
	for _, w := range r.Warnings {
		out = append(out, w.Code)
	}
	return strings.Join(out, " ")
}

func TestSameBits(t *testing.T) {
	const p = 6
	blocks := split(table(240, falling(p), 4), p, 8, pca.CrossProducts, 0)
	o := Options{Decompose: options(p, pca.UnitNormal, pca.Correlation), Retained: 3, Replicates: 101, Seed: 5, Threads: 1}
	one := bootstrap(t, blocks, o)
	for _, o.Threads = range []int{2, 5} {
		many := bootstrap(t, blocks, o)
		many.Asymptotic, one.Asymptotic = nil, nil // NaN does not compare; no replicates go in
		if !reflect.DeepEqual(one, many) {
			t.Errorf("%d threads differ from 1", o.Threads)
		}
	}
	o.Seed++
	if other := bootstrap(t, blocks, o); other.Eigenvalues[0] == one.Eigenvalues[0] {
		t.Error("another seed, the same interval")
	}
}

// Roots of the population are 9, 9, 4 and 1. The table is one of those that show it: see
// TestTiedPower.
func TestTied(t *testing.T) {
	const p = 4
	blocks := split(table(400, []float64{3, 3, 2, 1}, 2), p, 5, pca.CrossProducts, 0)
	o := Options{Decompose: options(p, pca.CenterOnly, pca.Covariance), Retained: 3, Replicates: 300}
	res := bootstrap(t, blocks, o)
	if !reflect.DeepEqual(res.Tied, [][]int{{0, 1}}) || codes(res) != "" {
		t.Errorf("tied %v, warnings %q", res.Tied, codes(res))
	}
	if res.Congruence[0] > 0.95 || res.Congruence[2] < 0.99 {
		t.Errorf("congruence %v: the tied pair turns, the third stays", res.Congruence)
	}
	if res.SubspaceAngle.Upper > 15 {
		t.Errorf("angle %v of a subspace that does not cut the pair", res.SubspaceAngle)
	}
	o.Retained = 1
	cut := bootstrap(t, blocks, o)
	if !reflect.DeepEqual(cut.Tied, [][]int{{0, 1}}) || codes(cut) != "tied-at-cut" || cut.SubspaceAngle.Upper < 30 {
		t.Errorf("tied %v, warnings %q, angle %v", cut.Tied, codes(cut), cut.SubspaceAngle)
	}
	if got := tiedGroups([]bool{true, true, false, false, true}); !reflect.DeepEqual(got, [][]int{{0, 1, 2}, {4, 5}}) {
		t.Errorf("groups %v", got)
	}
}

// How often two equal roots among p = 2 are found. Half the difference of the diagonal and
// the off-diagonal entry of the sample matrix are both N(0, l²/n), so the sample gap is
// 2l/√n times a Rayleigh variable; a resample adds N(0, 4l²/n) to the gap, and partners
// swap where the sum is negative: in more than 10 % where the gap is below 1.2816·2l/√n,
// which happens with probability 1 - exp(-1.2816²/2) = 0.560. Monte Carlo error 0.035.
func TestTiedPower(t *testing.T) {
	const p, tables = 2, 200
	o := Options{Decompose: options(p, pca.CenterOnly, pca.Covariance), Retained: 1, Replicates: 200}
	found := 0
	for s := range uint64(tables) {
		blocks := split(table(800, []float64{1, 1}, 100+s), p, 4, pca.CrossProducts, 0)
		if len(bootstrap(t, blocks, o).Tied) > 0 {
			found++
		}
	}
	if share := float64(found) / tables; math.Abs(share-0.560) > 0.105 {
		t.Errorf("found in %g of the tables, expected 0.560 ± 0.105", share)
	} else {
		t.Logf("found in %g of the tables", share)
	}
}

// Coverage of nominal 95 % for independent normal rows: n = 200 in 50 blocks, first root 9
// before 2.25, 1 and 1; its vector (cos 0.6, sin 0.6, 0, 0), loading of channel 0 3·cos 0.6. The
// percentile interval, uncorrected for bias and skewness, covers a little less than nominal
// at such sizes (from memory: Efron & Tibshirani 1993, An Introduction to the Bootstrap,
// chapter 14); accepted is 0.90 to 0.97: 0.935 give or take nearly three Monte Carlo
// standard errors, √(0.95·0.05/300) = 0.0126.
func TestCoverage(t *testing.T) {
	const p, tables = 4, 300
	o := Options{Decompose: options(p, pca.CenterOnly, pca.Covariance), Retained: 1, Replicates: 300}
	root, loading, theory := 0, 0, 0
	within := func(i Interval, x float64) int {
		if i.Lower <= x && x <= i.Upper {
			return 1
		}
		return 0
	}
	for s := range uint64(tables) {
		blocks := split(table(200, []float64{3, 1.5, 1, 1}, 1000+s), p, 4, pca.CrossProducts, 0)
		res := bootstrap(t, blocks, o)
		root += within(res.Eigenvalues[0], 9)
		theory += within(res.Asymptotic[0], 9)
		loading += within(res.Loadings[0], 3*math.Cos(0.6))
	}
	for what, count := range map[string]int{"root": root, "loading": loading, "root, asymptotic": theory} {
		share := float64(count) / tables
		t.Logf("%s: %.4f", what, share)
		if share < 0.90 || share > 0.97 {
			t.Errorf("%s covered in %.4f of the tables, expected 0.90 to 0.97", what, share)
		}
	}
}

// Blocks of a slow series: rows of one block alike, so that resampling blocks gives wider
// intervals than resampling rows, by about √(rows of a block).
func TestBlocksKeepMemory(t *testing.T) {
	const p, repeat = 3, 9
	x := table(60, []float64{3, 2, 1}, 9)
	var series []float64
	for r := range 60 {
		for range repeat {
			series = append(series, x[r*p:(r+1)*p]...)
		}
	}
	o := Options{Decompose: options(p, pca.CenterOnly, pca.Covariance), Retained: 1, Replicates: 400}
	whole := bootstrap(t, split(series, p, repeat, pca.CrossProducts, 0), o).Eigenvalues[0]
	single := bootstrap(t, split(series, p, 1, pca.CrossProducts, 0), o).Eigenvalues[0]
	if ratio := (whole.Upper - whole.Lower) / (single.Upper - single.Lower); ratio < 2.5 || ratio > 3.5 {
		t.Errorf("blocks %v, rows %v: ratio %g, expected near 3", whole, single, ratio)
	}
}

// Channel 1 moves in one block of five: a resample misses it with probability (4/5)⁵ = 0.328.
func TestConstantInReplicate(t *testing.T) {
	const p = 2
	x := table(50, []float64{1, 1}, 6)
	for r := 10; r < 50; r++ {
		x[r*p+1] = 7
	}
	o := Options{Decompose: options(p, pca.UnitNormal, pca.Correlation), Retained: 1}
	res := bootstrap(t, split(x, p, 10, pca.CrossProducts, 0), o)
	if share := float64(res.Failed) / 1000; math.Abs(share-0.328) > 0.045 {
		t.Errorf("%g failed, expected 0.328 ± 0.045", share)
	}
	if text := res.Warnings[1].Text; !strings.Contains(text, fmt.Sprintf("%d of them for a channel without spread", res.Failed)) {
		t.Errorf("warning %q with %d failed", text, res.Failed)
	}
	if !strings.HasPrefix(codes(res), "few-blocks failed-replicates") || res.Blocks != 5 || res.Replicates != 1000 {
		t.Errorf("warnings %q, %d blocks, %d replicates", codes(res), res.Blocks, res.Replicates)
	}
}

// The bound is that of the summaries: both agree on either side of it.
func TestConstantLikeSummary(t *testing.T) {
	for _, step := range []float64{0, 0x1p-50, 0x1p-49, 0x1p-48, 0x1p-40, 1} {
		s := pca.NewBuilder(1, pca.CrossProducts, 0).Summarize([]float64{1, 1 + step}, 2)
		if got := constant(s.Min(0), s.Max(0)); got != s.Constant(0) {
			t.Errorf("1 and 1+%g: constant %v, summary %v", step, got, s.Constant(0))
		}
	}
}

func TestMergedNeighbours(t *testing.T) {
	x := table(103, []float64{2, 1}, 8)
	parts := split(x, 2, 1, pca.CrossProducts, 0)
	merged := mergeNeighbours(parts, 10)
	rows := 0
	for i, s := range merged {
		rows += s.Count()
		if s.Count() < 10 || s.Count() > 11 {
			t.Errorf("group %d has %d rows", i, s.Count())
		}
	}
	first := split(x[:20], 2, 10, pca.CrossProducts, 0)[0]
	if rows != 103 || math.Abs(merged[0].CrossProduct(0, 1)-first.CrossProduct(0, 1)) > 1e-11 {
		t.Errorf("%d rows; cross-product %g, expected %g", rows, merged[0].CrossProduct(0, 1), first.CrossProduct(0, 1))
	}
}

// More channels than rows: m = n-1 roots, and a resample has fewer still.
func TestWide(t *testing.T) {
	const p = 40
	blocks := split(table(24, falling(p), 3), p, 1, pca.Factor, 0)
	o := Options{Decompose: options(p, pca.CenterOnly, pca.Covariance), Retained: 2, Replicates: 50}
	res := bootstrap(t, blocks, o)
	if len(res.Eigenvalues) != 23 || len(res.Loadings) != 2*p || res.Eigenvalues[22].Lower > 1e-10*res.Eigenvalues[0].Estimate {
		t.Errorf("%d roots, %d loadings, last %v", len(res.Eigenvalues), len(res.Loadings), res.Eigenvalues[22])
	}
	if i := slices.IndexFunc(res.Shares, func(i Interval) bool { return !(i.Lower >= 0 && i.Upper <= 1) }); i >= 0 {
		t.Errorf("share %d: %v", i, res.Shares[i])
	}
}

func TestErrors(t *testing.T) {
	const p = 3
	blocks := split(table(60, []float64{3, 2, 1}, 1), p, 2, pca.CrossProducts, 0)
	good := Options{Decompose: options(p, pca.CenterOnly, pca.Covariance), Retained: 1, Replicates: 10}
	w := whole(blocks, good.Decompose)
	other := split(table(10, []float64{2, 1}, 1), 2, 5, pca.CrossProducts, 0)
	for _, c := range []struct {
		want   string
		change func(o *Options, b *[]*pca.Summary)
	}{
		{"0 components retained, expected 1 to 3", func(o *Options, _ *[]*pca.Summary) { o.Retained = 0 }},
		{"4 components retained", func(o *Options, _ *[]*pca.Summary) { o.Retained = 4 }},
		{"1 replicates", func(o *Options, _ *[]*pca.Summary) { o.Replicates = 1 }},
		{"confidence NaN", func(o *Options, _ *[]*pca.Summary) { o.Confidence = math.NaN() }},
		{"options ask for the correlation matrix", func(o *Options, _ *[]*pca.Summary) { o.Decompose.Matrix = pca.Correlation }},
		{"2 names", func(o *Options, _ *[]*pca.Summary) { o.Decompose.Names = o.Decompose.Names[:2] }},
		{"1 blocks with rows", func(_ *Options, b *[]*pca.Summary) { *b = (*b)[:1] }},
		{"0 blocks with rows", func(_ *Options, b *[]*pca.Summary) { *b = nil }},
		{"block 0 has 2 channels", func(_ *Options, b *[]*pca.Summary) { *b = other }},
	} {
		o, b := good, blocks
		c.change(&o, &b)
		if _, err := Bootstrap(b, w, o); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v, expected %q", err, c.want)
		}
	}
	// Two blocks with the same row: every replicate is constant and none is left.
	flat := table(2, []float64{1, 1, 1}, 1)
	copy(flat[p:], flat[:p])
	_, err := Bootstrap(split(flat, p, 1, pca.CrossProducts, 0), w, good)
	var data *pca.DataError
	if !errors.As(err, &data) || data.Hint == "" {
		t.Errorf("got %v, expected an error with a hint", err)
	}
}
