package antenna

import "math"

type isotropic struct{}

// Isotropic returns the pattern that is 1 in every direction, and its gain, 1.
func Isotropic() (Pattern, Gain) { return isotropic{}, 1 }

func (isotropic) Relative(_, _ float64) float64          { return 1 }
func (isotropic) RelativeRange(_, _ Interval) Interval   { return Interval{1, 1} }
func (isotropic) IsRound() bool                          { return true }
func (isotropic) HorizontalCut(float64) float64          { return 1 }
func (isotropic) HorizontalCutRange(_ Interval) Interval { return Interval{1, 1} }

// Axis is the direction in the antenna's frame along which a wire lies or
// about which a loop is wound.
type Axis int

// The axes of an antenna's frame.
const (
	AlongUp        Axis = iota // antenna-up: a vertical wire
	AlongRight                 // the right hand: a horizontal wire, broadside on
	AlongBoresight             // boresight: a loop that faces forward
)

// axial is a pattern that is round about one axis and depends only on w, the
// cosine of the angle between direction and axis; it falls as |w| grows.
type axial struct {
	axis     Axis
	halfWave bool // else 1 - w^2
}

// HalfWaveDipole returns the pattern of a vertical half-wave dipole,
// F = cos(pi/2 sin theta)/cos theta squared, and its gain, 2.15 dBi. Exact for
// a thin wire with sinusoidal current. Source: [ANT-DIPOLE].
func HalfWaveDipole() (Pattern, Gain) { return HalfWaveDipoleAlong(AlongUp) }

// HalfWaveDipoleAlong is HalfWaveDipole along the axis named.
// Source: [ANT-DIPOLE].
func HalfWaveDipoleAlong(a Axis) (Pattern, Gain) {
	return axial{a, true}, GainFromDBi(DipoleGainDB)
}

// ShortDipole returns the pattern of a vertical dipole much shorter than a
// wavelength, cos^2 theta, and its gain, 1.5. Source: [ANT-SHORT].
func ShortDipole() (Pattern, Gain) { return ShortDipoleAlong(AlongUp) }

// ShortDipoleAlong is ShortDipole along the axis named. Source: [ANT-SHORT].
func ShortDipoleAlong(a Axis) (Pattern, Gain) { return axial{a, false}, 1.5 }

// SmallLoop returns the pattern of a loop much smaller than a wavelength about
// the axis named, sin^2 of the angle from the axis, and its gain, 1.5.
// Source: [ANT-LOOP].
func SmallLoop(a Axis) (Pattern, Gain) { return axial{a, false}, 1.5 }

func (p axial) IsRound() bool { return p.axis == AlongUp }

// cosines returns |w| and sqrt(1 - w^2).
func (p axial) cosines(phi, theta float64) (w, q float64) {
	st, ct := math.Sincos(theta)
	switch p.axis {
	case AlongRight:
		w = ct * math.Sin(phi)
	case AlongBoresight:
		w = ct * math.Cos(phi)
	default:
		return math.Abs(st), math.Abs(ct)
	}
	w = min(math.Abs(w), 1)
	return w, math.Sqrt((1 - w) * (1 + w))
}

// value returns the pattern at |w| = w and q = sqrt(1 - w^2).
func (p axial) value(w, q float64) float64 {
	if !p.halfWave {
		return q * q
	}
	if q == 0 {
		return 0
	}
	// cos(pi/2 w) = sin(pi/2 (1-w)) with 1 - w = q^2/(1+w): no cancellation.
	f := math.Sin(math.Pi/2*(q*q/(1+w))) / q
	return min(f*f, 1)
}

func (p axial) Relative(phi, theta float64) float64 {
	return p.value(p.cosines(phi, theta))
}

func (p axial) RelativeRange(phi, theta Interval) Interval {
	tLo, tHi := foldElevation(theta)
	if p.axis == AlongUp {
		return widened(p.value(p.cosines(0, tHi)), p.value(p.cosines(0, tLo)))
	}
	// |w| is a product of cos theta and |sin phi| (or |cos phi|), each of
	// which is exact on its interval.
	fLo, fHi := foldAzimuth(phi)
	var sLo, sHi float64
	if p.axis == AlongRight {
		sLo, sHi = min(math.Sin(fLo), math.Sin(fHi)), max(math.Sin(fLo), math.Sin(fHi))
		if fLo <= math.Pi/2 && fHi >= math.Pi/2 {
			sHi = 1
		}
	} else {
		a, b := math.Abs(math.Cos(fLo)), math.Abs(math.Cos(fHi))
		sLo, sHi = min(a, b), max(a, b)
		if fLo <= math.Pi/2 && fHi >= math.Pi/2 {
			sLo = 0
		}
	}
	wLo := max(0, math.Cos(tHi)*sLo-rangeFloor)
	wHi := min(1, math.Cos(tLo)*sHi+rangeFloor)
	out := widened(p.value(wHi, math.Sqrt((1-wHi)*(1+wHi))), p.value(wLo, math.Sqrt((1-wLo)*(1+wLo))))
	return out
}
