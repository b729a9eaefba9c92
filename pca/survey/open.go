package survey

import (
	"context"
	"errors"
	"slices"
	"strconv"
	"strings"

	"axisfold/pca/table"
)

// Given tells which of the options of a table were asked for, so that nothing else is tried.
type Given struct{ Decimal, Header, UnitsRow, Time, Orientation bool }

// Source is a table of which it is known how it is written.
type Source struct {
	// Options read the table. Their Time and Groups may name a date and its time of day.
	Options table.Options
	Table   *table.Table
	Texts   []table.TextColumn
	// Words are texts among numbers that are taken as missing.
	Words []Word
	// Mixed are columns left out because they hold more kinds of text than missing words.
	Mixed  []Word
	Time   TimeColumns
	Turned bool // the table is stored transposed, which nobody had said
	given  Given
}

// Word is a text that stands where numbers are expected.
type Word struct {
	Text, Channel string
	Place         string // file and line
}

// TimeColumns are the columns that say when: one, or a date and a time of day.
type TimeColumns struct{ Column, OfDay string }

// Open opens a table, trying the common ways in which a table may be written where they
// were not asked for: a decimal comma, no header, a row of units, words for missing values.
func Open(ctx context.Context, o table.Options, given Given) (*Source, error) {
	s := &Source{Options: o, given: given}
	if err := s.open(ctx); err != nil {
		return nil, err
	}
	return s, nil
}

func (s *Source) open(ctx context.Context) error {
	t, err := table.Open(ctx, s.Options)
	try := func(change func(*table.Options), better func(u *table.Table) bool) {
		o := s.Options
		change(&o)
		if u, e := table.Open(ctx, o); e == nil && (err != nil || better(u)) {
			t, err, s.Options = u, nil, o
		}
	}
	if fault := (*table.Error)(nil); errors.As(err, &fault) && fault.Kind == table.WrongInput {
		return err
	}
	first := err
	if !s.given.Decimal && !s.Options.DecimalComma {
		try(func(o *table.Options) { o.DecimalComma = true }, func(u *table.Table) bool { return len(u.Columns()) > len(t.Columns()) })
	}
	if !s.given.Header && !s.Options.NoHeader && (err != nil || namesAreNumbers(t.Columns())) {
		try(func(o *table.Options) { o.NoHeader = true }, func(*table.Table) bool { return true })
		if err != nil && !s.given.Decimal {
			try(func(o *table.Options) { o.NoHeader, o.DecimalComma = true, true }, nil)
		}
	}
	if err != nil {
		return first
	}
	if !s.given.UnitsRow && !s.Options.NoHeader && !s.Options.UnitsRow {
		try(func(o *table.Options) { o.UnitsRow = true }, func(u *table.Table) bool { return haveUnits(u.Columns(), s.Options.Missing) })
	}
	if words := missingWords(t.Texts()); len(words) > 0 {
		try(func(o *table.Options) {
			o.Missing = slices.Clone(o.Missing)
			for _, w := range words {
				if !slices.Contains(o.Missing, w.Text) {
					o.Missing = append(o.Missing, w.Text)
				}
			}
		}, func(u *table.Table) bool {
			more := len(u.Columns()) > len(t.Columns())
			if more {
				s.Words = append(s.Words, words...)
			}
			return more
		})
	}
	s.Table, s.Texts = t, t.Texts()
	if s.given.Time {
		s.Time.Column = s.Options.Time
		return nil
	}
	s.Time = timeColumns(s.Texts)
	if s.Time.Column == "" {
		return nil
	}
	return s.reopen(ctx)
}

// reopen opens the table with what has been learnt since.
func (s *Source) reopen(ctx context.Context) error {
	s.Options.Time = s.Time.Column
	if s.Time.OfDay != "" {
		s.Options.Groups = s.Time.OfDay
	}
	t, err := table.Open(ctx, s.Options)
	if err != nil {
		return err
	}
	s.Table, s.Texts = t, t.Texts()
	return nil
}

// mostMissingWords is how many different texts a column of numbers may hold before it is
// taken for a column of something else.
const mostMissingWords = 4

// learn takes an error about a text among numbers as news about the table; it tells whether
// the table was opened anew.
func (s *Source) learn(ctx context.Context, err error) bool {
	var fault *table.Error
	if !errors.As(err, &fault) || fault.Cell == "" || len(s.Words)+len(s.Mixed) > 200 {
		return false
	}
	word := Word{Text: fault.Cell, Channel: fault.Name, Place: fault.File + ":" + strconv.Itoa(fault.Line)}
	of := 0
	for _, w := range s.Words {
		if w.Channel == word.Channel {
			of++
		}
	}
	if of >= mostMissingWords && !looksMissing(word.Text) {
		s.Mixed = append(s.Mixed, word)
		s.Options.LeaveOut = append(slices.Clone(s.Options.LeaveOut), literal(word.Channel))
	} else {
		s.Words = append(s.Words, word)
		s.Options.Missing = append(slices.Clone(s.Options.Missing), word.Text)
	}
	return s.reopen(ctx) == nil
}

// literal is a name as a pattern that matches nothing else.
func literal(name string) string {
	return strings.NewReplacer(`*`, `\*`, `?`, `\?`, `[`, `\[`, `\`, `\\`).Replace(name)
}

// namesAreNumbers tells a first row of data from a header: every column of numbers is called
// by a number, and the names are not evenly spaced, as wavelengths would be.
func namesAreNumbers(columns []table.Column) bool {
	var values []float64
	for _, c := range columns {
		v, err := strconv.ParseFloat(strings.Replace(c.Name, ",", ".", 1), 64)
		if err != nil {
			return false
		}
		values = append(values, v)
	}
	if len(values) < 3 {
		return true
	}
	for i := 2; i < len(values); i++ {
		a, b := values[i]-values[i-1], values[1]-values[0]
		if a-b > 1e-6*b || b-a > 1e-6*b || b <= 0 {
			return true
		}
	}
	return false
}

// haveUnits tells whether the row read as units holds some, and no number in any column of
// numbers.
func haveUnits(columns []table.Column, missing []string) bool {
	some := false
	for _, c := range columns {
		if _, err := strconv.ParseFloat(strings.Replace(c.Unit, ",", ".", 1), 64); err == nil {
			return false
		}
		some = some || c.Unit != "" && !slices.Contains(missing, c.Unit) && !looksMissing(c.Unit)
	}
	return some
}

// missingWords finds columns that hold numbers and one or two words for none.
func missingWords(texts []table.TextColumn) []Word {
	var out []Word
	for _, c := range texts {
		all := len(c.Words) > 0 && c.Numbers > 0
		for w := range c.Words {
			all = all && looksMissing(w)
		}
		if !all {
			continue
		}
		for w := range c.Words {
			out = append(out, Word{Text: w, Channel: c.Name})
		}
	}
	slices.SortFunc(out, func(a, b Word) int { return strings.Compare(a.Text+"\x00"+a.Channel, b.Text+"\x00"+b.Channel) })
	return out
}

// looksMissing knows what people write where there is no number (common practice).
func looksMissing(text string) bool {
	switch strings.ToLower(strings.Trim(text, " #()<>[]*")) {
	case "", "-", "--", "---", "?", ".", "..", "na", "n/a", "n.a.", "n.a", "nan", "none", "null", "nil", "missing", "miss", "void", "blank",
		"bad", "error", "err", "fault", "fail", "failed", "invalid", "no data", "nodata", "not available", "off", "offline", "unknown", "x":
		return true
	}
	return false
}

// timeColumns finds a column of moments among columns of text; where dates and times of day
// stand apart, both.
func timeColumns(texts []table.TextColumn) TimeColumns {
	var date, ofDay string
	for _, c := range texts {
		if c.Times {
			return TimeColumns{Column: c.Name}
		}
		if len(c.Examples) == 0 {
			continue
		}
		dates, clocks, all := 0, 0, true
		for _, e := range c.Examples {
			s, ok := readStamp(e, dayFirst)
			all = all && ok
			if s.date {
				dates++
			}
			if s.clock {
				clocks++
			}
		}
		n := len(c.Examples)
		switch {
		case !all:
		case dates == n && clocks > 0:
			return TimeColumns{Column: c.Name}
		case dates == n && date == "":
			date = c.Name
		case dates == 0 && ofDay == "":
			ofDay = c.Name
		}
	}
	if date == "" {
		return TimeColumns{Column: ofDay}
	}
	return TimeColumns{date, ofDay}
}
