package antenna

import (
	"fmt"
	"math"
)

// DishEfficiency returns the aperture efficiency of a dish: G lambda^2/(pi
// D)^2, with diameterM and wavelengthM in m. Source: [DISH-GAIN].
func DishEfficiency(peak Gain, diameterM, wavelengthM float64) float64 {
	x := math.Pi * diameterM / wavelengthM
	return float64(peak) / (x * x)
}

// CheckDish refuses a gain that its aperture cannot have: an efficiency above 1.
func CheckDish(peak Gain, diameterM, wavelengthM float64) error {
	if e := DishEfficiency(peak, diameterM, wavelengthM); e > 1+1e-9 {
		return fmt.Errorf("a gain of %.2f dBi from a dish of %.4g m at a wavelength of %.4g m is an efficiency of %.3g, above 1; check gain, diameter and frequency",
			peak.DBi(), diameterM, wavelengthM, e)
	}
	return nil
}

// lightSpeed is the speed of light in vacuum in m/s, exact by the SI.
const lightSpeed = 299792458

// CheckWavelength refuses a wavelength in m that does not belong to a frequency
// in Hz: lambda f = c to within 1 %, which leaves room for rounded figures.
func CheckWavelength(frequencyHz, wavelengthM float64) error {
	if r := frequencyHz * wavelengthM / lightSpeed; !(math.Abs(r-1) <= 0.01) {
		return fmt.Errorf("a wavelength of %.6g m does not belong to %.6g MHz, whose wavelength is %.6g m (%.3g times)",
			wavelengthM, frequencyHz/1e6, lightSpeed/frequencyHz, r)
	}
	return nil
}

// CheckPanel refuses a panel of elements shorter than half a wavelength, and
// elements that overlap: lengthM and spacingM in m, spacing 0 where it is not
// stated.
func CheckPanel(lengthM, wavelengthM float64, elements int, spacingM float64) error {
	if !(lengthM >= wavelengthM/2) {
		return fmt.Errorf("a panel of %.4g m is shorter than half a wavelength (%.4g m); check length and frequency", lengthM, wavelengthM/2)
	}
	if spacingM > 0 && elements > 1 && spacingM*float64(elements-1) > lengthM*(1+1e-9) {
		return fmt.Errorf("%d elements %.4g m apart need %.4g m and do not fit a panel of %.4g m", elements, spacingM, spacingM*float64(elements-1), lengthM)
	}
	if spacingM > 0 && spacingM < wavelengthM/4 {
		return fmt.Errorf("elements %.4g m apart overlap: they are nearer than a quarter of a wavelength (%.4g m)", spacingM, wavelengthM/4)
	}
	return nil
}

// GainFromBeamwidths returns the gain that two half-power beamwidths in rad
// suggest: 31 000/(phi3 theta3), both in deg, the figure of ITU-R F.1336 for
// sector antennas. An estimate to hold a stated gain against, 2 dB either way.
// Source: [F1336-SECTOR].
func GainFromBeamwidths(phi3Rad, theta3Rad float64) Gain {
	return Gain(31000 / (degrees(phi3Rad) * degrees(theta3Rad)))
}

// CheckGain compares a stated gain with the one two beamwidths in rad suggest,
// and describes a difference of more than 3 dB.
func CheckGain(peak Gain, phi3Rad, theta3Rad float64) error {
	want := GainFromBeamwidths(phi3Rad, theta3Rad)
	if d := peak.DBi() - want.DBi(); !(math.Abs(d) <= 3) {
		return fmt.Errorf("a gain of %.1f dBi is %.1f dB from the %.1f dBi that beamwidths of %.4g and %.4g deg suggest",
			peak.DBi(), d, want.DBi(), degrees(phi3Rad), degrees(theta3Rad))
	}
	return nil
}

// PanelLength returns the length in m that a vertical half-power beamwidth in
// rad implies for an evenly fed panel: 0.886 lambda/theta3.
// Source: [PANEL-LENGTH].
func PanelLength(theta3Rad, wavelengthM float64) float64 {
	return 0.886 * wavelengthM / theta3Rad
}
