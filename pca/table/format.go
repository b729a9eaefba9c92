package table

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"path/filepath"
	"slices"
	"strings"
)

// format is a family of tables. A new one is a file with its open function and one line
// in formats.
type format struct {
	name       string
	extensions []string
	// takes lists the settings, beside those of every table, that mean something here.
	takes string
	// magic is how every file of the format begins; nil where anything may stand there.
	magic []byte
	// server formats read no file.
	server bool
	open   func(ctx context.Context, s *setting, file string) (part, error)
}

// formats lists what can be read, the default first.
var formats = []format{
	{"csv", []string{".csv", ".txt", ".dat"}, textSettings, nil, false, openDelimited(0)},
	{"tsv", []string{".tsv", ".tab"}, textSettings, nil, false, openDelimited('\t')},
	{"parquet", []string{".parquet", ".pq"}, "", parquetMagic, false, openParquet},
	{"xlsx", []string{".xlsx", ".xlsm", ".xls"}, "sheet header units_row decimal thousands", zipMagic, false, openSpreadsheet},
	{"sqlite", []string{".sqlite", ".sqlite3", ".db"}, "query decimal thousands", sqliteMagic, false, openSQLite},
	{"postgres", nil, "query connection", nil, true, openPostgres},
}

const textSettings = "encoding orientation separator decimal thousands comment header units_row short_rows"

// fits refuses settings that mean nothing to the format.
func (f *format) fits(o *Options, file string) error {
	for _, s := range []struct {
		key   string
		given bool
	}{{"separator", o.Separator != ""}, {"decimal", o.DecimalComma}, {"comment", o.Comment != ""}, {"header", o.NoHeader}, {"units_row", o.UnitsRow},
		{"sheet", o.Sheet != ""}, {"query", o.Query != ""}, {"connection", o.Connection != ""}, {"encoding", o.Encoding != ""}, {"orientation", o.ChannelsInRows}, {"thousands", o.Thousands != ""}, {"short_rows", o.ShortRows}} {
		if s.given && !slices.Contains(strings.Fields(f.takes), s.key) {
			return &Error{Kind: WrongInput, File: file, Problem: fmt.Sprintf("read.%s means nothing to the format %s", s.key, f.name)}
		}
	}
	if o.Header != "" && !slices.Contains(strings.Fields(f.takes), "short_rows") {
		return &Error{Kind: WrongInput, File: file, Problem: fmt.Sprintf("read.header: %s is for text, not for the format %s", o.Header, f.name)}
	}
	return nil
}

// setting is what formats are told.
type setting struct {
	options *Options
	open    opener
	pieces  int // size of a piece of text
}

// part is one file of a table, or what stands for one, opened by its format. A format
// gives names, units and samples of the columns, and the rows in pieces; what columns
// are used for, missing codes and gaps are the same for all.
type part interface {
	head() *head
	// start begins a pass over the rows; the layout tells which columns are used.
	start(ctx context.Context, l *layout) (pieces, error)
}

// pieces is a pass over the rows of a part.
type pieces interface {
	// next fills b with the next piece, as raw as it comes: it is called by one goroutine,
	// and where a piece ends must depend on the table alone. io.EOF ends the pass.
	next(b *Block) error
	// parse makes rows of a piece, on many goroutines.
	parse(p *parser, b *Block) error
	Close() error
}

// Formats returns the names of the formats.
func Formats() []string {
	var names []string
	for _, f := range formats {
		names = append(names, f.name)
	}
	return names
}

func named(name string) *format {
	for i := range formats {
		if formats[i].name == name {
			return &formats[i]
		}
	}
	return nil
}

// formatOf finds the format: the one asked for, or what the first bytes of the file say,
// or its extension under .gz and .zst.
func formatOf(s *setting, file string) (*format, error) {
	if name := s.options.Format; name != "" {
		if f := named(name); f != nil {
			return f, nil
		}
		return nil, &Error{Kind: WrongInput, Problem: fmt.Sprintf("unknown format %q; known: %s", name, strings.Join(Formats(), ", "))}
	}
	first, err := firstBytes(s.open, file)
	if err != nil {
		return nil, err
	}
	for i := range formats {
		if m := formats[i].magic; m != nil && bytes.HasPrefix(first, m) {
			return &formats[i], nil
		}
	}
	base := strings.ToLower(filepath.Base(file))
	base = strings.TrimSuffix(strings.TrimSuffix(base, ".gz"), ".zst")
	for i := range formats {
		for _, e := range formats[i].extensions {
			if filepath.Ext(base) == e {
				return &formats[i], nil
			}
		}
	}
	return &formats[0], nil
}

// firstBytes is how a file begins, as it is stored.
func firstBytes(open opener, file string) ([]byte, error) {
	if err := notFolder(file); err != nil {
		return nil, err
	}
	r, err := open(file)
	if err != nil {
		return nil, pathError(file, err)
	}
	defer r.Close()
	first := make([]byte, 16)
	n, err := io.ReadFull(r, first)
	if err != nil && err != io.EOF && err != io.ErrUnexpectedEOF {
		return nil, readError(file, err)
	}
	return first[:n], nil
}
