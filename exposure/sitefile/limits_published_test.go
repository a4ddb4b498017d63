package sitefile

import (
	"encoding/csv"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/limits"
)

const publishedFolder = "../../testdata/limits"

// publishedFigures are figures of each example, with their document; package
// limits holds many more against its own, second reading of the files. The
// tolerance is half a unit of the last digit written here.
var publishedFigures = []struct {
	file, class string
	group       limits.Group
	quantity    limits.Quantity
	mhz         float64
	want, tol   float64 // SI
	source      string
}{
	{"47-cfr-1.1310/limits.csv", "public", wholeBody, limits.S, 850, 5.66667, 5e-6, "47 CFR 1.1310, Table 1: f/1500 mW/cm2"},
	{"47-cfr-1.1310/limits.csv", "public", wholeBody, limits.E, 1.71, 481.87, 5e-3, "47 CFR 1.1310, Table 1: 824/f V/m"},
	{"47-cfr-1.1310/limits.csv", "occupational", wholeBody, limits.S, 0.5, 1000, 1e-9, "47 CFR 1.1310, Table 1: 100 mW/cm2"},
	{"icnirp-1998/limits.csv", "public", wholeBody, limits.E, 900, 41.25, 5e-3, "ICNIRP 1998, Table 7: 1.375 f^0.5"},
	{"icnirp-1998/limits.csv", "public", wholeBody, limits.B, 900, 0.138e-6, 5e-10, "ICNIRP 1998, Table 7: 0.0046 f^0.5 uT"},
	{"icnirp-1998/limits.csv", "public", limits.Group{Effect: limits.Stimulation, Region: limits.WholeBody, Kind: limits.Mean}, limits.H, 0.05, 5, 1e-9, "ICNIRP 1998, Table 7"},
	{"icnirp-1998/limits.csv", "public", limits.Group{Effect: limits.Thermal, Region: limits.WholeBody, Kind: limits.Peak}, limits.S, 98, 2000, 1e-6, "ICNIRP 1998, Table 7, and 1000 for pulses"},
	{"1999-519-ec/limits.csv", "public", wholeBody, limits.E, 1800, 58.336, 5e-4, "1999/519/EC, Annex III, Table 2: 1.375 f^0.5"},
	{"icnirp-2020/limits.csv", "public", wholeBody, limits.S, 900, 4.5, 1e-9, "ICNIRP 2020, Table 5, from memory: f/200"},
	{"icnirp-2020/limits.csv", "occupational", limits.Group{Effect: limits.Thermal, Region: limits.Local, Kind: limits.Mean}, limits.S, 28000, 152.470, 5e-4, "ICNIRP 2020, Table 6: 275/f^0.177, f in GHz"},
	{"2013-35-eu/limits.csv", "occupational", wholeBody, limits.E, 900, 90, 1e-9, "2013/35/EU, Table B1, from memory: 3e-3 f^0.5, f in Hz"},
	{"2013-35-eu/limits.csv", "occupational", wholeBody, limits.B, 900, 0.3e-6, 1e-15, "2013/35/EU, Table B1, from memory: 1e-5 f^0.5 uT, f in Hz"},
	{"ieee-c95.1-2019/whole-body.csv", "public", wholeBody, limits.S, 900, 4.5, 1e-9, "IEEE C95.1-2019, Table 7, from memory: f/200"},
	{"ieee-c95.1-2019/local-above-6-ghz.csv", "public", limits.Group{Effect: limits.Thermal, Region: limits.Local, Kind: limits.Mean}, limits.S, 28000, 30.494, 5e-4, "IEEE C95.1-2019, from memory: 55 f^-0.177, f in GHz"},
	{"safety-code-6-2015/limits.csv", "public", wholeBody, limits.S, 900, 2.73568, 5e-6, "Safety Code 6 (2015), Table 5, from memory: 0.02619 f^0.6834"},
	{"safety-code-6-2015/limits.csv", "occupational", wholeBody, limits.E, 900, 85.445, 5e-4, "Safety Code 6 (2015), Table 6, from memory: 15.60 f^0.25"},
}

var wholeBody = limits.Group{Effect: limits.Thermal, Region: limits.WholeBody, Kind: limits.Mean}

func TestPublishedLimitTables(t *testing.T) {
	files, err := filepath.Glob(filepath.Join(publishedFolder, "*", "*.csv"))
	require.NoError(t, err)
	require.NotEmpty(t, files)
	tables := map[string]*limits.Table{}
	for _, file := range files {
		table, inputs, err := LoadLimits(file, Options{})
		require.NoError(t, err, file)
		name, err := filepath.Rel(publishedFolder, file)
		require.NoError(t, err)
		tables[filepath.ToSlash(name)] = table

		rows, spots := countRows(t, file)
		assert.Len(t, table.Rows, rows, file)
		assert.Len(t, table.Spots, spots, file)
		assert.NotEmpty(t, table.About.Title, file)
		assert.False(t, table.Confirmed(), "%s: nobody has", file)
		require.Len(t, inputs.Warnings, 1, "%s: %v", file, inputs.Warnings)
		assert.Contains(t, inputs.Warnings[0].Message, "nobody has confirmed", file)
		for _, r := range table.Rows {
			assert.NotEmpty(t, r.Source, "%s:%d", file, r.Line)
		}
	}
	covered := map[string]bool{}
	for _, c := range publishedFigures {
		covered[c.file] = true
		require.Contains(t, tables, c.file)
		for _, a := range tables[c.file].At(c.class, c.mhz*1e6) {
			if a.Group == c.group {
				got := map[limits.Quantity]float64{limits.E: a.E, limits.H: a.H, limits.B: a.B, limits.S: a.S}[c.quantity]
				assert.InDelta(t, c.want, got, c.tol, "%s: %s, %s at %g MHz; source: %s", c.file, c.class, c.quantity, c.mhz, c.source)
			}
		}
	}
	assert.Len(t, covered, len(files), "every example has a figure")

	// Table 7 of ICNIRP 2020, from memory: 40 W/m2 for 90 s bring 7.56 kJ/m2 at
	// most, and above 6 GHz the energy falls with the level.
	brief, ok := tables["icnirp-2020/limits.csv"].BriefEnergy("public", 3.5e9, 90)
	assert.True(t, ok)
	assert.InDelta(t, 7560, brief, 0.01, "J/m2; nine digits in the table")
	brief, ok = tables["icnirp-2020/limits.csv"].BriefEnergy("public", 28e9, 90)
	assert.True(t, ok)
	assert.InDelta(t, 5763.4, brief, 0.05, "J/m2; 360*30.494*(0.05 + 0.95/2)")
}

// countRows counts the table's rows and spot values without reading them.
func countRows(t *testing.T, file string) (rows, spots int) {
	t.Helper()
	text, err := os.ReadFile(file)
	require.NoError(t, err)
	spots = strings.Count(string(text), "# spot:")
	r := csv.NewReader(strings.NewReader(string(text)))
	r.Comment = '#'
	records, err := r.ReadAll()
	require.NoError(t, err)
	return len(records) - 1, spots
}
