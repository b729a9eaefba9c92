package run

import (
	"fmt"
	"path"
	"slices"

	"axisfold/cmd/internal/report"
	"axisfold/configs"
	"axisfold/pca"
	"axisfold/pca/table"
)

// roles says what each column of the table is to the run. Prepared rows hold the channels
// first and the responses after them.
type roles struct {
	use        []int // positions among the table's columns
	channels   int   // how many of use are channels that are decomposed
	labels     []string
	transforms []pca.Transform
	methods    []pca.Method // of the channels
	columns    []table.Column
	grouped    bool // rows have groups
	notes      []report.Note
}

func (r *roles) width() int { return len(r.use) }

// assignRoles matches the run file with the columns of the table.
func assignRoles(cfg *configs.File, columns []table.Column) (*roles, error) {
	r := &roles{columns: columns, grouped: cfg.Read.Groups != ""}
	names := make([]string, len(columns))
	for j, c := range columns {
		names[j] = c.Name
	}
	isResponse := make([]bool, len(columns))
	isPredictor := make([]bool, len(columns))
	var responses []int
	if g := cfg.Regress; g != nil {
		for _, name := range g.Response {
			j := slices.Index(names, name)
			if j < 0 {
				return nil, table.UnknownColumn("regress.response", name, names)
			}
			responses = append(responses, j)
			isResponse[j] = true
		}
		for _, pattern := range g.Predictors {
			matched, hitsResponse := matching(pattern, names), false
			if len(matched) == 0 {
				return nil, table.UnknownColumn("regress.predictors", pattern, names)
			}
			for _, j := range matched {
				hitsResponse = hitsResponse || isResponse[j]
				isPredictor[j] = true
			}
			if hitsResponse && slices.Contains(names, pattern) {
				return nil, &configs.Error{File: cfg.Path, Problem: fmt.Sprintf("regress.predictors: %q is the response; a response is never a predictor", pattern)}
			}
		}
	}
	for j, c := range columns {
		if isResponse[j] {
			continue
		}
		if cfg.Regress != nil && len(cfg.Regress.Predictors) > 0 && !isPredictor[j] {
			r.notes = append(r.notes, report.Note{Column: c.Name, Text: "left out: not among regress.predictors"})
			continue
		}
		r.use = append(r.use, j)
	}
	r.channels = len(r.use)
	r.use = append(r.use, responses...)
	if r.channels == 0 {
		return nil, &pca.DataError{Problem: "no channel is left to decompose", Hint: "see read.leave_out and regress.predictors"}
	}
	overrides, err := channelSettings(cfg, names)
	if err != nil {
		return nil, err
	}
	for i, j := range r.use {
		o := overrides[j]
		transform := pca.Transform(o.Transform)
		if transform == "" {
			transform = pca.NoTransform
		}
		r.transforms = append(r.transforms, transform)
		r.labels = append(r.labels, transform.Label(names[j]))
		if i < r.channels {
			method := cfg.Standardize.Scaling
			if o.Scaling != "" {
				method = o.Scaling
			}
			r.methods = append(r.methods, pca.Method(method))
		}
	}
	return r, nil
}

// channelSettings resolves standardize.channels, by position; a later pattern wins.
func channelSettings(cfg *configs.File, names []string) ([]configs.Channel, error) {
	out := make([]configs.Channel, len(names))
	for _, c := range cfg.Standardize.Channels {
		matched := matching(c.Name, names)
		if len(matched) == 0 {
			return nil, table.UnknownColumn("standardize.channels", c.Name, names)
		}
		for _, j := range matched {
			if c.Scaling != "" {
				out[j].Scaling = c.Scaling
			}
			if c.Transform != "" {
				out[j].Transform = c.Transform
			}
		}
	}
	return out, nil
}

// matching returns the positions of the names that are, or match, the pattern.
func matching(pattern string, names []string) []int {
	var out []int
	for j, n := range names {
		if hit, err := path.Match(pattern, n); n == pattern || err == nil && hit {
			out = append(out, j)
		}
	}
	return out
}
