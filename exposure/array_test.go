package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/antenna"
)

const deg = math.Pi / 180

// sectorPanel is a two-beamwidth panel of 2 m at lambda = 0.3 m.
func sectorPanel(t require.TestingT, p placement, polarization antenna.Polarization, tilt float64) *array {
	pattern, err := antenna.TwoBeamwidth(65*deg, 8*deg, 30, tilt)
	require.NoError(t, err)
	a, err := newArray(p, pattern, 50, 0.3, column{length: 2, tilt: tilt, frontToBackDB: 30, polarization: polarization})
	require.NoError(t, err)
	return a
}

// Far out and toward the beam the array is P G/(4 pi r^2) by construction, E and
// H alike; elsewhere it is its own pattern: array factor of evenly fed elements
// times element (Balanis, Antenna Theory, 3rd edition, section 6.3, from memory).
func TestArrayFarOutIsItsPattern(t *testing.T) {
	for _, polarization := range []antenna.Polarization{antenna.Vertical, antenna.Horizontal, antenna.Slant} {
		for _, tilt := range []float64{0, 6 * deg} {
			p := upright(0.3)
			a := sectorPanel(t, p, polarization, tilt)
			require.Len(t, a.z, 8) // 2/(0.8*0.3) = 8.33
			const r = 1e5
			beam := a.at(Point{Y: r * math.Cos(tilt), Z: -r * math.Sin(tilt)})
			// Path differences of second order: (L/2)^2 k/(2 r) rad.
			assert.InEpsilon(t, 50/(4*math.Pi*r*r), beam.E, 1e-6)
			assert.InEpsilon(t, 50/(4*math.Pi*r*r), beam.H, 1e-6)
			for _, theta := range []float64{-40 * deg, -13 * deg, 9.5 * deg, 33 * deg} {
				x := 2 * math.Pi / 0.3 * 0.25 * (math.Sin(theta) + math.Sin(tilt))
				f := math.Sin(4*x) / (8 * math.Sin(x/2)) * elementAmplitude(theta) / elementAmplitude(tilt)
				got := a.at(Point{Y: r * math.Cos(theta), Z: r * math.Sin(theta)})
				want := 50 / (4 * math.Pi * r * r) * f * f
				assert.InDelta(t, want, got.E, 1e-5*50/(4*math.Pi*r*r), "theta %v", theta/deg)
				s, c := math.Sincos(theta)
				assert.InDelta(t, want, a.far(r*r, r*c, r*s, 0), 1e-6*50/(4*math.Pi*r*r))
			}
		}
	}
}

// The integral over the sphere of the array's own S is the power that the
// integration says, E and H by both polarizations (the sphere's sum of 1e-4).
func TestArrayPowerByTwoIntegrals(t *testing.T) {
	a := sectorPanel(t, upright(0.3), antenna.Slant, 4*deg)
	assert.InEpsilon(t, a.integral, radiated(a, Point{}, 1e5, 400), 1e-3)
	before := a.integral
	a.boost(1 / before)
	assert.InEpsilon(t, 1.0, radiated(a, Point{}, 1e5, 400), 1e-3)
}

// Two elements in the plane half way between them: E and H of vertical elements
// add as vectors, E aslant, H straight, so that at height 0 E = 2 a cos(theta)/R
// and H = 2 a/R.
func TestArrayKeepsEAndHApart(t *testing.T) {
	p := upright(1)
	iso, _ := antenna.Isotropic()
	v, err := newArray(p, iso, 1, 1, column{elements: 2, spacing: 2})
	require.NoError(t, err)
	h, err := newArray(p, iso, 1, 1, column{elements: 2, spacing: 2, polarization: antenna.Horizontal})
	require.NoError(t, err)
	d := v.at(Point{Y: 1})
	f := elementAmplitude(45*deg) / math.Sqrt2
	assert.InEpsilon(t, f*f/(4*math.Pi), d.H, 1e-6) // the table's 3e-7, squared
	assert.InEpsilon(t, f*f/(8*math.Pi), d.E, 1e-6)
	turned := h.at(Point{Y: 1})
	assert.Equal(t, density{d.H, d.E}, turned)
}

func TestElementTable(t *testing.T) {
	for theta := -math.Pi / 2; theta <= math.Pi/2; theta += 0.0007 {
		assert.InDelta(t, elementAmplitude(theta), element(math.Tan(theta/2)), 3e-7)
		slope := (elementAmplitude(theta+1e-6) - elementAmplitude(theta)) / 1e-6
		assert.Less(t, math.Abs(slope), elementSlope)
	}
	// 3 dB at half the beamwidth, by definition.
	assert.InDelta(t, -3.0, 20*math.Log10(elementAmplitude(32.5*deg)), 1e-12)
}

func drawArray(t *rapid.T) (*array, placement) {
	p := drawPlacement(t, 0.3)
	polarization := rapid.SampledFrom([]antenna.Polarization{antenna.Vertical, antenna.Horizontal, antenna.Slant}).Draw(t, "polarization")
	return sectorPanel(t, p, polarization, rapid.Float64Range(-10, 10).Draw(t, "electrical tilt")*deg), p
}

func TestArrayBoundsEncloseValues(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, p := drawArray(t)
		encloses(t, a, p)
	})
}

func TestArrayBoundsShrink(t *testing.T) {
	a := sectorPanel(t, upright(0.3), antenna.Slant, 4*deg)
	for _, q := range []Point{{Y: 0.5}, {Y: 3, X: 1, Z: -1}, {Y: 10, Z: -1}, {Y: 100, X: 20, Z: -12}} {
		shrinks(t, a, q, 2e-3)
	}
}

// The array factor's bounds hold at every width.
func TestArrayFactorBounds(t *testing.T) {
	a := sectorPanel(t, upright(0.3), antenna.Vertical, 0)
	rapid.Check(t, func(t *rapid.T) {
		lo := rapid.Float64Range(-20, 20).Draw(t, "x")
		x := antenna.Interval{Lo: lo, Hi: lo + math.Pow(10, rapid.Float64Range(-6, 1).Draw(t, "log width"))}
		r := a.combRange(x)
		v := a.comb(x.Lo + x.Width()*rapid.Float64Range(0, 1).Draw(t, "at"))
		assert.True(t, r.Lo <= v && v <= r.Hi, "%v in %v", v, r)
	})
}
