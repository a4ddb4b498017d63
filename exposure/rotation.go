package exposure

import (
	"math"

	"example.org/standclear/antenna"
)

// rotation is the share of the time for which a rotating source's beam is on a
// point: it lowers mean power, never peak.
type rotation struct {
	beamwidth float64 // 3 dB width in the plane of rotation, rad
	width     float64 // antenna dimension in that plane, m
	sweep     float64 // sector swept, rad
}

// placed is an emitter that knows where it stands.
type placed interface{ where() *placement }

func (p *placement) where() *placement { return p }

// factor is the larger of the far-field and the near-field rotational factor
// at distance r, never above 1 (OET 65, section on rotating antennas).
func (rot *rotation) factor(r float64) float64 {
	f := RotationFactorFar(rot.beamwidth, rot.sweep)
	if r > 0 {
		f = math.Max(f, RotationFactorNear(rot.width, r, rot.sweep))
	} else if rot.width > 0 {
		f = 1
	}
	return math.Min(f, 1)
}

// at returns the factor on the power of a kind at p.
func (rot *rotation) at(em emitter, p Point, kind powerKind) float64 {
	if rot == nil || kind != meanPower {
		return 1
	}
	return rot.factor(p.Sub(em.(placed).where().pos).Norm())
}

// over encloses the factor over b.
func (rot *rotation) over(em emitter, b box, kind powerKind) antenna.Interval {
	if rot == nil || kind != meanPower {
		return antenna.Interval{Lo: 1, Hi: 1}
	}
	near, far := b.distances(em.(placed).where().pos)
	return antenna.Interval{Lo: rot.factor(far), Hi: rot.factor(near)}
}

// distances bounds the distance of p from the points of b.
func (b box) distances(p Point) (near, far float64) {
	d := b.c.Sub(p)
	x, y, z := math.Abs(d.X), math.Abs(d.Y), math.Abs(d.Z)
	near = math.Sqrt(sumSquares(math.Max(0, x-b.h.X), math.Max(0, y-b.h.Y), math.Max(0, z-b.h.Z)))
	far = math.Sqrt(sumSquares(x+b.h.X, y+b.h.Y, z+b.h.Z))
	return near, far
}

// swept is the pattern of a rotating source: toward each direction the largest
// value that the sweep brings there.
type swept struct {
	antenna.Pattern
	half float64 // half of the sector swept, rad
}

func (s swept) window(lo, hi float64) antenna.Interval {
	lo, hi = lo-s.half, hi+s.half
	if hi-lo >= 2*math.Pi {
		return antenna.FullCircle
	}
	if lo < -math.Pi {
		lo, hi = lo+2*math.Pi, hi+2*math.Pi
	}
	return antenna.Interval{Lo: lo, Hi: hi}
}

func (s swept) Relative(phi, theta float64) float64 {
	return s.RelativeRange(antenna.Interval{Lo: phi, Hi: phi}, antenna.Interval{Lo: theta, Hi: theta}).Hi
}

func (s swept) RelativeRange(phi, theta antenna.Interval) antenna.Interval {
	hi := s.Pattern.RelativeRange(s.window(phi.Lo, phi.Hi), theta).Hi
	lo := 0.0
	// What every direction of the box sees is at least what its common part of
	// the sweep brings: any one azimuth of that part is a lower bound.
	if a, b := phi.Hi-s.half, phi.Lo+s.half; a <= b {
		best := math.Remainder(math.Min(math.Max(0, a), b), 2*math.Pi)
		lo = s.Pattern.RelativeRange(antenna.Interval{Lo: best, Hi: best}, theta).Lo
	}
	return antenna.Interval{Lo: math.Min(lo, hi), Hi: hi}
}
