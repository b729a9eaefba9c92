package configs

import (
	"reflect"
	"testing"
)

func TestOverrides(t *testing.T) {
	base := start + "retain: {rule: share, at_least: 0.8}\nwrite:\n"
	for _, c := range []struct {
		sets []string
		want func(*File)
	}{
		{[]string{"title=Pump hall: spring"}, nil},
		{[]string{`title="Pump hall: spring"`}, func(f *File) { f.Title = "Pump hall: spring" }},
		{[]string{"title=a=b"}, func(f *File) { f.Title = "a=b" }},
		{[]string{"seed=3", "seed=4"}, func(f *File) { f.Seed = 4 }},
		{[]string{"read.files=[b.csv, c.csv]"}, func(f *File) { f.Read.Files = []string{"b.csv", "c.csv"} }},
		{[]string{"read.header=false"}, func(f *File) { f.Read.Header = "false" }},
		{[]string{"retain.at_least=0.7"}, func(f *File) { f.Retain.AtLeast = 0.7 }},
		{[]string{"retain={rule: fixed, components: 3}"}, func(f *File) { f.Retain = Rule{Rule: "fixed", Components: 3} }},
		{[]string{"retain=", "retain.percentile=90"}, func(f *File) {
			f.Retain = Rule{Rule: "parallel", Reference: "percentile", Percentile: 90, Rows: "effective"}
		}},
		{[]string{"draw="}, func(f *File) { f.Draw = &Draw{Formats: []string{"svg"}} }},
		{[]string{"draw.formats=[png]"}, func(f *File) { f.Draw = &Draw{Formats: []string{"png"}} }},
		{[]string{"write.scores=false"}, func(f *File) { f.Write.Scores = false }},
		{[]string{"standardize.channels.flow_7.transform=log"}, func(f *File) {
			f.Standardize.Channels = []Channel{{Name: "flow_7", Transform: "log"}}
		}},
		{[]string{"regress.response=y", "regress.retain.rule=fixed", "regress.retain.components=0"}, func(f *File) {
			f.Regress = &Regress{Response: []string{"y"}, Intercept: true, Confidence: 0.95, Nested: "auto", Retain: Rule{Rule: "fixed", Folds: 10, Arrangement: "blocks", Order: "variance", Repeats: 1}}
		}},
	} {
		got, err := Parse("study/pump.yaml", []byte(base), c.sets)
		if c.want == nil {
			// A value is YAML, in which this is a mapping.
			if err == nil || err.Error() != "--set "+c.sets[0]+": title: expected text, found a mapping" {
				t.Errorf("%q: %v", c.sets, err)
			}
			continue
		}
		if err != nil {
			t.Errorf("%q: %v", c.sets, err)
			continue
		}
		want := load(t, base)
		c.want(want)
		if !reflect.DeepEqual(settings(got), settings(want)) {
			t.Errorf("%q: got  %+v\nwant %+v", c.sets, got, want)
		}
	}
}

// An override stands in for what is wrong in the file.
func TestOverrideMends(t *testing.T) {
	if f := load(t, start+"seed: ten\n", "seed=10"); f.Seed != 10 {
		t.Errorf("seed %d", f.Seed)
	}
}
