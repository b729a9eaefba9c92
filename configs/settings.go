package configs

import (
	"bytes"
	"reflect"

	"gopkg.in/yaml.v3"
)

// Setting is one setting of a run file.
type Setting struct {
	Path    string
	Value   string // as in a run file, on one line
	Default bool   // neither the file nor an override names it
	Doc     string
}

// Settings lists every setting of the stages that run, in the order of [Keys].
func (f *File) Settings() []Setting {
	return f.settings(nil, "", sections, reflect.ValueOf(f).Elem())
}

func (f *File) settings(list []Setting, path string, keys []Key, from reflect.Value) []Setting {
	for i := range keys {
		k := &keys[i]
		p, v := join(path, k.Name), field(from, k.Name)
		switch k.Kind {
		case Section, Choice:
			list = f.settings(list, p, k.inner(v), reflect.Indirect(v))
		default:
			list = append(list, Setting{p, oneLine(k.node(v)), !f.given[p], k.Doc})
		}
	}
	return list
}

// oneLine writes a value as it may stand behind its key. What was loaded is valid text,
// so that writing it cannot fail.
func oneLine(n *yaml.Node) string {
	if n.Kind == yaml.MappingNode {
		n.Style = yaml.FlowStyle
	}
	text, err := encode(n)
	if err != nil {
		panic("configs: " + err.Error())
	}
	return string(bytes.TrimSpace(text))
}
