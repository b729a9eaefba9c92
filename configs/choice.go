package configs

import (
	"fmt"
	"reflect"
	"strings"

	"gopkg.in/yaml.v3"
)

// choice reads a rule and its parameters.
func (l *loader) choice(k *Key, path string, at, node *yaml.Node, into reflect.Value) {
	if node != nil && node.Kind == yaml.ScalarNode && k.rule(node.Value) != nil {
		l.fail(node, path, fmt.Sprintf("write {rule: %s}", node.Value), "%sexpected a mapping, found %s", prefix(path), found(node))
		return
	}
	entries, ok := l.entries(path, node)
	if !ok {
		return
	}
	name, place := k.Default.(string), (*yaml.Node)(nil)
	for _, e := range entries {
		if e.name == "rule" {
			name, place = e.value.Value, e.value
		}
	}
	r := k.rule(name)
	if place != nil && place.Kind != yaml.ScalarNode {
		r = nil
	}
	if r == nil {
		l.withoutRule(k, path, entries)
		return
	}
	l.fill(path, k.keys(r), at, entries, into, func(parameter string) (problem, hint string) {
		takes := namesOf(r.Parameters)
		problem = fmt.Sprintf("%srule %s takes no %q", prefix(path), r.Name, clip(parameter))
		flag, set := l.flags[place]
		switch {
		case find(k.parameters(), parameter) == nil && nearest(parameter, takes) != "":
			hint = suggest(parameter, takes)
		case len(takes) == 0:
			hint = "it takes no parameters"
		default:
			hint = "it takes " + strings.Join(takes, ", ")
		}
		if set && !strings.HasPrefix(flag, path+"=") {
			hint += fmt.Sprintf("; --set %q replaces the whole mapping", path+"={rule: "+r.Name+", ...}")
		}
		return problem, hint
	})
}

// withoutRule reports a rule that is not known, and the keys that no rule has.
func (l *loader) withoutRule(k *Key, path string, entries []entry) {
	known := k.parameters()
	for _, e := range entries {
		switch {
		case e.name == "rule":
			word := k.keys(&RuleDescription{})[0]
			l.scalar(&word, join(path, "rule"), e.value)
		case find(known, e.name) == nil:
			l.fail(e.key, join(path, e.name), suggest(e.name, namesOf(known)), "unknown key %q%s", clip(e.name), in(path))
		}
	}
}
