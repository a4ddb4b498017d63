package exposure

import (
	"context"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/antenna"
	"example.org/standclear/limits"
)

// workSite is two transmitters and a shared third beside a place.
func workSite(t *testing.T, row limits.Row, sources ...Source) *Model {
	t.Helper()
	local := row
	local.Region, local.Coefficient = limits.Local, 4*row.Coefficient
	table, faults, _ := limits.New([]limits.Row{row, local}, limits.About{}, nil)
	require.Empty(t, faults)
	m, err := New(&Site{Sources: sources, Limits: table}, Options{Workers: 1})
	require.NoError(t, err)
	return m
}

func flatRow() limits.Row {
	return limits.Row{Class: "worker", Quantity: limits.S, FromHz: 1e6, ToHz: 1e11, Coefficient: 10, FUnitHz: 1e6, AverageS: 360, TimeAveraging: true, Source: "a flat level made for the test"}
}

func iso(id string, x, watts float64) Source {
	p, g := antenna.Isotropic()
	return Source{ID: id, Transmitter: id, State: On, Position: Point{X: x}, Pattern: p, PatternKind: PatternIsotropic, Gain: g, FrequencyHz: 900e6, Method: MethodFarField,
		Power: Power{TransmitterW: watts, Loss: 1, Carriers: 1, Duty: 1, ReductionFactor: 1, PeakFactor: 1}}
}

// The linear program of two transmitters and one place has the answer of a
// greedy choice by ratio per watt: take from the transmitter whose watt counts
// most (fractional knapsack, Dantzig 1957).
func TestLeastPowerIsTheFractionalKnapsack(t *testing.T) {
	// ratios at the origin: near 1.5, far 0.9; together 2.4
	near := iso("near", 1, 1.5*10*4*3.141592653589793)
	far := iso("far", 3, 0.9*9*10*4*3.141592653589793)
	m := workSite(t, flatRow(), near, far)
	w, err := m.Work(context.Background(), WorkQuery{Places: []Place{{ID: "p", Class: "worker"}}, Class: "worker", StayS: 60})
	require.NoError(t, err)
	assert.InDelta(t, 2.4, float64(w.ExposureRatio), 1e-9, "rounding of pi only")
	least := w.Reductions[0]
	require.Equal(t, "least power", least.Plan)
	require.Len(t, least.Transmitters, 1, "only the one whose watts count most is touched")
	assert.Equal(t, "near", least.Transmitters[0].Transmitter)
	// 1.5 x + 0.9 = 1 - margin
	assert.InDelta(t, (0.1-workMargin)/1.5, least.Transmitters[0].Factor, 1e-9, "the program is solved to rounding")
	assert.LessOrEqual(t, float64(least.ExposureRatio), 1.0)
	equal := w.Reductions[1]
	require.Len(t, equal.Transmitters, 2)
	assert.InDelta(t, (1-workMargin)/2.4, equal.Transmitters[0].Factor, 1e-9, "bisection to rounding")
	fewest := w.Reductions[2]
	require.Len(t, fewest.Transmitters, 1)
	assert.Equal(t, "near", fewest.Transmitters[0].Transmitter)
	assert.Zero(t, fewest.Transmitters[0].Factor)
	// 6 min at ratio 2.4, nothing elsewhere: 6/2.4 min
	require.NotNil(t, w.StayMin)
	assert.InDelta(t, 2.5, *w.StayMin, 1e-9, "closed form")
	assert.True(t, w.StayAllowed)
}

// Twice the limit for half the averaging time: FCC OET Bulletin 65 (97-01),
// section on time averaging, from memory.
func TestStayTimeTwiceTheLimitForHalfTheTime(t *testing.T) {
	assert.Equal(t, 180.0, StayTime(360, 2, 0), "exact in binary")
	assert.Equal(t, 120.0, StayTime(360, 3, 0), "exact in binary")
	assert.InDelta(t, 90, StayTime(360, 2.5, 0.5), 1e-9, "closed form: 360*0.5/2")
}

func TestNoStayWhereTheTableForbidsIt(t *testing.T) {
	place := []Place{{ID: "p", Class: "worker"}}
	never := flatRow()
	never.TimeAveraging = false
	for name, c := range map[string]struct {
		row  limits.Row
		peak bool
		want string
	}{
		"rows do not allow averaging": {row: never, want: "time averaging = yes"},
	} {
		w, err := workSite(t, c.row, iso("a", 1, 1000)).Work(context.Background(), WorkQuery{Places: place, Class: "worker"})
		require.NoError(t, err, name)
		assert.Contains(t, w.StayReason, c.want, name)
		assert.False(t, w.StayAllowed, name)
		assert.Zero(t, *w.StayMin, name)
	}
	// A peak level that is exceeded ends every stay.
	peak := flatRow()
	peak.Kind, peak.Coefficient = limits.Peak, 20
	table, faults, _ := limits.New([]limits.Row{flatRow(), peak}, limits.About{}, nil)
	require.Empty(t, faults)
	m, err := New(&Site{Sources: []Source{iso("a", 1, 1000)}, Limits: table}, Options{Workers: 1})
	require.NoError(t, err)
	w, err := m.Work(context.Background(), WorkQuery{Places: place, Class: "worker"})
	require.NoError(t, err)
	assert.Contains(t, w.StayReason, "never averaged")
	// Unknown power: no plan, no stay.
	unknown := iso("b", 2, 1)
	unknown.Power.Unknown = true
	w, err = workSite(t, flatRow(), iso("a", 1, 1000), unknown).Work(context.Background(), WorkQuery{Places: place, Class: "worker"})
	require.NoError(t, err)
	assert.Empty(t, w.Reductions)
	assert.False(t, w.StayAllowed)
	assert.Contains(t, w.StayReason, "power of b unknown")
}

// A signal shared by two transmitters adds in amplitude: the linear bound must
// still end within, and a stimulation level falls with the root of power.
func TestPlansHoldForSharedSignalsAndStimulation(t *testing.T) {
	a, b := iso("a", 1, 300), iso("b", -1.5, 500)
	a.Signal, b.Signal = "s", "s"
	stim := limits.Row{Class: "worker", Quantity: limits.E, FromHz: 1e6, ToHz: 1e11, Coefficient: 60, FUnitHz: 1e6, Effect: limits.Stimulation, Source: "a level made for the test"}
	for name, row := range map[string]limits.Row{"thermal": flatRow(), "stimulation": stim} {
		table, faults, _ := limits.New([]limits.Row{row}, limits.About{}, nil)
		require.Empty(t, faults)
		m, err := New(&Site{Sources: []Source{a, b, iso("c", 2, 200)}, Limits: table}, Options{Workers: 1})
		require.NoError(t, err)
		w, err := m.Work(context.Background(), WorkQuery{Places: []Place{{ID: "p", Class: "worker"}, {ID: "q", At: Point{Y: 1}, To: 2, Class: "worker"}}, Class: "worker"})
		require.NoError(t, err, name)
		require.Len(t, w.Reductions, 3, name)
		for _, r := range w.Reductions {
			assert.LessOrEqual(t, float64(r.ExposureRatio), 1.0, name+" "+r.Plan)
			assert.NotEmpty(t, r.Transmitters, name+" "+r.Plan)
		}
		// The least power is least: no more than the others give up, to rounding.
		assert.LessOrEqual(t, w.Reductions[0].GivenUpW, w.Reductions[2].GivenUpW+1e-6, name)
	}
}
