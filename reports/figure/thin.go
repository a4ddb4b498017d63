package figure

import (
	"github.com/paulmach/orb"
	"github.com/paulmach/orb/simplify"

	"example.org/standclear/exposure"
)

// thinPoints is how far, in points on the page, a drawn line may lie from the
// line it stands for: a tenth of the width of a keep-out line.
const thinPoints = 0.15

// thin returns a ring on the page with no more points than a printer can show.
// A ring too small to show keeps its bounding box, so that it does not vanish.
func thin(ring []pt) []pt {
	if len(ring) < 8 {
		return ring
	}
	ls := make(orb.LineString, 0, len(ring)) // a copy: the library works in place
	for _, p := range ring {
		ls = append(ls, orb.Point(p))
	}
	ls, ok := simplify.DouglasPeucker(thinPoints).Simplify(ls).(orb.LineString)
	if b, any := around(ring); !ok || len(ls) < 4 {
		if !any {
			return nil
		}
		return b.ring()
	}
	out := make([]pt, len(ls))
	for i, p := range ls {
		out[i] = pt(p)
	}
	return out
}

// rings returns the rings of a multipolygon of data on the page, thinned.
func (a axes) rings(m exposure.MultiPolygon) [][]pt {
	var out [][]pt
	for _, poly := range m {
		for _, r := range poly {
			out = append(out, thin(a.ring(r)))
		}
	}
	return openRings(out)
}

// ring returns a ring of data on the page, without its non-finite points.
func (a axes) ring(r exposure.Ring) []pt {
	var out []pt
	for _, p := range r {
		if q := a.at(p); finite(q) {
			out = append(out, q)
		}
	}
	return out
}
