package cli

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	reports "axisfold/cmd/internal/report"
	"axisfold/configs"
	"axisfold/pca/survey"
	"axisfold/pca/table"
)

func newDraft() *cobra.Command {
	var l looking
	var out string
	var d reports.Draft
	var replace bool
	c := &cobra.Command{
		Use:   "draft TABLE...",
		Short: "Print a commented run file that fits a table",
		Long: `Look at a table as survey does and print a run file with what was found turned into
settings: how the table is written, missing codes, columns of time and groups, channels to
leave out and why, transforms, the rule for the number of components. It passes check and
run does it as it stands. Paths in it are relative to the current folder, or to that of
the file given with --out.
` + exitHelp,
		Example: `  axisfold draft flows.csv > study.yaml
  axisfold draft flows.csv --response head_loss --out studies/loss.yaml`,
		Args: someTables,
		RunE: func(c *cobra.Command, args []string) error {
			if d.Watch && !stageExists("watch") {
				return usageError{c.CommandPath(), "--watch: run files have no watch section in this version"}
			}
			cfg, err := l.settings(c, "draft", args)
			if err != nil {
				return err
			}
			v, err := l.look(c.Context(), c, cfg)
			if err != nil {
				return err
			}
			if err := checkResponses(v, d.Response); err != nil {
				return err
			}
			place := filepath.Dir(out)
			if d.Files, err = relativeTo(place, args); err != nil {
				return err
			}
			d.Given, d.Groups, d.LeaveOut = givenSettings(cfg), cfg.Read.Groups, cfg.Read.LeaveOut
			var text bytes.Buffer
			if err := reports.WriteDraft(v, &d, &text); err != nil {
				return err
			}
			if _, err := configs.Parse(filepath.Join(place, "draft"), text.Bytes(), nil); err != nil {
				return fmt.Errorf("the drafted run file is not in order: %w", errors.Join(err))
			}
			if out == "" {
				_, err = c.OutOrStdout().Write(text.Bytes())
				return err
			}
			if err := writeNew(out, text.Bytes(), replace); err != nil {
				return err
			}
			fmt.Fprintf(c.ErrOrStderr(), "written to %s\n", out)
			return nil
		},
	}
	l.register(c.Flags())
	f := c.Flags()
	f.StringArrayVar(&d.Response, "response", nil, "add a regression of this column; may be repeated")
	f.BoolVar(&d.Watch, "watch", false, "add the limits for new rows")
	f.StringVar(&out, "out", "", "write the run file here, in place of standard output")
	f.BoolVar(&replace, "replace", false, "replace the file given with --out")
	return c
}

// stageExists tells whether run files know the section.
func stageExists(name string) bool {
	return slices.ContainsFunc(configs.Keys(), func(k configs.Key) bool { return k.Name == name })
}

// checkResponses asks that each is a column of numbers that varies.
func checkResponses(v *survey.Survey, responses []string) error {
	var names []string
	for _, c := range v.Channels {
		names = append(names, c.Name)
	}
	for _, r := range responses {
		j := slices.Index(names, r)
		if j < 0 {
			return table.UnknownColumn("--response", r, names)
		}
		if t := v.Channels[j].Type; t == "constant" || t == "empty" {
			return &table.Error{Kind: table.BadContent, Problem: fmt.Sprintf("--response: %q is %s; a response has to vary", r, t)}
		}
	}
	return nil
}

// relativeTo turns paths given from here into paths from another folder; absolute ones
// stay.
func relativeTo(place string, paths []string) ([]string, error) {
	base, err := filepath.Abs(place)
	if err != nil {
		return nil, err
	}
	var out []string
	for _, p := range paths {
		if !filepath.IsAbs(p) {
			full, err := filepath.Abs(p)
			if err != nil {
				return nil, err
			}
			if p, err = filepath.Rel(base, full); err != nil {
				return nil, err
			}
		}
		out = append(out, filepath.ToSlash(p))
	}
	return out, nil
}

// foundOut are the settings that a draft writes by itself.
var foundOut = []string{"files", "decimal", "header", "units_row", "missing", "time", "groups", "leave_out"}

// givenSettings are the other settings of the read section that were asked for.
func givenSettings(cfg *configs.File) []string {
	var out []string
	for _, s := range cfg.Settings() {
		key, ok := strings.CutPrefix(s.Path, "read.")
		if ok && !s.Default && !slices.Contains(foundOut, key) {
			out = append(out, key+": "+s.Value)
		}
	}
	return out
}

// writeNew writes a file that must not be there yet.
func writeNew(path string, text []byte, replace bool) error {
	flag := os.O_WRONLY | os.O_CREATE | os.O_EXCL
	if replace {
		flag = os.O_WRONLY | os.O_CREATE | os.O_TRUNC
	}
	f, err := os.OpenFile(path, flag, 0o666)
	if errors.Is(err, fs.ErrExist) {
		return usageError{"axisfold draft", path + ": exists; --replace replaces it"}
	}
	if err != nil {
		return err
	}
	if _, err := f.Write(text); err != nil {
		f.Close()
		return err
	}
	return f.Close()
}
