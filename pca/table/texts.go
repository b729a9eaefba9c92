package table

// mostWords bounds the different texts of a column that are counted.
const mostWords = 1000

// word counts a text.
func (s *sampleColumn) word(text string) {
	if s.words == nil {
		s.words = map[string]int{}
	}
	if _, known := s.words[text]; known || len(s.words) < mostWords {
		s.words[text]++
	}
}

// TextColumn is what the first rows tell of a column that is not one of numbers.
type TextColumn struct {
	Name     string
	Position int // in the file, from 1
	// Filled is the number of cells that hold anything, Numbers of those that hold a number,
	// among the rows looked at.
	Filled, Numbers int
	// Words counts the different texts, up to a thousand of them.
	Words    map[string]int
	Examples []string // the first three
	Times    bool     // the table says that they are moments; RFC 3339 then
}

// Texts lists the columns of the first file that are not columns of numbers, those used for
// time and groups among them.
func (t *Table) Texts() []TextColumn {
	h, l := t.parts[0].head(), t.layouts[0]
	var out []TextColumn
	for j, n := range h.names {
		if s := &h.sample[j]; l.uses[j] != number && s.filled > 0 {
			out = append(out, TextColumn{n, j + 1, s.filled, s.numbers, s.words, s.examples, s.declared == "times" || 2*s.times > s.filled})
		}
	}
	return out
}
