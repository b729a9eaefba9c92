package configs

import (
	"cmp"
	"strings"

	"gopkg.in/yaml.v3"
)

// override puts one section.key=value into the tree of the file. The value is YAML. The
// nodes that it makes stand for the override in messages.
func (l *loader) override(root *yaml.Node, set string) {
	path, text, ok := strings.Cut(set, "=")
	refuse := func(hint, problem string, args ...any) {
		at := &yaml.Node{}
		l.flags[at] = cmp.Or(set, `""`)
		l.fail(at, path, hint, problem, args...)
	}
	if !ok || path == "" {
		refuse("such as retain.rule=parallel", "expected section.key=value")
		return
	}
	steps := strings.Split(path, ".")
	if problem, hint := locate(steps); problem != "" {
		refuse(hint, "%s", problem)
		return
	}
	value, problem := document([]byte(text))
	switch {
	case problem != nil:
		refuse("", "the value %s", problem.Problem)
		return
	case value == nil:
		value = &yaml.Node{Kind: yaml.ScalarNode, Tag: "!!null"}
	}
	l.mark(value, set)
	at := root
	for i, step := range steps {
		switch {
		case isNull(at):
			// A section that is named and left at its defaults.
			at.Kind, at.Tag, at.Value, at.Style = yaml.MappingNode, "!!map", "", 0
		case at.Kind != yaml.MappingNode:
			refuse("", "%sexpected a mapping to set a key of, found %s", prefix(strings.Join(steps[:i], ".")), found(at))
			return
		}
		last := i == len(steps)-1
		inner := position(at, step)
		switch {
		case inner < 0:
			key := &yaml.Node{Kind: yaml.ScalarNode, Tag: "!!str", Value: step}
			child := value
			if !last {
				child = &yaml.Node{Kind: yaml.MappingNode, Tag: "!!map"}
			}
			l.flags[key], l.flags[child] = set, set
			at.Content = append(at.Content, key, child)
			inner = len(at.Content) - 1
		case last:
			at.Content[inner] = value
		}
		at = at.Content[inner]
	}
}

// mark enters a value and all in it as made by an override.
func (l *loader) mark(n *yaml.Node, set string) {
	l.flags[n] = set
	for _, inner := range n.Content {
		l.mark(inner, set)
	}
}

// position is where a mapping has the value of a key, -1 when it has none.
func position(mapping *yaml.Node, key string) int {
	for i := 0; i+1 < len(mapping.Content); i += 2 {
		if mapping.Content[i].Kind == yaml.ScalarNode && mapping.Content[i].Value == key {
			return i + 1
		}
	}
	return -1
}

// locate follows a path through the description and words what is wrong with it.
func locate(steps []string) (problem, hint string) {
	keys, anyName := sections, false
	for i, step := range steps {
		path := strings.Join(steps[:i], ".")
		if anyName {
			anyName = false
			continue
		}
		k := find(keys, step)
		switch {
		case k == nil && keys == nil:
			return prefix(path) + "has no keys of its own", ""
		case k == nil:
			return unknownKey(path, step, keys)
		}
		keys, anyName = k.Keys, k.Kind == Channels
		if k.Kind == Choice {
			keys = append(k.keys(&RuleDescription{}), k.parameters()...)
		}
	}
	return "", ""
}
