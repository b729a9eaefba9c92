package report

import (
	"strconv"

	"axisfold/pcr"
)

// RowWriter builds lines of the tables that have one line per row. It holds scratch
// space: one per goroutine.
type RowWriter struct{ csvWriter }

// RowKey is what every such line starts with: number of the row among all data rows,
// from 1, and its time and group where the table has them.
type RowKey struct {
	Row         int64
	Time, Group []byte
}

// RowLayout says which key columns there are.
type RowLayout struct{ Time, Group bool }

func (l RowLayout) names() []string {
	names := []string{"row"}
	if l.Time {
		names = append(names, "time")
	}
	if l.Group {
		names = append(names, "group")
	}
	return names
}

// ScoresHeader returns the first line of scores.csv for k components, rotated of which are
// there rotated too.
func (l RowLayout) ScoresHeader(k, rotated int) []byte {
	var w csvWriter
	names := l.names()
	for a := range k {
		names = append(names, ComponentName(a))
	}
	names = append(names, "t2", "spe")
	w.header(append(names, rotatedNames(rotated)...)...)
	return w.b
}

// PredictionsHeader returns the first line of predictions.csv; back tells whether some
// response was transformed.
func (l RowLayout) PredictionsHeader(back bool) []byte {
	var w csvWriter
	names := append(l.names(), "response", "observed", "predicted", "lower", "upper", "residual")
	if back {
		names = append(names, "observed_back", "predicted_back", "lower_back", "upper_back")
	}
	w.header(append(names, "mean_lower", "mean_upper")...)
	return w.b
}

// Reset starts a new run of lines.
func (w *RowWriter) Reset() { w.b, w.start = w.b[:0], false }

// Bytes returns the lines so far, valid until Reset.
func (w *RowWriter) Bytes() []byte { return w.b }

func (w *RowWriter) key(l RowLayout, k RowKey) {
	w.b = strconv.AppendInt(w.b, k.Row, 10)
	w.start = true
	if l.Time {
		w.text(string(k.Time))
	}
	if l.Group {
		w.text(string(k.Group))
	}
}

// Scores adds a line of scores.csv; rotated may be empty.
func (w *RowWriter) Scores(l RowLayout, k RowKey, scores []float64, t2, spe float64, rotated []float64) {
	w.key(l, k)
	for _, v := range scores {
		w.number(v)
	}
	w.number(t2).number(spe)
	for _, v := range rotated {
		w.number(v)
	}
	w.end()
}

// Prediction adds a line of predictions.csv; half is the half width of the interval. back,
// where some response was transformed, adds all of it in the unit of the response. mean is
// the half width of the interval for the mean, in the unit of the fit.
func (w *RowWriter) Prediction(l RowLayout, k RowKey, response string, observed, predicted, half float64, back *pcr.Smearing, mean float64) {
	w.key(l, k)
	w.text(response).number(observed).number(predicted).number(predicted - half).number(predicted + half).number(observed - predicted)
	if back != nil {
		t := back.Transform
		w.number(t.Invert(observed)).number(back.Mean(predicted)).number(t.Invert(predicted - half)).number(t.Invert(predicted + half))
	}
	w.number(predicted - mean).number(predicted + mean)
	w.end()
}
