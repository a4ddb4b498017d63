package exposure

import (
	"fmt"
	"math"

	"example.org/standclear/antenna"
)

// aperture is a dish by the engineering formulas of OET 65, per watt: within a
// diameter of the axis in front, 16 eta/(pi D^2) to D^2/(4 lambda), falling as 1/R
// to 0.6 D^2/lambda, the far field on the axis beyond, R counted along the axis;
// elsewhere the larger of 1/100 of that at the slant distance and the far field
// by pattern; nowhere more than 4/A. Behind the dish the rule for off the axis is
// taken (a choice of this project). A rotating dish is in front wherever its
// sweep brings it. Source: [APERTURE-1].
type aperture struct {
	placement
	pattern                   antenna.Pattern
	gain                      float64
	scale                     float64 // gain/(4 pi)
	diameter                  float64
	surface, near             float64 // densities per watt
	nearUntil, farFrom, sweep float64 // m, m, half the sector swept in rad
}

func newAperture(p placement, pattern antenna.Pattern, gain, diameter, efficiency, lambda, sweep float64) *aperture {
	p.reactive = 0
	return &aperture{
		placement: p, pattern: pattern, gain: gain, scale: gain / (4 * math.Pi), diameter: diameter,
		surface: ApertureSurfaceDensity(1, diameter), near: ApertureNearFieldDensity(1, diameter, efficiency),
		nearUntil: DishNearFieldDistance(diameter, lambda), farFrom: DishFarFieldDistance(diameter, lambda), sweep: sweep / 2,
	}
}

// axis is the density on the axis at R, before the cap.
func (e *aperture) axis(r float64) float64 {
	switch {
	case r >= e.farFrom:
		return e.scale / (r * r)
	case r > e.nearUntil:
		return ApertureTransitionDensity(e.near, e.nearUntil, r)
	}
	return e.near
}

// axisRange encloses axis over distances: it falls, but for the step where the
// far field takes over.
func (e *aperture) axisRange(lo, hi float64) (least, most float64) {
	most, least = e.axis(lo), e.axis(hi)
	if lo < e.farFrom && hi >= e.farFrom {
		before, behind := ApertureTransitionDensity(e.near, e.nearUntil, e.farFrom), e.axis(e.farFrom)
		most = math.Max(most, behind)
		least = math.Min(least, before)
	}
	return least, most
}

// forward splits the azimuth that is left after the sweep: the distance along the
// axis and across it in the plane of rotation.
func (e *aperture) forward(q Point) (along, across float64) {
	d := q.Sub(e.pos)
	f, r, u := d.Dot(e.axes.Boresight), d.Dot(e.axes.Right), d.Dot(e.axes.Up)
	if e.sweep > 0 {
		flat := math.Hypot(f, r)
		left := math.Max(0, math.Abs(fastAtan2(r, f))-e.sweep)
		f, r = flat*math.Cos(left), flat*math.Sin(left)
	}
	return f, math.Hypot(r, u)
}

// inFront reports whether a point is in front, within a diameter of the axis.
func (e *aperture) inFront(along, across float64) bool { return along >= 0 && across <= e.diameter }

func (e *aperture) at(q Point) density {
	along, across := e.forward(q)
	s := 0.0
	if e.inFront(along, across) {
		s = e.axis(along)
	} else {
		r2, phi, theta := e.towards(q)
		s = math.Max(ApertureOffAxisDensity(e.axis(math.Sqrt(r2))), e.scale*antenna.Toward(e.pattern, phi, theta)/r2)
	}
	s = math.Min(s, e.surface)
	return density{s, s}
}

// over takes the hull of the rule for the axis and the rule off it where the box
// meets both.
func (e *aperture) over(b box) densityRange {
	alo, ahi, clo, chi := e.forwardRange(b)
	lo, hi := math.Inf(1), 0.0
	if ahi >= 0 && clo <= e.diameter {
		lo, hi = e.axisRange(math.Max(0, alo), ahi)
	}
	if alo < 0 || chi > e.diameter {
		v := e.look(b)
		g := antenna.TowardRange(e.pattern, v.phi, v.theta)
		l, h := e.axisRange(math.Sqrt(v.r2lo), math.Sqrt(v.r2hi))
		h = ApertureOffAxisDensity(h)
		if v.r2lo > 0 {
			h = math.Max(h, e.scale*g.Hi/v.r2lo)
		} else {
			h = math.Inf(1)
		}
		lo, hi = math.Min(lo, math.Max(ApertureOffAxisDensity(l), e.scale*g.Lo/v.r2hi)), math.Max(hi, h)
	}
	lo, hi = math.Min(lo, e.surface), math.Min(hi, e.surface)
	return densityRange{density{lo, lo}, density{hi, hi}}
}

// forwardRange encloses forward over a box, a little wide for rounding.
func (e *aperture) forwardRange(b box) (alo, ahi, clo, chi float64) {
	const slack = 1e-9 // m: a switch must not fall between a point and its box
	if e.sweep == 0 {
		line := rod{e.pos, e.axes.Boresight}
		g := line.ring(b)
		return g.zlo - slack, g.zhi + slack, math.Max(0, g.rlo-slack), g.rhi + slack
	}
	up := rod{e.pos, e.axes.Up}
	g := up.ring(b)
	v := e.look(b)
	fLo, fHi := foldedAzimuth(v.phi)
	left := antenna.Interval{Lo: math.Max(0, fLo-e.sweep), Hi: math.Max(0, fHi-e.sweep)}
	// cos falls over [0, pi]; sin rises to a quarter turn, then falls.
	cLo, cHi := math.Cos(left.Hi), math.Cos(left.Lo)
	sLo, sHi := math.Min(math.Sin(left.Lo), math.Sin(left.Hi)), math.Max(math.Sin(left.Lo), math.Sin(left.Hi))
	if left.Contains(math.Pi / 2) {
		sHi = 1
	}
	alo, ahi = math.Min(g.rlo*cLo, g.rhi*cLo), math.Max(g.rlo*cHi, g.rhi*cHi)
	zlo, zhi := g.heights(0)
	clo, chi = math.Hypot(g.rlo*math.Max(0, sLo), zlo), math.Hypot(g.rhi*sHi, zhi)
	reach := slack + 1e-12*g.rhi
	return alo - reach, ahi + reach, math.Max(0, clo-reach), chi + reach
}

// foldedAzimuth returns the smallest and largest |phi|, phi within half a turn,
// over an interval that may run past half a turn.
func foldedAzimuth(phi antenna.Interval) (lo, hi float64) {
	switch {
	case phi.Hi > math.Pi:
		hi = math.Pi
		lo = math.Min(math.Abs(phi.Lo), math.Max(0, 2*math.Pi-phi.Hi))
		if phi.Lo <= 0 {
			lo = 0
		}
	case phi.Lo <= 0 && phi.Hi >= 0:
		hi = math.Max(-phi.Lo, phi.Hi)
	default:
		lo, hi = math.Min(math.Abs(phi.Lo), math.Abs(phi.Hi)), math.Max(math.Abs(phi.Lo), math.Abs(phi.Hi))
	}
	return lo, math.Min(hi, math.Pi)
}

func (e *aperture) reaches(box) reach { return reached }

func (e *aperture) in(f frame) emitter {
	c := *e
	c.placement = e.placement.in(f)
	return &c
}

// falloff: within a diameter of the axis R is at least r less a diameter; near
// and transition densities lie below the far field's formula where the
// efficiency is that of the gain, and in the ratio of the two else.
func (e *aperture) falloff() (g, offset float64) {
	own := e.near * e.nearUntil * e.farFrom / e.scale // 0.973 for a gain of that efficiency
	return e.gain * math.Max(1, own), e.diameter
}

// methodAt names the rule that gave the figure.
func (e *aperture) methodAt(q Point) string {
	along, across := e.forward(q)
	where := "off the axis"
	if e.inFront(along, across) {
		switch {
		case along >= e.farFrom:
			where = "far field on the axis"
		case along > e.nearUntil:
			where = "transition region"
		default:
			where = "near field"
		}
	}
	return fmt.Sprintf("%s (%s)", MethodAperture, where)
}
