package antenna

import (
	"errors"
	"fmt"
	"math"
)

// tilted maps an elevation to the one at which an untilted ITU-R F.1336 pattern
// is read for a beam tilted down electrically by beta: 90 (theta+beta)/(90+beta)
// above the beam, 90 (theta+beta)/(90-beta) below it, so that +-90 deg stay.
type tilted struct{ beta, above, below float64 }

func newTilted(beta float64) tilted {
	const quarter = math.Pi / 2
	return tilted{beta, quarter / (quarter + beta), quarter / (quarter - beta)}
}

func (t tilted) angle(theta float64) float64 {
	x := theta + t.beta
	if x >= 0 {
		return x * t.above
	}
	return x * t.below
}

func (t tilted) fold(theta Interval) (lo, hi float64) {
	return foldElevation(Interval{t.angle(theta.Lo), t.angle(theta.Hi)})
}

// omni is the peak side-lobe reference pattern of F.1336 for round antennas.
type omni struct {
	theta3, theta4 float64 // rad
	shoulder       float64 // loss between theta4 and theta3, dB
	k              float64
	tilt           tilted
}

// OmniBeamwidth returns the vertical half-power beamwidth in rad that a round
// antenna of peak gain g is taken to have: 107.6 deg * 10^(-G0/10), G0 in dBi.
// Source: [F1336-OMNI].
func OmniBeamwidth(g Gain) float64 { return radians(107.6 / float64(g)) }

// Omni returns the peak side-lobe reference pattern of ITU-R F.1336 for antennas
// that are round in azimuth, with k = 0.7. With t the elevation from the beam:
// loss 12 (t/theta3)^2 up to theta4 = theta3 sqrt(1 - log10(k+1)/1.2), then
// 12 - 10 log10(k+1) up to theta3, then 12 - 10 log10((t/theta3)^-1.5 + k).
//
// theta3Rad is the vertical half-power beamwidth in rad; 0 takes OmniBeamwidth
// of the peak gain. electricalTiltRad is down positive, in rad. A reference
// pattern: single side lobes may pass it. Source: [F1336-OMNI].
func Omni(peak Gain, theta3Rad, electricalTiltRad float64) (Pattern, error) {
	return omniOf(peak, theta3Rad, electricalTiltRad, 0.7)
}

func omniOf(peak Gain, theta3, tilt, k float64) (*omni, error) {
	if theta3 == 0 {
		if !(peak > 0) {
			return nil, errors.New("an omni pattern needs its gain or its vertical beamwidth")
		}
		theta3 = OmniBeamwidth(peak)
	}
	if err := checkBeamwidth("vertical", theta3, math.Pi); err != nil {
		return nil, err
	}
	if err := checkTilt(tilt); err != nil {
		return nil, err
	}
	return &omni{theta3, theta3 * math.Sqrt(1-math.Log10(k+1)/1.2), 12 - 10*math.Log10(k+1), k, newTilted(tilt)}, nil
}

func (p *omni) loss(t float64) float64 {
	x := t / p.theta3
	switch {
	case t < p.theta4:
		return min(12*x*x, p.shoulder)
	case t < p.theta3:
		return p.shoulder
	}
	return max(p.shoulder, 12-perNeper*math.Log(1/(x*math.Sqrt(x))+p.k))
}

func (p *omni) Relative(_, theta float64) float64 {
	return ratioOfLoss(p.loss(math.Abs(p.tilt.angle(theta))))
}

func (p *omni) RelativeRange(_, theta Interval) Interval {
	lo, hi := p.tilt.fold(theta)
	return rangeOfLoss(p.loss(lo), p.loss(hi))
}

func (p *omni) IsRound() bool                          { return true }
func (p *omni) HorizontalCut(float64) float64          { return 1 }
func (p *omni) HorizontalCutRange(_ Interval) Interval { return Interval{1, 1} }
func (p *omni) Caveats() []string                      { return []string{referenceCaveat} }

const referenceCaveat = "reference pattern: single side lobes of the antenna may pass it"

// sector is the peak side-lobe reference pattern of F.1336 for sector antennas.
type sector struct {
	phi3, theta3   float64 // rad
	kh, kv         float64
	lambdaH, c     float64
	lambdaV        float64
	xk, shoulder   float64 // start of the side lobes and the loss there, dB
	back, backward float64 // loss at 180 deg: the floor, and that of the azimuth cut
	tilt           tilted
}

// SectorBeamwidth returns the vertical half-power beamwidth in rad that a sector
// antenna of peak gain g and horizontal beamwidth phi3Rad in rad (below 120 deg)
// is taken to have: theta3 = 31000 * 10^(-G0/10)/phi3, both in deg.
// Source: [F1336-SECTOR].
func SectorBeamwidth(g Gain, phi3Rad float64) float64 {
	return radians(31000 / float64(g) / degrees(phi3Rad))
}

// Sector returns the peak side-lobe reference pattern of ITU-R F.1336
// (recommends 3.1.1) for sector antennas from 400 MHz to 6 GHz, with ka = kp =
// kh = 0.7 and kv = 0.3.
//
// phi3Rad is the horizontal half-power beamwidth in rad, theta3Rad the vertical
// one; 0 takes SectorBeamwidth of the peak gain (horizontal beamwidths below 120
// deg only). electricalTiltRad is down positive, in rad. Where the published
// vertical curve steps up by a tenth of a dB at the start of the side lobes the
// larger gain is taken from just before the step on. A reference pattern:
// single side lobes may pass it. Source: [F1336-SECTOR].
func Sector(peak Gain, phi3Rad, theta3Rad, electricalTiltRad float64) (Pattern, error) {
	p, err := sectorOf(peak, phi3Rad, theta3Rad, electricalTiltRad, 0.7, 0.7, 0.7, 0.3)
	if err != nil {
		return nil, err
	}
	return p, nil
}

func sectorOf(peak Gain, phi3, theta3, tilt, ka, kp, kh, kv float64) (*sector, error) {
	if err := checkBeamwidth("horizontal", phi3, 2*math.Pi); err != nil {
		return nil, err
	}
	if theta3 == 0 {
		if !(peak > 0) {
			return nil, errors.New("a sector pattern needs its gain or its vertical beamwidth")
		}
		if phi3 >= radians(120) {
			return nil, fmt.Errorf("a horizontal beamwidth of %.4g deg is beyond the 120 deg up to which the vertical beamwidth follows from the gain; state the vertical beamwidth", degrees(phi3))
		}
		theta3 = SectorBeamwidth(peak, phi3)
	}
	if err := checkBeamwidth("vertical", theta3, math.Pi); err != nil {
		return nil, err
	}
	if err := checkTilt(tilt); err != nil {
		return nil, err
	}
	p := &sector{phi3: phi3, theta3: theta3, kh: kh, kv: kv, tilt: newTilted(tilt)}
	deg := degrees(theta3)
	p.lambdaH = 3 * (1 - math.Pow(0.5, -kh))
	p.back = 12 - 10*math.Log10(1+8*ka) + 15*math.Log10(180/deg)
	if deg < 22.5 {
		p.c = 10 * math.Log10(math.Pow(180/deg, 1.5)*(math.Pow(4, -1.5)+kv)/(1+8*kp)) / math.Log10(22.5/deg)
	}
	p.lambdaV = 12 - p.c*math.Log10(4) - 10*math.Log10(math.Pow(4, -1.5)+kv)
	p.xk = math.Sqrt(1 - 0.36*kv)
	p.shoulder = 12 - 10*math.Log10(math.Pow(p.xk, -1.5)+kv)
	p.backward = p.azimuth(math.Pi)
	return p, nil
}

// azimuth returns the loss at |phi| in the horizontal plane.
func (p *sector) azimuth(phi float64) float64 {
	x := phi / p.phi3
	if x <= 0.5 {
		return min(12*x*x, p.back)
	}
	return min(max(3, 12*math.Exp((2-p.kh)*math.Log(x))+p.lambdaH), p.back)
}

// elevation returns the loss at |theta| in the vertical plane.
func (p *sector) elevation(theta float64) float64 {
	x := theta / p.theta3
	switch {
	case x < p.xk:
		return min(12*x*x, p.shoulder, p.back)
	case x < 4:
		return min(max(p.shoulder, 12-perNeper*math.Log(1/(x*math.Sqrt(x))+p.kv)), p.back)
	case theta < math.Pi/2:
		return min(p.lambdaV+p.c/10*perNeper*math.Log(x), p.back)
	}
	return p.back
}

// joined returns the loss of the two cuts together: the vertical cut is
// compressed by R = 1 - Ah/Ah(180 deg).
func (p *sector) joined(ah, av float64) float64 {
	return ah + (1-ah/p.backward)*av
}

func (p *sector) Relative(phi, theta float64) float64 {
	return ratioOfLoss(p.joined(p.azimuth(math.Abs(phi)), p.elevation(math.Abs(p.tilt.angle(theta)))))
}

func (p *sector) RelativeRange(phi, theta Interval) Interval {
	fLo, fHi := foldAzimuth(phi)
	tLo, tHi := p.tilt.fold(theta)
	h0, h1 := p.azimuth(fLo), p.azimuth(fHi)
	v0, v1 := p.elevation(tLo), p.elevation(tHi)
	// joined is linear in each of the two: its extremes are at the corners.
	a, b, c, d := p.joined(h0, v0), p.joined(h0, v1), p.joined(h1, v0), p.joined(h1, v1)
	return rangeOfLoss(max(0, min(a, b, c, d)), max(a, b, c, d))
}

func (p *sector) HorizontalCut(phi float64) float64 {
	return ratioOfLoss(p.azimuth(math.Abs(phi)))
}

func (p *sector) HorizontalCutRange(phi Interval) Interval {
	lo, hi := foldAzimuth(phi)
	return rangeOfLoss(p.azimuth(lo), p.azimuth(hi))
}

func (p *sector) Caveats() []string { return []string{referenceCaveat} }
