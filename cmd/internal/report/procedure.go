package report

import (
	"fmt"
	"math"
	"slices"

	"axisfold/pcr"
)

// procedureFacts are the error of the whole procedure on held-out rows.
type procedureFacts struct {
	CV      Number `json:"rmse"`
	CVError Number `json:"se"`
	CVR2    Number `json:"r2"`
	Folds   int    `json:"folds"`
	Chosen  []int  `json:"components_by_fold"`
	Note    string `json:"note,omitempty"`
}

func procedureOf(p *pcr.Procedure) *procedureFacts {
	if p == nil {
		return nil
	}
	chosen := p.Chosen
	if chosen == nil {
		chosen = []int{}
	}
	return &procedureFacts{Number(p.CV), Number(p.CVError), Number(p.CVR2), p.Judged, chosen, p.Note}
}

func hasProcedure(s *Study) bool {
	return s.Regression != nil && slices.ContainsFunc(s.Regression.Result.Models, func(m *pcr.Model) bool { return m.Procedure != nil })
}

func fillProcedure(s *Study, w *csvWriter) {
	w.header("response", "rule", "rmse", "se", "r2", "folds", "fewest_components", "most_components", "note")
	for _, m := range s.Regression.Result.Models {
		p := m.Procedure
		w.text(m.Response).text(s.Regression.Rule).number(p.CV).number(p.CVError).number(p.CVR2).whole(int64(p.Judged))
		if len(p.Chosen) == 0 {
			w.text("").text("")
		} else {
			w.whole(int64(slices.Min(p.Chosen))).whole(int64(slices.Max(p.Chosen)))
		}
		w.text(p.Note)
		w.end()
	}
}

// procedureText is a sentence about the whole procedure; empty where it was not judged.
func procedureText(p *pcr.Procedure, unit string) string {
	if p == nil || math.IsNaN(p.CV) {
		return ""
	}
	fewest, most := slices.Min(p.Chosen), slices.Max(p.Chosen)
	between := plural(fewest, "component")
	if most > fewest {
		between = fmt.Sprintf("%d to %s", fewest, plural(most, "component"))
	}
	text := fmt.Sprintf(" The whole procedure, its choices made anew in every fold (%s), is off by %s", between, withUnit(short(p.CV), unit))
	if !math.IsNaN(p.CVError) {
		text += fmt.Sprintf(", standard error %s", short3(p.CVError))
	}
	return text + "."
}
