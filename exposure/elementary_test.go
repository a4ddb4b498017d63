package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
)

// |wave impedance| across the axis of an electric and of a magnetic dipole
// against kr, Z = Z0 sqrt(1 - 1/x^2 + 1/x^4)/sqrt(1 + 1/x^2) and Z0^2/Z (textbook,
// from memory; figures by another program): half a printed digit.
func TestElementaryImpedances(t *testing.T) {
	p := upright(1)
	k := 2 * math.Pi
	electric := newElementary(p, rod{p.pos, p.axes.Up}, k, 1.5, false)
	magnetic := newElementary(p, rod{p.pos, p.axes.Up}, k, 1.5, true)
	for _, row := range [][3]float64{
		{0.1, 3730.0050, 38.0497}, {0.2, 1811.2614, 78.3574}, {0.5, 607.4594, 233.6382},
		{1 / math.Sqrt2, 376.7303, 376.7303}, {1, 266.3886, 532.7771}, {2, 303.7297, 467.2764},
		{3, 339.2898, 418.3024}, {5, 362.2523, 391.7870}, {10, 373.0005, 380.4974},
	} {
		q := Point{X: row[0] / k}
		d := electric.at(q)
		assert.InDelta(t, row[1], EFromS(d.E)/HFromS(d.H), 1e-4, "electric at kr = %v", row[0])
		d = magnetic.at(q)
		assert.InDelta(t, row[2], EFromS(d.E)/HFromS(d.H), 1e-4, "magnetic at kr = %v", row[0])
	}
}

// Far out both are 1.5 sin^2 w/(4 pi r^2), and radiate one watt (0.1 % asked; the
// sphere's sum is good to 0.01 %).
func TestElementaryFarField(t *testing.T) {
	p := upright(1)
	for _, loop := range []bool{false, true} {
		e := newElementary(p, rod{p.pos, p.axes.Up}, 2*math.Pi, 1.5, loop)
		assert.InEpsilon(t, 1.0, radiated(e, Point{}, 1e4, 100), 1e-3)
		d := e.at(Point{X: 300, Z: 400})
		want := 1.5 * 0.36 / (4 * math.Pi * 250000)
		assert.InEpsilon(t, want, d.E, 1e-5) // 1/x^2 is 1e-7 there, its factor below 10
		assert.InEpsilon(t, want, d.H, 1e-5)
		shrinks(t, e, Point{X: 0.3, Z: 0.2}, 1e-4)
	}
}
