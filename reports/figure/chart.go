package figure

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
)

// chart is what plans and sections share: a panel of equal scale with zones.
type chart struct {
	*page
	axes
	site    *exposure.Site
	classes []string
	zones   []exposure.Zone
	outline [][]pt // on the page; nil in a section
	entries []entry
	tags    []tag
	clutter *clutter
	keyBox  Box // room for the key beside the panel
}

// styleOf returns the place of a class in the order of styles.
func (m *chart) styleOf(class string) int {
	for i, c := range m.classes {
		if c == class {
			return i
		}
	}
	m.classes = append(m.classes[:len(m.classes):len(m.classes)], class)
	return len(m.classes) - 1
}

const (
	keyWidth    = 148.0
	axisRoom    = 40.0 // left of a panel: tick labels and title
	axisBeneath = 28.0
)

// panel opens the panel for the extent, beside or above its key.
func (m *chart) panel(extent Box, side bool) {
	w := pageWidth - 2*pageMargin - axisRoom
	if side {
		w -= keyWidth + 10
	}
	h := math.Min(math.Max(w*extent.H()/extent.W(), 110), 470)
	if side {
		h = math.Max(h, 250)
	}
	x := pageMargin + axisRoom
	m.axes = equalAxes(Box{x, m.y - h, x + w, m.y}, extent)
	m.panels = append(m.panels, m.Panel)
	m.keyBox = Box{m.Box.X1 + 10, m.Box.Y0, pageWidth - pageMargin, m.Box.Y1}
	m.clutter = newClutter(m.Box)
}

// resolutionSentence says what the lines of the figure mean.
func (m *chart) resolutionSentence() string {
	share, level, any := 1.0, "", false
	for _, z := range m.zones {
		if len(z.Outer) > 0 {
			any = true
		}
		if z.Share > 0 {
			share = z.Share
		}
		if z.Level != "" {
			level = z.Level
		}
	}
	if !any {
		return ""
	}
	t := "Keep-out line: " + exposure.LoosestLine(m.zones).Encloses()
	switch {
	case level != "":
		t += " (boundary of " + level + ")"
	case share != 1:
		t += " (boundary of " + digits(share, 3) + " of the limits supplied)"
	}
	return t + "."
}

// field draws the tint and the contour lines of a grid.
func (m *chart) field(g *exposure.RatioGrid, inside [][]pt) {
	f := newField(g)
	if f == nil {
		return
	}
	m.tint(m.axes, f, inside)
	for _, l := range contourLevels {
		var drawn [][]pt
		for _, c := range f.contour(l) {
			for _, part := range m.clipped(c) {
				if inside != nil {
					drawn = append(drawn, clipTo(inside, part)...)
				} else {
					drawn = append(drawn, part)
				}
			}
		}
		m.lines(drawn, contourStroke)
		for _, c := range longest(drawn, 2) {
			m.tags = append(m.tags, tag{text: strconv.FormatFloat(l, 'g', -1, 64), face: contourFace, seats: alongLine(c)})
		}
	}
	text := "contour lines and grey: exposure ratio 0.05, 0.2, 1, 5"
	if g.Class != "" {
		text += ", " + g.Class
	}
	m.entries = append(m.entries, entry{tintSample, text})
}

// longest returns the n longest lines of more than 60 points, and the longest in any case of
// more than 25.
func longest(lines [][]pt, n int) [][]pt {
	var out [][]pt
	used := make([]bool, len(lines))
	for range n {
		best, bl := -1, 25.0
		if len(out) > 0 {
			bl = 60
		}
		for i, l := range lines {
			if d := pathLength(l); !used[i] && d > bl {
				best, bl = i, d
			}
		}
		if best < 0 {
			break
		}
		used[best] = true
		out = append(out, lines[best])
	}
	return out
}

func pathLength(l []pt) float64 {
	d := 0.0
	for i := 1; i < len(l); i++ {
		d += dist(l[i-1], l[i])
	}
	return d
}

// alongLine returns positions on a line, from its middle outward.
func alongLine(l []pt) []pt {
	total := pathLength(l)
	at := func(d float64) pt {
		for i := 1; i < len(l); i++ {
			s := dist(l[i-1], l[i])
			if d <= s && s > 0 {
				return between(l[i-1], l[i], d/s)
			}
			d -= s
		}
		return l[len(l)-1]
	}
	var out []pt
	const n = 24
	for k := 0; k < n; k++ {
		step := float64((k+1)/2) / n
		if k%2 == 1 {
			step = -step
		}
		out = append(out, at(total*(0.5+step*0.9)))
	}
	return out
}

// areas draws the hatched areas and the keep-out lines of the zones, and enters
// what each class's verdict is.
func (m *chart) areas() {
	type drawn struct {
		rings [][]pt
		style int
	}
	var lines []drawn
	for _, z := range m.zones {
		i := m.styleOf(z.Class)
		inner := m.rings(z.Inner)
		m.hatch(inner, i)
		m.closed(inner, stroke{width: 0.4, grey: 90})
		outer := m.rings(z.Outer)
		lines = append(lines, drawn{outer, i})
		if len(outer) > 0 {
			text := "keep-out line, " + z.Class
			if z.Verdict == exposure.NotAssessed || !z.Covered {
				text += " (not assessed as a whole: line of what could be assessed)"
			}
			m.entries = append(m.entries, entry{lineSample(classLine(i)), text})
		} else {
			text := z.Class + ": no keep-out line here, within the limits supplied"
			if z.Verdict != exposure.Within {
				text = z.Class + ": no keep-out line here, " + string(z.Verdict)
			}
			m.entries = append(m.entries, entry{dashSample, text})
		}
		if len(inner) > 0 {
			m.entries = append(m.entries, entry{hatchSample(i), "certainly above, " + z.Class})
		}
	}
	for _, l := range lines {
		m.closed(l.rings, classLine(l.style))
		m.clutter.lines(l.rings, 0.25, true)
	}
}

func dashSample(s *sheet, b Box) { s.text("none", b.centre(), bodyFace, middle) }

// round reports whether a source radiates alike at every azimuth.
func round(s *exposure.Source) bool {
	r, ok := s.Pattern.(antenna.Round)
	return ok && r.IsRound()
}

func (m *chart) writeLabels() {
	placed, lost := place(m.Box.grow(-2), m.tags, m.clutter)
	m.page.sheet.labels(placed)
	m.page.labels = append(m.page.labels, placed...)
	m.page.lost = append(m.page.lost, lost...)
}

// lostNote says which names found no room.
func (m *chart) lostNote() string {
	n := len(m.page.lost)
	if n == 0 {
		return ""
	}
	names := m.page.lost[:min(n, 6)]
	t := fmt.Sprintf("No room for %s: %s", count(n, "label", "labels"), shorten(strings.Join(names, "; "), 160))
	if n > len(names) {
		t += fmt.Sprintf(" and %d more", n-len(names))
	}
	return t + "."
}

// key draws the legend box with, on a plan, the north arrow and the scale bar.
func (m *chart) key(side, north bool) {
	if side {
		y := m.Box.Y1
		if north {
			m.northArrow(pt{m.keyBox.X0 + 14, y - 21})
			m.scaleBar(pt{m.keyBox.X0 + 42, y - 26}, m.keyBox.W()-60)
			y -= 56
		} else {
			m.scaleBar(pt{m.keyBox.X0 + 4, y - 14}, m.keyBox.W()-40)
			y -= 40
		}
		used := m.legend("", m.entries, pt{m.keyBox.X0, y}, m.keyBox.W(), 1)
		m.y = math.Min(m.Box.Y0-axisBeneath, y-used) - 6
		return
	}
	y := m.Box.Y0 - axisBeneath - 6
	if north {
		m.northArrow(pt{pageMargin + 16, y - 21})
		m.scaleBar(pt{pageMargin + 44, y - 26}, 96)
	} else {
		m.scaleBar(pt{pageMargin + 10, y - 20}, 110)
	}
	x := pageMargin + 162
	used := m.legend("", m.entries, pt{x, y}, pageWidth-pageMargin-x, 2)
	m.y = y - math.Max(used, 54) - 6
}
