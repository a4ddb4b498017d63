package figure

import (
	"errors"
	"fmt"
	"math"
	"strconv"

	"example.org/standclear/exposure"
)

// ProfileData is what a figure of exposure ratio against distance shows.
type ProfileData struct {
	SiteName string
	// Lines are the profiles of one antenna row and direction, one a class.
	Lines   []exposure.Profile
	Classes []string // their order settles the line of each class
	// Source, when not nil, gives the region distances to mark.
	Source *exposure.SourceInfo
	// Marks are keep-out distances along the ray to mark on the limit line;
	// those of other antennas or directions are passed over. A class without one
	// is marked where its line meets the limit, with the word "about".
	Marks   []exposure.Distance
	Caution string // at the foot; "" = Caution
}

// lowestRatio is where the vertical axis of a profile ends at most: a ratio
// below it has no bearing on anything.
const lowestRatio = 1e-4

// Profile draws exposure ratio against distance along a ray, both logarithmic,
// with the limit line at a ratio of 1, the regions of the antenna, and the
// method by which each part was computed.
func Profile(d ProfileData) (f *Figure, err error) {
	defer caught(&err)
	var xs, ys [][]float64
	var curves []curve
	style := func(class string, i int) stroke {
		for k, c := range d.Classes {
			if c == class {
				return classLine(k)
			}
		}
		return classLine(len(d.Classes) + i)
	}
	for i, l := range d.Lines {
		y := make([]float64, len(l.Ratio))
		for k, r := range l.Ratio {
			if y[k] = float64(r); y[k] < 0 || math.IsInf(y[k], 1) {
				y[k] = math.NaN()
			}
		}
		xs, ys = append(xs, l.DistanceM), append(ys, y)
		curves = append(curves, curve{l.DistanceM, y, style(l.Class, i), l.Class})
	}
	x0, x1, ok := span(true, xs...)
	y0, y1, ok2 := span(true, ys...)
	if !ok || !ok2 {
		return nil, errors.New("figure: a profile needs a positive distance and ratio")
	}
	first := d.Lines[0]
	title := "Exposure ratio against distance: " + first.Antenna
	if d.SiteName != "" {
		title = d.SiteName + ": exposure ratio against distance, " + first.Antenna
	}
	sub := fmt.Sprintf("Along azimuth %s°, elevation %s°, from the centre of radiation. The row taken alone.",
		length(first.AzimuthDeg), length(first.ElevationDeg))
	if s := d.Source; s != nil {
		sub += fmt.Sprintf(" %s, EIRP %s W (mean).", frequency(s.FrequencyHz), digits(s.EIRPW, 3))
	}
	p := newPage()
	p.heading(title, sub)
	p.y -= 14 // the methods are named above the panel
	b := p.diagram(270)
	a := newAxes(b, 0, 0, 0, 0)
	a.LogX, a.LogY = true, true
	a.X0, a.X1 = logRange(x0, x1)
	a.X0, a.X1 = math.Min(a.X0, x0), math.Max(a.X1, x1)
	a.Y0, a.Y1 = logRange(math.Max(math.Min(y0, 0.5), lowestRatio), math.Max(y1, 2))
	p.panels = append(p.panels, a.Panel)
	a.draw(p.sheet, logTicks(a.X0, a.X1, 8, plainOrPower), logTicks(a.Y0, a.Y1, 8, plainOrPower), "distance [m]", "exposure ratio", true)

	c := newClutter(b)
	var tags []tag
	limit := stroke{width: 0.9}
	p.lines(a.clipped([]pt{{a.X0, 1}, {a.X1, 1}}), limit)
	mid := a.at(pt{a.X1, 1})
	w := labelFace.width("limits supplied") / 2
	tags = append(tags, tag{text: "limits supplied", face: labelFace, seats: []pt{
		{mid[0] - w - 6, mid[1] + 7}, {mid[0] - w - 6, mid[1] - 7}, {b.X0 + w + 6, mid[1] - 7}, {b.X0 + w + 6, mid[1] + 7}}})
	entries := entriesOf(curves)
	if len(curves) > 1 {
		for i := range entries {
			entries[i].text = "exposure ratio, " + entries[i].text
		}
	} else if len(entries) == 1 {
		entries[0].text = "exposure ratio, " + entries[0].text
	}
	if s := d.Source; s != nil {
		tags = append(tags, p.regions(a, s)...)
	}
	p.methods(a, first)
	a.trace(p.sheet, curves)
	for _, cv := range curves {
		c.lines(a.clipped(cv.points()), 0.5, false)
	}
	c.lines(a.clipped([]pt{{a.X0, 1}, {a.X1, 1}}), 0.3, false)
	mark := func(at float64, text string) {
		q := a.at(pt{at, 1})
		if !finite(q) || !b.contains(q) {
			return
		}
		p.circle(q, 2.6, true, 255, stroke{width: 0.9})
		c.box(Box{q[0] - 3, q[1] - 3, q[0] + 3, q[1] + 3}, 2)
		tags = append(tags, tag{text: text, anchor: q, face: labelFace, gap: 4, toward: math.Pi / 4})
	}
	marked := map[string]bool{}
	for _, m := range d.Marks {
		if m.Antenna == first.Antenna && m.Kind == "ray" && m.AzimuthDeg == first.AzimuthDeg && m.ElevationDeg == first.ElevationDeg && isFinite(m.DistanceM) {
			// Rounded up: a keep-out distance is never printed shorter than it is.
			mark(m.DistanceM, length(math.Ceil(m.DistanceM*100-1e-6)/100)+" m, "+shorten(m.Class, 28))
			marked[m.Class] = true
		}
	}
	for i, l := range d.Lines {
		if x, ok := outermost(curves[i].x, curves[i].y); ok && !marked[l.Class] {
			mark(x, "about "+digits(x, 2)+" m, "+shorten(l.Class, 28))
		}
	}
	a.frame(p.sheet)
	placed, lost := place(b.grow(-2), tags, c)
	p.sheet.labels(placed)
	p.labels, p.lost = append(p.labels, placed...), append(p.lost, lost...)
	p.under(b.Y0-axisBeneath-4, entries)
	return p.foot(title, cautionOr(d.Caution)), nil
}

// outermost returns where a sampled ratio last falls through 1, in proportion of
// the logarithms between two samples.
func outermost(x, y []float64) (float64, bool) {
	for i := min(len(x), len(y)) - 1; i > 0; i-- {
		if y[i-1] >= 1 && y[i] < 1 && y[i] > 0 && x[i-1] > 0 && x[i] > x[i-1] {
			k := math.Log(y[i-1]) / math.Log(y[i-1]/y[i])
			return x[i-1] * math.Pow(x[i]/x[i-1], k), true
		}
	}
	return 0, false
}

// regions marks where the reactive region ends and where the far field begins.
func (p *page) regions(a axes, s *exposure.SourceInfo) []tag {
	var tags []tag
	for _, r := range []struct {
		at   float64
		text string
		left bool
	}{
		{s.ReactiveM, "reactive region ends", true},
		{s.FresnelM, "near field of the dish ends", true},
		{s.DishFarFieldM, "far field of the dish begins", false},
		{s.FarFieldM, "far field begins", false},
	} {
		if !(r.at > a.X0 && r.at < a.X1) || r.text == "far field begins" && s.DishFarFieldM > 0 {
			continue
		}
		x := a.at(pt{r.at, a.Y0})[0]
		p.line([]pt{{x, a.Box.Y0}, {x, a.Box.Y1}}, stroke{width: 0.6, grey: 90, dash: []float64{2, 2}})
		text := r.text + ", " + strconv.FormatFloat(roundTo(r.at, 3), 'f', -1, 64) + " m from the body"
		w := contourFace.width(text)/2 + 4
		var seats []pt
		for k := 0; k < 12; k++ {
			// From the foot upward, then from the top downward.
			y := a.Box.Y0 + 9 + 11*float64(k)
			if k >= 6 {
				y = a.Box.Y1 - 9 - 11*float64(k-6)
			}
			sides := []float64{x + w, x - w}
			if r.left && x-2*w > a.Box.X0 {
				sides = []float64{x - w, x + w}
			}
			for _, sx := range sides {
				seats = append(seats, pt{sx, y})
			}
		}
		tags = append(tags, tag{text: text, face: contourFace, seats: seats})
	}
	return tags
}

// methods names, above the panel, by which method each stretch was computed.
func (p *page) methods(a axes, l exposure.Profile) {
	y := a.Box.Y1 + 4
	free := a.Box.X0
	for i := 0; i < min(len(l.Method), len(l.DistanceM)); {
		j := i
		for j < min(len(l.Method), len(l.DistanceM)) && l.Method[j] == l.Method[i] {
			j++
		}
		from, to := a.at(pt{l.DistanceM[i], 1})[0], a.Box.X1
		if j < len(l.DistanceM) {
			to = a.at(pt{l.DistanceM[j], 1})[0]
		}
		from, to = math.Max(from, a.Box.X0), math.Min(to, a.Box.X1)
		if isFinite(from) && isFinite(to) && to > from {
			p.line([]pt{{from, y + 3}, {from, y}, {to, y}, {to, y + 3}}, stroke{width: 0.6})
			text := shorten(l.Method[i], 40)
			w := contourFace.width(text)
			x := math.Min(math.Max((from+to)/2, free+w/2), a.Box.X1-w/2)
			if x-w/2 >= free-1e-9 {
				p.text(text, pt{x, y + 5}, contourFace, lowerMiddle)
				free = x + w/2 + 6
			}
		}
		i = j
	}
}
