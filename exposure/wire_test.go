package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/antenna"
)

// upright is an untilted placement at the origin.
func upright(lambda float64) placement {
	return placement{
		axes: rightHanded, vert: Point{Z: 1}, reactive: ReactiveDistance(lambda),
	}
}

var rightHanded = Source{}.Pose.Axes()

func dipole(t require.TestingT, length float64) *wire {
	p := upright(1)
	w, err := newWire(p, rod{p.pos, p.axes.Up}, 2*math.Pi, length)
	require.NoError(t, err)
	return w
}

// The exact field of a thin half-wave dipole in its mid plane, one watt, lambda
// = 1 m: E and H, and S radially, by another program from the closed form
// (textbook: Balanis, Antenna Theory, 3rd edition, section 8.2, from memory). Half
// a last printed digit, or 1e-6 of values that carry more digits than their
// constants.
func TestHalfWaveDipoleFields(t *testing.T) {
	w := dipole(t, 0.5)
	for _, row := range [][5]float64{ // rho, E, H, E^2/Z0, H^2 Z0
		{0.05, 27.510450, 0.37235209, 2.00893, 52.2322},
		{0.1, 26.048659, 0.18617605, 1.80111, 13.0580},
		{1 / (2 * math.Pi), 23.666400, 0.11697786, 1.48674, 5.15511},
		{0.25, 19.838068, 0.07447042, 1.04464, 2.08929},
		{0.5, 12.546696, 0.03723521, 0.417857, 0.522322},
		{1, 6.804401, 0.01861760, 0.122899, 0.130580},
		{2, 3.479827, 0.00930880, 0.0321429, 0.0326451},
		{10, 0.701163, 0.00186176, 0.00130499, 0.00130580},
	} {
		d := w.at(Point{X: row[0]})
		assert.InEpsilon(t, row[1], EFromS(d.E), 1e-6, "E at %v", row[0])
		assert.InEpsilon(t, row[2], HFromS(d.H), 4e-6, "H at %v", row[0])
		assert.InEpsilon(t, row[3], d.E, 5e-6, "E2/Z0 at %v", row[0])
		assert.InEpsilon(t, row[4], d.H, 5e-6, "H2 Z0 at %v", row[0])
	}
}

// In the mid plane |H| is the far-field formula at every distance: the two tips
// are equally far, and the middle's term vanishes at half a wave.
func TestHalfWaveDipoleMidPlane(t *testing.T) {
	w := dipole(t, 0.5)
	const directivity = 1.640922 // 4/Cin(2 pi), seven digits
	for _, rho := range []float64{0.01, 0.05, 0.3, 1, 7, 100} {
		assert.InEpsilon(t, directivity/(4*math.Pi*rho*rho), w.at(Point{Y: rho}).H, 1e-6)
	}
}

// Q = Cin(2 pi) = 2.437653393 for a half wave, so that D = 2 F_max^2/Q = 1.640922
// and R = Z0 Q/(2 pi) at the feed = 73.0790 ohm (books: 73, Balanis 73.13 with
// 120 pi); ten printed digits of Cin.
func TestHalfWaveDipoleConstants(t *testing.T) {
	q := WirePatternIntegral(math.Pi / 2)
	assert.InDelta(t, 2.437653393/2, q/1, 5e-10)
	assert.InDelta(t, 1.640922, 2/q, 5e-7)
	assert.InDelta(t, 73.0790, Z0*q/(2*math.Pi), 5e-5)
	assert.InDelta(t, 73.13, 120*math.Pi*q/(2*math.Pi), 0.005)
	// A short dipole has D = 1.5, and R = 80 pi^2 (l/lambda)^2 for even current, a
	// quarter of it for the triangle that a short sinusoid is (textbook).
	kl := math.Pi * 0.001
	q = WirePatternIntegral(kl)
	f := wireShape(kl, math.Pi/2)
	assert.InEpsilon(t, 1.5, 2*f*f/q, 1e-5) // the next term is (kl)^2/10
	feed := Z0 * q / (2 * math.Pi) / (math.Sin(kl) * math.Sin(kl))
	assert.InEpsilon(t, 20*math.Pi*math.Pi*1e-6, feed, 1e-3) // 120 pi stands for Z0: 0.07 %
}

// A full-wave dipole radiates 1.5 times more into its mid plane than a half-wave
// one: directivity 2.41 (Balanis, Antenna Theory, 3rd edition, section 4.5.3, from
// memory), half a printed digit.
func TestFullWaveDipoleDirectivity(t *testing.T) {
	w := dipole(t, 1)
	r := 1e4
	assert.InDelta(t, 2.41, w.at(Point{X: r}).H*4*math.Pi*r*r, 0.005)
}

// The shorter the wire, the nearer it is to the dipole of no length, at every
// distance beyond a few lengths.
func TestShortWireBecomesShortDipole(t *testing.T) {
	p := upright(1)
	point := newElementary(p, rod{p.pos, p.axes.Up}, 2*math.Pi, 1.5, false)
	for _, length := range []float64{0.02, 0.005} {
		w := dipole(t, length)
		for _, q := range []Point{{X: 0.2}, {X: 0.1, Z: 0.15}, {Z: 0.3}, {Y: 2, Z: -1}, {X: 30, Z: 10}} {
			a, b := w.at(q), point.at(q)
			// The next term of the expansion is of second order in length/r.
			tolerance := math.Pow(length/q.Norm(), 2) + math.Pow(2*math.Pi*length, 2)/10 + 1e-6
			assert.InEpsilon(t, b.E, a.E, tolerance, "%v E at %v", length, q)
			if b.H > 0 {
				assert.InEpsilon(t, b.H, a.H, tolerance, "%v H at %v", length, q)
			}
		}
	}
}

// The wire radiates the watt that it is given, whatever its length; the sphere's
// sum is good to 0.02 %, 0.1 % is asked.
func TestWireRadiatesItsPower(t *testing.T) {
	for _, length := range []float64{0.01, 0.5, 1.25, 3} {
		assert.InEpsilon(t, 1.0, radiated(dipole(t, length), Point{}, 1e4, 200), 1e-3, "%v", length)
	}
	m, err := newMonopole(upright(1), 2*math.Pi, 0.25)
	require.NoError(t, err)
	assert.InEpsilon(t, 1.0, radiated(m, Point{}, 1e4, 200), 1e-3)
	// Twice the gain of the dipole (3.28, 5.16 dBi), nothing below ground.
	assert.InDelta(t, 3.28, m.at(Point{X: 1e4}).H*4*math.Pi*1e8, 0.005)
	assert.Zero(t, m.at(Point{X: 1, Z: -0.1}))
	assert.Positive(t, m.at(Point{X: 1}).E)
}

func TestWireBoundsShrink(t *testing.T) {
	w := dipole(t, 0.5)
	for _, q := range []Point{{X: 0.1}, {X: 1, Z: 1}, {Y: 5, Z: -3}, {X: 40, Z: 2}} {
		shrinks(t, w, q, 1e-3)
	}
	// On the line itself E closes too, and H is nearly nothing.
	q := Point{Z: 3}
	o := w.over(box{c: q, h: Point{X: 1e-7, Y: 1e-7, Z: 1e-7}})
	assert.InEpsilon(t, w.at(q).E, o.Hi.E, 1e-3)
	assert.Less(t, o.Hi.H, 1e-9)
}

// Every pattern whose gain is exact gives back the watt that went in: S summed over
// the sphere, 0.1 % asked (the regulatory 2.15 dBi of the dipole is 0.02 % low).
func TestFarFieldGivesBackThePower(t *testing.T) {
	type made struct {
		p antenna.Pattern
		g antenna.Gain
	}
	var all []made
	add := func(p antenna.Pattern, g antenna.Gain) { all = append(all, made{p, g}) }
	add(antenna.Isotropic())
	add(antenna.HalfWaveDipole())
	add(antenna.ShortDipole())
	add(antenna.SmallLoop(antenna.AlongBoresight))
	m, g, err := antenna.Monopole(0.25, 1)
	require.NoError(t, err)
	add(m, g)
	for i, x := range all {
		assert.InEpsilon(t, 1.0, radiated(newFarField(upright(1), x.p, float64(x.g)), Point{}, 100, 150), 1e-3, "%d", i)
	}
}
