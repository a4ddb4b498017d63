package exposure

import (
	"math"

	"example.org/standclear/antenna"
)

// density is the field of a source that accepts one watt, as two power
// densities in W/m2 per W: E = |E|^2/Z0 and H = Z0 |H|^2. Far away they are the
// same; near a source they part, and both are kept.
type density struct{ E, H float64 }

// densityRange encloses the density over a box.
type densityRange struct{ Lo, Hi density }

// unbounded is what is known of a source inside its own body.
var unbounded = densityRange{Hi: density{math.Inf(1), math.Inf(1)}}

// box is an axis-aligned box in the frame of a question: centre and half extents.
type box struct{ c, h Point }

// reach says whether a method's figure holds in a region of space.
type reach uint8

const (
	reached   reach = iota // everywhere in the region
	unreached              // nowhere in it: every point lies in a reactive region that the method does not reach
	partReach              // unknown, or in part of it
)

// emitter computes and bounds the field of one source in one frame. All
// methods are free of side effects.
//
// The proposition of the package doc rests on over: for every point p of b,
// component by component, over(b).Lo <= at(p) <= over(b).Hi in exact
// arithmetic; rounding is covered by the caller, which grows every box and
// widens every sum.
type emitter interface {
	// at returns the density at p. At the very centre it may be infinite.
	at(p Point) density
	// over encloses the density over b.
	over(b box) densityRange
	// reaches says whether the method holds over b.
	reaches(b box) reach
	// in returns the same emitter seen from another frame.
	in(f frame) emitter
	// falloff bounds the density far away: beyond offset metres from the centre
	// of radiation both parts are at most g/(4 pi (r - offset)^2).
	falloff() (g, offset float64)
}

// frame is a rectangular frame in site coordinates: origin and three unit
// vectors. A question about a section or about an antenna's own extents is
// asked in a frame where its boxes are axis-aligned.
type frame struct{ origin, x, y, z Point }

var siteFrame = frame{x: Point{X: 1}, y: Point{Y: 1}, z: Point{Z: 1}}

// point brings a site point into the frame.
func (f frame) point(p Point) Point { return f.vector(p.Sub(f.origin)) }

// vector brings a direction into the frame.
func (f frame) vector(v Point) Point { return Point{X: v.Dot(f.x), Y: v.Dot(f.y), Z: v.Dot(f.z)} }

// back brings a point of the frame into site coordinates.
func (f frame) back(p Point) Point {
	return f.origin.Add(f.x.Scale(p.X)).Add(f.y.Scale(p.Y)).Add(f.z.Scale(p.Z))
}

// placement is where an emitter stands and how it is turned, in some frame,
// with the body from which region distances are measured.
type placement struct {
	pos  Point
	axes antenna.Axes
	vert Point // the site's up, for reflections
	// half length of the radiating body along axes.Up and half width along
	// axes.Right, m
	halfLength, halfWidth float64
	reactive              float64 // lambda/(2 pi), m; 0 = the method reaches everywhere
}

func (p placement) in(f frame) placement {
	p.pos = f.point(p.pos)
	p.axes = antenna.Axes{Boresight: f.vector(p.axes.Boresight), Right: f.vector(p.axes.Right), Up: f.vector(p.axes.Up)}
	p.vert = f.vector(p.vert)
	return p
}

// extent is the half extent of a box along a direction.
func extent(v, h Point) float64 {
	return math.Abs(v.X)*h.X + math.Abs(v.Y)*h.Y + math.Abs(v.Z)*h.Z
}

// reaches compares the distance of b from the radiating body with the reactive
// region's depth.
func (p *placement) reaches(b box) reach {
	if p.reactive == 0 {
		return reached
	}
	d := b.c.Sub(p.pos)
	f, rf := math.Abs(d.Dot(p.axes.Boresight)), extent(p.axes.Boresight, b.h)
	r, rr := math.Abs(d.Dot(p.axes.Right))-p.halfWidth, extent(p.axes.Right, b.h)
	u, ru := math.Abs(d.Dot(p.axes.Up))-p.halfLength, extent(p.axes.Up, b.h)
	near := sumSquares(math.Max(0, f-rf), math.Max(0, r-rr), math.Max(0, u-ru))
	limit := p.reactive * p.reactive
	if near >= limit {
		return reached
	}
	if sumSquares(f+rf, math.Max(0, r+rr), math.Max(0, u+ru)) < limit {
		return unreached
	}
	return partReach
}

func sumSquares(a, b, c float64) float64 { return a*a + b*b + c*c }

// view is a box as seen from an emitter: the intervals of distance squared,
// azimuth and elevation in the antenna's frame that hold every point of it.
type view struct {
	r2lo, r2hi float64
	phi, theta antenna.Interval
}

// look bounds the directions and distances of a box.
//
// Azimuth: with rho the distance from the antenna's axis, the box lies inside
// a rectangle in the plane across the axis, radial half extent a and lateral
// half extent l around the centre, so azimuth strays at most atan(l/(rho-a)).
// Elevation: atan2(u, rho) at the corners of the intervals of u and rho.
// Distance: exact, since the box is axis-aligned in the question's frame.
func (p *placement) look(b box) view {
	d := b.c.Sub(p.pos)
	ax := &p.axes
	f, r, u := d.Dot(ax.Boresight), d.Dot(ax.Right), d.Dot(ax.Up)
	var v view
	x, y, z := math.Abs(d.X), math.Abs(d.Y), math.Abs(d.Z)
	v.r2hi = sumSquares(x+b.h.X, y+b.h.Y, z+b.h.Z)
	v.r2lo = sumSquares(math.Max(0, x-b.h.X), math.Max(0, y-b.h.Y), math.Max(0, z-b.h.Z))

	rho := math.Sqrt(f*f + r*r)
	rholo, rhohi := 0.0, 0.0
	v.phi = antenna.FullCircle
	if rho > 0 {
		ef, er := f/rho, r/rho
		radial := Point{X: ax.Boresight.X*ef + ax.Right.X*er, Y: ax.Boresight.Y*ef + ax.Right.Y*er, Z: ax.Boresight.Z*ef + ax.Right.Z*er}
		lateral := Point{X: ax.Right.X*ef - ax.Boresight.X*er, Y: ax.Right.Y*ef - ax.Boresight.Y*er, Z: ax.Right.Z*ef - ax.Boresight.Z*er}
		a, l := extent(radial, b.h), extent(lateral, b.h)
		rhohi = math.Sqrt((rho+a)*(rho+a) + l*l)
		if rho > a {
			rholo = rho - a
			stray := l / rholo
			if stray < 1 {
				// atan(q) <= q - q^3/3 + q^5/5 for q in [0, 1]
				q2 := stray * stray
				stray *= 1 - q2*(1.0/3-q2/5)
			} else {
				stray = math.Atan(stray) + 1e-15
			}
			phi := fastAtan2(r, f)
			v.phi = antenna.Interval{Lo: phi - stray - angleSlack, Hi: phi + stray + angleSlack}
			if v.phi.Lo < -math.Pi {
				v.phi.Lo += 2 * math.Pi
				v.phi.Hi += 2 * math.Pi
			}
		}
	} else {
		a, l := extent(ax.Boresight, b.h), extent(ax.Right, b.h)
		rhohi = math.Sqrt(a*a + l*l)
	}
	ru := extent(ax.Up, b.h)
	v.theta.Lo = elevation(u-ru, rholo, rhohi) - angleSlack
	v.theta.Hi = -elevation(-u-ru, rholo, rhohi) + angleSlack
	v.theta.Lo = math.Max(v.theta.Lo, -math.Pi/2)
	v.theta.Hi = math.Min(v.theta.Hi, math.Pi/2)
	return v
}

// angleSlack covers the error of fastAtan2 and of the angles' arithmetic, rad.
const angleSlack = 4e-15

// elevation returns the least elevation of a point at height u whose distance
// from the axis lies in [rholo, rhohi].
func elevation(u, rholo, rhohi float64) float64 {
	if u < 0 {
		if rholo <= 0 {
			return -math.Pi / 2
		}
		return fastAtan2(u, rholo)
	}
	if u == 0 {
		return 0
	}
	return fastAtan2(u, rhohi)
}

// towards returns the distance squared and the direction of a point.
func (p *placement) towards(q Point) (r2, phi, theta float64) {
	d := q.Sub(p.pos)
	ax := &p.axes
	f, r, u := d.Dot(ax.Boresight), d.Dot(ax.Right), d.Dot(ax.Up)
	rho2 := f*f + r*r
	return rho2 + u*u, fastAtan2(r, f), fastAtan2(u, math.Sqrt(rho2))
}
