package survey

import (
	"context"
	"math"
	"slices"

	"axisfold/pca"
	"axisfold/pca/table"
)

// Survey is what a look at a table found. Rows count from 1 over all files. Positions are
// those of Channels.
type Survey struct {
	Source   *Source
	Files    []string
	Notes    []table.Note
	Rows     int64
	Complete int64 // rows without a gap in any channel, codes counted as gaps
	Channels []Channel
	Codes    []Code
	Words    []Word // texts among numbers, taken as missing
	Clock    *Clock // nil without
	Likeness []Likeness
	// Compared is the number of rows that pairs and rank rest on; Rank is that of the
	// correlation matrix of Varying channels, -1 where it was not found; Dominated is how
	// many components carry 99 % of their variance, and First the share of the first.
	Compared, Varying, Rank, Dominated int
	First                              float64
	// RowCopies equal an earlier row; an estimate unless CopiesExact.
	RowCopies   int64
	CopiesExact bool
	Breaks      []Break
	Proposal    Proposal
	// Sampled is the number of rows that medians and skewness rest on.
	Sampled int
	// BinRows is how many rows a stretch of Channel.Level spans.
	BinRows  int64
	Findings []Finding // the most important first
}

// Channel is what was found of one channel. Numbers that are not defined are NaN.
type Channel struct {
	Name, Unit string
	// Type is "number", "whole", "categories", "two values", "constant", "counter",
	// "equal steps", "beyond" (squares lie beyond double precision) or "empty".
	Type           string
	Count, Missing int64
	LongestGap     Run
	Min, Max       float64
	Mean           float64
	Deviation      float64 // divisor n-1
	Median, Spread float64 // of the sample; Spread is 1.4826 times the median deviation
	Skewness       float64 // of the sample
	// Transform would bring the skewness to Transformed; NoTransform where none helps.
	Transform   pca.Transform
	Transformed float64
	Different   int // different values; -1 for more than 32
	// AtMin and AtMax count the values at the ends.
	AtMin, AtMax int64
	// Common is the most common value of the sample, and CommonShare its share there.
	Common, CommonShare float64
	// Autocorrelation of neighbouring rows, and how many independent rows they are worth
	// for a mean, n(1-r)/(1+r).
	Autocorrelation, EffectiveRows float64
	Trend                          float64 // correlation with the number of the row
	Spikes                         int64
	WorstSpikes                    []Spike
	Held                           []Run // the longest stretches of one value
	// Level and Filled are, by stretch of rows, the mean and the share of rows with a value.
	Level, Filled []float64
	// LeaveOut says why the channel should take no part; empty where it should.
	LeaveOut string

	nextMin, nextMax int64 // how often the values next to the ends occur
	step             float64
	same, pairs      int64
	up, down         int64
}

// Look goes through the rows of a table twice. threads of 0 uses all cores; the result does
// not depend on it. Rows that cannot be read are an error of package table, but for texts
// among numbers, which are taken as missing and reported.
func Look(ctx context.Context, s *Source, threads int) (*Survey, error) {
	f, err := s.read(ctx, threads)
	if err != nil {
		return nil, err
	}
	if f.transposed() && s.turn(ctx) {
		if f, err = s.read(ctx, threads); err != nil {
			return nil, err
		}
	}
	codes := f.codes()
	f.sample.mask(codes)
	columns := s.Table.Columns()
	names := make([]string, len(columns))
	for j, c := range columns {
		names[j] = c.Name
	}
	var ticking *clock
	switch {
	case s.Time.Column != "":
		ticking = f.newClock(s.Time)
	case !s.given.Time:
		ticking = f.numberClock(names)
	}
	still := make([]bool, len(columns)) // empty, of one value, or beyond what can be squared
	for j := range still {
		e := f.ends[j].without(codes)
		still[j] = len(e.low) == 0 || len(e.low) == 1 && len(e.high) == 1 || beyond(e.low[0].value, e.high[0].value)
	}
	proposal := propose(f.sample, still)
	out := slices.Clone(still)
	for _, j := range proposal {
		out[j] = true
	}
	r, err := secondPass(ctx, s, f, codes, out, ticking, threads)
	if err != nil {
		return nil, err
	}
	v := &Survey{Source: s, Files: s.Table.Files(), Notes: s.Table.Notes(), Rows: f.rows, Complete: r.complete, Codes: r.codes, Words: s.Words,
		Sampled: len(f.sample.rows), BinRows: r.perBin}
	v.Codes = slices.DeleteFunc(v.Codes, func(c Code) bool { return c.Total == 0 })
	v.Proposal = Proposal{LeaveOut: proposal, Expected: r.proposed, Now: r.complete}
	if ticking != nil {
		v.Clock = &ticking.Clock
		if ticking.column >= 0 {
			still[ticking.column] = true
		}
	}
	v.RowCopies, v.CopiesExact = r.copies.count()
	for j, c := range columns {
		v.Channels = append(v.Channels, r.channel(f, j, c, codes))
	}
	if ticking != nil && ticking.column >= 0 {
		v.Channels[ticking.column].Type = "equal steps"
	}
	c := compare(f, r.traces, names, still)
	v.Likeness, v.Compared, v.Rank, v.Dominated, v.First, v.Varying = c.pairs, c.rows, c.rank, c.dominated, c.share, c.usable
	v.Breaks = r.breaks(names, still)
	v.judge()
	return v, nil
}

// channel gathers what both passes know of channel j.
func (r *second) channel(f *first, j int, column table.Column, codes []float64) Channel {
	t := &r.traces[j]
	e := f.ends[j].without(codes)
	sorted := f.sample.column(j)
	c := Channel{Name: column.Name, Unit: column.Unit, Count: t.count, Missing: t.missing, LongestGap: t.longestGap,
		Min: math.NaN(), Max: math.NaN(), Median: quantile(sorted, .5), Spread: robust * deviation(sorted),
		Autocorrelation: t.autocorrelation(), EffectiveRows: math.NaN(), Trend: t.trend(), Spikes: t.spikes, WorstSpikes: t.worst, Held: t.runs}
	if len(e.low) > 0 {
		c.Min, c.Max = e.low[0].value, e.high[0].value
		c.AtMin, c.AtMax = e.low[0].count, e.high[0].count
	}
	if len(e.low) > 1 {
		c.nextMin, c.nextMax = e.low[1].count, e.high[1].count
	}
	c.step, c.same, c.pairs, c.up, c.down = t.step, t.same, t.pairs, t.up, t.down
	c.Common, c.CommonShare = common(sorted)
	c.Mean, c.Deviation = t.moments()
	if a := math.Max(c.Autocorrelation, 0); !math.IsNaN(c.Autocorrelation) {
		c.EffectiveRows = float64(t.count) * (1 - a) / (1 + a)
	}
	values, all := e.values(t.count)
	c.Different = -1
	if all {
		c.Different = len(values)
	}
	c.Type = r.typeOf(&c, t, f.whole[j])
	c.skew(sorted)
	c.Level, c.Filled = make([]float64, r.bins), make([]float64, r.bins)
	for b := range r.bins {
		rows := min(r.perBin, f.rows-int64(b)*r.perBin)
		c.Level[b] = t.binSum[b] / float64(t.binCount[b])
		c.Filled[b] = float64(t.binCount[b]) / float64(rows)
	}
	return c
}

// beyond tells whether second moments of values between low and high are not to be had in
// double precision.
func beyond(low, high float64) bool {
	const largest = 1e150
	return math.Max(math.Abs(low), math.Abs(high)) > largest || high-low < 1/largest
}

// mostCategories is how many whole values may be codes of categories.
const mostCategories = 12

func (r *second) typeOf(c *Channel, t *trace, whole bool) string {
	switch {
	case c.Count == 0:
		return "empty"
	case c.Min == c.Max:
		return "constant"
	case beyond(c.Min, c.Max):
		return "beyond"
	case c.Different == 2:
		return "two values"
	// The last bits of decimal steps differ.
	case t.pairs >= 10 && t.minStep > 0 && t.maxStep-t.minStep <= 1e-9*math.Max(math.Abs(c.Max), math.Abs(c.Min)):
		return "equal steps"
	case t.pairs >= 30 && t.up >= 9*t.pairs/10 && t.down <= t.pairs/200 && whole:
		return "counter"
	case whole && c.Different > 0 && c.Different <= mostCategories && c.Count >= 10*int64(c.Different):
		return "categories"
	case whole:
		return "whole"
	}
	return "number"
}

// skew measures the skewness of the sampled values and tries the transforms that all values
// allow.
func (c *Channel) skew(sorted []float64) {
	c.Skewness, c.Transform, c.Transformed = skewness(sorted, pca.NoTransform), pca.NoTransform, math.NaN()
	if len(sorted) < 30 || c.Type != "number" && c.Type != "whole" || math.Abs(c.Skewness) < 1.5 {
		return
	}
	// A few outliers are no skewness that a transform should mend.
	if cut := max(1, len(sorted)/200); math.Abs(skewness(sorted[cut:len(sorted)-cut], pca.NoTransform)) < 1 {
		return
	}
	best := .5 * math.Abs(c.Skewness)
	for _, t := range []pca.Transform{pca.SquareRoot, pca.Log} {
		if t == pca.SquareRoot && c.Min < 0 || t == pca.Log && !(c.Min > 0) {
			continue
		}
		if s := skewness(sorted, t); math.Abs(s) < best {
			c.Transform, c.Transformed, best = t, s, math.Abs(s)
		}
	}
	if c.Transform == pca.NoTransform || len(c.WorstSpikes) == 0 {
		return
	}
	// What is far away may be the long tail: a spike stands out after the transform too.
	values := make([]float64, len(sorted))
	for i, v := range sorted {
		values[i], _ = c.Transform.Apply(v)
	}
	at, _ := c.Transform.Apply(c.WorstSpikes[0].Value)
	if math.Abs(at-quantile(values, .5)) < spikeSpread*robust*deviation(values) {
		c.Spikes, c.WorstSpikes = 0, nil
	}
}

// skewness is the third standardized moment of transformed values.
func skewness(sorted []float64, t pca.Transform) float64 {
	n := float64(len(sorted))
	if n < 3 {
		return math.NaN()
	}
	x := make([]float64, len(sorted))
	for i, v := range sorted {
		x[i], _ = t.Apply(v)
	}
	mean := average(x)
	m2, m3 := 0.0, 0.0
	for _, v := range x {
		d := v - mean
		m2 += d * d
		m3 += d * d * d
	}
	m2, m3 = m2/n, m3/n
	if !(m2 > 0) {
		return math.NaN()
	}
	return m3 / (m2 * math.Sqrt(m2))
}

// common is the most common of ascending values and its share.
func common(sorted []float64) (value, share float64) {
	value, best, run := math.NaN(), 0, 0
	for i, v := range sorted {
		if i > 0 && v == sorted[i-1] {
			run++
		} else {
			run = 1
		}
		if run > best {
			value, best = v, run
		}
	}
	return value, float64(best) / float64(max(len(sorted), 1))
}
