package cli

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	reports "axisfold/cmd/internal/report"
	"axisfold/pca/survey"
	"axisfold/plots"
)

func newSurvey() *cobra.Command {
	var l looking
	var asJSON bool
	var picture string
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
  axisfold survey spring/*.csv --time stamp --missing -999 --json
  axisfold survey flows.csv --picture flows.png`,
		Args: someTables,
		RunE: func(c *cobra.Command, args []string) error {
			if format := pictureFormat(picture); picture != "" && !slices.Contains(plots.Formats, format) {
				return usageError{c.CommandPath(), fmt.Sprintf("--picture %s: expected a name that ends in .%s", picture, strings.Join(plots.Formats, ", ."))}
			}
			cfg, err := l.settings(c, "survey", args)
			if err != nil {
				return err
			}
			v, err := l.look(c.Context(), c, cfg)
			if err != nil {
				return err
			}
			if picture != "" {
				if err := drawSurvey(v, picture); err != nil {
					return err
				}
				defer fmt.Fprintf(c.ErrOrStderr(), "drawn to %s\n", picture)
			}
			if asJSON {
				return reports.WriteSurveyJSON(v, c.OutOrStdout())
			}
			return reports.WriteSurvey(v, c.OutOrStdout())
		},
	}
	l.register(c.Flags())
	c.Flags().BoolVar(&asJSON, "json", false, "print the same facts for a machine")
	c.Flags().StringVar(&picture, "picture", "", "draw level and gaps of every channel over the rows into this `file` (.svg, .png or .pdf)")
	return c
}

func pictureFormat(file string) string {
	return strings.TrimPrefix(strings.ToLower(filepath.Ext(file)), ".")
}

func drawSurvey(v *survey.Survey, file string) error {
	var drawn bytes.Buffer
	title := ""
	if len(v.Files) > 0 {
		title = filepath.Base(v.Files[0])
	}
	if err := plots.DrawSurvey(v, title, pictureFormat(file), &drawn); err != nil {
		return err
	}
	return os.WriteFile(file, drawn.Bytes(), 0o666)
}
