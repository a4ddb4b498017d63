package reports

import (
	"bytes"
	"fmt"
	"image/color"

	"example.org/standclear/exposure"
	"github.com/twpayne/go-kml/v3"
)

// KML returns the keep-out volumes, antennas and places for a globe viewer. A
// volume stands at its true height: from where the body begins over the surface
// to where it ends, with its walls. Heights are relative to the ground, which
// is taken to be the site's datum. The site must have a position.
func KML(a *exposure.Assessment) ([]byte, error) {
	at := func(x, y, z float64) kml.Coordinate {
		lat, lon, _ := exposure.SiteToGeodetic(a.Site.About, exposure.Point{X: x, Y: y, Z: z})
		return kml.Coordinate{Lon: degrees(lon), Lat: degrees(lat), Alt: z}
	}
	document := kml.Document(
		kml.Name(oneLine(a.SiteName)),
		kml.Description(footerCaution+" Program: "+a.Program+". Heights are above the site's datum, taken as the ground."),
		kml.SharedStyle("keep-out",
			kml.LineStyle(kml.Color(color.RGBA{0x20, 0x20, 0x20, 0xff}), kml.Width(2)),
			kml.PolyStyle(kml.Color(color.RGBA{0x30, 0x30, 0x30, 0x70}))),
		kml.SharedStyle("antenna", kml.IconStyle(kml.Scale(0.7)), kml.LabelStyle(kml.Scale(0.8))),
		kml.SharedStyle("place", kml.IconStyle(kml.Scale(0.5)), kml.LabelStyle(kml.Scale(0.8))),
	)
	volumes := kml.Folder(kml.Name("keep-out volumes"))
	for _, z := range a.Zones {
		s := surfaceOf(a, z)
		if s == nil || len(z.Outer) == 0 {
			continue
		}
		shape := kml.MultiGeometry()
		for _, rings := range z.Outer {
			for _, p := range walls(rings, s.Z+z.FromM, s.Z+z.ToM, at) {
				shape.Append(p)
			}
		}
		volumes.Append(kml.Placemark(
			kml.Name(oneLine(fmt.Sprintf("%s, class %s", z.Surface, z.Class))),
			kml.Description(fmt.Sprintf("Keep-out volume from %.2f m to %.2f m above the datum; the line %s. Verdict: %s.",
				s.Z+z.FromM, s.Z+z.ToM, z.Encloses(), verdictFull(zoneVerdict(z), z.Reason))),
			kml.StyleURL("#keep-out"),
			// One class at a time can be seen: the others are switched on by hand.
			kml.Visibility(z.Class == s.Class),
			shape,
		))
	}
	document.Append(volumes)
	if planes := cuts(a); len(planes) > 0 {
		folder := kml.Folder(kml.Name("vertical sections"))
		for _, c := range planes {
			for _, z := range c.zones {
				if len(z.Outer) == 0 {
					continue
				}
				shape := kml.MultiGeometry()
				for _, rings := range z.Outer {
					shape.Append(standing(rings, c.section, at))
				}
				folder.Append(kml.Placemark(
					kml.Name(oneLine(fmt.Sprintf("%s, class %s", cutName(z), z.Class))),
					kml.Description(fmt.Sprintf("Keep-out line on the vertical plane from %.2f m to %.2f m above the datum; it %s. Verdict: %s.",
						c.section.FromZM, c.section.ToZM, z.Encloses(), verdictFull(zoneVerdict(z), z.Reason))),
					kml.StyleURL("#keep-out"),
					// Planes through every housing hide one another: they are
					// switched on by hand, but for the one that was asked for.
					kml.Visibility(z.Through == "" && z.Class == c.zones[0].Class),
					shape,
				))
			}
		}
		document.Append(folder)
	}
	antennas := kml.Folder(kml.Name("antennas"))
	for _, s := range a.Site.Sources {
		antennas.Append(kml.Placemark(kml.Name(oneLine(s.ID)), kml.StyleURL("#antenna"),
			kml.Description(fmt.Sprintf("azimuth %.1f deg from the site's y axis, %s MHz", s.Pose.AzimuthRad/degree, significant(s.FrequencyHz/1e6, 6))),
			kml.Point(kml.AltitudeMode(kml.AltitudeModeRelativeToGround), kml.Coordinates(at(s.Position.X, s.Position.Y, s.Position.Z)))))
	}
	document.Append(antennas)
	places := kml.Folder(kml.Name("places"))
	for _, p := range a.Points {
		text := ""
		for _, r := range p.Ratios {
			text = joined(text, r.Class+": "+verdictFull(r.Verdict, r.Reason)+", ratio "+ratioText(r.ExposureRatio))
		}
		places.Append(kml.Placemark(kml.Name(oneLine(p.ID)), kml.StyleURL("#place"), kml.Description(text),
			kml.Point(kml.AltitudeMode(kml.AltitudeModeRelativeToGround), kml.Coordinates(at(p.XM, p.YM, p.ZM+p.HeightM)))))
	}
	document.Append(places)
	var out bytes.Buffer
	err := kml.KML(document).WriteIndent(&out, "", " ")
	return out.Bytes(), err
}

// standing returns a polygon of a section's plane, upright where it is.
func standing(rings []exposure.Ring, line exposure.Section, at func(x, y, z float64) kml.Coordinate) kml.Element {
	p := kml.Polygon(kml.AltitudeMode(kml.AltitudeModeRelativeToGround))
	for i, ring := range rings {
		var c []kml.Coordinate
		for _, v := range ring {
			x, y := onLine(line, v[0])
			c = append(c, at(x, y, v[1]))
		}
		linear := kml.LinearRing(kml.Coordinates(c...))
		if i == 0 {
			p.Append(kml.OuterBoundaryIs(linear))
		} else {
			p.Append(kml.InnerBoundaryIs(linear))
		}
	}
	return p
}

// walls returns floor, roof and walls of the volume over a polygon.
func walls(rings []exposure.Ring, from, to float64, at func(x, y, z float64) kml.Coordinate) []kml.Element {
	flat := func(z float64) kml.Element {
		p := kml.Polygon(kml.AltitudeMode(kml.AltitudeModeRelativeToGround))
		for i, ring := range rings {
			var c []kml.Coordinate
			for _, v := range ring {
				c = append(c, at(v[0], v[1], z))
			}
			linear := kml.LinearRing(kml.Coordinates(c...))
			if i == 0 {
				p.Append(kml.OuterBoundaryIs(linear))
			} else {
				p.Append(kml.InnerBoundaryIs(linear))
			}
		}
		return p
	}
	out := []kml.Element{flat(to)}
	if to > from {
		out = append(out, flat(from))
		for _, ring := range rings {
			for i := 1; i < len(ring); i++ {
				a, b := ring[i-1], ring[i]
				out = append(out, kml.Polygon(kml.AltitudeMode(kml.AltitudeModeRelativeToGround),
					kml.OuterBoundaryIs(kml.LinearRing(kml.Coordinates(
						at(a[0], a[1], from), at(b[0], b[1], from), at(b[0], b[1], to), at(a[0], a[1], to), at(a[0], a[1], from))))))
			}
		}
	}
	return out
}
