package run

import (
	"context"

	"axisfold/pca/table"
	"axisfold/pcr"
)

// pressCost bounds rows·channels·components of a pass that no rule asked for.
const pressCost = 2e10

// press goes through the rows for the leave-one-out errors of the regression with directions fixed. A
// table that is not in memory has to be read once more, so there only the rule that needs
// them asks for them.
func (w *work) press(ctx context.Context, responses []int, o *pcr.Options) error {
	needed := o.Choice == pcr.SmallestPress
	p := float64(len(w.active))
	if !needed {
		switch {
		case w.reading.source.held == nil:
			w.warn("no-press", "press was not computed: it needs rows, and another reading of a table too large to hold in memory; the rule press would do it")
			return nil
		case float64(w.reading.complete)*p*min(p, float64(w.reading.complete)) > pressCost:
			w.warn("no-press", "press was not computed: it takes rows times channels times components, which is much here; the rule press would do it")
			return nil
		}
	}
	plan, err := pcr.NewPress(w.whole, w.active, responses, *o)
	if err != nil {
		return err
	}
	threads := w.options.threads()
	workers := make([]*pcr.PressRows, threads)
	gathered := make([][]float64, threads)
	o.Press = plan.Sums()
	return w.reading.source.each(ctx, threads, func(worker int, b *table.Block) error {
		if workers[worker] == nil {
			workers[worker] = plan.Rows()
		}
		gathered[worker] = w.gather(gathered[worker], b)
		sums := plan.Sums()
		workers[worker].Add(sums, gathered[worker], func(row, response int) float64 { return b.Data[row*b.Width+responses[response]] }, b.Rows)
		b.Result = sums
		return nil
	}, func(b *table.Block) error {
		o.Press.Merge(b.Result.(pcr.PressSums))
		return nil
	})
}
