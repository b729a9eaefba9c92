package pca

import "math"

// Bounds for warnings. A condition index (root of l₁/l_p) above 30 is the usual sign of
// collinearity (Belsley, Kuh & Welsch 1980); adjacent roots closer than one standard
// error, l·√(2/n), mix their vectors (North et al. 1982).
const conditionIndexLimit = 30

func (d *Decomposition) diagnose() {
	n, p := d.Rows, len(d.Channels)
	if n-1 < p {
		d.warn("few-rows", "%d rows for %d channels: at most %d components exist, and the smallest roots say little", n, p, n-1)
	}
	if d.Rank < min(p, n-1) {
		d.warn("rank", "the channels span only %d dimensions: some are exact combinations of others", d.Rank)
	} else if index := math.Sqrt(d.Condition()); n > p && index > conditionIndexLimit {
		d.warn("condition", "condition index %.3g is above %d: some channels are nearly combinations of others", index, conditionIndexLimit)
	}
	for a := 0; a+1 < d.Rank; a++ {
		gap := d.Values[a] - d.Values[a+1]
		if gap <= 1e-9*d.Values[a] {
			d.warn("tied-roots", "roots %d and %d are equal (%.6g): only the plane of their components is determined", a+1, a+2, d.Values[a])
		}
	}
}

// MixedWithNext tells whether component a is closer to the next than one standard error
// of its root, so that their vectors cannot be told apart from these rows.
func (d *Decomposition) MixedWithNext(a int) bool {
	if a+1 >= len(d.Values) {
		return false
	}
	return d.Values[a]-d.Values[a+1] < d.Values[a]*math.Sqrt(2/float64(d.Rows))
}
