package pca

// Split is a fold: which of a list of summaries are held out, and which are learnt from.
// What is in neither (a gap, later rows) takes no part. Splits of one Deal have no held
// rows in common; another deal holds the same rows in other summaries.
type Split struct {
	Train, Held []int
	Deal        int
}

// HoldEachOut holds out each of n summaries in turn and learns from all others.
func HoldEachOut(n int) []Split {
	out := make([]Split, n)
	for f := range out {
		out[f].Held = []int{f}
		for g := range n {
			if g != f {
				out[f].Train = append(out[f].Train, g)
			}
		}
	}
	return out
}

// Inside returns the splits as they are among the rows that this one learns from: no row
// that it holds out or leaves out is seen. Those of which nothing is left are not among them.
func (s Split) Inside(all []Split) []Split {
	learnt := map[int]bool{}
	for _, i := range s.Train {
		learnt[i] = true
	}
	of := func(list []int) []int {
		var out []int
		for _, i := range list {
			if learnt[i] {
				out = append(out, i)
			}
		}
		return out
	}
	var out []Split
	for _, o := range all {
		in := Split{Train: of(o.Train), Held: of(o.Held), Deal: o.Deal}
		if len(in.Train) > 0 && len(in.Held) > 0 {
			out = append(out, in)
		}
	}
	return out
}

// Summaries merges what is learnt from and what is held out.
func (s Split) Summaries(parts []*Summary) (train, held *Summary) {
	of := func(list []int) *Summary {
		picked := make([]*Summary, len(list))
		for i, j := range list {
			picked[i] = parts[j]
		}
		return MergeAll(picked...)
	}
	return of(s.Train), of(s.Held)
}
