package exposure

import (
	"math"

	"example.org/standclear/antenna"
)

// panel is what auto takes for a sector, omni, two-beamwidth or file pattern
// with a length (a composition of this project). Within 2 L^2/lambda of the body:
// the larger E and the larger H of the array and of the smaller of far field by
// pattern and cylindrical model, where the latter holds, else the far field.
// Beyond: the larger of the pattern and, for built-in patterns, the array's own
// far-field pattern. Source: [PANEL-1].
type panel struct {
	farField
	array    *array
	cylinder cylinder
	edge     float64 // 2 L^2/lambda from the body
	half     float64 // half of the body's length
	builtIn  bool
}

func (e *panel) at(q Point) density {
	d, _ := e.best(q)
	return d
}

// best returns the density and the method that governs.
func (e *panel) best(q Point) (density, string) {
	d := q.Sub(e.pos)
	f, r, z := d.Dot(e.axes.Boresight), d.Dot(e.axes.Right), d.Dot(e.axes.Up)
	rho2 := f*f + r*r
	r2, rho := rho2+z*z, math.Sqrt(rho2)
	if r2 == 0 {
		return density{math.Inf(1), math.Inf(1)}, string(MethodArray)
	}
	phi, theta := fastAtan2(r, f), fastAtan2(z, rho)
	s, how := e.scale*antenna.Toward(e.pattern, phi, theta)/r2, string(MethodFarField)
	over := math.Max(0, math.Abs(z)-e.half)
	if rho2+over*over > e.edge*e.edge {
		if e.builtIn {
			if a := e.array.far(r2, rho, z, phi); a > s {
				s, how = a, "far field of the array"
			}
		}
		return density{s, s}, how
	}
	if rho > 0 && e.cylinder.holds(rho, z) {
		if c := e.cylinder.cut.HorizontalCut(phi) * e.cylinder.along(rho); c < s {
			s, how = c, string(MethodCylindrical)
		}
	}
	u2, v2 := e.array.sums(rho, z)
	h := e.array.toward(rho, z, phi)
	a := e.array.mix(h*u2, h*v2)
	if math.Max(a.E, a.H) > s {
		how = string(MethodArray)
	}
	return density{math.Max(a.E, s), math.Max(a.H, s)}, how
}

// over takes the hull of both sides of every switch that the box straddles.
func (e *panel) over(b box) densityRange {
	v := e.look(b)
	g := e.array.line.ring(b)
	t := antenna.TowardRange(e.pattern, v.phi, v.theta)
	s := antenna.Interval{Lo: e.scale * t.Lo / v.r2hi, Hi: math.Inf(1)}
	if v.r2lo > 0 {
		s.Hi = e.scale * t.Hi / v.r2lo
	}
	const slack = 1e-9 // m: a switch must not fall between a point and its box
	near, far := g.fromSegment(e.half)
	inside, outside := near-slack <= e.edge, far+slack > e.edge
	var out densityRange
	if outside {
		o := s
		if e.builtIn {
			a := e.array.farOver(&g, &v)
			o = antenna.Interval{Lo: math.Max(o.Lo, a.Lo), Hi: math.Max(o.Hi, a.Hi)}
		}
		out = densityRange{density{o.Lo, o.Lo}, density{o.Hi, o.Hi}}
		if !inside {
			return out
		}
	}
	if everywhere, anywhere := e.cylinder.holdsOver(&g); anywhere {
		c := e.cylinder.over(&g, v.phi)
		s.Lo = math.Min(s.Lo, c.Lo)
		if everywhere {
			s.Hi = math.Min(s.Hi, c.Hi)
		}
	}
	i := e.array.overRing(&g, v.phi)
	i.Lo = density{math.Max(i.Lo.E, s.Lo), math.Max(i.Lo.H, s.Lo)}
	i.Hi = density{math.Max(i.Hi.E, s.Hi), math.Max(i.Hi.H, s.Hi)}
	if !outside {
		return i
	}
	return densityRange{
		density{math.Min(out.Lo.E, i.Lo.E), math.Min(out.Lo.H, i.Lo.H)},
		density{math.Max(out.Hi.E, i.Hi.E), math.Max(out.Hi.H, i.Hi.H)},
	}
}

func (e *panel) reaches(b box) reach { return e.placement.reaches(b) }

func (e *panel) in(f frame) emitter {
	c := *e
	c.placement = e.placement.in(f)
	c.array = e.array.in(f).(*array)
	return &c
}

// falloff: the cylindrical model only ever lowers the far field.
func (e *panel) falloff() (g, offset float64) {
	g, offset = e.array.falloff()
	return math.Max(g, e.gain), offset
}

// methodAt names the method that governs at a point.
func (e *panel) methodAt(q Point) string {
	_, how := e.best(q)
	return "panel: " + how
}
