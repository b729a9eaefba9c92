package run

import (
	"context"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"axisfold/cmd/internal/report"
	"axisfold/pca"
	"axisfold/pca/retain"
	"axisfold/pcr"
)

// dependencyIndex is the condition index above which a component counts as a
// near-dependency among the predictors (Belsley, Kuh & Welsch 1980).
const dependencyIndex = 30

// regress fits the responses on the components.
func (w *work) regress(ctx context.Context) error {
	g := w.cfg.Regress
	if g == nil {
		return nil
	}
	o := pcr.Options{Predictors: w.decomposeOptions(), ThroughOrigin: !g.Intercept, Order: pcr.Order(g.Retain.Order),
		Confidence: g.Confidence, Most: g.Retain.MostComponents, Threads: w.options.Threads, Splits: w.splits, Nested: w.nested()}
	if pcr.Choice(g.Retain.Rule) == pcr.TThreshold {
		o.Order = pcr.ByCorrelation // its components enter by the size of their t values
	}
	if pcr.Choice(g.Retain.Rule) == pcr.ConditionLimit {
		o.Order = pcr.ByVariance
	}
	reg := &report.Regression{Rule: g.Retain.Rule, Order: o.Order, Confidence: g.Confidence, Origin: o.ThroughOrigin}
	if w.plan != nil {
		reg.Arrangement, reg.Gap = w.plan.arrangement, w.plan.gap
	}
	var responses []int
	for i := w.roles.channels; i < w.roles.width(); i++ {
		responses = append(responses, i)
		c := w.channel(i)
		o.Responses = append(o.Responses, c.Name)
		reg.Responses = append(reg.Responses, c)
	}
	if err := w.chooseRegressors(&o); err != nil {
		return err
	}
	if err := w.press(ctx, responses, &o); err != nil {
		return fmt.Errorf("regress: %w", err)
	}
	result, err := pcr.Fit(w.whole, w.folds, w.active, responses, o)
	if err != nil {
		return fmt.Errorf("regress: %w", err)
	}
	reg.Result = result
	x := w.whole.Pick(w.active)
	means := make([]float64, x.Width())
	for j := range means {
		means[j] = x.Mean(j)
	}
	if reg.Collinearity, err = pca.Collinear(x); err != nil {
		w.warn("collinearity", "collinearity was not diagnosed: %s", err)
	}
	reg.Dependencies = w.study.Decomposition.Dependencies(dependencyIndex, means)
	w.study.Regression = reg
	for _, m := range result.Models {
		for _, warning := range m.Warnings {
			w.warn(warning.Code, "%s: %s", m.Response, warning.Text)
		}
	}
	return nil
}

// chooseRegressors translates the regression's rule. Rules that do not look at the
// response are those of the retain stage, on the same roots.
func (w *work) chooseRegressors(o *pcr.Options) error {
	r := w.cfg.Regress.Retain
	if choice := pcr.Choice(r.Rule); slices.Contains(pcr.Choices, choice) {
		o.Choice, o.Limit, o.Alpha, o.Seed = choice, r.Limit, r.Alpha, w.cfg.Seed
		return nil
	}
	o.Choice = pcr.Given
	if r.Rule == "fixed" {
		o.Components = r.Components
		return nil
	}
	if r.Rule == "subset" {
		for _, name := range r.Which {
			a, err := strconv.Atoi(strings.TrimPrefix(name, "C"))
			if err != nil {
				return err
			}
			o.Which = append(o.Which, a-1)
		}
		o.Components = len(o.Which)
		return nil
	}
	v, err := retain.Apply(r.Rule, w.roots, settingsOf(r))
	if err != nil {
		return err
	}
	if v.Abstains {
		return &pca.DataError{Problem: fmt.Sprintf("regress.retain: %s abstains: %s", r.Rule, v.Note), Hint: "choose another rule"}
	}
	o.Components = v.Components
	return nil
}
