package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/wroge/wgs84"
	"pgregory.net/rapid"
)

// The oracle is github.com/wroge/wgs84 v1.1.7, which turns longitude, latitude
// and height into geocentric coordinates on its own. Our site coordinates must
// be the projections of its geocentric differences on the east, north and up of
// the position, those axes being taken from its own coordinates by difference.
func TestGeodeticAgainstAnIndependentLibrary(t *testing.T) {
	toXYZ := wgs84.LonLat().To(wgs84.WGS84().XYZ())
	xyz := func(lat, lon, h float64) Point {
		x, y, z := toXYZ(lon, lat, h)
		return Point{X: x, Y: y, Z: z}
	}
	rapid.Check(t, func(t *rapid.T) {
		about := About{
			HasPosition:    true,
			LatitudeDeg:    rapid.Float64Range(-89, 89).Draw(t, "site latitude"),
			LongitudeDeg:   rapid.Float64Range(-179.9, 179.9).Draw(t, "site longitude"),
			GridBearingRad: rapid.Float64Range(-math.Pi, math.Pi).Draw(t, "grid bearing"),
		}
		p := Point{
			X: rapid.Float64Range(-20e3, 20e3).Draw(t, "x"),
			Y: rapid.Float64Range(-20e3, 20e3).Draw(t, "y"),
			Z: rapid.Float64Range(-100, 500).Draw(t, "z"),
		}
		lat, lon, h := SiteToGeodetic(about, p)
		o := xyz(about.LatitudeDeg, about.LongitudeDeg, 0)
		d := xyz(lat, lon, h).Sub(o)

		// Up is the direction of growing height; east is at right angles to it
		// and to the earth's axis; north completes the frame.
		up := xyz(about.LatitudeDeg, about.LongitudeDeg, 1000).Sub(o).Scale(1e-3)
		east := Point{X: 0, Y: 0, Z: 1}.Cross(up)
		east = east.Scale(1 / east.Norm())
		north := up.Cross(east)
		s, c := math.Sincos(about.GridBearingRad)
		// Tolerance 0.1 mm: geocentric coordinates of 6.4e6 m have 1e-9 m of
		// rounding, the differenced axes 1e-12 of 20 km; nobody sets out closer.
		const tol = 1e-4
		assert.InDelta(t, p.X, d.Dot(east)*c-d.Dot(north)*s, tol)
		assert.InDelta(t, p.Y, d.Dot(east)*s+d.Dot(north)*c, tol)
		assert.InDelta(t, p.Z, d.Dot(up), tol)

		back := GeodeticToSite(about, lat, lon, h)
		assert.InDelta(t, 0, back.Sub(p).Norm(), 1e-6, "round trip, m: rounding of 6.4e6 m geocentric coordinates")
	})
}

// One minute of latitude is a nautical mile: 1852 m by definition, within the
// ellipsoid's 0.5 % (common practice, no source).
func TestGeodeticMinuteOfLatitude(t *testing.T) {
	for _, lat := range []float64{-60, 0, 45, 80} {
		p := GeodeticToSite(About{LatitudeDeg: lat}, lat+1.0/60, 0, 0)
		assert.InEpsilon(t, 1852, p.Y, 0.006)
		assert.InDelta(t, 0, p.X, 1e-6)
	}
}

// A grid whose y axis points east has its x axis pointing south.
func TestGeodeticGridBearing(t *testing.T) {
	about := About{LatitudeDeg: 52, LongitudeDeg: 5, GridBearingRad: math.Pi / 2}
	lat, lon, _ := SiteToGeodetic(about, Point{Y: 100})
	assert.InDelta(t, 52, lat, 1e-7, "deg: the parallel leaves the plane by 1e-8 deg at 100 m")
	assert.Greater(t, lon, 5.001)
	lat, lon, _ = SiteToGeodetic(about, Point{X: 100})
	assert.Less(t, lat, 51.9992)
	assert.InDelta(t, 5, lon, 1e-9, "deg: on the site's own meridian, rounding only")
}
