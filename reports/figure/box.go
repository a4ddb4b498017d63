package figure

import "math"

// pt is a position: in points from the lower left corner of the page, or in the
// data's own unit where a comment says so.
type pt = [2]float64

// Box is a rectangle on the page, in points (1/72 inch) from its lower left
// corner.
type Box struct{ X0, Y0, X1, Y1 float64 }

// W returns the width of the box.
func (b Box) W() float64 { return b.X1 - b.X0 }

// H returns the height of the box.
func (b Box) H() float64 { return b.Y1 - b.Y0 }

// Overlaps reports whether the two boxes share more than an edge.
func (b Box) Overlaps(c Box) bool {
	return b.X0 < c.X1 && c.X0 < b.X1 && b.Y0 < c.Y1 && c.Y0 < b.Y1
}

// Inside reports whether b lies within c, edges included.
func (b Box) Inside(c Box) bool {
	return b.X0 >= c.X0 && b.Y0 >= c.Y0 && b.X1 <= c.X1 && b.Y1 <= c.Y1
}

func (b Box) grow(d float64) Box { return Box{b.X0 - d, b.Y0 - d, b.X1 + d, b.Y1 + d} }

func (b Box) centre() pt { return pt{(b.X0 + b.X1) / 2, (b.Y0 + b.Y1) / 2} }

func (b Box) contains(p pt) bool {
	return p[0] >= b.X0 && p[0] <= b.X1 && p[1] >= b.Y0 && p[1] <= b.Y1
}

// nearest returns the point of the box nearest to p.
func (b Box) nearest(p pt) pt {
	return pt{math.Min(math.Max(p[0], b.X0), b.X1), math.Min(math.Max(p[1], b.Y0), b.Y1)}
}

func (b Box) ring() []pt {
	return []pt{{b.X0, b.Y0}, {b.X1, b.Y0}, {b.X1, b.Y1}, {b.X0, b.Y1}, {b.X0, b.Y0}}
}

// around returns the box that holds every finite point of the lines; ok is
// false where there is none.
func around(lines ...[]pt) (b Box, ok bool) {
	b = Box{math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)}
	for _, l := range lines {
		for _, p := range l {
			if finite(p) {
				b = Box{math.Min(b.X0, p[0]), math.Min(b.Y0, p[1]), math.Max(b.X1, p[0]), math.Max(b.Y1, p[1])}
				ok = true
			}
		}
	}
	return b, ok
}

func finite(p pt) bool { return isFinite(p[0]) && isFinite(p[1]) }

func isFinite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }

func dist(a, b pt) float64 { return math.Hypot(a[0]-b[0], a[1]-b[1]) }
