package exposure

import "math"

// sectionMarginM is how far a section through a point reaches past the
// outermost antenna or surface: enough to see the boundary close where nothing
// stands.
const sectionMarginM = 10

// SectionThrough returns the vertical plane through a point of the site's x-y
// plane (m) along an azimuth (rad, clockwise from true north), as long as
// the site: to a margin past the outermost antenna or surface on either side.
// Its heights are left to Zones to choose.
func SectionThrough(site *Site, x, y, azimuthRad float64) Section {
	sin, cos := math.Sincos(azimuthRad - site.About.GridBearingRad)
	back, ahead := 0.0, 0.0
	reach := func(px, py float64) {
		along := (px-x)*sin + (py-y)*cos
		back, ahead = math.Min(back, along), math.Max(ahead, along)
	}
	for i := range site.Sources {
		reach(site.Sources[i].Position.X, site.Sources[i].Position.Y)
	}
	for i := range site.Surfaces {
		for _, ring := range site.Surfaces[i].Outline {
			for _, p := range ring {
				reach(p[0], p[1])
			}
		}
	}
	back, ahead = back-sectionMarginM, ahead+sectionMarginM
	return Section{X1M: x + back*sin, Y1M: y + back*cos, X2M: x + ahead*sin, Y2M: y + ahead*cos}
}
