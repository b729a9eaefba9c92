package table

import (
	"math"
	"strings"
	"time"
)

// dateStyle tells what a style makes of a number.
type dateStyle struct{ date, clock bool }

// readStyles finds out which cell styles show dates and times.
func (b *workbook) readStyles(name string) error {
	var styles struct {
		Formats []struct {
			ID   int    `xml:"numFmtId,attr"`
			Code string `xml:"formatCode,attr"`
		} `xml:"numFmts>numFmt"`
		Cells []struct {
			Format int `xml:"numFmtId,attr"`
		} `xml:"cellXfs>xf"`
	}
	if err := b.decode(name, &styles); err != nil {
		return err
	}
	own := map[int]dateStyle{}
	for _, f := range styles.Formats {
		own[f.ID] = dateStyleOf(f.Code)
	}
	for _, c := range styles.Cells {
		d, ok := own[c.Format]
		if !ok {
			d = builtInDates(c.Format)
		}
		b.dates = append(b.dates, d)
	}
	return nil
}

// builtInDates are the formats that need no code (ECMA-376, 18.8.30). Elapsed times,
// 45 to 47, are numbers of days.
func builtInDates(id int) dateStyle {
	switch {
	case id == 22:
		return dateStyle{true, true}
	case id >= 18 && id <= 21, id == 32 || id == 33:
		return dateStyle{clock: true}
	case id >= 14 && id <= 17, id >= 27 && id <= 36, id >= 50 && id <= 58:
		return dateStyle{date: true}
	}
	return dateStyle{}
}

// dateStyleOf reads a format code: letters outside quotes and brackets; m is the month
// beside y or d, and the minute beside h or s.
func dateStyleOf(code string) (d dateStyle) {
	months := false
	for i := 0; i < len(code); i++ {
		switch c := code[i]; c {
		case '"':
			i += 1 + indexOr(code[i+1:], `"`)
		case '[':
			inside := strings.ToLower(code[i+1 : i+1+indexOr(code[i+1:], "]")])
			if inside != "" && strings.Trim(inside, "hms") == "" {
				return dateStyle{} // elapsed time
			}
			i += 1 + len(inside)
		case '\\', '_', '*':
			i++
		case ';':
			d.date = d.date || months && !d.clock
			return d
		case 'y', 'Y', 'd', 'D':
			d.date = true
		case 'h', 'H', 's', 'S':
			d.clock = true
		case 'm', 'M':
			months = true
		case 'G', 'g': // General
			if strings.HasPrefix(strings.ToLower(code[i:]), "general") {
				i += len("general") - 1
			}
		}
	}
	d.date = d.date || months && !d.clock
	return d
}

// appendTime appends a day number as RFC 3339 has it, without a zone: a sheet knows none.
func (b *workbook) appendTime(to []byte, day float64, style dateStyle) ([]byte, bool) {
	if !(day >= 0 && day < 2958466) { // the day after 9999-12-31
		return to, false
	}
	if !style.date && day < 1 {
		return time.Time{}.Add(time.Duration(math.Round(day*86400e3))*time.Millisecond).AppendFormat(to, "15:04:05.999"), true
	}
	start := b.epoch
	if day < 60 && start.Year() == 1899 {
		start = start.AddDate(0, 0, 1) // day 60 is 29 February 1900, which never was
	}
	whole := math.Floor(day)
	t := start.AddDate(0, 0, int(whole)).Add(time.Duration(math.Round((day-whole)*86400e3)) * time.Millisecond)
	layout := "2006-01-02T15:04:05.999"
	if !style.clock && day == whole {
		layout = time.DateOnly
	}
	return t.AppendFormat(to, layout), true
}
