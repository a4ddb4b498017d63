package main

import (
	"bytes"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/rogpeppe/go-internal/testscript"
	"github.com/spf13/cobra"
	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"standclear": main})
}

// TestScripts runs the command tests, one behaviour each. The command "status N
// standclear ..." runs a command and holds its exit status against N; stdout and
// stderr then look at what it wrote. $DATA is the repository's testdata folder.
func TestScripts(t *testing.T) {
	data, err := filepath.Abs(filepath.Join("..", "..", "testdata"))
	require.NoError(t, err)
	testscript.Run(t, testscript.Params{
		Dir:                 filepath.Join("testdata", "script"),
		RequireExplicitExec: true,
		RequireUniqueNames:  true,
		Setup: func(e *testscript.Env) error {
			e.Setenv("DATA", data)
			return nil
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){"status": status, "replace": replace},
	})
}

// status asserts the exact exit status of a command.
func status(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: status N command args...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	got := 0
	if err := ts.Exec(args[1], args[2:]...); err != nil {
		var exit *exec.ExitError
		if !errors.As(err, &exit) {
			ts.Fatalf("%v", err)
		}
		got = exit.ExitCode()
	}
	if got != want {
		ts.Fatalf("exit status %d, want %d", got, want)
	}
}

// replace changes every occurrence of a text in a file, and fails where there is
// none: "replace OLD NEW FILE".
func replace(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 3 {
		ts.Fatalf("usage: replace old new file")
	}
	text := ts.ReadFile(args[2])
	if !strings.Contains(text, args[0]) {
		ts.Fatalf("%s does not hold %q", args[2], args[0])
	}
	ts.Check(os.WriteFile(ts.MkAbs(args[2]), []byte(strings.ReplaceAll(text, args[0], args[1])), 0o600))
}

// everyCommand calls f for each command of the tree that a user can run.
func everyCommand(c *cobra.Command, f func(*cobra.Command)) {
	f(c)
	for _, sub := range c.Commands() {
		if sub.IsAvailableCommand() && sub.Name() != "help" {
			everyCommand(sub, f)
		}
	}
}

// TestHelpExamplesRun runs each example that a command's help prints, as
// printed, beside the demo site, and wants exit status 0.
func TestHelpExamplesRun(t *testing.T) {
	if testing.Short() {
		t.Skip("runs every command on the demo site")
	}
	dir := t.TempDir()
	t.Chdir(dir)
	shell := func(line string) (string, error) {
		cmd := exec.Command("sh", "-c", line)
		cmd.Env = append(os.Environ(), "CI=1")
		var errOut bytes.Buffer
		cmd.Stderr = &errOut
		err := cmd.Run()
		return errOut.String(), err
	}
	everyCommand(newRoot(streams{}), func(c *cobra.Command) {
		assert.NotEmpty(t, c.Short, c.CommandPath())
		assert.True(t, strings.HasSuffix(c.Short, "."), "%s: help is one sentence", c.CommandPath())
		lines := strings.Split(c.Example, "\n")
		assert.GreaterOrEqual(t, len(lines), 2, "%s: two examples", c.CommandPath())
		for _, line := range lines {
			require.NoError(t, os.RemoveAll("mysite"))
			for _, name := range []string{"newsite", "demo-report", "myreport", "mysection"} {
				require.NoError(t, os.RemoveAll(name))
			}
			if !strings.Contains(line, "init --demo mysite") {
				text, err := shell("standclear init --demo mysite")
				require.NoError(t, err, text)
			}
			text, err := shell(strings.TrimSpace(line))
			assert.NoError(t, err, "%s: %s", line, text)
		}
	})
}

// TestInterruptLeavesNothing interrupts commands that write while they compute:
// exit status 1, one line, and no folder or file that was not there before.
func TestInterruptLeavesNothing(t *testing.T) {
	if testing.Short() {
		t.Skip("starts the main job")
	}
	// A line every centimetre takes far longer than the wait before the signal.
	for _, args := range [][]string{
		{"assess", "--demo", "-o", "out", "--resolution", "0.01", "--quiet"},
		{"zone", "mysite", "-o", "out", "--resolution", "0.005", "--quiet"},
		{"distance", "mysite", "--coverage", "95%", "--quiet"},
	} {
		t.Run(args[0], func(t *testing.T) {
			dir := t.TempDir()
			if args[1] == "mysite" {
				made := exec.Command("standclear", "init", "--demo", "mysite")
				made.Dir = dir
				require.NoError(t, made.Run())
			}
			before, err := os.ReadDir(dir)
			require.NoError(t, err)
			cmd := exec.Command("standclear", args...)
			cmd.Dir = dir
			var out, errOut bytes.Buffer
			cmd.Stdout, cmd.Stderr = &out, &errOut
			require.NoError(t, cmd.Start())
			time.Sleep(500 * time.Millisecond)
			require.NoError(t, cmd.Process.Signal(os.Interrupt))
			var exit *exec.ExitError
			require.ErrorAs(t, cmd.Wait(), &exit)
			assert.Equal(t, exitFailed, exit.ExitCode())
			assert.Empty(t, out.String())
			assert.Equal(t, "standclear: interrupted; nothing was written, run it again when ready\n", errOut.String())
			left, err := os.ReadDir(dir)
			require.NoError(t, err)
			assert.Len(t, left, len(before))
		})
	}
}

// TestWordsOfHelp: no help promises what the program cannot know.
func TestWordsOfHelp(t *testing.T) {
	everyCommand(newRoot(streams{}), func(c *cobra.Command) {
		var out bytes.Buffer
		c.SetOut(&out)
		require.NoError(t, c.Help())
		for _, word := range []string{"safe", "compliant", "guarantee", "proven"} {
			assert.NotContains(t, strings.ToLower(out.String()), word, c.CommandPath())
		}
	})
}
