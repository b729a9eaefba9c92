package report

import (
	"io"

	"axisfold/pca"
	"axisfold/pca/retain"
	"axisfold/pcr"
)

// FormatVersion is the version of results.json, model.json and manifest.json.
const FormatVersion = 1

type resultsFile struct {
	Axisfold      int                `json:"axisfold"`
	Title         string             `json:"title"`
	Table         Table              `json:"table"`
	Channels      []channelFacts     `json:"channels"`
	Decomposition decompositionFacts `json:"decomposition"`
	Adequacy      *adequacyFacts     `json:"adequacy,omitempty"`
	Retention     []verdictFacts     `json:"retention"`
	Rotation      *rotationFacts     `json:"rotation,omitempty"`
	Uncertainty   *uncertaintyFacts  `json:"uncertainty,omitempty"`
	Reduction     *reductionFacts    `json:"reduction,omitempty"`
	Regression    []regressionFacts  `json:"regression,omitempty"`
	Warnings      []pca.Warning      `json:"warnings"`
}

type channelFacts struct {
	Channel     string `json:"channel"`
	Unit        string `json:"unit"`
	Count       int64  `json:"count"`
	Missing     int64  `json:"missing"`
	Mean        Number `json:"mean"`
	Deviation   Number `json:"standard_deviation"`
	Minimum     Number `json:"minimum"`
	Maximum     Number `json:"maximum"`
	Communality Number `json:"communality"`
}

type adequacyFacts struct {
	Defined    bool     `json:"defined"`
	Reason     string   `json:"reason,omitempty"`
	KMO        Number   `json:"kmo"`
	Channel    []Number `json:"kmo_by_channel"`
	Sphericity Number   `json:"sphericity"`
	Freedom    int      `json:"degrees_of_freedom"`
	P          Number   `json:"p"`
	Log10Det   Number   `json:"log10_determinant"`
}

type decompositionFacts struct {
	Matrix      pca.Matrix `json:"matrix"`
	Route       pca.Route  `json:"route"`
	Reason      string     `json:"reason"`
	Rows        int        `json:"rows"`
	Channels    int        `json:"channels"`
	Rank        int        `json:"rank"`
	Retained    int        `json:"retained"`
	Total       Number     `json:"total_variance"`
	Condition   Number     `json:"condition"`
	Eigenvalues []Number   `json:"eigenvalues"`
	Shares      []Number   `json:"shares"`
}

type verdictFacts struct {
	Rule       string      `json:"rule"`
	Setting    string      `json:"setting"`
	Chosen     bool        `json:"chosen"`
	Abstains   bool        `json:"abstains"`
	Components int         `json:"components"`
	Note       string      `json:"note"`
	Steps      []stepFacts `json:"steps"`
}

type stepFacts struct {
	Value     Number `json:"value"`
	Threshold Number `json:"threshold"`
	Kept      bool   `json:"kept"`
}

type regressionFacts struct {
	Response    string           `json:"response"`
	Rule        string           `json:"rule"`
	Order       pcr.Order        `json:"order"`
	Arrangement string           `json:"arrangement"`
	Folds       int              `json:"folds"`
	Components  int              `json:"components"`
	Enters      []string         `json:"enters"`
	Rows        int              `json:"rows"`
	Freedom     int              `json:"degrees_of_freedom"`
	Residual    Number           `json:"residual_standard_deviation"`
	R2          Number           `json:"r2"`
	Confidence  Number           `json:"confidence"`
	Terms       []termFacts      `json:"terms"`
	Validation  []validationFact `json:"validation"`
	Repeats     int              `json:"repeats"`
	Gap         int              `json:"gap"`
	Procedure   *procedureFacts  `json:"procedure,omitempty"`
	Remedies    []remedyFacts    `json:"remedies"`
	Inference   *inferenceFacts  `json:"inference,omitempty"`
}

type remedyFacts struct {
	Remedy      string `json:"remedy"`
	Setting     string `json:"setting"`
	Parameter   Number `json:"parameter"`
	CV          Number `json:"rmse_cv"`
	CVError     Number `json:"se_cv"`
	R2          Number `json:"r2_fit"`
	Length      Number `json:"coefficient_length"`
	Parameters  Number `json:"effective_parameters"`
	SignChanges int    `json:"sign_changes"`
}

type termFacts struct {
	Term          string `json:"term"`
	Coefficient   Number `json:"coefficient"`
	Error         Number `json:"standard_error"`
	Lower         Number `json:"lower"`
	Upper         Number `json:"upper"`
	Standardized  Number `json:"standardized_coefficient"`
	Ordinary      Number `json:"ols_coefficient"`
	OrdinaryError Number `json:"ols_standard_error"`
	VIF           Number `json:"vif"`
}

type validationFact struct {
	Components int    `json:"components"`
	Fit        Number `json:"rmse_fit"`
	CV         Number `json:"rmse_cv"`
	CVError    Number `json:"se_cv"`
	R2         Number `json:"r2_fit"`
	CVR2       Number `json:"r2_cv"`
	Chosen     bool   `json:"chosen"`
	Press      Number `json:"press"`
	Chance     Number `json:"chance"`
}

// WriteResults writes results.json: all facts of the study but those of single rows.
func WriteResults(s *Study, out io.Writer) error {
	d := s.Decomposition
	f := resultsFile{Axisfold: FormatVersion, Title: s.Title, Table: s.Table, Warnings: s.Warnings,
		Decomposition: decompositionFacts{Matrix: d.Matrix, Route: d.Route, Reason: d.Reason, Rows: d.Rows,
			Channels: d.Width(), Rank: d.Rank, Retained: s.Retained(), Total: Number(d.Total),
			Condition: Number(d.Condition()), Eigenvalues: numbers(d.Values)}}
	if f.Table.Notes == nil {
		f.Table.Notes = []Note{} // an empty list, not null
	}
	if f.Warnings == nil {
		f.Warnings = []pca.Warning{}
	}
	for a := range d.Values {
		f.Decomposition.Shares = append(f.Decomposition.Shares, Number(d.Share(a)))
	}
	for j, c := range s.Channels {
		f.Channels = append(f.Channels, channelFacts{c.Name, c.Unit, c.Count, c.Missing, Number(c.Mean), Number(c.Deviation),
			Number(c.Minimum), Number(c.Maximum), Number(d.Communality(j, s.Retained()))})
	}
	if a := s.Adequacy; a != nil {
		f.Adequacy = &adequacyFacts{a.Defined, a.Reason, Number(a.KMO), numbers(a.Channel), Number(a.Sphericity), a.Freedom, Number(a.P), Number(a.Log10Det)}
	}
	for i, v := range s.Overview {
		f.Retention = append(f.Retention, verdictOf(v, i == 0))
	}
	if s.Rotation != nil {
		f.Rotation = rotationOf(s.Rotation)
	}
	if s.Uncertainty != nil {
		f.Uncertainty = uncertaintyOf(s.Uncertainty)
	}
	if s.Reduction != nil {
		f.Reduction = reductionOf(s)
	}
	if s.Regression != nil {
		for i, m := range s.Regression.Result.Models {
			facts := regressionOf(s.Regression, m)
			facts.Inference = inferenceOf(m, &s.Regression.Inference[i])
			f.Regression = append(f.Regression, facts)
		}
	}
	return writeJSON(out, f)
}

func verdictOf(v retain.Verdict, chosen bool) verdictFacts {
	f := verdictFacts{Rule: v.Rule, Setting: v.Setting, Chosen: chosen, Abstains: v.Abstains, Components: v.Components, Note: v.Note}
	for _, s := range v.Steps {
		f.Steps = append(f.Steps, stepFacts{Number(s.Value), Number(s.Threshold), s.Kept})
	}
	return f
}

func regressionOf(r *Regression, m *pcr.Model) regressionFacts {
	f := regressionFacts{Response: m.Response, Rule: r.Rule, Order: r.Order, Arrangement: r.Arrangement, Folds: m.Folds,
		Components: m.Components, Rows: m.Rows, Freedom: m.Free, Residual: Number(m.Residual), R2: Number(m.R2), Confidence: Number(r.Confidence), Repeats: m.Deals, Gap: r.Gap, Procedure: procedureOf(m.Procedure)}
	for _, a := range m.Entering[:m.Components] {
		f.Enters = append(f.Enters, ComponentName(a))
	}
	for _, t := range append([]pcr.Term{m.Intercept}, m.Terms...) {
		f.Terms = append(f.Terms, termFacts{t.Name, Number(t.Coefficient), Number(t.Error), Number(t.Lower), Number(t.Upper),
			Number(t.Standardized), Number(t.Ordinary), Number(t.OrdinaryError), Number(t.VIF)})
	}
	for _, r := range m.Remedies {
		f.Remedies = append(f.Remedies, remedyFacts{r.Name, r.Setting, Number(r.Parameter), Number(r.CV), Number(r.CVError),
			Number(r.R2), Number(r.Length), Number(r.Parameters), r.SignChanges})
	}
	for _, s := range m.Path {
		f.Validation = append(f.Validation, validationFact{s.Components, Number(s.RootMean), Number(s.CV), Number(s.CVError), Number(s.R2), Number(s.CVR2), s.Chosen, Number(s.Press), Number(s.Chance)})
	}
	return f
}
