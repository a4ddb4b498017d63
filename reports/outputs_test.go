package reports

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"encoding/xml"
	"errors"
	"io"
	"math"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/exposure"
)

func TestScreenIsTenLines(t *testing.T) {
	for _, a := range []*exposure.Assessment{sample(8, 6), sample(1, 0), {Program: "standclear", SiteName: "bare"}} {
		var out bytes.Buffer
		require.NoError(t, Screen(&out, a))
		lines := strings.Split(strings.TrimSuffix(out.String(), "\n"), "\n")
		assert.Len(t, lines, 10)
		for _, l := range lines {
			assert.NotEmpty(t, l)
		}
	}
	var out bytes.Buffer
	require.NoError(t, Screen(&out, sample(24, 12)))
	assert.Contains(t, out.String(), "Above the limits supplied: 3 of 12 places: P12 (general public, ratio 1.11)")
	assert.Contains(t, out.String(), "P8 (general public, ratio 1.0024)", "above 1 must look above 1")
	assert.Contains(t, out.String(), "Not assessed: power of D4 unknown")
	assert.Contains(t, out.String(), "nobody has confirmed this transcription")
}

func TestJSONIsTheAssessment(t *testing.T) {
	a := sample(8, 6)
	var out bytes.Buffer
	require.NoError(t, JSON(&out, a))
	whole, err := json.Marshal(a)
	require.NoError(t, err)
	assert.JSONEq(t, string(whole), out.String(), "written piece by piece it is the same object")
	var back exposure.Assessment
	require.NoError(t, json.Unmarshal(out.Bytes(), &back))
	assert.Equal(t, a.Zones[0].Outer, back.Zones[0].Outer)
	assert.True(t, math.IsInf(float64(back.Zones[0].MaxRatioUpper), 1), "infinity is null, and null is infinity")
	a.Points[0].XM = math.NaN()
	require.Error(t, JSON(io.Discard, a))
}

func TestGeoJSONInBothFrames(t *testing.T) {
	a := sample(8, 6)
	type collection struct {
		Type          string `json:"type"`
		CoordinatesIn string `json:"coordinates_in"`
		Features      []struct {
			Type       string         `json:"type"`
			Properties map[string]any `json:"properties"`
			Geometry   struct {
				Type        string          `json:"type"`
				Coordinates json.RawMessage `json:"coordinates"`
			} `json:"geometry"`
		} `json:"features"`
	}
	read := func(wgs84 bool) (c collection, outer [][][][2]float64) {
		text, err := GeoJSON(a, wgs84)
		require.NoError(t, err)
		require.NoError(t, json.Unmarshal(text, &c))
		require.NoError(t, json.Unmarshal(c.Features[0].Geometry.Coordinates, &outer))
		return c, outer
	}
	site, inMetres := read(false)
	world, inDegrees := read(true)
	assert.Equal(t, "FeatureCollection", site.Type)
	assert.Contains(t, site.CoordinatesIn, "site metres")
	assert.Contains(t, world.CoordinatesIn, "WGS 84")
	require.Len(t, site.Features, 2*(len(a.Zones)+len(a.Sections))+len(a.Site.Sources)+len(a.Points))
	assert.Equal(t, "keep-out", site.Features[0].Properties["kind"])
	assert.Equal(t, "MultiPolygon", site.Features[0].Geometry.Type)
	assert.Equal(t, [][]exposure.Ring(a.Zones[0].Outer)[0][0][3], inMetres[0][0][3], "site metres are the engine's own, unrounded")
	for i, p := range inDegrees[0][0] {
		back := exposure.GeodeticToSite(a.Site.About, p[1], p[0], 9)
		want := inMetres[0][0][i]
		// 0.1 mm: ten decimals of a degree are 0.01 mm on the ground, and the
		// height of the roof is above the ellipsoid here, above the plane there.
		assert.InDelta(t, want[0], back.X, 1e-4)
		assert.InDelta(t, want[1], back.Y, 1e-4)
		assert.Less(t, p[0], 6.0, "longitude first")
	}
	area := 0.0
	ring := inDegrees[0][0]
	for i := 1; i < len(ring); i++ {
		area += ring[i-1][0]*ring[i][1] - ring[i][0]*ring[i-1][1]
	}
	assert.Positive(t, area, "outer rings stay counter-clockwise (RFC 7946, section 3.1.6)")
}

func TestKMLVolumesStandAtTheirHeight(t *testing.T) {
	a := sample(4, 3)
	a.Sections = nil
	text, err := KML(a)
	require.NoError(t, err)
	dec := xml.NewDecoder(bytes.NewReader(text))
	for {
		_, err := dec.Token()
		if errors.Is(err, io.EOF) {
			break
		}
		require.NoError(t, err)
	}
	s := string(text)
	assert.Contains(t, s, "<altitudeMode>relativeToGround</altitudeMode>")
	assert.Contains(t, s, "Kiln Lane works &amp; yard")
	// The roof is at 9 m and the body 2 m high: the volume lies from 9 to 11 m.
	heights := map[string]bool{}
	for part := range strings.SplitSeq(s, "<coordinates>") {
		body, _, ok := strings.Cut(part, "</coordinates>")
		if !ok || strings.Count(body, ",") < 8 {
			continue // a point
		}
		for c := range strings.FieldsSeq(body) {
			f := strings.Split(c, ",")
			require.Len(t, f, 3)
			heights[f[2]] = true
		}
	}
	assert.Equal(t, map[string]bool{"9": true, "11": true}, heights)
	bare := sample(4, 3)
	bare.Site.About.HasPosition = false
	files, err := Write(bare, t.TempDir(), Options{})
	require.NoError(t, err)
	assert.NotContains(t, files, "zones.kml")
	assert.NotContains(t, files, "zones-wgs84.geojson")
}

func TestSettingOutMeasuresFromACorner(t *testing.T) {
	a := sample(4, 3)
	a.Site.About.GridBearingRad = math.Pi / 2 // the y axis points east, x south
	a.Sections = nil
	a.Zones = a.Zones[:1]
	a.Zones[0].Class = "=SUM(A1)"
	a.Zones[0].Outer = exposure.MultiPolygon{{{{3, 0}, {3, 4}, {0, 4}, {3, 0}}}}
	text, err := SettingOut(a)
	require.NoError(t, err)
	rows, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	require.NoError(t, err)
	require.Len(t, rows, 4, "a header and three vertices: the closing one is not a mark on the roof")
	assert.Equal(t, settingOutHeader, rows[0])
	assert.Equal(t, "'=SUM(A1)", rows[1][1], "no formula in a spreadsheet program")
	assert.Equal(t, []string{"3.000", "4.000", "9.000"}, rows[2][4:7])
	assert.Equal(t, "corner 1 of main roof, toward -x -y, at x = 0.000, y = 0.000", rows[2][7])
	assert.Equal(t, []string{"4.000", "-3.000", "5.000"}, rows[2][8:11], "4 m along y is 4 m east, 3 m along x is 3 m south")
	bearing, err := strconv.ParseFloat(rows[2][11], 64)
	require.NoError(t, err)
	assert.InDelta(t, 90+math.Atan2(3, 4)/degree, bearing, 0.005, "deg, printed to 0.01")
}

func TestCellGuard(t *testing.T) {
	for text, want := range map[string]string{
		"=1+1": "'=1+1", "+1": "'+1", "-1": "'-1", "@A1": "'@A1", "\t=1": "'=1", "roof\r\n=1": "roof =1", "roof": "roof", "": "",
	} {
		assert.Equal(t, want, cellGuard(text), "%q", text)
	}
}

func TestFileNamesComeFromNoUsersPath(t *testing.T) {
	for text, want := range map[string]string{
		"../../etc/passwd": "etc-passwd", "main roof": "main-roof", "C:\\x": "c-x", "": "unnamed", "屋上": "unnamed", "nul\x00": "nul",
	} {
		assert.Equal(t, want, slug(text), "%q", text)
	}
	assert.LessOrEqual(t, len(slug(strings.Repeat("ab ", 50))), 33)
}

func TestFiguresInWords(t *testing.T) {
	assert.Equal(t, "12.4 m", metres(12.31), "distances are rounded outward")
	assert.Equal(t, "9.99 m", metres(9.981))
	assert.Equal(t, "0.30 m", metres(0.3))
	assert.Equal(t, "1.0024", ratioText(1.0024))
	assert.Equal(t, "just below 1", ratioText(0.99999))
	assert.Equal(t, "just above 1", ratioText(1.00001))
	assert.Equal(t, "1.00", ratioText(1))
	assert.Equal(t, "below 0.001", ratioText(0.0002))
	assert.Equal(t, "1230", significant(1234, 3))
	assert.Equal(t, "2 antennas", count(2, "antenna"))
	assert.Equal(t, "3 boundaries", count(3, "boundary"))
}
