package configs

import (
	"os"
	"path/filepath"
	"reflect"
	"testing"
)

func load(t *testing.T, text string, sets ...string) *File {
	t.Helper()
	f, err := Parse("study/pump.yaml", []byte(text), sets)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// settings is a File without the note of what was named.
func settings(f *File) File {
	bare := *f
	bare.given = nil
	return bare
}

const whole = `axisfold: 1
title: Pump hall, spring campaign
seed: 7
read:
  files: [../testdata/demo/pump-hall.csv, "more/*.csv"]
  format: csv
  sheet: ""
  query: ""
  connection: ""
  encoding: auto
  orientation: rows
  separator: ";"
  decimal: comma
  thousands: none
  comment: "#"
  missing: ["", NA, -999, 010, 1e5, no, ~]
  header: false
  units_row: true
  short_rows: error
  time: stamp
  groups: campaign
  leave_out: [operator, "*_raw"]
  gaps: complete-rows
  spill: 8
standardize:
  scaling: none
  constant: drop
  channels: {flow_7: {transform: log, scaling: none}, "t*": {transform: square-root}}
decompose: {matrix: correlation, route: svd}
retain: {rule: parallel, reference: mean, percentile: 99.5, rows: effective, replicates: 500}
regress:
  response: head_loss
  predictors: ["flow_*", t_in]
  intercept: false
  retain: {rule: cross-validation, folds: 5, arrangement: groups, order: correlation, gap: 0, repeats: 1, most_components: 4}
  confidence: 0.9
draw: {formats: [svg, png]}
write: {folder: runs/x, scores: false, predictions: false, diagnostics: false}
`

func TestEverySettingIsRead(t *testing.T) {
	want := File{Path: "study/pump.yaml", Version: 1, Title: "Pump hall, spring campaign", Seed: 7,
		Read: Read{Files: []string{"../testdata/demo/pump-hall.csv", "more/*.csv"}, Format: "csv", Separator: ";",
			Orientation: "rows", Decimal: "comma", Comment: "#", Missing: []string{"", "NA", "-999", "010", "1e5", "no", "~"},
			Header: "false", UnitsRow: true, ShortRows: "error", Time: "stamp", Groups: "campaign", LeaveOut: []string{"operator", "*_raw"}, Gaps: "complete-rows", Spill: 8},
		Standardize: Standardize{Scaling: "none", Constant: "drop", Channels: []Channel{
			{Name: "flow_7", Scaling: "none", Transform: "log"}, {Name: "t*", Transform: "square-root"}}},
		Decompose: Decompose{Matrix: "correlation", Route: "svd"},
		Retain:    Rule{Rule: "parallel", Reference: "mean", Percentile: 99.5, Rows: "effective", Replicates: 500},
		Regress: &Regress{Response: []string{"head_loss"}, Predictors: []string{"flow_*", "t_in"},
			Retain:     Rule{Rule: "cross-validation", Folds: 5, Arrangement: "groups", Order: "correlation", Repeats: 1, MostComponents: 4},
			Confidence: 0.9, Nested: "auto"},
		Draw:  &Draw{Formats: []string{"svg", "png"}},
		Write: Write{Folder: "runs/x"}}
	if got := settings(load(t, whole)); !reflect.DeepEqual(got, want) {
		t.Errorf("got  %+v\nwant %+v", got, want)
	}
}

func TestDefaults(t *testing.T) {
	want := File{Path: "study/pump.yaml", Version: 1, Seed: 1,
		Read: Read{Files: []string{"a.csv"}, Orientation: "rows", Decimal: "point", Missing: []string{"", "NA", "NaN", "nan", "null"},
			Header: "true", ShortRows: "error", Gaps: "complete-rows", Spill: 8},
		Standardize: Standardize{Scaling: "unit-normal", Constant: "error"},
		Decompose:   Decompose{Matrix: "correlation", Route: "auto"},
		Retain:      Rule{Rule: "parallel", Reference: "percentile", Percentile: 95, Rows: "effective"},
		Regress: &Regress{Response: []string{"y"}, Intercept: true,
			Retain: Rule{Rule: "one-standard-error", Folds: 10, Arrangement: "blocks", Order: "variance", Repeats: 1}, Confidence: 0.95, Nested: "auto"},
		Draw:  &Draw{Formats: []string{"svg"}},
		Write: Write{Folder: "runs/pump", Scores: true, Predictions: true, Diagnostics: true}}
	if got := settings(load(t, start+"regress: {response: y}\ndraw:\n")); !reflect.DeepEqual(got, want) {
		t.Errorf("got  %+v\nwant %+v", got, want)
	}
	if f := load(t, start); f.Regress != nil || f.Draw != nil {
		t.Error("a stage that is not named runs")
	}
}

func TestDefaultsOfRules(t *testing.T) {
	for text, want := range map[string]Rule{
		"fixed, components: 3": {Components: 3},
		"share":                {AtLeast: 0.9},
		"eigenvalue-above":     {Value: 1},
		"broken-stick":         {},
		"parallel":             {Reference: "percentile", Percentile: 95, Rows: "effective"},
	} {
		f := load(t, start+"retain: {rule: "+text+"}\n")
		want.Rule = f.Retain.Rule
		if !reflect.DeepEqual(f.Retain, want) {
			t.Errorf("retain %s: %+v", text, f.Retain)
		}
	}
	for text, want := range map[string]Rule{
		"fixed, components: 0": {},
		"share":                {AtLeast: 0.9},
		"eigenvalue-above":     {Value: 1},
		"broken-stick":         {},
		"parallel":             {Reference: "percentile", Percentile: 95, Rows: "effective"},
		"cross-validation":     {},
		"one-standard-error":   {},
	} {
		want.Folds, want.Arrangement, want.Order, want.Repeats = 10, "blocks", "variance", 1
		f := load(t, start+"regress: {response: y, retain: {rule: "+text+"}}\n")
		want.Rule = f.Regress.Retain.Rule
		if !reflect.DeepEqual(f.Regress.Retain, want) {
			t.Errorf("regress.retain %s: %+v", text, f.Regress.Retain)
		}
	}
}

func TestDefaultMatrix(t *testing.T) {
	for _, scaling := range scalings {
		want := "covariance"
		if scaling == "unit-normal" || scaling == "unit-length" {
			want = "correlation"
		}
		if got := load(t, start+"standardize: {scaling: "+scaling+"}\n").Decompose.Matrix; got != want {
			t.Errorf("%s: %s", scaling, got)
		}
	}
}

func TestDefaultFolder(t *testing.T) {
	for path, want := range map[string]string{
		"pump.yaml": "runs/pump", "a/b.c/pump.hall.yml": "runs/pump.hall", "pump": "runs/pump", ".yaml": "runs/.yaml",
		"\xff.yaml": "runs/_",
	} {
		f, err := Parse(path, []byte(start), nil)
		if err != nil || f.Write.Folder != want {
			t.Errorf("%s: %q, %v", path, f.Write.Folder, err)
		}
		if _, err := f.Resolved(); err != nil {
			t.Errorf("%q: %v", path, err)
		}
	}
}

const resolvedWhole = `axisfold: 1
title: "Pump hall, spring campaign"
seed: 7
read:
  files: [../testdata/demo/pump-hall.csv, "more/*.csv"]
  format: csv
  sheet: ""
  query: ""
  connection: ""
  encoding: auto
  orientation: rows
  separator: semicolon
  decimal: comma
  thousands: none
  comment: "#"
  missing: ["", NA, "-999", "010", "1e5", "no", "~"]
  header: false
  units_row: true
  short_rows: error
  time: stamp
  groups: campaign
  leave_out: [operator, "*_raw"]
  gaps: complete-rows
  spill: 8
standardize:
  scaling: none
  constant: drop
  channels:
    flow_7: {scaling: none, transform: log}
    "t*": {transform: square-root}
decompose:
  matrix: correlation
  route: svd
retain: {rule: parallel, reference: mean, percentile: 99.5, rows: effective, replicates: 500}
regress:
  response: [head_loss]
  predictors: ["flow_*", t_in]
  intercept: false
  retain: {rule: cross-validation, folds: 5, arrangement: groups, order: correlation, gap: 0, repeats: 1, most_components: 4}
  confidence: 0.9
  nested: auto
draw:
  formats: [svg, png]
write:
  folder: runs/x
  scores: false
  predictions: false
  diagnostics: false
`

const resolvedStart = `axisfold: 1
title: ""
seed: 1
read:
  files: [a.csv]
  format: auto
  sheet: ""
  query: ""
  connection: ""
  encoding: auto
  orientation: rows
  separator: auto
  decimal: point
  thousands: none
  comment: ""
  missing: ["", NA, NaN, nan, "null"]
  header: true
  units_row: false
  short_rows: error
  time: ""
  groups: ""
  leave_out: []
  gaps: complete-rows
  spill: 8
standardize:
  scaling: unit-normal
  constant: error
  channels: {}
decompose:
  matrix: correlation
  route: auto
retain: {rule: parallel, reference: percentile, percentile: 95, rows: effective, replicates: auto}
regress:
  response: ["y"]
  predictors: []
  intercept: true
  retain: {rule: one-standard-error, folds: 10, arrangement: blocks, order: variance, gap: 0, repeats: 1, most_components: all}
  confidence: 0.95
  nested: auto
draw:
  formats: [svg]
write:
  folder: runs/pump
  scores: true
  predictions: true
  diagnostics: true
`

func TestResolved(t *testing.T) {
	for text, want := range map[string]string{whole: resolvedWhole, start + "regress: {response: y}\ndraw:\n": resolvedStart} {
		f := load(t, text)
		got, err := f.Resolved()
		if err != nil || string(got) != want {
			t.Errorf("%v, got:\n%s\nwant:\n%s", err, got, want)
		}
	}
}

// roundTrip: what is written back loads to the same settings and is written the same.
func roundTrip(t *testing.T, f *File) {
	t.Helper()
	text, err := f.Resolved()
	if err != nil {
		t.Fatal(err)
	}
	again, err := Parse(f.Path, text, nil)
	if err != nil {
		t.Fatalf("%v\n%s", err, text)
	}
	if got, want := settings(again), settings(f); !reflect.DeepEqual(got, want) {
		t.Fatalf("got  %+v\nwant %+v\n%s", got, want, text)
	}
	if second, err := again.Resolved(); err != nil || string(second) != string(text) {
		t.Fatalf("%v, written again:\n%s\nfirst:\n%s", err, second, text)
	}
	for _, s := range again.Settings() {
		// Channels that are not there are the one thing that cannot be named.
		if s.Default {
			t.Errorf("%s is still a default", s.Path)
		}
	}
}

// awkward names look like something else, or are hard to write.
var awkward = []string{"flow", "y", "NO", "true", "~", "null", "010", "0x1F", "1e5", ".5", "-", "- a", "? b", "a: b", "a #b",
	"#c", "*glob", "&x", "!tag", "%", "@", "`", "{a}", "[b]", ",", "'", "\"", "\\", " lead", "trail ", "two\nlines", "\ttab",
	"\u00e9\u00df\u6c34", "\u2028", "\u0085", "\ufeff", "\x7f", "<<", "=", "2024-01-31", "12:30:45", "1_000", "...", "---", "m\u00b3/h", "\U0001f4a7"}

// named is a File in which all that has a free name is called so.
func named(t *testing.T, name string) *File {
	f := load(t, whole)
	f.Title, f.Read.Comment, f.Read.Time, f.Write.Folder = name, name, name, name
	f.Read.Files, f.Read.Missing = []string{name}, []string{name, ""}
	f.Read.Separator = ""
	f.Read.LeaveOut = nil // a glob may match the response
	f.Regress.Response, f.Regress.Predictors = []string{"not " + name}, []string{name}
	f.Standardize.Channels = []Channel{{Name: name, Transform: "log"}}
	return f
}

func TestRoundTrip(t *testing.T) {
	for _, name := range awkward {
		f := named(t, name)
		roundTrip(t, f)
		f.Regress, f.Read.LeaveOut = nil, []string{name}
		roundTrip(t, f)
	}
	for _, c := range []string{"", "\t", ",", "|", " ", ":", "~", "'"} {
		f := load(t, start)
		f.Read.Separator = c
		roundTrip(t, f)
	}
	for _, v := range []float64{1e-300, 0.1, 1.0 / 3, 1, 1e21, 1.7976931348623157e308} {
		f := load(t, start+"retain: {rule: eigenvalue-above}\n")
		f.Retain.Value = v
		roundTrip(t, f)
	}
}

// A server is asked by a query; the list of files stays empty.
func TestRoundTripOfAServer(t *testing.T) {
	roundTrip(t, load(t, "axisfold: 1\nread: {format: postgres, query: select 1, connection: PUMP_HALL}\n"))
}

func TestPathsAreRelativeToTheRunFile(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "pump.yaml")
	if err := os.WriteFile(path, []byte(start), 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := Load(path, []string{"title=x"})
	if err != nil {
		t.Fatal(err)
	}
	if f.Title != "x" || f.Path != path || f.Dir() != dir {
		t.Errorf("%+v in %s", f, f.Dir())
	}
	if got := f.Resolve("runs/pump"); got != filepath.Join(dir, "runs", "pump") {
		t.Error(got)
	}
	if got := f.Resolve(dir); got != dir {
		t.Error(got)
	}
	if got := load(t, start).Resolve("../a.csv"); got != "a.csv" {
		t.Error(got)
	}
}
