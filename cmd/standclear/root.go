package main

import (
	"context"
	"io"
	"os/signal"
	"strings"
	"syscall"

	"github.com/spf13/cobra"
)

// streams are the program's standard streams; commands write to these and to
// nothing else.
type streams struct {
	in       io.Reader
	out, err io.Writer
}

// run runs the program and returns its exit status. An interrupt cancels the
// context of the command; a second one ends the program at once.
func run(args []string, std streams) int {
	ctx, stop := signal.NotifyContext(context.Background(), syscall.SIGINT, syscall.SIGTERM)
	defer stop()
	context.AfterFunc(ctx, stop)
	root := newRoot(std)
	root.SetArgs(negativeValues(args))
	cmd, err := root.ExecuteContextC(ctx)
	if err == nil {
		return exitDone
	}
	return report(std, err, wantsJSON(cmd, args), cmd.Name() == "check")
}

// newRoot builds the whole command tree.
func newRoot(std streams) *cobra.Command {
	root := &cobra.Command{
		Use:   "standclear",
		Short: "Tell where the fields of an antenna site are above your limit table, and how far people must keep away.",
		Example: `  standclear assess --demo -o demo-report
  standclear init --demo mysite`,
		Args:          cobra.ArbitraryArgs,
		SilenceErrors: true,
		SilenceUsage:  true,
		RunE: func(cmd *cobra.Command, args []string) error {
			if len(args) == 0 {
				return cmd.Help()
			}
			return unknownCommand(cmd, args[0])
		},
	}
	root.CompletionOptions.DisableDefaultCmd = true
	root.SetIn(std.in)
	root.SetOut(std.out)
	root.SetErr(std.err)
	root.SetFlagErrorFunc(flagError)
	root.AddCommand(
		newInit(std),
		newCheck(std),
		newConvert(std),
		newLimits(std),
		newAntenna(std),
		newField(std),
		newDistance(std),
		newZone(std),
		newWork(std),
		newReadings(std),
		newAssess(std),
		newMethods(std),
		newVersion(std),
		newCompletion(std),
	)
	return root
}

// group returns a command that only holds others.
func group(use, short, example string, subs ...*cobra.Command) *cobra.Command {
	c := &cobra.Command{
		Use: use, Short: short, Example: example,
		Args: cobra.ArbitraryArgs,
		RunE: func(cmd *cobra.Command, args []string) error {
			if len(args) == 0 {
				return cmd.Help()
			}
			return unknownCommand(cmd, args[0])
		},
	}
	c.AddCommand(subs...)
	return c
}

func unknownCommand(cmd *cobra.Command, word string) error {
	var names []string
	for _, c := range cmd.Commands() {
		if c.IsAvailableCommand() {
			names = append(names, c.Name())
		}
	}
	hint := "the commands are " + strings.Join(names, ", ")
	if cmd.SuggestionsMinimumDistance <= 0 {
		cmd.SuggestionsMinimumDistance = 2
	}
	if near := cmd.SuggestionsFor(word); len(near) > 0 {
		hint = "did you mean " + near[0] + "?"
	}
	return usageError{cmd.CommandPath(), word, "is not a command; " + hint}
}

// negativeValues lets the values of convert start with a minus sign: it moves
// them behind the flags and a "--".
func negativeValues(args []string) []string {
	if len(args) == 0 || args[0] != "convert" {
		return args
	}
	flags, values := []string{"convert"}, []string{}
	for i := 1; i < len(args); i++ {
		switch a := args[i]; {
		case a == "--":
			values = append(values, args[i+1:]...)
			i = len(args)
		case startsNumber(a) && !takesValue(flags[len(flags)-1]):
			values = append(values, a)
		case len(values) > 0 && !strings.HasPrefix(a, "-") && !takesValue(flags[len(flags)-1]):
			values = append(values, a) // a unit that stands apart from its number
		default:
			flags = append(flags, a)
		}
	}
	if len(values) == 0 {
		return args
	}
	return append(append(flags, "--"), values...)
}

func startsNumber(a string) bool {
	a = strings.TrimPrefix(a, "-")
	a = strings.TrimPrefix(a, ".")
	return a != "" && a[0] >= '0' && a[0] <= '9'
}

func takesValue(previous string) bool {
	switch strings.TrimLeft(previous, "-") {
	case "limits", "class", "frequency", "distance":
		return strings.HasPrefix(previous, "--")
	}
	return false
}
