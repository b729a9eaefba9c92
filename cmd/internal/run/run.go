// Package run calls the stages in order on files: from a run file to a run folder.
//
// [Execute] is the whole of it: read, standardize, decompose, retain, regress, draw,
// write. Each stage takes and returns plain structs of the packages that own it.
package run

import (
	"context"
	"fmt"
	"io"
	"runtime"

	"axisfold/cmd/internal/report"
	"axisfold/configs"
	"axisfold/pca"
	"axisfold/pca/retain"
	"axisfold/pca/table"
	"axisfold/pcr"
)

// Options are what the command line adds to the run file.
type Options struct {
	Out     string // folder; empty takes that of the run file
	Replace bool
	Threads int // 0 takes all cores
	Version string
	Set     []string // overrides, for the manifest
	Sweep   [2]int   // numbers of channels that the summary compares; zeros: around the chosen one

	// For tests: a bound in place of heldCells, and files that fail.
	held int64
	open func(path string) (io.WriteCloser, error)
}

func (o *Options) threads() int {
	if o.Threads > 0 {
		return o.Threads
	}
	return runtime.GOMAXPROCS(0)
}

// Execute runs the run file and returns the study and the folder written. On any error,
// and when ctx ends, nothing is left behind.
func Execute(ctx context.Context, cfg *configs.File, o Options) (*report.Study, string, error) {
	final := finalFolder(cfg, o)
	f, err := newFolder(final, cfg.Path, o.Replace)
	if err != nil {
		return nil, "", err
	}
	defer f.discard()
	if o.open != nil {
		f.open = o.open
	}
	w := &work{cfg: cfg, options: o, folder: f}
	// Long computations do not look at ctx; an interrupt leaves them behind, and the
	// program ends.
	finished := make(chan error, 1)
	go func() { finished <- w.stages(ctx) }()
	select {
	case err = <-finished:
	case <-ctx.Done():
		err = ctx.Err()
	}
	if err != nil {
		return nil, "", err
	}
	if err := f.commit(); err != nil {
		return nil, "", err
	}
	return w.study, final, nil
}

// stages runs them in order.
func (w *work) stages(ctx context.Context) error {
	for _, stage := range []func(context.Context) error{w.read, w.decompose, w.copies, w.retain, w.rotate, w.uncertainty, w.reduce, w.regress, w.smear, w.rows, w.draw, w.write} {
		if err := stage(ctx); err != nil {
			return err
		}
		if err := ctx.Err(); err != nil {
			return err
		}
	}
	return nil
}

// work carries what the stages hand on.
type work struct {
	cfg     *configs.File
	options Options
	folder  *folder
	table   *table.Table
	roles   *roles
	reading *reading
	plan    *foldPlan
	whole   *pca.Summary
	folds   []*pca.Summary // what splits are made of
	splits  []pca.Split
	active  []int         // channels that take part, by position in the prepared rows
	dropped []report.Note // channels that do not
	study   *report.Study
	// correlations of the active channels, p×p; nil when they are too many.
	correlations []float64
	roots        *retain.Evidence // what retention rules judge, with the draws they share
	sample       sample
}

// read opens the table, gives every column its role and goes through the rows once.
func (w *work) read(ctx context.Context) error {
	t, err := table.Open(ctx, readOptions(w.cfg, w.options.Threads))
	if err != nil {
		return err
	}
	w.table = t
	if w.roles, err = assignRoles(w.cfg, t.Columns()); err != nil {
		return err
	}
	w.plan = foldsOf(w.cfg)
	form := pca.CrossProducts
	if w.cfg.Decompose.Route == string(pca.SVD) {
		form = pca.Factor
	}
	if w.reading, err = readTable(ctx, t, w.roles, w.plan, form, w.spill(), w.options); err != nil {
		return err
	}
	w.study = &report.Study{Title: w.cfg.Title, Seed: w.cfg.Seed}
	return w.checkRows()
}

// spill makes room beside the run folder for rows that are slow to read again; nil where
// that does not pay or there is none.
func (w *work) spill() *table.Spill {
	most := int64(w.cfg.Read.Spill * 1e9)
	if most == 0 || !w.table.Costly() {
		return nil
	}
	s, err := table.NewSpill(labelledColumns(w.roles), w.folder.scratch("rows"), most)
	if err != nil {
		return nil
	}
	return s
}

// foldsOf returns the folds that regression and reduction are judged on: those of
// regress.retain, or ten stretches of rows. Rules that do not decide by them still
// have them, so that every fit comes with its held-out error; there a table of fewer rows
// gets as many folds as it fills.
func foldsOf(cfg *configs.File) *foldPlan {
	switch {
	case cfg.Regress == nil && cfg.Reduce == nil:
		return nil
	case cfg.Regress == nil:
		return &foldPlan{arrangement: blockFolds, folds: 10, seed: cfg.Seed, flexible: true}
	}
	r := cfg.Regress.Retain
	choice := pcr.Choice(r.Rule)
	return &foldPlan{arrangement: r.Arrangement, folds: r.Folds, gap: r.Gap, deals: r.Repeats, seed: cfg.Seed,
		flexible: !choice.ByFolds()}
}

// checkRows refuses tables that cannot carry any analysis, before anything is computed.
func (w *work) checkRows() error {
	n := w.reading.complete
	if n >= 2 {
		return nil
	}
	problem := fmt.Sprintf("%d of %d rows are complete; at least 2 are needed", n, w.reading.rows)
	worst, at := int64(0), -1
	for i, m := range w.reading.missing {
		if m > worst {
			worst, at = m, i
		}
	}
	hint := ""
	if at >= 0 {
		hint = fmt.Sprintf("channel %q alone has gaps in %d rows; leave it out with read.leave_out", w.roles.labels[at], worst)
	}
	return &pca.DataError{Problem: problem, Hint: hint}
}

// retain runs the rule of the run file and, beside it, all others.
func (w *work) retain(context.Context) error {
	deviations := make([]float64, len(w.active))
	for j, i := range w.active {
		deviations[j] = w.whole.Deviation(i)
	}
	e := retain.EvidenceFor(w.study.Decomposition, deviations, w.cfg.Seed, w.options.Threads)
	if held := w.reading.source.held; held != nil {
		e.Standardized = w.standardized(held.Matrix())
	}
	e.Effective = retain.EffectiveRows(e.Rows, w.autocorrelations())
	w.roots = &e
	r := w.cfg.Retain
	verdict, err := retain.Apply(r.Rule, &e, settingsOf(r))
	if err != nil {
		return err
	}
	if verdict.Abstains {
		return &pca.DataError{Problem: fmt.Sprintf("retain: %s abstains: %s", r.Rule, verdict.Note), Hint: "choose another rule"}
	}
	w.study.Verdict = verdict
	w.study.Overview = retain.Overview(&e, verdict)
	w.study.Warnings = append(w.study.Warnings, verdict.Warnings...)
	if verdict.Components == 0 {
		w.study.Warnings = append(w.study.Warnings, pca.Warning{Code: "none-retained",
			Text: fmt.Sprintf("%s keeps no component: %s", r.Rule, verdict.Note)})
	}
	return nil
}

// autocorrelations of the channels at lag one.
func (w *work) autocorrelations() []float64 {
	out := make([]float64, len(w.active))
	for j, i := range w.active {
		deviation := w.whole.Deviation(i)
		out[j] = w.reading.follow.correlation(i, deviation*deviation)
	}
	return out
}

// standardized brings the rows in memory to the scale of the decomposition, centred.
func (w *work) standardized(rows []float64) []float64 {
	d, width, p := w.study.Decomposition, w.roles.width(), len(w.active)
	out := make([]float64, len(rows)/width*p)
	for i := range len(rows) / width {
		for j, a := range w.active {
			out[i*p+j] = (rows[i*width+a] - w.whole.Mean(a)) / d.Scaling.Scale[j]
		}
	}
	return out
}
