package cli

import (
	"context"
	"fmt"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
	"gopkg.in/yaml.v3"

	"axisfold/cmd/internal/run"
	"axisfold/configs"
	"axisfold/pca/survey"
)

// looking holds the flags that survey and draft share: how to read the table, named like
// the keys of the run file's read section.
type looking struct {
	keys    []*string // values by readFlags
	missing []string
	leave   []string
	set     []string
	threads int
}

var readFlags = []struct{ flag, key, usage string }{
	{"format", "format", "of the files"},
	{"separator", "separator", "between cells: comma, semicolon, tab, bar or one character"},
	{"decimal", "decimal", "decimal sign: point or comma"},
	{"comment", "comment", "lines that begin with it are passed over"},
	{"header", "header", "true: the first row holds names; false: it does not"},
	{"units-row", "units_row", "true: the row after the names holds units"},
	{"time", "time", "column of times"},
	{"groups", "groups", "column of groups"},
}

func (l *looking) register(f *pflag.FlagSet) {
	l.keys = make([]*string, len(readFlags))
	for i, r := range readFlags {
		l.keys[i] = f.String(r.flag, "", "read."+r.key+": "+r.usage)
	}
	f.StringArrayVar(&l.missing, "missing", nil, "read.missing: one more cell that means a missing value; may be repeated")
	f.StringArrayVar(&l.leave, "leave-out", nil, "read.leave_out: one more column, or a glob; may be repeated")
	f.StringArrayVar(&l.set, "set", nil, "any other setting of the read section, `read.key=value`; may be repeated")
	f.IntVar(&l.threads, "threads", 0, "how many cores to use (0: all); results do not depend on it")
}

// someTables asks for at least one table.
func someTables(c *cobra.Command, args []string) error {
	if len(args) == 0 {
		return usageError{c.CommandPath(), "expected a table, found no argument"}
	}
	return nil
}

// settings are the flags as a run file that says nothing else. place is where the run file
// would lie: paths in it are relative to it.
func (l *looking) settings(c *cobra.Command, place string, tables []string) (*configs.File, error) {
	if l.threads < 0 || l.threads > 1024 {
		return nil, usageError{c.CommandPath(), fmt.Sprintf("--threads %d: expected 0 to 1024", l.threads)}
	}
	for _, s := range l.set {
		if !strings.HasPrefix(s, "read.") {
			return nil, usageError{c.CommandPath(), fmt.Sprintf("--set %s: expected a setting of the read section, read.key=value", s)}
		}
	}
	read := map[string]any{"files": tables}
	var sets []string
	for i, r := range readFlags {
		if c.Flags().Changed(r.flag) {
			sets = append(sets, "read."+r.key+"="+flow(*l.keys[i], r.flag == "header" || r.flag == "units-row"))
		}
	}
	if len(l.missing) > 0 {
		read["missing"] = append(defaultMissing(), l.missing...)
	}
	if len(l.leave) > 0 {
		read["leave_out"] = l.leave
	}
	text, err := yaml.Marshal(map[string]any{"axisfold": 1, "read": read})
	if err != nil {
		return nil, err
	}
	return configs.Parse(place, text, append(sets, l.set...))
}

// flow is a flag's text as a value of a run file: a word as it stands, other text quoted.
func flow(text string, word bool) string {
	if word {
		return text
	}
	out, err := yaml.Marshal(text)
	if err != nil {
		return text
	}
	return strings.TrimSpace(string(out))
}

// defaultMissing are the cells that mean missing when a run file says nothing.
func defaultMissing() []string {
	cfg, err := configs.Parse("", []byte("axisfold: 1\nread: {files: [x]}\n"), nil)
	if err != nil {
		return nil
	}
	return cfg.Read.Missing
}

// look surveys the tables.
func (l *looking) look(ctx context.Context, c *cobra.Command, cfg *configs.File) (*survey.Survey, error) {
	changed := c.Flags().Changed
	given := survey.Given{Decimal: changed("decimal"), Header: changed("header"), UnitsRow: changed("units-row"), Time: changed("time")}
	for _, s := range l.set {
		given.Decimal = given.Decimal || strings.HasPrefix(s, "read.decimal=")
		given.Header = given.Header || strings.HasPrefix(s, "read.header=")
		given.UnitsRow = given.UnitsRow || strings.HasPrefix(s, "read.units_row=")
		given.Orientation = given.Orientation || strings.HasPrefix(s, "read.orientation=")
		given.Time = given.Time || strings.HasPrefix(s, "read.time=")
	}
	source, err := survey.Open(ctx, run.ReadOptions(cfg), given)
	if err != nil {
		return nil, err
	}
	return survey.Look(ctx, source, l.threads)
}
