package antenna

import "math"

// Vec is a vector in a right-handed frame, in metres or without unit as its use
// says. In the site's frame X is east, Y is north, Z is up.
type Vec struct{ X, Y, Z float64 }

func (a Vec) Add(b Vec) Vec       { return Vec{a.X + b.X, a.Y + b.Y, a.Z + b.Z} }
func (a Vec) Sub(b Vec) Vec       { return Vec{a.X - b.X, a.Y - b.Y, a.Z - b.Z} }
func (a Vec) Scale(k float64) Vec { return Vec{k * a.X, k * a.Y, k * a.Z} }
func (a Vec) Dot(b Vec) float64   { return a.X*b.X + a.Y*b.Y + a.Z*b.Z }
func (a Vec) Norm() float64       { return math.Sqrt(a.Dot(a)) }
func (a Vec) Cross(b Vec) Vec {
	return Vec{a.Y*b.Z - a.Z*b.Y, a.Z*b.X - a.X*b.Z, a.X*b.Y - a.Y*b.X}
}

// Pose is the orientation of an antenna.
type Pose struct {
	AzimuthRad float64 // clockwise from the y axis of the site (north), seen from above
	TiltRad    float64 // mechanical tilt, down is positive
	RollRad    float64 // about boresight, clockwise seen from behind the antenna
}

// Axes are the three unit vectors of an antenna's frame: boresight, right-hand
// (both as seen from behind the antenna) and up.
type Axes struct{ Boresight, Right, Up Vec }

// Axes returns the antenna's unit vectors in the site's frame (methods:
// conventions). With h = (sin a, cos a, 0) and tilt t: boresight = h cos t -
// z sin t, up = h sin t + z cos t, right = (cos a, -sin a, 0); roll turns right
// and up about boresight.
func (p Pose) Axes() Axes {
	sa, ca := math.Sincos(p.AzimuthRad)
	st, ct := math.Sincos(p.TiltRad)
	h := Vec{sa, ca, 0}
	b := Vec{h.X * ct, h.Y * ct, -st}
	right := Vec{ca, -sa, 0}
	up := Vec{h.X * st, h.Y * st, ct}
	if p.RollRad != 0 {
		sr, cr := math.Sincos(p.RollRad)
		right, up = right.Scale(cr).Sub(up.Scale(sr)), up.Scale(cr).Add(right.Scale(sr))
	}
	return Axes{b, right, up}
}

// Direction returns the azimuth phi and elevation theta of the unit vector or
// displacement d in the antenna's frame, in rad.
func (x Axes) Direction(d Vec) (phi, theta float64) {
	f, r, u := d.Dot(x.Boresight), d.Dot(x.Right), d.Dot(x.Up)
	return math.Atan2(r, f), math.Atan2(u, math.Hypot(f, r))
}

// Polarization is the orientation of the radiated electric field.
type Polarization string

// The polarizations a row may name.
const (
	Vertical   Polarization = "vertical"
	Horizontal Polarization = "horizontal"
	Slant      Polarization = "slant"
	Circular   Polarization = "circular"
)
