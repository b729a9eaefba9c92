package run

import (
	"context"
	"fmt"
	"strings"

	"axisfold/cmd/internal/report"
	"axisfold/pca"
	"axisfold/pca/table"
)

// smallWidth is up to how many columns a held table is decomposed through a factor of
// its rows as a matter of course: it costs no time there and squares no condition.
const smallWidth = 128

// With more channels than rows a factor is the rows themselves. Its decomposition takes
// minutes when both sides are long, where cross-products take seconds: up to factorSide
// rows a factor is taken, and beyond crossSide channels, whose cross-products would not
// fit.
const (
	factorSide = 300
	crossSide  = 5000
)

// affordable is the work, 2·n·p² operations, up to which a nearly singular table too
// large to hold is gone through again for a factor: about half a minute.
const affordable = 1e11

// decompose makes the summaries and finds the components by the route that the run file
// names or the table calls for.
func (w *work) decompose(ctx context.Context) error {
	n, p := int(w.reading.complete), w.roles.width()
	route := pca.Route(w.cfg.Decompose.Route)
	form, reason := pca.CrossProducts, "asked for"
	switch {
	case route == pca.SVD:
		form = pca.Factor
	case route == pca.Eigen:
	case n-1 < p && (min(n, p) <= factorSide || p > crossSide):
		form, reason = pca.Factor, "more channels than rows can tell apart"
	case n-1 < p:
		reason = fmt.Sprintf("more channels than rows, and %d rows are many for a factor; decompose.route: svd takes the time", n)
	case w.reading.stream == nil && p <= smallWidth:
		form, reason = pca.Factor, "small table"
	case w.reading.stream == nil:
		reason = fmt.Sprintf("%d rows of %d channels", n, p)
	default:
		reason = fmt.Sprintf("%d rows, more than are held in memory", n)
	}
	if err := w.attempt(ctx, form, reason); err != nil {
		return err
	}
	d := w.study.Decomposition
	if route == pca.Auto && form == pca.CrossProducts && n > p && d.Condition() > pca.NearlySingular {
		if w.reading.stream != nil && 2*float64(n)*float64(p)*float64(p) > affordable {
			w.warn("small-roots", "the channels are nearly dependent (condition %.2g) and roots below %.2g are rounding; decompose.route: svd resolves them in a longer run",
				d.Condition(), float64(p)*0x1p-52*d.Values[0])
			return nil
		}
		return w.attempt(ctx, pca.Factor, fmt.Sprintf("the channels are nearly dependent (condition %.2g)", d.Condition()))
	}
	return nil
}

func (w *work) warn(code, format string, args ...any) {
	w.study.Warnings = append(w.study.Warnings, pca.Warning{Code: code, Text: fmt.Sprintf(format, args...)})
}

func (w *work) attempt(ctx context.Context, form pca.Form, reason string) error {
	if err := w.summarize(ctx, form); err != nil {
		return err
	}
	if err := w.chooseChannels(); err != nil {
		return err
	}
	o := w.decomposeOptions()
	d, err := pca.Decompose(w.whole.Pick(w.active), o)
	if err != nil {
		return err
	}
	d.Reason = reason
	s := w.study
	s.Decomposition = d
	s.Warnings = append([]pca.Warning(nil), d.Warnings...)
	if pca.Matrix(w.cfg.Decompose.Matrix) == pca.Correlation && !sameMethods(o.Methods, o.EffectiveMethods()) {
		w.warn("scaling-without-effect", "the correlation matrix brings every channel to unit variance, so the scaling asked for (%s) has no effect; decompose.matrix: covariance would use it", w.cfg.Standardize.Scaling)
	}
	w.describe()
	if w.table.Unordered() {
		w.warn("unordered-rows", "read.query has no order by, so the rows may come in another order another time: folds, neighbours and last digits depend on it")
	}
	w.correlate()
	return nil
}

// correlate measures how channels correlate and names those that are copies of others:
// they count twice in every component, and least squares cannot tell them apart.
func (w *work) correlate() {
	p := len(w.active)
	if p > mostCorrelated {
		return
	}
	w.correlations = w.whole.Pick(w.active).Correlations()
	w.study.Adequacy = pca.Adequate(w.correlations, p, int(w.reading.complete))
	pairs := pca.Twins(w.correlations, p)
	if len(pairs) == 0 {
		return
	}
	names := w.study.Decomposition.Channels
	var said []string
	for i, pair := range pairs {
		if i == 5 {
			said = append(said, fmt.Sprintf("and %d more pairs", len(pairs)-i))
			break
		}
		said = append(said, fmt.Sprintf("%s of %s", names[pair[1]], names[pair[0]]))
	}
	w.warn("copies", "copies up to scale and offset, which count twice in every component: %s", strings.Join(said, ", "))
}

func sameMethods(a, b []pca.Method) bool {
	for i := range a {
		if a[i] != b[i] {
			return false
		}
	}
	return true
}

func (w *work) decomposeOptions() pca.Options {
	o := pca.Options{Matrix: pca.Matrix(w.cfg.Decompose.Matrix)}
	for _, i := range w.active {
		o.Names = append(o.Names, w.roles.labels[i])
		o.Methods = append(o.Methods, w.roles.methods[i])
	}
	return o
}

// summarize makes the summary of all rows and of the folds in the form asked for, from
// the rows in memory, from what the first pass left, or from another pass.
func (w *work) summarize(ctx context.Context, form pca.Form) (err error) {
	ranks := pca.NeedsRanks(w.roles.methods)
	switch c := w.reading.stream; {
	case c == nil:
		w.whole, w.folds, w.splits, err = heldSummaries(w.reading.source.held, w.plan, form, ranks, w.options.Threads)
	case c.form == form:
		w.whole, w.folds, w.splits, err = c.summaries()
	default:
		again := newCollector(w.roles, w.plan, form)
		if err := w.reading.source.each(ctx, w.options.Threads, func(_ int, b *table.Block) error {
			b.Result = again.summarize(b)
			return nil
		}, func(b *table.Block) error {
			again.add(b.Result.([]keyed))
			return nil
		}); err != nil {
			return err
		}
		w.whole, w.folds, w.splits, err = again.summaries()
	}
	return err
}

// chooseChannels lists the channels that take part, by position in the prepared rows:
// all of them, or those that move when the run file says that constant ones are dropped.
// Otherwise a constant channel is an error at the next step.
func (w *work) chooseChannels() error {
	w.active, w.dropped = nil, nil
	for i := range w.roles.channels {
		if w.cfg.Standardize.Constant == "drop" && w.whole.Constant(i) {
			w.dropped = append(w.dropped, report.Note{Column: w.roles.columns[w.roles.use[i]].Name,
				Text: fmt.Sprintf("left out: holds one value, %.6g, in all rows", w.whole.Min(i))})
			continue
		}
		w.active = append(w.active, i)
	}
	if len(w.active) == 0 {
		return &pca.DataError{Problem: "every channel holds one value"}
	}
	return nil
}

// describe fills the facts of table and channels.
func (w *work) describe() {
	s := w.study
	s.Channels = s.Channels[:0]
	for _, i := range w.active {
		s.Channels = append(s.Channels, w.channel(i))
	}
	s.Table = report.Table{Rows: w.reading.rows, Complete: w.reading.complete, Held: w.reading.stream == nil,
		Time: w.cfg.Read.Time, Group: w.cfg.Read.Groups}
	for _, n := range w.table.Notes() {
		s.Table.Notes = append(s.Table.Notes, report.Note{Column: n.Column, Text: n.Text})
	}
	s.Table.Notes = append(append(s.Table.Notes, w.roles.notes...), w.dropped...)
}

func (w *work) channel(i int) report.Channel {
	r := w.roles
	c := r.columns[r.use[i]]
	unit := c.Unit
	if r.transforms[i] != pca.NoTransform {
		unit = ""
	}
	return report.Channel{Name: r.labels[i], Source: c.Name, Transform: r.transforms[i], Unit: unit, SourceUnit: c.Unit,
		Count: w.reading.complete, Missing: w.reading.missing[i],
		Mean: w.whole.Mean(i), Deviation: w.whole.Deviation(i), Minimum: w.whole.Min(i), Maximum: w.whole.Max(i)}
}
