package exposure

import (
	"fmt"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/integrate/quad"
)

// WirePatternIntegral returns the integral over the elevation angle w from the
// wire, 0 to pi, of F^2 sin w, F = (cos(kl cos w) - cos kl)/sin w, for a thin
// centre-fed wire of half length l: kl is in rad, above 0. One watt is radiated
// by a loop current of sqrt(2 pi/(Z0 Q)) A RMS, Q being the result; the
// radiation resistance at that current is Z0 Q/(2 pi). By Gauss-Legendre rules,
// good to 1e-12. Source: [WIRE-1].
func WirePatternIntegral(halfLengthRad float64) float64 {
	return quad.Fixed(func(w float64) float64 {
		f := wireShape(halfLengthRad, w)
		return 2 * f * f * math.Sin(w)
	}, 0, math.Pi/2, 40+int(6*halfLengthRad), quad.Legendre{}, 0)
}

// wireShape is F, as a product so that nothing cancels for short wires.
func wireShape(kl, w float64) float64 {
	s, c := math.Sincos(w)
	if s == 0 {
		return 0
	}
	return 2 * math.Sin(kl/2*(1+c)) * math.Sin(kl/2*(s*s/(1+c))) / s
}

// The wires that the closed form is used for: below the first, cancellation eats
// its digits.
const (
	shortestWire = 1e-3 // wavelengths
	longestWire  = 100
)

// wire is a thin centre-fed dipole with sinusoidal current. With R1, R2 and r the
// distances of a point from its two tips and its middle, e_i = exp(-jk R_i), c =
// cos kl, in units of Z0 I/(4 pi) for E and I/(4 pi) for H:
//
//	E_z = e1/R1 + e2/R2 - 2c e0/r
//	rho E_rho = (z-l) e1/R1 + (z+l) e2/R2 - 2c z e0/r
//	rho H_phi = e1 + e2 - 2c e0
//
// Exact for the sinusoidal current; real wires of some thickness differ near
// their feed and tips. Source: [WIRE-1].
type wire struct {
	placement
	rod
	k, half float64
	c2      float64 // 2 cos(k half)
	scale   float64 // of squared sums: Z0 I^2/(4 pi)^2 per watt
	moment  float64 // integral of |current|/I along the wire, m
	ground  bool    // a monopole: its lower half is the image, there is no field below
}

func newWire(p placement, line rod, k, length float64) (*wire, error) {
	if x := length * k / (2 * math.Pi); !(x >= shortestWire && x <= longestWire) {
		return nil, fmt.Errorf("a wire of %.4g wavelengths is not between %g and %d wavelengths; a shorter one is the pattern %q", x, shortestWire, longestWire, PatternShort)
	}
	p.reactive = 0
	kl := k * length / 2
	turns := math.Floor(kl / math.Pi)
	return &wire{
		placement: p, rod: line, k: k, half: length / 2, c2: 2 * math.Cos(kl),
		scale:  1 / (8 * math.Pi * WirePatternIntegral(kl)),
		moment: 2 / k * (2*turns + 1 - math.Cos(kl-turns*math.Pi)),
	}, nil
}

// newMonopole is a wire on perfect ground: the fields of a dipole of twice its
// height that carries twice its power, above the ground only.
func newMonopole(p placement, k, height float64) (*wire, error) {
	w, err := newWire(p, rod{p.pos, p.axes.Up}, k, 2*height)
	if err != nil {
		return nil, err
	}
	w.ground = true
	w.scale *= 2
	return w, nil
}

// groundSkinM is how far below a monopole's ground a point still counts as on it,
// m: rounding must not hide the field there.
const groundSkinM = 1e-6

// axisSkin is the distance from the line, in wavelengths, below which the parts
// that vanish on it are taken as 0.
const axisSkin = 1e-6

// sums returns E_z, rho E_rho and rho H_phi, the common phase of the middle taken
// out.
func (e *wire) sums(rho, z float64) (ez, er, h complex128) {
	up, down := z-e.half, z+e.half
	r0, r1, r2 := math.Hypot(rho, z), math.Hypot(rho, up), math.Hypot(rho, down)
	e1, e2 := cmplx.Rect(1, -e.k*(r1-r0)), cmplx.Rect(1, -e.k*(r2-r0))
	f1, f2, f0 := e1*complex(1/r1, 0), e2*complex(1/r2, 0), complex(e.c2/r0, 0)
	return f1 + f2 - f0, complex(up, 0)*f1 + complex(down, 0)*f2 - complex(z, 0)*f0, e1 + e2 - complex(e.c2, 0)
}

func (e *wire) at(q Point) density {
	rho, z := e.polar(q)
	if e.ground && z < -groundSkinM {
		return density{}
	}
	skin := e.skin()
	if rho < skin {
		if math.Abs(z) <= e.half+skin {
			return density{math.Inf(1), math.Inf(1)}
		}
		ez, _, _ := e.sums(rho, z)
		return density{E: e.scale * norm2(ez)}
	}
	ez, er, h := e.sums(rho, z)
	return density{e.scale * (norm2(ez) + norm2(er)/(rho*rho)), e.scale * norm2(h) / (rho * rho)}
}

func (e *wire) skin() float64 { return axisSkin * 2 * math.Pi / e.k }

func norm2(c complex128) float64 { return real(c)*real(c) + imag(c)*imag(c) }

// over bounds each sum by its value at the centre and the most it can change over
// the box. Term i of a sum changes by its phase against the middle's, k |u_i -
// u_0| a metre, and by its amplitude. Beside the line, where division by rho
// spoils that, the integral over the current takes over: a piece dz' of the wire
// adds at most |I| (rho/R) (k/R + 3/R^2 + 3/(k R^3)) to E_rho, |I| (rho/R^2) (k +
// 1/R) to H_phi.
func (e *wire) over(b box) densityRange {
	g := e.ring(b)
	if e.ground {
		if g.zhi < -groundSkinM {
			return densityRange{}
		}
		g.zlo = math.Max(g.zlo, -groundSkinM)
	}
	rw, _ := g.fromSegment(e.half)
	skin := e.skin()
	if rw <= 2*skin {
		return unbounded
	}
	r0, r1, r2 := g.fromPoint(0), g.fromPoint(e.half), g.fromPoint(-e.half)
	k, d, m := e.k, g.radius, math.Abs(e.c2)
	rhi := math.Hypot(g.rhi, math.Max(math.Abs(g.zlo), math.Abs(g.zhi))+e.half)

	// By the current: E_z too is at most that of all pieces together.
	kr := k * rw
	whole := e.moment * k / rw * (1 + 3/kr + 3/(kr*kr))
	noise := phaseSlack * k * rhi * (2 + m) / math.Max(g.rlo, skin)
	byE := whole*math.Min(1, g.rhi/rw) + noise
	byH := e.moment*g.rhi/(rw*rw)*(k+1/rw) + noise

	s1, s2 := k*spread(e.half, r1, r0), k*spread(e.half, r2, r0)
	slack := phaseSlack * k * rhi
	gapH := d*(s1+s2) + slack*(2+m)
	gapE := d*(s1+1/r1+s2+1/r2) + slack*(2+m)
	gapZ := d*(s1/r1+1/(r1*r1)+s2/r2+1/(r2*r2)) + slack*(1/r1+1/r2)
	gapE += d * m / r0
	gapZ += d*m/(r0*r0) + slack*m/r0
	ez, er, h := e.sums(g.rho, g.z)
	zlo, zhi := squares(cmplx.Abs(ez), gapZ, whole)
	elo, ehi := squares(cmplx.Abs(er), gapE, 2+m)
	hlo, hhi := squares(cmplx.Abs(h), gapH, 2+m)
	far := g.rhi * g.rhi
	out := densityRange{Lo: density{zlo, 0}}
	if g.rlo > skin {
		out.Lo = density{zlo + elo/far, hlo / far}
	}
	if e.ground && g.zlo < 0 {
		out.Lo = density{}
	}
	byE, byH = byE*byE, byH*byH
	if g.rlo > 0 {
		byE, byH = math.Min(byE, ehi/(g.rlo*g.rlo)), math.Min(byH, hhi/(g.rlo*g.rlo))
	}
	out.Hi = density{zhi + byE, byH}
	return densityRange{density{e.scale * out.Lo.E, e.scale * out.Lo.H}, density{e.scale * out.Hi.E, e.scale * out.Hi.H}}
}

func (e *wire) reaches(box) reach { return reached }

func (e *wire) in(f frame) emitter {
	c := *e
	c.placement, c.rod = e.placement.in(f), e.rod.in(f)
	return &c
}

// falloff: the field of all pieces is at most moment k (1 + 3t + 3t^2)/R with R =
// r - half and t = 1/(k R); at offset half + 1/k that is at most 1.63 moment
// k/(r - offset), since (1 + 3t + 3t^2)(1 - t) <= 1.63 for t <= 1.
func (e *wire) falloff() (g, offset float64) {
	a := 1.63 * e.moment * e.k
	return 4 * math.Pi * e.scale * a * a, e.half + 1/e.k
}
