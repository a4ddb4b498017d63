package exposure

import (
	"math"

	"example.org/standclear/antenna"
)

// horizontalCut returns the cut of a pattern around the horizon, 1 at its peak:
// the pattern's own, else the cut through the beam. For a rotating source each
// azimuth has the largest value that the sweep brings there.
func horizontalCut(p antenna.Pattern, tilt float64) antenna.HorizontalCutter {
	if s, ok := p.(swept); ok {
		return sweptCut{horizontalCut(s.Pattern, tilt), s}
	}
	if h, ok := p.(antenna.HorizontalCutter); ok {
		return h
	}
	peak := p.RelativeRange(antenna.FullCircle, antenna.Interval{Lo: -tilt, Hi: -tilt}).Hi
	return beamCut{p, -tilt, 1 / peak}
}

// still is the pattern of a rotating source as it stands.
func still(p antenna.Pattern) antenna.Pattern {
	if s, ok := p.(swept); ok {
		return s.Pattern
	}
	return p
}

type beamCut struct {
	p       antenna.Pattern
	theta   float64
	inverse float64
}

func (c beamCut) HorizontalCut(phi float64) float64 {
	return math.Min(1, c.p.Relative(phi, c.theta)*c.inverse)
}

func (c beamCut) HorizontalCutRange(phi antenna.Interval) antenna.Interval {
	r := c.p.RelativeRange(phi, antenna.Interval{Lo: c.theta, Hi: c.theta})
	return antenna.Interval{Lo: math.Min(1, r.Lo*c.inverse), Hi: math.Min(1, r.Hi*c.inverse)}
}

type sweptCut struct {
	h antenna.HorizontalCutter
	s swept
}

func (c sweptCut) HorizontalCut(phi float64) float64 {
	return c.h.HorizontalCutRange(c.s.window(phi, phi)).Hi
}

func (c sweptCut) HorizontalCutRange(phi antenna.Interval) antenna.Interval {
	hi := c.h.HorizontalCutRange(c.s.window(phi.Lo, phi.Hi)).Hi
	lo := 0.0
	if a, b := phi.Hi-c.s.half, phi.Lo+c.s.half; a <= b {
		best := math.Remainder(math.Min(math.Max(0, a), b), 2*math.Pi)
		lo = c.h.HorizontalCutRange(antenna.Interval{Lo: best, Hi: best}).Lo
	}
	return antenna.Interval{Lo: math.Min(lo, hi), Hi: hi}
}

// aroundHorizon integrates f over the circle, in rad: a sum of 7200 points, good
// to 1e-6 of a cut that is known to a degree.
func aroundHorizon(f func(phi float64) float64) float64 {
	const steps = 7200
	sum := 0.0
	for i := 0; i < steps; i++ {
		sum += f(-math.Pi + 2*math.Pi*(float64(i)+0.5)/steps)
	}
	return sum * 2 * math.Pi / steps
}
