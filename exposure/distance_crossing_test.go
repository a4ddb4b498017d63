package exposure

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/antenna"
	"example.org/standclear/limits"
)

func modelOf(t require.TestingT, sources []Source, rows ...limits.Row) *Model {
	table, faults, _ := limits.New(rows, limits.About{}, nil)
	require.Empty(t, faults)
	m, err := New(&Site{Sources: sources, Limits: table}, Options{Workers: 1})
	require.NoError(t, err)
	return m
}

// The distance of a lone isotropic source is that of equation 4 of OET Bulletin
// 65, turned round (the formula is held against printed distances elsewhere): in
// every direction, never short of it, and beyond it by no more than the bracket
// that is stated.
func TestDistanceOfALoneSourceIsTheFormula(t *testing.T) {
	ctx := context.Background()
	rapid.Check(t, func(t *rapid.T) {
		s := radiator("a", Point{X: 3, Y: -4, Z: 12})
		s.Power.TransmitterW = rapid.Float64Range(0.1, 1e5).Draw(t, "P")
		level := level(limits.S, rapid.Float64Range(0.1, 50).Draw(t, "S"))
		exact := DistanceForPowerDensity(s.Power.TransmitterW, level.Coefficient)
		if exact < 2*ReactiveDistance(Wavelength(s.FrequencyHz)) {
			t.Skip("inside the region that the far field does not reach")
		}
		m := modelOf(t, []Source{s}, level)
		ray := &RayDirection{rapid.Float64Range(0, 2*math.Pi).Draw(t, "az"), rapid.Float64Range(-1.5, 1.5).Draw(t, "el")}
		along, err := m.Distances(ctx, DistanceQuery{Rows: true, Direction: ray})
		require.NoError(t, err)
		extents, err := m.Distances(ctx, DistanceQuery{Rows: true})
		require.NoError(t, err)
		require.Len(t, along, 1)
		require.Len(t, extents, 6)
		for _, d := range append(along, extents...) {
			assert.Equal(t, Above, d.Verdict)
			// Every box is widened by some nanometres against rounding.
			assert.GreaterOrEqual(t, d.DistanceM, exact*(1-sumRounding), d.Direction)
			assert.LessOrEqual(t, d.DistanceM, exact+d.BracketM+1e-8, d.Direction)
			// The coarse stop of the search: 0.5 % or 0.02 m beyond the boundary.
			assert.LessOrEqual(t, d.DistanceM, 1.005*exact+0.02, d.Direction)
		}
	})
}

// Along a ray that passes several sources the distance is the outermost of all
// crossings: nothing beyond it is above, and just inside it something is.
func TestDistanceIsOutermostCrossing(t *testing.T) {
	ctx := context.Background()
	pattern, err := antenna.TwoBeamwidth(65*math.Pi/180, 8*math.Pi/180, 25, 0)
	require.NoError(t, err)
	rapid.Check(t, func(t *rapid.T) {
		near := radiator("near", Point{})
		far := radiator("far", Point{X: rapid.Float64Range(20, 60).Draw(t, "x"), Y: rapid.Float64Range(-3, 3).Draw(t, "y"), Z: rapid.Float64Range(-2, 2).Draw(t, "z")})
		far.Pattern, far.PatternKind, far.Gain, far.FrequencyHz = pattern, PatternBeamwidth, 40, 900e6
		far.Pose.AzimuthRad = rapid.Float64Range(0, 2*math.Pi).Draw(t, "azimuth")
		far.Power.TransmitterW = rapid.Float64Range(1, 100).Draw(t, "P")
		near.Power.TransmitterW = rapid.Float64Range(10, 1000).Draw(t, "P near")
		m := modelOf(t, []Source{near, far}, level(limits.S, 2))
		ray := &RayDirection{AzimuthRad: math.Pi / 2}
		got, err := m.Distances(ctx, DistanceQuery{All: true, Direction: ray})
		require.NoError(t, err)
		require.Len(t, got, 1)
		d := got[0]
		from := near.Position.Add(far.Position).Scale(0.5)
		// Steps of 1 % look beyond for what the search might have left out; the
		// places after them lie in the bracket.
		var places []Place
		put := func(r float64) { places = append(places, Place{ID: "p", At: from.Add(Point{X: r}), Class: "anyone"}) }
		for r := math.Max(d.DistanceM*(1+1e-9), 0.1); r < 400; r *= 1.01 {
			put(r)
		}
		beyond := len(places)
		for i := range 21 {
			put(d.DistanceM - d.BracketM*float64(i)/20)
		}
		field, err := m.Field(ctx, places)
		require.NoError(t, err)
		most := 0.0
		for i, p := range field {
			x := float64(p.Ratios[0].ExposureRatio)
			if i < beyond {
				assert.LessOrEqual(t, x, 1.0, "at x = %v m, beyond the distance of %v m", p.XM, d.DistanceM)
			} else {
				most = math.Max(most, x)
			}
		}
		if d.Verdict == Above {
			// A twentieth of the bracket is at most 0.5 mm: the ratio moves by less
			// than 1e-3 over it at these distances.
			assert.GreaterOrEqual(t, most, 1-1e-3, "the bracket of %v m holds no crossing; at %v m", d.BracketM, d.DistanceM)
		}
	})
}
