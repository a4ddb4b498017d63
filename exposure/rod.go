package exposure

import "math"

// rod is a straight line in space: the axis of a wire, of a loop or of a column
// of elements.
type rod struct{ pos, dir Point }

func (r rod) in(f frame) rod { return rod{f.point(r.pos), f.vector(r.dir)} }

// polar returns the distance of a point from the line and its height along it,
// from pos.
func (r *rod) polar(q Point) (rho, z float64) {
	d := q.Sub(r.pos)
	z = d.Dot(r.dir)
	return d.Sub(r.dir.Scale(z)).Norm(), z
}

// outward is the unit vector from the line to a point, on the line itself any
// that stands across it.
func (r *rod) outward(q Point) Point {
	d := q.Sub(r.pos)
	w := d.Sub(r.dir.Scale(d.Dot(r.dir)))
	if n := w.Norm(); n > 1e-9*d.Norm() {
		return w.Scale(1 / n)
	}
	return r.across()
}

// ring is what a box is to whatever is round about a line: the intervals of
// distance and height that hold every point of it, the centre's own, and a
// radius in the plane of distance and height: no point of the box lies farther
// from the centre in that plane.
type ring struct {
	rho, z   float64
	rlo, rhi float64
	zlo, zhi float64
	radius   float64
	dr, dz   float64 // its parts in distance and height
}

// ring encloses a box. The distance changes by at most the extent a toward the
// line, and sideways only in the second order: sqrt((rho+a)^2 + l^2).
func (r *rod) ring(b box) ring {
	d := b.c.Sub(r.pos)
	z := d.Dot(r.dir)
	w := d.Sub(r.dir.Scale(z))
	rho := w.Norm()
	h := extent(r.dir, b.h)
	if rho <= 1e-9*d.Norm() {
		// Too near the line for a direction of its own.
		e := r.across()
		out := math.Hypot(extent(e, b.h), extent(r.dir.Cross(e), b.h))
		return ring{rho: rho, z: z, zlo: z - h, zhi: z + h, rlo: math.Max(0, rho-out), rhi: rho + out, radius: math.Hypot(out+rho, h), dr: out + rho, dz: h}
	}
	radial := w.Scale(1 / rho)
	a, l := extent(radial, b.h), extent(r.dir.Cross(radial), b.h)
	g := ring{rho: rho, z: z, zlo: z - h, zhi: z + h, rlo: math.Max(0, rho-a), rhi: math.Sqrt((rho+a)*(rho+a) + l*l)}
	g.dr, g.dz = math.Max(g.rhi-rho, rho-g.rlo), h
	g.radius = math.Sqrt(g.dr*g.dr + h*h)
	return g
}

// across is a unit vector across the line.
func (r *rod) across() Point {
	side := Point{X: 1}
	if math.Abs(r.dir.X) > 0.7 {
		side = Point{Y: 1}
	}
	v := r.dir.Cross(side)
	return v.Scale(1 / v.Norm())
}

// heights returns the smallest and largest |z - z0| over the ring.
func (g *ring) heights(z0 float64) (lo, hi float64) {
	a, b := g.zlo-z0, g.zhi-z0
	hi = math.Max(math.Abs(a), math.Abs(b))
	if a <= 0 && b >= 0 {
		return 0, hi
	}
	return math.Min(math.Abs(a), math.Abs(b)), hi
}

// fromSegment returns the smallest and largest distance from the part |z| <=
// half of the line.
func (g *ring) fromSegment(half float64) (lo, hi float64) {
	zlo, zhi := g.heights(0)
	lo = math.Hypot(g.rlo, math.Max(0, zlo-half))
	return lo, math.Hypot(g.rhi, math.Max(0, zhi-half))
}

// fromPoint returns the smallest distance from the point z0 of the line.
func (g *ring) fromPoint(z0 float64) float64 {
	lo, _ := g.heights(z0)
	return math.Sqrt(g.rlo*g.rlo + lo*lo)
}

// spread bounds |u1 - u0| over a region whose distances from two points are at
// least r1 and r0, the points s apart, u their directions: 2 s/(r1 + r0)
// (Dunkl and Williams 1964).
func spread(s, r1, r0 float64) float64 {
	if 2*s >= 2*(r1+r0) {
		return 2
	}
	return 2 * s / (r1 + r0)
}

// phaseSlack is the share of k r, times the sum of amplitudes, that the rounding
// of phases can change a coherent sum by.
const phaseSlack = 8.0 / (1 << 53)

// squares returns the squares of [mid-gap, mid+gap], cut at 0 and at most.
func squares(mid, gap, most float64) (lo, hi float64) {
	lo, hi = math.Max(0, mid-gap), math.Min(mid+gap, most)
	return lo * lo, hi * hi
}
