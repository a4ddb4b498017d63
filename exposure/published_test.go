package exposure

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"github.com/stretchr/testify/require"
)

// publishedRow is one row of a value table under testdata/published: inputs, the
// printed value, the tolerance with its reason, and the source.
type publishedRow struct {
	t     *testing.T
	cells map[string]string
}

// num reads a numeric cell; the row must have it.
func (r publishedRow) num(column string) float64 {
	r.t.Helper()
	v, err := strconv.ParseFloat(r.cells[column], 64)
	require.NoError(r.t, err, "column %s", column)
	return v
}

// readPublished reads a value table: a header row, then one row for each value.
func readPublished(t *testing.T, file string) []map[string]string {
	t.Helper()
	f, err := os.Open(filepath.Join("..", "testdata", "published", filepath.FromSlash(file)))
	require.NoError(t, err)
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	require.NoError(t, err)
	require.Greater(t, len(rows), 1, "%s holds no values", file)
	var out []map[string]string
	for _, cells := range rows[1:] {
		m := map[string]string{}
		for i, name := range rows[0] {
			m[name] = cells[i]
		}
		require.NotEmpty(t, m["source"], "%s: every value names its source", file)
		out = append(out, m)
	}
	return out
}

// againstPublished holds got against the column want of every row of a value
// table, within the column tolerance, whose reason is the column why.
func againstPublished(t *testing.T, file string, got func(publishedRow) float64) {
	t.Helper()
	for _, cells := range readPublished(t, file) {
		t.Run(cells["case"], func(t *testing.T) {
			r := publishedRow{t, cells}
			require.NotEmpty(t, cells["why"], "a tolerance needs a reason")
			withinPublished(t, got(r), r.num("want"), r.num("tolerance"), cells["why"], cells["source"])
		})
	}
}

// withinPublished fails unless got is within tolerance of want, and says what
// was compared with which source.
func withinPublished(t *testing.T, got, want, tolerance float64, why, source string) {
	t.Helper()
	if d := math.Abs(got - want); !(d <= tolerance) {
		t.Errorf("got %.12g, want %.12g, apart %.3g, allowed %.3g (%s)\nsource: %s", got, want, d, tolerance, why, source)
	}
}
