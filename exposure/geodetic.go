package exposure

import (
	"math"

	"example.org/standclear/antenna"
)

// The WGS 84 ellipsoid: semi-major axis in m and flattening. Both are defining
// constants (NIMA TR8350.2, third edition, table 3.1).
const (
	wgs84AxisM      = 6378137.0
	wgs84Flattening = 1 / 298.257223563
)

// wgs84E2 is the square of the first eccentricity, e2 = f (2 - f).
const wgs84E2 = wgs84Flattening * (2 - wgs84Flattening)

// geodeticNotes is the row of the methods table for this file.
var geodeticNotes = []antenna.MethodNote{{
	ID:      "WGS84",
	Name:    "site frame to latitude and longitude",
	Formula: "X = (N+h) cos(lat) cos(lon), Y = (N+h) cos(lat) sin(lon), Z = (N(1-e2)+h) sin(lat), N = a/sqrt(1 - e2 sin^2(lat)); east-north-up by the rotation at the site's position, then by the grid bearing",
	Range:   "sites up to some tens of km across; the site's position is taken to lie on the ellipsoid",
	Errs:    "no side; a site h m above the ellipsoid is drawn 0.16 mm too small for each km across and each m of h",
	Source:  "NIMA TR8350.2, third edition, 1997: defining constants and geodetic to geocentric coordinates; inverse after B. R. Bowring, Survey Review 23 (1976), from memory",
	Check:   "TestGeodeticAgainstAnIndependentLibrary",
}}

// SiteToGeodetic returns the WGS 84 latitude and longitude in degrees, and the
// height in m above the ellipsoid through the site's position, of a point of
// the site's frame.
//
//	east = x cos g + y sin g, north = -x sin g + y cos g
//
// with g the true bearing of the y axis; east, north and up are then turned
// into geocentric coordinates at the site's position and back to the ellipsoid
// (two Bowring steps).
//
// about carries the position and the grid bearing, p is in m. It holds to less
// than a tenth of a millimetre within 100 km of the site. The frame is a plane:
// the ground falls away from z = 0 by 0.08 m at 1 km.
//
// Source: [WGS84].
func SiteToGeodetic(about About, p Point) (latitudeDeg, longitudeDeg, heightM float64) {
	sg, cg := math.Sincos(about.GridBearingRad)
	east, north := p.X*cg+p.Y*sg, -p.X*sg+p.Y*cg
	sinLat, cosLat, sinLon, cosLon := about.sinCos()
	o := geocentric(sinLat, cosLat, sinLon, cosLon, 0)
	x := o.X - sinLon*east - sinLat*cosLon*north + cosLat*cosLon*p.Z
	y := o.Y + cosLon*east - sinLat*sinLon*north + cosLat*sinLon*p.Z
	z := o.Z + cosLat*north + sinLat*p.Z

	const b = wgs84AxisM * (1 - wgs84Flattening)
	const second = wgs84E2 / (1 - wgs84E2) // square of the second eccentricity
	r := math.Hypot(x, y)
	beta := math.Atan2(z*wgs84AxisM, r*b) // parametric latitude
	var lat float64
	for range 2 {
		sb, cb := math.Sincos(beta)
		lat = math.Atan2(z+second*b*sb*sb*sb, r-wgs84E2*wgs84AxisM*cb*cb*cb)
		beta = math.Atan2((1-wgs84Flattening)*math.Sin(lat), math.Cos(lat))
	}
	s, c := math.Sincos(lat)
	// h = r cos(lat) + z sin(lat) - a sqrt(1 - e2 sin^2(lat)) holds at the poles too.
	heightM = r*c + z*s - wgs84AxisM*math.Sqrt(1-wgs84E2*s*s)
	return lat * 180 / math.Pi, math.Atan2(y, x) * 180 / math.Pi, heightM
}

// GeodeticToSite returns the point of the site's frame, in m, of a WGS 84
// latitude and longitude in degrees and a height in m above the ellipsoid
// through the site's position. It is the inverse of SiteToGeodetic and shares
// its formulas and its range.
//
// A position that is stated by latitude and longitude while its height is
// stated above the site's datum takes x and y from here and keeps its height as
// stated.
//
// Source: [WGS84].
func GeodeticToSite(about About, latitudeDeg, longitudeDeg, heightM float64) Point {
	sinLat, cosLat, sinLon, cosLon := about.sinCos()
	o := geocentric(sinLat, cosLat, sinLon, cosLon, 0)
	sp, cp := math.Sincos(latitudeDeg * math.Pi / 180)
	sl, cl := math.Sincos(longitudeDeg * math.Pi / 180)
	d := geocentric(sp, cp, sl, cl, heightM).Sub(o)
	east := -sinLon*d.X + cosLon*d.Y
	north := -sinLat*cosLon*d.X - sinLat*sinLon*d.Y + cosLat*d.Z
	up := cosLat*cosLon*d.X + cosLat*sinLon*d.Y + sinLat*d.Z
	sg, cg := math.Sincos(about.GridBearingRad)
	return Point{X: east*cg - north*sg, Y: east*sg + north*cg, Z: up}
}

// sinCos returns the sines and cosines of the site's position.
func (a About) sinCos() (sinLat, cosLat, sinLon, cosLon float64) {
	sinLat, cosLat = math.Sincos(a.LatitudeDeg * math.Pi / 180)
	sinLon, cosLon = math.Sincos(a.LongitudeDeg * math.Pi / 180)
	return
}

// geocentric returns the earth-centred coordinates, in m, of a position given
// by the sines and cosines of its latitude and longitude and its height in m.
func geocentric(sinLat, cosLat, sinLon, cosLon, heightM float64) antenna.Vec {
	n := wgs84AxisM / math.Sqrt(1-wgs84E2*sinLat*sinLat)
	return antenna.Vec{
		X: (n + heightM) * cosLat * cosLon,
		Y: (n + heightM) * cosLat * sinLon,
		Z: (n*(1-wgs84E2) + heightM) * sinLat,
	}
}
