// Package cli is the command line: one file per command, messages and exit statuses.
//
// [Main] runs a command line and returns its exit status. Results go to standard output,
// everything else to standard error (see messages.go).
package cli

import (
	"context"
	"fmt"
	"io"
	"os/signal"
	"runtime/debug"
	"strings"
	"syscall"

	"github.com/spf13/cobra"
)

// exitHelp stands in every help text.
const exitHelp = `
Exit status:
  0    done
  1    unexpected
  2    the command line or the run file is wrong
  3    the data cannot carry what was asked
  130  interrupted; nothing was left behind
`

// Main runs the command line args and returns the exit status.
func Main(args []string, in io.Reader, out, errs io.Writer) int {
	ctx, stop := signal.NotifyContext(context.Background(), syscall.SIGINT, syscall.SIGTERM)
	defer stop()
	root := newRoot()
	root.SetArgs(args)
	root.SetIn(in)
	root.SetOut(out)
	root.SetErr(errs)
	err := root.ExecuteContext(ctx)
	if ctx.Err() != nil {
		err = interrupted{}
	}
	return report(errs, err)
}

func newRoot() *cobra.Command {
	root := &cobra.Command{
		Use:   "axisfold",
		Short: "Principal components of many numeric channels, and regression on them",
		Long: `Axisfold reads a table of many numeric channels, standardizes them, finds the
principal components, decides how many stand out, regresses responses on them in
original units, and writes everything into a run folder: tables, pictures, a model
and a manifest from which the run can be repeated.
` + exitHelp,
		SilenceErrors: true,
		SilenceUsage:  true,
		Version:       version(),
		Args:          knownCommand,
		RunE:          func(c *cobra.Command, _ []string) error { return c.Help() },
	}
	root.SetVersionTemplate("axisfold {{.Version}}\n")
	root.SetFlagErrorFunc(func(c *cobra.Command, err error) error { return usageError{c.CommandPath(), err.Error()} })
	root.CompletionOptions.HiddenDefaultCmd = true
	root.AddCommand(newSurvey(), newDraft(), newRun(), newCheck())
	return root
}

// version is that of the module as built.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok || info.Main.Version == "" {
		return "development"
	}
	return info.Main.Version
}

// knownCommand refuses words that are no command.
func knownCommand(c *cobra.Command, args []string) error {
	if len(args) == 0 {
		return nil
	}
	var names []string
	for _, sub := range c.Commands() {
		if sub.IsAvailableCommand() {
			names = append(names, sub.Name())
		}
	}
	return usageError{c.CommandPath(), fmt.Sprintf("unknown command %q; known: %s", args[0], strings.Join(names, ", "))}
}
