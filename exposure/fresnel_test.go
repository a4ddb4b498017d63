package exposure

import (
	"context"
	"math"
	"math/cmplx"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/antenna"
	"example.org/standclear/limits"
)

// Magnitudes and phases of both coefficients for the ground classes of ITU-R P.527
// (sea water 70 and 5 S/m, wet ground 30 and 0.01, medium dry 15 and 0.001; from
// memory), by another program from the textbook's formulas: half a last digit.
func TestFresnelCoefficients(t *testing.T) {
	medium, wet, sea := [2]float64{15, 0.001}, [2]float64{30, 0.01}, [2]float64{70, 5}
	for _, row := range []struct {
		ground                 [2]float64
		mhz, psi               float64
		rh, hPhase, rv, vPhase float64
	}{
		{medium, 100, 5, 0.95449, 179.98, 0.48224, -179.75},
		{medium, 100, 30, 0.76609, 179.90, 0.33041, -0.44},
		{medium, 100, 90, 0.58959, 179.81, 0.58959, -0.19},
		{medium, 1, 15, 0.90717, 177.27, 0.24460, -59.64},
		{wet, 100, 15, 0.90851, 179.83, 0.18137, -4.43},
		{wet, 1, 5, 0.99021, 179.52, 0.37383, -75.74},
		{sea, 100, 5, 0.99575, 179.77, 0.58523, -31.27},
		{sea, 900, 5, 0.98609, 179.58, 0.24345, -94.48},
		{sea, 900, 30, 0.92277, 177.59, 0.72493, -9.74},
	} {
		h, v := FresnelReflection(row.psi*deg, row.ground[0], row.ground[1], row.mhz*1e6)
		assert.InDelta(t, row.rh, cmplx.Abs(h), 6e-6)
		assert.InDelta(t, row.rv, cmplx.Abs(v), 6e-6)
		assert.InDelta(t, row.hPhase, cmplx.Phase(h)/deg, 0.006)
		assert.InDelta(t, row.vPhase, cmplx.Phase(v)/deg, 0.006)
	}
}

// mirrorGround is nearly a perfect conductor.
var mirrorGround = Ground{Method: GroundFresnel, Permittivity: 1, Conductivity: 1e9}

func isotropicOver(g Ground, lambda, height float64, polarization antenna.Polarization) *twoRay {
	p := upright(lambda)
	p.pos.Z = height
	iso, _ := antenna.Isotropic()
	f := C / lambda
	return newTwoRay(newFarField(p, iso, 1), newGroundPlane(g, f), 2*math.Pi/lambda, polarization)
}

// Over a perfect conductor the vertical antenna's field is that of source and
// image in phase, the horizontal's in opposition (image theory); far out and low
// the first is four times the density, as the full-reflection formula of OET 65
// has it, the second nothing.
func TestTwoRayOverPerfectGround(t *testing.T) {
	const lambda, height = 0.3, 5.0
	for _, q := range []Point{{Y: 40, Z: 1}, {Y: 33, Z: 2.7}, {X: 20, Y: 10, Z: 6}} {
		d := q.Sub(Point{Z: height})
		i := q.Sub(Point{Z: -height})
		rd, ri := d.Norm(), i.Norm()
		wave := cmplx.Rect(1/ri, -2*math.Pi/lambda*(ri-rd))
		// Horizontal, across the plane of incidence: E straight, opposed.
		e := isotropicOver(mirrorGround, lambda, height, antenna.Horizontal).at(q)
		assert.InEpsilon(t, norm2(complex(1/rd, 0)-wave)/(4*math.Pi), e.E, 2e-3) // |R| is 1 to 1e-4
		// Vertical: H straight, in phase.
		e = isotropicOver(mirrorGround, lambda, height, antenna.Vertical).at(q)
		assert.InEpsilon(t, norm2(complex(1/rd, 0)+wave)/(4*math.Pi), e.H, 2e-3)
	}
	far := Point{Y: 5000, Z: 0.5}
	one := 1 / (4 * math.Pi * 25e6)
	// Path difference 2 h z/r = 1 mm: cos of 0.01 rad, and |R| at grazing.
	assert.InEpsilon(t, 4*one, isotropicOver(mirrorGround, lambda, height, antenna.Vertical).at(far).H, 0.05)
	assert.Less(t, isotropicOver(mirrorGround, lambda, height, antenna.Horizontal).at(far).E, 0.01*one)
}

// Without contrast nothing is reflected: permittivity 1, no conductivity.
func TestTwoRayWithoutGround(t *testing.T) {
	e := isotropicOver(Ground{Permittivity: 1}, 0.3, 5, antenna.Slant)
	for _, q := range []Point{{Y: 10, Z: 1}, {X: 3, Y: -2, Z: 7}} {
		assert.InEpsilon(t, e.farField.at(q).E, e.at(q).E, 1e-9)
		assert.InEpsilon(t, e.farField.at(q).E, e.at(q).H, 1e-9)
	}
}

// The triangle inequality: never more than both amplitudes together.
func TestTwoRayWithinAmplitudes(t *testing.T) {
	u := rapid.Float64Range(-1, 1)
	rapid.Check(t, func(t *rapid.T) {
		g := Ground{Permittivity: rapid.Float64Range(1, 80).Draw(t, "eps"), Conductivity: rapid.Float64Range(0, 5).Draw(t, "sigma")}
		e := isotropicOver(g, 0.3, 4, antenna.Slant)
		q := Point{X: 30 * u.Draw(t, "x"), Y: 30 * u.Draw(t, "y"), Z: 1 + 4*math.Abs(u.Draw(t, "z"))}
		most := addAmplitudes(e.farField.at(q).E, e.image.at(q).E) * (1 + 1e-9)
		if math.IsInf(most, 1) {
			return
		}
		d := e.at(q)
		assert.LessOrEqual(t, d.E, most)
		assert.LessOrEqual(t, d.H, most)
	})
}

func drawGround(t *rapid.T, p placement) Ground {
	return Ground{
		Method: GroundFresnel, Permittivity: rapid.Float64Range(1, 80).Draw(t, "permittivity"),
		Conductivity: math.Pow(10, rapid.Float64Range(-4, 1).Draw(t, "log conductivity")), Z: p.pos.Z - rapid.Float64Range(2.1, 15).Draw(t, "height"),
	}
}

func TestTwoRayBoundsEncloseValues(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		lambda := rapid.Float64Range(0.05, 1).Draw(t, "lambda")
		p := drawPlacement(t, lambda)
		pattern, err := antenna.TwoBeamwidth(65*deg, 10*deg, 30, 0)
		require.NoError(t, err)
		polarization := rapid.SampledFrom([]antenna.Polarization{antenna.Vertical, antenna.Horizontal, antenna.Slant}).Draw(t, "polarization")
		e := newTwoRay(newFarField(p, pattern, 40), newGroundPlane(drawGround(t, p), C/lambda), 2*math.Pi/lambda, polarization)
		encloses(t, e, p)
	})
}

func TestTwoRayBoundsShrink(t *testing.T) {
	for _, polarization := range []antenna.Polarization{antenna.Vertical, antenna.Horizontal, antenna.Slant} {
		e := isotropicOver(Ground{Permittivity: 15, Conductivity: 0.001}, 0.3, 5, polarization)
		for _, q := range []Point{{Y: 10, Z: 1}, {X: 30, Y: 4, Z: 2}, {X: 3, Y: -2, Z: 7}} {
			shrinks(t, e, q, 5e-3)
		}
	}
}

// Arrays and panels over ground, dishes and wires with their images.
func TestGroundBoundsEncloseValues(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := panelRow(t, 4*deg)
		s.Position = drawPlacement(t, 0.3).pos
		s.Polarization = rapid.SampledFrom([]antenna.Polarization{antenna.Vertical, antenna.Horizontal, antenna.Slant}).Draw(t, "polarization")
		s.Method = rapid.SampledFrom([]Method{MethodAuto, MethodArray, MethodCylindrical, MethodWire, MethodAperture}).Draw(t, "method")
		switch s.Method {
		case MethodWire:
			s.PatternKind, s.LengthM, s.Polarization = PatternDipole, 0, antenna.Vertical
		case MethodAperture:
			s.DiameterM = 1.5
		case MethodAuto:
			if rapid.Bool().Draw(t, "file") {
				s.PatternKind = PatternFile
			}
		}
		p := s.place()
		c := made(t, s, drawGround(t, p))
		encloses(t, c.em, p)
	})
}

// An array over ground of no contrast is the array; over a perfect ground its
// two rays are those of the far field, far out.
func TestGroundArrayAgainstItsParts(t *testing.T) {
	s := panelRow(t, 4*deg)
	s.Method = MethodArray
	for _, polarization := range []antenna.Polarization{antenna.Vertical, antenna.Horizontal, antenna.Slant} {
		s.Polarization = polarization
		none := made(t, s, Ground{Method: GroundFresnel, Permittivity: 1})
		bare := made(t, s, Ground{})
		for _, q := range []Point{{Y: 3, Z: 19}, {X: 10, Y: 30, Z: 2}, {Y: 200, Z: 5}} {
			assert.InEpsilon(t, bare.em.at(q).E, none.em.at(q).E, 1e-6)
			assert.InEpsilon(t, bare.em.at(q).H, none.em.at(q).H, 1e-6)
		}
	}
	// One pair of elements close together is one antenna with two rays.
	s.Polarization = antenna.Vertical
	s.Elements, s.SpacingM, s.LengthM, s.ElectricalTiltRad = 2, 1e-4, 0.5, 0
	iso, _ := antenna.Isotropic()
	s.Pattern = iso
	g := Ground{Method: GroundFresnel, Permittivity: 15, Conductivity: 0.001}
	a := made(t, s, g).em
	k := Wavenumber(s.FrequencyHz)
	two := newTwoRay(newFarField(s.place(), elementOnly{}, float64(s.Gain)), newGroundPlane(g, s.FrequencyHz), k, antenna.Vertical)
	for _, q := range []Point{{Y: 30, Z: 2}, {X: -8, Y: 25, Z: 12}} {
		assert.InEpsilon(t, two.at(q).E, a.at(q).E, 1e-3) // the spacing of k d = 0.002
		assert.InEpsilon(t, two.at(q).H, a.at(q).H, 1e-3)
	}
}

// elementOnly is the element of an array as a pattern.
type elementOnly struct{}

func (elementOnly) Relative(_, theta float64) float64 {
	a := elementAmplitude(theta)
	return a * a
}
func (e elementOnly) RelativeRange(_, _ antenna.Interval) antenna.Interval {
	return antenna.Interval{Hi: 1}
}

// Both ends must be a wavelength above ground: antennas too low are refused when
// the site is read, points by Field, surfaces are not assessed; each names factor.
func TestTwoRayNeedsHeight(t *testing.T) {
	s := radiator("low", Point{Z: 2}) // lambda = 3 m
	g := Ground{Method: GroundFresnel, Permittivity: 15, Conductivity: 0.001}
	_, err := compile(&s, g)
	assert.ErrorContains(t, err, "ground factor")
	s.Position.Z = 30
	site := &Site{Sources: []Source{s}, Ground: g, Surfaces: []Surface{{
		ID: "yard", Outline: []Ring{{{100, 100}, {110, 100}, {110, 110}, {100, 110}, {100, 100}}}, To: 2, Class: "anyone",
	}}}
	table, faults, _ := limits.New([]limits.Row{level(limits.S, 2)}, limits.About{}, nil)
	require.Empty(t, faults)
	site.Limits = table
	m, err := New(site, Options{Workers: 1})
	require.NoError(t, err)
	_, err = m.Field(context.Background(), []Place{{ID: "foot", Class: "anyone"}})
	assert.ErrorContains(t, err, "ground factor")
	_, err = m.Field(context.Background(), []Place{{ID: "roof", Class: "anyone", At: Point{X: 10, Z: 10}}})
	assert.NoError(t, err)
	z, err := m.Zones(context.Background(), ZoneQuery{ResolutionM: 0.5})
	require.NoError(t, err)
	assert.Equal(t, NotAssessed, z[0].Verdict)
	assert.Contains(t, z[0].Reason, "ground factor")
	// A monopole has its ground already.
	s.PatternKind, s.LengthM, s.Method = PatternMonopole, 0.75, MethodAuto
	c := made(t, s, g)
	assert.IsType(t, &wire{}, c.em)
	// Ground without sense is refused.
	s = radiator("a", Point{Z: 30})
	_, err = compile(&s, Ground{Method: GroundFresnel, Permittivity: 0.5})
	assert.ErrorContains(t, err, "permittivity")
	_, err = compile(&s, Ground{Method: GroundFresnel, Permittivity: 5, Z: 40})
	assert.ErrorContains(t, err, "below the ground")
}
