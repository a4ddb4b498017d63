package exposure

import "math"

// elementary is a source much smaller than a wavelength with all its fields:
// those of a Hertzian dipole along its line, or of a small loop about it, which
// are the same with E and H changed over.
//
// With x = k r and w the angle from the line, per watt radiated and gain 1.5:
// Z0 |H|^2 = 3 sin^2 w (1 + 1/x^2)/(8 pi r^2) and
// |E|^2/Z0 = 3 (sin^2 w (1 - 1/x^2 + 1/x^4) + 4 cos^2 w (1/x^2 + 1/x^4))/(8 pi r^2)
// for the dipole. Source: [ELEMENTARY-1].
type elementary struct {
	placement
	rod
	k     float64
	gain  float64 // peak gain as a ratio
	scale float64 // gain/(4 pi)
	loop  bool
}

func newElementary(p placement, line rod, k, gain float64, loop bool) *elementary {
	p.reactive = 0
	return &elementary{placement: p, rod: line, k: k, gain: gain, scale: gain / (4 * math.Pi), loop: loop}
}

// terms returns the density across the line (of the dipole's E and of its H) and
// along it (of its E) at distance r. All three fall as r grows.
func (e *elementary) terms(r2 float64) (acrossE, acrossH, along float64) {
	u := 1 / (e.k * e.k * r2) // 1/x^2
	s := e.scale / r2
	return s * (1 - u + u*u), s * (1 + u), 4 * s * (u + u*u)
}

func (e *elementary) order(d density) density {
	if e.loop {
		return density{d.H, d.E}
	}
	return d
}

func (e *elementary) at(q Point) density {
	rho, z := e.polar(q)
	r2 := rho*rho + z*z
	if r2 == 0 {
		return density{math.Inf(1), math.Inf(1)}
	}
	ae, ah, al := e.terms(r2)
	s := rho * rho / r2
	return e.order(density{s*ae + z*z/r2*al, s * ah})
}

func (e *elementary) over(b box) densityRange {
	g := e.ring(b)
	near, far := b.distances(e.rod.pos)
	if near == 0 {
		return unbounded
	}
	zlo, zhi := g.heights(0)
	// sin^2 w rises with the distance from the line and falls with the height.
	slo, shi := 0.0, 1.0
	if g.rlo > 0 {
		slo = g.rlo * g.rlo / (g.rlo*g.rlo + zhi*zhi)
	}
	if g.rhi > 0 {
		shi = g.rhi * g.rhi / (g.rhi*g.rhi + zlo*zlo)
	}
	mixed := func(ae, al float64) (lo, hi float64) {
		a, c := slo*ae+(1-slo)*al, shi*ae+(1-shi)*al
		return math.Min(a, c), math.Max(a, c)
	}
	ae, ah, al := e.terms(near * near)
	_, hiE := mixed(ae, al)
	hi := e.order(density{hiE, shi * ah})
	ae, ah, al = e.terms(far * far)
	loE, _ := mixed(ae, al)
	return densityRange{e.order(density{loE, slo * ah}), hi}
}

func (e *elementary) reaches(box) reach { return reached }

func (e *elementary) in(f frame) emitter {
	c := *e
	c.placement, c.rod = e.placement.in(f), e.rod.in(f)
	return &c
}

// falloff: with t = 1/x <= 1 neither (1 + t^2)(1 - t)^2 nor the part along the
// line, 4 (t^2 + t^4)(1 - t)^2, passes 1, so that 1/k is an offset.
func (e *elementary) falloff() (g, offset float64) { return e.gain, 1 / e.k }
