package plots

import (
	"bytes"
	"encoding/xml"
	"io"
	"os"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"

	"axisfold/pca"
)

// Names of any length and script are drawn without a crash, and find room.
func TestDifficultNames(t *testing.T) {
	names := []string{"", strings.Repeat("very_long_name_", 6), "Temperatur °C µ", "Δp √2 ½", "流量計 α", "a\nb\tc", "\xff\xfe", "<&>\"'",
		"e\u0301te\u0301", "\u202egnp.exe", "שלום", "🌡️ heat", " "}
	m := material(t, len(names), 3, pca.Correlation, func(j int) string { return names[j] })
	m.Title, m.Regression.Models[0].Response = names[4], names[7]
	formats := []string{"svg", "pdf"}
	if os.Getenv(lookAt) != "" {
		formats = Formats
	}
	files := drawAll(t, m, formats...)
	for name, b := range files {
		keep("names-"+name, b)
		if strings.HasSuffix(name, ".svg") {
			d := xml.NewDecoder(bytes.NewReader(b))
			for err := error(nil); err != io.EOF; _, err = d.Token() {
				if err != nil {
					t.Errorf("%s: %v", name, err)
					break
				}
			}
		}
	}
	checkTexts(t, "difficult names", m)
}

func TestDrawable(t *testing.T) {
	for in, want := range map[string]string{
		"plain":          "plain",
		"µ°é½Δ→":         "µ°é½Δ→",
		"流量 1":           "□□ 1",
		"a\nb":           "a b",
		"\u202eab\u200b": "ab",
		"🌡️":             "□",
		"שם":             "□□",
	} {
		if got := drawable(in); got != want {
			t.Errorf("%q: %q, want %q", in, got, want)
		}
	}
}

func TestShorten(t *testing.T) {
	style := textStyle(smallSize, ink, 0, 0)
	if got := shorten("short", 100, style); got != "short" {
		t.Errorf("%q", got)
	}
	long := "inlet_pressure_of_the_second_pump_bar"
	got := shorten(long, 80, style)
	start, end, cut := strings.Cut(got, "…")
	if !cut || !strings.HasPrefix(long, start) || !strings.HasSuffix(long, end) || len(start) < 5 || len(end) < 5 || style.Width(got) > 80 || style.Width(got) < 70 {
		t.Errorf("%q, %v wide", got, style.Width(got))
	}
	if got := shorten(long, 1, style); got != "…" {
		t.Errorf("no room: %q", got)
	}
}

func TestWrap(t *testing.T) {
	style := textStyle(textSize, ink, 0, 0)
	lines := wrap("one two three four five six seven eight nine ten", 80, style, 2)
	if len(lines) != 2 || !strings.Contains(lines[1], "…") {
		t.Errorf("%q", lines)
	}
	for _, l := range lines {
		if style.Width(l) > 80 {
			t.Errorf("%q is %v wide", l, style.Width(l))
		}
	}
	if lines := wrap("", 80, style, 2); lines != nil {
		t.Errorf("%q", lines)
	}
}

func TestNumbers(t *testing.T) {
	for _, c := range []struct {
		low, high float64
		n         int
		want      string
	}{
		{0, 1, 5, "0 0.2 0.4 0.6 0.8 1.0"},
		{-1, 1, 4, "−1.0 −0.5 0 0.5 1.0"},
		{0, 20000, 4, "0 5000 10\u2009000 15\u2009000 20\u2009000"},
		{0, 4e7, 4, "0 1e7 2e7 3e7 4e7"},
		{0, 2.5e-6, 5, "0 0.5e−6 1.0e−6 1.5e−6 2.0e−6 2.5e−6"},
		{1e8, 1e8 + 4, 4, "1.00000000e8 1.00000001e8 1.00000002e8 1.00000003e8 1.00000004e8"},
		{7, 7, 4, ""},
	} {
		var got []string
		for _, m := range roundMarks(c.low, c.high, c.n) {
			got = append(got, m.label)
		}
		if s := strings.Join(got, " "); s != c.want {
			t.Errorf("%g to %g: %q, want %q", c.low, c.high, s, c.want)
		}
	}
}

func TestWritten(t *testing.T) {
	for _, c := range []struct {
		form string
		v    float64
		want string
	}{{"%.2f", -.004, "0.00"}, {"%+.3f", .0001, "0.000"}, {"%+.3f", -.5, "−0.500"}, {"%+.1f", 2, "+2.0"}, {"%.3g", -12345.6, "−1.23e4"},
		{"%.3g", 1.5e-7, "1.5e−7"}, {"%.3g", -2e120, "−2e120"}, {"%.3g", 0, "0"}} {
		if got := written(c.form, c.v); got != c.want {
			t.Errorf("%s of %g: %q, want %q", c.form, c.v, got, c.want)
		}
	}
}

func TestCounted(t *testing.T) {
	for _, c := range []struct {
		first, last int
		length      vg.Length
		want        []float64
	}{
		{1, 4, 400, []float64{1, 2, 3, 4}},
		{0, 40, 400, []float64{0, 5, 10, 15, 20, 25, 30, 35, 40}},
		{1, 2000, 400, []float64{1, 100, 200}},
	} {
		var got []float64
		for _, m := range counted(c.first, c.last, c.length) {
			got = append(got, m.at)
		}
		if c.last == 2000 {
			got = got[:3]
		}
		if !slices.Equal(got, c.want) {
			t.Errorf("%d to %d: %v, want %v", c.first, c.last, got, c.want)
		}
	}
}
