package survey_test

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/exposure/survey"
)

// Divisors: JCGM 100:2008 (GUM), 4.3.7 (rectangular, sqrt 3), 4.3.9 (triangular,
// sqrt 6); arc sine (mismatch) sqrt 2 and normal k, from memory. Tolerance: half
// of the last printed digit.
func TestDivisorsOfTheGUM(t *testing.T) {
	for d, want := range map[survey.Distribution]float64{
		survey.Normal: 1, survey.Rectangular: 1.7320508, survey.Triangular: 2.4494897, survey.UShaped: 1.4142136,
	} {
		assert.InDelta(t, want, survey.DivisorOf(d), 5e-8, "%s", d)
	}
}

// A budget made for this test (not a published one) and worked out apart from
// this program by JCGM 100:2008, 5.1.2: root-sum-square of 1.0 dB at k = 2,
// 1.0 dB and 0.5 dB rectangular, 0.8 dB u-shaped and 0.6 dB as it stands.
// Tolerance: half of the last digit.
func TestBudget(t *testing.T) {
	in := survey.Instrument{ID: "M", Components: []survey.Component{
		{Name: "calibration", Value: 1, Distribution: survey.Normal, Divisor: 2},
		{Name: "response", Value: 1, Distribution: survey.Rectangular},
		{Name: "linearity", Value: 0.5, Distribution: survey.Rectangular},
		{Name: "mismatch", Value: 0.8, Distribution: survey.UShaped},
		{Name: "repeatability", Value: 0.6, Distribution: survey.Normal},
	}}
	b, ok := survey.BudgetOf(&in)
	require.True(t, ok)
	assert.InDelta(t, 1.160460, b.CombinedDB, 5e-7)
	assert.InDelta(t, 2.274501, b.ExpandedDB, 5e-7)
	assert.InDelta(t, 1.299347, b.UpperFactor, 5e-7)
	assert.InDelta(t, 0.769618, b.LowerFactor, 5e-7)
	_, ok = survey.BudgetOf(&survey.Instrument{ID: "bare"})
	assert.False(t, ok, "no component is no uncertainty, not an uncertainty of nothing")
}

// A component in % of the field: 12 % at k = 2 is 6 %, and 20 log10(1.06) =
// 0.5061 dB (pocket calculator; half of the last digit). The sensitivity
// coefficient multiplies (JCGM 100:2008, 5.1.3).
func TestPercentAndSensitivity(t *testing.T) {
	c := survey.Component{Value: 12, Percent: true, Distribution: survey.Normal, Divisor: 2}
	assert.InDelta(t, 0.5061, c.StandardDB(), 5e-5)
	c.Sensitivity = 2
	assert.InDelta(t, 2*0.5061, c.StandardDB(), 1e-4)
}

// JCGM 106:2012, 8.3.2 and table of guard bands, from memory: with a guard band
// of U (k = 2) at most 2.3 % of accepted values are above; 1.64 u gives 5 %, no
// guard band 50 %. Tolerance: the rounding of the printed share.
func TestGuardBandProbabilities(t *testing.T) {
	const u = 1.16
	assert.InDelta(t, 0.023, survey.ProbabilityAbove(2*u, u), 5e-4)
	assert.InDelta(t, 0.05, survey.ProbabilityAbove(1.64*u, u), 1e-3)
	assert.InDelta(t, 0.5, survey.ProbabilityAbove(0, u), 1e-15)
	assert.InDelta(t, 0.975, survey.ProbabilityAbove(-1.959964*u, u), 1e-7)
	assert.Equal(t, 1.0, survey.ProbabilityAbove(-1, 0))
	assert.Equal(t, 0.0, survey.ProbabilityAbove(1, 0))
}

// dBuV = dBm + 106.9897 in 50 ohm; measurement handbooks print 107 (tolerance
// 0.011 dB, their rounding).
func TestPortLevel(t *testing.T) {
	dBuV := func(e float64) float64 { return 20*math.Log10(e) + 120 }
	milliwatt := 1e-3
	assert.InDelta(t, 106.98970, dBuV(survey.FieldFromPortLevel(milliwatt, 0, 0)), 5e-6)
	assert.InDelta(t, 107, dBuV(survey.FieldFromPortLevel(milliwatt, 0, 0)), 0.011)
	// -20 dBm with 28.6 dB/m and 1.7 dB: -20 + 107 + 28.6 + 1.7 = 117.3 dBuV/m.
	assert.InDelta(t, 117.3, dBuV(survey.FieldFromPortLevel(1e-5, 28.6, 1.7)), 0.011)
	assert.Zero(t, survey.FieldFromPortLevel(0, 30, 1))
}

// AF = 20 log10(f/MHz) - G - 29.79 in 50 ohm, as handbooks print it, from memory;
// they round Z0 and c (tolerance 0.02 dB). The identity behind it: an antenna
// of gain G gives P = S lambda^2 G/(4 pi) to its receiver (to rounding).
func TestAntennaFactorFromGain(t *testing.T) {
	for _, f := range []float64{100, 900, 1842.5, 3500} {
		for _, g := range []float64{-3, 2.15, 9} {
			af := survey.AntennaFactorFromGain(f*1e6, g)
			assert.InDelta(t, 20*math.Log10(f)-g-29.79, af, 0.02, "%g MHz, %g dBi", f, g)
			const e = 3.7
			lambda := 299792458 / (f * 1e6)
			power := e * e / 376.730313412 * lambda * lambda * math.Pow(10, g/10) / (4 * math.Pi)
			assert.InEpsilon(t, e, survey.FieldFromPortLevel(power, af, 0), 1e-9)
		}
	}
}

// The factors of extrapolation in dB: forms of EN 50492 and IEC 62232, from
// memory; figures 10 log10 of the number of subcarriers 12 N_RB. Tolerance: half
// of the last digit.
func TestScaleFactors(t *testing.T) {
	db := func(k float64) float64 { return 20 * math.Log10(k) }
	for bandwidth, want := range map[string]float64{"1.4": 18.5733, "3": 22.5527, "5": 24.7712, "10": 27.7815, "15": 29.5424, "20": 30.7918} {
		s, err := survey.ParseScale("LTE reference signal: bandwidth " + bandwidth + " MHz")
		require.NoError(t, err)
		assert.InDelta(t, want, db(s.Factor(1)), 5e-5, "%s MHz", bandwidth)
	}
	for text, want := range map[string]float64{
		"UMTS pilot: pilot share 10 %":                                                                     10,
		"NR synchronization block: resource blocks 273":                                                    35.1534,
		"NR synchronization block: resource blocks 106":                                                    31.0449,
		"nr Synchronization  Block: subcarriers 3276":                                                      35.1534,
		"power share: share 25%":                                                                           6.0206,
		"GSM broadcast carrier: carriers 4":                                                                6.0206,
		"LTE reference signal: subcarriers 1200;boost 3 dB":                                                30.7918 - 3,
		"LTE reference signal: bandwidth 20 MHz, ports 2":                                                  30.7918 + 3.0103,
		"NR synchronization block: resource blocks 273, beam gain 6 dB, TDD share 0.75, power factor 0.25": 35.1534 + 6 - 1.2494 - 6.0206,
	} {
		s, err := survey.ParseScale(text)
		require.NoError(t, err, text)
		assert.InDelta(t, want, db(s.Factor(1)), 1e-4, text)
		assert.NotEmpty(t, s.Formula(1))
	}
	assert.InDelta(t, 3.1623, survey.PilotFactor(0.1), 5e-5)
	assert.InDelta(t, math.Sqrt(1200/2.), survey.ReferenceSignalFactor(1200, 2), 1e-12)
	assert.InDelta(t, 3, survey.BroadcastCarrierFactor(9), 1e-12)
	assert.InDelta(t, math.Sqrt(3276*4*0.75*0.25), survey.SyncBlockFactor(3276, 4, 0.75, 0.25), 1e-9)

	// Powers are summed over ports: a reading that covers both of two needs no more.
	s, err := survey.ParseScale("LTE reference signal: bandwidth 20 MHz, ports 2")
	require.NoError(t, err)
	assert.InDelta(t, 30.7918, db(s.Factor(2)), 5e-5)
	var none *survey.Scale
	assert.Equal(t, 1.0, none.Factor(1))
}

func TestScaleIsRefusedWithAReason(t *testing.T) {
	for text, want := range map[string]string{
		"twice":                                 "names no method",
		"LTE reference signal":                  "takes one of the figures bandwidth, subcarriers, resource blocks",
		"LTE reference signal: bandwidth 7 MHz": "one of the LTE bandwidths",
		"LTE reference signal: bandwidth 20 MHz, subcarriers 1200":       "takes one of the figures",
		"LTE reference signal: bandwidth 20 MHz, boost 3":                "a ratio in dB",
		"LTE reference signal: bandwidth 20 MHz, boost 3 dB, boost 1 dB": "given twice",
		"UMTS pilot: pilot share 110 %":                                  "above 0 and at most 1",
		"UMTS pilot: share 10 %":                                         "is no figure of the method",
		"GSM broadcast carrier: carriers 2.5":                            "a whole number",
		"GSM broadcast carrier: carriers many":                           "a number",
		"power share: share 0":                                           "above 0",
	} {
		_, err := survey.ParseScale(text)
		if assert.Error(t, err, text) {
			assert.Contains(t, err.Error(), want, text)
		}
	}
	for _, text := range survey.ScaleExamples() {
		_, err := survey.ParseScale(text)
		assert.NoError(t, err, text)
	}
}

// Linear in log f: half way between 100 and 10 000 MHz in the logarithm lies
// 1000 MHz (exact to rounding).
func TestCalibrationByFrequency(t *testing.T) {
	c := survey.Calibration{Name: "probe.csv", Points: []survey.CalibrationPoint{{100e6, 1.0}, {10000e6, 1.4}, {20000e6, 1.1}}}
	k, err := c.At(1000e6)
	require.NoError(t, err)
	assert.InDelta(t, 1.2, k, 1e-12)
	for _, p := range c.Points {
		k, err = c.At(p.FrequencyHz)
		require.NoError(t, err)
		assert.Equal(t, p.Factor, k)
	}
	for _, f := range []float64{99e6, 20001e6} {
		_, err = c.At(f)
		assert.ErrorContains(t, err, "has factors from 100 MHz to 20000 MHz only")
	}
	k, err = c.Largest(1000e6, 15000e6)
	require.NoError(t, err)
	assert.Equal(t, 1.4, k)
	k, err = c.Largest(1e6, 1000e6)
	require.NoError(t, err)
	assert.InDelta(t, 1.2, k, 1e-12, "the certificate's part of the band")
	_, err = c.Largest(1e6, 50e6)
	assert.Error(t, err)
	k, err = survey.Constant(1.05).At(5)
	require.NoError(t, err)
	assert.Equal(t, 1.05, k)

	rapid.Check(t, func(t *rapid.T) {
		lo := rapid.Float64Range(100e6, 20000e6).Draw(t, "lo")
		hi := rapid.Float64Range(lo, 20000e6).Draw(t, "hi")
		f := rapid.Float64Range(lo, hi).Draw(t, "f")
		most, err := c.Largest(lo, hi)
		require.NoError(t, err)
		k, err := c.At(f)
		require.NoError(t, err)
		assert.LessOrEqual(t, k, most*(1+1e-12))
	})
}

func TestOverdue(t *testing.T) {
	assert.True(t, survey.Overdue("2025-05-11", "2025-05-12"))
	assert.False(t, survey.Overdue("2025-05-11", "2025-05-11T23:59:00+05:00"), "the last day still holds")
	assert.False(t, survey.Overdue("2025-05", "2025-05-31"), "a month holds to its end")
	assert.True(t, survey.Overdue("2025", "2026-01-01"))
	assert.False(t, survey.Overdue("2025-05-11", ""))
}
