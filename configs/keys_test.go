package configs

import (
	"fmt"
	"reflect"
	"strings"
	"testing"

	"gopkg.in/yaml.v3"
)

// each calls f with every key of the description, parameters of rules included.
func each(path string, keys []Key, f func(path string, k *Key)) {
	for i := range keys {
		k := &keys[i]
		p := join(path, k.Name)
		f(p, k)
		each(p, k.Keys, f)
		if k.Kind == Choice {
			for _, r := range k.Rules {
				each(p+" "+r.Name, k.keys(&r), f)
			}
		}
	}
}

// A key without a field, or a field without a key, would be lost on the way.
func TestKeysAndFieldsMatch(t *testing.T) {
	var match func(path string, keys []Key, of reflect.Type)
	match = func(path string, keys []Key, of reflect.Type) {
		fields := map[string]reflect.Type{}
		for i := range of.NumField() {
			if tag := of.Field(i).Tag.Get("key"); tag != "" {
				fields[tag] = of.Field(i).Type
			}
		}
		for i := range keys {
			k := &keys[i]
			in := fields[k.Name]
			if in == nil {
				t.Errorf("%s has no field", join(path, k.Name))
				continue
			}
			delete(fields, k.Name)
			if in.Kind() == reflect.Pointer || in.Kind() == reflect.Slice && in.Elem().Kind() == reflect.Struct {
				in = in.Elem()
			}
			switch {
			case k.Kind == Choice:
				match(join(path, k.Name), k.keys(&RuleDescription{Parameters: k.parameters()}), in)
			case k.Keys != nil:
				match(join(path, k.Name), k.Keys, in)
			}
		}
		for name := range fields {
			// The rules of the first stage do not use all that those of the second do.
			if path != "retain" {
				t.Errorf("field for %s has no key", join(path, name))
			}
		}
	}
	match("", sections, reflect.TypeFor[File]())
}

func TestKeysAreDescribed(t *testing.T) {
	count := 0
	each("", sections, func(path string, k *Key) {
		count++
		if k.Doc == "" || strings.ContainsAny(k.Doc, "\n") || strings.HasSuffix(k.Doc, ".") {
			t.Errorf("%s: doc %q", path, k.Doc)
		}
		if k.Required && (k.Default != nil || k.follow != nil) {
			t.Errorf("%s is required and has a default", path)
		}
	})
	if count < 60 {
		t.Errorf("%d keys seen", count)
	}
	for _, k := range Keys() {
		seen := map[string]bool{}
		for _, r := range k.Rules {
			if seen[r.Name] || r.Doc == "" {
				t.Errorf("%s: rule %s is listed twice or without doc", k.Name, r.Name)
			}
			seen[r.Name] = true
		}
	}
}

// What a default is written as must be accepted as a value.
func TestDefaultsAreAccepted(t *testing.T) {
	each("", sections, func(path string, k *Key) {
		if k.Kind == Choice && k.rule(k.Default.(string)) == nil {
			t.Errorf("%s: no rule %v", path, k.Default)
		}
		if k.Kind == Section || k.Kind == Channels || k.Kind == Choice || k.Required {
			return
		}
		if strings.HasPrefix(path, "standardize.channels.") {
			return // left as they are
		}
		if k.follow != nil {
			return // of the whole file; the round trip sees them
		}
		holder := map[Kind]any{Text: "", Word: "", Character: "", Switch: false, Whole: 0, Number: 0.0,
			Names: []string{}, Words: []string{}, Codes: []string{}}[k.Kind]
		v := reflect.New(reflect.TypeOf(holder)).Elem()
		if k.Default != nil {
			assign(v, k.Default)
		}
		n := k.node(v)
		nodes := []*yaml.Node{n}
		if n.Kind == yaml.SequenceNode {
			nodes = n.Content
		}
		for _, n := range nodes {
			if n.Tag == "" {
				var again yaml.Node
				if err := yaml.Unmarshal([]byte(n.Value), &again); err != nil {
					t.Fatal(err)
				}
				n = again.Content[0]
			}
			if got, expected, hint := k.parse(n); got == nil {
				t.Errorf("%s: default %q is refused: expected %s; %s", path, n.Value, expected, hint)
			}
		}
	})
}

// Every word that is listed loads, and one that is not is refused at its place.
func TestWordsOfEveryKey(t *testing.T) {
	tried := 0
	each("", sections, func(path string, k *Key) {
		if k.Kind != Word || k.Name == "rule" {
			return
		}
		for _, w := range append(k.words(), "neither-of-them") {
			set := fmt.Sprintf("%s=%s", path, w)
			if section, parameter, ok := strings.Cut(path, " "); ok {
				rule, name, _ := strings.Cut(parameter, ".")
				set = fmt.Sprintf("%s={rule: %s, %s: %s", section, rule, name, w)
				if rule == "fixed" {
					set += ", components: 3"
				}
				if rule == "subset" {
					set += ", which: C1"
				}
				set += "}"
			}
			set = strings.Replace(set, "channels.", "channels.flow.", 1)
			from := "files: a"
			if w == "postgres" {
				from = "query: select 1"
			}
			f, err := Parse("pump.yaml", []byte("axisfold: 1\nread: {"+from+", groups: g}\nregress: {response: y}\n"), []string{set})
			tried++
			switch {
			case w == "neither-of-them":
				if err == nil || !strings.Contains(err.Error(), `"neither-of-them" is not known`) {
					t.Errorf("--set %s: %v", set, err)
				}
			case err != nil:
				t.Error(err)
			default:
				found := false
				for _, s := range f.Settings() {
					found = found || !s.Default && strings.Contains(s.Value, w) && strings.HasPrefix(s.Path, strings.Split(set, ".")[0])
				}
				if w != k.Blank && !found && !strings.Contains(set, "{") {
					t.Errorf("--set %s is not among the settings", set)
				}
			}
		}
	})
	if tried < 40 {
		t.Errorf("%d words tried", tried)
	}
}

func TestKeysIsACopy(t *testing.T) {
	Keys()[0].Name = "other"
	if sections[0].Name != "axisfold" {
		t.Error("the description was written into")
	}
}

func TestDefaultsAreCopies(t *testing.T) {
	f := load(t, start)
	f.Read.Missing[0] = "other"
	if got := load(t, start).Read.Missing[0]; got != "" {
		t.Errorf("a loaded file changed the default to %q", got)
	}
}
