package configs

import (
	"strings"

	"gopkg.in/yaml.v3"
)

// characters have words because they are hard to see or to quote.
var characters = []struct{ word, text string }{{"comma", ","}, {"semicolon", ";"}, {"tab", "\t"}, {"bar", "|"}, {"blanks", " "}}

// parseCharacter reads a word for a character or the character itself: one byte that
// neither ends a line nor belongs to a number, a name or quotes.
func parseCharacter(n *yaml.Node) (v any, expected, hint string) {
	const words = "comma, semicolon, tab, bar, blanks, or one character in quotes"
	if n.Kind != yaml.ScalarNode || isNull(n) {
		return nil, words, ""
	}
	for _, c := range characters {
		if n.Value == c.word || n.Value == c.text {
			return c.text, "", ""
		}
	}
	if len(n.Value) == 1 && strings.Contains(" !#$%&'()*/:<=>?@[\\]^_`{}~", n.Value) {
		return n.Value, "", ""
	}
	return nil, words, ""
}

// characterWord is the word for a character, or the character where it has none.
func characterWord(text string) string {
	for _, c := range characters {
		if text == c.text {
			return c.word
		}
	}
	return text
}
