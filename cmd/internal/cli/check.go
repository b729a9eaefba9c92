package cli

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"axisfold/cmd/internal/run"
	"axisfold/configs"
)

func newCheck() *cobra.Command {
	var o run.Options
	c := &cobra.Command{
		Use:   "check RUNFILE",
		Short: "Check a run file against its table without computing, and print every setting",
		Long: `Check all that can be checked without computing: the run file, the heads of the
table's files, the roles of the columns, whether the run folder may be written, and in
the first rows what would stop the run or spoil its result. Prints every setting with
its default.
` + exitHelp,
		Example: `  axisfold check configs/pump-hall.yaml`,
		Args:    oneArg("a run file"),
		RunE: func(c *cobra.Command, args []string) error {
			cfg, err := configs.Load(args[0], o.Set)
			if err != nil {
				return err
			}
			p, err := run.Look(c.Context(), cfg, o)
			if err != nil {
				return err
			}
			writePreview(c.OutOrStdout(), args[0], p, cfg.Settings())
			return nil
		},
	}
	c.Flags().StringVar(&o.Out, "out", "", "check this run folder, in place of write.folder")
	c.Flags().BoolVar(&o.Replace, "replace", false, "as for run")
	c.Flags().StringArrayVar(&o.Set, "set", nil, "override a setting of the run file, `section.key=value`; may be repeated")
	return c
}

func writePreview(out io.Writer, runFile string, p *run.Preview, settings []configs.Setting) {
	switch len(p.Minds) {
	case 0:
		fmt.Fprintf(out, "%s is in order.\n\n", runFile)
	case 1:
		fmt.Fprintf(out, "%s is in order, but mind one thing in the rows.\n\n", runFile)
	default:
		fmt.Fprintf(out, "%s is in order, but mind %d things in the rows.\n\n", runFile, len(p.Minds))
	}
	for _, m := range p.Minds {
		fmt.Fprintf(out, "mind       %s\n", m)
	}
	for _, f := range p.Files {
		fmt.Fprintf(out, "table      %s\n", shown(f))
	}
	looked := "first "
	if p.Whole {
		looked = ""
	}
	fmt.Fprintf(out, "rows       %s%d, %d of them complete\n", looked, p.Rows, p.Complete)
	fmt.Fprintf(out, "channels   %d: %s\n", len(p.Channels), listed(p.Channels))
	if len(p.Responses) > 0 {
		fmt.Fprintf(out, "responses  %d: %s\n", len(p.Responses), listed(p.Responses))
	}
	for _, n := range p.Notes {
		fmt.Fprintf(out, "note       %s: %s\n", n.Column, n.Text)
	}
	what := "new"
	if p.Replaces {
		what = "replaces an earlier run"
	}
	fmt.Fprintf(out, "folder     %s (%s)\n\n", shown(p.Folder), what)
	fmt.Fprintln(out, "settings (* named in the run file or with --set; the rest are defaults)")
	path, value := 0, 0
	for _, s := range settings {
		path = max(path, len(s.Path))
		value = max(value, min(len(s.Value), 30))
	}
	for _, s := range settings {
		mark := "*"
		if s.Default {
			mark = " "
		}
		fmt.Fprintf(out, "%s %-*s  %-*s  %s\n", mark, path, s.Path, value, s.Value, s.Doc)
	}
}

// listed joins names, the first and last few of many.
func listed(names []string) string {
	if len(names) > 12 {
		names = append(append([]string(nil), names[:8]...), append([]string{"..."}, names[len(names)-3:]...)...)
	}
	return strings.Join(names, ", ")
}
