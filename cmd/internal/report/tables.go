package report

import (
	"fmt"
	"io"
	"math"

	"axisfold/pcr"
)

// TableFile is one of the tables of a run folder: its name and how to write it.
type TableFile struct {
	Name  string
	ready func(*Study) bool
	fill  func(*Study, *csvWriter)
}

// Tables lists the tables that are written from a study; scores and predictions are
// written row by row elsewhere (see rows.go).
var Tables = []TableFile{
	{"channels.csv", always, fillChannels},
	{"eigenvalues.csv", always, fillEigenvalues},
	{"eigenvectors.csv", always, fillEigenvectors},
	{"loadings.csv", always, fillLoadings},
	{"retention.csv", always, fillRetention},
	{"rotated_loadings.csv", hasRotation, fillRotatedLoadings},
	{"rotation.csv", hasRotation, fillRotation},
	{"intervals.csv", hasUncertainty, fillIntervals},
	{"loading_intervals.csv", hasUncertainty, fillLoadingIntervals},
	{"redundancy.csv", hasReduction, fillRedundancy},
	{"tradeoff.csv", hasReduction, fillTradeoff},
	{"coefficients.csv", hasRegression, fillCoefficients},
	{"coefficient_path.csv", hasRegression, fillCoefficientPath},
	{"validation.csv", hasRegression, fillValidation},
	{"procedure.csv", hasProcedure, fillProcedure},
	{"remedies.csv", hasRegression, fillRemedies},
	{"collinearity.csv", hasCollinearity, fillCollinearity},
	{"dependencies.csv", hasDependencies, fillDependencies},
}

func always(*Study) bool          { return true }
func hasRegression(s *Study) bool { return s.Regression != nil }

// Ready tells whether the study has what the table needs.
func (t *TableFile) Ready(s *Study) bool { return t.ready(s) }

// Write writes the table.
func (t *TableFile) Write(s *Study, out io.Writer) error {
	var w csvWriter
	t.fill(s, &w)
	return w.to(out)
}

func fillChannels(s *Study, w *csvWriter) {
	w.header("channel", "unit", "count", "missing", "mean", "standard_deviation", "minimum", "maximum", "center", "scale", "communality", "kmo")
	d := s.Decomposition
	for j, c := range s.Channels {
		w.text(c.Name).text(c.Unit).whole(c.Count).whole(c.Missing)
		w.number(c.Mean).number(c.Deviation).number(c.Minimum).number(c.Maximum)
		w.number(d.Scaling.Center[j]).number(d.Scaling.Scale[j]).number(d.Communality(j, s.Retained()))
		if s.Adequacy != nil && s.Adequacy.Defined {
			w.number(s.Adequacy.Channel[j])
		} else {
			w.number(math.NaN())
		}
		w.end()
	}
}

func fillEigenvalues(s *Study, w *csvWriter) {
	w.header("component", "eigenvalue", "share", "cumulative_share", "retained")
	d := s.Decomposition
	for a, l := range d.Values {
		w.text(ComponentName(a)).number(l).number(d.Share(a)).number(d.CumulativeShare(a)).flag(a < s.Retained())
		w.end()
	}
}

// ComponentName is C1 for component 0.
func ComponentName(a int) string { return fmt.Sprintf("C%d", a+1) }

func fillByComponent(s *Study, w *csvWriter, value func(j, a int) float64) {
	w.text("channel")
	for a := range s.Decomposition.Values {
		w.text(ComponentName(a))
	}
	w.end()
	for j, name := range s.Decomposition.Channels {
		w.text(name)
		for a := range s.Decomposition.Values {
			w.number(value(j, a))
		}
		w.end()
	}
}

func fillEigenvectors(s *Study, w *csvWriter) { fillByComponent(s, w, s.Decomposition.Vector) }
func fillLoadings(s *Study, w *csvWriter)     { fillByComponent(s, w, s.Decomposition.Loading) }

func fillRetention(s *Study, w *csvWriter) {
	w.header("rule", "components", "chosen", "note", "setting")
	for i, v := range s.Overview {
		w.text(v.Rule)
		if v.Abstains {
			w.number(math.NaN())
		} else {
			w.whole(int64(v.Components))
		}
		w.flag(i == 0).text(v.Note).text(v.Setting)
		w.end()
	}
}

func fillCoefficients(s *Study, w *csvWriter) {
	w.header("response", "term", "coefficient", "standard_error", "lower", "upper", "standardized_coefficient",
		"ols_coefficient", "ols_standard_error", "vif",
		"hc3_standard_error", "hc3_lower", "hc3_upper", "hac_standard_error", "hac_lower", "hac_upper")
	for i, m := range s.Regression.Result.Models {
		for j, t := range append([]pcr.Term{m.Intercept}, m.Terms...) {
			w.text(m.Response).text(t.Name).number(t.Coefficient).number(t.Error).number(t.Lower).number(t.Upper)
			w.number(t.Standardized).number(t.Ordinary).number(t.OrdinaryError).number(t.VIF)
			f := &s.Regression.Inference[i]
			e, quantile := f.robust(j), f.Errors.Quantile
			for _, v := range []float64{e.HC3, e.HAC} {
				w.number(v).number(t.Coefficient - quantile*v).number(t.Coefficient + quantile*v)
			}
			w.end()
		}
	}
}

// fillCoefficientPath writes the coefficients that every number of components gives.
func fillCoefficientPath(s *Study, w *csvWriter) {
	w.header("response", "components", "term", "coefficient", "standard_error", "standardized_coefficient")
	for _, m := range s.Regression.Result.Models {
		for _, step := range m.Coefficients {
			line := func(term string, coefficient, slip, standardized float64) {
				w.text(m.Response).whole(int64(step.Components)).text(term).number(coefficient).number(slip).number(standardized).end()
			}
			line("intercept", step.Intercept, step.InterceptError, math.NaN())
			for j, b := range step.Coefficients {
				line(m.Terms[j].Name, b, step.Errors[j], step.Standardized[j])
			}
		}
	}
}

func fillValidation(s *Study, w *csvWriter) {
	w.header("response", "components", "rmse_fit", "rmse_cv", "se_cv", "r2_fit", "r2_cv", "chosen", "enters", "t", "aicc", "bic", "cp", "press", "chance")
	for _, m := range s.Regression.Result.Models {
		for k, step := range m.Path {
			w.text(m.Response).whole(int64(k)).number(step.RootMean).number(step.CV).number(step.CVError)
			w.number(step.R2).number(step.CVR2).flag(step.Chosen)
			if k == 0 {
				w.text("").text("")
			} else {
				a := m.Entering[k-1]
				w.text(ComponentName(a)).number(m.T[a])
			}
			w.number(step.AICc).number(step.BIC).number(step.Cp).number(step.Press).number(step.Chance)
			w.end()
		}
	}
}

func fillRemedies(s *Study, w *csvWriter) {
	w.header("response", "remedy", "setting", "rmse_cv", "se_cv", "r2_fit", "coefficient_length", "effective_parameters", "sign_changes")
	for _, m := range s.Regression.Result.Models {
		for _, r := range m.Remedies {
			w.text(m.Response).text(r.Name).text(r.Setting).number(r.CV).number(r.CVError).number(r.R2)
			w.number(r.Length).number(r.Parameters).whole(int64(r.SignChanges))
			w.end()
		}
	}
}
