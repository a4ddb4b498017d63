package reports

import (
	"bytes"
	"math"

	"example.org/standclear/exposure"
)

// featureCollection and feature are written as RFC 7946 has them, with foreign
// members that say what the coordinates are.
type featureCollection struct {
	Type          string    `json:"type"`
	CoordinatesIn string    `json:"coordinates_in"`
	Site          string    `json:"site"`
	Program       string    `json:"program"`
	Caution       string    `json:"caution"`
	Features      []feature `json:"features"`
}

type feature struct {
	Type       string         `json:"type"`
	Properties map[string]any `json:"properties"` // written in the order of their names
	Geometry   any            `json:"geometry"`
}

// point is a GeoJSON point.
type point struct {
	Type        string     `json:"type"`
	Coordinates [2]float64 `json:"coordinates"`
}

// GeoJSON returns the keep-out lines, inner polygons, antennas and places as a
// GeoJSON feature collection: in site metres, or in WGS 84 longitude and
// latitude (RFC 7946) where the site has a position. The lines of a vertical
// section lie in its plane: in site metres their coordinates are the distance
// along the section and the height above the datum, in WGS 84 longitude,
// latitude and height, so that they stand upright where they are.
func GeoJSON(a *exposure.Assessment, wgs84 bool) ([]byte, error) {
	to := func(x, y, z float64) [2]float64 { return [2]float64{x, y} }
	frame := "site metres: x east or along the site's own grid, y north, not longitude and latitude"
	if wgs84 {
		frame = "WGS 84 longitude and latitude in degrees"
		to = func(x, y, z float64) [2]float64 {
			lat, lon, _ := exposure.SiteToGeodetic(a.Site.About, exposure.Point{X: x, Y: y, Z: z})
			return [2]float64{degrees(lon), degrees(lat)}
		}
	}
	c := featureCollection{
		Type: "FeatureCollection", CoordinatesIn: frame, Site: a.SiteName, Program: a.Program, Caution: footerCaution,
	}
	add := func(geometry any, properties map[string]any) {
		c.Features = append(c.Features, feature{"Feature", properties, geometry})
	}
	spot := func(x, y, z float64) point { return point{"Point", to(x, y, z)} }
	for _, z := range a.Zones {
		if z.Section != nil {
			continue
		}
		height := 0.0
		if s := surfaceOf(a, z); s != nil {
			height = s.Z
		}
		for _, part := range []struct {
			kind  string
			area  float64
			shape exposure.MultiPolygon
		}{{"keep-out", z.OuterAreaM2, z.Outer}, {"certainly above", z.InnerAreaM2, z.Inner}} {
			add(polygons(part.shape, height, to), map[string]any{
				"kind": part.kind, "surface": z.Surface, "class": z.Class, "area_m2": part.area, "z_m": height,
				"body_from_m": z.FromM, "body_to_m": z.ToM, "share": z.Share, "level": z.Level, "resolution_m": z.ResolutionM,
				"covered": z.Covered, "verdict": verdictWords(zoneVerdict(z)), "reason": z.Reason,
			})
		}
	}
	for _, c := range cuts(a) {
		for _, z := range c.zones {
			for _, part := range []struct {
				kind  string
				area  float64
				shape exposure.MultiPolygon
			}{{"section keep-out", z.OuterAreaM2, z.Outer}, {"section certainly above", z.InnerAreaM2, z.Inner}} {
				var geometry any = polygons(part.shape, 0, func(x, y, _ float64) [2]float64 { return [2]float64{x, y} })
				in := "distance along the section from its start, and height above the site datum, in metres"
				if wgs84 {
					geometry = upright(part.shape, c.section, a.Site.About)
					in = "WGS 84 longitude and latitude in degrees, and height above the site datum in metres"
				}
				add(geometry, map[string]any{
					"kind": part.kind, "through": z.Through, "class": z.Class, "area_m2": part.area, "coordinates_in": in,
					"x1_m": c.section.X1M, "y1_m": c.section.Y1M, "x2_m": c.section.X2M, "y2_m": c.section.Y2M,
					"from_z_m": c.section.FromZM, "to_z_m": c.section.ToZM, "share": z.Share, "level": z.Level, "resolution_m": z.ResolutionM,
					"covered": z.Covered, "verdict": verdictWords(zoneVerdict(z)), "reason": z.Reason,
				})
			}
		}
	}
	if a.Site != nil {
		for _, s := range a.Site.Sources {
			add(spot(s.Position.X, s.Position.Y, s.Position.Z), map[string]any{
				"kind": "antenna", "id": s.ID, "operator": s.Operator, "z_m": s.Position.Z,
				"azimuth_deg": math.Mod(s.Pose.AzimuthRad/degree+360, 360), "frequency_hz": s.FrequencyHz, "state": string(s.State),
			})
		}
	}
	for _, p := range a.Points {
		verdicts := map[string]string{}
		for _, r := range p.Ratios {
			verdicts[r.Class] = verdictFull(r.Verdict, r.Reason)
		}
		add(spot(p.XM, p.YM, p.ZM), map[string]any{"kind": "place", "id": p.ID, "z_m": p.ZM, "class": p.Class, "verdicts": verdicts})
	}
	// One feature a line: a person can find one, and a comparison shows it.
	var out bytes.Buffer
	features := c.Features
	c.Features = nil
	head, err := compact(c)
	if err != nil {
		return nil, err
	}
	out.Write(bytes.TrimSuffix(head, []byte("null}")))
	out.WriteByte('[')
	for i, f := range features {
		text, err := compact(f)
		if err != nil {
			return nil, err
		}
		if i > 0 {
			out.WriteByte(',')
		}
		out.WriteByte('\n')
		out.Write(text)
	}
	out.WriteString("\n]}\n")
	return out.Bytes(), nil
}

// solid is a GeoJSON multipolygon with heights.
type solid struct {
	Type        string           `json:"type"`
	Coordinates [][][][3]float64 `json:"coordinates"`
}

// upright stands the rings of a section's plane where they are.
func upright(m exposure.MultiPolygon, line exposure.Section, about exposure.About) solid {
	out := solid{"MultiPolygon", [][][][3]float64{}}
	for _, rings := range m {
		var p [][][3]float64
		for _, ring := range rings {
			r := make([][3]float64, len(ring))
			for i, v := range ring {
				x, y := onLine(line, v[0])
				lat, lon, _ := exposure.SiteToGeodetic(about, exposure.Point{X: x, Y: y, Z: v[1]})
				r[i] = [3]float64{degrees(lon), degrees(lat), v[1]}
			}
			p = append(p, r)
		}
		out.Coordinates = append(out.Coordinates, p)
	}
	return out
}

// degrees drops digits beyond a hundredth of a millimetre on the ground.
func degrees(v float64) float64 { return math.Round(v*1e10) / 1e10 }

// polygons turns rings of site metres into those of another frame.
func polygons(m exposure.MultiPolygon, height float64, to func(x, y, z float64) [2]float64) exposure.MultiPolygon {
	out := exposure.MultiPolygon{}
	for _, rings := range m {
		var p []exposure.Ring
		for _, ring := range rings {
			r := make(exposure.Ring, len(ring))
			for i, v := range ring {
				r[i] = to(v[0], v[1], height)
			}
			p = append(p, r)
		}
		out = append(out, p)
	}
	return out
}
