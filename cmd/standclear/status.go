package main

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/reports"
)

// The exit statuses.
const (
	exitDone   = 0 // the work is done, whatever was found
	exitFailed = 1 // it could not be done
	exitInput  = 2 // the input or the usage is at fault
	exitFound  = 3 // only with --strict: done, and something is above a limit or not assessed
)

// errFound is what a command returns under --strict after it has printed.
var errFound = errors.New("something is above the limits supplied or not assessed")

// usageError is a fault of the command line: where, the offending text, and
// what is wrong with it and what to write instead.
type usageError struct{ where, text, message string }

func (e usageError) Error() string {
	if e.text == "" {
		return e.where + ": " + e.message
	}
	return fmt.Sprintf("%s: %q %s", e.where, e.text, e.message)
}

// inputError is an input that could not be read at all.
type inputError struct {
	path string
	err  error
}

func (e inputError) Unwrap() error { return e.err }

func (e inputError) Error() string {
	var p *fs.PathError
	if errors.As(e.err, &p) {
		return fmt.Sprintf("%s: %s cannot be read (%v); check that it is a file you may read", e.path, p.Path, p.Err)
	}
	return fmt.Sprintf("%s: cannot be read: %v", e.path, oneLine(e.err))
}

// screenFaults is how many faults are shown on a screen.
const screenFaults = 20

// report prints an error and returns the exit status it stands for: the one
// place where errors become statuses.
func report(std streams, err error, asJSON, all bool) int {
	var faults sitefile.Faults
	var usage usageError
	var input inputError
	switch {
	case errors.Is(err, errFound):
		return exitFound
	case errors.Is(err, context.Canceled):
		fmt.Fprintln(std.err, "standclear: interrupted; nothing was written, run it again when ready")
		return exitFailed
	case errors.As(err, &faults):
	case errors.As(err, &usage):
		faults = sitefile.Faults{{Column: usage.where, Text: usage.text, Message: usage.message}}
	case errors.As(err, &input):
		faults = sitefile.Faults{{File: input.path, Message: strings.TrimPrefix(input.Error(), input.path+": ")}}
	case errors.Is(err, fs.ErrExist), errors.Is(err, reports.ErrExists):
		faults = sitefile.Faults{{Message: err.Error()}}
	default:
		fmt.Fprintln(std.err, "standclear:", oneLine(err))
		return exitFailed
	}
	if asJSON {
		out := json.NewEncoder(std.out)
		out.SetEscapeHTML(false)
		out.SetIndent("", "  ")
		_ = out.Encode(map[string]sitefile.Faults{"faults": faults})
		return exitInput
	}
	if len(faults) == 1 {
		fmt.Fprintln(std.err, oneLine(err))
		return exitInput
	}
	for i, f := range faults {
		if i == screenFaults && !all {
			fmt.Fprintf(std.err, "and %d more; check SITE lists all %d\n", len(faults)-i, len(faults))
			break
		}
		fmt.Fprintln(std.err, f.Error())
	}
	return exitInput
}

func oneLine(err error) string { return strings.ReplaceAll(err.Error(), "\n", "; ") }

func wantsJSON(cmd *cobra.Command, args []string) bool {
	if cmd == nil || cmd.Flags().Lookup("json") == nil {
		return false
	}
	on, _ := cmd.Flags().GetBool("json")
	return on || slices.Contains(args, "--json")
}

// flagError turns the flag parser's message into one that says what to do.
func flagError(cmd *cobra.Command, err error) error {
	if errors.As(err, new(usageError)) {
		return err
	}
	return usageError{cmd.CommandPath(), "", oneLine(err) + "; see " + cmd.CommandPath() + " --help"}
}

// arguments checks the number of arguments; names are what help calls them.
func arguments(least, most int, names string) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		switch {
		case len(args) < least:
			return usageError{cmd.CommandPath(), "", names + " is missing; see " + cmd.CommandPath() + " --help"}
		case most >= 0 && len(args) > most:
			return usageError{cmd.CommandPath(), args[most], "is one argument too many; it takes " + names}
		}
		return nil
	}
}
