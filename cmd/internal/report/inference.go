package report

import (
	"fmt"
	"math"
	"strings"

	"axisfold/pcr"
)

// Inference is what the rows tell about the regression of one response, beyond what
// summaries of the rows can.
type Inference struct {
	Errors *pcr.RobustErrors
	Tests  *pcr.ResidualTests
	// LargestLeverage bounds the region that the model was built on.
	LargestLeverage float64
	FarRows         int64 // with an external residual beyond pcr.ExternalLimit
	HeavyRows       int64 // with Cook's distance above pcr.CookLimit
	Worst           []WeighingRow
}

// WeighingRow is a row (numbered from 1) with a large Cook's distance.
type WeighingRow struct {
	Row int64
	pcr.Influence
}

// worstRows is how many rows a summary names.
const worstRows = 5

// Take takes the influence of a row; rows come in order.
func (f *Inference) Take(row int64, i pcr.Influence) {
	f.LargestLeverage = math.Max(f.LargestLeverage, i.Leverage)
	if math.Abs(i.External) > pcr.ExternalLimit {
		f.FarRows++
	}
	if i.Cook > pcr.CookLimit {
		f.HeavyRows++
	}
	if math.IsNaN(i.Cook) {
		return
	}
	if len(f.Worst) < worstRows {
		f.Worst = append(f.Worst, WeighingRow{row, i})
		return
	}
	least := 0
	for j := range f.Worst {
		if f.Worst[j].Cook < f.Worst[least].Cook {
			least = j
		}
	}
	if i.Cook > f.Worst[least].Cook {
		f.Worst[least] = WeighingRow{row, i}
	}
}

// DiagnosticsHeader returns the first line of diagnostics.csv.
func (l RowLayout) DiagnosticsHeader() []byte {
	var w csvWriter
	w.header(append(l.names(), "response", "leverage", "internal_residual", "external_residual", "cooks_distance", "flags")...)
	return w.b
}

// Diagnostics adds a line of diagnostics.csv.
func (w *RowWriter) Diagnostics(l RowLayout, k RowKey, m *pcr.Model, i pcr.Influence) {
	w.key(l, k)
	w.text(m.Response).number(i.Leverage).number(i.Internal).number(i.External).number(i.Cook)
	flags := ""
	for _, f := range []struct {
		name string
		on   bool
	}{{"leverage", m.HighLeverage(i.Leverage)}, {"residual", math.Abs(i.External) > pcr.ExternalLimit}, {"influence", i.Cook > pcr.CookLimit}} {
		if f.on {
			flags += " " + f.name
		}
	}
	w.text(strings.TrimPrefix(flags, " "))
	w.end()
}

// robust returns the errors of the term at position j of the intercept and the terms.
func (f *Inference) robust(j int) pcr.RobustTerm {
	if j == 0 {
		return f.Errors.Intercept
	}
	return f.Errors.Terms[j-1]
}

// ratio is the range of robust over conditional errors of the slopes.
func (f *Inference) ratio(m *pcr.Model, of func(pcr.RobustTerm) float64) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for j, t := range m.Terms {
		if v := of(f.Errors.Terms[j]) / t.Error; !math.IsNaN(v) && !math.IsInf(v, 0) {
			low, high = math.Min(low, v), math.Max(high, v)
		}
	}
	return low, high
}

// clear is the P value from which on a test of residuals is taken as saying something.
const clear = .01

// inference says what residuals do to the standard errors, and which rows weigh most.
func (p *page) inference(m *pcr.Model, f *Inference) {
	t := f.Tests
	if low, high := f.ratio(m, func(t pcr.RobustTerm) float64 { return t.HC3 }); low <= high {
		text := fmt.Sprintf("Errors of slopes that allow for unequal residuals (HC3) are %.2f to %.2f times those above", low, high)
		if low, high := f.ratio(m, func(t pcr.RobustTerm) float64 { return t.HAC }); low <= high {
			text += fmt.Sprintf("; that also allow for residuals following one another (HAC, %d lags) %.2f to %.2f times", f.Errors.Lags, low, high)
		}
		p.paragraph("  ", "  ", text+" (coefficients.csv).")
	}
	follows := len(t.Autocorrelations) > 0 && t.Pairs >= 10 && math.Abs(t.Autocorrelations[0]) > 3/math.Sqrt(float64(t.Pairs))
	switch {
	case follows:
		p.paragraph("  ", "  ", fmt.Sprintf("Residuals follow one another (Durbin-Watson %.2f; 2 without): believe HAC, and that even its intervals are too short where rows are few or the likeness lasts long.", t.DurbinWatson))
	case t.SpreadP < clear:
		p.paragraph("  ", "  ", fmt.Sprintf("Residuals do not follow one another (Durbin-Watson %.2f), but their size changes with the prediction: believe HC3.", t.DurbinWatson))
	case !math.IsNaN(t.DurbinWatson) && !math.IsNaN(t.SpreadP):
		p.paragraph("  ", "  ", fmt.Sprintf("Residuals neither follow one another clearly (Durbin-Watson %.2f; 2 without) nor change in size with the prediction: the errors above will do.", t.DurbinWatson))
	}
	if follows && t.SpreadP < clear {
		p.paragraph("  ", "  ", fmt.Sprintf("Their size changes with the prediction (Breusch-Pagan, Koenker's form: P = %.2g): prediction intervals, of one width, are too wide for some rows and too narrow for others.", t.SpreadP))
	}
	if t.NormalityP < clear {
		p.paragraph("  ", "  ", fmt.Sprintf("Residuals are not normal (skewness %.2f, kurtosis %.1f, K2 P = %.2g): coefficients of many rows bear it, prediction intervals do not.", t.Skewness, t.Kurtosis, t.NormalityP))
	}
	if len(f.Worst) > 0 {
		var names []string
		for _, r := range f.Worst {
			names = append(names, fmt.Sprintf("%d (%s)", r.Row, short3(r.Cook)))
		}
		p.paragraph("  ", "  ", fmt.Sprintf("Rows that weigh most, by Cook's distance: %s; above %g, which would call for a look: %d. Beyond %g residual standard deviations: %d. All in diagnostics.csv.",
			strings.Join(names, ", "), pcr.CookLimit, f.HeavyRows, pcr.ExternalLimit, f.FarRows))
	}
}

type inferenceFacts struct {
	Lags             int           `json:"hac_lags"`
	Robust           []robustFacts `json:"robust_errors"`
	DurbinWatson     Number        `json:"durbin_watson"`
	Autocorrelations []Number      `json:"residual_autocorrelations"`
	Pairs            int           `json:"pairs"`
	Skewness         Number        `json:"residual_skewness"`
	Kurtosis         Number        `json:"residual_kurtosis"`
	Normality        Number        `json:"k2"`
	NormalityP       Number        `json:"k2_p"`
	Spread           Number        `json:"breusch_pagan"`
	SpreadP          Number        `json:"breusch_pagan_p"`
	LargestLeverage  Number        `json:"largest_leverage"`
	FarRows          int64         `json:"rows_with_large_residual"`
	HeavyRows        int64         `json:"rows_with_large_distance"`
	Worst            []worstFacts  `json:"rows_that_weigh_most"`
}

type robustFacts struct {
	Term string `json:"term"`
	HC3  Number `json:"hc3_standard_error"`
	HAC  Number `json:"hac_standard_error"`
}

type worstFacts struct {
	Row      int64  `json:"row"`
	Leverage Number `json:"leverage"`
	External Number `json:"external_residual"`
	Cook     Number `json:"cooks_distance"`
}

func inferenceOf(m *pcr.Model, f *Inference) *inferenceFacts {
	t := f.Tests
	out := &inferenceFacts{Lags: f.Errors.Lags, DurbinWatson: Number(t.DurbinWatson), Autocorrelations: numbers(t.Autocorrelations),
		Pairs: t.Pairs, Skewness: Number(t.Skewness), Kurtosis: Number(t.Kurtosis), Normality: Number(t.Normality), NormalityP: Number(t.NormalityP),
		Spread: Number(t.Spread), SpreadP: Number(t.SpreadP), LargestLeverage: Number(f.LargestLeverage),
		FarRows: f.FarRows, HeavyRows: f.HeavyRows, Worst: []worstFacts{}}
	for j, term := range append([]pcr.Term{m.Intercept}, m.Terms...) {
		e := f.robust(j)
		out.Robust = append(out.Robust, robustFacts{term.Name, Number(e.HC3), Number(e.HAC)})
	}
	for _, r := range f.Worst {
		out.Worst = append(out.Worst, worstFacts{r.Row, Number(r.Leverage), Number(r.External), Number(r.Cook)})
	}
	return out
}
