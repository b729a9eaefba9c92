package run

import (
	"fmt"
	"math"
	"runtime"
	"strconv"
	"sync"

	"axisfold/pca"
	"axisfold/pca/table"
)

// pieceRows is how many rows of a held table are summarised at a time. Boundaries depend
// on the rows alone, so the sums have the same bits for any number of threads.
const pieceRows = 2048

// heldSummaries makes the summaries of a table in memory: of all rows, and of the cells
// that folds are made of, whose ends are exact here.
func heldSummaries(held *table.Held, plan *foldPlan, form pca.Form, ranks bool, threads int) (whole *pca.Summary, cells []*pca.Summary, splits []pca.Split, err error) {
	n := held.Len()
	all := make([]int, n)
	for i := range all {
		all[i] = i
	}
	kept := 0
	if ranks {
		kept = n // exact medians: all values stay
	}
	width := len(held.Columns())
	whole = summarizeRows(held.Matrix(), width, all, form, kept, threads)
	if plan == nil {
		return whole, nil, nil, nil
	}
	lists, splits, err := foldRows(held, plan)
	if err != nil {
		return nil, nil, nil, err
	}
	for _, rows := range lists {
		cells = append(cells, summarizeRows(held.Matrix(), width, rows, form, kept, threads))
	}
	return whole, cells, splits, nil
}

// heldBlocks summarises count consecutive stretches for resampling; 0 makes about √n of
// them, each about √n rows long, so that they outlast the memory of most series.
func heldBlocks(held *table.Held, count int, form pca.Form, ranks bool, threads int) []*pca.Summary {
	n := held.Len()
	if count == 0 {
		count = max(2, min(100, int(math.Sqrt(float64(n)))))
	}
	count = min(count, n)
	kept := 0
	if ranks {
		kept = n
	}
	var out []*pca.Summary
	start := 0
	for _, end := range stretches(n, count) {
		rows := make([]int, 0, end-start)
		for i := start; i < end; i++ {
			rows = append(rows, i)
		}
		out = append(out, summarizeRows(held.Matrix(), len(held.Columns()), rows, form, kept, threads))
		start = end
	}
	return out
}

// foldRows lists the rows of each cell, and says which cells are held out together.
func foldRows(held *table.Held, plan *foldPlan) (lists [][]int, splits []pca.Split, err error) {
	n := held.Len()
	if plan.flexible {
		most := n
		if plan.arrangement == forwardFolds {
			most-- // the first row is only learnt from
		}
		plan.folds = min(plan.folds, most)
	}
	if plan.arrangement == randomFolds && n < plan.folds {
		return nil, nil, tooFewRows(n, plan.folds)
	}
	switch plan.arrangement {
	case randomFolds:
		for deal := range max(1, plan.deals) {
			dealt := make([][]int, plan.folds)
			for i, f := range plan.deal(deal, 0, n) {
				dealt[f] = append(dealt[f], i)
			}
			lists = append(lists, dealt...)
		}
		splits = plan.dealt(plan.folds)
	case blockFolds, forwardFolds:
		d, err := plan.divide(n, nil)
		if err != nil {
			return nil, nil, err
		}
		start := 0
		for _, end := range d.ends {
			var rows []int
			for i := start; i < end; i++ {
				rows = append(rows, i)
			}
			lists = append(lists, rows)
			start = end
		}
		splits = d.splits
	case groupFolds:
		at := map[string]int{}
		var groups [][]int
		for i := range n {
			g := string(held.Group(i))
			if _, ok := at[g]; !ok {
				at[g] = len(groups)
				groups = append(groups, nil)
			}
			groups[at[g]] = append(groups[at[g]], i)
		}
		if len(groups) < 2 {
			return nil, nil, &pca.DataError{Problem: fmt.Sprintf("folds by group need at least 2 groups; the complete rows hold %d", len(groups)),
				Hint: "use arrangement: blocks"}
		}
		sizes := make([]int, len(groups))
		for i, g := range groups {
			sizes[i] = len(g)
		}
		for _, members := range groupedFolds(sizes, plan.folds) {
			var rows []int
			for _, g := range members {
				rows = append(rows, groups[g]...)
			}
			lists = append(lists, rows)
		}
		splits = plan.dealt(len(lists))
	default:
		panic("run: unknown arrangement " + strconv.Quote(plan.arrangement))
	}
	return lists, splits, nil
}

// summarizeRows summarises the given rows of x in pieces, in parallel, merged in order.
func summarizeRows(x []float64, width int, rows []int, form pca.Form, ranks, threads int) *pca.Summary {
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	count := (len(rows) + pieceRows - 1) / pieceRows
	sums := make([]*pca.Summary, count)
	var wg sync.WaitGroup
	for t := range min(threads, count) {
		wg.Go(func() {
			builder := pca.NewBuilder(width, form, ranks)
			var gathered []float64
			for i := t; i < count; i += threads {
				piece := rows[i*pieceRows : min((i+1)*pieceRows, len(rows))]
				gathered = gathered[:0]
				for _, r := range piece {
					gathered = append(gathered, x[r*width:(r+1)*width]...)
				}
				sums[i] = builder.Summarize(gathered, len(piece))
			}
		})
	}
	wg.Wait()
	if count == 0 {
		return pca.NewBuilder(width, form, ranks).Empty()
	}
	return pca.MergeAll(sums...)
}
