package table

import (
	"context"
	"fmt"
	"path"
	"path/filepath"
	"slices"
	"strings"
)

// Options say which files to read and how.
type Options struct {
	Dir   string   // relative paths and globs in Files are relative to it
	Files []string // paths or globs; several files are one table
	// Format is the name of a format; empty takes it from the file's first bytes and name.
	Format       string
	Separator    string // one byte, a blank for runs of blanks; empty looks at the first lines
	DecimalComma bool
	Comment      string   // lines that start with it are passed over; empty: none
	Missing      []string // cells that mean missing; those that are numbers go by value
	NoHeader     bool     // columns are then named column_1, ...
	UnitsRow     bool     // the row after the header holds units
	Time, Groups string   // columns carried through as text; empty: none
	LeaveOut     []string // names and glob patterns
	Sheet        string   // of spreadsheets; empty: the only one that holds anything
	Query        string   // of databases; SQLite takes its only table when empty
	// Connection is the name of the environment variable that holds the connection string
	// of a server; empty: the variables that its client programs use.
	Connection string
	// Encoding of text, one of Encodings; empty: looked up, with a note where it is a guess.
	Encoding string
	// ChannelsInRows tells that text is stored transposed: a line holds a channel, its name
	// first unless NoHeader. The text is then held in memory, up to 1 GiB of it.
	ChannelsInRows bool
	// Header of text is auto, which looks whether the first row holds names, or double, for
	// names in two rows; empty: one row, unless NoHeader.
	Header string
	// ShortRows takes the ends that rows of text lack as missing.
	ShortRows bool
	// Thousands is the mark between groups of three digits: comma, point, space, apostrophe;
	// empty: none.
	Thousands string
}

// Table is an opened table.
type Table struct {
	options Options
	files   []string
	before  []fingerprint
	parts   []part
	layouts []*layout
	columns []Column
	notes   []Note
	blank   int64
	short   int64
	starts  []int64 // first data row of every block, once counted
	remarks map[remark]int64
	late    []Note // known at the end of a pass
	digest  []byte // of all values, where they may change between passes
}

// Open finds the files, reads the head of each and decides what every column is.
func Open(ctx context.Context, o Options) (*Table, error) {
	return openWith(ctx, o, openFile, chunkBytes)
}

func openWith(ctx context.Context, o Options, open opener, pieces int) (*Table, error) {
	if err := checkSeparator(&o); err != nil {
		return nil, err
	}
	if err := checkThousands(&o); err != nil {
		return nil, err
	}
	t := &Table{options: o}
	s := &setting{options: &t.options, open: open, pieces: pieces}
	if f := named(o.Format); f != nil && f.server {
		if err := f.fits(&t.options, f.name); err != nil {
			return nil, err
		}
		p, err := f.open(ctx, s, "")
		if err != nil {
			return nil, err
		}
		return t, t.add(p)
	}
	files, err := expand(o.Dir, o.Files)
	if err != nil {
		return nil, err
	}
	t.files = files
	for _, file := range files {
		print, err := fingerprintOf(file)
		if err != nil {
			return nil, err
		}
		t.before = append(t.before, print)
		f, err := formatOf(s, file)
		if err != nil {
			return nil, err
		}
		if err := f.fits(&t.options, file); err != nil {
			return nil, err
		}
		p, err := f.open(ctx, s, file)
		if err != nil {
			return nil, err
		}
		if err := t.add(p); err != nil {
			return nil, err
		}
	}
	return t, nil
}

// add takes a part into the table: the first says what the columns are.
func (t *Table) add(p part) error {
	t.parts = append(t.parts, p)
	t.notes = append(t.notes, p.head().notes...)
	if len(t.parts) == 1 {
		return t.assign(p.head())
	}
	return t.align(p.head())
}

// checkSeparator refuses separators that could be part of a number or of the quoting.
func checkSeparator(o *Options) error {
	if o.Separator == "" || o.Separator == " " {
		return nil
	}
	if len(o.Separator) > 1 || strings.Contains("\"\r\n +-.eE0123456789", o.Separator) || o.Separator >= "\x80" {
		return &Error{Kind: WrongInput, Problem: fmt.Sprintf("separator %q cannot stand between numbers; expected one character, such as , ; | or a tab", o.Separator)}
	}
	if o.DecimalComma && o.Separator == "," {
		return &Error{Kind: WrongInput, Problem: `separator "," is the decimal comma too`, Hint: "such tables usually have ; between cells"}
	}
	return nil
}

// Files are the paths of the files read, in order; none for a server.
func (t *Table) Files() []string { return t.files }

// Costly tells whether going through the rows once more takes much longer than reading as
// many bytes: for all but plain text, which is read as fast as a file of numbers.
func (t *Table) Costly() bool {
	for _, p := range t.parts {
		if d, ok := p.(*delimited); !ok || d.compressed || d.h.form.turned {
			return true
		}
	}
	return false
}

// Columns are the numeric channels.
func (t *Table) Columns() []Column { return t.columns }

// Notes say what was left out and passed over; complete once the rows were gone through.
func (t *Table) Notes() []Note {
	notes := slices.Clone(t.notes)
	for j, c := range t.columns {
		for _, kind := range remarkKinds {
			if n := t.remarks[remark{j, kind}]; n > 0 {
				notes = append(notes, Note{c.Name, fmt.Sprintf("%d %s", n, kind)})
			}
		}
	}
	notes = append(notes, t.late...)
	if t.short > 0 {
		notes = append(notes, Note{Text: fmt.Sprintf("rows that end before the last column: %d; what they lack is missing", t.short)})
	}
	if t.blank == 0 {
		return notes
	}
	text := fmt.Sprintf("%d empty rows were passed over", t.blank)
	if t.blank == 1 {
		text = "1 empty row was passed over"
	}
	return append(notes, Note{Text: text})
}

// Digest identifies the values of a table that no file holds: the SHA-256 of digests of its
// stretches, known once the rows were gone through. It is nil for tables of files.
func (t *Table) Digest() []byte {
	if len(t.files) > 0 {
		return nil
	}
	return t.digest
}

// Unordered tells that nothing says in which order the rows come, so that the same table
// may give them in another one another day.
func (t *Table) Unordered() bool {
	return slices.ContainsFunc(t.parts, func(p part) bool { return p.head().unordered })
}

// assign decides what the columns of the first file are.
func (t *Table) assign(h *head) error {
	o := &t.options
	for _, special := range []string{o.Time, o.Groups} {
		if special != "" && !slices.Contains(h.names, special) {
			return &Error{Kind: WrongInput, File: h.file, Problem: fmt.Sprintf("has no column %q", special), Hint: nearest(special, h.names)}
		}
	}
	out := make([]bool, len(h.names))
	for _, pattern := range o.LeaveOut {
		hit := false
		for j, n := range h.names {
			matched, err := path.Match(pattern, n)
			if n == pattern || err == nil && matched {
				out[j], hit = true, true
			}
		}
		if !hit {
			return &Error{Kind: WrongInput, File: h.file, Problem: fmt.Sprintf("read.leave_out: no column matches %q", pattern), Hint: nearest(pattern, h.names)}
		}
	}
	l := &layout{dialect: h.dialect, uses: make([]use, len(h.names)), to: make([]int, len(h.names)), names: h.names}
	for j, n := range h.names {
		s := &h.sample[j]
		switch {
		case n == o.Time && n == o.Groups:
			l.uses[j] = timeAndGroupText
		case n == o.Time && n != "":
			l.uses[j] = timeText
		case n == o.Groups && n != "":
			l.uses[j] = groupText
		case out[j]:
			t.notes = append(t.notes, Note{n, "left out: asked for"})
		case h.labels && j == 0:
			t.notes = append(t.notes, Note{n, "left out: labels of rows, as the header names one column fewer"})
		case h.unnamed[j] && s.filled == 0:
			t.notes = append(t.notes, Note{n, "left out: no name and no values"})
		case s.isText():
			t.notes = append(t.notes, Note{n, s.note()})
		default:
			if h.unnamed[j] {
				t.notes = append(t.notes, Note{n, "has no name in the header"})
			}
			if s.truths > 0 {
				t.notes = append(t.notes, Note{n, "true and false are read as 1 and 0"})
			}
			l.uses[j], l.to[j] = number, len(t.columns)
			t.columns = append(t.columns, Column{Name: n, Unit: h.units[j], Position: j + 1})
		}
	}
	if len(t.columns) == 0 {
		e := &Error{Kind: BadContent, File: h.file, Problem: "holds no column of numbers"}
		if len(h.names) == 1 {
			e.Hint = fmt.Sprintf("its one column is %q: is read.separator right?", h.names[0])
		}
		return e
	}
	t.layouts = append(t.layouts, l)
	return nil
}

// align finds the columns of the first file in another.
func (t *Table) align(h *head) error {
	first := t.layouts[0]
	l := &layout{dialect: h.dialect, uses: make([]use, len(h.names)), to: make([]int, len(h.names)), names: h.names}
	for j, n := range h.names {
		at := slices.Index(first.names, n)
		if at < 0 {
			return &Error{Kind: BadContent, File: h.file, Column: j + 1, Name: n,
				Problem: fmt.Sprintf("is not a column of %s", filepath.Base(t.parts[0].head().file)), Hint: "files of one table have the same columns"}
		}
		l.uses[j], l.to[j] = first.uses[at], first.to[at]
	}
	for _, n := range first.names {
		if !slices.Contains(h.names, n) {
			return &Error{Kind: BadContent, File: h.file, Problem: fmt.Sprintf("has no column %q, which %s has", n, filepath.Base(t.parts[0].head().file)),
				Hint: "files of one table have the same columns"}
		}
	}
	t.layouts = append(t.layouts, l)
	return nil
}

// UnknownColumn is the error for a column that a setting names and the table lacks among
// its columns of numbers.
func UnknownColumn(setting, name string, names []string) error {
	return &Error{Kind: WrongInput, Problem: fmt.Sprintf("%s: no column of numbers matches %q", setting, name), Hint: nearest(name, names)}
}

// nearest words the name most like the one asked for.
func nearest(name string, names []string) string {
	best, distance := "", len(name)/2+1
	for _, n := range names {
		if d := editDistance(strings.ToLower(name), strings.ToLower(n)); d < distance {
			best, distance = n, d
		}
	}
	if best != "" {
		return fmt.Sprintf("the nearest column is %q", best)
	}
	if len(names) > 12 {
		return fmt.Sprintf("the columns are %s, ... (%d in all)", strings.Join(names[:12], ", "), len(names))
	}
	return "the columns are " + strings.Join(names, ", ")
}

// editDistance is Levenshtein's.
func editDistance(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			cost := diagonal
			if a[i] != b[j] {
				cost++
			}
			diagonal = row[j+1]
			row[j+1] = min(cost, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}
