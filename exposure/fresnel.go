package exposure

import (
	"math"
	"math/cmplx"

	"example.org/standclear/antenna"
)

// FresnelReflection returns the reflection coefficients of a plane ground for a
// plane wave that arrives at a grazing angle: of E for horizontal, of H for
// vertical polarization. With eps = permittivity - j conductivity/(2 pi f eps0) and
// q = sqrt(eps - cos^2 psi): R_h = (sin psi - q)/(sin psi + q), R_v = (eps sin psi -
// q)/(eps sin psi + q). The angle is in rad, above 0, the permittivity relative, 1 or
// more, the conductivity in S/m, the frequency in Hz. Smooth, flat, even ground:
// rough ground reflects less. Source: [FRESNEL-1].
func FresnelReflection(grazingRad, permittivity, conductivity, frequencyHz float64) (horizontal, vertical complex128) {
	p := newGroundPlane(Ground{Permittivity: permittivity, Conductivity: conductivity}, frequencyHz)
	return p.coefficients(math.Sin(grazingRad))
}

// plane is a reflecting ground.
type groundPlane struct {
	origin, up Point
	eps        complex128
	clearance  float64 // a wavelength: the least height of both ends, m
}

func newGroundPlane(g Ground, frequencyHz float64) groundPlane {
	return groundPlane{
		origin: Point{Z: g.Z}, up: Point{Z: 1}, clearance: Wavelength(frequencyHz),
		eps: complex(g.Permittivity, -g.Conductivity/(2*math.Pi*frequencyHz*Eps0)),
	}
}

func (g groundPlane) in(f frame) groundPlane {
	g.origin, g.up = f.point(g.origin), f.vector(g.up)
	return g
}

func (g *groundPlane) coefficients(sine float64) (horizontal, vertical complex128) {
	s := complex(sine, 0)
	q := cmplx.Sqrt(g.eps - 1 + s*s)
	return (s - q) / (s + q), (g.eps*s - q) / (g.eps*s + q)
}

// height of a point above the ground, m.
func (g *groundPlane) height(p Point) float64 { return p.Sub(g.origin).Dot(g.up) }

// flip turns the vertical part of a direction over.
func (g *groundPlane) flip(v Point) Point { return v.Sub(g.up.Scale(2 * v.Dot(g.up))) }

// mirror is where the ground shows a placement: the reflected ray reaches a point
// as if it came from there. The mirrored axes are left-handed.
func (g *groundPlane) mirror(p placement) placement {
	p.pos = p.pos.Sub(g.up.Scale(2 * g.height(p.pos)))
	p.axes = antenna.Axes{Boresight: g.flip(p.axes.Boresight), Right: g.flip(p.axes.Right), Up: g.flip(p.axes.Up)}
	return p
}

// clear says whether all of a box (the heights of its centre and its half extent)
// is high enough for the two rays.
func (g *groundPlane) clear(b box) (everywhere, anywhere bool) {
	h, x := g.height(b.c), extent(g.up, b.h)
	return h-x >= g.clearance, h+x >= g.clearance
}

// phasor is a complex vector.
type phasor struct{ x, y, z complex128 }

func (a *phasor) add(v Point, c complex128) {
	a.x += complex(v.X, 0) * c
	a.y += complex(v.Y, 0) * c
	a.z += complex(v.Z, 0) * c
}

func (a phasor) norm2() float64 { return norm2(a.x) + norm2(a.y) + norm2(a.z) }

// against is the product of a with the complex conjugate of b.
func (a phasor) against(b phasor) complex128 {
	return a.x*cmplx.Conj(b.x) + a.y*cmplx.Conj(b.y) + a.z*cmplx.Conj(b.z)
}

// reflected adds the reflected E and Z0 H of a plane wave of amplitude c that runs
// along u with E along e, a unit vector across u: with s = u x up made a unit
// vector, E' = R_h E_s s - k_r x (R_v Z0 H_s s) and Z0 H' = k_r x E'.
func (g *groundPlane) reflected(e, h *phasor, u, along Point, c complex128) {
	s := u.Cross(g.up)
	if n := s.Norm(); n > 1e-12 {
		s = s.Scale(1 / n)
	} else {
		line := rod{dir: g.up}
		s = line.across()
	}
	kr := g.flip(u)
	rh, rv := g.coefficients(math.Abs(u.Dot(g.up)))
	a := rh * c * complex(along.Dot(s), 0)
	b := -rv * c * complex(u.Cross(along).Dot(s), 0)
	ks := kr.Cross(s)
	e.add(s, a)
	e.add(ks, b)
	h.add(ks, a)
	h.add(kr.Cross(ks), b)
}

// directions returns the unit vectors of rising elevation and of azimuth about an
// antenna's axes, for a wave along u; on the axis itself, where they are not
// defined, two that stand across it.
func directions(ax *antenna.Axes, u Point) (theta, phi Point) {
	phi = ax.Up.Cross(u)
	n := phi.Norm()
	if n < 1e-12 {
		return ax.Boresight, ax.Right
	}
	phi = phi.Scale(1 / n)
	return u.Cross(phi), phi
}

// shares returns how much of the power goes into each of the two directions.
func shares(p antenna.Polarization) (theta, phi float64) {
	switch p {
	case antenna.Horizontal:
		return 0, 1
	case antenna.Slant, antenna.Circular:
		return 0.5, 0.5
	}
	return 1, 0
}

// twoRay is the far field with one reflection from the ground: E and H are vector
// sums of the direct and the reflected ray, each with its own pattern loss and
// distance. The powers of the two polarizations of slant and circular waves add.
// Nearer the ground than a wavelength, where the method ends, it returns the sum
// of the rays' amplitudes. Source: [FRESNEL-1].
type twoRay struct {
	farField
	image farField
	g     groundPlane
	k     float64
	share [2]float64 // of the power, by elevation and azimuth direction
}

func newTwoRay(f *farField, g groundPlane, k float64, polarization antenna.Polarization) *twoRay {
	t := &twoRay{farField: *f, image: *f, g: g, k: k}
	t.image.placement = g.mirror(f.placement)
	t.share[0], t.share[1] = shares(polarization)
	return t
}

func (e *twoRay) at(q Point) density {
	d, i := e.farField.at(q).E, e.image.at(q).E
	if math.IsInf(d, 1) || math.IsInf(i, 1) {
		return density{math.Inf(1), math.Inf(1)}
	}
	if e.g.height(q) < e.g.clearance {
		s := math.Sqrt(d) + math.Sqrt(i)
		return density{s * s, s * s}
	}
	w := e.waves(q)
	var out density
	for p, share := range e.share {
		if share == 0 {
			continue
		}
		direct, reflected := complex(math.Sqrt(d), 0), cmplx.Rect(math.Sqrt(i), w.phase)
		var se, sh phasor
		se.sum(&w.de[p], direct, &w.re[p], reflected)
		sh.sum(&w.dh[p], direct, &w.rh[p], reflected)
		out.E += share * se.norm2()
		out.H += share * sh.norm2()
	}
	return out
}

func (a *phasor) sum(b *phasor, cb complex128, c *phasor, cc complex128) {
	a.x, a.y, a.z = b.x*cb+c.x*cc, b.y*cb+c.y*cc, b.z*cb+c.z*cc
}

// waves holds the two rays at a point for unit amplitudes, by polarization.
type waves struct {
	de, dh, re, rh [2]phasor
	phase          float64 // of the reflected ray against the direct
}

func (e *twoRay) waves(q Point) waves {
	var w waves
	d, i := q.Sub(e.pos), q.Sub(e.image.pos)
	rd, ri := d.Norm(), i.Norm()
	ud, ui := d.Scale(1/rd), e.g.flip(i.Scale(1/ri))
	w.phase = -e.k * (ri - rd)
	dt, dp := directions(&e.axes, ud)
	it, ip := directions(&e.axes, ui)
	for p, x := range [2][2]Point{{dt, it}, {dp, ip}} {
		w.de[p].add(x[0], 1)
		w.dh[p].add(ud.Cross(x[0]), 1)
		e.g.reflected(&w.re[p], &w.rh[p], ui, x[1], 1)
	}
	return w
}

// over bounds the two amplitudes by intervals of pattern and distance, and what
// the rays' directions, the reflection and the phase between them make of their
// sum by its value at the centre and the most it can change over the box.
func (e *twoRay) over(b box) densityRange {
	d, i := e.farField.over(b), e.image.over(b)
	alo, ahi := math.Sqrt(d.Lo.E), math.Sqrt(d.Hi.E)
	blo, bhi := math.Sqrt(i.Lo.E), math.Sqrt(i.Hi.E)
	if math.IsInf(ahi, 1) || math.IsInf(bhi, 1) {
		return unbounded
	}
	everywhere, anywhere := e.g.clear(box{b.c, b.h.Add(Point{X: 1e-9, Y: 1e-9, Z: 1e-9})})
	low := densityRange{density{(alo + blo) * (alo + blo), (alo + blo) * (alo + blo)}, density{(ahi + bhi) * (ahi + bhi), (ahi + bhi) * (ahi + bhi)}}
	if !anywhere {
		return low
	}
	c := e.changes(b)
	w := e.waves(b.c)
	turn := cmplx.Rect(1, -w.phase)
	var out densityRange
	for p, share := range e.share {
		if share == 0 {
			continue
		}
		size := math.Sqrt(w.re[p].norm2())
		slo, shi := squares(size, c.wave, 1)
		el, eh := interference(alo, ahi, blo, bhi, slo, shi, real(w.de[p].against(w.re[p])*turn), c.between)
		hl, hh := interference(alo, ahi, blo, bhi, slo, shi, real(w.dh[p].against(w.rh[p])*turn), c.between)
		out.Lo.E += share * el
		out.Lo.H += share * hl
		out.Hi.E += share * eh
		out.Hi.H += share * hh
	}
	if !everywhere {
		out.Hi = low.Hi
	}
	return out
}

// change is the most that the reflected wave, and its product with the direct one,
// can change over a box for unit amplitudes.
type change struct{ wave, between float64 }

// changes bounds them. A unit vector across the ray turns by at most 1/R + 1/rho a
// metre, rho the distance from the antenna's axis, the ray's by 1/R. With P what a
// perfect conductor would reflect, the reflected wave is -R_h P + (R_v + R_h) Q,
// |Q| <= 1: on the vertical below the antenna, where Q is not defined, its factor
// vanishes.
func (e *twoRay) changes(b box) change {
	d := b.h.Norm()
	axis, mirrored, plumb := rod{e.pos, e.axes.Up}, rod{e.image.pos, e.image.axes.Up}, rod{e.pos, e.g.up}
	rd, _ := b.distances(e.pos)
	ri, _ := b.distances(e.image.pos)
	if rd <= 0 || ri <= 0 {
		return change{2, 2}
	}
	turn := func(r float64, line *rod) float64 {
		g := line.ring(b)
		if g.rlo <= 0 {
			return 2
		}
		return math.Min(2, d*(1/r+1/g.rlo))
	}
	direct, reflected := turn(rd, &axis), turn(ri, &mirrored)
	upright := 2.0
	if g := plumb.ring(b); g.rlo > 0 {
		upright = math.Min(2, 2*d/g.rlo)
	}

	// The coefficients as functions of the sine of the grazing angle.
	centre := b.c.Sub(e.image.pos)
	sine, ds := math.Abs(centre.Dot(e.g.up))/centre.Norm(), d/ri
	least := math.Max(0, sine-ds)
	eps, n := cmplx.Abs(e.g.eps), cmplx.Abs(e.g.eps-1)
	q := math.Sqrt(n)
	hSlope, vSlope := 4.0, 4.0
	if q > 0 {
		// |dR_h/ds| = 2 |R_h|/|q|; |dR_v/ds| = 2 |eps| |eps - 1|/(|q| |eps s + q|^2), both
		// terms of the last with real parts above 0 and imaginary parts below.
		hSlope = 2 / q
		vSlope = 2 * eps * n / (q * (eps*eps*least*least + n))
	}
	rh, rv := e.g.coefficients(sine)
	dh, dv := math.Min(2, hSlope*ds), math.Min(2, vSlope*ds)
	both := math.Min(2, cmplx.Abs(rv+rh)+dh+dv)
	wave := math.Min(1, cmplx.Abs(rh)+dh)*reflected + dh + math.Min(2*both, dh+dv+both*(math.Min(2, 2*d/ri)+upright+reflected))
	wave = math.Min(2, wave)
	apart := 2 * math.Abs(e.g.height(e.pos))
	between := direct + wave + d/rd + 2*d/ri + e.k*spread(apart, ri, rd)*d + phaseSlack*e.k*(ri+2*d)
	return change{wave + 1e-12, math.Min(2, between+1e-12)}
}

// interference encloses a^2 + b^2 w + 2 a b c for amplitudes a, b, w the squared size
// of the reflected wave and c within gap of its middle, all else in intervals.
func interference(alo, ahi, blo, bhi, wlo, whi, mid, gap float64) (lo, hi float64) {
	clo, chi := math.Max(-1, mid-gap), math.Min(1, mid+gap)
	at := func(a, b, w, c float64) float64 { return a*a + b*b*w + 2*a*b*c }
	// Convex in a and in b: the largest stands at a corner, the least at a corner or
	// on a side, since between there is only the origin.
	hi = math.Max(math.Max(at(alo, blo, whi, chi), at(alo, bhi, whi, chi)), math.Max(at(ahi, blo, whi, chi), at(ahi, bhi, whi, chi)))
	lo = math.Inf(1)
	within := func(x, l, h float64) float64 { return math.Min(math.Max(x, l), h) }
	for _, a := range [2]float64{alo, ahi} {
		b := blo
		if wlo > 0 {
			b = within(-a*clo/wlo, blo, bhi)
		} else if clo < 0 {
			b = bhi
		}
		lo = math.Min(lo, at(a, b, wlo, clo))
	}
	for _, b := range [2]float64{blo, bhi} {
		lo = math.Min(lo, at(within(-b*clo, alo, ahi), b, wlo, clo))
	}
	return math.Max(0, lo), math.Max(0, hi)
}

func (e *twoRay) reaches(b box) reach { return e.placement.reaches(b) }

func (e *twoRay) in(f frame) emitter {
	c := *e
	c.placement, c.image.placement, c.g = e.placement.in(f), e.image.placement.in(f), e.g.in(f)
	return &c
}

// falloff: both rays at their largest, the second no farther off than its source
// below the ground.
func (e *twoRay) falloff() (g, offset float64) {
	return 4 * e.gain, 2 * math.Abs(e.g.height(e.pos))
}
