package exposure

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/limits"
)

// Nothing above the limit lies beyond a distance: points are drawn on and past
// the faces of the box of extents.
func TestNothingAboveBeyondExtents(t *testing.T) {
	if testing.Short() {
		t.Skip("dense sampling")
	}
	const perDirection = 300
	met, tight := 0, 0
	for _, seed := range []uint64{1, 2, 3, 5, 8, 12, 19, 24, 29, 31, nearSeeds, nearSeeds + 2, nearSeeds + 3} {
		s := newMadeSite(seed)
		m := s.model(t, 2)
		r := m.rules[0]
		found, err := m.Distances(context.Background(), DistanceQuery{All: true, Rows: true})
		require.NoError(t, err, "%v", s)
		targets := m.targets(DistanceQuery{All: true, Rows: true})
		require.Len(t, found, 6*len(targets), "%v", s)
		for i, target := range targets {
			member := map[int]bool{}
			for _, k := range target.members {
				member[k] = true
			}
			e := m.evaluator(r, func(k int) bool { return member[k] }, m.groundFactor(0), siteFrame, 1)
			for k, a := range target.axes {
				d := found[6*i+k]
				require.Equal(t, a.name, d.Direction, "%v", s)
				f := facing(target.centre, a.dir)
				for n := 0; n < perDirection; n++ {
					beyond := math.Pow(10, s.between(-6, 1))
					wide := math.Max(1, d.DistanceM)
					q := f.back(Point{X: d.DistanceM + beyond, Y: wide * s.r.NormFloat64(), Z: wide * s.r.NormFloat64()})
					if _, v := e.at(q); !assert.LessOrEqual(t, v, 1.0, "%v: %s %s of %v m, at %v", s, target.name(), a.name, d.DistanceM, q) {
						return
					}
				}
				if d.Verdict == Above && d.DistanceM > 0.1 {
					met++
					if d.BracketM <= math.Max(0.03, 0.05*d.DistanceM) {
						tight++
					}
				}
			}
		}
	}
	t.Logf("%d distances, %d of them bracketed to 3 cm or 5 %%", met, tight)
	assert.Greater(t, met, 100, "too few distances to mean anything")
	// The search stops at a bounded effort; what it leaves must be the exception.
	assert.Greater(t, tight, met*3/4)
}

// Along a ray the last crossing is found, not the first: beyond it nothing is
// above, and just short of it something is.
func TestRayEndsAtTheLastCrossing(t *testing.T) {
	for seed := uint64(1); seed <= 20; seed++ {
		s := newMadeSite(seed)
		m := s.model(t, 2)
		ray := &RayDirection{AzimuthRad: s.between(0, 2*math.Pi), ElevationRad: s.between(-1.5, 1.5)}
		found, err := m.Distances(context.Background(), DistanceQuery{All: true, Direction: ray})
		require.NoError(t, err, "%v", s)
		d := found[0]
		target := m.targets(DistanceQuery{All: true})[0]
		se, ce := math.Sincos(ray.ElevationRad)
		sa, ca := math.Sincos(ray.AzimuthRad)
		dir := Point{X: sa * ce, Y: ca * ce, Z: se}
		e := m.evaluator(m.rules[0], nil, m.groundFactor(0), siteFrame, 1)
		for k := 0; k < 2000; k++ {
			q := target.centre.Add(dir.Scale(d.DistanceM + 1e-9 + math.Pow(10, s.between(-6, 2))))
			if _, v := e.at(q); !assert.LessOrEqual(t, v, 1.0, "%v: %v m along %+v, at %v", s, d.DistanceM, *ray, q) {
				break
			}
		}
		if d.Verdict == Within || d.DistanceM < 1e-3 {
			continue
		}
		short := target.centre.Add(dir.Scale(d.DistanceM - d.BracketM - 1e-7))
		_, v := e.at(short)
		reach := e.reaches(box{c: short, h: Point{X: 1e-6, Y: 1e-6, Z: 1e-6}})
		// A tenth of a micrometre short of the line, a ratio that falls no faster
		// than the square of the distance from a centre metres away.
		assert.True(t, v > 1-1e-4 || reach != reached, "%v: ratio %v just short of %v m along %+v", s, v, d.DistanceM, *ray)
	}
}

// An isotropic source has a sphere for its boundary: r = sqrt(P G/(4 pi S)). The
// ray finds it to a relative 1e-6 (bisection goes on to 1e-9 of the far bound), an
// extent exceeds it by no more than the bracket it states.
func TestIsotropicDistanceIsASphere(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		source := radiator("a", Point{X: rapid.Float64Range(-50, 50).Draw(t, "x"), Z: rapid.Float64Range(-50, 50).Draw(t, "z")})
		source.FrequencyHz = 2e9
		source.Power.TransmitterW = math.Pow(10, rapid.Float64Range(1, 4).Draw(t, "log P"))
		source.Power.Loss = rapid.Float64Range(0.1, 1).Draw(t, "loss")
		s := math.Pow(10, rapid.Float64Range(0, 2).Draw(t, "log S"))
		k := rapid.Float64Range(1, 2).Draw(t, "ground factor")
		want := k * math.Sqrt(source.Power.OnAirW()/(4*math.Pi*s))
		if want < 0.1 {
			t.Skip("inside the reactive region")
		}
		site := &Site{Sources: []Source{source}, Limits: tableOf(t, level(limits.S, s)), Ground: Ground{Method: GroundFactor, Factor: k}}
		m, err := New(site, Options{Workers: 1})
		require.NoError(t, err)
		ray, err := m.Distances(context.Background(), DistanceQuery{Rows: true, Direction: &RayDirection{
			AzimuthRad: rapid.Float64Range(0, 6).Draw(t, "azimuth"), ElevationRad: rapid.Float64Range(-1.5, 1.5).Draw(t, "elevation")}})
		require.NoError(t, err)
		assert.InEpsilon(t, want, ray[0].DistanceM, 1e-6)
		extents, err := m.Distances(context.Background(), DistanceQuery{Rows: true})
		require.NoError(t, err)
		require.Len(t, extents, 6)
		for _, d := range extents {
			assert.GreaterOrEqual(t, d.DistanceM, want*(1-1e-12), d.Direction)
			assert.LessOrEqual(t, d.DistanceM-d.BracketM, want*(1+1e-12), d.Direction)
			// The bracket that the search promises where it is content early.
			assert.LessOrEqual(t, d.BracketM, math.Max(extentCoarse*d.DistanceM, extentCoarseM)+extentFineM+1e-8, d.Direction)
		}
	})
}

// Four times the power, twice the distance: free space knows no other length.
func TestDistanceGrowsWithTheRootOfPower(t *testing.T) {
	for seed := uint64(1); seed <= 8; seed++ {
		s := newMadeSite(seed)
		source := s.site.Sources[0]
		source.Signal, source.SweepRad, source.WidthM = "", 0, 0
		s.site.Sources = []Source{source}
		s.site.Limits = tableOf(t, level(limits.S, 8))
		ray := &RayDirection{AzimuthRad: source.Pose.AzimuthRad, ElevationRad: -source.Pose.TiltRad}
		var last float64
		for k := 0; k < 4; k++ {
			s.site.Sources[0].Power = Power{TransmitterW: 500 * math.Pow(4, float64(k)), Loss: 1, Carriers: 1, Duty: 1, ReductionFactor: 1, PeakFactor: 1}
			found, err := s.model(t, 1).Distances(context.Background(), DistanceQuery{Rows: true, Direction: ray})
			require.NoError(t, err)
			d := found[0].DistanceM
			if k > 0 {
				assert.InEpsilon(t, 2*last, d, 1e-6, "%v", s) // as far as the ray is halved
			}
			last = d
		}
	}
}

// A boundary that lies behind the centre as a whole has no distance ahead of it,
// and is a boundary all the same: two rows, of which only the far one is above.
func TestBoundaryBehindTheCentre(t *testing.T) {
	weak, strong := radiator("weak", Point{X: 10}), radiator("strong", Point{X: -10})
	for _, s := range []*Source{&weak, &strong} {
		s.FrequencyHz, s.Housing = 2e9, "mast"
	}
	weak.Power.Unknown = true
	m, err := New(&Site{Sources: []Source{weak, strong}, Limits: tableOf(t, level(limits.S, 10))}, Options{Workers: 1})
	require.NoError(t, err)
	found, err := m.Distances(context.Background(), DistanceQuery{Housings: true})
	require.NoError(t, err)
	reach := math.Sqrt(1000 / (4 * math.Pi * 10))
	for _, d := range found {
		assert.Equal(t, Above, d.Verdict, d.Direction)
		axis := math.Sin(d.AzimuthDeg*math.Pi/180) * math.Cos(d.ElevationDeg*math.Pi/180)
		switch {
		case axis > 0.5:
			assert.InDelta(t, 0, d.DistanceM, 1e-8, d.Direction) // the rounding allowance
		case axis < -0.5:
			assert.InDelta(t, 10+reach, d.DistanceM, 0.05, d.Direction) // the bracket
		}
	}
}

func tableOf(t require.TestingT, rows ...limits.Row) *limits.Table {
	table, faults, _ := limits.New(rows, limits.About{}, nil)
	require.Empty(t, faults)
	return table
}
