package exposure

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/integrate/quad"

	"example.org/standclear/antenna"
)

// The element of an array: its vertical beamwidth. At most 23 dB are lost at 90
// deg from its horizon, so that the ceiling of 30 dB is never met.
const elementWidthRad = 65 * math.Pi / 180

// elementAmplitude is the element's field against elevation: a loss of 12
// (theta/65 deg)^2 dB.
func elementAmplitude(theta float64) float64 {
	x := theta / elementWidthRad
	return math.Exp(-math.Ln10 / 20 * math.Min(12*x*x, 30))
}

// elementSlope is at least the largest change of elementAmplitude a rad.
const elementSlope = 0.895

// elementTable holds elementAmplitude by tan(theta/2), 0 to 1: linear between, it
// is within 3e-7 of the formula.
var elementTable = func() (t [2049]float64) {
	for i := range t {
		t[i] = elementAmplitude(2 * math.Atan(float64(i)/2048))
	}
	return
}()

// element returns the amplitude at tan(theta/2).
func element(t float64) float64 {
	x := math.Abs(t) * 2048
	i := int(x)
	if i >= 2048 {
		return elementTable[2048]
	}
	return elementTable[i] + (x-float64(i))*(elementTable[i+1]-elementTable[i])
}

// array is a column of equal elements along antenna-up: the vector sums of their
// spherical waves, E and H apart, per watt. Source: [ARRAY-1].
//
// All elements lie on one line, so they see a point at one azimuth: with h the
// horizontal cut, |E|^2 and |H|^2 are h times functions of the distance rho from
// the line and the height z. Each wave has its own direction in the plane of line
// and point; one of E and H lies in that plane and is a vector sum V, the other
// lies across it and is a plain sum U. Vertical polarization has E in the plane,
// horizontal H; slant and circular put half the power into each.
type array struct {
	placement
	line       rod
	cut        antenna.HorizontalCutter
	floor      float64 // least h: the front to back ratio
	k          float64
	z, phase   []float64
	half       float64 // largest |z|
	amplitude  float64 // of one element at 1 m, sqrt(W/m2) per sqrt(W)
	spacing    float64
	tilt       float64 // sin of the electrical tilt
	most       float64 // peak gain the array can have as a ratio, for falloff
	inE, inH   float64 // shares of the power with E, or H, in the plane
	integral   float64 // power radiated per watt accepted, by integration
	combChange float64 // largest change of the array factor a rad of phase step
}

// column describes the elements of an array.
type column struct {
	length, spacing float64
	elements        int
	tilt            float64
	frontToBackDB   float64
	polarization    antenna.Polarization
}

// complete fills in what a row leaves blank: round(L/(0.8 lambda)) elements, at
// least 2, L/N apart.
func (c *column) complete(lambda float64) error {
	if c.length <= 0 && (c.elements < 2 || c.spacing <= 0) {
		return errors.New("an array needs a length, or elements and their spacing")
	}
	if c.elements == 0 {
		if c.spacing > 0 {
			c.elements = int(math.Round(c.length / c.spacing))
		} else {
			c.elements = int(math.Round(c.length / (0.8 * lambda)))
		}
		c.elements = max(2, c.elements)
	}
	if c.spacing <= 0 {
		c.spacing = c.length / float64(c.elements)
	}
	if c.elements > 1000 {
		return fmt.Errorf("%d elements are more than 1000; check length and frequency", c.elements)
	}
	if c.length <= 0 {
		c.length = c.spacing * float64(c.elements)
	}
	if c.frontToBackDB <= 0 {
		c.frontToBackDB = 30
	}
	return nil
}

func newArray(p placement, pattern antenna.Pattern, gain, lambda float64, c column) (*array, error) {
	if err := c.complete(lambda); err != nil {
		return nil, err
	}
	n := c.elements
	a := &array{
		placement: p, line: rod{p.pos, p.axes.Up}, cut: horizontalCut(pattern, c.tilt), floor: math.Pow(10, -c.frontToBackDB/10),
		k: 2 * math.Pi / lambda, spacing: c.spacing, tilt: math.Sin(c.tilt), half: c.spacing * float64(n-1) / 2,
	}
	a.halfLength = math.Max(a.halfLength, a.half)
	for i := 0; i < n; i++ {
		z := (float64(i) - float64(n-1)/2) * c.spacing
		a.z = append(a.z, z)
		a.phase = append(a.phase, a.k*z*a.tilt)
		a.combChange += math.Abs(float64(i)-float64(n-1)/2) / float64(n)
	}
	switch c.polarization {
	case antenna.Horizontal:
		a.inH = 1
	case antenna.Slant, antenna.Circular:
		a.inE, a.inH = 0.5, 0.5
	default:
		a.inE = 1
	}
	own := horizontalCut(still(pattern), c.tilt)
	toward := func(phi float64) float64 { return math.Max(own.HorizontalCut(phi), a.floor) }
	g := element(math.Tan(c.tilt / 2))
	front := toward(0)
	a.most = gain / (front * g * g)
	a.amplitude = math.Sqrt(a.most/(4*math.Pi)) / float64(n)
	across := quad.Fixed(func(theta float64) float64 {
		f := a.factor(math.Sin(theta)) * element(math.Tan(theta/2))
		return f * f * math.Cos(theta)
	}, -math.Pi/2, math.Pi/2, 100+20*n, quad.Legendre{}, 0)
	a.integral = aroundHorizon(toward) * across * a.amplitude * a.amplitude * float64(n) * float64(n)
	return a, nil
}

// boost raises the power of the array's waves by a factor.
func (e *array) boost(factor float64) {
	e.amplitude *= math.Sqrt(factor)
	e.most *= factor
}

// factor is the array factor toward sin(elevation), 1 where all waves add.
func (e *array) factor(sine float64) float64 { return e.comb(e.k * e.spacing * (sine + e.tilt)) }

// comb is |sin(N x/2)/(N sin(x/2))|.
func (e *array) comb(x float64) float64 {
	n := float64(len(e.z))
	s := math.Sin(x / 2)
	if math.Abs(s) < 1e-8 {
		return 1
	}
	return math.Min(1, math.Abs(math.Sin(n*x/2)/(n*s)))
}

// combRange encloses comb over an interval of x: by its value at the middle and
// its largest slope, and by its envelope 1/(N |sin(x/2)|).
func (e *array) combRange(x antenna.Interval) antenna.Interval {
	mid, gap := e.comb((x.Lo+x.Hi)/2), e.combChange*x.Width()/2+1e-7
	out := antenna.Interval{Lo: math.Max(0, mid-gap), Hi: math.Min(1, mid+gap)}
	if math.Floor(x.Lo/(2*math.Pi)) == math.Floor(x.Hi/(2*math.Pi)) {
		if s := math.Min(math.Abs(math.Sin(x.Lo/2)), math.Abs(math.Sin(x.Hi/2))); s > 1e-6 {
			out.Hi = math.Min(out.Hi, 1.000001/(float64(len(e.z))*s))
		}
	}
	return out
}

// polePitch is tan(89 deg): beyond it the azimuth about the line is not defined
// and the largest h holds.
var polePitch = math.Tan(89 * math.Pi / 180)

func (e *array) toward(rho, z, phi float64) float64 {
	if math.Abs(z) > polePitch*rho {
		return 1
	}
	return math.Max(e.cut.HorizontalCut(phi), e.floor)
}

func (e *array) towardRange(g *ring, phi antenna.Interval) antenna.Interval {
	lo, hi := g.heights(0)
	if lo > polePitch*g.rhi*(1+1e-12) {
		return antenna.Interval{Lo: 1, Hi: 1}
	}
	h := e.cut.HorizontalCutRange(phi)
	h = antenna.Interval{Lo: math.Max(h.Lo, e.floor), Hi: math.Max(h.Hi, e.floor)}
	if hi >= polePitch*g.rlo*(1-1e-12) {
		h.Hi = 1
	}
	return h
}

// mix shares the squares of the plane's vector sum and of the plain sum out
// between E and H.
func (e *array) mix(u2, v2 float64) density {
	return density{e.inE*v2 + e.inH*u2, e.inE*u2 + e.inH*v2}
}

// sums returns |U|^2 and |V|^2 at h = 1.
func (e *array) sums(rho, z float64) (u2, v2 float64) {
	r0 := math.Sqrt(rho*rho + z*z)
	var ure, uim, rre, rim, zre, zim float64
	for n, zn := range e.z {
		dz := z - zn
		r := math.Sqrt(rho*rho + dz*dz)
		if r == 0 {
			return math.Inf(1), math.Inf(1)
		}
		a := element(dz/(r+rho)) / r
		s, c := math.Sincos(e.phase[n] - e.k*(r-r0))
		re, im := a*c, a*s
		sine, cosine := dz/r, rho/r
		ure += re
		uim += im
		rre += re * sine
		rim += im * sine
		zre += re * cosine
		zim += im * cosine
	}
	a2 := e.amplitude * e.amplitude
	return a2 * (ure*ure + uim*uim), a2 * (rre*rre + rim*rim + zre*zre + zim*zim)
}

func (e *array) at(q Point) density {
	rho, z := e.line.polar(q)
	_, phi, _ := e.towards(q)
	u2, v2 := e.sums(rho, z)
	h := e.toward(rho, z, phi)
	return e.mix(h*u2, h*v2)
}

func (e *array) over(b box) densityRange {
	g := e.line.ring(b)
	return e.overRing(&g, e.look(b).phi)
}

// The largest sizes of an element's wave at 1 m without its phase, taken as a
// vector w = g(theta) theta-hat (which bounds the plain g too): with |g| <= 1, |g'|
// <= 0.889 and -2.15 <= g” <= 0.96, sqrt(|w|^2 + |w'|^2) <= 1.68 and, for the second
// derivatives of w/R, sqrt(4 |w|^2 + 8 |w'|^2 + (|w”| + |w|)^2) <= 6.4.
const (
	waveSlope = 1.68
	waveBend  = 6.4
	// tableError and tableSlope are the errors of the table and of its slope, per
	// rad.
	tableError = 3e-7
	tableSlope = 0.0045
)

// elementAndSlope returns the element's amplitude at tan(theta/2) and its change
// a rad.
func elementAndSlope(t float64) (g, slope float64) {
	x := math.Abs(t) * 2048
	i := min(int(x), 2047)
	step := elementTable[i+1] - elementTable[i]
	return elementTable[i] + (x-float64(i))*step, math.Copysign(step*1024*(1+t*t), -t)
}

// expansion is a complex sum at a ring's centre with its changes a metre of
// distance and of height.
type expansion struct{ re, im, rre, rim, zre, zim float64 }

// add adds (a, with changes ar, az, times exp(j phase)), whose phase changes by pr,
// pz a metre.
func (e *expansion) add(a, ar, az, c, s, pr, pz float64) {
	e.re += a * c
	e.im += a * s
	e.rre += ar*c - a*pr*s
	e.rim += ar*s + a*pr*c
	e.zre += az*c - a*pz*s
	e.zim += az*s + a*pz*c
}

// terms returns |G|^2, the most that the first order can change it by, and the
// square of the first order's size, over a ring.
func (e *expansion) terms(g *ring) (square, first, second float64) {
	square = e.re*e.re + e.im*e.im
	first = 2 * (math.Abs(e.re*e.rre+e.im*e.rim)*g.dr + math.Abs(e.re*e.zre+e.im*e.zim)*g.dz)
	size := math.Sqrt(e.rre*e.rre+e.rim*e.rim)*g.dr + math.Sqrt(e.zre*e.zre+e.zim*e.zim)*g.dz
	return square, first, size * size
}

// elementMost bounds every element's amplitude over a ring: none sees it nearer
// its horizon than an element at the line's near end would see the ring's far
// side.
func (e *array) elementMost(g *ring) float64 {
	z, _ := g.heights(0)
	if z -= e.half; z <= 0 {
		return 1
	}
	return math.Min(1, element(z/(math.Sqrt(z*z+g.rhi*g.rhi)+g.rhi))+2*tableError)
}

// overRing bounds both sums by their first-order expansion about the ring's
// centre and the most that the second order can be. The phase of the middle is
// taken out: wave n then changes by k (u_n - u_0) a metre in phase. The second
// order of a wave of amplitude a is at most a phase'^2 + 2 a' phase' + a phase” +
// a” times half the square of the ring's radius. Where the phases are open
// altogether the sum of amplitudes is taken.
func (e *array) overRing(g *ring, phi antenna.Interval) densityRange {
	near, _ := g.fromSegment(e.half)
	if near <= 0 {
		return unbounded
	}
	h := e.towardRange(g, phi)
	d, a := g.radius, e.amplitude
	all := a * float64(len(e.z)) / near * e.elementMost(g)
	coarse := densityRange{Hi: density{h.Hi * all * all, h.Hi * all * all}}
	r0 := math.Sqrt(g.rho*g.rho + g.z*g.z)
	if e.k*e.half*d > 2*r0 {
		return coarse
	}
	r0lo := math.Max(0, r0-d)
	var u, vr, vz expansion
	var bend, sum, slope float64
	u0r, u0z := g.rho/r0, g.z/r0
	for n, zn := range e.z {
		dz := g.z - zn
		r := math.Sqrt(g.rho*g.rho + dz*dz)
		inverse := 1 / r
		sine, cosine := dz*inverse, g.rho*inverse
		amp, turn := elementAndSlope(dz / (r + g.rho))
		s, c := math.Sincos(e.phase[n] - e.k*(r-r0))
		pr, pz := e.k*(u0r-cosine), e.k*(u0z-sine)
		// The gradient of f(theta)/R is (f' tau - f u)/R^2, u = (cosine, sine), tau =
		// (-sine, cosine).
		square := inverse * inverse
		u.add(amp*inverse, (-turn*sine-amp*cosine)*square, (turn*cosine-amp*sine)*square, c, s, pr, pz)
		f, df := amp*sine, turn*sine+amp*cosine
		vr.add(f*inverse, (-df*sine-f*cosine)*square, (df*cosine-f*sine)*square, c, s, pr, pz)
		f, df = amp*cosine, turn*cosine-amp*sine
		vz.add(f*inverse, (-df*sine-f*cosine)*square, (df*cosine-f*sine)*square, c, s, pr, pz)

		low := 1 / math.Max(r-d, near)
		amp = math.Min(1, amp+elementSlope*d*low+tableError)
		sum += amp * low
		slope += square
		apart := math.Abs(zn)
		sigma := 2.0
		if r0lo > 0 {
			sigma = spread(apart, 1/low, r0lo)
			bend += amp * low * e.k * (apart*low + sigma) / r0lo
		} else {
			bend = math.Inf(1)
		}
		phase := e.k * sigma
		bend += low * (amp*phase*phase + low*(2*waveSlope*phase+low*waveBend))
	}
	rest := bend*d*d/2 + slope*tableSlope*d + (tableError+phaseSlack*e.k*(r0+e.half))*sum
	bound := func(square, first, second float64) (lo, hi float64) {
		lo = math.Max(0, math.Sqrt(math.Max(0, square-first))-rest)
		hi = math.Min(math.Sqrt(square+first+second)+rest, sum)
		hi = math.Min(a*hi*(1+1e-12), all)
		lo *= a
		return lo * lo, hi * hi
	}
	ulo, uhi := bound(u.terms(g))
	s1, f1, q1 := vr.terms(g)
	s2, f2, q2 := vz.terms(g)
	vlo, vhi := bound(s1+s2, f1+f2, q1+q2)
	return densityRange{e.mix(h.Lo*ulo, h.Lo*vlo), e.mix(h.Hi*uhi, h.Hi*vhi)}
}

// far returns the density of the array's own far-field pattern at distance r in
// direction phi, theta.
func (e *array) far(r2, rho, z, phi float64) float64 {
	r := math.Sqrt(r2)
	f := float64(len(e.z)) * e.amplitude * e.factor(z/r) * element(z/(r+rho))
	return e.toward(rho, z, phi) * f * f / r2
}

// farOver encloses far.
func (e *array) farOver(g *ring, v *view) antenna.Interval {
	slo, shi := math.Sin(v.theta.Lo), math.Sin(v.theta.Hi)
	x := e.k * e.spacing
	f := e.combRange(antenna.Interval{Lo: x * (slo + e.tilt), Hi: x * (shi + e.tilt)})
	tlo, thi := math.Tan(v.theta.Lo/2), math.Tan(v.theta.Hi/2)
	el := antenna.Interval{Lo: element(math.Max(math.Abs(tlo), math.Abs(thi))), Hi: 1}
	if tlo > 0 || thi < 0 {
		el.Hi = element(math.Min(math.Abs(tlo), math.Abs(thi)))
	}
	h := e.towardRange(g, v.phi)
	a := float64(len(e.z)) * e.amplitude
	a *= a
	const slack = 1e-10
	out := antenna.Interval{Lo: a * h.Lo * f.Lo * f.Lo * el.Lo * el.Lo / v.r2hi * (1 - slack), Hi: math.Inf(1)}
	if v.r2lo > 0 {
		out.Hi = a * h.Hi * f.Hi * f.Hi * el.Hi * el.Hi / v.r2lo * (1 + slack)
	}
	return out
}

func (e *array) reaches(b box) reach { return e.placement.reaches(b) }

func (e *array) in(f frame) emitter {
	c := *e
	c.placement, c.line = e.placement.in(f), e.line.in(f)
	return &c
}

// falloff: no wave is nearer than r - half, and all add at most.
func (e *array) falloff() (g, offset float64) { return e.most, e.half }
