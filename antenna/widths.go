package antenna

import (
	"math"
	"sort"
)

// Beamwidth returns the width in rad between the two angles at which the cut
// first falls db below its peak, on either side of the peak; ok is false where
// it never does (a round cut), and the width then 0.
func (c *Cut) Beamwidth(db float64) (rad float64, ok bool) {
	peak := c.PeakRad()
	up, ok1 := c.falls(peak, 1, db)
	down, ok2 := c.falls(peak, -1, db)
	if !ok1 || !ok2 {
		return 0, false
	}
	return up + down, true
}

// falls returns how far from the angle a, in the sense given, the loss first
// reaches db.
func (c *Cut) falls(a, sense, db float64) (float64, bool) {
	reach := math.Pi
	if !c.closed {
		reach = max(0, min(reach, sense*(c.x[len(c.x)-1]-a)))
		if sense < 0 {
			reach = max(0, min(math.Pi, a-c.x[0]))
		}
	}
	before, at := c.Loss(c.round(a)), 0.0
	for _, d := range c.distances(a, sense, reach) {
		l := c.Loss(c.round(a + sense*d))
		if l >= db {
			if l == before {
				return d, true
			}
			return at + (d-at)*(db-before)/(l-before), true
		}
		before, at = l, d
	}
	return 0, false
}

// distances lists the samples by their distance from the angle a in the sense
// given, up to reach.
func (c *Cut) distances(a, sense, reach float64) []float64 {
	var d []float64
	for _, s := range c.samples {
		x := sense * (s.AngleRad - a)
		if c.closed {
			x = math.Mod(x+4*math.Pi, 2*math.Pi)
		}
		if x > 1e-12 && x <= reach+1e-12 {
			d = append(d, x)
		}
	}
	sort.Float64s(d)
	return d
}

// round brings any angle into the cut's turn.
func (c *Cut) round(a float64) float64 {
	if !c.closed {
		return a
	}
	for a < c.x[0] {
		a += 2 * math.Pi
	}
	for a >= c.x[len(c.x)-1] {
		a -= 2 * math.Pi
	}
	return a
}

// stepAt returns the spacing in rad of the samples about an angle.
func (c *Cut) stepAt(a float64) float64 {
	_, i := c.at(c.round(a))
	return c.x[i+1] - c.x[i]
}
