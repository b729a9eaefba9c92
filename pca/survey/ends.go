package survey

// endsKept is how many of the smallest and of the largest different values are counted.
const endsKept = 16

// valueCount is a value and how often it occurs.
type valueCount struct {
	value float64
	count int64
}

// ends counts the smallest and the largest different values of a channel. Counts are exact:
// a value that is among the smallest of all rows has been among them from its first row on.
type ends struct {
	low, high []valueCount // ascending; descending
}

func (e *ends) add(v float64) {
	e.low = addEnd(e.low, v, func(a, b float64) bool { return a < b })
	e.high = addEnd(e.high, v, func(a, b float64) bool { return a > b })
}

func addEnd(list []valueCount, v float64, before func(a, b float64) bool) []valueCount {
	n := len(list)
	if n == endsKept && before(list[n-1].value, v) {
		return list
	}
	at := n
	for at > 0 && before(v, list[at-1].value) {
		at--
	}
	if at > 0 && list[at-1].value == v {
		list[at-1].count++
		return list
	}
	if n < endsKept {
		list = append(list, valueCount{})
	}
	copy(list[at+1:], list[at:len(list)-1])
	list[at] = valueCount{v, 1}
	return list
}

// values lists all different values, ascending, when the two ends hold all of them.
func (e *ends) values(count int64) ([]valueCount, bool) {
	out := append([]valueCount(nil), e.low...)
	for i := len(e.high) - 1; i >= 0; i-- {
		if h := e.high[i]; len(out) == 0 || h.value > out[len(out)-1].value {
			out = append(out, h)
		}
	}
	sum := int64(0)
	for _, v := range out {
		sum += v.count
	}
	return out, sum == count
}

// without returns the ends without some values; fewer are then kept.
func (e *ends) without(codes []float64) ends {
	strip := func(list []valueCount) []valueCount {
		var out []valueCount
		for _, v := range list {
			if !holds(codes, v.value) {
				out = append(out, v)
			}
		}
		return out
	}
	return ends{strip(e.low), strip(e.high)}
}

func holds(list []float64, v float64) bool {
	for _, c := range list {
		if c == v {
			return true
		}
	}
	return false
}
