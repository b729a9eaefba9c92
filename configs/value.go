package configs

import (
	"fmt"
	"math"
	"reflect"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"gopkg.in/yaml.v3"
)

// A leading zero is refused: some readers of YAML take 010 for eight, others for ten.
var (
	wholeText  = regexp.MustCompile(`^[-+]?(0|[1-9][0-9]*)$`)
	numberText = regexp.MustCompile(`^[-+]?((0|[1-9][0-9]*)(\.[0-9]*)?|\.[0-9]+)([eE][-+]?[0-9]+)?$`)
)

// mostWhole is the largest whole number that every reader of JSON keeps: results carry
// the numbers of the run file along.
const mostWhole = 1<<53 - 1

// scalar reads a single value: a string, bool, int64 or float64.
func (l *loader) scalar(k *Key, path string, n *yaml.Node) (any, bool) {
	if !l.plain(path, n) {
		return nil, false
	}
	v, expected, hint := k.parse(n)
	if v == nil {
		problem := fmt.Sprintf("expected %s, found %s", expected, found(n))
		if expected == "" {
			problem = fmt.Sprintf("%q is not known", clip(n.Value))
		}
		l.fail(n, path, hint, "%s%s", prefix(path), problem)
		return nil, false
	}
	return v, true
}

// parse returns the value, or nil with what was expected and a hint. Nothing is expected
// of a word that is not known: there the hint says it.
func (k *Key) parse(n *yaml.Node) (v any, expected, hint string) {
	isText, null := n.Kind == yaml.ScalarNode, isNull(n)
	if isText && k.Blank != "" && n.Value == k.Blank {
		return reflect.Zero(zeros[k.Kind]).Interface(), "", ""
	}
	switch k.Kind {
	case Text, Names:
		switch {
		case !isText:
			return nil, "text", ""
		case null:
			return nil, "text", `quote a text that begins with "#"; an empty one is ""`
		case n.Value == "" && (k.Filled || k.Kind == Names):
			return nil, "text that is not empty", ""
		}
		return n.Value, "", ""
	case Codes:
		if !isText {
			return nil, "text or a number", ""
		}
		return n.Value, "", ""
	case Word, Words:
		switch {
		case !isText || null:
			return nil, "a word", "known: " + strings.Join(k.words(), ", ")
		case !slices.Contains(k.Allowed, n.Value):
			return nil, "", suggest(n.Value, k.words())
		}
		return n.Value, "", ""
	case Character:
		return parseCharacter(n)
	case Switch:
		switch {
		case isText && n.Style == 0 && (n.Value == "true" || n.Value == "false"):
			return n.Value == "true", "", ""
		case isText:
			hint = meantSwitch[strings.ToLower(n.Value)]
		}
		return nil, "true or false", hint
	}
	return k.parseNumber(n)
}

// parseNumber reads numbers written as plain decimal text.
func (k *Key) parseNumber(n *yaml.Node) (v any, expected, hint string) {
	expected, pattern := "a number", numberText
	if k.Kind == Whole {
		expected, pattern = "a whole number", wholeText
	}
	if n.Kind != yaml.ScalarNode || n.Style != 0 || !pattern.MatchString(n.Value) {
		if n.Kind == yaml.ScalarNode && pattern.MatchString(n.Value) {
			hint = "take the quotes off"
		} else if k.Blank != "" {
			hint = "or " + k.Blank
		}
		return nil, expected, hint
	}
	// Both patterns are subsets of what ParseFloat reads; a whole number beyond 2^53 is
	// rounded but stays beyond. Overflow is an infinity, underflow a number near zero.
	f, _ := strconv.ParseFloat(n.Value, 64)
	switch {
	case k.Range != nil && !k.Range.holds(f) && k.Range.Low == k.Range.High:
		return nil, short(k.Range.Low), ""
	case k.Range != nil && !k.Range.holds(f):
		return nil, expected + " " + k.Range.String(), ""
	case math.IsInf(f, 0):
		return nil, expected + " that is finite", ""
	case k.Kind == Number:
		return f, "", ""
	case math.Abs(f) > mostWhole:
		return nil, fmt.Sprintf("%s up to %d", expected, mostWhole), ""
	}
	return int64(f), "", ""
}

// zeros are the types of values that a word may stand for the zero of.
var zeros = map[Kind]reflect.Type{Word: reflect.TypeFor[string](), Character: reflect.TypeFor[string](), Whole: reflect.TypeFor[int64]()}

// meantSwitch holds other words for switches.
var meantSwitch = map[string]string{
	"true": "write true", "yes": "write true", "on": "write true", "y": "write true", "1": "write true",
	"false": "write false", "no": "write false", "off": "write false", "n": "write false", "0": "write false",
}

// words are all that may be written.
func (k *Key) words() []string {
	if k.Blank == "" {
		return k.Allowed
	}
	return append(slices.Clone(k.Allowed), k.Blank)
}

// list reads a list, or a single value as a list of one.
func (l *loader) list(k *Key, path string, node *yaml.Node, into reflect.Value) {
	if !l.plain(path, node) {
		return
	}
	items := []*yaml.Node{node}
	switch {
	case node.Kind == yaml.SequenceNode:
		items = node.Content
	case node.Kind == yaml.MappingNode, isNull(node):
		hint := ""
		if !k.Filled {
			hint = "an empty list is []"
		}
		l.fail(node, path, hint, "%sexpected a list, found %s", prefix(path), found(node))
		return
	}
	if len(items) == 0 && k.Filled {
		refuse := func() { l.fail(node, path, "", "%sexpected at least one, found an empty list", prefix(path)) }
		if k.needed == nil {
			refuse()
			return
		}
		l.follow = append(l.follow, func() {
			if k.needed(l.file) {
				refuse()
			}
		})
	}
	values := []string{}
	for _, n := range items {
		v, ok := l.scalar(k, path, n)
		if !ok {
			continue
		}
		text := v.(string)
		if slices.Contains(values, text) {
			l.fail(n, path, "keep one of them", "%s%q stands twice", prefix(path), clip(text))
			continue
		}
		l.places[item(path, text)] = n
		values = append(values, text)
	}
	assign(into, values)
}

// item is the path of an item of a list.
func item(path, text string) string { return path + "[" + text + "]" }
