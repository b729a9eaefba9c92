package cli

import (
	"github.com/spf13/cobra"

	reports "axisfold/cmd/internal/report"
)

func newSurvey() *cobra.Command {
	var l looking
	var asJSON bool
	c := &cobra.Command{
		Use:   "survey TABLE...",
		Short: "Look at a table before any analysis: what its channels are and what is wrong with them",
		Long: `Go through a table of any size twice, in memory that does not grow with its rows, and say
what its channels are and what would spoil an analysis, the worst first: missing codes,
gaps, constants, copies, sensors that stood still, spikes, limits, counters, categories,
skewness, rows that follow one another, times out of order, changes of level. Each
finding says what to write in the run file. Several tables with the same columns are one.

A decimal comma, a header that is not there, a row of units and columns of times are
found out; the flags, named like the keys of the run file, say it where that fails.
Problems of the table are what the command is for: the exit status is 0.
` + exitHelp,
		Example: `  axisfold survey flows.csv
  axisfold survey spring/*.csv --time stamp --missing -999 --json`,
		Args: someTables,
		RunE: func(c *cobra.Command, args []string) error {
			cfg, err := l.settings(c, "survey", args)
			if err != nil {
				return err
			}
			v, err := l.look(c.Context(), c, cfg)
			if err != nil {
				return err
			}
			if asJSON {
				return reports.WriteSurveyJSON(v, c.OutOrStdout())
			}
			return reports.WriteSurvey(v, c.OutOrStdout())
		},
	}
	l.register(c.Flags())
	c.Flags().BoolVar(&asJSON, "json", false, "print the same facts for a machine")
	return c
}
