package figure

import (
	"math"

	"github.com/paulmach/orb"
	"github.com/paulmach/orb/clip"
)

// axes is a panel with its two axes, values on the page in points.
type axes struct {
	Panel
}

func newAxes(b Box, x0, x1, y0, y1 float64) axes {
	return axes{Panel{Box: b, X0: x0, X1: x1, Y0: y0, Y1: y1}}
}

// equalAxes returns a panel of the same scale along both axes: the range is
// widened about its middle to fill the box.
func equalAxes(b Box, data Box) axes {
	k := math.Min(b.W()/data.W(), b.H()/data.H())
	c := data.centre()
	w, h := b.W()/k/2, b.H()/k/2
	return newAxes(b, c[0]-w, c[0]+w, c[1]-h, c[1]+h)
}

func along(v, v0, v1, p0, p1 float64, log bool) float64 {
	if log {
		if v <= 0 {
			return math.NaN()
		}
		v, v0, v1 = math.Log(v), math.Log(v0), math.Log(v1)
	}
	return p0 + (v-v0)/(v1-v0)*(p1-p0)
}

func (a axes) at(p pt) pt {
	return pt{
		along(p[0], a.X0, a.X1, a.Box.X0, a.Box.X1, a.LogX),
		along(p[1], a.Y0, a.Y1, a.Box.Y0, a.Box.Y1, a.LogY),
	}
}

func (a axes) line(l []pt) []pt {
	out := make([]pt, len(l))
	for i, p := range l {
		out[i] = a.at(p)
	}
	return out
}

// clipped returns the parts of a line of data that lie within the panel, on the
// page; non-finite points cut it.
func (a axes) clipped(l []pt) [][]pt {
	var out [][]pt
	bound := orb.Bound{Min: orb.Point{a.Box.X0, a.Box.Y0}, Max: orb.Point{a.Box.X1, a.Box.Y1}}
	for _, r := range runs(a.line(l)) {
		ls := make(orb.LineString, len(r))
		for i, p := range r {
			ls[i] = orb.Point(p)
		}
		for _, part := range clip.LineString(bound, ls) {
			q := make([]pt, len(part))
			for i, p := range part {
				q[i] = pt(p)
			}
			out = append(out, q)
		}
	}
	return out
}

// draw draws the frame with marks outside it, and light grid lines at the
// labelled marks where grid is set.
func (a axes) draw(s *sheet, xs, ys []tick, xTitle, yTitle string, grid bool) {
	b := a.Box
	var lines, marks [][]pt
	for _, t := range xs {
		x := a.at(pt{t.at, a.Y0})[0]
		n := 2.0
		if t.label != "" {
			n = 3.5
			lines = append(lines, []pt{{x, b.Y0}, {x, b.Y1}})
			s.text(t.label, pt{x, b.Y0 - 5}, tickFace, upperMiddle)
		}
		marks = append(marks, []pt{{x, b.Y0}, {x, b.Y0 - n}})
	}
	widest := 0.0
	for _, t := range ys {
		y := a.at(pt{a.X0, t.at})[1]
		n := 2.0
		if t.label != "" {
			n = 3.5
			lines = append(lines, []pt{{b.X0, y}, {b.X1, y}})
			s.text(t.label, pt{b.X0 - 5, y}, tickFace, middleRight)
			widest = math.Max(widest, tickFace.width(t.label))
		}
		marks = append(marks, []pt{{b.X0, y}, {b.X0 - n, y}})
	}
	if grid {
		s.lines(lines, gridStroke)
	}
	s.lines(marks, stroke{width: 0.6})
	if xTitle != "" {
		s.text(xTitle, pt{(b.X0 + b.X1) / 2, b.Y0 - 16}, bodyFace, upperMiddle)
	}
	if yTitle != "" {
		s.textUp(yTitle, pt{b.X0 - 11 - widest, (b.Y0 + b.Y1) / 2}, bodyFace)
	}
}

// frame draws the border; it is drawn after the data.
func (a axes) frame(s *sheet) { s.closed([][]pt{a.Box.ring()}, frameStroke) }
