package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"pgregory.net/rapid"

	"example.org/standclear/antenna"
)

// drawPlacement draws a pose about a place near the origin.
func drawPlacement(t *rapid.T, lambda float64) placement {
	a := rapid.Float64Range(-3, 3)
	pose := antenna.Pose{AzimuthRad: a.Draw(t, "azimuth"), TiltRad: a.Draw(t, "tilt") / 10, RollRad: a.Draw(t, "roll") / 10}
	return placement{pos: Point{X: a.Draw(t, "x"), Y: a.Draw(t, "y"), Z: 20 + a.Draw(t, "z")}, axes: pose.Axes(), vert: Point{Z: 1}, reactive: ReactiveDistance(lambda)}
}

// drawFrame draws a turned frame.
func drawFrame(t *rapid.T) frame {
	a := rapid.Float64Range(-3, 3)
	axes := antenna.Pose{AzimuthRad: a.Draw(t, "frame azimuth"), TiltRad: a.Draw(t, "frame tilt") / 2}.Axes()
	return frame{Point{X: a.Draw(t, "frame x")}, axes.Right, axes.Boresight, axes.Up}
}

// encloses draws boxes of every size near and far, in a turned frame, and holds
// the bounds over each against values inside it. offset is where the boxes are
// drawn around, in site coordinates.
func encloses(t *rapid.T, e emitter, p placement) {
	f := siteFrame
	if rapid.Bool().Draw(t, "turned") {
		f = drawFrame(t)
	}
	turned := e.in(f)
	u := rapid.Float64Range(-1, 1)
	r := math.Pow(10, rapid.Float64Range(-1.5, 2).Draw(t, "log distance"))
	dir := Point{X: u.Draw(t, "dx"), Y: u.Draw(t, "dy"), Z: u.Draw(t, "dz")}
	switch rapid.IntRange(0, 5).Draw(t, "special direction") {
	case 0:
		dir = p.axes.Up
	case 1:
		dir = p.axes.Boresight
	case 2:
		dir = p.axes.Right.Scale(-1)
	}
	if dir.Norm() < 1e-3 {
		dir = Point{X: 1}
	}
	b := box{c: f.point(p.pos.Add(dir.Scale(r / dir.Norm())))}
	size := r * math.Pow(10, rapid.Float64Range(-6, 0.3).Draw(t, "log size"))
	side := rapid.Float64Range(0, 1)
	b.h = Point{X: size * side.Draw(t, "hx"), Y: size * side.Draw(t, "hy"), Z: size * side.Draw(t, "hz")}.Add(Point{X: boxSlack, Y: boxSlack, Z: boxSlack})
	over := turned.over(b)
	for i := 0; i < 12; i++ {
		q := b.c.Add(Point{X: b.h.X * u.Draw(t, "qx"), Y: b.h.Y * u.Draw(t, "qy"), Z: b.h.Z * u.Draw(t, "qz")})
		if i == 0 {
			q = b.c
		}
		d := turned.at(q)
		// The caller widens every sum by sumSlack.
		if d.E < over.Lo.E*(1-sumSlack) || d.E > over.Hi.E*(1+sumSlack) || d.H < over.Lo.H*(1-sumSlack) || d.H > over.Hi.H*(1+sumSlack) {
			t.Fatalf("at %v in box %v: %v outside %v", q, b, d, over)
		}
	}
	g, offset := turned.falloff()
	if d := turned.at(b.c); r > offset {
		most := g / (4 * math.Pi * (r - offset) * (r - offset)) * (1 + 1e-9)
		if d.E > most || d.H > most {
			t.Fatalf("falloff: %v at %v m is above %v", d, r, most)
		}
	}
}

// shrinks holds that bounds close on the value as the box shrinks.
func shrinks(t *testing.T, e emitter, q Point, within float64) {
	t.Helper()
	d := e.at(q)
	h := 1e-6
	o := e.over(box{c: q, h: Point{X: h, Y: h, Z: h}})
	assert.InEpsilon(t, d.E, o.Hi.E, within)
	assert.InEpsilon(t, d.H, o.Hi.H, within)
	assert.InEpsilon(t, d.E, o.Lo.E, within)
	assert.InEpsilon(t, d.H, o.Lo.H, within)
}

// radiated integrates S over a sphere of radius r about a placement: at a
// distance it gives back the watt that went in.
func radiated(e emitter, centre Point, r float64, steps int) float64 {
	sum := 0.0
	for i := 0; i < steps; i++ {
		z := -1 + (2*float64(i)+1)/float64(steps)
		s := math.Sqrt(1 - z*z)
		for j := 0; j < 2*steps; j++ {
			a := math.Pi * (float64(j) + 0.5) / float64(steps)
			d := e.at(centre.Add(Point{X: r * s * math.Cos(a), Y: r * s * math.Sin(a), Z: r * z}))
			sum += math.Sqrt(d.E * d.H)
		}
	}
	return sum * 4 * math.Pi * r * r / float64(2*steps*steps)
}

func TestWireBoundsEncloseValues(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		lambda := rapid.Float64Range(0.1, 5).Draw(t, "lambda")
		p := drawPlacement(t, lambda)
		k := 2 * math.Pi / lambda
		length := lambda * math.Pow(10, rapid.Float64Range(-2.5, 1).Draw(t, "log length"))
		if rapid.Bool().Draw(t, "half wave") {
			length = lambda / 2
		}
		var w *wire
		var err error
		if rapid.Bool().Draw(t, "monopole") {
			w, err = newMonopole(p, k, length)
		} else {
			w, err = newWire(p, rod{p.pos, p.axes.Right}, k, length)
		}
		if err != nil {
			t.Fatal(err)
		}
		encloses(t, w, p)
	})
}

func TestElementaryBoundsEncloseValues(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		lambda := rapid.Float64Range(0.1, 50).Draw(t, "lambda")
		p := drawPlacement(t, lambda)
		encloses(t, newElementary(p, rod{p.pos, p.axes.Up}, 2*math.Pi/lambda, 1.5, rapid.Bool().Draw(t, "loop")), p)
	})
}
