package exposure

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"gonum.org/v1/gonum/stat/distuv"

	"example.org/standclear/antenna"
)

// With one isotropic source whose power is normal in dB the distance is
// lognormal: its 95 % quantile is d 10^(1.645 u/20). The closed form must lie in
// the quantile's own 95 % interval (for this seed), widened by the 0.1 % of the
// table's interpolation and the extent's bracket of 0.1 %.
func TestCoverageOfOneSourceIsLognormal(t *testing.T) {
	s := iso("a", 0, 1000)
	s.Uncertainty.PowerDB, s.Uncertainty.GainDB = 0.8, 0.6
	m := workSite(t, flatRow(), s)
	ds, err := m.Distances(context.Background(), DistanceQuery{Rows: true, Coverage: &Coverage{Probability: 0.95}})
	require.NoError(t, err)
	nominal := math.Sqrt(1000 / (4 * math.Pi * 10))
	want := nominal * math.Pow(10, distuv.UnitNormal.Quantile(0.95)/20)
	for _, d := range ds {
		require.NotNil(t, d.Covered, d.Direction)
		slack := 0.002 * want
		assert.GreaterOrEqual(t, want, d.Covered.LowM-slack, d.Direction)
		assert.LessOrEqual(t, want, d.Covered.HighM+slack, d.Direction)
		assert.LessOrEqual(t, d.Covered.HighM-d.Covered.LowM, DefaultResolutionM, "trials are added until the interval is within the resolution")
		assert.Equal(t, "power and gain", d.Covered.Inputs[0].Input)
		assert.InDelta(t, 0, d.Covered.Inputs[1].DeviationM, 1e-9, "nothing else varies; rounding of the mean only")
	}
	// The same for any number of workers: nothing is drawn from a shared stream.
	m.options.Workers = 4
	again, err := m.Distances(context.Background(), DistanceQuery{Rows: true, Coverage: &Coverage{Probability: 0.95}})
	require.NoError(t, err)
	assert.Equal(t, ds, again)
}

// A position that varies by u along the ray moves the distance by u.
func TestCoverageOfPositionMovesTheBoundary(t *testing.T) {
	s := iso("a", 0, 1000)
	s.Uncertainty.PositionM = 0.1
	m := workSite(t, flatRow(), s)
	ds, err := m.Distances(context.Background(), DistanceQuery{Rows: true, Coverage: &Coverage{Probability: 0.95}, Direction: &RayDirection{}})
	require.NoError(t, err)
	require.Len(t, ds, 1)
	for _, in := range ds[0].Covered.Inputs {
		if in.Input == "position" {
			// 1000 trials: a standard deviation is known to 1/sqrt(2000) = 2.2 %;
			// 10 % is more than four of these.
			assert.InDelta(t, 0.1, in.DeviationM, 0.01)
		}
	}
}

// The table of responses against the engine asked anew with the inputs moved:
// the source seen from the moved point is the moved source seen from the point, to
// rounding: the inverse motion of the point is exact.
func TestCoverageResponseAgreesWithAMovedAntenna(t *testing.T) {
	s := sectorForCoverage(t)
	m := workSite(t, flatRow(), s)
	r := m.rules[0]
	e := m.evaluator(r, nil, 1, siteFrame, 1)
	p := Point{X: 3, Y: 14, Z: -1}
	for input, step := range []float64{s.Uncertainty.TiltRad, s.Uncertainty.AzimuthRad, 0.05, 0.05, 0.05} {
		moved := s
		switch input {
		case 0:
			moved.Pose.TiltRad += step
		case 1:
			moved.Pose.AzimuthRad += step
		default:
			d := [3]Point{{X: step}, {Y: step}, {Z: step}}[input-2]
			moved.Position = moved.Position.Add(d)
		}
		_, want := workSite(t, flatRow(), moved).evaluator(r, nil, 1, siteFrame, 1).at(p)
		got := math.Exp(logRatio(e, &e.terms[0], 0, siteFrame.moved(&s, p, input, step)))
		assert.InEpsilon(t, want, got, 1e-9, coverageInputs[min(input, 3)]+": the inverse motion is exact")
	}
}

func sectorForCoverage(t *testing.T) Source {
	t.Helper()
	p, err := antenna.TwoBeamwidth(65*math.Pi/180, 10*math.Pi/180, 30, 0)
	require.NoError(t, err)
	s := iso("sector", 0, 100)
	s.Pattern, s.PatternKind, s.Gain = p, PatternBeamwidth, antenna.GainFromDBi(16)
	s.Pose = antenna.Pose{AzimuthRad: 0.2, TiltRad: 0.07}
	s.Uncertainty = Uncertainty{TiltRad: 0.01, AzimuthRad: 0.05}
	return s
}
