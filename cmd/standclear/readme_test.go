package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// The README shows what the demo prints and its roof plan. Both are made anew
// with STANDCLEAR_README=write in the environment.
func TestReadmeShowsTheDemo(t *testing.T) {
	if testing.Short() {
		t.Skip("runs the whole demo")
	}
	const (
		readme = "../../README.md"
		figure = "../../testdata/readme/plan-roof.png"
		begin  = "<!-- demo -->\n```\n"
		end    = "```\n<!-- /demo -->"
	)
	dir := filepath.Join(t.TempDir(), "demo-report")
	var out, err bytes.Buffer
	require.Zero(t, run([]string{"assess", "--demo", "-o", dir}, streams{in: strings.NewReader(""), out: &out, err: &err}), err.String())
	plan, e := os.ReadFile(filepath.Join(dir, "plan-01-roof.png"))
	require.NoError(t, e)
	text, e := os.ReadFile(readme)
	require.NoError(t, e)
	before, rest, ok := strings.Cut(string(text), begin)
	require.True(t, ok, "the README has no place for what the demo prints")
	shown, after, ok := strings.Cut(rest, end)
	require.True(t, ok, "what the README shows has no end")
	if os.Getenv("STANDCLEAR_README") == "write" {
		require.NoError(t, os.WriteFile(readme, []byte(before+begin+out.String()+end+after), 0o644))
		require.NoError(t, os.WriteFile(figure, plan, 0o644))
		return
	}
	assert.Equal(t, out.String(), shown, "STANDCLEAR_README=write go test ./cmd/standclear -run Readme makes it anew")
	kept, e := os.ReadFile(figure)
	require.NoError(t, e)
	assert.True(t, bytes.Equal(plan, kept), "the README's roof plan is not what the demo draws")
}
