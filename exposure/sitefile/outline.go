package sitefile

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"github.com/paulmach/orb"
	"github.com/paulmach/orb/encoding/wkt"
	"github.com/paulmach/orb/planar"

	"example.org/standclear/exposure"
)

// outline is a checked polygon: outer ring counter-clockwise, holes clockwise.
type outline orb.Polygon

// parseOutline reads a WKT POLYGON and checks that it bounds an area: rings
// closed, three corners or more, no line that crosses another, an area above
// zero, and holes inside.
func parseOutline(text string) (outline, error) {
	p, err := wkt.UnmarshalPolygon(text)
	switch {
	case err != nil:
		return nil, errors.New("this is not a WKT POLYGON; write one such as POLYGON((0 0, 30 0, 30 20, 0 20, 0 0))")
	case len(p) == 0:
		return nil, errors.New("the polygon is empty; write at least three corners and the first again")
	}
	for i, ring := range p {
		name := "the outline"
		if i > 0 {
			name = fmt.Sprintf("hole %d", i)
		}
		if err := checkRing(ring); err != nil {
			return nil, fmt.Errorf("%s %w", name, err)
		}
		want := orb.CCW
		if i > 0 {
			want = orb.CW
		}
		if ring.Orientation() != want {
			ring.Reverse()
		}
	}
	for i := range p {
		for j := i + 1; j < len(p); j++ {
			if at, ok := ringsCross(p[i], p[j]); ok {
				return nil, fmt.Errorf("two rings cross near (%.6g %.6g); draw them apart", at[0], at[1])
			}
			switch inside := planar.RingContains(p[i], p[j][0]); {
			case i == 0 && !inside:
				return nil, fmt.Errorf("hole %d lies outside the outline; draw it inside, or give it a row of its own", j)
			case i > 0 && (inside || planar.RingContains(p[j], p[i][0])):
				return nil, fmt.Errorf("holes %d and %d overlap; draw one", i, j)
			}
		}
	}
	return outline(p), nil
}

func checkRing(r orb.Ring) error {
	for _, p := range r {
		if math.IsNaN(p[0]) || math.IsInf(p[0], 0) || math.IsNaN(p[1]) || math.IsInf(p[1], 0) {
			return errors.New("has a corner that is not a number; write metres")
		}
	}
	if len(r) < 2 || r[0] != r[len(r)-1] {
		return errors.New("is not closed; write its first corner again at its end")
	}
	distinct := slices.Clone(r[:len(r)-1])
	slices.SortFunc(distinct, func(a, b orb.Point) int { return slices.Compare(a[:], b[:]) })
	if n := len(slices.Compact(distinct)); n < 3 {
		return fmt.Errorf("has %d different corners; an area needs at least 3", n)
	}
	if onOneLine(r) {
		return errors.New("has no area; its corners lie on one line")
	}
	if at, ok := selfCrossing(r); ok {
		return fmt.Errorf("crosses or touches itself near (%.6g %.6g); go round it once", at[0], at[1])
	}
	if planar.Area(r) == 0 {
		return errors.New("has no area that can be told from zero; write it in metres")
	}
	return nil
}

func onOneLine(r orb.Ring) bool {
	a, far := r[0], r[0]
	for _, p := range r {
		if math.Hypot(p[0]-a[0], p[1]-a[1]) > math.Hypot(far[0]-a[0], far[1]-a[1]) {
			far = p
		}
	}
	for _, p := range r {
		if (far[0]-a[0])*(p[1]-a[1]) != (far[1]-a[1])*(p[0]-a[0]) {
			return false
		}
	}
	return true
}

// selfCrossing finds two sides of a ring that meet elsewhere than at the corner
// they share.
func selfCrossing(r orb.Ring) (orb.Point, bool) {
	r = slices.Compact(slices.Clone(r)) // a corner written twice in a row is one
	n := len(r) - 1
	for i := 0; i < n; i++ {
		for j := i + 1; j < n; j++ {
			next := j == i+1 || i == 0 && j == n-1
			if !next {
				if at, ok := segmentsMeet(r[i], r[i+1], r[j], r[j+1]); ok {
					return at, true
				}
				continue
			}
			// Neighbours share a corner; they cross where one runs back on the other.
			a, corner, b := r[i], r[i+1], r[j+1]
			if j != i+1 {
				a, corner, b = r[j], r[0], r[1]
			}
			ux, uy, vx, vy := a[0]-corner[0], a[1]-corner[1], b[0]-corner[0], b[1]-corner[1]
			if ux*vy-uy*vx == 0 && ux*vx+uy*vy > 0 {
				return corner, true
			}
		}
	}
	return orb.Point{}, false
}

func ringsCross(a, b orb.Ring) (orb.Point, bool) {
	for i := 0; i+1 < len(a); i++ {
		for j := 0; j+1 < len(b); j++ {
			if at, ok := segmentsMeet(a[i], a[i+1], b[j], b[j+1]); ok {
				return at, true
			}
		}
	}
	return orb.Point{}, false
}

// segmentsMeet reports whether two segments share a point, ends included.
func segmentsMeet(a, b, c, d orb.Point) (orb.Point, bool) {
	side := func(p, q, r orb.Point) float64 { return (q[0]-p[0])*(r[1]-p[1]) - (q[1]-p[1])*(r[0]-p[0]) }
	between := func(p, q, r orb.Point) bool {
		return min(p[0], q[0]) <= r[0] && r[0] <= max(p[0], q[0]) && min(p[1], q[1]) <= r[1] && r[1] <= max(p[1], q[1])
	}
	s1, s2, s3, s4 := side(a, b, c), side(a, b, d), side(c, d, a), side(c, d, b)
	if (s1 > 0) != (s2 > 0) && s1 != 0 && s2 != 0 && (s3 > 0) != (s4 > 0) && s3 != 0 && s4 != 0 {
		t := s3 / (s3 - s4)
		return orb.Point{a[0] + t*(b[0]-a[0]), a[1] + t*(b[1]-a[1])}, true
	}
	for _, end := range []struct {
		s       float64
		p, q, r orb.Point
	}{{s1, a, b, c}, {s2, a, b, d}, {s3, c, d, a}, {s4, c, d, b}} {
		if end.s == 0 && between(end.p, end.q, end.r) {
			return end.r, true
		}
	}
	return orb.Point{}, false
}

// contains reports whether a point lies in the polygon, its edge included.
func (o outline) contains(x, y float64) bool {
	p := orb.Point{x, y}
	if len(o) == 0 || !planar.RingContains(o[0], p) {
		return false
	}
	for _, hole := range o[1:] {
		if planar.RingContains(hole, p) {
			return false
		}
	}
	return true
}

func (o outline) rings() []exposure.Ring {
	out := make([]exposure.Ring, len(o))
	for i, ring := range o {
		out[i] = make(exposure.Ring, len(ring))
		for j, p := range ring {
			out[i][j] = [2]float64(p)
		}
	}
	return out
}
