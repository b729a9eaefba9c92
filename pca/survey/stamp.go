package survey

import (
	"strconv"
	"strings"
	"time"
)

// dateOrder says how a date with slashes or dots is meant.
type dateOrder int

const (
	dayFirst dateOrder = iota
	monthFirst
)

// stamp is what a text says of a moment.
type stamp struct {
	seconds          float64 // since 1970-01-01 UTC, or since midnight without a date
	date, clock      bool    // it has a date, a time of day
	ordered          bool    // the date begins with the year or names the month
	first, second    int     // the numbers of a date that is not ordered
	zone, fractional bool
}

// readStamp reads a moment: RFC 3339 and ISO 8601 in their common forms, a date and a time
// with a blank between, dates with slashes, dots or hyphens, times with colons or dots, and
// either alone.
func readStamp(text string, order dateOrder) (s stamp, ok bool) {
	text = strings.TrimSpace(text)
	if len(text) < 4 || len(text) > 40 {
		return s, false
	}
	date, clock := text, ""
	if i := strings.IndexAny(text, " T"); i > 0 && i < len(text)-1 {
		date, clock = text[:i], strings.TrimSpace(text[i+1:])
	}
	year, month, day, ok := s.readDate(date, order)
	if !ok {
		// No date: a time of day, perhaps with AM or PM after a blank.
		s = stamp{}
		seconds, ok := s.readClock(text)
		s.seconds, s.clock = seconds, ok
		return s, ok
	}
	s.date = true
	s.seconds = float64(time.Date(year, time.Month(month), day, 0, 0, 0, 0, time.UTC).Unix())
	if clock != "" {
		seconds, ok := s.readClock(clock)
		if !ok {
			return s, false
		}
		s.seconds += seconds
		s.clock = true
	}
	return s, true
}

func (s *stamp) readDate(text string, order dateOrder) (year, month, day int, ok bool) {
	i := strings.IndexAny(text, "-/.")
	if i <= 0 {
		return 0, 0, 0, false
	}
	parts := strings.Split(text, text[i:i+1])
	if len(parts) != 3 {
		return 0, 0, 0, false
	}
	a, okA := digits(parts[0])
	b, okB := digits(parts[1])
	c, okC := digits(parts[2])
	if !okB {
		b, okB = monthNamed(parts[1])
		s.ordered = okB
	}
	if !okA || !okB || !okC {
		return 0, 0, 0, false
	}
	switch {
	case len(parts[0]) == 4:
		year, month, day, s.ordered = a, b, c, true
	case len(parts[2]) == 4 || len(parts[2]) == 2 && text[i] != '.' || len(parts[2]) == 2 && a <= 31 && b <= 12 && len(parts[0]) == 2:
		year, month, day = c, b, a
		if len(parts[2]) == 2 {
			year += 2000
			if c >= 70 {
				year -= 100
			}
		}
		if !s.ordered {
			s.first, s.second = a, b
			if order == monthFirst {
				month, day = a, b
			}
		}
	default:
		return 0, 0, 0, false
	}
	if !s.ordered && (month > 12 || day > 12) && month <= 31 && day <= 31 && month >= 1 && day >= 1 {
		// Impossible in this order; the caller learns the order from first and second.
		if month > 12 {
			month, day = day, month
		}
	}
	return year, month, day, month >= 1 && month <= 12 && day >= 1 && day <= 31 && year >= 1000 && year < 10000
}

// readClock reads h:m, h:m:s, h.m.s, fractions of a second, AM and PM, and the zone.
func (s *stamp) readClock(text string) (seconds float64, ok bool) {
	noon := 0
	if upper := strings.ToUpper(text); strings.HasSuffix(upper, "AM") || strings.HasSuffix(upper, "PM") {
		noon = 1
		if strings.HasSuffix(upper, "PM") {
			noon = 2
		}
		text = strings.TrimSpace(text[:len(text)-2])
	}
	offset := 0.0
	if strings.HasSuffix(text, "Z") {
		text, s.zone = text[:len(text)-1], true
	} else if i := strings.LastIndexAny(text, "+-"); i >= 4 {
		zone := strings.ReplaceAll(text[i+1:], ":", "")
		v, ok := digits(zone)
		if !ok || len(zone) != 2 && len(zone) != 4 {
			return 0, false
		}
		if len(zone) == 2 {
			v *= 100
		}
		offset = float64(v/100*3600 + v%100*60)
		if text[i] == '-' {
			offset = -offset
		}
		text, s.zone = text[:i], true
	}
	mark := ":"
	if !strings.Contains(text, ":") {
		mark = "."
	}
	parts := strings.Split(text, mark)
	if len(parts) < 2 || len(parts) > 3 || mark == "." && len(parts) != 3 {
		return 0, false
	}
	fraction := 0.0
	if len(parts) == 3 {
		if whole, rest, has := strings.Cut(strings.Replace(parts[2], ",", ".", 1), "."); has {
			v, ok := digits(rest)
			if !ok || len(rest) > 9 {
				return 0, false
			}
			fraction = float64(v)
			for range rest {
				fraction /= 10
			}
			parts[2], s.fractional = whole, true
		}
	}
	var hms [3]int
	for i, p := range parts {
		v, ok := digits(p)
		if !ok || len(p) > 2 {
			return 0, false
		}
		hms[i] = v
	}
	if noon > 0 {
		hms[0] = hms[0]%12 + 12*(noon-1)
	}
	if hms[0] > 24 || hms[1] > 59 || hms[2] > 60 {
		return 0, false
	}
	return float64(hms[0]*3600+hms[1]*60+hms[2]) + fraction - offset, true
}

func digits(s string) (v int, ok bool) {
	if len(s) == 0 || len(s) > 9 {
		return 0, false
	}
	for i := range len(s) {
		if s[i] < '0' || s[i] > '9' {
			return 0, false
		}
		v = v*10 + int(s[i]-'0')
	}
	return v, true
}

// monthNamed reads the first three letters of an English month.
func monthNamed(s string) (month int, ok bool) {
	if len(s) < 3 {
		return 0, false
	}
	i := strings.Index("janfebmaraprmayjunjulaugsepoctnovdec", strings.ToLower(s[:3]))
	return i/3 + 1, i >= 0 && i%3 == 0
}

// readNumberStamp reads seconds, milliseconds, microseconds or nanoseconds since 1970, told
// apart by size; other numbers are taken as seconds from a start of their own.
func readNumberStamp(text string) (s stamp, ok bool) {
	v, err := strconv.ParseFloat(strings.Replace(strings.TrimSpace(text), ",", ".", 1), 64)
	if err != nil || v != v || v-v != 0 {
		return s, false
	}
	scale, epoch := unixScale(v)
	return stamp{seconds: v / scale, date: epoch, clock: true, ordered: true}, true
}

// unixScale is how many units of a time since 1970 make a second, for times between 2001
// and 2065; epoch is false for other numbers.
func unixScale(v float64) (scale float64, epoch bool) {
	for _, scale := range []float64{1, 1e3, 1e6, 1e9} {
		if v >= 1e9*scale && v < 3e9*scale {
			return scale, true
		}
	}
	return 1, false
}
