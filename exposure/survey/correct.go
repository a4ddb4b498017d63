package survey

import (
	"errors"
	"fmt"
	"math"
	"sort"

	"example.org/standclear/exposure"
)

// ReferenceOhm is the impedance of the receivers and cables that a port level
// refers to.
const ReferenceOhm = 50.0

// FieldFromPortLevel returns the electric field strength in V/m RMS at an
// antenna whose receiver shows a level at its port:
//
//	E = sqrt(P R) * 10^((AF + a)/20), R = 50 ohm
//
// which is E[dBuV/m] = P[dBm] + 106.99 + AF + a. powerW is the level in W, at
// least 0, antennaFactorDB the antenna factor in dB over 1/m and cableLossDB
// the loss between antenna and port in dB, at least 0. It holds for a matched
// 50 ohm receiver; mismatch belongs in the uncertainty budget. It errs to
// neither side.
// Source: [RDG-PORT].
func FieldFromPortLevel(powerW, antennaFactorDB, cableLossDB float64) float64 {
	return math.Sqrt(powerW*ReferenceOhm) * math.Pow(10, (antennaFactorDB+cableLossDB)/20)
}

// AntennaFactorFromGain returns the antenna factor in dB over 1/m of an antenna
// of a gain in dBi into 50 ohm:
//
//	AF = 10 log10(4 pi Z0/(R lambda^2)) - G, R = 50 ohm
//
// frequencyHz is above 0, gainDBi the realized gain. It holds in the far field
// for matched polarization and errs to neither side.
// Source: [RDG-AF].
func AntennaFactorFromGain(frequencyHz, gainDBi float64) float64 {
	lambda := exposure.Wavelength(frequencyHz)
	return 10*math.Log10(4*math.Pi*exposure.Z0/(ReferenceOhm*lambda*lambda)) - gainDBi
}

// Calibration is the factor that multiplies what an instrument shows: one
// number, or one by frequency.
type Calibration struct {
	Points []CalibrationPoint // by rising frequency; one point without frequency holds everywhere
	Name   string             // of the file, "" = one number
}

// CalibrationPoint is one line of a calibration certificate.
type CalibrationPoint struct {
	FrequencyHz float64
	Factor      float64
}

// Constant is a calibration by one number.
func Constant(factor float64) Calibration {
	return Calibration{Points: []CalibrationPoint{{Factor: factor}}}
}

// errUncalibrated marks a frequency that the certificate does not reach.
var errUncalibrated = errors.New("the calibration does not reach it")

// At returns the factor at a frequency in Hz, interpolated linearly in the
// logarithm of frequency; an error where the certificate does not reach.
// Source: [RDG-CAL].
func (c Calibration) At(frequencyHz float64) (float64, error) {
	n := len(c.Points)
	if n == 0 {
		return 1, nil
	}
	if n == 1 && c.Points[0].FrequencyHz == 0 {
		return c.Points[0].Factor, nil
	}
	first, last := c.Points[0], c.Points[n-1]
	if frequencyHz < first.FrequencyHz || frequencyHz > last.FrequencyHz {
		return 0, fmt.Errorf("%s has factors from %s to %s only: %w", c.Name, megahertz(first.FrequencyHz), megahertz(last.FrequencyHz), errUncalibrated)
	}
	k := sort.Search(n, func(i int) bool { return c.Points[i].FrequencyHz >= frequencyHz })
	b := c.Points[k]
	if b.FrequencyHz == frequencyHz {
		return b.Factor, nil
	}
	a := c.Points[k-1]
	w := math.Log(frequencyHz/a.FrequencyHz) / math.Log(b.FrequencyHz/a.FrequencyHz)
	return a.Factor + w*(b.Factor-a.Factor), nil
}

// Largest returns the largest factor between two frequencies in Hz: what a
// reading that tells none apart is multiplied by. It errs on the high side.
// Source: [RDG-CAL].
func (c Calibration) Largest(fromHz, toHz float64) (float64, error) {
	n := len(c.Points)
	if n <= 1 {
		return c.At(fromHz)
	}
	// A probe's range may be wider than its certificate: what the certificate has
	// of it counts.
	lo, hi := max(fromHz, c.Points[0].FrequencyHz), min(toHz, c.Points[n-1].FrequencyHz)
	if lo > hi {
		return c.At(fromHz)
	}
	best, err := c.At(lo)
	if err != nil {
		return 0, err
	}
	end, err := c.At(hi)
	best = max(best, end)
	for _, p := range c.Points {
		if p.FrequencyHz > lo && p.FrequencyHz < hi {
			best = max(best, p.Factor)
		}
	}
	return best, err
}

// megahertz writes a frequency for a message.
func megahertz(hz float64) string { return fmt.Sprintf("%g MHz", hz/1e6) }

// corrected is a reading after everything that is known of its instrument.
type corrected struct {
	reading    *Reading
	instrument *Instrument
	lo, hi     float64 // band in Hz; equal for a single frequency
	factor     float64 // calibration
	eVPerM     float64 // E, or the plane-wave equivalent of H or S; 0 for a shaped reading
	share      float64 // of the limit, shaped readings only
	belowFloor bool
	reasons    []string // why "within" may not be said
	remarks    []string // what a reader must know that does not change the verdict
}

// gain returns what a raw value is multiplied by, and whether the value is one
// of power.
func (c *corrected) field(value float64) float64 {
	switch c.reading.Quantity {
	case ElectricField:
		return value * c.factor
	case MagneticField:
		return exposure.EFromH(value) * c.factor
	case PowerDensity:
		return exposure.EFromS(value) * c.factor
	case PortLevel:
		return FieldFromPortLevel(value, c.instrument.AntennaFactorDB, c.instrument.CableLossDB) * c.factor
	}
	return 0
}

// prepare works out everything that does not depend on the value.
func prepare(r *Reading, in *Instrument, surveyDate string) *corrected {
	c := &corrected{reading: r, instrument: in, factor: 1}
	switch {
	case r.FrequencyHz > 0:
		c.lo, c.hi = r.FrequencyHz, r.FrequencyHz
	case r.ToHz > 0:
		c.lo, c.hi = r.FromHz, r.ToHz
	default:
		c.lo, c.hi = in.FromHz, in.ToHz
	}
	if c.lo < in.FromHz*(1-edge) || c.hi > in.ToHz*(1+edge) {
		c.reasons = append(c.reasons, fmt.Sprintf("%s is outside the range of %s, %s to %s", bandText(c.lo, c.hi), in.ID, megahertz(in.FromHz), megahertz(in.ToHz)))
	}
	var err error
	if c.lo == c.hi {
		c.factor, err = in.Calibration.At(c.lo)
	} else {
		c.factor, err = in.Calibration.Largest(c.lo, c.hi)
		if len(in.Calibration.Points) > 1 && err == nil {
			c.remarks = append(c.remarks, "the largest calibration factor of the band was used")
		}
	}
	if err != nil {
		c.factor = 1
		c.reasons = append(c.reasons, fmt.Sprintf("no calibration factor at %s: %s", bandText(c.lo, c.hi), err))
	}
	if due := in.CalibrationDue; due != "" {
		day := r.Time
		if day == "" {
			day = surveyDate
		}
		if Overdue(due, day) {
			c.reasons = append(c.reasons, fmt.Sprintf("the calibration of %s was due on %s", in.ID, due))
		}
	}
	return c
}

// edge is the relative slack by which a frequency meets the end of a range:
// figures typed in different units may differ in their last bits.
const edge = 1e-9

// Overdue reports whether a day (or time) of ISO 8601 lies after the day, month
// or year until which a calibration holds; false where the day is not known.
func Overdue(due, day string) bool {
	if len(day) < len(due) {
		return false
	}
	return day[:len(due)] > due
}

// correct turns the reading's value into a field, and holds it against what the
// instrument can read.
func (c *corrected) correct(value float64) {
	if c.reading.Quantity == ShareOfLimit {
		// The factor multiplies the field, the share goes with its square.
		c.share = value * c.factor * c.factor
		return
	}
	c.eVPerM = c.field(value)
	shown := c.eVPerM / c.factor
	if f := c.instrument.FloorVPerM; f > 0 && (shown < f || c.eVPerM < f) {
		c.belowFloor = true
		c.eVPerM = max(c.eVPerM, f)
	}
	if o := c.instrument.OverloadVPerM; o > 0 && (shown > o || c.eVPerM > o) {
		c.reasons = append(c.reasons, fmt.Sprintf("beyond what %s can read (%.4g V/m): the field may be higher", c.instrument.ID, o))
	}
}

func bandText(lo, hi float64) string {
	if lo == hi {
		return megahertz(lo)
	}
	return fmt.Sprintf("%g to %g MHz", lo/1e6, hi/1e6)
}
