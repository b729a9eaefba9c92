package survey

import (
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"testing"

	"axisfold/pca/table"
)

const reference = "../../testdata/reference/"

func lookAt(t *testing.T, threads int, files ...string) *Survey {
	t.Helper()
	s, err := Open(context.Background(), table.Options{Files: files, Missing: []string{"", "NA", "NaN", "nan", "null"}}, Given{})
	if err != nil {
		t.Fatal(err)
	}
	v, err := Look(context.Background(), s, threads)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func written(t *testing.T, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "x.csv")
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

func (v *Survey) find(kind, channel string) *Finding {
	for i := range v.Findings {
		if f := &v.Findings[i]; f.Kind == kind && (channel == "" || slices.Contains(f.Channels, channel)) {
			return f
		}
	}
	return nil
}

// UCI Air Quality (De Vito et al. 2008) as published. The counts of -200 are those of
// PROVENANCE.md, printed with the source; 9357 hourly rows from 10 March 2004 to 4 April
// 2005 are printed too.
func TestAirQuality(t *testing.T) {
	v := lookAt(t, 0, reference+"air_quality/AirQualityUCI.csv")
	if len(v.Codes) != 1 || v.Codes[0].Value != -200 {
		t.Fatalf("codes %v", v.Codes)
	}
	printed := map[string]int64{"CO(GT)": 1683, "NMHC(GT)": 8443, "NOx(GT)": 1639, "NO2(GT)": 1642}
	if len(v.Channels) != 13 {
		t.Fatalf("%d channels", len(v.Channels))
	}
	total := int64(0)
	for j, c := range v.Channels {
		want, ok := printed[c.Name]
		if !ok {
			want = 366
		}
		total += want
		if got := v.Codes[0].Counts[j]; got != want || c.Missing != want || c.Count != 9357-want {
			t.Errorf("%s: %d codes, %d missing, %d values; printed %d", c.Name, got, c.Missing, c.Count, want)
		}
	}
	if v.Codes[0].Total != total {
		t.Errorf("%d codes in all, printed %d", v.Codes[0].Total, total)
	}
	if v.Rows != 9357 || !v.Source.Options.DecimalComma {
		t.Errorf("%d rows, decimal comma %v", v.Rows, v.Source.Options.DecimalComma)
	}
	c := v.Clock
	if c == nil || c.Column != "Date" || c.OfDay != "Time" || c.Interval != 3600 || c.Gaps != 0 || c.Backwards != 0 || c.Count != 9357 ||
		c.Moment(c.First) != "2004-03-10 18:00" || c.Moment(c.Last) != "2005-04-04 14:00" || c.Ambiguous || c.Order != "day first" {
		t.Errorf("clock %+v", c)
	}
	if len(v.Proposal.LeaveOut) != 1 || v.Channels[v.Proposal.LeaveOut[0]].Name != "NMHC(GT)" || v.Complete != 827 {
		t.Errorf("proposal %+v, %d complete", v.Proposal, v.Complete)
	}
}

// Tecator: 22 rows are exact copies (PROVENANCE.md); near-total redundancy: three
// components carry 99 % of 103 channels.
func TestTecator(t *testing.T) {
	v := lookAt(t, 0, reference+"tecator/tecator_215x103.csv")
	if v.RowCopies != 22 || !v.CopiesExact || v.find("row-copies", "") == nil {
		t.Errorf("%d copied rows", v.RowCopies)
	}
	if v.Dominated > 3 || v.find("redundancy", "") == nil {
		t.Errorf("%d components carry 99 %%", v.Dominated)
	}
}

// Tennessee Eastman as published: the valves XMV(7), (8) and (11), columns 48, 49 and 52, are
// moved by the controllers of XMEAS(12), (15) and (17) (Downs & Vogel 1993), so that the last
// roots are near zero (PROVENANCE.md). d00 is stored transposed, the test run is not.
func TestTennesseeEastman(t *testing.T) {
	for file, rows := range map[string]int64{"d00.dat": 500, "d00_te.dat": 960} {
		v := lookAt(t, 0, reference+"tep/"+file)
		if !v.Source.Options.NoHeader || v.Rows != rows || len(v.Channels) != 52 || v.Source.Turned != (rows == 500) {
			t.Fatalf("%s: %d rows, %d channels, header %v, turned %v", file, v.Rows, len(v.Channels), !v.Source.Options.NoHeader, v.Source.Turned)
		}
		for _, pair := range [][2]string{{"column_48", "column_12"}, {"column_49", "column_15"}, {"column_52", "column_17"}} {
			if f := v.find("near-copy", pair[0]); f == nil || !slices.Contains(f.Channels, pair[1]) {
				t.Errorf("%s: %v not found", file, pair)
			}
		}
	}
}

// One made table with every fault in a known place, against which each finding is checked.
func faulty() string {
	var b strings.Builder
	b.WriteString("row,plain,still,stuck,spike,copy,double,code,mode,limited,skewed,total\n")
	x, state := 20.0, uint64(7)
	random := func() float64 { state = mix(state); return float64(state>>11) / (1 << 53) }
	total := 0
	for i := range 1200 {
		x = .9*x + 2 + random() - .5
		stuck, spike, code, limited := x+random(), x+random(), x+random(), 10*random()
		if i >= 300 && i < 360 {
			stuck = 21.25
		}
		if i == 700 {
			spike += 400
		}
		if i%50 == 7 {
			code = 9999
		}
		limited = math.Min(limited, 9)
		total += 1 + int(3*random())
		fmt.Fprintf(&b, "%d,%.4f,5,%.4f,%.4f,%.4f,%.4f,%g,%d,%.3f,%.5f,%d\n", i+1, x, stuck, spike, x, 32+1.75*math.Round(x*1e4)/1e4, math.Round(code*1e4)/1e4,
			int(4*random()), limited, math.Exp(3*(random()+random()+random()-1.5)), total)
	}
	return b.String()
}

func TestFaults(t *testing.T) {
	v := lookAt(t, 0, written(t, faulty()))
	for kind, channel := range map[string]string{"equal-steps": "row", "constant": "still", "stuck": "stuck", "spikes": "spike", "copy": "copy",
		"missing-code": "code", "categories": "mode", "limit": "limited", "skew": "skewed", "counter": "total"} {
		if f := v.find(kind, channel); f == nil {
			t.Errorf("no finding %s of %s", kind, channel)
		}
	}
	if l := v.find("affine-copy", "double"); l != nil {
		if got := l.Numbers[2].Value; math.Abs(got-1.75) > 1e-6 {
			t.Errorf("slope %g", got)
		}
	} else {
		t.Error("no affine copy")
	}
	if f := v.find("stuck", "stuck"); f != nil && (f.Numbers[0].Value != 60 || f.Numbers[1].Value != 301) {
		t.Errorf("stuck %v", f.Numbers)
	}
	if f := v.find("spikes", "spike"); f != nil && (f.Numbers[0].Value != 1 || f.Numbers[2].Value != 701) {
		t.Errorf("spike %v", f.Numbers)
	}
	if f := v.find("missing-code", "code"); f != nil && (f.Numbers[0].Value != 9999 || f.Numbers[1].Value != 24) {
		t.Errorf("code %v", f.Numbers)
	}
	for _, f := range v.Findings {
		if slices.Contains(f.Channels, "plain") && f.Kind != "copy" && f.Kind != "affine-copy" && f.Kind != "near-copy" {
			t.Errorf("plain: %s", f.Text)
		}
	}
}

// Mean, deviation and autocorrelation agree with the certified ones of the NIST StRD
// univariate set NumAcc3 (1000000.2, 0.1, -0.999): digits survive an offset of a million.
func TestCertifiedMoments(t *testing.T) {
	text, err := os.ReadFile(reference + "nist_strd/NumAcc3.dat")
	if err != nil {
		t.Fatal(err)
	}
	_, data, ok := strings.Cut(string(text), "---\n")
	if !ok {
		_, data, ok = strings.Cut(strings.ReplaceAll(string(text), "\r", ""), "---\n")
	}
	if !ok {
		t.Fatal("no data in the file")
	}
	v := lookAt(t, 0, written(t, "y,z\n"+strings.Join(strings.Fields(data), ",0\n")+",1\n"))
	c := v.Channels[0]
	if v.Rows != 1001 || math.Abs(c.Mean-1000000.2) > 1e-8 || math.Abs(c.Deviation-.1) > 1e-10 {
		t.Errorf("%d rows, mean %.10g, deviation %.12g", v.Rows, c.Mean, c.Deviation)
	}
	// Ours divides by the number of pairs, theirs by that of rows: 1000 to 1001.
	if got := c.Autocorrelation * 1000 / 1001; math.Abs(got+.999) > 1e-8 {
		t.Errorf("autocorrelation %.10g", got)
	}
}

// The same table gives the same survey on any number of threads.
func TestThreads(t *testing.T) {
	file := written(t, faulty())
	one := lookAt(t, 1, file)
	for _, threads := range []int{2, 5} {
		v := lookAt(t, threads, file)
		v.Source, one.Source = nil, nil
		if a, b := fmt.Sprintf("%+v", one), fmt.Sprintf("%+v", v); a != b || !reflect.DeepEqual(one.Codes, v.Codes) {
			t.Errorf("%d threads differ", threads)
		}
	}
}
