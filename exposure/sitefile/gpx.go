package sitefile

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"example.org/standclear/exposure"
)

// waypoint is a wpt element of a GPX file (GPX 1.1 schema, wptType): a second
// source of places. name is the place's id, type the class of people that may be
// there.
type waypoint struct {
	Lat  string `xml:"lat,attr"`
	Lon  string `xml:"lon,attr"`
	Ele  string `xml:"ele"`
	Name string `xml:"name"`
	Type string `xml:"type"`
	Desc string `xml:"desc"`

	file string
	n    int // from one, in the order of the file
}

// gpx reads the waypoints of a GPX file.
func (l *loader) gpx(file string, data []byte) {
	l.record(file, data)
	var doc struct {
		XMLName xml.Name   `xml:"gpx"`
		Points  []waypoint `xml:"wpt"`
	}
	if err := xml.NewDecoder(bytes.NewReader(data)).Decode(&doc); err != nil {
		l.faults = append(l.faults, Fault{File: file, Message: fmt.Sprintf("this is not a GPX file that can be read (%s); export the waypoints again, or take the file out", err)})
		return
	}
	if len(doc.Points) == 0 {
		l.warn(file, "", "the file has no waypoint; tracks and routes are not read")
	}
	for i, w := range doc.Points {
		w.file, w.n = file, i+1
		w.Name, w.Type = strings.TrimSpace(w.Name), strings.TrimSpace(w.Type)
		l.waypoints = append(l.waypoints, w)
	}
}

// waypointPlaces turns waypoints into places where a person stands: on the
// highest surface whose outline holds the point, else at the datum. A height
// above sea level is no height above the site's datum, so that ele is not used.
func (l *loader) waypointPlaces(table []exposure.Place) []exposure.Place {
	const standing = 2 // m, the height that a body fills
	var out []exposure.Place
	for _, w := range l.waypoints {
		fault := func(text, format string, args ...any) {
			l.faults = append(l.faults, Fault{File: w.file, Column: fmt.Sprintf("waypoint %d", w.n), Text: text, Message: fmt.Sprintf(format, args...)})
		}
		lat, err1 := strconv.ParseFloat(strings.TrimSpace(w.Lat), 64)
		lon, err2 := strconv.ParseFloat(strings.TrimSpace(w.Lon), 64)
		same := func(p exposure.Place) bool { return p.ID == w.Name }
		switch {
		case w.Name == "":
			fault("", "the waypoint has no name; name it, since readings call it so")
			continue
		case slices.ContainsFunc(table, same) || slices.ContainsFunc(out, same):
			fault(w.Name, "%q is the name of another place already; give each its own", w.Name)
			continue
		case err1 != nil || err2 != nil || !(lat >= -90 && lat <= 90 && lon >= -180 && lon <= 180):
			fault(w.Lat+", "+w.Lon, "%q, %q is no latitude and longitude in degrees; export the waypoints again", w.Lat, w.Lon)
			continue
		case !l.about.HasPosition:
			fault(w.Name, "the site has no position of its own; write its latitude and longitude in the site table")
			continue
		case w.Type != "" && len(l.classes) > 0 && !slices.Contains(l.classes, w.Type):
			fault(w.Type, "the type is the class of people that may be there, and the limit table has no %q%s", w.Type, didYouMean(w.Type, l.classes))
			continue
		}
		at := exposure.GeodeticToSite(l.about, lat, lon, 0)
		if d := at.Norm(); d > farFromSiteM {
			fault(w.Name, "the waypoint lies %.0f km from the site; check it, or take it out", d/1000)
			continue
		}
		p := exposure.Place{ID: w.Name, At: exposure.Point{X: at.X, Y: at.Y}, To: standing, Class: w.Type, WallLoss: 1, Note: strings.TrimSpace(w.Desc)}
		where := "at the datum: no surface holds it"
		for _, s := range l.surfaces {
			if l.outlineOf(s).contains(at.X, at.Y) && (p.On == "" || s.Z > p.At.Z) {
				p.On, p.At.Z = s.ID, s.Z
				where = fmt.Sprintf("on the surface %q", s.ID)
			}
		}
		l.warn(w.file, "", "the waypoint %q is taken to stand %s; a height above sea level is not read", p.ID, where)
		if p.Class == "" {
			l.warn(w.file, "", "the waypoint %q has no type: write the class of people that may be there", p.ID)
		}
		out = append(out, p)
	}
	return out
}
