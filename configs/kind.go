package configs

// Kind is what a value looks like.
type Kind string

// The kinds.
const (
	Text      Kind = "text"
	Word      Kind = "word"         // one of Allowed
	Character Kind = "character"    // one character, or the word for it
	Switch    Kind = "switch"       // true or false
	Whole     Kind = "whole number" // plain decimal digits
	Number    Kind = "number"
	Names     Kind = "names" // a list of texts, or a single one
	Words     Kind = "words" // a list of words out of Allowed, or a single one
	Codes     Kind = "codes" // a list of values of any type, kept as written, or a single one
	Section   Kind = "section"
	Choice    Kind = "rule"     // a rule and its parameters in one mapping
	Channels  Kind = "channels" // a mapping from channels to settings
)

// Key describes a section or key of the run file.
type Key struct {
	Name string
	Kind Kind
	Doc  string // one line
	// Required keys have no default.
	Required bool
	// Named sections run only when they are named.
	Named bool
	// Filled refuses the empty text and the empty list.
	Filled bool
	// Default has the type of the field; nil is its zero value. The rule of a Choice.
	Default any
	// Blank is the word that stands for the zero value, where it has one.
	Blank   string
	Allowed []string
	Range   *Range
	Keys    []Key             // of Section, and of each channel of Channels
	Rules   []RuleDescription // of Choice

	// needed tells whether the key is required, where that depends on the rest of the file.
	needed func(*File) bool
	// follow works the default out from the rest of the file; Doc tells how.
	follow func(*File) any
}

// RuleDescription describes a rule for the number of components.
type RuleDescription struct {
	Name       string
	Doc        string
	Parameters []Key
}

// keys are the keys that a Choice has with this rule.
func (k *Key) keys(r *RuleDescription) []Key {
	word := Key{Name: "rule", Kind: Word, Default: k.Default, Doc: "how the number of components is decided"}
	for _, r := range k.Rules {
		word.Allowed = append(word.Allowed, r.Name)
	}
	return append([]Key{word}, r.Parameters...)
}

func (k *Key) rule(name string) *RuleDescription {
	for i := range k.Rules {
		if k.Rules[i].Name == name {
			return &k.Rules[i]
		}
	}
	return nil
}

// parameters are those of all rules of a Choice, each name once.
func (k *Key) parameters() []Key {
	var out []Key
	for _, r := range k.Rules {
		for _, p := range r.Parameters {
			if find(out, p.Name) == nil {
				out = append(out, p)
			}
		}
	}
	return out
}

func find(keys []Key, name string) *Key {
	for i := range keys {
		if keys[i].Name == name {
			return &keys[i]
		}
	}
	return nil
}

func namesOf(keys []Key) []string {
	names := make([]string, len(keys))
	for i, k := range keys {
		names[i] = k.Name
	}
	return names
}
