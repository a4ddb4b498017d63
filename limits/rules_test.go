package limits_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"pgregory.net/rapid"

	"example.org/standclear/limits"
)

// Pulses: 26. BImSchV, Annex 3 prints 1.5, 6.93 f^0.664 (f in MHz) and 32;
// 1999/519/EC prints 1000 and 32 above 10 MHz.
func TestPulseFactors(t *testing.T) {
	assert.Equal(t, 1000, limits.PulsePowerFactor)
	for _, c := range []struct{ hz, want, tol float64 }{
		{9e3, 1.5, 0}, {50e3, 1.5, 0}, {100e3, 1.5, 0},
		{100.0001e3, 1.5022, 5e-5}, // the formula, four decimals: it meets 1.5 within 0.2 %
		{1e6, 6.93, 1e-12},         // f = 1 leaves the printed constant
		{9.9999999e6, 31.969, 5e-4},
		{10e6, 32, 0}, {900e6, 32, 0}, {300e9, 32, 0},
	} {
		assert.InDelta(t, c.want, limits.PulseFieldFactor(c.hz), c.tol, "at %s", limits.Hz(c.hz))
	}
	assert.True(t, math.IsNaN(limits.PulseFieldFactor(8.9e3)))
	assert.True(t, math.IsNaN(limits.PulseFieldFactor(301e9)))
	assert.True(t, math.IsNaN(limits.PulseFieldFactor(math.NaN())))
}

// OET Bulletin 65 (Edition 97-01), eq. 2, and its reading for occupational
// exposure, from memory: twice the limit for three of any six minutes, nothing
// in the others.
func TestTwiceTheLimitForHalfTheTime(t *testing.T) {
	const minute = 60
	assert.Equal(t, 1.0, limits.TimeAveragedRatio([]float64{2}, []float64{3 * minute}, 6*minute))
	assert.Equal(t, 1.0, limits.TimeAveragedRatio([]float64{2, 0}, []float64{3 * minute, 3 * minute}, 6*minute))
	assert.Equal(t, 1.0, limits.TimeAveragedRatio([]float64{3}, []float64{2 * minute}, 6*minute))
	assert.Equal(t, 1.5, limits.TimeAveragedRatio([]float64{2, 1}, []float64{3 * minute, 3 * minute}, 6*minute))
	assert.True(t, math.IsNaN(limits.TimeAveragedRatio([]float64{1}, []float64{7 * minute}, 6*minute)), "longer than the averaging time")
	assert.True(t, math.IsNaN(limits.TimeAveragedRatio([]float64{1}, []float64{1}, 0)))
	assert.True(t, math.IsNaN(limits.TimeAveragedRatio([]float64{1, 2}, []float64{1}, 6)))
}

// Shares of the limits of a municipal filing for a rooftop antenna (Eugene,
// Oregon; statement on radio-frequency exposure, by OET 65 eq. 9): 2.66 uW/cm2
// at 1900 MHz of 1000 uW/cm2 is printed as 0.266 %, and the sum with the
// printed 0.67 % and 0.29 % as "less than 1.3 %".
func TestSumOfRatios(t *testing.T) {
	const perUWcm2 = 0.01 // W/m2
	table := published(t, fileFCC)
	pcs := at(t, table, pub, heating, 1900e6).Ratio(limits.Field{S: 2.66 * perUWcm2})
	assert.InDelta(t, 0.266e-2, pcs, 0.0005e-2, "half a unit of the last digit printed")
	assert.Less(t, 0.67e-2+0.29e-2+pcs, 1.3e-2)

	// The sum of S_i/limit_i, limits at each frequency (OET 65, from memory): half
	// of 0.2 mW/cm2 at 98 MHz and half of 1.0 mW/cm2 at 1900 MHz make one limit.
	fm := at(t, table, pub, heating, 98e6)
	assert.InDelta(t, 1, fm.Ratio(limits.Field{S: 1})+at(t, table, pub, heating, 1900e6).Ratio(limits.Field{S: 5}), 1e-12, "rounding")
	// Field strengths add as squares: 27.5/sqrt(2) V/m is half.
	assert.InDelta(t, 0.5, fm.Ratio(limits.Field{E: 27.5 / math.Sqrt2}), 1e-12, "rounding")
	assert.InDelta(t, 0.25, fm.Ratio(limits.Field{H: 0.073 / 2}), 1e-12, "rounding")
	// The largest counts: S at its limit beside a small E.
	assert.InDelta(t, 1, fm.Ratio(limits.Field{E: 1, H: 0.001, S: 2}), 1e-12, "rounding")
}

// ICNIRP 1998, eqs. 7 to 10 (from memory): for stimulation field strengths add
// as they are, for heating as squares, with their own levels.
func TestSumOfAGuidelineByEffect(t *testing.T) {
	table := published(t, fileI98)
	// 2 MHz and 0.5 MHz together, public, E: a = 87 V/m at both.
	var st, th float64
	for _, f := range []float64{0.5e6, 2e6} {
		st += at(t, table, pub, stimul, f).Ratio(limits.Field{E: 43.5})
		th += at(t, table, pub, heating, f).Ratio(limits.Field{E: 43.5})
	}
	assert.InDelta(t, 1, st, 1e-12, "half of 87 V/m twice, as fields; rounding")
	// c = 87/f^0.5: (43.5/87)^2 (0.5 + 2) = 0.625.
	assert.InDelta(t, 0.625, th, 1e-12, "as squares, each with its own level; rounding")
	assert.Equal(t, 0.0, at(t, table, pub, stimul, 20e6).Ratio(limits.Field{E: 1e6, H: 1e6, B: 1}), "no stimulation above 10 MHz")
}

// ICNIRP 2020 below 30 MHz (sum rule from memory): E and H of one source add.
func TestFieldsThatAdd(t *testing.T) {
	table := published(t, fileI20)
	a := at(t, table, pub, heating, 1e6)
	assert.Equal(t, limits.CombineAdd, a.Combine)
	assert.InDelta(t, 1.25, a.Ratio(limits.Field{E: 300, H: 1.1}), 1e-12, "1 + 0.5^2; rounding")
	assert.Equal(t, limits.CombineLargest, at(t, table, pub, heating, 98e6).Combine)
	assert.InDelta(t, 1, at(t, table, pub, heating, 98e6).Ratio(limits.Field{E: 27.7, H: 0.073, S: 2}), 1e-12, "rounding")
	// H and B are one field: the larger counts, once.
	both := limits.At{Group: heating, Combine: limits.CombineAdd, E: 1, H: 1, B: 1}
	assert.InDelta(t, 5, both.Ratio(limits.Field{E: 1, H: 1, B: 2}), 0)
}

// The law and its parts.
func TestPowerLaw(t *testing.T) {
	assert.Equal(t, 614.0, limits.LevelAt(1842, -1, 1e6, 3e6), "printed 1842/f at 3 MHz is 614 exactly (47 CFR 1.1310)")
	assert.Equal(t, 0.2, limits.LevelAt(0.2, 0, 1e6, 98e6))
	assert.InDelta(t, 134.164, limits.LevelAt(3e-3, 0.5, 1, 2e9), 5e-4, "3e-3 f^0.5, f in Hz (2013/35/EU, Table B1, from memory)")
	assert.Equal(t, 0.0, limits.AveragingTime(0, -1, 1e9, 2e9), "never averaged stays never averaged")
	assert.InDelta(t, 68*60, limits.AveragingTime(68*60, -1.05, 1e9, 1e9), 0)
	assert.Equal(t, 23.0, limits.BriefEnergy(3, 10, 0, 1e6, 900e6, 4), "a + b sqrt(t)")
	assert.Equal(t, 46.0, limits.BriefEnergy(3, 10, 1, 1e6, 2e6, 4), "times f")
	rapid.Check(t, func(t *rapid.T) {
		c, e := rapid.Float64Range(1e-3, 1e3).Draw(t, "c"), rapid.Float64Range(-2, 2).Draw(t, "e")
		f := math.Exp(rapid.Float64Range(math.Log(1e3), math.Log(3e11)).Draw(t, "ln f"))
		want := c * math.Exp(e*math.Log(f/1e6))
		got := limits.LevelAt(c, e, 1e6, f)
		if math.Abs(got-want) > 1e-12*want { // two routes, rounding of exp and log
			t.Fatalf("%g f^%g at %g: %g, want %g", c, e, f, got, want)
		}
	})
}

func ExampleTable_At() {
	table, faults, warnings := limits.New([]limits.Row{
		{Class: "public", Quantity: limits.S, FromHz: 30e6, ToHz: 400e6, Coefficient: 2, AverageS: 360, Source: "an example"},
		{Class: "public", Quantity: limits.S, FromHz: 400e6, ToHz: 2e9, Coefficient: 0.005, Exponent: 1, AverageS: 360, Source: "an example"},
	}, limits.About{}, nil)
	for _, a := range table.At("public", 900e6) {
		fmt.Printf("%s: S %.1f W/m2 over %.0f s\n", a.Group, a.S, a.AverageS)
	}
	fmt.Println(len(faults), warnings[0].Message)
	// Output:
	// thermal, whole body, mean: S 4.5 W/m2 over 360 s
	// 0 nobody has confirmed this transcription of the limits
}
