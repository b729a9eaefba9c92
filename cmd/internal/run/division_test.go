package run

import (
	"slices"
	"strings"
	"testing"

	"axisfold/pca"
)

// rowsOf lists the rows of cells.
func rowsOf(d *division, cells []int) (rows []int) {
	for _, c := range cells {
		from := 0
		if c > 0 {
			from = d.ends[c-1]
		}
		for i := from; i < d.ends[c]; i++ {
			rows = append(rows, i)
		}
	}
	return rows
}

// Every division against its definition, row by row: a row is learnt from when it is further
// than the gap from every held-out row and, forward, comes before them.
func TestDivide(t *testing.T) {
	for _, arrangement := range []string{blockFolds, forwardFolds} {
		for _, n := range []int{11, 24, 100} {
			for gap := range 14 {
				for _, bounds := range [][]int{nil, {0, 3, 4, 7, 8, 10, n}} {
					if bounds != nil && n != 11 {
						continue
					}
					p := &foldPlan{arrangement: arrangement, folds: 3, gap: gap}
					d, err := p.divide(n, bounds)
					if err != nil {
						if !strings.Contains(err.Error(), "leaves fold") {
							t.Fatal(err)
						}
						continue
					}
					seen := make([]int, n)
					for _, s := range d.splits {
						held, train := rowsOf(d, s.Held), rowsOf(d, s.Train)
						first, last := held[0], held[len(held)-1]
						for _, i := range held {
							seen[i]++
						}
						for i := range n {
							far := i < first-gap || arrangement == blockFolds && i > last+gap
							learnt := slices.Contains(train, i)
							if learnt && !far || far && !learnt && bounds == nil {
								t.Errorf("%s, %d rows, gap %d: row %d beside %d to %d learnt from: %t", arrangement, n, gap, i, first, last, learnt)
							}
						}
					}
					for i, times := range seen {
						if arrangement == blockFolds && times != 1 || arrangement == forwardFolds && times > 1 {
							t.Errorf("%s: row %d held out %d times", arrangement, i, times)
						}
					}
				}
			}
		}
	}
}

// A gap that leaves nothing to learn from, and more stretches than rows.
func TestDivideRefuses(t *testing.T) {
	for want, p := range map[string]*foldPlan{
		"a gap of 5 rows leaves fold 2 of 3 no row to learn from, of 10": {arrangement: blockFolds, folds: 3, gap: 5},
		"a gap of 4 rows leaves fold 1 of 3 no row to learn from, of 10": {arrangement: forwardFolds, folds: 3, gap: 4},
		"10 complete rows cannot fill 11 folds":                          {arrangement: forwardFolds, folds: 10},
	} {
		_, err := p.divide(10, nil)
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v; want %s", err, want)
		}
	}
}

// A ledger cuts cells of whole entries that hold all rows in their order.
func TestLedgerCut(t *testing.T) {
	b := pca.NewBuilder(1, pca.CrossProducts, 0)
	l := newLedger(1, 4, 0)
	var all []float64
	for i := range 40 {
		block := make([]float64, 1+i%3)
		for r := range block {
			block[r] = float64(len(all) + r)
		}
		all = append(all, block...)
		l.add(b.Summarize(block, len(block)))
	}
	cells, splits, err := l.cut(&foldPlan{arrangement: blockFolds, folds: 4, gap: 2})
	if err != nil {
		t.Fatal(err)
	}
	next := 0.0
	for _, c := range cells {
		if c.Min(0) != next || c.Max(0) != next+float64(c.Count()-1) {
			t.Errorf("cell of %d rows from %g to %g follows %g", c.Count(), c.Min(0), c.Max(0), next)
		}
		next += float64(c.Count())
	}
	if int(next) != len(all) || len(splits) != 4 {
		t.Errorf("%g rows in cells of %d; %d splits", next, len(all), len(splits))
	}
}
