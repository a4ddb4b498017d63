package antenna

import (
	"errors"
	"fmt"
	"math"
)

// HorizontalCutter is implemented by patterns whose cut through the peak, around the
// horizon, is known by itself: what near-field methods for panels spread over
// azimuth. The values are power ratios, 1 at the cut's peak.
type HorizontalCutter interface {
	HorizontalCut(phi float64) float64
	HorizontalCutRange(phi Interval) Interval
}

// twoBeamwidth is a main lobe of two beamwidths and a floor.
type twoBeamwidth struct {
	kh, kv float64 // 12/phi3^2 and 12/theta3^2, dB/rad^2
	floor  float64 // front to back, dB
	tilt   float64 // electrical, down positive, rad
}

// TwoBeamwidth returns the sector element shape of 3GPP as a pattern: with Ah =
// min(12 (phi/phi3)^2, Am) and Av = min(12 ((theta+tilt)/theta3)^2, Am) the loss
// is min(Ah+Av, Am).
//
// phi3Rad and theta3Rad are the half-power beamwidths in rad, frontToBackDB is
// Am in dB, electricalTiltRad tilts the lobe down, in rad. It has no side lobes
// of its own: outside the main lobe it is the floor, and may stand below or
// above a real antenna. Source: [3GPP-ELEMENT].
func TwoBeamwidth(phi3Rad, theta3Rad, frontToBackDB, electricalTiltRad float64) (Pattern, error) {
	if err := checkBeamwidth("horizontal", phi3Rad, 2*math.Pi); err != nil {
		return nil, err
	}
	if err := checkBeamwidth("vertical", theta3Rad, math.Pi); err != nil {
		return nil, err
	}
	if !(frontToBackDB > 0 && frontToBackDB <= maxLossDB) {
		return nil, fmt.Errorf("front to back of %g dB is not between 0 and %d dB", frontToBackDB, maxLossDB)
	}
	if err := checkTilt(electricalTiltRad); err != nil {
		return nil, err
	}
	return &twoBeamwidth{12 / (phi3Rad * phi3Rad), 12 / (theta3Rad * theta3Rad), frontToBackDB, electricalTiltRad}, nil
}

func checkBeamwidth(which string, rad, most float64) error {
	if !(rad > 0 && rad <= most) {
		return fmt.Errorf("%s beamwidth of %.4g deg is not between 0 and %.0f deg", which, degrees(rad), degrees(most))
	}
	return nil
}

func checkTilt(rad float64) error {
	if !(math.Abs(rad) < math.Pi/2) {
		return errors.New("electrical tilt is not between -90 and 90 deg")
	}
	return nil
}

func degrees(rad float64) float64 { return rad * (180 / math.Pi) }
func radians(deg float64) float64 { return deg * (math.Pi / 180) }

// loss returns the loss in dB at |phi| and |theta + tilt|.
func (p *twoBeamwidth) loss(phi, down float64) float64 {
	return min(min(p.kh*phi*phi, p.floor)+min(p.kv*down*down, p.floor), p.floor)
}

func (p *twoBeamwidth) Relative(phi, theta float64) float64 {
	return ratioOfLoss(p.loss(phi, theta+p.tilt))
}

func (p *twoBeamwidth) RelativeRange(phi, theta Interval) Interval {
	fLo, fHi := foldAzimuth(phi)
	tLo, tHi := foldElevation(Interval{theta.Lo + p.tilt, theta.Hi + p.tilt})
	return rangeOfLoss(p.loss(fLo, tLo), p.loss(fHi, tHi))
}

func (p *twoBeamwidth) HorizontalCut(phi float64) float64 {
	return ratioOfLoss(p.loss(phi, 0))
}

func (p *twoBeamwidth) HorizontalCutRange(phi Interval) Interval {
	lo, hi := foldAzimuth(phi)
	return rangeOfLoss(p.loss(lo, 0), p.loss(hi, 0))
}

func (p *twoBeamwidth) Caveats() []string { return []string{"side lobes not covered"} }
