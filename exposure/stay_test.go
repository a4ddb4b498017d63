package exposure

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/optimize/convex/lp"

	"example.org/standclear/limits"
)

// briefModel has the occupational local level above 2 GHz with its brief energy:
// 200 W/m2 over 6 min and 3600 + 3605 sqrt(t) J/m2 for shorter stays (ICNIRP
// 2020, Health Physics 118(5):483-524, tables 6 and 7, from memory; the demo's
// limit table has the same row).
func briefModel(t *testing.T, ratio float64) *Model {
	row := limits.Row{Class: "worker", Quantity: limits.S, FromHz: 2e9, ToHz: 6e9, Coefficient: 200, FUnitHz: 1e6, AverageS: 360, TimeAveraging: true,
		Region: limits.Local, HasBrief: true, BriefA: 3600, BriefB: 3605, Source: "ICNIRP 2020, tables 6 and 7"}
	table, faults, _ := limits.New([]limits.Row{row}, limits.About{}, nil)
	require.Empty(t, faults)
	s := iso("a", 1, ratio*200*4*math.Pi)
	s.FrequencyHz = 3.5e9
	m, err := New(&Site{Sources: []Source{s}, Limits: table}, Options{Workers: 1})
	require.NoError(t, err)
	return m
}

// The averaging rule alone would let 800 W/m2 last 90 s, 72 kJ/m2; the brief
// energy there is 3600 + 3605 sqrt(90) = 37.8 kJ/m2. The stay ends where 800 t =
// 3600 + 3605 sqrt(t), a quadratic in sqrt(t).
func TestStayIsCutDownByBriefLevels(t *testing.T) {
	w, err := briefModel(t, 4).Work(context.Background(), WorkQuery{Places: []Place{{ID: "p"}}, Class: "worker", StayS: 60})
	require.NoError(t, err)
	root := (3605 + math.Sqrt(3605*3605+4*800*3600)) / (2 * 800)
	require.NotNil(t, w.StayMin)
	assert.InDelta(t, root*root/60, *w.StayMin, 1e-9, "bisection to rounding")
	assert.Less(t, *w.StayMin, 1.0)
	assert.False(t, w.StayAllowed, "a minute was asked")
	assert.Contains(t, w.StayReason, "brief exposure")
}

func TestNoStayBesideAReactiveRegion(t *testing.T) {
	a := iso("a", 0.02, 100) // 900 MHz: the reactive region reaches to 53 mm
	w, err := workSite(t, flatRow(), a).Work(context.Background(), WorkQuery{Places: []Place{{ID: "p"}}, Class: "worker"})
	require.NoError(t, err)
	assert.False(t, w.StayAllowed)
	assert.Contains(t, w.StayReason, "not assessed")
}

// planProblem is three transmitters over three places with ratios chosen so that
// no plan is obvious.
func planProblem(t *testing.T) (m *Model, places []Place, parts [3][3]float64, power [3]float64) {
	at := [3]Point{{X: 0}, {X: 7}, {X: 3, Y: 5}}
	where := [3]Point{{X: 1}, {X: 5, Y: 1}, {X: 3, Y: 3}}
	var sources []Source
	for i := range at {
		power[i] = []float64{180, 420, 390}[i]
		s := iso(string(rune('a'+i)), 0, power[i])
		s.Position = at[i]
		s.FrequencyHz += float64(i) * 1e6
		sources = append(sources, s)
	}
	m = workSite(t, flatRow(), sources...)
	for j, p := range where {
		places = append(places, Place{ID: string(rune('p' + j)), At: p, Class: "worker"})
		for i := range at {
			d := p.Sub(at[i]).Norm()
			parts[j][i] = power[i] / (4 * math.Pi * d * d) / 10
		}
	}
	return m, places, parts, power
}

// The least power given up equals the optimum of the dual program, minimize b.y
// over y >= 0, which bounds it from the other side (strong duality, Dantzig
// 1963), and no point of a fine grid of powers does better.
func TestLeastPowerAgainstDualAndGrid(t *testing.T) {
	m, places, parts, power := planProblem(t)
	w, err := m.Work(context.Background(), WorkQuery{Places: places, Class: "worker"})
	require.NoError(t, err)
	least := w.Reductions[0]
	require.Equal(t, PlanLeastPower, least.Plan)
	// Primal: max P.x, R x <= 1 - margin, x <= 1. Dual in y (places) and z
	// (caps): min (1 - margin) sum y + sum z, R'y + z >= P.
	c := make([]float64, 9)
	A := mat.NewDense(3, 9, nil)
	for j := 0; j < 3; j++ {
		c[j], c[3+j] = 1-workMargin, 1
	}
	for i := 0; i < 3; i++ {
		for j := 0; j < 3; j++ {
			A.Set(i, j, parts[j][i])
		}
		A.Set(i, 3+i, 1)
		A.Set(i, 6+i, -1)
	}
	kept, _, err := lp.Simplex(c, A, power[:], 1e-12, nil)
	require.NoError(t, err)
	total := power[0] + power[1] + power[2]
	assert.InDelta(t, total-kept, least.GivenUpW, 1e-5, "both programs to their tolerance, and a preference of 1e-9 a transmitter")
	best := math.Inf(1)
	const steps = 80
	for i := 0; i <= steps; i++ {
		for j := 0; j <= steps; j++ {
			for k := 0; k <= steps; k++ {
				x := [3]float64{float64(i) / steps, float64(j) / steps, float64(k) / steps}
				held, given := true, 0.0
				for p := range parts {
					sum := 0.0
					for s := range x {
						sum += parts[p][s] * x[s]
					}
					held = held && sum <= 1-workMargin
				}
				for s := range x {
					given += power[s] * (1 - x[s])
				}
				if held {
					best = math.Min(best, given)
				}
			}
		}
	}
	assert.LessOrEqual(t, least.GivenUpW, best+1e-5, "no grid point gives up less")
	assert.Greater(t, least.GivenUpW, best-total/steps, "nor is the optimum more than a step away")
}

// Fewest off against every one of the eight sets.
func TestFewestOffAgainstEverySet(t *testing.T) {
	m, places, parts, power := planProblem(t)
	w, err := m.Work(context.Background(), WorkQuery{Places: places, Class: "worker"})
	require.NoError(t, err)
	fewest := w.Reductions[2]
	count, given := 4, math.Inf(1)
	for set := 0; set < 8; set++ {
		n, lost, held := 0, 0.0, true
		for i := range power {
			if set>>i&1 == 1 {
				n++
				lost += power[i]
			}
		}
		for j := range parts {
			sum := 0.0
			for i := range power {
				if set>>i&1 == 0 {
					sum += parts[j][i]
				}
			}
			held = held && sum <= 1
		}
		if held && (n < count || n == count && lost < given) {
			count, given = n, lost
		}
	}
	assert.Len(t, fewest.Transmitters, count)
	assert.InDelta(t, given, fewest.GivenUpW, 1e-9, "a sum of the same powers")
}

// The powers of the switching sheet, set in a new site, bring every place within
// as the engine sees it anew.
func TestSwitchingSheetHolds(t *testing.T) {
	m, places, _, _ := planProblem(t)
	for _, plan := range Plans() {
		w, err := m.Work(context.Background(), WorkQuery{Places: places, Class: "worker", Plan: plan, From: "Thursday 09:00", To: "10:00"})
		require.NoError(t, err)
		require.NotEmpty(t, w.Switching, plan)
		site := *m.Site()
		site.Sources = append([]Source(nil), site.Sources...)
		for _, s := range w.Switching {
			assert.Equal(t, "Thursday 09:00", s.From)
			for i := range site.Sources {
				if site.Sources[i].Transmitter == s.Transmitter {
					site.Sources[i].Power.TransmitterW = s.TargetW
				}
			}
		}
		again, err := New(&site, Options{Workers: 1})
		require.NoError(t, err)
		points, err := again.Field(context.Background(), places)
		require.NoError(t, err)
		for _, p := range points {
			assert.Equal(t, Within, p.class("worker").Verdict, "%s at %s", plan, p.ID)
		}
	}
}
