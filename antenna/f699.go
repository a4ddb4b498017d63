package antenna

import (
	"fmt"
	"math"
)

// dish is the reference pattern of F.699, a function of the angle off axis.
type dish struct {
	main      float64 // loss 2.5e-3 (D/lambda)^2 per deg^2, dB
	mainEnd   float64 // rad: phi_m
	plateau   float64 // loss of the first side lobe, dB
	sideStart float64 // rad: where the envelope of the side lobes starts
	side      float64 // loss of that envelope at 1 deg, dB
	far       float64 // loss beyond 48 deg, dB
}

// Dish returns the reference radiation pattern of ITU-R F.699 for a dish of peak
// gain in front. With phi the angle off axis in deg and d = D/lambda: G - 2.5e-3
// (d phi)^2 up to phi_m = (20/d) sqrt(G - G1), G1 = 2 + 15 log d; then G1 up to
// phi_r = 15.85 d^-0.6 (d > 100) or 100/d; then 32 - 25 log phi, or 52 - 10 log d
// - 25 log phi, to 48 deg; then -10 dBi, or 10 - 10 log d.
//
// diameterM and wavelengthM are in m, d at least 2.1 (below, the envelope would
// start beyond 48 deg). A reference pattern: it does not bound every side lobe.
// Source: [F699].
func Dish(peak Gain, diameterM, wavelengthM float64) (Pattern, error) {
	d := diameterM / wavelengthM
	if !(diameterM > 0 && wavelengthM > 0) || math.IsInf(d, 0) {
		return nil, fmt.Errorf("a dish needs a diameter and a wavelength above 0")
	}
	if d < 2.1 {
		return nil, fmt.Errorf("a dish of %.3g wavelengths is too small for ITU-R F.699, which needs 2.1 or more", d)
	}
	if !(peak >= 1) {
		return nil, fmt.Errorf("a dish needs a gain of 0 dBi or more")
	}
	if err := CheckDish(peak, diameterM, wavelengthM); err != nil {
		return nil, err
	}
	g, l := peak.DBi(), math.Log10(d)
	g1 := min(2+15*l, g)
	p := &dish{
		main:    2.5e-3 * d * d * (180 / math.Pi) * (180 / math.Pi),
		mainEnd: radians(20 / d * math.Sqrt(g-g1)),
		plateau: g - g1,
	}
	if d > 100 {
		p.sideStart, p.side, p.far = radians(15.85*math.Pow(d, -0.6)), g-32, g+10
	} else {
		p.sideStart, p.side, p.far = radians(100/d), g-52+10*l, g-10+10*l
	}
	p.sideStart = max(p.sideStart, p.mainEnd)
	// A dish of very low gain stands below the envelope of its side lobes.
	p.far = max(p.far, p.plateau)
	return p, nil
}

// loss returns the loss in dB at an angle off axis in rad.
func (p *dish) loss(psi float64) float64 {
	switch {
	case psi < p.mainEnd:
		return min(p.main*psi*psi, p.plateau)
	case psi < p.sideStart:
		return p.plateau
	case psi < 48*math.Pi/180:
		// The envelope meets the far value within 0.03 dB at 48 deg; neither
		// it nor the plateau is passed, so that the loss only rises.
		return min(max(p.plateau, p.side+2.5*perNeper*math.Log(degrees(psi))), p.far)
	}
	return p.far
}

// offAxis returns the angle in rad from boresight.
func offAxis(phi, theta float64) float64 {
	s, t := math.Sin(theta/2), math.Sin(phi/2)
	// The haversine keeps its digits near the axis, where the cosine does not.
	return haversineAngle(s*s + (1-2*s*s)*t*t)
}

func haversineAngle(h float64) float64 {
	return 2 * math.Asin(math.Sqrt(max(0, min(h, 1))))
}

func (p *dish) Relative(phi, theta float64) float64 {
	return ratioOfLoss(p.loss(offAxis(phi, theta)))
}

func (p *dish) RelativeRange(phi, theta Interval) Interval {
	fLo, fHi := foldAzimuth(phi)
	tLo, tHi := foldElevation(theta)
	// cos psi = cos theta cos phi: psi rises with |phi|; it rises with |theta|
	// in front of the dish and falls behind it.
	near, far := tLo, tHi
	if fLo > math.Pi/2 {
		near = tHi
	}
	if fHi > math.Pi/2 {
		far = tLo
	}
	lo, hi := offAxis(fLo, near), offAxis(fHi, far)
	// Rounding of the angle, relative near the axis, absolute behind.
	lo -= 1e-15 + 2e-15*lo + backSlack(lo)
	hi += 1e-15 + 2e-15*hi + backSlack(hi)
	return rangeOfLoss(p.loss(max(0, lo)), p.loss(hi))
}

// backSlack is the rounding of the arc sine where it is steep.
func backSlack(psi float64) float64 {
	if psi > 3 {
		return 5e-8
	}
	return 0
}

func (p *dish) HorizontalCut(phi float64) float64 { return ratioOfLoss(p.loss(math.Abs(phi))) }

func (p *dish) HorizontalCutRange(phi Interval) Interval {
	lo, hi := foldAzimuth(phi)
	return rangeOfLoss(p.loss(lo), p.loss(hi))
}

func (p *dish) Caveats() []string { return []string{referenceCaveat} }
