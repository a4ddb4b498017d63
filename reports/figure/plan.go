package figure

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"example.org/standclear/exposure"
)

// PlanData is what a plan of one surface shows.
type PlanData struct {
	Site    *exposure.Site
	Surface string // its id
	// Classes settle, by their order, the line and the hatching of each class;
	// give the same order to every figure of a report.
	Classes []string
	Zones   []exposure.Zone        // those of other surfaces are passed over
	Points  []exposure.PointResult // those on other surfaces are passed over
	Grid    *exposure.RatioGrid    // contour lines of the ratio; nil = none
	Caution string                 // at the foot; "" = Caution
}

// Plan draws one surface seen from above, in site metres: its edge, keep-out
// lines, the areas certainly above the limits, antennas and places.
func Plan(d PlanData) (f *Figure, err error) {
	defer caught(&err)
	if d.Site == nil {
		return nil, errors.New("figure: a plan needs a site")
	}
	var surface *exposure.Surface
	for i := range d.Site.Surfaces {
		if d.Site.Surfaces[i].ID == d.Surface {
			surface = &d.Site.Surfaces[i]
		}
	}
	if surface == nil {
		return nil, fmt.Errorf("figure: the site has no surface %q", d.Surface)
	}
	var outline [][]pt
	for _, r := range surface.Outline {
		outline = append(outline, []pt(r))
	}
	extent, ok := around(outline...)
	if !ok || !(extent.W() > 0) || !(extent.H() > 0) {
		return nil, fmt.Errorf("figure: surface %q has no area", d.Surface)
	}
	// Antennas just beside the surface belong to the picture.
	reach := 0.25 * math.Max(extent.W(), extent.H())
	seen, far := extent, 0
	for i := range d.Site.Sources {
		p := d.Site.Sources[i].Position
		if q := (pt{p.X, p.Y}); extent.grow(reach).contains(q) {
			b, _ := around([]pt{{seen.X0, seen.Y0}, {seen.X1, seen.Y1}, q})
			seen = b
		} else {
			far++
		}
	}
	seen = seen.grow(0.07 * math.Max(seen.W(), seen.H()))

	title := "Plan: surface " + surface.ID
	if d.Site.About.Name != "" {
		title = d.Site.About.Name + ": plan of surface " + surface.ID
	}
	if d.Grid != nil && d.Grid.Class != "" {
		title += ", exposure ratio for " + d.Grid.Class
	}
	p := newPage()
	m := &chart{page: p, site: d.Site, classes: d.Classes, zones: zonesOf(d.Zones, surface.ID)}
	p.heading(title, bodySentence(surface), m.resolutionSentence())

	side := seen.W() < 1.2*seen.H() // the key stands beside a tall plan, beneath a wide one
	m.panel(seen, side)
	m.outline = openRings(m.rings(exposure.MultiPolygon{surface.Outline}))
	m.field(d.Grid, m.outline)
	for i := range d.Site.Surfaces {
		if o := &d.Site.Surfaces[i]; o != surface {
			for _, r := range o.Outline {
				closed := append([]pt(nil), r...)
				p.lines(m.clipped(closed), otherStroke)
			}
			m.nameSurface(o)
		}
	}
	m.areas()
	p.closed(m.outline, edgeStroke)
	m.entries = append(m.entries, entry{lineSample(edgeStroke), "edge of the surface"})
	if len(d.Site.Surfaces) > 1 {
		m.entries = append(m.entries, entry{lineSample(otherStroke), "edges of other surfaces"})
	}
	m.antennas()
	m.places(d.Points, surface)
	xt := linearTicks(m.X0, m.X1, int(m.Box.W()/45))
	yt := linearTicks(m.Y0, m.Y1, int(m.Box.H()/35))
	m.draw(p.sheet, xt, yt, "x [m]", "y [m]", false)
	m.frame(p.sheet)
	m.writeLabels()
	m.key(side, true)
	notes := []string{m.lostNote()}
	if far > 0 {
		notes = append(notes, fmt.Sprintf("%s outside this figure; computed all the same.", count(far, "antenna row lies", "antenna rows lie")))
	}
	return p.foot(title, append(notes, cautionOr(d.Caution))...), nil
}

// nameSurface writes the name of a neighbouring surface within it, where there
// is room.
func (m *chart) nameSurface(o *exposure.Surface) {
	rings := openRings(m.rings(exposure.MultiPolygon{o.Outline}))
	b, ok := around(rings...)
	if c := b.centre(); ok && m.Box.contains(c) && within(rings, c) && b.W() > labelFace.width(o.ID) {
		m.tags = append(m.tags, tag{text: shorten(o.ID, 24), face: contourFace, seats: []pt{c, {c[0], c[1] + 12}, {c[0], c[1] - 12}, {c[0], c[1] + 24}, {c[0], c[1] - 24}}})
	}
}

func zonesOf(zones []exposure.Zone, surface string) []exposure.Zone {
	var out []exposure.Zone
	for _, z := range zones {
		if z.Surface == surface && z.Section == nil {
			out = append(out, z)
		}
	}
	return out
}

func cautionOr(c string) string {
	if c == "" {
		return Caution
	}
	return c
}

func bodySentence(s *exposure.Surface) string {
	t := fmt.Sprintf("Surface at z = %s m. ", length(s.Z))
	if s.To > s.From {
		t += fmt.Sprintf("Body heights %s m to %s m above it.", length(s.From), length(s.To))
	} else {
		t += fmt.Sprintf("Height %s m above it.", length(s.From))
	}
	if s.Class != "" {
		t += " Open to: " + s.Class + "."
	}
	return t
}

// length writes metres to the centimetre, without idle zeros.
func length(m float64) string {
	s := fmt.Sprintf("%.2f", m)
	s = strings.TrimSuffix(strings.TrimRight(s, "0"), ".")
	if s == "-0" {
		s = "0"
	}
	return minus(s)
}

func count(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
