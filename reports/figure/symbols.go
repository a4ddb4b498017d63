package figure

import (
	"fmt"
	"math"

	"example.org/standclear/exposure"
)

// northArrow draws an arrow toward true north about a middle, with the bearing
// of the y axis where that differs.
func (m *chart) northArrow(c pt) {
	bearing := m.site.About.GridBearingRad
	sin, cos := math.Sincos(-bearing) // clockwise from the y axis
	dir, right := pt{sin, cos}, pt{cos, -sin}
	at := func(f, r float64) pt {
		return pt{c[0] + f*dir[0] + r*right[0], c[1] + f*dir[1] + r*right[1]}
	}
	m.fill([][]pt{{at(13, 0), at(-11, 6), at(-6, 0)}}, 0)
	m.closed([][]pt{{at(13, 0), at(-11, -6), at(-6, 0)}}, stroke{width: 0.7})
	m.text("N", at(18.5, 0), face{size: 8, bold: true}, middle)
	if math.Abs(bearing) > 1e-9 {
		m.text(fmt.Sprintf("y axis bears %s° true", length(bearing*180/math.Pi)),
			pt{c[0] + 28, c[1] - 18}, face{size: 7}, middleLeft)
	}
}

// scaleBar draws a bar of a round length, at most width wide, from its left end.
func (m *chart) scaleBar(at pt, width float64) {
	perM := m.Box.W() / (m.X1 - m.X0)
	total := niceBelow(width / perM)
	b := Box{at[0], at[1], at[0] + total*perM, at[1] + 4}
	half := (b.X0 + b.X1) / 2
	m.fill([][]pt{Box{b.X0, b.Y0, half, b.Y1}.ring()}, 0)
	m.closed([][]pt{b.ring()}, stroke{width: 0.6})
	m.text("0", pt{b.X0, b.Y1 + 3}, tickFace, lowerMiddle)
	m.text(length(total)+" m", pt{b.X1, b.Y1 + 3}, tickFace, lowerMiddle)
}

const arrowLength = 17.0

// antennas draws the antennas of a plan. Rows at the same position with the
// same arrow share one symbol and one label.
func (m *chart) antennas() {
	type mark struct {
		foot, tip pt
		round     bool
		off       bool
		ids       []string
	}
	var marks []*mark
	anyArrow, anyRound, anyStandby := false, false, false
	drawDot := func(q *mark) {
		if q.off {
			standbyDot(m.sheet, q.foot)
		} else {
			antennaDot(m.sheet, q.foot)
		}
	}
	for i := range m.site.Sources {
		s := &m.site.Sources[i]
		foot := m.at(pt{s.Position.X, s.Position.Y})
		if !finite(foot) || !m.Box.contains(foot) {
			continue
		}
		q := mark{foot: foot, tip: foot, round: round(s), off: s.State == exposure.Standby}
		if !q.round {
			sin, cos := math.Sincos(s.Pose.AzimuthRad)
			q.tip = pt{foot[0] + arrowLength*sin, foot[1] + arrowLength*cos}
		}
		anyRound = anyRound || q.round
		anyArrow = anyArrow || !q.round
		anyStandby = anyStandby || q.off
		var same *mark
		for _, o := range marks {
			if dist(o.foot, q.foot) < 1.5 && dist(o.tip, q.tip) < 3 {
				same = o
				break
			}
		}
		if same == nil {
			same = &q
			marks = append(marks, same)
		}
		same.ids = append(same.ids, s.ID)
		same.off = same.off && q.off
	}
	for _, q := range marks {
		if !q.round {
			m.arrow(q.foot, q.tip)
		}
	}
	for _, q := range marks {
		drawDot(q)
		m.clutter.box(Box{q.foot[0] - 3, q.foot[1] - 3, q.foot[0] + 3, q.foot[1] + 3}, 3)
		m.clutter.lines([][]pt{{q.foot, q.tip}}, 3, false)
		t := tag{text: joined(q.ids), anchor: q.tip, face: labelFace, gap: 3.5}
		if !q.round {
			t.toward = math.Atan2(q.tip[1]-q.foot[1], q.tip[0]-q.foot[0])
			t.gap = 2
		}
		m.tags = append(m.tags, t)
	}
	if anyArrow {
		m.entries = append(m.entries, entry{func(s *sheet, b Box) {
			y := (b.Y0 + b.Y1) / 2
			arrowOn(s, pt{b.X0 + 4, y}, pt{b.X0 + 4 + arrowLength, y})
			antennaDot(s, pt{b.X0 + 4, y})
		}, "antenna, with its azimuth"})
	}
	if anyRound {
		m.entries = append(m.entries, entry{markSample(antennaDot), "antenna, the same at every azimuth"})
	}
	if anyStandby {
		text := "antenna on standby, computed as if on"
		if m.site.OnlyOn {
			text = "antenna on standby, left out of the computation"
		}
		m.entries = append(m.entries, entry{markSample(standbyDot), text})
	}
}

// joined lists up to three ids.
func joined(ids []string) string {
	t := ""
	for i, id := range ids {
		if i == 3 {
			return t + fmt.Sprintf(" + %d more", len(ids)-3)
		}
		if i > 0 {
			t += ", "
		}
		t += shorten(id, 24)
	}
	return t
}

func antennaDot(s *sheet, c pt) {
	s.circle(c, 2.6, true, 0, stroke{width: 1, grey: 255})
}

func standbyDot(s *sheet, c pt) {
	s.circle(c, 2.6, true, 255, stroke{width: 1.1})
	s.circle(c, 0.9, true, 0, stroke{})
}

func (m *chart) arrow(from, to pt) { arrowOn(m.sheet, from, to) }

// arrowOn draws an arrow with a white rim, so that it shows on hatching.
func arrowOn(s *sheet, from, to pt) {
	d := dist(from, to)
	if d < 1 {
		return
	}
	ux, uy := (to[0]-from[0])/d, (to[1]-from[1])/d
	neck := pt{to[0] - 5.5*ux, to[1] - 5.5*uy}
	head := []pt{to, {neck[0] - 2.4*uy, neck[1] + 2.4*ux}, {neck[0] + 2.4*uy, neck[1] - 2.4*ux}}
	s.line([]pt{from, neck}, stroke{width: 3, grey: 255})
	s.closed([][]pt{head}, stroke{width: 1.6, grey: 255})
	s.line([]pt{from, neck}, stroke{width: 1.1})
	s.fill([][]pt{head}, 0)
}

// The marks of a place, by its verdict.
func placeWithin(s *sheet, c pt) { s.circle(c, 2.8, true, 255, stroke{width: 0.9}) }

func placeAbove(s *sheet, c pt) {
	s.fill([][]pt{Box{c[0] - 3.4, c[1] - 3.4, c[0] + 3.4, c[1] + 3.4}.ring()}, 255)
	s.fill([][]pt{Box{c[0] - 2.7, c[1] - 2.7, c[0] + 2.7, c[1] + 2.7}.ring()}, 0)
}

func placeOpen(s *sheet, c pt) {
	r := 3.6
	d := [][]pt{{{c[0], c[1] + r}, {c[0] + r, c[1]}, {c[0], c[1] - r}, {c[0] - r, c[1]}}}
	s.fill(d, 255)
	s.closed(d, stroke{width: 0.9})
	s.line([]pt{{c[0], c[1] - r}, {c[0], c[1] + r}}, stroke{width: 0.9})
}

// places draws the places on the surface, each with the exposure ratio of the
// class that may be there, or of the class of the largest ratio.
func (m *chart) places(points []exposure.PointResult, surface *exposure.Surface) {
	var within, above, open bool
	for i := range points {
		r := &points[i]
		if r.Place != nil && r.Place.On != surface.ID {
			if r.Place.On != "" || math.Abs(r.ZM-surface.Z) > 0.5 {
				continue // on another surface, or at another height
			}
		}
		c := m.at(pt{r.XM, r.YM})
		if !finite(c) || !m.Box.contains(c) {
			continue
		}
		ratio := chosenRatio(r)
		text := shorten(r.ID, 24)
		if ratio != nil && r.Class == "" {
			text += " (" + shorten(ratio.Class, 18) + ")"
		}
		text += ": "
		draw := placeOpen
		switch {
		case ratio == nil:
			text += "not assessed"
			open = true
		case ratio.Verdict == exposure.Above:
			text += ratioText(float64(ratio.ExposureRatio))
			draw, above = placeAbove, true
		case ratio.Verdict == exposure.NotAssessed || !ratio.Covered:
			text += "≥ " + ratioText(float64(ratio.ExposureRatio)) + ", not assessed"
			open = true
		default:
			text += ratioText(float64(ratio.ExposureRatio))
			draw, within = placeWithin, true
		}
		draw(m.sheet, c)
		m.clutter.box(Box{c[0] - 3, c[1] - 3, c[0] + 3, c[1] + 3}, 3)
		m.tags = append(m.tags, tag{text: text, anchor: c, face: labelFace, gap: 4})
	}
	who := ", with its exposure ratio for the class open to it"
	if above {
		m.entries = append(m.entries, entry{markSample(placeAbove), "place above the limits supplied" + who})
		who = ""
	}
	if within {
		m.entries = append(m.entries, entry{markSample(placeWithin), "place within the limits supplied" + who})
		who = ""
	}
	if open {
		m.entries = append(m.entries, entry{markSample(placeOpen), "place not assessed" + who})
	}
}

func chosenRatio(r *exposure.PointResult) *exposure.ClassRatio {
	var best *exposure.ClassRatio
	for i := range r.Ratios {
		c := &r.Ratios[i]
		if c.Class == r.Class {
			return c
		}
		if best == nil || c.ExposureRatio > best.ExposureRatio {
			best = c
		}
	}
	return best
}
