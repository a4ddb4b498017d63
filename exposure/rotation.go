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
		lo = s.brings(antenna.Interval{Lo: a, Hi: b}, theta, hi)
	}
	return antenna.Interval{Lo: math.Min(lo, hi), Hi: hi}
}

// brings is a lower bound of the largest value over the azimuths of common: that
// of the azimuth nearest boresight, or, where that falls short of hi, of the best
// azimuth met on the way down into the part with the highest upper bound.
func (s swept) brings(common, theta antenna.Interval, hi float64) float64 {
	value := func(phi float64) float64 {
		phi = math.Remainder(phi, 2*math.Pi)
		return s.Pattern.RelativeRange(antenna.Interval{Lo: phi, Hi: phi}, theta).Lo
	}
	best := value(math.Min(math.Max(0, common.Lo), common.Hi))
	for depth := 0; depth < 16 && best < hi*(1-1e-6); depth++ {
		const parts = 4
		width := common.Width() / parts
		top := antenna.Interval{}
		highest := -1.0
		for k := 0; k < parts; k++ {
			part := antenna.Interval{Lo: common.Lo + width*float64(k), Hi: common.Lo + width*float64(k+1)}
			turned := part
			turned.Lo = math.Remainder(part.Lo, 2*math.Pi)
			turned.Hi = turned.Lo + width
			if h := s.Pattern.RelativeRange(turned, theta).Hi; h > highest {
				top, highest = part, h
			}
		}
		common = top
		best = math.Max(best, value((top.Lo+top.Hi)/2))
	}
	return best
}
