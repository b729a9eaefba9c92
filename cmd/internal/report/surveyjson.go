package report

import (
	"io"
	"math"

	"axisfold/pca/survey"
)

// surveyFacts is what --json prints of a survey.
type surveyFacts struct {
	Files      []string          `json:"files"`
	Rows       int64             `json:"rows"`
	Complete   int64             `json:"complete_rows"`
	Read       readFacts         `json:"read"`
	Clock      *clockFacts       `json:"clock"`
	Rank       *int              `json:"rank"`
	Varying    int               `json:"channels_that_vary"`
	Dominated  int               `json:"components_for_99_percent"`
	Compared   int               `json:"rows_compared"`
	Sampled    int               `json:"rows_sampled"`
	RowCopies  int64             `json:"row_copies"`
	CopiesSure bool              `json:"row_copies_exact"`
	LeaveOut   []leaveFacts      `json:"leave_out"`
	Findings   []findingFacts    `json:"findings"`
	Channels   []surveyedChannel `json:"channels"`
	Notes      []map[string]any  `json:"notes"`
}

type readFacts struct {
	Decimal  string   `json:"decimal"`
	Header   bool     `json:"header"`
	UnitsRow bool     `json:"units_row"`
	Missing  []string `json:"missing"`
}

type clockFacts struct {
	Column     string `json:"column"`
	OfDay      string `json:"time_of_day,omitempty"`
	First      string `json:"first"`
	Last       string `json:"last"`
	Interval   Number `json:"interval_seconds"`
	Unread     int64  `json:"unread"`
	Repeated   int64  `json:"repeated"`
	Backwards  int64  `json:"backwards"`
	Uneven     int64  `json:"uneven_steps"`
	Gaps       int64  `json:"gaps"`
	LargestGap Number `json:"largest_gap_seconds"`
	Order      string `json:"date_order,omitempty"`
	Ambiguous  bool   `json:"date_order_assumed"`
}

type leaveFacts struct {
	Channel string `json:"channel"`
	Why     string `json:"why"`
}

type findingFacts struct {
	Kind     string            `json:"kind"`
	Weight   string            `json:"weight"`
	Channels []string          `json:"channels"`
	Text     string            `json:"text"`
	Numbers  map[string]Number `json:"numbers,omitempty"`
	Setting  string            `json:"setting,omitempty"`
}

type surveyedChannel struct {
	Name      string `json:"name"`
	Unit      string `json:"unit"`
	Type      string `json:"type"`
	Count     int64  `json:"count"`
	Missing   int64  `json:"missing"`
	Gap       int64  `json:"longest_gap"`
	Min       Number `json:"minimum"`
	Median    Number `json:"median"`
	Max       Number `json:"maximum"`
	Mean      Number `json:"mean"`
	Deviation Number `json:"standard_deviation"`
	Skewness  Number `json:"skewness"`
	Different *int   `json:"different"`
	Lag       Number `json:"autocorrelation"`
	Effective Number `json:"effective_rows"`
	Trend     Number `json:"trend"`
	Spikes    int64  `json:"spikes"`
	Held      int64  `json:"longest_run"`
}

// WriteSurveyJSON writes the facts of a survey for a machine.
func WriteSurveyJSON(v *survey.Survey, out io.Writer) error {
	o := v.Source.Options
	decimal := "point"
	if o.DecimalComma {
		decimal = "comma"
	}
	f := surveyFacts{Files: v.Files, Rows: v.Rows, Complete: v.Complete, Varying: v.Varying, Dominated: v.Dominated, Compared: v.Compared,
		Sampled: v.Sampled, RowCopies: v.RowCopies, CopiesSure: v.CopiesExact, LeaveOut: []leaveFacts{}, Findings: []findingFacts{}, Notes: []map[string]any{},
		Read: readFacts{Decimal: decimal, Header: !o.NoHeader, UnitsRow: o.UnitsRow, Missing: v.Missing()}}
	if v.Rank >= 0 {
		f.Rank = &v.Rank
	}
	if c := v.Clock; c != nil {
		f.Clock = &clockFacts{c.Column, c.OfDay, c.Moment(c.First), c.Moment(c.Last), Number(c.Interval), c.Unread, c.Repeated, c.Backwards, c.Uneven,
			c.Gaps, Number(c.LargestGap), c.Order, c.Ambiguous}
	}
	for _, c := range v.Leave() {
		f.LeaveOut = append(f.LeaveOut, leaveFacts{c.Name, c.LeaveOut})
	}
	for _, x := range v.Findings {
		numbers := map[string]Number{}
		for _, n := range x.Numbers {
			numbers[n.Name] = Number(n.Value)
		}
		channels := x.Channels
		if channels == nil {
			channels = []string{}
		}
		f.Findings = append(f.Findings, findingFacts{x.Kind, x.Weight.String(), channels, x.Text, numbers, x.Setting})
	}
	for _, c := range v.Channels {
		facts := surveyedChannel{Name: c.Name, Unit: c.Unit, Type: c.Type, Count: c.Count, Missing: c.Missing, Gap: c.LongestGap.Length, Min: Number(c.Min), Median: Number(c.Median),
			Max: Number(c.Max), Mean: Number(c.Mean), Deviation: Number(c.Deviation), Skewness: Number(c.Skewness), Lag: Number(c.Autocorrelation),
			Effective: Number(math.Round(c.EffectiveRows)), Trend: Number(c.Trend), Spikes: c.Spikes}
		if c.Different >= 0 {
			facts.Different = &c.Different
		}
		if len(c.Held) > 0 {
			facts.Held = c.Held[0].Length
		}
		f.Channels = append(f.Channels, facts)
	}
	for _, n := range v.Notes {
		f.Notes = append(f.Notes, map[string]any{"column": n.Column, "text": n.Text})
	}
	return writeJSON(out, f)
}
