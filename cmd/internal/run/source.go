package run

import (
	"context"
	"fmt"

	"axisfold/pca"
	"axisfold/pca/gaps"
	"axisfold/pca/table"
)

// source gives the prepared rows of the table: complete, transformed, the columns in use
// only. It can be gone through again and again.
type source struct {
	rows  table.Rows
	roles *roles // nil once the rows are held in memory, already prepared
	held  *table.Held
	spill *table.Spill // prepared rows of a table that is too large to hold and slow to read
}

// each goes through the rows in blocks: work in parallel, merge in row order.
func (s *source) each(ctx context.Context, threads int, work func(worker int, b *table.Block) error, merge func(b *table.Block) error) error {
	if s.held != nil {
		return s.held.Each(ctx, threads, work, merge)
	}
	if s.spill != nil {
		return s.spill.Each(ctx, threads, work, merge)
	}
	prepare := newPreparers(s.roles)
	return s.rows.Each(ctx, threads, func(worker int, b *table.Block) error {
		if err := prepare(b, nil); err != nil {
			return err
		}
		return work(worker, b)
	}, merge)
}

// close gives up what the source keeps beside the rows; no pass follows.
func (s *source) close() {
	if s.spill != nil {
		s.spill.Close()
	}
}

// newPreparers returns a function that prepares a block in place and adds the gaps it
// finds to missing, one count per column in use. It may be called from many goroutines.
func newPreparers(r *roles) func(b *table.Block, missing []int64) error {
	identity := r.width() == len(r.columns)
	for i, j := range r.use {
		identity = identity && i == j && r.transforms[i] == pca.NoTransform
	}
	return func(b *table.Block, missing []int64) error {
		if missing == nil {
			missing = make([]int64, r.width())
		}
		kept := gaps.Complete(b.Data, b.Rows, b.Width, r.use, missing, nil)
		if len(kept) < b.Rows {
			b.Keep(kept)
		}
		if identity {
			return nil
		}
		width := r.width()
		// Rows shrink in place: what is written never overtakes what is still to be read
		// but for a reordering within the row, which goes through a buffer.
		row := make([]float64, width)
		for n := range b.Rows {
			from := b.Data[n*b.Width : n*b.Width+b.Width]
			for i, j := range r.use {
				v, ok := r.transforms[i].Apply(from[j])
				if !ok {
					return b.Problem(n, j, fmt.Sprintf("%g has no %s", from[j], r.transforms[i]), "take the transform away or leave the row's value missing")
				}
				row[i] = v
			}
			copy(b.Data[n*width:], row)
		}
		b.Width = width
		b.Data = b.Data[:b.Rows*width]
		return nil
	}
}
