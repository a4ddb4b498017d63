package limits

import "math"

// LevelAt returns a level in the unit of its coefficient:
//
//	level = coefficient * (f/f_unit)^exponent
//
// coefficient is in the SI unit of the quantity (V/m, A/m, T, W/m2), fUnitHz is
// the frequency unit of the formula in Hz (1e6 where it is written with f in
// MHz), fHz the frequency in Hz, above 0. It holds inside the band of its row
// only; it errs on neither side.
// Source: [LIM-LEVEL].
func LevelAt(coefficient, exponent, fUnitHz, fHz float64) float64 {
	return powerLaw(coefficient, exponent, fUnitHz, fHz)
}

// AveragingTime returns an averaging time in s:
//
//	T = t * (f/f_unit)^exponent
//
// tS is the coefficient in s (a printed 68/f^1.05 min is 68*60 with exponent
// -1.05 and fUnitHz 1e9), fHz the frequency in Hz, above 0. Zero stays zero: the
// level is never averaged. It errs on neither side.
// Source: [LIM-AVERAGE].
func AveragingTime(tS, exponent, fUnitHz, fHz float64) float64 {
	if tS == 0 {
		return 0
	}
	return powerLaw(tS, exponent, fUnitHz, fHz)
}

// BriefEnergy returns the incident energy density in J/m2 that an exposure
// shorter than the averaging time may bring:
//
//	U = (a + b sqrt(t)) * (f/f_unit)^exponent
//
// a is in J/m2, b in J/(m2 s^0.5), both at f = f_unit; fUnitHz and fHz are in Hz;
// tS is the duration in s, from 0 to the averaging time. For a level L averaged
// over 360 s the guideline's 0.36 L (0.05 + 0.95 sqrt(t/360)) kJ/m2 is a = 18 L
// and b = 18.0250 L. Constant a and b have exponent 0. It errs on neither side.
// Source: [LIM-BRIEF].
func BriefEnergy(a, b, exponent, fUnitHz, fHz, tS float64) float64 {
	u := a + float64(b*math.Sqrt(tS))
	return powerLaw(u, exponent, fUnitHz, fHz)
}

// Bounds of the factors for pulses.
const (
	// PulsePowerFactor is by how much power density averaged over a pulse may
	// exceed the level above 10 MHz. Source: [LIM-PULSE].
	PulsePowerFactor = 1000
	pulseFieldLow    = 1.5
	pulseFieldHigh   = 32
)

// PulseFieldFactor returns by how much the field strength averaged over a pulse
// may exceed its level, a plain ratio:
//
//	k = 1.5             9 kHz <= f <= 100 kHz
//	k = 6.93 f^0.664    100 kHz < f < 10 MHz, f in MHz
//	k = 32              10 MHz <= f <= 300 GHz
//
// fHz is the frequency in Hz; outside 9 kHz to 300 GHz the result is NaN. 32
// squared is 1024, a shade more than PulsePowerFactor: where both are given the
// latter is the stricter.
// Source: [LIM-PULSE].
func PulseFieldFactor(fHz float64) float64 {
	switch {
	case fHz >= 9e3 && fHz <= 100e3:
		return pulseFieldLow
	case fHz > 100e3 && fHz < 10e6:
		return 6.93 * math.Pow(fHz/1e6, 0.664)
	case fHz >= 10e6 && fHz <= 300e9:
		return pulseFieldHigh
	}
	return math.NaN()
}

// TimeAveragedRatio returns the exposure ratio averaged over an averaging time,
// a plain ratio:
//
//	r = sum(r_i t_i)/T
//
// ratios are exposure ratios in terms of power (S over its level, fields by
// squares), durationsS how long each lasts in s, averagingS the averaging time
// T in s. The durations fall within one T; what they leave of it counts as no
// exposure. The result is NaN where the two lists differ in length, T is not
// above 0 or the durations exceed T.
// Source: [LIM-TIME].
func TimeAveragedRatio(ratios, durationsS []float64, averagingS float64) float64 {
	if len(ratios) != len(durationsS) || !(averagingS > 0) {
		return math.NaN()
	}
	var sum, t float64
	for i, r := range ratios {
		sum += float64(r * durationsS[i])
		t += durationsS[i]
	}
	if t > averagingS*(1+edgeSlack) {
		return math.NaN()
	}
	return sum / averagingS
}

// powerLaw divides for negative exponents, so that a printed 1842/f is computed
// as it is printed.
func powerLaw(c, exponent, fUnitHz, fHz float64) float64 {
	switch {
	case exponent == 0:
		return c
	case exponent < 0:
		return c / math.Pow(fHz/fUnitHz, -exponent)
	}
	return c * math.Pow(fHz/fUnitHz, exponent)
}
