package sitefile

import (
	"strings"
	"testing"
	"testing/fstest"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

const waypoints = `<?xml version="1.0"?>
<gpx version="1.1" creator="test" xmlns="http://www.topografix.com/GPX/1/1">
<wpt lat="48.001" lon="11"><ele>512.3</ele><name>hill</name><desc>bench</desc><type>public</type></wpt>
<wpt lat="48.0" lon="11.0001"><name>roof</name></wpt>
<trk><trkseg><trkpt lat="1" lon="2"/></trkseg></trk>
</gpx>`

// Waypoints (GPX 1.1, wptType) are places: a thousandth of a degree of latitude
// is 111.2 m at 48 deg north (WGS 84 meridian arc; 0.1 m).
func TestWaypointsArePlaces(t *testing.T) {
	site, s, err := LoadSurveyFS(surveyFS("day.gpx", waypoints,
		"surfaces.csv", "id,outline,z [m],class\ndeck,\"POLYGON((-20 -20, 20 -20, 20 20, -20 20, -20 -20))\",4,public\n",
		"readings.csv", "id,place,height [m],instrument,E [V/m]\na,hill,1.5,B,1\nb,roof,1.5,B,1\n"), Options{})
	require.NoError(t, err)
	require.Len(t, site.Places, 3)
	hill, roof := site.Places[1], site.Places[2]
	assert.InDelta(t, 111.2, hill.At.Y, 0.1)
	assert.Zero(t, hill.At.Z, "a height above sea level is not one above the datum")
	assert.Equal(t, "public", hill.Class)
	assert.Equal(t, "bench", hill.Note)
	assert.Equal(t, "deck", roof.On)
	assert.Equal(t, 4.0, roof.At.Z)
	assert.InDelta(t, 5.5, s.Readings[1].At.At.Z, 1e-12)
	var said []string
	for _, w := range site.Inputs.Warnings {
		if w.Place == "day.gpx" {
			said = append(said, w.Message)
		}
	}
	assert.Len(t, said, 3)
	assert.Contains(t, strings.Join(said, "\n"), `the waypoint "roof" has no type`)
	assert.Equal(t, "day.gpx", site.Inputs.Files[0].Name)
}

func TestWaypointsAtFault(t *testing.T) {
	for text, want := range map[string]string{
		"no xml": "this is not a GPX file",
		strings.Replace(waypoints, "<name>hill</name>", "", 1):                   "day.gpx: waypoint 1: the waypoint has no name",
		strings.Replace(waypoints, "<name>hill</name>", "<name>door</name>", 1):  `"door" is the name of another place already`,
		strings.Replace(waypoints, `lat="48.001"`, `lat="98"`, 1):                "is no latitude and longitude",
		strings.Replace(waypoints, `lat="48.001"`, `lat="49"`, 1):                "lies 111 km from the site",
		strings.Replace(waypoints, "<type>public</type>", "<type>pub</type>", 1): `the limit table has no "pub"`,
	} {
		_, err := LoadFS(surveyFS("day.gpx", text), Options{})
		assert.ErrorContains(t, err, want)
	}
	fsys := surveyFS("day.gpx", waypoints)
	fsys["site.csv"] = &fstest.MapFile{Data: []byte("item,value\nname,x\n")}
	_, err := LoadFS(fsys, Options{})
	assert.ErrorContains(t, err, "the site has no position of its own")
}
