package configs

import (
	"fmt"
	"reflect"
	"strings"

	"gopkg.in/yaml.v3"
)

// entry is a key of a mapping with its value.
type entry struct {
	name       string
	key, value *yaml.Node
}

// entries lists a mapping; nil, and a key with nothing after it, count as an empty one.
func (l *loader) entries(path string, node *yaml.Node) ([]entry, bool) {
	if node == nil {
		return nil, true
	}
	if !l.plain(path, node) {
		return nil, false
	}
	if isNull(node) {
		return nil, true
	}
	if node.Kind != yaml.MappingNode {
		what := "sections"
		if path != "" {
			what = "keys"
		}
		l.fail(node, path, "", "%sexpected a mapping of %s, found %s", prefix(path), what, found(node))
		return nil, false
	}
	var out []entry
	before := map[string]*yaml.Node{}
	for i := 0; i+1 < len(node.Content); i += 2 {
		key, value := node.Content[i], node.Content[i+1]
		switch {
		case !l.plain(path, key):
			continue
		case key.ShortTag() == "!!merge":
			l.fail(key, path, "write the keys out", "merge keys are not part of a run file")
			continue
		case key.Kind != yaml.ScalarNode || key.Value == "":
			l.fail(key, path, "", "expected the name of a key, found %s", found(key))
			continue
		}
		if first := before[key.Value]; first != nil {
			l.fail(key, join(path, key.Value), "keep one of them", "key %q stands twice%s, first in line %d", clip(key.Value), in(path), first.Line)
			continue
		}
		before[key.Value] = key
		out = append(out, entry{key.Value, key, value})
	}
	return out, true
}

// plain refuses what YAML has and a run file does not need.
func (l *loader) plain(path string, n *yaml.Node) bool {
	switch {
	case n.Kind == yaml.AliasNode:
		l.fail(n, path, `write the value out; a text that begins with "*" needs quotes`, "aliases are not part of a run file, found *%s", clip(n.Value))
		return false
	case n.Style&yaml.TaggedStyle != 0:
		l.fail(n, path, `put what is meant as text in quotes`, "tags are not part of a run file, found %s", clip(n.Tag))
		return false
	}
	return true
}

// fill reads the entries of a mapping into the fields of a struct and gives the other
// fields their defaults. at stands for the mapping where something is missing. unknown
// words the problem with a key that is none of keys.
func (l *loader) fill(path string, keys []Key, at *yaml.Node, entries []entry, into reflect.Value, unknown func(name string) (problem, hint string)) {
	seen := map[string]bool{}
	for _, e := range entries {
		p := join(path, e.name)
		k := find(keys, e.name)
		if k == nil {
			problem, hint := unknownKey(path, e.name, keys)
			if unknown != nil {
				problem, hint = unknown(e.name)
			}
			l.fail(e.key, p, hint, "%s", problem)
			continue
		}
		seen[e.name] = true
		l.file.given[p] = true
		l.value(k, p, e.key, e.value, field(into, e.name))
	}
	for i := range keys {
		if k := &keys[i]; !seen[k.Name] {
			l.absent(k, join(path, k.Name), at, field(into, k.Name), in(path))
		}
	}
}

// value reads one value of any kind. A nil node is an absent section.
func (l *loader) value(k *Key, path string, at, node *yaml.Node, into reflect.Value) {
	l.places[path] = node
	switch k.Kind {
	case Section:
		if into.Kind() == reflect.Pointer {
			into.Set(reflect.New(into.Type().Elem()))
			into = into.Elem()
		}
		if entries, ok := l.entries(path, node); ok {
			l.fill(path, k.Keys, at, entries, into, nil)
		}
	case Choice:
		l.choice(k, path, at, node, into)
	case Channels:
		l.channels(k, path, node, into)
	case Names, Words, Codes:
		l.list(k, path, node, into)
	default:
		if v, ok := l.scalar(k, path, node); ok {
			assign(into, v)
		}
	}
}

func (l *loader) absent(k *Key, path string, at *yaml.Node, into reflect.Value, where string) {
	switch {
	case k.Kind == Section && k.Named, k.Kind == Channels:
	case k.Kind == Section, k.Kind == Choice:
		l.value(k, path, at, nil, into)
	case k.Required:
		l.fail(at, path, k.Name+": "+k.Doc, "required key %q is missing%s", k.Name, where)
	case k.needed != nil:
		l.follow = append(l.follow, func() {
			if k.needed(l.file) {
				l.fail(at, path, k.Name+": "+k.Doc, "required key %q is missing%s", k.Name, where)
			}
		})
	case k.follow != nil:
		l.follow = append(l.follow, func() { assign(into, k.follow(l.file)) })
	case k.Default != nil:
		assign(into, k.Default)
	}
}

// channels reads settings by channel.
func (l *loader) channels(k *Key, path string, node *yaml.Node, into reflect.Value) {
	entries, _ := l.entries(path, node)
	for _, e := range entries {
		p := join(path, e.name)
		l.file.given[p] = true
		l.places[p] = e.value
		own, ok := l.entries(p, e.value)
		if ok && len(own) == 0 {
			l.fail(e.key, p, suggest("", namesOf(k.Keys)), "%q has no settings", clip(e.name))
			continue
		}
		c := reflect.New(into.Type().Elem()).Elem()
		c.FieldByName("Name").SetString(e.name)
		l.fill(p, k.Keys, e.key, own, c, nil)
		into.Set(reflect.Append(into, c))
	}
}

// unknownKey words the problem and, in the hint, where else the key belongs, or the
// nearest key, or the keys there are.
func unknownKey(path, name string, keys []Key) (problem, hint string) {
	problem = fmt.Sprintf("unknown key %q%s", clip(name), in(path))
	if find(sections, name) != nil {
		return problem, fmt.Sprintf("%q belongs on the top level", name)
	}
	if home := homeOf("", name, sections); home != "" {
		return problem, fmt.Sprintf("%q belongs in %s", name, home)
	}
	return problem, suggest(name, namesOf(keys))
}

// homeOf is the first section that has the key.
func homeOf(path, name string, keys []Key) string {
	for _, k := range keys {
		p := join(path, k.Name)
		inner := k.Keys
		if k.Kind == Choice {
			inner = k.parameters()
		}
		if k.Kind != Channels && find(inner, name) != nil {
			return p
		}
		if home := homeOf(p, name, inner); home != "" {
			return home
		}
	}
	return ""
}

func assign(into reflect.Value, v any) {
	switch v := v.(type) {
	case []string:
		// A copy, so that nobody writes into the description.
		into.Set(reflect.ValueOf(append([]string(nil), v...)))
	default:
		into.Set(reflect.ValueOf(v).Convert(into.Type()))
	}
}

// field is the field of a struct that has the key as its tag.
func field(of reflect.Value, key string) reflect.Value {
	for i := range of.NumField() {
		if of.Type().Field(i).Tag.Get("key") == key {
			return of.Field(i)
		}
	}
	panic("configs: no field for key " + key)
}

// join is the path of a key in a section.
func join(path, name string) string {
	if path == "" {
		return name
	}
	return path + "." + name
}

// parents lists a path and the sections around it.
func parents(path string) []string {
	out := []string{path}
	for i := strings.LastIndexByte(path, '.'); i >= 0; i = strings.LastIndexByte(path, '.') {
		path = path[:i]
		out = append(out, path)
	}
	return append(out, "")
}
