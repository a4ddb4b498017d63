package exposure

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
)

// What every line and distance rests on: the bounds of a class over a box hold
// at every point of it, its corners above all; and what is said of a box's reach
// holds at every point.
func TestBoundsEncloseRatios(t *testing.T) {
	if testing.Short() {
		t.Skip("dense sampling")
	}
	const boxes, inside = 120, 16
	decided := 0
	for _, first := range []uint64{1, nearSeeds} {
		for seed := first; seed < first+madeSites; seed++ {
			s := newMadeSite(seed)
			m := s.model(t, 1)
			r := m.rules[0]
			f := siteFrame
			if s.chance(0.5) {
				f = facing(s.site.Sources[0].Position, direction(s.r))
			}
			e := m.evaluator(r, nil, m.groundFactor(0), f, 1)
			for k := 0; k < boxes; k++ {
				lo, hi, b := s.box(f)
				least, most := e.over(b)
				method := e.reaches(b)
				var l, h [maxTerms]groupRatios
				for i := range e.terms {
					e.terms[i].over(b, r, &l[i], &h[i])
				}
				for n := 0; n < inside; n++ {
					q := corner(s.r, n, lo, hi)
					_, v := e.at(q)
					ok := assert.False(t, math.IsNaN(v) || math.IsNaN(least) || math.IsNaN(most), "%v: not a number at %v in %v", s, q, b)
					ok = ok && assert.LessOrEqual(t, least, v, "%v: at %v in %v", s, q, b)
					ok = ok && assert.LessOrEqual(t, v, most, "%v: at %v in %v", s, q, b)
					for i := range e.terms {
						var x groupRatios
						e.terms[i].at(q, r, &x)
						for g := 0; g < e.ng; g++ {
							ok = ok && assert.LessOrEqual(t, l[i][g]*(1-sumSlack), x[g], "%v: source %v at %v in %v", s, e.terms[i].source, q, b)
							ok = ok && assert.LessOrEqual(t, x[g], h[i][g]*(1+sumSlack), "%v: source %v at %v in %v", s, e.terms[i].source, q, b)
						}
					}
					if at := e.reaches(box{c: q}); method != partReach {
						ok = ok && assert.Equal(t, method, at, "%v: reach at %v in %v", s, q, b)
					}
					if !ok {
						return
					}
				}
				if method != partReach && most < 100*least {
					decided++
				}
			}
		}
	}
	// Bounds of zero and infinity would hold as well.
	assert.Greater(t, decided, madeSites*boxes/4, "too few boxes with bounds worth having")
}

// maxTerms is more than the terms of any made site.
const maxTerms = 16

// box draws a box near one of the sites' antennas, in frame f: its two corners,
// and the box as a search would grow it.
func (s *madeSite) box(f frame) (lo, hi Point, b box) {
	at := f.point(s.site.Sources[s.r.IntN(len(s.site.Sources))].Position)
	centre := at.Add(direction(s.r).Scale(math.Pow(10, s.between(-2, 1.2))))
	if s.chance(0.1) {
		centre = at
	}
	half := func() float64 {
		if s.chance(0.1) {
			return 0
		}
		return math.Pow(10, s.between(-6, 0.3))
	}
	h := Point{X: half(), Y: half(), Z: half()}
	if s.chance(0.5) {
		h.X, h.Y = math.Min(h.X, h.Y), math.Min(h.X, h.Y) // a square, as most are
	}
	lo, hi = centre.Sub(h), centre.Add(h)
	b.c = lo.Add(hi).Scale(0.5)
	b.h = hi.Sub(lo).Scale(0.5)
	return lo, hi, grown(b)
}

// corner is the n-th corner of the box from lo to hi, or a random point of it.
func corner(r *rand.Rand, n int, lo, hi Point) Point {
	u := Point{X: float64(n & 1), Y: float64(n >> 1 & 1), Z: float64(n >> 2 & 1)}
	if n >= 8 {
		u = Point{X: r.Float64(), Y: r.Float64(), Z: r.Float64()}
	}
	mix := func(a, b, u float64) float64 {
		if u == 1 {
			return b
		}
		return math.Max(a, math.Min(b, a+u*(b-a)))
	}
	return Point{X: mix(lo.X, hi.X, u.X), Y: mix(lo.Y, hi.Y, u.Y), Z: mix(lo.Z, hi.Z, u.Z)}
}

// direction is a random unit vector.
func direction(r *rand.Rand) Point {
	for {
		d := Point{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}
		if n := d.Norm(); n > 1e-3 {
			return d.Scale(1 / n)
		}
	}
}
