package exposure

import (
	"math"

	"example.org/standclear/antenna"
)

// farField radiates by its pattern alone: S = P g(phi, theta)/(4 pi r^2), E and
// H in the ratio of a plane wave.
type farField struct {
	placement
	pattern antenna.Pattern
	gain    float64 // peak gain as a ratio
	scale   float64 // gain/(4 pi)
}

func newFarField(p placement, pattern antenna.Pattern, gain float64) *farField {
	return &farField{placement: p, pattern: pattern, gain: gain, scale: gain / (4 * math.Pi)}
}

func (e *farField) at(q Point) density {
	r2, phi, theta := e.towards(q)
	if r2 == 0 {
		return density{math.Inf(1), math.Inf(1)}
	}
	s := e.scale * antenna.Toward(e.pattern, phi, theta) / r2
	return density{s, s}
}

func (e *farField) over(b box) densityRange {
	v := e.look(b)
	g := antenna.TowardRange(e.pattern, v.phi, v.theta)
	lo, hi := e.scale*g.Lo/v.r2hi, math.Inf(1)
	if v.r2lo > 0 {
		hi = e.scale * g.Hi / v.r2lo
	}
	return densityRange{density{lo, lo}, density{hi, hi}}
}

func (e *farField) reaches(b box) reach { return e.placement.reaches(b) }

func (e *farField) in(f frame) emitter {
	c := *e
	c.placement = e.placement.in(f)
	return &c
}

func (e *farField) falloff() (g, offset float64) { return e.gain, 0 }
