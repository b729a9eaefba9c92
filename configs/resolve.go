package configs

import (
	"bytes"
	"fmt"
	"reflect"
	"regexp"
	"strconv"

	"gopkg.in/yaml.v3"
)

// Resolved returns the run file with every default filled in and the keys in the order
// of [Keys]. At the same path it loads to the same File. Paths in it stay as written:
// relative to [File.Dir], wherever the text goes.
func (f *File) Resolved() ([]byte, error) {
	return encode(written(sections, reflect.ValueOf(f).Elem()))
}

// inner are the keys inside a section that runs or a rule; nil for all else.
func (k *Key) inner(v reflect.Value) []Key {
	switch {
	case v.Kind() == reflect.Pointer && v.IsNil():
		return nil
	case k.Kind == Choice:
		return k.keys(k.rule(field(v, "rule").String()))
	}
	if k.Kind == Section {
		return k.Keys
	}
	return nil
}

// written is a mapping of the keys, without sections that do not run.
func written(keys []Key, from reflect.Value) *yaml.Node {
	m := &yaml.Node{Kind: yaml.MappingNode}
	for i := range keys {
		if n := keys[i].node(field(from, keys[i].Name)); n != nil {
			m.Content = append(m.Content, plainNode(keys[i].Name), n)
		}
	}
	return m
}

// node is the value of a key as YAML, nil for a section that does not run.
func (k *Key) node(v reflect.Value) *yaml.Node {
	switch k.Kind {
	case Section, Choice:
		inner := k.inner(v)
		if inner == nil {
			return nil
		}
		m := written(inner, reflect.Indirect(v))
		if k.Kind == Choice {
			m.Style = yaml.FlowStyle
		}
		return m
	case Channels:
		m := &yaml.Node{Kind: yaml.MappingNode}
		for i := range v.Len() {
			c := v.Index(i)
			m.Content = append(m.Content, textNode(c.FieldByName("Name").String()), channelNode(c, k.Keys))
		}
		return m
	case Names, Words, Codes:
		list := &yaml.Node{Kind: yaml.SequenceNode, Style: yaml.FlowStyle}
		for _, text := range v.Interface().([]string) {
			list.Content = append(list.Content, textNode(text))
		}
		return list
	}
	if v.IsZero() && k.Blank != "" {
		return plainNode(k.Blank)
	}
	switch k.Kind {
	case Character:
		return textNode(characterWord(v.String()))
	case Text:
		return textNode(v.String())
	case Word: // of ours, true and false among them
		return plainNode(v.String())
	case Number:
		return plainNode(strconv.FormatFloat(v.Float(), 'g', -1, 64))
	}
	return plainNode(fmt.Sprint(v.Interface()))
}

// channelNode holds the settings of one channel that are given: empty ones leave earlier
// entries as they are.
func channelNode(c reflect.Value, keys []Key) *yaml.Node {
	m := &yaml.Node{Kind: yaml.MappingNode, Style: yaml.FlowStyle}
	for i := range keys {
		if v := field(c, keys[i].Name); !v.IsZero() {
			m.Content = append(m.Content, plainNode(keys[i].Name), keys[i].node(v))
		}
	}
	return m
}

// unquoted texts read as text in YAML of any version; what reads as something else is
// among the words that readers of older versions take for switches.
var (
	unquoted = regexp.MustCompile(`^[A-Za-z_./][A-Za-z0-9_./-]*$`)
	misread  = regexp.MustCompile(`^(?i:y|n|yes|no|on|off|true|false|null|\.inf|\.nan)$`)
)

func textNode(text string) *yaml.Node {
	n := plainNode(text)
	n.Tag = "!!str"
	if !unquoted.MatchString(text) || misread.MatchString(text) {
		n.Style = yaml.DoubleQuotedStyle
	}
	return n
}

func plainNode(text string) *yaml.Node { return &yaml.Node{Kind: yaml.ScalarNode, Value: text} }

func encode(n *yaml.Node) ([]byte, error) {
	var out bytes.Buffer
	e := yaml.NewEncoder(&out)
	e.SetIndent(2)
	if err := e.Encode(n); err != nil {
		return nil, err
	}
	return out.Bytes(), e.Close()
}
