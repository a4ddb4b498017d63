package antenna

import (
	"fmt"
	"math"
)

// monopole is a wire on perfect ground with sinusoidal current.
type monopole struct {
	kh      float64 // height times wave number
	inverse float64 // 1 / largest |F|^2
	turns   []turn  // extremes of |F|^2 between 0 and 90 deg, by elevation
}

// turn is an extreme of a curve.
type turn struct{ at, value float64 }

// groundSkin is how far below its ground plane, in rad, a direction still counts
// as along it: rounding of a point on the ground must not hide it.
const groundSkin = 1e-9

// Monopole returns the far-field pattern of a vertical wire of heightM on
// perfect ground, F = (cos(kh sin theta) - cos kh)/cos theta squared, and its
// gain by integration of it over the upper half of space (a quarter wave: twice
// that of the half-wave dipole). Below the ground plane it is 0. heightM and
// wavelengthM are in m, the height at most 10 wavelengths. Exact for a thin wire
// with sinusoidal current. Source: [ANT-MONOPOLE].
func Monopole(heightM, wavelengthM float64) (Pattern, Gain, error) {
	x := heightM / wavelengthM
	if !(x >= 1e-3 && x <= 10) {
		return nil, 0, fmt.Errorf("a monopole of %.4g wavelengths is not between 0.001 and 10 wavelengths", x)
	}
	p := &monopole{kh: 2 * math.Pi * x, inverse: 1}
	p.inverse = 1 / p.extremes()
	for i := range p.turns {
		p.turns[i].value *= p.inverse
	}
	sum := integrate(0, math.Pi/2, 40+int(40*x), func(t float64) float64 { return p.square(t) * math.Cos(t) })
	return p, Gain(2 / sum), nil
}

// square returns |F|^2 relative to the largest, at 0 <= theta <= pi/2.
func (p *monopole) square(theta float64) float64 {
	s, c := math.Sincos(theta)
	if c <= 0 {
		return 0
	}
	// cos a - cos b as a product, and 1 - s = c^2/(1+s): no cancellation.
	f := 2 * math.Sin(p.kh/2*(1+s)) * math.Sin(p.kh/2*(c*c/(1+s))) / c
	return f * f * p.inverse
}

// extremes fills in the turns and returns the largest value.
func (p *monopole) extremes() float64 {
	n := 400 + int(400*p.kh)
	at := func(i int) float64 { return math.Pi / 2 * float64(i) / float64(n) }
	most := p.square(0)
	a, b := p.square(at(0)), p.square(at(1))
	for i := 2; i <= n; i++ {
		c := p.square(at(i))
		if b > a && b >= c || b < a && b <= c {
			t := extreme(at(i-2), at(i), b > a, p.square)
			p.turns = append(p.turns, turn{t, p.square(t)})
			most = max(most, p.square(t))
		}
		a, b = b, c
	}
	return most
}

// extreme finds the one extreme of f between lo and hi by golden sections.
func extreme(lo, hi float64, largest bool, f func(float64) float64) float64 {
	const g = 0.6180339887498949
	sign := 1.0
	if largest {
		sign = -1
	}
	a, b := hi-g*(hi-lo), lo+g*(hi-lo)
	fa, fb := sign*f(a), sign*f(b)
	for i := 0; i < 60; i++ {
		if fa < fb {
			hi, b, fb = b, a, fa
			a = hi - g*(hi-lo)
			fa = sign * f(a)
		} else {
			lo, a, fa = a, b, fb
			b = lo + g*(hi-lo)
			fb = sign * f(b)
		}
	}
	return (lo + hi) / 2
}

func (p *monopole) Relative(_, theta float64) float64 {
	if theta < -groundSkin {
		return 0
	}
	return min(1, p.square(max(0, theta)))
}

func (p *monopole) RelativeRange(_, theta Interval) Interval {
	if theta.Hi < -groundSkin {
		return Interval{}
	}
	lo, hi := max(0, theta.Lo), max(0, theta.Hi)
	a, b := p.square(lo), p.square(hi)
	if a > b {
		a, b = b, a
	}
	for _, t := range p.turns {
		// A turn is known to a few hundred-millionths of a rad.
		if t.at > hi+1e-7 {
			break
		}
		if t.at >= lo-1e-7 {
			a, b = min(a, t.value), max(b, t.value)
		}
	}
	out := widened(a, b)
	if theta.Lo < -groundSkin {
		out.Lo = 0
	}
	return out
}

func (p *monopole) IsRound() bool                          { return true }
func (p *monopole) HorizontalCut(float64) float64          { return 1 }
func (p *monopole) HorizontalCutRange(_ Interval) Interval { return Interval{1, 1} }

func (p *monopole) Caveats() []string {
	return []string{"perfect ground: nothing radiates below the monopole's base"}
}
