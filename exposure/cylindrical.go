package exposure

import (
	"math"

	"example.org/standclear/antenna"
)

// CylindricalPeakDensity returns the largest power density in W/m2 over the
// height of a vertical array at distance R from its axis: S = 2 P h/(Phi R L c2
// sqrt(1 + (2R/R0)^2)), R0 = Phi G L c2/(4 pi), c2 = cos2(tilt); P G h/(4 pi R^2)
// far out. P is in W, G the peak gain as a ratio, h the horizontal cut toward the
// point as a ratio, Phi the cut's integral over the circle in rad, L the length in
// m, tilt the electrical tilt in rad, R in m, above 0. It holds beside the array,
// to L/2 + R tan(10 deg + tilt) above and below its middle. Source: [CYLINDER-PEAK].
func CylindricalPeakDensity(powerW float64, gain antenna.Gain, cut, cutIntegralRad, lengthM, tiltRad, rM float64) float64 {
	return 4 * CylindricalMeanDensity(powerW, gain, cut, cutIntegralRad, lengthM, tiltRad, 2*rM)
}

// CylindricalMeanDensity returns the power density in W/m2 averaged over the
// height of a vertical array at distance R from its axis: S = P h/(Phi R L c2
// sqrt(1 + (R/R0)^2)), R0 = Phi G L c2/(4 pi), c2 = cos2(tilt). Arguments as for
// CylindricalPeakDensity. It is a mean: values at single heights are up to twice
// as high. Source: [CYLINDER-MEAN].
func CylindricalMeanDensity(powerW float64, gain antenna.Gain, cut, cutIntegralRad, lengthM, tiltRad, rM float64) float64 {
	c := math.Cos(tiltRad)
	r0 := cutIntegralRad * float64(gain) * lengthM * c * c / (4 * math.Pi)
	x := rM / r0
	return powerW * cut / (cutIntegralRad * rM * lengthM * c * c * math.Sqrt(1+x*x))
}

// coneRad is how far the cylindrical model's region opens beyond the tilt.
const coneRad = 10 * math.Pi / 180

// cylinder is the peak cylindrical model of a panel, per watt.
type cylinder struct {
	cut     antenna.HorizontalCutter
	a, b2   float64 // S = a h/(rho sqrt(1 + b2 rho^2))
	half    float64 // half of the panel's length, m
	opening float64 // tangent of the region's opening
}

func newCylinder(p antenna.Pattern, gain antenna.Gain, length, tilt float64) cylinder {
	own := horizontalCut(still(p), tilt)
	phi := aroundHorizon(own.HorizontalCut)
	c := math.Cos(tilt)
	r0 := phi * float64(gain) * length * c * c / (4 * math.Pi)
	return cylinder{horizontalCut(p, tilt), 2 / (phi * length * c * c), 4 / (r0 * r0), length / 2, math.Tan(coneRad + math.Abs(tilt))}
}

// along is the density for h = 1; it falls as rho grows.
func (c *cylinder) along(rho float64) float64 { return c.a / (rho * math.Sqrt(1+c.b2*rho*rho)) }

// holds reports whether the model holds at a distance and height.
func (c *cylinder) holds(rho, z float64) bool { return math.Abs(z) <= c.half+rho*c.opening }

// holdsOver says whether it holds everywhere and anywhere in a ring.
func (c *cylinder) holdsOver(g *ring) (everywhere, anywhere bool) {
	const slack = 1e-9 // m: a switch must not fall between a point and its box
	lo, hi := g.heights(0)
	return hi+slack <= c.half+g.rlo*c.opening, lo-slack <= c.half+g.rhi*c.opening
}

// over encloses the model's density.
func (c *cylinder) over(g *ring, phi antenna.Interval) antenna.Interval {
	h := c.cut.HorizontalCutRange(phi)
	out := antenna.Interval{Lo: h.Lo * c.along(g.rhi), Hi: math.Inf(1)}
	if g.rlo > 0 {
		out.Hi = h.Hi * c.along(g.rlo)
	}
	return out
}

// cylindrical is method cylindrical: where the model holds the larger of it and
// the far field by pattern, elsewhere the far field.
type cylindrical struct {
	farField
	cylinder
	line rod
}

func newCylindrical(p placement, pattern antenna.Pattern, gain antenna.Gain, length, tilt float64) *cylindrical {
	return &cylindrical{*newFarField(p, pattern, float64(gain)), newCylinder(pattern, gain, length, tilt), rod{p.pos, p.axes.Up}}
}

func (e *cylindrical) at(q Point) density {
	d := e.farField.at(q)
	rho, z := e.line.polar(q)
	if !e.holds(rho, z) {
		return d
	}
	_, phi, _ := e.towards(q)
	s := math.Inf(1)
	if rho > 0 {
		s = math.Max(d.E, e.cut.HorizontalCut(phi)*e.along(rho))
	}
	return density{s, s}
}

func (e *cylindrical) over(b box) densityRange {
	out := e.farField.over(b)
	g := e.line.ring(b)
	everywhere, anywhere := e.holdsOver(&g)
	if !anywhere {
		return out
	}
	s := e.cylinder.over(&g, e.look(b).phi)
	out.Hi.E = math.Max(out.Hi.E, s.Hi)
	if everywhere {
		out.Lo.E = math.Max(out.Lo.E, s.Lo)
	}
	return densityRange{density{out.Lo.E, out.Lo.E}, density{out.Hi.E, out.Hi.E}}
}

func (e *cylindrical) reaches(b box) reach { return e.placement.reaches(b) }

func (e *cylindrical) in(f frame) emitter {
	c := *e
	c.placement, c.line = e.placement.in(f), e.line.in(f)
	return &c
}

// falloff: the model is at most G/(4 pi rho^2), and where it holds r <= L/2 + rho
// sqrt(1 + opening^2).
func (e *cylindrical) falloff() (g, offset float64) {
	return e.gain * (1 + e.opening*e.opening), e.half
}

func (e *cylindrical) methodAt(q Point) string {
	if rho, z := e.line.polar(q); e.holds(rho, z) && e.at(q).E > e.farField.at(q).E {
		return string(MethodCylindrical)
	}
	return string(MethodFarField)
}
