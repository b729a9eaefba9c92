package reduce

import (
	"slices"
	"testing"

	"axisfold/pca"
)

func prepared(t testing.TB, s *pca.Summary, o Options) *problem {
	t.Helper()
	o, err := o.withDefaults(s)
	if err != nil {
		t.Fatal(err)
	}
	q, err := newProblem(s, o)
	if err != nil {
		t.Fatal(err)
	}
	return q
}

// at is M swept on channels numbered from 1, as the sources number them.
func at(q *problem, channels ...int) *swept {
	s := newSwept(q.m, q.p, q.floor)
	for _, j := range channels {
		s.keep([]int{j - 1})
	}
	return s
}

func fromOne(channels []int) []int {
	out := slices.Clone(channels)
	for i := range out {
		out[i]++
	}
	return out
}

// Values computed once in NumPy 1.24.2 from the formulas of Cadima & Jolliffe 2001, JABES
// 6:62, to the digits given.
func TestHaldCriteria(t *testing.T) {
	q := prepared(t, summary(hald, 4), Options{Components: 2})
	for _, c := range []struct {
		a, b int
		rm   float64
	}{{3, 4, .96007666}, {1, 4, .95625599}, {2, 3, .95531347}, {1, 2, .95248963}, {2, 4, .75695565}, {1, 3, .74381361}} {
		near(t, "rm", q.all(at(q, c.a, c.b))["rm"], c.rm, 5e-9)
	}
	all := q.all(at(q, 3, 4))
	near(t, "rv", all["rv"], .97041407, 5e-9)
	near(t, "gcd", all["gcd"], .95734943, 5e-9)
	near(t, "trace", all["mccabe-trace"], .31301119, 5e-9)
	near(t, "det", all["mccabe-det"], .00106859, 5e-9)
	// Identity: RM² = 1 - tr M_D.K / tr M.
	near(t, "identity", all["rm"]*all["rm"], 1-all["mccabe-trace"]/4, 1e-14)
}

// Scores of the first two greedy steps on the Hald data, same computation: the drop in trace.
func TestHaldGreedySteps(t *testing.T) {
	q := prepared(t, summary(hald, 4), Options{})
	for _, c := range []struct {
		kept []int
		gain [4]float64
	}{{nil, [4]float64{1.791688, 2.018278, 1.699457, 2.007757}}, {[]int{2}, [4]float64{1.610668, 0, 1.632217, .273649}}} {
		s := at(q, c.kept...)
		for j, want := range c.gain {
			if !s.kept[j] {
				near(t, "gain", 4*(q.after(rm, s, j, nil)-q.score(rm, s)), want, 5e-7)
			}
		}
	}
}

// Greedy takes 2, then 3; the best pair is {3,4}.
func TestHaldGreedyIsNotBest(t *testing.T) {
	q := prepared(t, summary(hald, 4), Options{Size: 2, Criterion: "rm"})
	s := q.start()
	for i, want := range []int{2, 3} {
		q.forward(s, false, func() bool { return s.count == i+1 }, nil)
		if !s.kept[want-1] {
			t.Errorf("step %d did not keep channel %d", i+1, want)
		}
	}
	r := mustChoose(t, summary(hald, 4), nil, Options{Size: 2, Criterion: "rm"})
	if !slices.Equal(fromOne(r.Kept), []int{3, 4}) || !r.Optimal || r.Method != ExactSearch {
		t.Errorf("kept %v, optimal %v by %s", fromOne(r.Kept), r.Optimal, r.Method)
	}
}

// Best sets of the blood chemistry data by RM, NumPy 1.24.2 over all subsets; greedy at 4
// takes {5,7,6,1}.
func TestBlood(t *testing.T) {
	s := fromTriangle(blood, 8)
	for _, c := range []struct {
		kept []int
		rm   float64
	}{{[]int{5, 7}, .6670897}, {[]int{5, 6, 7}, .7665763}, {[]int{1, 5, 6, 8}, .8447945}} {
		for _, name := range []string{"rm", "mccabe-trace"} {
			r := mustChoose(t, s, nil, Options{Size: len(c.kept), Criterion: name})
			if !slices.Equal(fromOne(r.Kept), c.kept) || !r.Optimal {
				t.Errorf("%s: kept %v, want %v", name, fromOne(r.Kept), c.kept)
			}
			near(t, "rm", r.Criteria["rm"], c.rm, 5e-8)
		}
	}
	q := prepared(t, s, Options{})
	g := q.start()
	for i, want := range []int{5, 7, 6, 1} {
		q.forward(g, false, func() bool { return g.count == i+1 }, nil)
		if !g.kept[want-1] {
			t.Errorf("greedy step %d did not keep %d", i+1, want)
		}
	}
	near(t, "greedy rm", q.all(g)["rm"], .8425346, 5e-8)
	// Jolliffe 1972, Appl. Statistics 21:160; sets computed once in NumPy 1.24.2.
	comparisons := q.compare(4)
	if got := fromOne(comparisons[0].Kept); !slices.Equal(got, []int{1, 4, 6, 8}) {
		t.Errorf("B2 keeps %v", got)
	}
	if got := fromOne(comparisons[1].Kept); !slices.Equal(got, []int{5, 7, 8, 1}) {
		t.Errorf("B4 keeps %v", got)
	}
}

// R² = 1 - 1/VIF when all others are kept (Marquardt 1970); the VIFs of the Hald data
// follow from rational arithmetic.
func TestHaldVarianceInflation(t *testing.T) {
	q := prepared(t, summary(hald, 4), Options{})
	s := summary(hald, 4)
	for j, vif := range []float64{38.4962114906, 254.4231658509, 46.8683863336, 282.5128647886} {
		kept := slices.Delete([]int{0, 1, 2, 3}, j, j+1)
		c := q.rebuild(s, kept)[j]
		// Cross-products lose a factor of the condition number, 1.4e3: 1e-12 leaves room.
		near(t, "R2", c.R2FromKept, 1-1/vif, 1e-12)
	}
}
