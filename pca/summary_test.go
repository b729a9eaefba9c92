package pca_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
	"axisfold/testdata/published"
)

// The certified means and standard deviations of the NIST Statistical Reference Datasets,
// in one pass and merged from blocks of any size. The digits asked for are what the
// decimal input leaves in double precision: 10000000.1 is stored with an error of 2e-10,
// which is 8 digits of a deviation of 0.1.
func TestUnivariateStRD(t *testing.T) {
	wantDigits := map[string]float64{
		"PiDigits": 13, "Lottery": 13, "Lew": 13, "Mavro": 12, "Michelso": 13,
		"NumAcc1": 13, "NumAcc2": 13, "NumAcc3": 9, "NumAcc4": 8,
	}
	for name, digits := range wantDigits {
		u := published.StRDUnivariate(t, name)
		for _, form := range []pca.Form{pca.CrossProducts, pca.Factor} {
			for _, size := range []int{1, 2, 7, 100, len(u.Y)} {
				s := inBlocks(u.Y, 1, form, size)
				mean := published.Digits(s.Mean(0), u.Mean)
				deviation := published.Digits(s.Deviation(0), u.Deviation)
				if mean < 14 || deviation < digits {
					t.Errorf("%s form %d blocks of %d: mean agrees to %.1f digits (want 14), deviation to %.1f (want %g)",
						name, form, size, mean, deviation, digits)
				}
				if size == len(u.Y) && form == pca.CrossProducts {
					t.Logf("%-8s mean %.1f digits, standard deviation %.1f digits", name, mean, deviation)
				}
			}
		}
	}
}

// NIST/SEMATECH e-Handbook 6.5.4.1: mean and covariance matrix, printed and exact.
func TestHandbookMeansAndCovariances(t *testing.T) {
	table := published.CSV(t, "reference/handbook/pmc541_5x3.csv")
	s := inBlocks(table.Data, 3, pca.CrossProducts, 2)
	means := []float64{4.10, 2.08, .604}
	covariance := [3][3]float64{{.025, .0075, .00175}, {.0075, .0070, .00135}, {.00175, .00135, .00043}}
	for i := range 3 {
		if d := published.Digits(s.Mean(i), means[i]); d < 14 {
			t.Errorf("mean %d = %.17g, want %g", i, s.Mean(i), means[i])
		}
		for j := range 3 {
			if got := s.CrossProduct(i, j) / 4; published.Digits(got, covariance[i][j]) < 12 {
				t.Errorf("covariance %d,%d = %.17g, want %g", i, j, got, covariance[i][j])
			}
		}
	}
}

// Rows 1-5 of Hald's cement merged with rows 6-13 (Hald 1952, p. 647): C_12 is 3264/13,
// C_44 is 3362 exactly, by hand from the integers of the table.
func TestMergeHald(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	for _, form := range []pca.Form{pca.CrossProducts, pca.Factor} {
		b := pca.NewBuilder(5, form, 0)
		s := b.Summarize(table.Data[:25], 5)
		s.Merge(b.Summarize(table.Data[25:], 8))
		if got := s.CrossProduct(0, 1); math.Abs(got-3264./13) > 1e-11 {
			t.Errorf("C_12 = %.15g", got)
		}
		if got := s.CrossProduct(3, 3); math.Abs(got-3362) > 1e-11 {
			t.Errorf("C_44 = %.15g", got)
		}
	}
}

// Merging in blocks of any size, in either form, gives the moments of the whole to the
// last digits; what is asked of a summary agrees with the definition over the rows.
func TestSummaryAgainstDefinition(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for _, shape := range [][2]int{{1, 1}, {2, 1}, {3, 5}, {40, 3}, {57, 8}, {9, 30}, {300, 17}} {
		n, p := shape[0], shape[1]
		x := make([]float64, n*p)
		for i := range x {
			x[i] = 1e4*float64(i%p) + rng.NormFloat64()*float64(1+i%p)
		}
		w := make([]float64, p)
		for j := range w {
			w[j] = rng.NormFloat64()
		}
		for _, form := range []pca.Form{pca.CrossProducts, pca.Factor} {
			for _, size := range []int{1, 4, 13, n} {
				t.Run(fmt.Sprintf("n=%d/p=%d/form=%d/block=%d", n, p, form, size), func(t *testing.T) {
					checkMoments(t, inBlocks(x, p, form, size), x, n, p, w)
				})
			}
		}
	}
}

func checkMoments(t *testing.T, s *pca.Summary, x []float64, n, p int, w []float64) {
	t.Helper()
	mean := make([]float64, p)
	for i, v := range x {
		mean[i%p] += v / float64(n)
	}
	// Offsets of up to 1e4·p beside deviations near 1 leave ε·1e4·p in every difference.
	slack := 64 * 0x1p-52 * 1e4 * float64(p*n)
	for i := range p {
		if math.Abs(s.Mean(i)-mean[i]) > slack {
			t.Fatalf("mean %d = %g, want %g", i, s.Mean(i), mean[i])
		}
		for j := range p {
			want := 0.0
			for r := range n {
				want += (x[r*p+i] - mean[i]) * (x[r*p+j] - mean[j])
			}
			if got := s.CrossProduct(i, j); math.Abs(got-want) > slack*float64(1+i)*float64(1+j) {
				t.Fatalf("cross-product %d,%d = %g, want %g", i, j, got, want)
			}
		}
	}
	want := 0.0
	for r := range n {
		e := 0.0
		for j := range p {
			e += w[j] * (x[r*p+j] - mean[j])
		}
		want += e * e
	}
	if got := s.Spread(w); math.Abs(got-want) > slack*float64(p*p*p) {
		t.Fatalf("spread %g, want %g", got, want)
	}
	combined := s.Combine(w, 1)
	if got := combined.CenteredSquares(0); math.Abs(got-want) > slack*float64(p*p*p) {
		t.Fatalf("combined squares %g, want %g", got, want)
	}
	if p > 2 {
		picked := s.Pick([]int{2, 0})
		if picked.CrossProduct(0, 1) != s.CrossProduct(0, 2) && math.Abs(picked.CrossProduct(0, 1)-s.CrossProduct(0, 2)) > slack*3 {
			t.Fatalf("picked cross-product %g, want %g", picked.CrossProduct(0, 1), s.CrossProduct(0, 2))
		}
	}
	about := s.AboutOrigin()
	raw := 0.0
	for r := range n {
		raw += x[r*p] * x[r*p+p-1]
	}
	if got := about.CrossProduct(0, p-1); published.Digits(got, raw) < 10 && math.Abs(got-raw) > slack*1e4 {
		t.Fatalf("about the origin %g, want %g", got, raw)
	}
}

// Medians are exact while all values are kept and within the stated rank beyond.
func TestMedians(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	n := 10001
	x := make([]float64, n)
	for i, v := range rng.Perm(n) {
		x[i] = float64(v) // 0..n-1 in random order: rank = value
	}
	for _, capacity := range []int{64, 512, n} {
		b := pca.NewBuilder(1, pca.CrossProducts, capacity)
		s := b.Empty()
		for r := 0; r < n; r += 37 {
			end := min(r+37, n)
			s.Merge(b.Summarize(x[r:end], end-r))
		}
		allowed := s.RankError() * float64(n)
		if capacity == n && allowed != 0 {
			t.Errorf("capacity %d: rank error %g, want exact", capacity, allowed)
		}
		if off := math.Abs(s.Median(0) - 5000); off > allowed {
			t.Errorf("capacity %d: median off by %g ranks, allowed %g", capacity, off, allowed)
		}
		if off := math.Abs(s.MedianDeviation(0) - 2500); off > 2*allowed {
			t.Errorf("capacity %d: median deviation off by %g ranks, allowed %g", capacity, off, 2*allowed)
		}
	}
}

func inBlocks(x []float64, p int, form pca.Form, size int) *pca.Summary {
	b := pca.NewBuilder(p, form, 0)
	s := b.Empty()
	n := len(x) / p
	for r := 0; r < n; r += size {
		end := min(r+size, n)
		s.Merge(b.Summarize(x[r*p:end*p], end-r))
	}
	return s
}
