package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/antenna"
)

// made compiles one source.
func made(t require.TestingT, s Source, g Ground) compiled {
	c, err := compile(&s, g)
	require.NoError(t, err)
	return c
}

// panelRow is a sector panel of 2 m at 1 GHz, 17 dBi.
func panelRow(t require.TestingT, tilt float64) Source {
	s := radiator("panel", Point{Z: 20})
	pattern, err := antenna.TwoBeamwidth(65*deg, 7*deg, 30, tilt)
	require.NoError(t, err)
	s.Pattern, s.PatternKind, s.Gain, s.FrequencyHz = pattern, PatternBeamwidth, antenna.GainFromDBi(17), 1e9
	s.LengthM, s.WidthM, s.FrontToBackDB, s.ElectricalTiltRad = 2, 0.3, 30, tilt
	s.Method = MethodAuto
	return s
}

// The panel is put together from its parts as its rule says.
func TestPanelIsTheLargerOfItsParts(t *testing.T) {
	c := made(t, panelRow(t, 4*deg), Ground{})
	e := c.em.(*panel)
	assert.Equal(t, "panel", c.method)
	assert.Contains(t, c.why, "8 elements")
	assert.InEpsilon(t, 2*4/Wavelength(1e9), e.edge, 1e-12)
	u := rapid.Float64Range(-1, 1)
	methods := map[string]bool{}
	rapid.Check(t, func(t *rapid.T) {
		r := math.Pow(10, rapid.Float64Range(-0.3, 2).Draw(t, "log r"))
		q := e.pos.Add(Point{X: r * u.Draw(t, "x"), Y: r * u.Draw(t, "y"), Z: r * u.Draw(t, "z") / 3})
		if q.Sub(e.pos).Norm() < 0.02 {
			return
		}
		d, far, arr := e.at(q), e.farField.at(q).E, e.array.at(q)
		rho, z := e.array.line.polar(q)
		_, phi, _ := e.towards(q)
		methods[e.methodAt(q)] = true
		if math.Hypot(rho, math.Max(0, math.Abs(z)-1)) > e.edge {
			want := math.Max(far, e.array.far(rho*rho+z*z, rho, z, phi))
			assert.InEpsilon(t, want, d.E, 1e-12)
			assert.Equal(t, d.E, d.H)
			return
		}
		if e.cylinder.holds(rho, z) {
			far = math.Min(far, e.cylinder.cut.HorizontalCut(phi)*e.cylinder.along(rho))
		}
		assert.InEpsilon(t, math.Max(far, arr.E), d.E, 1e-12)
		assert.InEpsilon(t, math.Max(far, arr.H), d.H, 1e-12)
	})
	for _, m := range []string{"panel: array", "panel: far field", "panel: cylindrical"} {
		assert.True(t, methods[m], m)
	}
}

func TestPanelBoundsEncloseValues(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := panelRow(t, rapid.Float64Range(0, 10).Draw(t, "electrical tilt")*deg)
		p := drawPlacement(t, 0.3)
		s.Position = p.pos
		s.Pose = antenna.Pose{AzimuthRad: rapid.Float64Range(-3, 3).Draw(t, "panel azimuth"), TiltRad: rapid.Float64Range(-0.2, 0.2).Draw(t, "panel tilt")}
		if rapid.Bool().Draw(t, "file") {
			s.PatternKind = PatternFile
		}
		if rapid.Bool().Draw(t, "rotating") {
			s.SweepRad, s.HorizontalBeamwidthRad = 2, 65*deg
		}
		s.Polarization = rapid.SampledFrom([]antenna.Polarization{antenna.Vertical, antenna.Horizontal, antenna.Slant}).Draw(t, "polarization")
		p = s.place()
		encloses(t, made(t, s, Ground{}).em, p)
	})
}

func TestPanelBoundsShrink(t *testing.T) {
	e := made(t, panelRow(t, 4*deg), Ground{}).em
	for _, q := range []Point{{Y: 0.5, Z: 20}, {Y: 3, X: 1, Z: 19}, {Y: 10, Z: 18}, {Y: 100, X: 20, Z: 12}} {
		shrinks(t, e, q, 2e-3)
	}
}

// An array that lacks power is scaled up, and the factor is printed; one that has
// all of it is not.
func TestPanelPowerIsMadeUp(t *testing.T) {
	s := panelRow(t, 0)
	s.Gain = antenna.GainFromDBi(14)
	c := made(t, s, Ground{})
	assert.Contains(t, c.why, "scaled up")
	e := c.em.(*panel)
	assert.InEpsilon(t, 1.0, radiated(e.array, s.Position, 1e5, 400), 1e-3)
	s.Gain = antenna.GainFromDBi(20)
	assert.Contains(t, made(t, s, Ground{}).why, "all of its power")
}

// What auto takes for each pattern, and why; method array and cylindrical refuse
// an envelope of many beams.
func TestMethodByPattern(t *testing.T) {
	base := func(kind PatternKind) Source {
		s := radiator("a", Point{Z: 30})
		s.PatternKind, s.Method = kind, MethodAuto
		return s
	}
	dipole := base(PatternDipole)
	short, loop := base(PatternShort), base(PatternLoop)
	mono := base(PatternMonopole)
	mono.LengthM = 0.75
	bare := base(PatternSector)
	for _, row := range []struct {
		s      Source
		method string
		reach  bool
	}{
		{dipole, "wire", true}, {short, "short dipole", true}, {loop, "small loop", true}, {mono, "wire", true},
		{bare, "far field", false}, {base(PatternIsotropic), "far field", false}, {panelRow(t, 0), "panel", false},
	} {
		c := made(t, row.s, Ground{})
		assert.Equal(t, row.method, c.method)
		assert.NotEmpty(t, c.why)
		assert.Equal(t, row.reach, c.reactive == 0, row.method)
	}
	assert.False(t, func() bool { c := made(t, mono, Ground{}); return c.takesGround }())
	dipole.Polarization = antenna.Circular
	assert.Equal(t, "far field", func() string { c := made(t, dipole, Ground{}); return c.method }())
	for _, m := range []Method{MethodArray, MethodCylindrical} {
		s := panelRow(t, 0)
		s.Method, s.PatternKind = m, PatternActive
		_, err := compile(&s, Ground{})
		assert.ErrorContains(t, err, "envelope")
	}
	for _, m := range []Method{MethodArray, MethodCylindrical, MethodAperture, MethodWire, "guess"} {
		s := base(PatternIsotropic)
		s.Method = m
		_, err := compile(&s, Ground{})
		assert.Error(t, err, m)
	}
}

// Panels and dishes whose figures do not fit say so.
func TestOddPanelsAreCalledOut(t *testing.T) {
	s := panelRow(t, 0)
	s.LengthM = 0.1
	assert.Contains(t, joinReasons(made(t, s, Ground{}).info.Caveats), "shorter than half a wavelength")
	s = panelRow(t, 0)
	s.Elements, s.SpacingM = 20, 0.05
	assert.Contains(t, joinReasons(made(t, s, Ground{}).info.Caveats), "overlap")
	s = panelRow(t, 0)
	s.Elements, s.SpacingM = 20, 0.25
	assert.Contains(t, joinReasons(made(t, s, Ground{}).info.Caveats), "do not fit")
	lambda := Wavelength(10e9)
	s = radiator("dish", Point{})
	s.PatternKind, s.Method, s.DiameterM, s.FrequencyHz = PatternDish, MethodAuto, 1, 10e9
	s.Gain, s.Efficiency = antenna.Gain(ApertureGain(0.6, 1, lambda)), 0.5
	c := made(t, s, Ground{})
	assert.Contains(t, joinReasons(c.info.Caveats), "differ by more than 5 %")
	assert.Contains(t, joinReasons(c.info.Caveats), "6 P/A")
	s.Gain = antenna.Gain(ApertureGain(1.1, 1, lambda))
	_, err := compile(&s, Ground{})
	assert.ErrorContains(t, err, "above 1")
}
