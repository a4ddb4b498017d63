package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/antenna"
)

func testDish(t require.TestingT, p placement, d, gain, efficiency, lambda, sweep float64) *aperture {
	pattern, err := antenna.Dish(antenna.Gain(gain), d, lambda)
	require.NoError(t, err)
	if sweep > 0 {
		pattern = swept{pattern, sweep / 2}
	}
	return newAperture(p, pattern, gain, d, efficiency, lambda, sweep)
}

// FCC exhibit SES-LIC-INTR2009-07567: D = 4.6 m, lambda printed as 0.0211 m, P =
// 573.97 W, G = 2.773E+05, eta = 0.698. Printed: 9.645 mW/cm2 in the near field, to
// 250.711 m; 3.499 mW/cm2 at 601.706 m; off the axis a hundredth. Tolerances are
// those of the printed inputs (four digits of G, three of eta).
func TestApertureMethodAgainstExhibit(t *testing.T) {
	const d, lambda, power = 4.6, 0.0211, 573.97
	p := upright(lambda)
	e := testDish(t, p, d, 2.773e5, 0.698, lambda, 0)
	front := func(r, off float64) float64 {
		q := p.axes.Boresight.Scale(r).Add(p.axes.Right.Scale(off))
		return power * e.at(q).E / 10 // mW/cm2
	}
	for _, r := range []float64{1, 100, 250.7} {
		assert.InDelta(t, 9.645, front(r, 0), 0.007, "%v m", r)
		assert.InDelta(t, 9.645, front(r, 4.5), 0.007, "%v m, within a diameter", r)
	}
	assert.InDelta(t, 3.499, front(601.7063, 0), 0.002)
	assert.InDelta(t, 9.645*250.711/400, front(400, 0), 0.005)
	// Off the axis by more than a diameter a hundredth, or the pattern where that
	// is more.
	off := front(30, 40)
	pattern := 2.773e5 * e.pattern.Relative(math.Atan2(40, 30), 0) / (4 * math.Pi * 2500) * power / 10
	assert.InDelta(t, math.Max(0.096, pattern), off, 0.0005)
	assert.InDelta(t, 0.096, off, 0.0005)
	// The near field is below 4 P/A, twice the printed 2 P/A of 6.907.
	assert.Less(t, front(0.01, 0), 2*6.907)
	assert.Equal(t, "aperture (near field)", e.methodAt(p.axes.Boresight.Scale(100)))
	assert.Equal(t, "aperture (off the axis)", e.methodAt(p.axes.Boresight.Scale(-100)))
}

// FCC exhibit 0640-EX-ST-2004: D = 2.4 m, 14.2 GHz, 49.2 dBi, 2.17 W: 1.92 W/m2 at
// the surface, 1.25 in the near field, half a printed digit. With an efficiency of
// 1 the near field is the surface's.
func TestApertureSurfaceIsTheMost(t *testing.T) {
	lambda := Wavelength(14.2e9)
	p := upright(lambda)
	gain := float64(antenna.GainFromDBi(49.2))
	e := testDish(t, p, 2.4, gain, 0.653, lambda, 0)
	assert.InDelta(t, 1.25, 2.17*e.at(p.axes.Boresight.Scale(3)).E, 0.005)
	assert.InDelta(t, 1.92, 2.17*e.surface, 0.005)
	rapid.Check(t, func(t *rapid.T) {
		u := rapid.Float64Range(-5, 5)
		q := Point{X: u.Draw(t, "x"), Y: u.Draw(t, "y"), Z: u.Draw(t, "z")}
		assert.LessOrEqual(t, e.at(q).E, e.surface)
	})
}

// On the axis of an evenly lit circular aperture the scalar field is known:
// S/S0 = 1 + (z/R)^2 - 2 (z/R) cos(k(R - z)), R = sqrt(z^2 + a^2), S0 = P/A
// (Rayleigh-Sommerfeld; textbook, from memory). The method with efficiency 1
// stands above every value up to D^2/(4 lambda), at most 14 % below between there
// and twice that, and above again beyond.
func TestApertureMethodAgainstClosedForm(t *testing.T) {
	const d, lambda = 1.0, 0.01
	p := upright(lambda)
	e := testDish(t, p, d, ApertureGain(1, d, lambda), 1, lambda, 0)
	s0 := 4 / (math.Pi * d * d)
	near := DishNearFieldDistance(d, lambda)
	exact := func(z float64) float64 {
		r := math.Hypot(z, d/2)
		return s0 * (1 + z*z/(r*r) - 2*z/r*math.Cos(2*math.Pi/lambda*(r-z)))
	}
	// Figures printed for z in units of D^2/(4 lambda), Fresnel form: seven
	// digits; the exact form differs by (a/z)^2 = 4e-4 of it.
	for z, want := range map[float64]float64{1: 4, 2: 2, 2.4: 1.482362, 4: 0.585786, 8: 0.152241} {
		assert.InEpsilon(t, want, exact(z*near)/s0, 2e-3, "%v", z)
	}
	under, over := 0.0, 0.0
	for z := 0.02 * near; z < 20*near; z *= 1.001 {
		ours := e.at(p.axes.Boresight.Scale(z)).E
		ratio := exact(z) / ours
		switch {
		case z <= near || z >= 2.01*near:
			assert.LessOrEqual(t, ratio, 1.0+1e-3, "z = %v near", z/near) // (a/z)^2 again
		default:
			under = math.Max(under, ratio)
		}
		if z > 2*near {
			over = math.Max(over, 1/ratio)
		}
	}
	assert.InDelta(t, 1.138, under, 0.002) // 13.8 % below at 1.35 D^2/(4 lambda)
	assert.InDelta(t, 1.713473/1.482362, over, 0.003)
}

func TestApertureBoundsEncloseValues(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		lambda := rapid.Float64Range(0.01, 0.1).Draw(t, "lambda")
		d := lambda * rapid.Float64Range(5, 60).Draw(t, "D/lambda")
		eta := rapid.Float64Range(0.4, 1).Draw(t, "eta")
		sweep := 0.0
		if rapid.Bool().Draw(t, "rotating") {
			sweep = rapid.Float64Range(0.1, 2*math.Pi).Draw(t, "sweep")
		}
		p := drawPlacement(t, lambda)
		p.halfLength, p.halfWidth = d/2, d/2
		e := testDish(t, p, d, ApertureGain(eta, d, lambda), eta*rapid.Float64Range(0.8, 1).Draw(t, "stated"), lambda, sweep)
		encloses(t, e, p)
	})
}

func TestApertureBoundsShrink(t *testing.T) {
	p := upright(0.03)
	e := testDish(t, p, 1.2, ApertureGain(0.6, 1.2, 0.03), 0.6, 0.03, 0)
	for _, q := range []Point{{Y: 5}, {Y: 20}, {Y: 100, X: 1}, {Y: 10, X: 5}, {Y: -3, Z: 1}} {
		shrinks(t, e, q, 1e-3)
	}
}

// A rotating dish is in front wherever its sweep brings it.
func TestApertureSweepReachesAround(t *testing.T) {
	p := upright(0.03)
	still := testDish(t, p, 1.2, ApertureGain(0.6, 1.2, 0.03), 0.6, 0.03, 0)
	turning := testDish(t, p, 1.2, ApertureGain(0.6, 1.2, 0.03), 0.6, 0.03, 2*math.Pi)
	want := still.at(p.axes.Boresight.Scale(7)).E
	for _, a := range []float64{0, 1, 2, 3, -2} {
		s, c := math.Sincos(a)
		assert.InEpsilon(t, want, turning.at(Point{X: 7 * s, Y: 7 * c}).E, 1e-12)
	}
	assert.Less(t, still.at(Point{X: 7}).E, want/10)
}
