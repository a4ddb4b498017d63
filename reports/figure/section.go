package figure

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"example.org/standclear/exposure"
)

// SectionData is what a vertical section shows.
type SectionData struct {
	Site    *exposure.Site
	Section exposure.Section
	Through string              // the housing it is laid through; "" = none
	Classes []string            // their order settles the line and the hatching of each
	Zones   []exposure.Zone     // those of other sections are passed over
	Grid    *exposure.RatioGrid // in distance along the section and height; nil = none
	// WithinM is how far from the plane an antenna may stand and still be drawn
	// in it, in m; 0 = 1 m.
	WithinM float64
	Caution string // at the foot; "" = Caution
}

// Section draws a vertical plane through the site: distance along it from its
// first point, and height above the datum, in metres at the same scale.
// Surfaces are cut as lines; an antenna near the plane is drawn as an upright of
// its length with an arrow along its boresight as seen in the plane.
func Section(d SectionData) (f *Figure, err error) {
	defer caught(&err)
	if d.Site == nil {
		return nil, errors.New("figure: a section needs a site")
	}
	sec := d.Section
	long := math.Hypot(sec.X2M-sec.X1M, sec.Y2M-sec.Y1M)
	if !isFinite(long) || !(long > 0) || !(sec.ToZM > sec.FromZM) || !isFinite(sec.ToZM-sec.FromZM) {
		return nil, errors.New("figure: a section needs two points apart and a range of heights")
	}
	if !(d.WithinM > 0) {
		d.WithinM = 1
	}
	ux, uy := (sec.X2M-sec.X1M)/long, (sec.Y2M-sec.Y1M)/long
	title := "Vertical section"
	if d.Site.About.Name != "" {
		title = d.Site.About.Name + ": vertical section"
	}
	if d.Through != "" {
		title += " through " + d.Through
	}
	if d.Grid != nil && d.Grid.Class != "" {
		title += ", exposure ratio for " + d.Grid.Class
	}
	p := newPage()
	m := &chart{page: p, site: d.Site, classes: d.Classes}
	for _, z := range d.Zones {
		if z.Section != nil && *z.Section == sec {
			m.zones = append(m.zones, z)
		}
	}
	azimuth := math.Mod(math.Atan2(ux, uy)*180/math.Pi+360, 360)
	p.heading(title, fmt.Sprintf("From x = %s m, y = %s m to x = %s m, y = %s m: toward %s° from the y axis. Seen with the start at the left.",
		length(sec.X1M), length(sec.Y1M), length(sec.X2M), length(sec.Y2M), length(azimuth)), m.resolutionSentence())
	extent := Box{0, sec.FromZM, long, sec.ToZM}
	side := extent.W() < 1.2*extent.H()
	m.panel(extent, side)
	// The plane ends where the section ends; the panel may be wider.
	shown, _ := around(m.line([]pt{{0, sec.FromZM}, {long, sec.ToZM}}))
	m.field(d.Grid, openRings([][]pt{shown.ring()}))
	m.areas()
	m.cutSurfaces(sec, ux, uy, long)
	if g := d.Site.Ground; g.Method == exposure.GroundFresnel {
		if l := m.clipped([]pt{{m.X0, g.Z}, {m.X1, g.Z}}); len(l) > 0 {
			m.lines(l, stroke{width: 1, dash: []float64{1, 2}})
			m.entries = append(m.entries, entry{lineSample(stroke{width: 1, dash: []float64{1, 2}}), "reflecting ground"})
		}
	}
	outside := m.antennasIn(d, ux, uy)
	xt := linearTicks(m.X0, m.X1, int(m.Box.W()/45))
	yt := linearTicks(m.Y0, m.Y1, int(m.Box.H()/35))
	m.draw(p.sheet, xt, yt, "distance along the section [m]", "height above datum [m]", false)
	m.frame(p.sheet)
	m.writeLabels()
	m.key(side, false)
	note := fmt.Sprintf("Antennas within %s m of the plane are drawn.", length(d.WithinM))
	if outside > 0 {
		note += fmt.Sprintf(" %s elsewhere; computed all the same.", count(outside, "row stands", "rows stand"))
	}
	return p.foot(title, m.lostNote(), note, cautionOr(d.Caution)), nil
}

// cutSurfaces draws each surface as the line in which the plane cuts it.
func (m *chart) cutSurfaces(sec exposure.Section, ux, uy, long float64) {
	any := false
	for i := range m.site.Surfaces {
		o := &m.site.Surfaces[i]
		var cuts []float64
		for _, r := range o.Outline {
			for k := 0; k+1 < len(r); k++ {
				// Across the plane: positive to the left of the section's direction.
				a := ux*(r[k][1]-sec.Y1M) - uy*(r[k][0]-sec.X1M)
				b := ux*(r[k+1][1]-sec.Y1M) - uy*(r[k+1][0]-sec.X1M)
				if (a > 0) == (b > 0) {
					continue
				}
				q := between(pt(r[k]), pt(r[k+1]), a/(a-b))
				cuts = append(cuts, ux*(q[0]-sec.X1M)+uy*(q[1]-sec.Y1M))
			}
		}
		slices.Sort(cuts)
		var pieces [][]pt
		for k := 0; k+1 < len(cuts); k += 2 {
			l := m.clipped([]pt{{math.Max(cuts[k], 0), o.Z}, {math.Min(cuts[k+1], long), o.Z}})
			if cuts[k] >= long || cuts[k+1] <= 0 || len(l) == 0 {
				continue
			}
			any = true
			m.lines(l, stroke{width: 2.2, grey: 60})
			m.clutter.lines(l, 0.5, false)
			pieces = append(pieces, l[0])
		}
		m.nameCuts(shorten(o.ID, 28), pieces)
	}
	if any {
		m.entries = append(m.entries, entry{lineSample(stroke{width: 2.2, grey: 60}), "surface, cut"})
	}
}

// nameCuts names the longest piece of a cut surface, and every other that is
// longer than its name twice over.
func (m *chart) nameCuts(name string, pieces [][]pt) {
	longest := 0
	for i, l := range pieces {
		if pathLength(l) > pathLength(pieces[longest]) {
			longest = i
		}
	}
	for i, l := range pieces {
		if i != longest && pathLength(l) < 2*contourFace.width(name) {
			continue
		}
		var seats []pt
		for _, t := range []float64{0.5, 0.3, 0.7, 0.15, 0.85} {
			c := between(l[0], l[len(l)-1], t)
			seats = append(seats, pt{c[0], c[1] - 7}, pt{c[0], c[1] - 16}, pt{c[0], c[1] + 7})
		}
		m.tags = append(m.tags, tag{text: name, face: contourFace, seats: seats})
	}
}

// antennasIn draws the antennas near the plane and returns how many rows are
// not in the picture.
func (m *chart) antennasIn(d SectionData, ux, uy float64) (outside int) {
	type mark struct {
		centre, low, high, tip pt
		ids                    []string
	}
	var marks []*mark
	for i := range m.site.Sources {
		s := &m.site.Sources[i]
		dx, dy := s.Position.X-d.Section.X1M, s.Position.Y-d.Section.Y1M
		c := m.at(pt{dx*ux + dy*uy, s.Position.Z})
		if math.Abs(dy*ux-dx*uy) > d.WithinM || !m.Box.contains(c) {
			outside++
			continue
		}
		ax := s.Pose.Axes()
		perM := m.Box.W() / (m.X1 - m.X0)
		// Half the body, as its shadow on the plane.
		h := math.Max(s.LengthM, s.DiameterM) / 2 * perM
		ox, oz := h*(ax.Up.X*ux+ax.Up.Y*uy), h*ax.Up.Z
		q := mark{centre: c, low: pt{c[0] - ox, c[1] - oz}, high: pt{c[0] + ox, c[1] + oz}, tip: c}
		if !round(s) {
			bx, bz := ax.Boresight.X*ux+ax.Boresight.Y*uy, ax.Boresight.Z
			q.tip = pt{c[0] + arrowLength*bx, c[1] + arrowLength*bz}
		}
		var same *mark
		for _, o := range marks {
			if dist(o.centre, q.centre) < 1.5 && dist(o.tip, q.tip) < 3 {
				same = o
				break
			}
		}
		if same == nil {
			same = &q
			marks = append(marks, same)
		}
		same.ids = append(same.ids, s.ID)
	}
	for _, q := range marks {
		m.page.sheet.line([]pt{q.low, q.high}, stroke{width: 5, grey: 255})
		m.page.sheet.line([]pt{q.low, q.high}, stroke{width: 3.2})
		m.arrow(q.centre, q.tip)
		antennaDot(m.sheet, q.centre)
		m.clutter.lines([][]pt{{q.low, q.high}, {q.centre, q.tip}}, 2, false)
		m.clutter.box(Box{q.centre[0] - 3, q.centre[1] - 3, q.centre[0] + 3, q.centre[1] + 3}, 2)
		t := tag{text: joined(q.ids), anchor: q.tip, face: labelFace, gap: 3.5}
		if q.tip != q.centre {
			t.toward = math.Atan2(q.tip[1]-q.centre[1], q.tip[0]-q.centre[0])
			t.gap = 2
		}
		m.tags = append(m.tags, t)
	}
	if len(marks) > 0 {
		m.entries = append(m.entries, entry{func(s *sheet, b Box) {
			c := b.centre()
			s.line([]pt{{c[0] - 8, b.Y0}, {c[0] - 8, b.Y1}}, stroke{width: 3.2})
			arrowOn(s, pt{c[0] - 8, c[1]}, pt{c[0] - 8 + arrowLength, c[1]})
			antennaDot(s, pt{c[0] - 8, c[1]})
		}, "antenna at its length, its boresight seen in the plane"})
	}
	return outside
}
