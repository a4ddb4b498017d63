package antenna

import "math"

// Interval is a closed interval [Lo, Hi] of real numbers.
type Interval struct{ Lo, Hi float64 }

// Contains reports whether x lies in the interval.
func (i Interval) Contains(x float64) bool { return i.Lo <= x && x <= i.Hi }

// Width returns Hi - Lo.
func (i Interval) Width() float64 { return i.Hi - i.Lo }

// Hull returns the smallest interval that holds both.
func (i Interval) Hull(j Interval) Interval {
	return Interval{math.Min(i.Lo, j.Lo), math.Max(i.Hi, j.Hi)}
}

// Pattern is the far-field radiation pattern of an antenna in the antenna's own
// frame: the power radiated toward a direction, as a share of the power toward
// the direction of peak gain.
//
// phi is the azimuth from boresight in rad, clockwise seen from the antenna's
// top, in [-pi, pi]; theta is the elevation above the antenna's own horizon in
// rad, in [-pi/2, pi/2] (positive is toward the antenna's top).
//
// A pattern of your own keeps the boundaries' bounds if, and only if,
// RelativeRange encloses Relative: for every phi and theta inside the two
// intervals, r.Lo <= Relative(phi, theta) <= r.Hi, rounding included. The range
// must shrink to the value as the intervals shrink, or a boundary search can
// only answer "undecided". Both methods must be free of side effects and usable
// from many goroutines at once.
type Pattern interface {
	// Relative returns the linear power gain relative to the peak, in [0, 1].
	Relative(phi, theta float64) float64

	// RelativeRange encloses Relative over a box of directions. phi may run
	// past +-pi (phi.Lo in [-pi, pi], at most 2 pi wide): directions repeat
	// every 2 pi. theta stays within [-pi/2, pi/2].
	RelativeRange(phi, theta Interval) Interval
}

// Coverage is implemented by patterns that know where they stop telling the
// truth; the returned sentences are printed with every result that rests on
// the pattern ("side lobes not covered", "sum of two cuts, not an envelope").
type Coverage interface{ Caveats() []string }

// Round is implemented by patterns that are the same at every azimuth, for
// which a row may leave its azimuth blank.
type Round interface{ IsRound() bool }

// poleRad is the elevation beyond which azimuth about the antenna is not
// defined well enough to be used: 89 degrees (a choice of this project).
const poleRad = 89 * math.Pi / 180

// FullCircle is the azimuth interval that holds every direction.
var FullCircle = Interval{-math.Pi, math.Pi}

// Toward returns p.Relative, except within one degree of the pattern's poles,
// where it returns the largest value over all azimuths: there the azimuth is
// not defined (a conservative choice of this project).
func Toward(p Pattern, phi, theta float64) float64 {
	if theta > poleRad || theta < -poleRad {
		return p.RelativeRange(FullCircle, Interval{theta, theta}).Hi
	}
	return p.Relative(phi, theta)
}

// TowardRange encloses Toward over a box of directions.
func TowardRange(p Pattern, phi, theta Interval) Interval {
	if theta.Hi <= poleRad && theta.Lo >= -poleRad {
		return p.RelativeRange(phi, theta)
	}
	all := p.RelativeRange(FullCircle, theta)
	if theta.Lo > poleRad || theta.Hi < -poleRad {
		return all
	}
	// The box straddles the pole's rim: its lower part keeps its azimuths.
	part := p.RelativeRange(phi, theta)
	return Interval{part.Lo, all.Hi}
}
