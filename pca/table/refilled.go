package table

// refilled reads what fill makes, a stretch at a time, so that who makes it need not care
// how much room a reader has.
type refilled struct {
	// fill appends the next stretch to what it is given, which is empty; what comes with an
	// error counts.
	fill func(out []byte) ([]byte, error)
	out  []byte
	at   int
	err  error
}

func (r *refilled) Read(p []byte) (int, error) {
	for r.at == len(r.out) {
		if r.err != nil {
			return 0, r.err
		}
		r.out, r.err = r.fill(r.out[:0])
		r.at = 0
	}
	n := copy(p, r.out[r.at:])
	r.at += n
	return n, nil
}
