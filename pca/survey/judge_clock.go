package survey

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"time"
)

func (v *Survey) judgeClock() {
	c := v.Clock
	if c == nil {
		return
	}
	add := func(kind string, weight Weight, affected int64, setting, text string, args ...any) {
		v.add(Finding{Kind: kind, Weight: weight, affected: affected, Setting: setting, Text: fmt.Sprintf(text, args...),
			Numbers: []Number{{"rows", float64(affected)}}})
	}
	if c.Ambiguous && c.Count > 0 {
		add("date-order", Worth, c.Count, "", "no date says whether day or month comes first; day first is assumed")
	}
	if c.Unread > 0 && c.Count > 0 {
		add("unread-times", Worth, c.Unread, "", "%s cannot be read as a moment", counted(c.Unread, "cell"))
	}
	if c.Backwards > 0 {
		add("backwards", Worth, c.Backwards, "sort the table by time", "time goes backwards %s, first in row %d: what follows from the order of rows is wrong there", times(c.Backwards), c.BackwardsAt)
	}
	if c.Repeated > 0 {
		add("repeated-times", Worth, c.Repeated, "", "%s the time of the row before", plural(c.Repeated, "row has", "rows have"))
	}
	if c.Gaps > 0 {
		add("time-gaps", Know, c.Gaps, "", "%s in time, the largest %s before row %d (the usual step is %s)", counted(c.Gaps, "gap"), Span(c.LargestGap), c.LargestGapAt, Span(c.Interval))
	}
	f := Finding{Kind: "time", Channels: []string{c.Column}, Weight: Know, affected: c.Count, Setting: "read.time: " + quote(c.Column), Text: "says when: " + c.Sentence()}
	if c.OfDay != "" {
		f.Text = "and " + c.OfDay + " say when: " + c.Sentence()
	}
	if c.Numbers {
		f.Weight = Spoils // unsaid, it would be a channel
	}
	v.add(f)
}

// Sentence says from when to when, and how often.
func (c *Clock) Sentence() string {
	if c.Count == 0 {
		return "no moment can be read"
	}
	text := fmt.Sprintf("from %s to %s", c.Moment(c.First), c.Moment(c.Last))
	if !math.IsNaN(c.Interval) {
		text += ", usually every " + Span(c.Interval)
	}
	return text
}

// Moment writes a moment of the clock.
func (c *Clock) Moment(t float64) string {
	if !c.Dated || math.Abs(t) > 1e11 {
		return short(t)
	}
	whole := math.Floor(t)
	text := time.Unix(int64(whole), int64((t-whole)*1e9)).UTC().Format("2006-01-02 15:04:05.999")
	return strings.TrimSuffix(strings.TrimSuffix(text, ":00"), " 00:00")
}

// Span writes a length of time in the unit that suits it.
func Span(seconds float64) string {
	for _, u := range []struct {
		size float64
		name string
	}{{86400, "day"}, {3600, "hour"}, {60, "minute"}} {
		n := seconds / u.size
		if whole := math.Abs(n-math.Round(n)) < 1e-6; n >= 1 && whole {
			return counted(int64(math.Round(n)), u.name)
		} else if n >= 2 && !whole {
			return strconv.FormatFloat(n, 'f', 1, 64) + " " + u.name + "s"
		}
	}
	return short(seconds) + " s"
}
