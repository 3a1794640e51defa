package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"strings"

	"github.com/spf13/cobra"

	"shearprint/field/study"
)

// Exit statuses.
const (
	done        = 0
	badInput    = 1 // a run that cannot be read, a file that cannot be written
	badUsage    = 2 // words of the command line that make no sense
	unbalanced  = 3 // done, but the ledger does not balance
	interrupted = 130
)

// usageError marks an error in the words of the command line.
type usageError struct{ error }

func usagef(format string, args ...any) error { return usageError{fmt.Errorf(format, args...)} }

// errUnbalanced asks for the exit status of a ledger that does not balance; the result itself tells why.
var errUnbalanced = errors.New("the ledger does not balance")

// app is what the commands share: where results and messages go.
type app struct {
	out, errOut io.Writer
	findings    []string // lines to be told when the command has succeeded
}

// run does what the words ask and returns the exit status. Results go to out, all else to errOut.
func run(ctx context.Context, args []string, out, errOut io.Writer) int {
	a := &app{out: out, errOut: errOut}
	root := a.root()
	root.SetArgs(args)
	root.SetOut(out)
	root.SetErr(errOut)
	return a.status(root.ExecuteContext(ctx))
}

// status prints the error as one line and returns the exit status that goes with it.
func (a *app) status(err error) int {
	var usage usageError
	var place *study.PlaceError
	var loop *study.LoopError
	var region *study.RegionError
	switch {
	case err == nil:
		a.flushFindings()
		return done
	case errors.Is(err, errUnbalanced):
		a.flushFindings()
		return unbalanced
	case errors.Is(err, context.Canceled):
		a.say("stopped")
		return interrupted
	case errors.As(err, &usage), errors.As(err, &place), errors.As(err, &loop), errors.As(err, &region):
		a.say("%v", err)
		return badUsage
	}
	a.say("%v", err)
	return badInput
}

func (a *app) flushFindings() {
	for _, f := range a.findings {
		a.say("%s", f)
	}
	a.findings = nil
}

// say writes one line to the error stream.
func (a *app) say(format string, args ...any) {
	line := strings.Join(strings.Fields(fmt.Sprintf(format, args...)), " ")
	fmt.Fprintf(a.errOut, "shearprint: %s\n", line)
}

func (a *app) root() *cobra.Command {
	root := &cobra.Command{
		Use:   "shearprint",
		Short: "Read the surface pattern of wall shear: what separates where, and whether the count is right",
		Long: `Shearprint reads the wall shear stress of a computed surface: its critical points, the lines along which
the flow separates and attaches, and the ledger that balances the points against the surface's topology.

Without a command it opens the built-in demo in the browser.

Exit status: 0 done, 1 a run cannot be read, 2 the command line makes no sense, 3 done but the ledger does
not balance.`,
		Example: `  shearprint                                   the demo, in the browser
  shearprint topology wing.ply                 points, lines and ledger as a report
  shearprint picture wing.ply -o wing.png      a picture, without a browser`,
		SilenceUsage:      true,
		SilenceErrors:     true,
		CompletionOptions: cobra.CompletionOptions{DisableDefaultCmd: true},

		SuggestionsMinimumDistance: 2, // letters that may be wrong
	}
	root.Args = func(cmd *cobra.Command, args []string) error {
		if len(args) == 0 {
			return nil
		}
		return unknownCommand(cmd, args[0])
	}
	open := a.open()
	root.RunE = open.RunE
	root.SetFlagErrorFunc(func(cmd *cobra.Command, err error) error {
		return usagef("%v; see %s --help", err, cmd.CommandPath())
	})
	root.SetHelpCommand(help(root))
	root.AddCommand(open, a.inspect(), a.topology(), a.probe(), a.trace(), a.loop(), a.ledger(), a.picture(), a.convert())
	return root
}

func unknownCommand(root *cobra.Command, word string) error {
	if _, err := os.Stat(word); err == nil {
		return usagef("%s is no command; to see a run give shearprint open %s", word, word)
	}
	if near := root.SuggestionsFor(word); len(near) > 0 {
		return usagef("there is no command %q; did you mean %s?", word, strings.Join(near, " or "))
	}
	return usagef("there is no command %q; see shearprint --help", word)
}

// help is cobra's own help command, with an error for what is no command.
func help(root *cobra.Command) *cobra.Command {
	return &cobra.Command{
		Use:   "help [COMMAND]",
		Short: "Tell more about a command",
		RunE: func(_ *cobra.Command, args []string) error {
			cmd, rest, err := root.Find(args)
			if err != nil || len(rest) > 0 {
				return unknownCommand(root, args[0])
			}
			return cmd.Help()
		},
	}
}

// oneRun accepts exactly one RUN.
func oneRun(cmd *cobra.Command, args []string) error {
	if len(args) != 1 {
		return usagef("%s takes one RUN, not %d; see %s --help", cmd.Name(), len(args), cmd.CommandPath())
	}
	if args[0] == "" {
		return usagef("%s: the name of the RUN is empty; check the script's variables", cmd.Name())
	}
	return nil
}

// noWords accepts no arguments.
func noWords(cmd *cobra.Command, args []string) error {
	if len(args) > 0 {
		return usagef("%s takes no %q; see %s --help", cmd.Name(), args[0], cmd.CommandPath())
	}
	return nil
}
