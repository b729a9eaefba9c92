package run

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"axisfold/configs"
	"axisfold/pca"
	"axisfold/pca/table"
)

// foreseenCells bounds how much of a table is looked at before a run: the first 4 Mi
// numbers, a moment's work.
const foreseenCells = 4 << 20

// errEnough ends the look at the rows.
var errEnough = errors.New("enough rows")

// foresight is what the first rows tell.
type foresight struct {
	rows, complete int64
	whole          bool // all rows were looked at
	minds          []string
}

// foresee looks at the first rows for what would stop the run or spoil its result. Cells
// and values that the run cannot use are its error.
func foresee(ctx context.Context, t *table.Table, r *roles, cfg *configs.File, o Options) (*foresight, error) {
	f := &foresight{whole: true}
	missing := make([]int64, r.width())
	held := table.NewHeld(labelledColumns(r))
	prepare := newPreparers(r)
	err := t.Each(ctx, o.Threads, func(_ int, b *table.Block) error {
		gaps := make([]int64, r.width())
		b.Result = gaps
		return prepare(b, gaps)
	}, func(b *table.Block) error {
		for i, m := range b.Result.([]int64) {
			missing[i] += m
		}
		f.rows = b.Row + int64(b.Count)
		held.Append(b)
		if f.rows*int64(r.width()) >= foreseenCells {
			f.whole = false
			return errEnough
		}
		return nil
	})
	if err != nil && !errors.Is(err, errEnough) {
		return nil, err
	}
	f.complete = int64(held.Len())
	f.gaps(r, missing)
	if f.complete >= 2 {
		f.shape(r, cfg)
		f.values(r, cfg, held.Matrix())
	}
	return f, nil
}

func (f *foresight) mind(format string, args ...any) {
	f.minds = append(f.minds, fmt.Sprintf(format, args...))
}

// gaps names the channels that cost most rows where fewer than half are complete.
func (f *foresight) gaps(r *roles, missing []int64) {
	if 2*f.complete >= f.rows {
		return
	}
	order := pca.FirstComponents(len(missing))
	sort.SliceStable(order, func(a, b int) bool { return missing[order[a]] > missing[order[b]] })
	var worst []string
	for _, i := range order[:min(3, len(order))] {
		if missing[i] > 0 {
			worst = append(worst, fmt.Sprintf("%s has gaps in %d", r.labels[i], missing[i]))
		}
	}
	stops := ""
	if f.whole && f.complete < 2 {
		stops = ", which stops the run"
	}
	f.mind("only %d of %d rows are complete%s: %s; read.leave_out takes channels away", f.complete, f.rows, stops, strings.Join(worst, ", "))
}

// shape compares the number of rows with what is asked of them.
func (f *foresight) shape(r *roles, cfg *configs.File) {
	if !f.whole {
		return
	}
	if int64(r.channels) >= f.complete {
		f.mind("%d complete rows for %d channels: at most %d components, and least squares has no answer", f.complete, r.channels, f.complete-1)
	}
	if plan := foldsOf(cfg); plan != nil && plan.arrangement != groupFolds && int64(plan.folds) > f.complete && !plan.flexible {
		f.mind("%d complete rows cannot fill %d folds, which stops the run: use fewer", f.complete, plan.folds)
	}
}

// values looks at the complete rows: channels that hold one value, values that look like
// codes, and predictors that are the response again.
func (f *foresight) values(r *roles, cfg *configs.File, x []float64) {
	width := r.width()
	column := make([]float64, len(x)/width)
	var constant []string
	for i, name := range r.labels {
		for at := range column {
			column[at] = x[at*width+i]
		}
		slices.Sort(column)
		if column[0] == column[len(column)-1] {
			constant = append(constant, name)
			continue
		}
		if code, times := suspect(column); times > 0 {
			f.mind("%s is %g in %d rows, far from all its other values: a code for missing? read.missing would take it", name, code, times)
		}
	}
	if len(constant) > 0 {
		what := "stops the run unless standardize.constant is drop"
		if cfg.Standardize.Constant == "drop" {
			what = "is dropped"
		}
		f.mind("a channel that holds one value %s: %s", what, firstOf(constant, 6))
	}
	if r.channels == width || width > mostCorrelated {
		return
	}
	s := pca.NewBuilder(width, pca.CrossProducts, 0).Summarize(x, len(x)/width)
	correlations := s.Correlations()
	for i := r.channels; i < width; i++ {
		for j := range r.channels {
			if math.Abs(correlations[i*width+j]) > 1-1e-9 {
				f.mind("%s is the response %s again, up to scale and offset: regress.predictors can leave it out", r.labels[j], r.labels[i])
			}
		}
	}
}

// suspect finds a lowest or highest value that repeats and lies farther from the next than
// all others from one another; sorted holds at least two different values.
func suspect(sorted []float64) (code float64, times int) {
	const few = 10 // with fewer other values there is no telling what is far
	n := len(sorted)
	low := sort.Search(n, func(i int) bool { return sorted[i] > sorted[0] })
	high := sort.SearchFloat64s(sorted, sorted[n-1])
	switch {
	case low >= 3 && n-low >= few && sorted[n-1] > sorted[low] && sorted[low]-sorted[0] > sorted[n-1]-sorted[low]:
		return sorted[0], low
	case n-high >= 3 && high >= few && sorted[high-1] > sorted[0] && sorted[n-1]-sorted[high-1] > sorted[high-1]-sorted[0]:
		return sorted[n-1], n - high
	}
	return 0, 0
}

func firstOf(names []string, most int) string {
	if len(names) <= most {
		return strings.Join(names, ", ")
	}
	return fmt.Sprintf("%s and %d more", strings.Join(names[:most], ", "), len(names)-most)
}
