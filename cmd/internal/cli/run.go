package cli

import (
	"fmt"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	reports "axisfold/cmd/internal/report"
	"axisfold/cmd/internal/run"
)

func newRun() *cobra.Command {
	var o run.Options
	var asJSON, quiet bool
	var budgetText string
	var channels budget
	c := &cobra.Command{
		Use:   "run RUNFILE",
		Short: "Do the whole study that a run file describes and write its run folder",
		Long: `Read the table, standardize, decompose, decide how many components to keep, fit the
regression if the run file has one, draw and write. The summary goes to standard output
and, with everything else, into the run folder, which is complete or absent.

A folder left by an earlier run of the same run file is replaced. Another run's folder
is replaced only with --replace; a folder that is not a run folder never.
` + exitHelp,
		Example: `  axisfold run configs/pump-hall.yaml
  axisfold run study.yaml --out runs/three --set retain.rule=fixed --set retain.components=3`,
		Args: oneArg("a run file"),
		RunE: func(c *cobra.Command, args []string) error {
			cfg, err := channels.load(args[0], &o)
			if err != nil {
				return err
			}
			o.Version = version()
			study, folder, err := run.Execute(c.Context(), cfg, o)
			if err != nil {
				return err
			}
			switch {
			case asJSON:
				err = reports.WriteResults(study, c.OutOrStdout())
			case !quiet:
				err = reports.WriteSummary(study, c.OutOrStdout())
			}
			if err != nil {
				return err
			}
			fmt.Fprintf(c.ErrOrStderr(), "\nwritten to %s\n", shown(folder))
			return nil
		},
	}
	f := c.Flags()
	f.StringVar(&o.Out, "out", "", "write the run folder here, in place of write.folder")
	f.BoolVar(&o.Replace, "replace", false, "replace a folder that another run file wrote")
	f.StringArrayVar(&o.Set, "set", nil, "override a setting of the run file, `section.key=value`; may be repeated")
	f.StringVar(&budgetText, "budget", "", "keep so many channels (`N`), or compare from A to B (A..B), as reduce does")
	f.IntVar(&o.Threads, "threads", 0, "how many cores to use (0: all); results do not depend on it")
	f.BoolVar(&asJSON, "json", false, "print results.json in place of the summary")
	f.BoolVar(&quiet, "quiet", false, "print no summary")
	c.PreRunE = func(c *cobra.Command, _ []string) error {
		if o.Threads < 0 || o.Threads > 1024 {
			return usageError{c.CommandPath(), fmt.Sprintf("--threads %d: expected 0 to 1024", o.Threads)}
		}
		if budgetText != "" {
			var ok bool
			if channels, ok = parseBudget(budgetText); !ok {
				return usageError{c.CommandPath(), fmt.Sprintf("--budget %s: expected a number of channels, such as 8, or a range, such as 4..12", budgetText)}
			}
		}
		return nil
	}
	return c
}

// shown is a path as the user would type it from here.
func shown(path string) string {
	here, err := os.Getwd()
	if err != nil || !filepath.IsAbs(path) {
		return path
	}
	if rel, err := filepath.Rel(here, path); err == nil && len(rel) < len(path) {
		return rel
	}
	return path
}

// oneArg asks for exactly one argument and says what it is.
func oneArg(what string) cobra.PositionalArgs {
	return func(c *cobra.Command, args []string) error {
		if len(args) == 1 {
			return nil
		}
		return usageError{c.CommandPath(), fmt.Sprintf("expected %s, found %d arguments", what, len(args))}
	}
}
