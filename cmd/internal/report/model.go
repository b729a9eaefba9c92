package report

import (
	"io"

	"axisfold/pca"
)

// ModelFile is model.json: what is needed to score and predict new rows. Scores are
// t_a = Σ_j v_ja·(transform(x_j) - center_j)/scale_j.
type ModelFile struct {
	Axisfold   int              `json:"axisfold"`
	Title      string           `json:"title"`
	Rows       int              `json:"rows"` // the model was built on
	Matrix     pca.Matrix       `json:"matrix"`
	Retained   int              `json:"retained"`
	Channels   []ModelChannel   `json:"channels"`
	Components []ModelComponent `json:"components"` // the retained ones and those a regression uses
	// Eigenvalues and ScoreVariances are those of all components computed.
	Eigenvalues    []Number `json:"eigenvalues"`
	ScoreVariances []Number `json:"score_variances"`
	// RotationWeights give rotated scores: a row of retained scores, each over the root of
	// its variance, times them.
	RotationWeights [][]Number        `json:"rotation_weights,omitempty"`
	Regression      []ModelRegression `json:"regression,omitempty"`
}

// ModelChannel is one input of the model.
type ModelChannel struct {
	Name      string        `json:"name"`
	Column    string        `json:"column"` // in the table
	Unit      string        `json:"unit,omitempty"`
	Transform pca.Transform `json:"transform"`
	Scaling   pca.Method    `json:"scaling"`
	Center    Number        `json:"center"`
	Scale     Number        `json:"scale"`
	Offset    Number        `json:"offset"` // mean of the scaled channel
	Minimum   Number        `json:"minimum"`
	Maximum   Number        `json:"maximum"`
}

// ModelComponent is one component.
type ModelComponent struct {
	Component int      `json:"component"` // from 1
	Vector    []Number `json:"vector"`
}

// ModelRegression predicts one response: y = intercept + Σ coefficient_j·transform(x_j).
type ModelRegression struct {
	Response      string         `json:"response"`
	Column        string         `json:"column"`
	Unit          string         `json:"unit,omitempty"`
	Transform     pca.Transform  `json:"transform"`
	Intercept     Number         `json:"intercept"`
	Coefficients  []Number       `json:"coefficients"`
	Components    []int          `json:"components"` // that the coefficients use, from 1
	Residual      Number         `json:"residual_standard_deviation"`
	Freedom       int            `json:"degrees_of_freedom"`
	ThroughOrigin bool           `json:"through_origin"`
	Smearing      *ModelSmearing `json:"smearing,omitempty"`
}

// ModelSmearing is what brings predictions of a transformed response back to its unit:
// exp(p)·factor for logarithms, 10^p for decimal ones; p² + 2p·mean + square for square
// roots, with the mean of the residuals and of their squares.
type ModelSmearing struct {
	Factor Number `json:"factor"`
	Mean   Number `json:"mean_residual"`
	Square Number `json:"mean_squared_residual"`
}

// WriteModel writes model.json.
func WriteModel(s *Study, out io.Writer) error {
	d := s.Decomposition
	f := ModelFile{Axisfold: FormatVersion, Title: s.Title, Rows: d.Rows, Matrix: d.Matrix, Retained: s.Retained()}
	for j, c := range s.Channels {
		f.Channels = append(f.Channels, ModelChannel{Name: c.Name, Column: c.Source, Unit: c.SourceUnit, Transform: c.Transform,
			Scaling: d.Scaling.Methods[j], Center: Number(d.Scaling.Center[j]), Scale: Number(d.Scaling.Scale[j]),
			Offset: Number(d.Offset[j]), Minimum: Number(c.Minimum), Maximum: Number(c.Maximum)})
	}
	f.Eigenvalues, f.ScoreVariances = numbers(d.Values), numbers(d.ScoreVariances)
	for _, a := range componentsInUse(s) {
		m := ModelComponent{Component: a + 1}
		for j := range d.Channels {
			m.Vector = append(m.Vector, Number(d.Vector(j, a)))
		}
		f.Components = append(f.Components, m)
	}
	if r := s.Rotation; r != nil {
		f.RotationWeights = rowsOf(r.Weights, r.Components())
	}
	if r := s.Regression; r != nil {
		for i, m := range r.Result.Models {
			response := r.Responses[i]
			e := ModelRegression{Response: m.Response, Column: response.Source, Unit: response.SourceUnit, Transform: response.Transform,
				Intercept: Number(m.Intercept.Coefficient), Residual: Number(m.Residual), Freedom: m.Free, ThroughOrigin: r.Origin}
			for _, t := range m.Terms {
				e.Coefficients = append(e.Coefficients, Number(t.Coefficient))
			}
			for _, a := range m.Entering[:m.Components] {
				e.Components = append(e.Components, a+1)
			}
			if r.Smearing != nil && response.Transform != pca.NoTransform {
				back := &r.Smearing[i]
				e.Smearing = &ModelSmearing{Number(back.Factor()), Number(back.MeanResidual()), Number(back.MeanSquare())}
			}
			f.Regression = append(f.Regression, e)
		}
	}
	return writeJSON(out, f)
}

// componentsInUse are the retained components and those that a regression enters, ascending.
func componentsInUse(s *Study) []int {
	used := make([]bool, s.Decomposition.Components())
	for a := range s.Retained() {
		used[a] = true
	}
	if s.Regression != nil {
		for _, m := range s.Regression.Result.Models {
			for _, a := range m.Entering[:m.Components] {
				used[a] = true
			}
		}
	}
	var out []int
	for a, yes := range used {
		if yes {
			out = append(out, a)
		}
	}
	return out
}
