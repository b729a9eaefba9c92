package survey

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
)

// tableOf writes columns of numbers as a table.
func tableOf(t *testing.T, columns ...[]float64) string {
	t.Helper()
	var b strings.Builder
	for j := range columns {
		fmt.Fprintf(&b, "c%d,", j)
	}
	b.WriteString("end\n")
	for i := range columns[0] {
		for _, c := range columns {
			if math.IsNaN(c[i]) {
				b.WriteString(",")
				continue
			}
			fmt.Fprintf(&b, "%g,", c[i])
		}
		fmt.Fprintf(&b, "%d\n", i*31%101)
	}
	return written(t, b.String())
}

func normals(seed uint64, n int, middle, spread float64) []float64 {
	r := rand.New(rand.NewPCG(seed, 1))
	out := make([]float64, n)
	for i := range out {
		out[i] = middle + spread*math.Round(1000*r.NormFloat64())/1000
	}
	return out
}

func with(x []float64, every int, v float64) []float64 {
	for i := every - 1; i < len(x); i += every {
		x[i] = v
	}
	return x
}

// Codes in use by common practice, each put into a channel of ordinary values, are found;
// values that are only far out, or mean themselves, are none.
func TestCodes(t *testing.T) {
	n := 500
	for name, c := range map[string]struct {
		columns [][]float64
		want    []float64
	}{
		"none":           {[][]float64{normals(1, n, 10, 2), normals(2, n, 0, 100)}, nil},
		"-999":           {[][]float64{with(normals(1, n, 10, 2), 40, -999), normals(2, n, 5, 1)}, []float64{-999}},
		"two codes":      {[][]float64{with(with(normals(1, n, 10, 2), 40, -999), 31, -998), normals(2, n, 5, 1)}, []float64{-999, -998}},
		"99.9":           {[][]float64{with(normals(1, n, 7, .2), 25, 99.9), normals(2, n, 5, 1)}, []float64{99.9}},
		"end of a word":  {[][]float64{with(normals(1, n, 1200, 200), 25, 32767)}, []float64{32767}},
		"both ends":      {[][]float64{with(with(normals(1, n, 20, 1), 40, -9999), 33, 9999)}, []float64{-9999, 9999}},
		"once, far":      {[][]float64{with(normals(1, n, 20, 1), n, -9999)}, []float64{-9999}},
		"mostly missing": {[][]float64{mostly(n), normals(2, n, 5, 1)}, []float64{-200}},
		"means itself":   {[][]float64{with(normals(1, n, 10, 2), 40, -200), normals(2, n, -180, 60)}, nil},
		"a limit":        {[][]float64{clipped(n, 11), normals(2, n, 5, 1)}, nil},
		"a switch":       {[][]float64{with(make([]float64, n), 2, 100), normals(2, n, 5, 1)}, nil},
	} {
		v := lookAt(t, 0, tableOf(t, c.columns...))
		var got []float64
		for _, code := range v.Codes {
			got = append(got, code.Value)
		}
		if !slices.Equal(got, c.want) {
			t.Errorf("%s: codes %v, want %v", name, got, c.want)
		}
	}
}

func mostly(n int) []float64 {
	x := normals(3, n, 300, 60)
	for i := range x {
		if i%10 != 0 {
			x[i] = -200
		}
	}
	return x
}

func clipped(n int, limit float64) []float64 {
	x := normals(1, n, 10, 2)
	for i := range x {
		x[i] = math.Min(x[i], limit)
	}
	return x
}

// Two of six channels lack half of their values in different rows; leaving them out, and no
// others, gives all rows back. With gaps everywhere something is still proposed that leaves
// complete rows.
func TestProposal(t *testing.T) {
	n := 400
	var columns [][]float64
	for j := range 6 {
		columns = append(columns, normals(uint64(j), n, 0, 1))
	}
	for i := range n {
		columns[1+3*(i%2)][i] = math.NaN()
	}
	v := lookAt(t, 0, tableOf(t, columns...))
	if !slices.Equal(v.Proposal.LeaveOut, []int{1, 4}) || v.Proposal.Expected != int64(n) || v.Complete != 0 {
		t.Errorf("proposal %+v, %d complete", v.Proposal, v.Complete)
	}
	r := rand.New(rand.NewPCG(1, 2))
	for j := range columns {
		columns[j] = normals(uint64(j), n, 0, 1)
	}
	for i := range n {
		for _, j := range r.Perm(6)[:2] {
			columns[j][i] = math.NaN()
		}
	}
	if v := lookAt(t, 0, tableOf(t, columns...)); v.Complete != 0 || v.Proposal.Expected < 50 || len(v.Proposal.LeaveOut) == 0 {
		t.Errorf("gaps everywhere: %+v", v.Proposal)
	}
}

// Half of the channels change their level at row 601 of 1000, and only that is a break.
func TestBreaks(t *testing.T) {
	n := 1000
	var columns [][]float64
	for j := range 8 {
		x := normals(uint64(j), n, 10, 1)
		if j%2 == 0 {
			for i := 600; i < n; i++ {
				x[i] += 9
			}
		}
		columns = append(columns, x)
	}
	v := lookAt(t, 0, tableOf(t, columns...))
	if len(v.Breaks) != 1 || len(v.Breaks[0].Channels) != 4 || math.Abs(float64(v.Breaks[0].Row-601)) > float64(v.BinRows) {
		t.Errorf("breaks %+v", v.Breaks)
	}
}

// Counting rows that repeat stays right when only a share of the hashes is kept, and sampled
// quantiles come near those of all rows.
func TestBounded(t *testing.T) {
	c := newCopies()
	n := 4 * mostHashes
	for i := range n {
		c.add(mix(uint64(i % (n / 2))))
	}
	if got, exact := c.count(); exact || math.Abs(float64(got)-float64(n/2)) > .03*float64(n) {
		t.Errorf("%d of %d rows repeat, want %d", got, n, n/2)
	}
	s := newSample(1)
	before := []float64{math.NaN()}
	for i := range 400000 {
		v := []float64{float64(i * 7919 % 400000)}
		s.add(int64(i), v, before)
	}
	if got := quantile(s.column(0), .5); len(s.rows) > s.most || math.Abs(got-200000) > 8000 {
		t.Errorf("median %g of %d rows", got, len(s.rows))
	}
}

// Mean, deviation and autocorrelation of a skewed channel, whose median is not its mean, are
// those of the plain sums.
func TestMomentsByHand(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	x := make([]float64, 300)
	for i := range x {
		x[i] = math.Round(1e6*r.ExpFloat64()*r.ExpFloat64()) / 1e6
		if i > 0 {
			x[i] += .5 * x[i-1]
		}
	}
	c := lookAt(t, 0, tableOf(t, x)).Channels[0]
	mean, squares, products := 0.0, 0.0, 0.0
	for _, v := range x {
		mean += v / 300
	}
	for i, v := range x {
		squares += (v - mean) * (v - mean)
		if i > 0 {
			products += (v - mean) * (x[i-1] - mean)
		}
	}
	want := products / 299 / (squares / 300)
	if math.Abs(c.Mean-mean) > 1e-12 || math.Abs(c.Deviation-math.Sqrt(squares/299)) > 1e-12 || math.Abs(c.Autocorrelation-want) > 1e-12 {
		t.Errorf("mean %g, deviation %g, autocorrelation %g; want %g, %g, %g", c.Mean, c.Deviation, c.Autocorrelation, mean, math.Sqrt(squares/299), want)
	}
}
