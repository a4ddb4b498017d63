package reports

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"math"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/exposure"
)

// The sample's section runs from (2, 5) toward (4, 3)/5: 5 m along the line are
// 4 m of x and 3 m of y.
func alongSample(s float64) (x, y float64) { return 2 + 0.8*s, 5 + 0.6*s }

func TestSectionsInGeoJSON(t *testing.T) {
	a := sample(4, 3)
	type collection struct {
		Features []struct {
			Properties map[string]any `json:"properties"`
			Geometry   struct {
				Coordinates json.RawMessage `json:"coordinates"`
			} `json:"geometry"`
		} `json:"features"`
	}
	find := func(wgs84 bool, into any) map[string]any {
		text, err := GeoJSON(a, wgs84)
		require.NoError(t, err)
		var c collection
		require.NoError(t, json.Unmarshal(text, &c))
		for _, f := range c.Features {
			if f.Properties["kind"] == "section keep-out" {
				require.NoError(t, json.Unmarshal(f.Geometry.Coordinates, into))
				return f.Properties
			}
		}
		require.Fail(t, "no section")
		return nil
	}
	var plane [][][][2]float64
	properties := find(false, &plane)
	assert.Equal(t, a.Sections[0].Through, properties["through"])
	assert.InDelta(t, 2, properties["x1_m"], 0)
	assert.InDelta(t, 17, properties["y2_m"], 0)
	assert.Contains(t, properties["coordinates_in"], "distance along the section")
	assert.Equal(t, [2]float64(a.Sections[0].Outer[0][0][3]), plane[0][0][3])
	var world [][][][3]float64
	properties = find(true, &world)
	assert.Contains(t, properties["coordinates_in"], "height above the site datum")
	for i, p := range world[0][0] {
		back := exposure.GeodeticToSite(a.Site.About, p[1], p[0], p[2])
		x, y := alongSample(plane[0][0][i][0])
		// 0.1 mm: ten decimals of a degree are 0.01 mm on the ground.
		assert.InDelta(t, x, back.X, 1e-4)
		assert.InDelta(t, y, back.Y, 1e-4)
		assert.InDelta(t, plane[0][0][i][1], p[2], 0, "the height is the site's")
	}
}

func TestSectionsStandUprightInKML(t *testing.T) {
	a := sample(4, 3)
	a.Zones, a.Points, a.Site.Sources = nil, nil, a.Site.Sources[:1]
	text, err := KML(a)
	require.NoError(t, err)
	s := string(text)
	assert.Equal(t, 2, strings.Count(s, "section through "), "two planes, one class with a line on each")
	body, _, ok := strings.Cut(strings.SplitN(s, "<coordinates>", 2)[1], "</coordinates>")
	require.True(t, ok)
	for i, c := range strings.Fields(body) {
		f := strings.Split(c, ",")
		require.Len(t, f, 3)
		var v [3]float64
		for k := range v {
			v[k], err = strconv.ParseFloat(f[k], 64)
			require.NoError(t, err)
		}
		back := exposure.GeodeticToSite(a.Site.About, v[1], v[0], v[2])
		want := a.Sections[0].Outer[0][0][i]
		x, y := alongSample(want[0])
		assert.InDelta(t, x, back.X, 1e-4, "0.1 mm, as for GeoJSON")
		assert.InDelta(t, y, back.Y, 1e-4)
		assert.InDelta(t, want[1], v[2], 0)
	}
}

func TestSectionsAreSetOutFromTheirStart(t *testing.T) {
	a := sample(4, 3)
	a.Zones, a.Sections = nil, a.Sections[:1]
	a.Site.About.GridBearingRad = 0
	a.Sections[0].Outer = exposure.MultiPolygon{{{{5, 9}, {10, 9}, {10, 12}, {5, 9}}}}
	text, err := SettingOut(a)
	require.NoError(t, err)
	rows, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	require.NoError(t, err)
	require.Len(t, rows, 4)
	assert.Equal(t, "section through H1", rows[1][0])
	assert.Equal(t, []string{"6.000", "8.000", "9.000"}, rows[1][4:7])
	assert.Equal(t, "start of the section, at x = 2.000, y = 5.000", rows[1][7])
	assert.Equal(t, []string{"8.000", "6.000", "10.000"}, rows[3][8:11], "10 m along: 8 m of x and 6 m of y")
	bearing, err := strconv.ParseFloat(rows[3][11], 64)
	require.NoError(t, err)
	assert.InDelta(t, math.Atan2(4, 3)/degree, bearing, 0.005, "deg, printed to 0.01")
}

func TestOneFigureForEachSection(t *testing.T) {
	a := sample(4, 3)
	pictures, err := draw(t.Context(), a)
	require.NoError(t, err)
	var titles []string
	for _, p := range pictures {
		if strings.HasPrefix(p.name, "section-") {
			titles = append(titles, p.title)
		}
	}
	require.Len(t, titles, 2, "of all classes together")
	assert.Contains(t, titles[0], "vertical section through H1")
}

// Every line of the sheet leads to its point's total, or says why not.
func TestBoundaryPointsAddUp(t *testing.T) {
	_, f := sampleBook(t)
	rows, err := f.GetRows(sheetChecks)
	require.NoError(t, err)
	at := map[string]int{}
	for i, h := range rows[firstRow-1] {
		at[h] = i
	}
	remark := func(r []string) string {
		if len(r) > at["remark"] {
			return r[at["remark"]]
		}
		return ""
	}
	totals, notes, counted := 0, 0, 0
	for _, r := range rows[firstRow:] {
		switch {
		case len(r) > at["antenna"] && r[at["antenna"]] == "total":
			totals++
			assert.NotContains(t, remark(r), "plain sum", "the sample shares no signal")
			if strings.Contains(remark(r), "1 source not listed") {
				counted++
				assert.Contains(t, remark(r), "on the surface's edge")
			}
		case strings.Contains(remark(r), "no field can be stated"):
			notes++
		}
	}
	assert.Equal(t, []int{5, 1, 1}, []int{totals, notes, counted})
}

// The files of zone stand beside a report's and leave it alone.
func TestZoneFilesBesideAReport(t *testing.T) {
	a, dir := sample(4, 3), t.TempDir()
	report, err := Write(a, dir, Options{})
	require.NoError(t, err)
	only := *a
	only.Zones, only.Sections, only.Profiles, only.Distances = a.Zones[:1], nil, nil, nil
	files, err := WriteZones(&only, dir, Options{})
	require.NoError(t, err)
	assert.Contains(t, files, "zone.geojson")
	assert.Contains(t, files, "zone-plan-01-main-roof.svg")
	for _, name := range files {
		assert.NotContains(t, report, name)
	}
	_, err = WriteZones(&only, dir, Options{})
	require.ErrorIs(t, err, ErrExists)
	only.Zones = a.Zones[2:3] // another surface: the first one's plan goes
	again, err := WriteZones(&only, dir, Options{Force: true})
	require.NoError(t, err)
	assert.NotContains(t, again, "zone-plan-01-main-roof.svg")
	assert.NoFileExists(t, dir+"/zone-plan-01-main-roof.svg")
	for _, name := range report {
		assert.FileExists(t, dir+"/"+name)
	}
}
