package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/antenna"
	"example.org/standclear/limits"
)

// Duty and power reduction lower mean levels only, the peak factor raises peak
// levels only, stimulation counts the power on air (definitions; OET Bulletin 65,
// edition 97-01, on duty factor and peak levels, from memory).
func TestPowerByKindOfLevel(t *testing.T) {
	here := Place{ID: "origin", Class: "anyone"}
	s := radiator("pulsed", Point{X: 20})
	s.Power.Carriers, s.Power.Loss = 2, 0.5 // 1 kW on air
	plain := ratioAt(t, here, []Source{s}, level(limits.S, 2))
	assert.InEpsilon(t, PowerDensity(1000, 1, 20)/2, plain, sumRounding)
	s.Power.Duty, s.Power.ReductionFactor, s.Power.PeakFactor = 0.1, 0.25, 40
	peak := func(r *limits.Row) { r.Kind = limits.Peak }
	nerve := func(r *limits.Row) { r.Effect = limits.Stimulation }
	assert.InEpsilon(t, plain*0.025, ratioAt(t, here, []Source{s}, level(limits.S, 2)), sumRounding)
	assert.InEpsilon(t, plain*40, ratioAt(t, here, []Source{s}, level(limits.S, 2, peak)), sumRounding)
	e := EFromS(PowerDensity(1000, 1, 20))
	assert.InEpsilon(t, e/40, ratioAt(t, here, []Source{s}, level(limits.E, 40, nerve)), sumRounding)
}

// A wall of 10 dB lets a tenth of S through.
func TestWallLossAtPlace(t *testing.T) {
	s := []Source{radiator("a", Point{X: 20})}
	open := ratioAt(t, Place{ID: "p", Class: "anyone"}, s, level(limits.S, 2))
	behind := ratioAt(t, Place{ID: "p", Class: "anyone", WallLoss: 0.1}, s, level(limits.S, 2))
	assert.InEpsilon(t, open/10, behind, sumRounding)
}

// A vertical dipole rolled by a quarter turn lies across: its null points to the
// right hand, its field is that of the horizontal dipole.
func TestRollTurnsTheWire(t *testing.T) {
	s := radiator("dipole", Point{})
	s.PatternKind, s.Method = PatternDipole, MethodAuto
	upright := made(t, s, Ground{}).em
	s.Pose.RollRad = math.Pi / 2
	rolled := made(t, s, Ground{}).em
	s.Pose.RollRad, s.Polarization = 0, antenna.Horizontal
	across := made(t, s, Ground{}).em
	for _, q := range []Point{{X: 5, Y: 3, Z: 1}, {X: 30}, {Z: 4}} {
		assert.InEpsilon(t, across.at(q).E, rolled.at(q).E, 1e-9)
	}
	// What was along is now across.
	assert.InEpsilon(t, upright.at(Point{Z: 9}).E, rolled.at(Point{X: 9}).E, 1e-9)
	assert.Less(t, rolled.at(Point{X: 300}).E, 1e-4*rolled.at(Point{Y: 300}).E)
}

// A rotating source's mean is multiplied by the larger of beamwidth over sweep and
// dimension over the arc swept there, its peak by nothing (OET Bulletin 65, edition
// 97-01, rotating antennas, equations 22 and 23, from memory).
func TestRotationLowersTheMeanOnly(t *testing.T) {
	s := radiator("radar", Point{})
	s.SweepRad, s.HorizontalBeamwidthRad, s.WidthM, s.FrequencyHz = 2*math.Pi, 1.5*deg, 3, 3e9
	still := s
	still.SweepRad = 0
	peak := func(r *limits.Row) { r.Kind = limits.Peak }
	for _, r := range []float64{5, 30, 1000} {
		at := Place{ID: "p", Class: "anyone", At: Point{X: r}}
		want := math.Max(1.5/360, 3/(2*math.Pi*r))
		one := ratioAt(t, at, []Source{still}, level(limits.S, 2))
		assert.InEpsilon(t, one*want, ratioAt(t, at, []Source{s}, level(limits.S, 2)), 1e-9, "%v m", r)
		one = ratioAt(t, at, []Source{still}, level(limits.S, 2, peak))
		assert.InEpsilon(t, one, ratioAt(t, at, []Source{s}, level(limits.S, 2, peak)), 1e-9)
	}
	s.HorizontalBeamwidthRad = 0
	_, err := compile(&s, Ground{})
	require.ErrorContains(t, err, "beamwidth")
}

// The two bays of one signal by method wire: E and H add in amplitude, each apart.
func TestBaysOfWiresAddInAmplitude(t *testing.T) {
	bay := func(id string, z float64) Source {
		s := radiator(id, Point{Z: z})
		s.PatternKind, s.Method, s.Signal = PatternDipole, MethodAuto, "programme"
		return s
	}
	a, b := bay("lower", 3), bay("upper", 6)
	at := Place{ID: "p", Class: "anyone", At: Point{X: 1, Z: 4}}
	da, db := made(t, a, Ground{}).em.at(at.At), made(t, b, Ground{}).em.at(at.At)
	got := ratioAt(t, at, []Source{a, b}, level(limits.H, 0.2))
	assert.InEpsilon(t, 1000*addAmplitudes(da.H, db.H)/(Z0*0.04), got, sumRounding)
	got = ratioAt(t, at, []Source{a, b}, level(limits.E, 60))
	assert.InEpsilon(t, 1000*addAmplitudes(da.E, db.E)*Z0/3600, got, sumRounding)
}
