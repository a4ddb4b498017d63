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

// sumRounding is the tolerance of a ratio computed twice: some tens of
// operations of 2^-53 each.
const sumRounding = 1e-12

// radiator is an isotropic far-field source of 1 kW at 100 MHz.
func radiator(id string, at Point) Source {
	pattern, gain := antenna.Isotropic()
	return Source{
		ID: id, Transmitter: id, State: On, Position: at, Polarization: antenna.Vertical,
		Pattern: pattern, PatternKind: PatternIsotropic, Gain: gain, FrequencyHz: 100e6, Method: MethodFarField,
		Power: Power{TransmitterW: 1000, Loss: 1, Carriers: 1, Duty: 1, ReductionFactor: 1, PeakFactor: 1},
	}
}

func level(q limits.Quantity, value float64, change ...func(*limits.Row)) limits.Row {
	r := limits.Row{
		Class: "anyone", Quantity: q, FromHz: 1e3, ToHz: 300e9, Coefficient: value, FUnitHz: 1e6, AverageS: 360,
		OverBody: limits.Largest, Region: limits.WholeBody, Effect: limits.Thermal, Kind: limits.Mean,
		Combine: limits.CombineLargest, Source: "made for a test",
	}
	for _, c := range change {
		c(&r)
	}
	return r
}

// ratioAt returns the ratio of class "anyone" at the place.
func ratioAt(t require.TestingT, pl Place, sources []Source, rows ...limits.Row) float64 {
	table, faults, _ := limits.New(rows, limits.About{}, nil)
	require.Empty(t, faults)
	m, err := New(&Site{Sources: sources, Limits: table}, Options{Workers: 1})
	require.NoError(t, err)
	got, err := m.Field(context.Background(), []Place{pl})
	require.NoError(t, err)
	return float64(got[0].Ratios[0].ExposureRatio)
}

// Equations 7 to 10 of ICNIRP 1998 (Health Physics 74(4):494-522): heating sums
// squares of fields, stimulation sums fields; OET Bulletin 65 sums S over its
// limit. From memory. The fields are those of the plane-wave formulas, which are
// held against printed values elsewhere.
func TestRatioSumsOverSources(t *testing.T) {
	stimulation := func(r *limits.Row) { r.Effect = limits.Stimulation }
	add := func(r *limits.Row) { r.Combine = limits.CombineAdd }
	rapid.Check(t, func(t *rapid.T) {
		coordinate := rapid.Float64Range(5, 50)
		a := radiator("a", Point{X: coordinate.Draw(t, "xa"), Y: coordinate.Draw(t, "ya")})
		b := radiator("b", Point{X: -coordinate.Draw(t, "xb"), Z: coordinate.Draw(t, "zb")})
		b.FrequencyHz = 900e6
		b.Power.TransmitterW = rapid.Float64Range(1, 5000).Draw(t, "P")
		both := []Source{a, b}
		sa := PowerDensity(a.Power.TransmitterW, 1, a.Position.Norm())
		sb := PowerDensity(b.Power.TransmitterW, 1, b.Position.Norm())
		here := Place{ID: "origin", Class: "anyone"}
		s, e, h := 3.7, 41.0, 0.02

		assert.InEpsilon(t, (sa+sb)/s, ratioAt(t, here, both, level(limits.S, s)), sumRounding)
		assert.InEpsilon(t, Z0*(sa+sb)/(e*e), ratioAt(t, here, both, level(limits.E, e)), sumRounding)
		// Of several quantities the largest counts for each source, unless the
		// rows say add.
		most := math.Max(1/s, math.Max(Z0/(e*e), 1/(Z0*h*h)))
		rows := []limits.Row{level(limits.S, s), level(limits.E, e), level(limits.H, h)}
		assert.InEpsilon(t, most*(sa+sb), ratioAt(t, here, both, rows...), sumRounding)
		rows[0] = level(limits.S, s, add)
		assert.InEpsilon(t, (1/s+Z0/(e*e)+1/(Z0*h*h))*(sa+sb), ratioAt(t, here, both, rows...), sumRounding)
		// Stimulation sums fields.
		assert.InEpsilon(t, (EFromS(sa)+EFromS(sb))/e, ratioAt(t, here, both, level(limits.E, e, stimulation)), sumRounding)
		// E, H and S limits that are one plane wave give one ratio.
		assert.InEpsilon(t, ratioAt(t, here, both, level(limits.S, 2)),
			ratioAt(t, here, both, level(limits.E, EFromS(2)), level(limits.H, HFromS(2))), sumRounding)
	})
}

// N equal bays of one signal at one distance make N times the field, so N2 times
// the density; the same rows as strangers make N times. (An identity: the
// triangle inequality is met with equality in phase.)
func TestSharedSignalAddsInAmplitude(t *testing.T) {
	here := Place{ID: "origin", Class: "anyone"}
	var bays []Source
	for _, at := range []Point{{X: 30}, {Y: 30}, {Z: 30}} {
		bays = append(bays, radiator(string(rune('a'+len(bays))), at))
	}
	one := ratioAt(t, here, bays[:1], level(limits.S, 2))
	assert.InEpsilon(t, 3*one, ratioAt(t, here, bays, level(limits.S, 2)), sumRounding)
	for i := range bays {
		bays[i].Signal = "programme"
	}
	assert.InEpsilon(t, 9*one, ratioAt(t, here, bays, level(limits.S, 2)), sumRounding)
	// Another frequency of the same name is another signal.
	bays[2].FrequencyHz = 101e6
	assert.InEpsilon(t, 5*one, ratioAt(t, here, bays, level(limits.S, 2)), sumRounding)
}

// The mean over a body is the integral over its height, and never above the
// largest. Beside an isotropic source at horizontal distance d the integral of
// 1/(d2 + z2) from 0 to h is atan(h/d)/d.
func TestBodyMeanNeverAboveLargest(t *testing.T) {
	mean := func(r *limits.Row) { r.OverBody = limits.BodyMean }
	rapid.Check(t, func(t *rapid.T) {
		d := rapid.Float64Range(1, 20).Draw(t, "d")
		height := rapid.Float64Range(0.5, 2.5).Draw(t, "h")
		body := Place{ID: "body", Class: "anyone", To: height}
		source := []Source{radiator("a", Point{X: d})}
		largest := ratioAt(t, body, source, level(limits.S, 2))
		average := ratioAt(t, body, source, level(limits.S, 2, mean))
		want := 1000 / (4 * math.Pi) * math.Atan(height/d) / d / height / 2
		assert.LessOrEqual(t, average, largest)
		assert.InEpsilon(t, PowerDensity(1000, 1, d)/2, largest, 1e-6) // the search for the height stops there
		assert.InEpsilon(t, want, average, 1e-6)                       // the stated accuracy of the quadrature
	})
}
