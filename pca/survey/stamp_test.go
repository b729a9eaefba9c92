package survey

import (
	"fmt"
	"math"
	"strings"
	"testing"
	"time"
)

// The examples of RFC 3339, section 5.8, and of common practice; time.Parse is the second
// route.
func TestStamps(t *testing.T) {
	for text, layout := range map[string]string{
		"1985-04-12T23:20:50.52Z":      time.RFC3339Nano,
		"1996-12-19T16:39:57-08:00":    time.RFC3339,
		"1937-01-01T12:00:27.87+00:20": time.RFC3339Nano,
		"2004-03-10 18:00:00":          "2006-01-02 15:04:05",
		"2004-03-10 18:00":             "2006-01-02 15:04",
		"2004/03/10 18:00:01":          "2006/01/02 15:04:05",
		"2004-03-10":                   "2006-01-02",
		"10/03/2004 18.00.00":          "02/01/2006 15.04.05",
		"10.03.2004 18:00":             "02.01.2006 15:04",
		"1.3.2004":                     "2.1.2006",
		"10-Mar-2004 06:05:04":         "02-Jan-2006 15:04:05",
		"25/12/04 11:30 PM":            "02/01/06 03:04 PM",
		"25/12/04 12:30 AM":            "02/01/06 03:04 PM",
	} {
		want, err := time.Parse(layout, text)
		if err != nil {
			t.Fatal(err)
		}
		got, ok := readStamp(text, dayFirst)
		if w := float64(want.UnixNano()) / 1e9; !ok || math.Abs(got.seconds-w) > 1e-6 {
			t.Errorf("%s: %.3f %v, time.Parse %.3f", text, got.seconds, ok, w)
		}
	}
	us, _ := readStamp("03/10/2004", monthFirst)
	if want := time.Date(2004, 3, 10, 0, 0, 0, 0, time.UTC).Unix(); us.seconds != float64(want) {
		t.Errorf("month first: %g", us.seconds)
	}
	for _, text := range []string{"", "abc", "1.5", "12", "2004-13-45", "10/03", "25:61", "2004-03-10 noon", "1.2.3.4", "-5-6-7", "32/01/2004"} {
		if s, ok := readStamp(text, dayFirst); ok {
			t.Errorf("%q is read as %g", text, s.seconds)
		}
	}
}

func clockOf(t *testing.T, lines []string) *Survey {
	t.Helper()
	var b strings.Builder
	b.WriteString("when,a,b\n")
	for i, l := range lines {
		fmt.Fprintf(&b, "%s,%d,%d\n", l, i*i%17, i*7%13)
	}
	return lookAt(t, 0, written(t, b.String()))
}

// A clock with a known fault in each place.
func TestClock(t *testing.T) {
	start := time.Date(2024, 2, 28, 22, 0, 0, 0, time.UTC)
	layouts := map[string]string{"2006-01-02T15:04:05Z07:00": "", "02/01/2006 15:04": "day first", "01/02/2006 15:04": "month first"}
	for layout, order := range layouts {
		var lines []string
		for i := range 200 {
			k := i
			switch {
			case i == 50:
				k = 49 // the moment of the row before
			case i == 80:
				k = 20 // back
			case i >= 120:
				k = i + 30 // a gap
			}
			lines = append(lines, start.Add(time.Duration(k)*10*time.Minute).Format(layout))
		}
		v := clockOf(t, lines)
		c := v.Clock
		if c == nil {
			t.Fatalf("%s: no clock", layout)
		}
		// The largest gap is the step that leads back to the present after going backwards.
		if c.Interval != 600 || c.Repeated != 1 || c.Backwards != 1 || c.BackwardsAt != 81 || c.LargestGap != 61*600 || c.Order != order || c.Ambiguous {
			t.Errorf("%s: %+v", layout, c)
		}
		if !strings.HasPrefix(c.Moment(c.First), "2024-02-28 22:00") {
			t.Errorf("%s: begins %s", layout, c.Moment(c.First))
		}
	}
	// Days up to the twelfth do not say which number is the day.
	if v := clockOf(t, []string{"01/02/2024", "02/02/2024", "03/02/2024", "04/02/2024"}); !v.Clock.Ambiguous || v.find("date-order", "") == nil {
		t.Errorf("not ambiguous: %+v", v.Clock)
	}
	// Seconds and milliseconds since 1970.
	for _, scale := range []int64{1, 1000} {
		var lines []string
		for i := range 50 {
			lines = append(lines, fmt.Sprint((1700000000+60*int64(i))*scale))
		}
		v := clockOf(t, lines)
		if v.Clock == nil || v.Clock.Interval != 60 || v.Clock.Moment(v.Clock.First) != "2023-11-14 22:13:20" {
			t.Errorf("scale %d: %+v", scale, v.Clock)
		}
	}
}
