package run

import (
	"context"
	"fmt"
	"strconv"
	"sync"
	"sync/atomic"

	"axisfold/pca"
	"axisfold/pca/table"
)

// heldCells bounds the size of a table that is kept in memory: 4 Mi numbers, 32 MiB. A
// table with more channels than rows is kept up to p² numbers, which is less than its
// cross-products would take.
const heldCells = 4 << 20

// exactRanks is up to how many rows of a table too large to hold medians are exact.
const exactRanks = 2048

// reading is what the first pass over the rows leaves.
type reading struct {
	source   *source
	rows     int64 // data rows of the table
	complete int64
	missing  []int64 // by column in use
	follow   *following
	// For a table too large to hold, the summaries made on the way; nil otherwise.
	stream *collector
}

// readTable goes through the table once. Small tables end up in memory; once a table
// proves too large, what was read is summarised and the rest streams through summaries.
// Rows then also go to the spill, if there is one; where that fails they are read again.
func readTable(ctx context.Context, rows table.Rows, r *roles, plan *foldPlan, form pca.Form, spill *table.Spill, o Options) (*reading, error) {
	out := &reading{missing: make([]int64, r.width()), follow: newFollowing(r.channels, r.grouped)}
	held := table.NewHeld(labelledColumns(r))
	prepare := newPreparers(r)
	collect := newCollector(r, plan, form)
	var streaming atomic.Bool
	type result struct {
		missing []int64
		sums    []keyed
		steps   steps
	}
	limit := int64(r.width()) * int64(r.width())
	if o.held > 0 {
		limit = o.held
	} else {
		limit = max(limit, heldCells)
	}
	err := rows.Each(ctx, o.Threads, func(worker int, b *table.Block) error {
		res := &result{missing: make([]int64, r.width())}
		if err := prepare(b, res.missing); err != nil {
			return err
		}
		res.steps = out.follow.within(b)
		if streaming.Load() {
			res.sums = collect.summarize(b)
		}
		b.Result = res
		return nil
	}, func(b *table.Block) error {
		res := b.Result.(*result)
		for i, m := range res.missing {
			out.missing[i] += m
		}
		out.follow.add(b, res.steps)
		out.complete += int64(b.Rows)
		out.rows = b.Row + int64(b.Count)
		// From the first block on, so that the blocks are those of the table.
		if spill != nil && spill.Append(b) != nil {
			spill.Close()
			spill = nil
		}
		if held != nil {
			held.Append(b)
			if int64(held.Len())*int64(r.width()) <= limit {
				return nil
			}
			streaming.Store(true)
			overflow := held
			held = nil
			return overflow.Each(ctx, 1, func(int, *table.Block) error { return nil }, func(b *table.Block) error {
				collect.add(collect.summarize(b))
				return nil
			})
		}
		if res.sums == nil {
			res.sums = collect.summarize(b)
		}
		collect.add(res.sums)
		return nil
	})
	if spill != nil && (err != nil || held != nil || spill.Finish() != nil) {
		spill.Close()
		spill = nil
	}
	if err != nil {
		return nil, err
	}
	out.source = &source{rows: rows, roles: r, held: held, spill: spill}
	if held == nil {
		out.stream = collect
	}
	return out, nil
}

// labelledColumns are the columns in use under their labels.
func labelledColumns(r *roles) []table.Column {
	out := make([]table.Column, r.width())
	for i, j := range r.use {
		out[i] = r.columns[j]
		out[i].Name = r.labels[i]
	}
	return out
}

// keyed is the summary of those rows of a block that share a fold or group.
type keyed struct {
	key string
	sum *pca.Summary
}

// collector builds the summaries that a run needs from blocks of prepared rows: of all
// rows, and of the folds or of what they can be cut from.
type collector struct {
	roles    *roles
	plan     *foldPlan
	form     pca.Form
	ranks    int
	builders sync.Pool
	parts    parts   // random and groups
	ledger   *ledger // blocks, and without folds
}

func newCollector(r *roles, plan *foldPlan, form pca.Form) *collector {
	c := &collector{roles: r, plan: plan, form: form}
	if pca.NeedsRanks(r.methods) {
		c.ranks = exactRanks
	}
	c.builders.New = func() any { return pca.NewBuilder(r.width(), form, c.ranks) }
	switch {
	case plan == nil:
		c.ledger = newLedger(r.width(), ledgerBlocks, c.ranks)
	case plan.ordered():
		c.ledger = newLedger(r.width(), max(plan.folds, ledgerBlocks), c.ranks)
	}
	return c
}

// summarize makes the summaries of one block. It may be called from many goroutines.
func (c *collector) summarize(b *table.Block) []keyed {
	builder := c.builders.Get().(*pca.Builder)
	defer c.builders.Put(builder)
	var key func(i int) string
	switch {
	case c.plan == nil:
		return []keyed{{"", builder.Summarize(b.Data, b.Rows)}}
	case c.plan.ordered():
		// Cut finer the more folds there are, so that their ends come close to exact.
		cuts := stretches(b.Rows, 1+c.plan.folds/4)
		out := make([]keyed, 0, len(cuts))
		start := 0
		for _, end := range cuts {
			if end > start {
				out = append(out, keyed{"", builder.Summarize(b.Data[start*b.Width:end*b.Width], end-start)})
			}
			start = end
		}
		return out
	case c.plan.arrangement == randomFolds:
		names := make([]string, c.plan.folds)
		var out []keyed
		for deal := range max(1, c.plan.deals) {
			for f := range names {
				names[f] = strconv.Itoa(deal*c.plan.folds + f)
			}
			folds := c.plan.deal(deal, b.Index, b.Rows)
			out = append(out, split(b, func(i int) string { return names[folds[i]] }, builder)...)
		}
		return out
	default:
		key = func(i int) string { return string(b.Group(i)) }
	}
	return split(b, key, builder)
}

// split summarises the rows of a block by key, in the order in which keys appear.
func split(b *table.Block, key func(i int) string, builder *pca.Builder) []keyed {
	var keys []string
	var rows [][]int // by key
	at := map[string]int{}
	for i := range b.Rows {
		k := key(i)
		place, ok := at[k]
		if !ok {
			place = len(keys)
			at[k] = place
			keys = append(keys, k)
			rows = append(rows, nil)
		}
		rows[place] = append(rows[place], i)
	}
	out := make([]keyed, len(keys))
	var gathered []float64
	for place, k := range keys {
		gathered = gathered[:0]
		for _, i := range rows[place] {
			gathered = append(gathered, b.Data[i*b.Width:(i+1)*b.Width]...)
		}
		out[place] = keyed{k, builder.Summarize(gathered, len(rows[place]))}
	}
	return out
}

// add takes in the summaries of the next block in row order.
func (c *collector) add(sums []keyed) {
	for _, k := range sums {
		switch {
		case c.ledger != nil:
			c.ledger.add(k.sum)
		default:
			builder := c.builders.Get().(*pca.Builder)
			c.parts.merge(k.key, k.sum, builder)
			c.builders.Put(builder)
		}
	}
}

// blocks returns summaries of consecutive stretches of rows for resampling; nil where the
// folds are not stretches.
func (c *collector) blocks() []*pca.Summary {
	if c.ledger == nil {
		return nil
	}
	return c.ledger.entries
}

// summaries returns the summary of all rows and, if there is a plan, those of the cells that
// folds are made of.
func (c *collector) summaries() (whole *pca.Summary, cells []*pca.Summary, splits []pca.Split, err error) {
	switch {
	case c.plan == nil:
		return pca.MergeAll(c.ledger.entries...), nil, nil, nil
	case c.ledger != nil:
		cells, splits, err = c.ledger.cut(c.plan)
	default:
		cells, splits, err = c.plan.fromParts(&c.parts)
	}
	if err != nil {
		return nil, nil, nil, err
	}
	// Each deal is all rows.
	return pca.MergeAll(cells[:len(cells)/max(1, c.plan.deals)]...), cells, splits, nil
}

// fromParts makes folds from summaries by key.
func (p *foldPlan) fromParts(have *parts) ([]*pca.Summary, []pca.Split, error) {
	if p.arrangement == randomFolds {
		folds := make([]*pca.Summary, p.folds*max(1, p.deals))
		for f := range folds {
			at, ok := have.at[strconv.Itoa(f)]
			if !ok {
				return nil, nil, tooFewRows(len(have.sums), p.folds)
			}
			folds[f] = have.sums[at]
		}
		return folds, p.dealt(p.folds), nil
	}
	if len(have.sums) < 2 {
		return nil, nil, &pca.DataError{Problem: fmt.Sprintf("folds by group need at least 2 groups; the complete rows hold %d", len(have.sums)),
			Hint: "use arrangement: blocks"}
	}
	sizes := make([]int, len(have.sums))
	for i, s := range have.sums {
		sizes[i] = s.Count()
	}
	var folds []*pca.Summary
	for _, members := range groupedFolds(sizes, p.folds) {
		var sums []*pca.Summary
		for _, g := range members {
			sums = append(sums, have.sums[g])
		}
		folds = append(folds, pca.MergeAll(sums...))
	}
	return folds, p.dealt(len(folds)), nil
}

func tooFewRows(rows, folds int) error {
	return &pca.DataError{Problem: fmt.Sprintf("%d complete rows cannot fill %d folds", rows, folds), Hint: "use fewer folds"}
}
