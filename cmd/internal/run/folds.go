package run

import (
	"math/rand/v2"
	"slices"

	"axisfold/pca"
)

// The arrangements of folds.
const (
	randomFolds = "random" // rows dealt at random, a fixed deal per block of rows
	blockFolds  = "blocks" // consecutive stretches of rows
	groupFolds  = "groups" // whole groups
	// forwardFolds are consecutive stretches, each learnt from what lies before it.
	forwardFolds = "forward"
)

// foldPlan says how rows are dealt to folds; nil means no folds.
type foldPlan struct {
	arrangement string
	folds       int
	seed        uint64
	gap         int // rows left out beside a stretch that is held out
	deals       int // of random folds
	// flexible: a table of fewer rows gets as many folds as it fills.
	flexible bool
}

// ordered tells whether folds are stretches of rows in their order.
func (p *foldPlan) ordered() bool {
	return p.arrangement == blockFolds || p.arrangement == forwardFolds
}

// deal returns the fold of each of n rows of a block in one of several deals: every run of as many rows as there
// are folds holds each fold once, in an order drawn from seed, block and deal.
func (p *foldPlan) deal(deal, block, n int) []int {
	rng := rand.New(rand.NewPCG(p.seed, uint64(block)+uint64(deal)<<40))
	out := make([]int, n)
	var order []int
	for i := range out {
		if i%p.folds == 0 {
			order = rng.Perm(p.folds)
		}
		out[i] = order[i%p.folds]
	}
	return out
}

// parts keeps one summary per key in the order of first appearance.
type parts struct {
	keys []string
	sums []*pca.Summary
	at   map[string]int
}

func (p *parts) merge(key string, s *pca.Summary, b *pca.Builder) {
	if p.at == nil {
		p.at = map[string]int{}
	}
	i, ok := p.at[key]
	if !ok {
		i = len(p.sums)
		p.at[key] = i
		p.keys = append(p.keys, key)
		p.sums = append(p.sums, b.Empty())
	}
	p.sums[i].Merge(s)
}

// groupedFolds deals whole groups to folds: each to its own when there are no more than
// folds, else the largest first to the fold with the fewest rows.
func groupedFolds(sizes []int, folds int) [][]int {
	folds = min(folds, len(sizes))
	order := make([]int, len(sizes))
	for i := range order {
		order[i] = i
	}
	if folds < len(sizes) {
		slices.SortStableFunc(order, func(a, b int) int { return sizes[b] - sizes[a] })
	}
	out := make([][]int, folds)
	rows := make([]int, folds)
	for _, g := range order {
		least := 0
		for f := range rows {
			if rows[f] < rows[least] {
				least = f
			}
		}
		out[least] = append(out[least], g)
		rows[least] += sizes[g]
	}
	for _, members := range out {
		slices.Sort(members)
	}
	return out
}

// stretches cuts n rows into folds consecutive stretches of nearly equal length and
// returns their ends.
func stretches(n, folds int) []int {
	ends := make([]int, folds)
	for f := range ends {
		ends[f] = int(int64(f+1) * int64(n) / int64(folds))
	}
	return ends
}

// ledger keeps summaries of consecutive blocks of rows in bounded number: when full,
// neighbours merge. Stretches are made of whole entries, so on a table too large to hold
// their ends lie within one entry of the exact place.
type ledger struct {
	entries []*pca.Summary
	most    int
}

// ledgerBlocks is how many stretches a ledger keeps at least, for resampling.
const ledgerBlocks = 8

// ledgerBytes bounds the memory of a ledger.
const ledgerBytes = 48 << 20

// newLedger makes a ledger for summaries of so many columns; ranks is how many values of
// each they keep for medians.
func newLedger(width, folds, ranks int) *ledger {
	entry := 8 * width * (width + 3*ranks)
	return &ledger{most: max(4*folds, min(4096, ledgerBytes/(entry+1)))}
}

func (l *ledger) add(s *pca.Summary) {
	l.entries = append(l.entries, s)
	if len(l.entries) <= l.most {
		return
	}
	half := l.entries[:0]
	for i := 0; i < len(l.entries); i += 2 {
		e := l.entries[i]
		if i+1 < len(l.entries) {
			e.Merge(l.entries[i+1])
		}
		half = append(half, e)
	}
	clear(l.entries[len(half):])
	l.entries = half
}

// dealt holds out each fold of each deal in turn; folds of a deal stand together.
func (p *foldPlan) dealt(folds int) []pca.Split {
	var out []pca.Split
	for deal := range max(1, p.deals) {
		for _, s := range pca.HoldEachOut(folds) {
			s.Deal = deal
			for i := range s.Train {
				s.Train[i] += deal * folds
			}
			s.Held[0] += deal * folds
			out = append(out, s)
		}
	}
	return out
}
