package exposure

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// A vertical section and a surface meet in a line, along which they must not
// contradict each other: what one calls certainly above the other keeps inside
// its outer line.
func TestSectionAgreesWithSurface(t *testing.T) {
	both := 0
	for seed := uint64(1); seed <= 24; seed++ {
		s := newMadeSite(seed)
		f := &s.site.Surfaces[0]
		f.From, f.To, f.GroundFactor = 1.5, 1.5, 0 // one height, and the ground of a section
		m := s.model(t, 2)
		surface := s.lines(t, m)
		a := s.site.Sources[0].Position
		turn := s.between(0, math.Pi)
		dx, dy := 30*math.Cos(turn), 30*math.Sin(turn)
		q := s.query
		q.Section = &Section{X1M: a.X - dx, Y1M: a.Y - dy, X2M: a.X + dx, Y2M: a.Y + dy, FromZM: f.Z - 1, ToZM: f.Z + 4}
		regions, err := m.regions(&q)
		require.NoError(t, err)
		section, _, _, err := m.lines(context.Background(), regions[0], m.rules[0], &q)
		require.NoError(t, err)
		require.Empty(t, ringFault(section.Outer), "%v", s)
		require.Empty(t, ringFault(section.Inner), "%v", s)
		whole := MultiPolygon{f.Outline}
		for k := 0; k < 600; k++ {
			along := s.between(0, 60)
			x, y := a.X-dx+dx*along/30, a.Y-dy+dy*along/30
			if !whole.Contains(x, y) {
				continue
			}
			if surface.Inner.Contains(x, y) {
				both++
				assert.True(t, section.Outer.Contains(along, f.Z+1.5), "%v: (%v, %v) is above on the surface, outside on the section", s, x, y)
			}
			if section.Inner.Contains(along, f.Z+1.5) {
				both++
				assert.True(t, surface.Outer.Contains(x, y), "%v: (%v, %v) is above on the section, outside on the surface", s, x, y)
			}
		}
	}
	assert.Greater(t, both, 300, "too few common points to mean anything")
}

// On a section too nothing above lies outside, nothing below inside.
func TestNothingAboveOutsideOnSections(t *testing.T) {
	if testing.Short() {
		t.Skip("dense sampling")
	}
	above := 0
	for seed := uint64(1); seed <= 24; seed++ {
		s := newMadeSite(seed)
		m := s.model(t, 2)
		a := s.site.Sources[0].Position
		turn := s.between(0, 2*math.Pi)
		dx, dy := 10*math.Cos(turn), 10*math.Sin(turn)
		q := s.query
		q.Section = &Section{X1M: a.X - dx, Y1M: a.Y - dy, X2M: a.X + dx, Y2M: a.Y + dy, FromZM: a.Z - 5, ToZM: a.Z + 4}
		regions, err := m.regions(&q)
		require.NoError(t, err)
		z, e, _, err := m.lines(context.Background(), regions[0], m.rules[0], &q)
		require.NoError(t, err)
		for k := 0; k < 2000; k++ {
			u, h := s.between(0, 20), s.between(a.Z-5, a.Z+4)
			_, v := e.at(Point{X: u, Y: h})
			if v > q.Share {
				above++
				assert.True(t, z.Outer.Contains(u, h), "%v: ratio %v at %v m along, %v m high", s, v, u, h)
			} else {
				// A nanometre of rounding of the corners.
				assert.False(t, z.Inner.Contains(u, h) && !nearRings(rings(z.Inner), [2]float64{u, h}, 2e-9), "%v: ratio %v at %v m along, %v m high", s, v, u, h)
			}
			p := regions[0].frame.back(Point{X: u, Y: h})
			assert.InDelta(t, h, p.Z, 1e-9, "a section's second coordinate is the height")
		}
	}
	assert.Greater(t, above, 2000, "too few points above to mean anything")
}

func rings(m MultiPolygon) (all []Ring) {
	for _, poly := range m {
		all = append(all, poly...)
	}
	return all
}

// The largest ratio of a surface lies between its two bounds, and the lower one
// is met where it says.
func TestLargestRatioHoldsAgainstSampling(t *testing.T) {
	if testing.Short() {
		t.Skip("dense sampling")
	}
	for seed := uint64(1); seed <= madeSites; seed += 2 {
		s := newMadeSite(seed)
		m := s.model(t, 2)
		zones, err := m.Zones(context.Background(), s.query)
		require.NoError(t, err, "%v", s)
		f, z := &s.site.Surfaces[0], &zones[0]
		p := s.probe(m, f)
		upper := float64(z.MaxRatioUpper) * (1 + 3e-4) // what a kink may cost a mean's quadrature
		require.LessOrEqual(t, float64(z.MaxRatioLower), float64(z.MaxRatioUpper), "%v", s)
		for k := 0; k < 800; k++ {
			x, y := s.draw(f, z)
			// What is not assessed stays out of the largest ratio.
			if p.mean {
				if p.covered(x, y, 65) && !p.partly(x, y) {
					v, _ := p.dense(x, y, 9)
					assert.LessOrEqual(t, v, upper, "%v at (%v, %v)", s, x, y)
				}
				continue
			}
			h := s.between(p.from, p.to)
			if q := (Point{X: x, Y: y, Z: h}); p.e.reaches(box{c: q}) == reached {
				_, v := p.e.at(q)
				assert.LessOrEqual(t, v, upper, "%v at %v", s, q)
			}
		}
		if z.MaxRatioLower > 0 {
			at := z.MaxAt
			assert.True(t, MultiPolygon{f.Outline}.Contains(at[0], at[1]), "%v: %v", s, at)
			v := p.at(groupRatios{}, at[0], at[1], at[2])
			if p.mean {
				v = p.summit(at[0], at[1])
			}
			assert.GreaterOrEqual(t, v, float64(z.MaxRatioLower)*(1-3e-4), "%v at %v", s, at)
		}
	}
}

// partly says whether the column at (x, y) may touch a reactive region.
func (p *probe) partly(x, y float64) bool {
	const parts = 200
	for k := 0; k < parts; k++ {
		h := (p.to - p.from) / parts
		if p.e.reaches(box{c: Point{X: x, Y: y}}.heights(p.from+h*float64(k), p.from+h*float64(k+1))) != reached {
			return true
		}
	}
	return false
}
