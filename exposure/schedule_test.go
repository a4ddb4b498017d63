package exposure

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// roofSite is one isotropic source one metre above a square roof.
func roofSite(t *testing.T, x, y float64) *Model {
	s := iso("a", x, 10*4*math.Pi*4) // ratio 1 at 2 m: sqrt(3) m on the roof
	s.Position = Point{X: x, Y: y, Z: 1}
	s.Uncertainty.PowerDB, s.Uncertainty.GainDB = 0.3, 0.4
	m := workSite(t, flatRow(), s)
	site := *m.Site()
	site.Surfaces = []Surface{{ID: "roof", Outline: []Ring{{{0, 0}, {20, 0}, {20, 20}, {0, 20}, {0, 0}}}, Class: "worker"}}
	site.Places = []Place{{ID: "hatch", At: Point{X: 10, Y: 14}, Class: "worker", WallLoss: 1}}
	out, err := New(&site, Options{Workers: 1})
	require.NoError(t, err)
	return out
}

// The line around a source over flat ground is a circle of sqrt(3) m: its length
// and area are those of the circle to the resolution; the steps of a line on a
// lattice make it longer, at most 4/pi times.
func TestScheduleOfARoundArea(t *testing.T) {
	m := roofSite(t, 5, 6)
	z, err := m.Zones(context.Background(), ZoneQuery{ResolutionM: 0.05})
	require.NoError(t, err)
	b, err := m.Schedule(context.Background(), z)
	require.NoError(t, err)
	require.Len(t, b, 1)
	r := math.Sqrt(3)
	assert.InDelta(t, math.Pi*r*r, b[0].AreaM2, 2*math.Pi*r*0.05, "a ring one resolution wide")
	assert.GreaterOrEqual(t, b[0].LengthM, 2*math.Pi*r*0.99)
	assert.LessOrEqual(t, b[0].LengthM, 8*(r+0.05))
	assert.Zero(t, b[0].EdgeM)
	assert.InDelta(t, 5-r, b[0].FromXM, 0.05, "the resolution")
	assert.InDelta(t, 6+r, b[0].ToYM, 0.05, "the resolution")
	assert.Equal(t, "south-west corner (0.00, 0.00)", b[0].Corner)
	assert.InDelta(t, math.Hypot(5, 6)-r, b[0].CornerM, 0.08, "the resolution, along a diagonal")
	assert.Equal(t, "hatch", b[0].Place)
	assert.Equal(t, []string{"a"}, b[0].Antennas)
	assert.True(t, b[0].MayBeThere)
}

// A source at the roof's edge leaves a half circle: its straight side lies along
// the edge and needs no barrier.
func TestScheduleAlongTheEdge(t *testing.T) {
	m := roofSite(t, 10, 0)
	z, err := m.Zones(context.Background(), ZoneQuery{ResolutionM: 0.05})
	require.NoError(t, err)
	b, err := m.Schedule(context.Background(), z)
	require.NoError(t, err)
	require.Len(t, b, 1)
	assert.InDelta(t, 2*math.Sqrt(3), b[0].EdgeM, 0.4, "segments that bend away within one and a half resolutions count with the edge")
	assert.Greater(t, b[0].LengthM, math.Pi*math.Sqrt(3)*0.9)
}

// One source: the ratio in dB is the power in dB, so that its uncertainty is the
// root sum of squares of power and gain.
func TestRatioUncertaintyOfOneSource(t *testing.T) {
	m := roofSite(t, 5, 6)
	first, err := m.MeasureFirst(context.Background(), m.Site().Places, nil)
	require.NoError(t, err)
	require.Len(t, first, 1)
	assert.InDelta(t, 0.5, first[0].UncertaintyDB, 1e-9, "rounding: 0.3 and 0.4 dB")
	assert.Equal(t, 900e6, first[0].FromHz)
	assert.InDelta(t, 0.1*EFromS(10), float64(first[0].FloorVPerM), 1e-9, "a tenth of the level of 10 W/m2")
	assert.InDelta(t, 2*EFromS(10), float64(first[0].TopVPerM), 1e-9, "twice the level, which is larger than the prediction")
}

// A field factor of 2 is worth 20 log10(2) dB in S, and a duty of a quarter is
// worth 10 log10(4) dB; both together make the conservative figure.
func TestWorthOfGroundAndDuty(t *testing.T) {
	m := roofSite(t, 5, 6)
	site := *m.Site()
	site.Sources = append([]Source(nil), site.Sources...)
	site.Sources[0].Power.Duty = 0.25
	m, err := New(&site, Options{Workers: 1})
	require.NoError(t, err)
	d, err := m.Distances(context.Background(), DistanceQuery{})
	require.NoError(t, err)
	sets, err := m.Assumptions(context.Background(), site.Places, d)
	require.NoError(t, err)
	require.Len(t, sets, 3, "a place, the row and everything together")
	worth := map[string]float64{}
	for _, p := range sets[0].Parts {
		worth[p.Assumption+": "+p.Choice] = float64(p.WorthDB)
	}
	assert.InDelta(t, 20*math.Log10(2), worth["ground: field factor 2"], 1e-9, "rounding")
	assert.InDelta(t, 20*math.Log10(1.6), worth["ground: field factor 1.6"], 1e-9, "rounding")
	assert.Zero(t, worth["ground: no reflection"])
	assert.InDelta(t, 10*math.Log10(4), worth["power reduction factor and duty: both 1: full power all the time"], 1e-9, "rounding")
	assert.InDelta(t, 16, float64(sets[0].Conservative.Ratio/sets[0].Ratio), 1e-9, "rounding: four times four")
	assert.Equal(t, sets[0].Ratio, sets[0].BestEstimate.Ratio, "nothing but the direct ray was counted")
	// Sixteen times the ratio carries four times as far in the far field.
	assert.InDelta(t, 4, sets[1].Conservative.DistanceM/sets[1].BestEstimate.DistanceM, 0.01, "extents are found to a thousandth of the distance, and twice that off the axis")
}

// The worst state is named, and standby rows make a state of their own.
func TestStatesNameTheWorst(t *testing.T) {
	m := roofSite(t, 5, 6)
	site := *m.Site()
	spare := site.Sources[0]
	spare.ID, spare.Transmitter, spare.State, spare.FrequencyHz = "spare", "spare", Standby, 950e6
	louder := site
	site.Sources = append(append([]Source(nil), site.Sources...), spare)
	louder.Sources = append([]Source(nil), louder.Sources...)
	louder.Sources[0].Power.TransmitterW *= 10
	site.Scenarios = []Scenario{{Name: "louder", Changes: []string{"as typed"}, Site: &louder}}
	m, err := New(&site, Options{Workers: 1})
	require.NoError(t, err)
	states, err := m.States(context.Background())
	require.NoError(t, err)
	require.Len(t, states, 3)
	assert.Equal(t, []string{StateAll, StateOn, "louder"}, []string{states[0].State, states[1].State, states[2].State})
	assert.InDelta(t, 2, float64(states[0].Places[0].ExposureRatio/states[1].Places[0].ExposureRatio), 1e-9, "two alike in place of one")
	assert.InDelta(t, 10, float64(states[2].Places[0].ExposureRatio/states[1].Places[0].ExposureRatio), 1e-9, "ten times the power")
	assert.Equal(t, []WorstOfState{{"hatch", "worker"}, {"roof", "worker"}}, states[2].Worst)
	assert.Empty(t, states[0].Worst)
}

// A plan for anywhere on a surface holds at every point of it: the largest ratio
// of the roof with the plan is bounded below 1 by the search for it.
func TestPlanHoldsOverASurface(t *testing.T) {
	m := roofSite(t, 5, 6)
	w, err := m.Work(context.Background(), WorkQuery{Surface: "roof", Class: "worker"})
	require.NoError(t, err)
	assert.Equal(t, Above, w.Verdict)
	assert.InDelta(t, 4, float64(w.ExposureRatio), 4*2*summitGap, "the search ends where its bound is within summitGap of what it found; the bound itself is above the largest")
	require.Len(t, w.Reductions, 3)
	least := w.Reductions[0]
	require.Len(t, least.Transmitters, 1)
	assert.InDelta(t, (1-surfaceMargin)/4, least.Transmitters[0].Factor, 0.01, "inverse square at 1 m, less the margin")
	assert.LessOrEqual(t, float64(least.ExposureRatio), 1.0)
	assert.Empty(t, least.Note)
}
