package reports

import (
	"context"
	"os"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func names(t *testing.T, dir string) []string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	require.NoError(t, err)
	var out []string
	for _, e := range entries {
		out = append(out, e.Name())
	}
	return out
}

func contents(t *testing.T, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	for _, n := range names(t, dir) {
		b, err := os.ReadFile(filepath.Join(dir, n))
		require.NoError(t, err)
		out[n] = string(b)
	}
	return out
}

func TestWriteMakesTheWholeReport(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "new", "report")
	files, err := Write(sample(8, 6), dir, Options{})
	require.NoError(t, err)
	assert.Equal(t, files, names(t, dir), "the folder holds the report and nothing else")
	for _, want := range []string{"report.xlsx", "results.json", "zones.geojson", "zones-wgs84.geojson", "zones.kml", "settingout.csv", "plan-01-main-roof.svg", "plan-02-yard.png", "files.sha256"} {
		assert.Contains(t, files, want)
	}
}

func TestWriteLeavesAnExistingReportAlone(t *testing.T) {
	dir := t.TempDir()
	_, err := Write(sample(4, 3), dir, Options{})
	require.NoError(t, err)
	before := contents(t, dir)
	_, err = Write(sample(8, 6), dir, Options{})
	require.ErrorIs(t, err, ErrExists)
	assert.Equal(t, before, contents(t, dir))

	stopped, stop := context.WithCancel(context.Background())
	stop()
	_, err = Write(sample(8, 6), dir, Options{Force: true, Context: stopped})
	require.ErrorIs(t, err, context.Canceled)
	assert.Equal(t, before, contents(t, dir), "an interrupted run changes nothing")

	_, err = Write(sample(8, 6), dir, Options{Force: true})
	require.NoError(t, err)
	assert.NotEqual(t, before["report.xlsx"], contents(t, dir)["report.xlsx"])
}

// A figure of the earlier report that the new one lacks would be taken for one
// of the new report: it goes, unless someone has worked on it.
func TestWriteRemovesStaleFigures(t *testing.T) {
	dir := t.TempDir()
	_, err := Write(sample(4, 3), dir, Options{})
	require.NoError(t, err)
	require.NoError(t, os.WriteFile(filepath.Join(dir, "own.txt"), []byte("mine"), 0o666))
	require.NoError(t, os.WriteFile(filepath.Join(dir, "plan-02-yard.svg"), []byte("annotated by hand"), 0o666))
	a := sample(4, 3)
	a.Site.Surfaces = a.Site.Surfaces[:1]
	a.Zones = a.Zones[:2]
	_, err = Write(a, dir, Options{Force: true})
	require.NoError(t, err)
	left := names(t, dir)
	assert.NotContains(t, left, "plan-02-yard.png")
	assert.Contains(t, left, "plan-02-yard.svg", "edited by hand: kept")
	assert.Contains(t, left, "own.txt")
}

func TestWriteFailsWholeWhereAFileCannotBePut(t *testing.T) {
	dir := t.TempDir()
	_, err := Write(sample(4, 3), dir, Options{})
	require.NoError(t, err)
	require.NoError(t, os.Remove(filepath.Join(dir, "zones.kml")))
	require.NoError(t, os.Mkdir(filepath.Join(dir, "zones.kml"), 0o777))
	before := map[string]string{}
	for _, n := range []string{"report.xlsx", "results.json"} {
		b, err := os.ReadFile(filepath.Join(dir, n))
		require.NoError(t, err)
		before[n] = string(b)
	}
	_, err = Write(sample(8, 6), dir, Options{Force: true})
	require.Error(t, err)
	for n, was := range before {
		b, err := os.ReadFile(filepath.Join(dir, n))
		require.NoError(t, err)
		assert.Equal(t, was, string(b), n)
	}
}

// The same assessment gives the same bytes, whatever the order in which
// goroutines or maps happen to run.
func TestSameBytesInTwentyRuns(t *testing.T) {
	root := t.TempDir()
	var first map[string]string
	for i := range 20 {
		dir := filepath.Join(root, string(rune('a'+i)))
		_, err := Write(sample(8, 6), dir, Options{})
		require.NoError(t, err)
		got := contents(t, dir)
		if first == nil {
			first = got
			continue
		}
		for name, was := range first {
			require.True(t, was == got[name], "run %d: %s differs", i+1, name)
		}
		require.Len(t, got, len(first))
	}
}
