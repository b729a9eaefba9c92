package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"axisfold/pca/reduce"
)

func hasReduction(s *Study) bool { return s.Reduction != nil }

func fillRedundancy(s *Study, w *csvWriter) {
	w.header("channel", "verdict", "order", "r2_from_kept", "residual_sd", "rebuilt_from",
		"heldout_r2", "heldout_sd", "worst_fold_sd", "r2_when_worst_kept_fails", "worst_kept")
	r := s.Reduction.Result
	for j, c := range r.Channels {
		w.text(s.Channels[j].Name).text(c.Verdict)
		if at := slices.Index(r.Order, j); at >= 0 {
			w.whole(int64(at + 1))
		} else {
			w.text("")
		}
		w.number(c.R2FromKept).number(c.ResidualSD)
		if c.Verdict != "drop" {
			w.text("").number(math.NaN()).number(math.NaN()).number(math.NaN()).number(math.NaN()).text("")
			w.end()
			continue
		}
		w.text(equation(s, j)).number(c.HeldOutR2).number(c.HeldOutSD).number(c.WorstFoldSD)
		worst, which := math.Inf(1), ""
		for i, v := range c.WithoutOne {
			if v < worst {
				worst, which = v, s.Channels[r.Kept[i]].Name
			}
		}
		w.number(worst).text(which)
		w.end()
	}
}

// equation is how a dropped channel is rebuilt, in original units, with all digits:
// "0.0213 + 0.998*pressure_a".
func equation(s *Study, j int) string {
	c := s.Reduction.Result.Channels[j]
	full := func(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }
	b := strings.Builder{}
	b.WriteString(full(c.Intercept))
	for i, v := range c.Coefficients {
		if v == 0 {
			continue
		}
		sign := " + "
		if v < 0 {
			sign = " - "
		}
		fmt.Fprintf(&b, "%s%s*%s", sign, full(math.Abs(v)), s.Channels[s.Reduction.Result.Kept[i]].Name)
	}
	return b.String()
}

func fillTradeoff(s *Study, w *csvWriter) {
	w.header("kept", "worst_r2", "mean_r2", "heldout_worst_r2", "heldout_mean_r2", "cost", "channels")
	for _, p := range s.Reduction.Result.Curve {
		w.whole(int64(p.Kept)).number(p.WorstR2).number(p.MeanR2).number(p.HeldOutWorst).number(p.HeldOutMean).number(p.Cost)
		w.text(namesOf(s, p.Set))
		w.end()
	}
}

func namesOf(s *Study, channels []int) string {
	names := make([]string, len(channels))
	for i, j := range channels {
		names[i] = s.Channels[j].Name
	}
	return strings.Join(names, "; ")
}

// sweepAround is how many numbers of channels before and after the chosen one are shown.
const sweepAround = 3

// sweep shows what fewer or more channels would give: what one more buys.
func (p *page) sweep(s *Study) {
	r := s.Reduction.Result
	at := slices.IndexFunc(r.Curve, func(c reduce.CurvePoint) bool { return c.Kept == len(r.Kept) })
	if at < 0 || len(r.Curve) < 2 {
		return
	}
	costs := slices.ContainsFunc(r.Curve, func(c reduce.CurvePoint) bool { return c.Cost != float64(c.Kept) })
	head := "  fewer or more  worst R2  held out   mean R2"
	if costs {
		head += "      cost"
	}
	p.line(head + "  against the line above")
	first, last := max(0, at-sweepAround), min(len(r.Curve)-1, at+sweepAround)
	if wanted := s.Reduction.Sweep; wanted[1] > 0 {
		inside := func(c reduce.CurvePoint) bool { return c.Kept >= wanted[0] && c.Kept <= wanted[1] }
		if first = slices.IndexFunc(r.Curve, inside); first < 0 {
			return // groups kept whole step over all of them
		}
		for last = first; last+1 < len(r.Curve) && inside(r.Curve[last+1]); {
			last++
		}
	}
	for i := first; i <= last; i++ {
		c := r.Curve[i]
		mark := " "
		if i == at {
			mark = ">"
		}
		text := fmt.Sprintf("  %s %11d  %8.4f  %8s  %8.4f", mark, c.Kept, c.WorstR2, fixed(c.HeldOutWorst, 4), c.MeanR2)
		if costs {
			text += fmt.Sprintf("  %8s", short3(c.Cost))
		}
		if i > first {
			text += "  " + p.changes(s, r.Curve[i-1].Set, c.Set)
		}
		p.line(strings.TrimRight(text, " "))
	}
	p.line("  all numbers, with their sets, in tables/tradeoff.csv")
}

// changes says which channels come in and which go out from one set to another.
func (p *page) changes(s *Study, from, to []int) string {
	list := func(sign string, a, b []int) string {
		var names []string
		for _, j := range a {
			if !slices.Contains(b, j) {
				names = append(names, sign+middle(s.Channels[j].Name, 16))
			}
		}
		if len(names) > 2 {
			names = append(names[:2], fmt.Sprintf("%s%d more", sign, len(names)-2))
		}
		return strings.Join(names, " ")
	}
	return strings.TrimSpace(list("+", to, from) + " " + list("-", from, to))
}

// reductionDecision is the sentence that says what may go.
func reductionDecision(s *Study) string {
	r := s.Reduction
	kept, all := len(r.Result.Kept), len(s.Channels)
	if len(r.Result.Dropped) == 0 {
		return fmt.Sprintf("None of %d channels can be rebuilt from the others to R2 %g.", all, r.Rebuild)
	}
	how := "a smaller set may exist"
	if r.Result.Optimal {
		how = "no smaller set does"
	}
	if r.Size > 0 {
		how = "a better set may exist"
		if r.Result.Optimal {
			how = "no set of this size is better"
		}
	}
	worst, at := math.Inf(1), 0
	for _, j := range r.Result.Dropped {
		if v := r.Result.Channels[j].R2FromKept; v < worst {
			worst, at = v, j
		}
	}
	return fmt.Sprintf("%d of %d channels rebuild the other %d with R2 %.3f or more (%s is the worst; %s).", kept, all, all-kept, worst, s.Channels[at].Name, how)
}

func (p *page) reduction(s *Study) {
	r := s.Reduction.Result
	p.heading("Which channels to keep")
	p.paragraph("  keep  ", "        ", p.listOf(s, r.Kept))
	if len(r.Dropped) > 0 {
		p.line("  dropped and rebuilt       R2 fit  R2 held out  off by (held out)  mostly from")
		order := slices.Clone(r.Dropped)
		slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(r.Channels[a].R2FromKept, r.Channels[b].R2FromKept) })
		for i, j := range order {
			if i == summaryRows {
				p.line(fmt.Sprintf("  and %d more in tables/redundancy.csv", len(order)-i))
				break
			}
			c := r.Channels[j]
			p.line(fmt.Sprintf("  %-24s  %6.4f  %11s  %17s  %s", middle(s.Channels[j].Name, 24), c.R2FromKept, fixed(c.HeldOutR2, 4), withUnit(short3(c.HeldOutSD), s.Channels[j].Unit), mostly(s, j)))
		}
	}
	p.sweep(s)
	for i, cluster := range r.Clusters {
		if i == 6 {
			p.line(fmt.Sprintf("  and %d more groups of like channels", len(r.Clusters)-i))
			break
		}
		p.paragraph("  alike: ", "         ", p.listOf(s, cluster))
	}
	for _, c := range r.Comparisons {
		p.line(fmt.Sprintf("  %-30s would keep as many with worst R2 %.3f, mean %.3f", c.Rule, c.WorstR2, c.MeanR2))
	}
	p.paragraph("  ", "  ", "Agreement in these rows is no leave to remove a sensor: it may be there for voting, for a trip or by regulation. "+
		"Removal is for qualified people to decide, under local codes.")
}

func (p *page) listOf(s *Study, channels []int) string {
	var names []string
	for i, j := range channels {
		if i == 40 {
			names = append(names, fmt.Sprintf("and %d more", len(channels)-i))
			break
		}
		name := middle(s.Channels[j].Name, 30)
		if s.Reduction.Protected[j] {
			name += " (protected)"
		}
		names = append(names, name)
	}
	return strings.Join(names, ", ")
}

// mostly names the two kept channels that move a dropped one most, by coefficient times
// standard deviation.
func mostly(s *Study, j int) string {
	r := s.Reduction.Result
	c := r.Channels[j]
	order := make([]int, len(c.Coefficients))
	for i := range order {
		order[i] = i
	}
	weight := func(i int) float64 { return math.Abs(c.Coefficients[i]) * s.Channels[r.Kept[i]].Deviation }
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(weight(b), weight(a)) })
	var names []string
	for _, i := range order[:min(2, len(order))] {
		if weight(i) > 0 {
			names = append(names, middle(s.Channels[r.Kept[i]].Name, 18))
		}
	}
	return strings.Join(names, ", ")
}

// fixed gives so many decimals, a dash where there is no number.
func fixed(v float64, decimals int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return "-"
	}
	return strconv.FormatFloat(v, 'f', decimals, 64)
}

type reductionFacts struct {
	Rebuild     Number            `json:"rebuild"`
	Method      string            `json:"method"`
	Optimal     bool              `json:"proved_best"`
	Kept        []string          `json:"kept"`
	Dropped     []rebuiltFacts    `json:"dropped"`
	Clusters    [][]string        `json:"alike"`
	Comparisons []comparisonFacts `json:"comparisons"`
}

type rebuiltFacts struct {
	Channel      string   `json:"channel"`
	R2           Number   `json:"r2_from_kept"`
	Residual     Number   `json:"residual_sd"`
	HeldOutR2    Number   `json:"heldout_r2"`
	HeldOutSD    Number   `json:"heldout_sd"`
	Intercept    Number   `json:"intercept"`
	Coefficients []Number `json:"coefficients"` // on the kept channels, in their order
}

type comparisonFacts struct {
	Rule    string   `json:"rule"`
	Kept    []string `json:"kept"`
	WorstR2 Number   `json:"worst_r2"`
	MeanR2  Number   `json:"mean_r2"`
}

func reductionOf(s *Study) *reductionFacts {
	r := s.Reduction.Result
	names := func(list []int) []string {
		out := make([]string, len(list))
		for i, j := range list {
			out[i] = s.Channels[j].Name
		}
		return out
	}
	f := &reductionFacts{Rebuild: Number(s.Reduction.Rebuild), Method: r.Method, Optimal: r.Optimal, Kept: names(r.Kept)}
	for _, j := range r.Dropped {
		c := r.Channels[j]
		f.Dropped = append(f.Dropped, rebuiltFacts{s.Channels[j].Name, Number(c.R2FromKept), Number(c.ResidualSD),
			Number(c.HeldOutR2), Number(c.HeldOutSD), Number(c.Intercept), numbers(c.Coefficients)})
	}
	for _, cluster := range r.Clusters {
		f.Clusters = append(f.Clusters, names(cluster))
	}
	for _, c := range r.Comparisons {
		f.Comparisons = append(f.Comparisons, comparisonFacts{c.Rule, names(c.Kept), Number(c.WorstR2), Number(c.MeanR2)})
	}
	return f
}
