package plots

import (
	"math"
	"strconv"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// axis is one side of a frame.
type axis struct {
	title     string
	low, high float64
	marks     []mark // what is labelled; nil takes round numbers
	grid      bool   // a quiet line at every mark
}

// mark is a labelled place on an axis.
type mark struct {
	at            float64
	label         string
	strong, faint bool
}

// style is that of the label of a mark left of a frame.
func (m *mark) style() text.Style {
	s := textStyle(smallSize, ink, text.XRight, text.YCenter)
	s.Font = face(smallSize, m.strong)
	if m.faint {
		s.Color = quiet
	}
	return s
}

// labelRoom is the room that labels left of a frame need.
func labelRoom(marks []mark) vg.Length {
	if len(marks) == 0 {
		return 2
	}
	w := vg.Length(0)
	for _, m := range marks {
		w = max(w, m.style().Width(m.label))
	}
	return w + labelGap + 1
}

// mostMarks is how many round numbers an axis shows at most, about.
const mostMarks = 6

// room is what labels of round numbers need left of a frame of any height, for frames that
// stand above one another.
func (a *axis) room() vg.Length {
	w := vg.Length(0)
	for n := 1; n <= mostMarks; n++ {
		w = max(w, labelRoom(roundMarks(a.low, a.high, n)))
	}
	return w
}

// marked returns the marks of an axis of that length: its own, or as many round numbers
// as find room, every label taking what need says and a gap.
func (a *axis) marked(length vg.Length, need func(string) vg.Length, gap vg.Length) []mark {
	if a.marks != nil {
		return a.marks
	}
	for n := mostMarks; n > 1; n-- {
		marks := roundMarks(a.low, a.high, n)
		fits := true
		for i := 1; i < len(marks); i++ {
			apart := length * vg.Length((marks[i].at-marks[i-1].at)/(a.high-a.low))
			fits = fits && apart >= (need(marks[i].label)+need(marks[i-1].label))/2+gap
		}
		if fits {
			return marks
		}
	}
	return roundMarks(a.low, a.high, 1)
}

// roundMarks are about n marks within the range, at multiples of 1, 2 or 5 times a power
// of ten.
func roundMarks(low, high float64, n int) []mark {
	span := high - low
	if !(span > 0) || math.IsInf(span, 0) {
		return nil
	}
	raw := span / float64(n)
	power := math.Pow(10, math.Floor(math.Log10(raw)))
	step := 10 * power
	for _, m := range []float64{1, 2, 5} {
		if m*power >= raw*.999 {
			step = m * power
			break
		}
	}
	var values []float64
	for i := math.Ceil(low/step - 1e-9); i*step <= high+1e-9*span; i++ {
		values = append(values, i*step)
	}
	out := make([]mark, len(values))
	for i, label := range numbers(values, step) {
		out[i] = mark{at: values[i], label: label}
	}
	return out
}

// counted marks whole numbers from first to last: all, or multiples of 5, 10, 50 and so on
// where an axis of that length has no room for all.
func counted(first, last int, length vg.Length) []mark {
	every := 1
	for _, e := range []int{5, 10, 50, 100, 500, 1000, 5000} {
		if length/vg.Length(last-first+1)*vg.Length(every) >= 15 {
			break
		}
		every = e
	}
	var out []mark
	for k := first; k <= last; k++ {
		if k == first || k%every == 0 {
			out = append(out, mark{at: float64(k), label: strconv.Itoa(k)})
		}
	}
	return out
}

// padded widens a range by a share of its length; a range of no length becomes one.
func padded(low, high, share float64) (float64, float64) {
	span := high - low
	if !(span > 0) {
		span = math.Max(math.Abs(low)/share, 1)
	}
	return low - share*span, high + share*span
}

// extent is the range of the finite numbers of the lists.
func extent(lists ...[]float64) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, l := range lists {
		for _, v := range l {
			if !math.IsNaN(v) && !math.IsInf(v, 0) {
				low, high = math.Min(low, v), math.Max(high, v)
			}
		}
	}
	return low, high
}
