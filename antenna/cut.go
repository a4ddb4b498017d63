package antenna

import (
	"fmt"
	"math"
	"math/bits"
	"sort"
)

// Sample is one point of a cut: an angle in rad and a loss below the cut's peak
// in dB.
type Sample struct{ AngleRad, LossDB float64 }

// Cut is a sampled curve of loss over angle, linear in dB between its samples.
// A closed cut runs round the circle; an open one ends at its first and last
// sample and is held constant beyond. A Cut is not changed after NewCut.
type Cut struct {
	samples []Sample
	closed  bool
	x       []float64 // angles; a closed cut repeats the first, a turn later
	y       []float64
	slope   []float64
	bin     []int32 // first segment of each bin of angle
	perRad  float64 // bins per rad
	levels  [][]span
}

// span is the smallest and the largest loss over a run of samples.
type span struct{ lo, hi float64 }

// mostBins bounds the memory of the segment index of one cut.
const mostBins = 1 << 15

// NewCut returns the cut through the samples, sorted by angle, less its own
// least loss. At least two samples are needed, all angles different and within
// one turn; losses beyond 200 dB count as 200 dB.
func NewCut(samples []Sample, closed bool) (*Cut, error) {
	if len(samples) < 2 {
		return nil, fmt.Errorf("a cut of %d points is no cut; at least 2 are needed", len(samples))
	}
	s := append([]Sample(nil), samples...)
	sort.SliceStable(s, func(i, j int) bool { return s[i].AngleRad < s[j].AngleRad })
	least := math.Inf(1)
	for i, p := range s {
		if math.IsNaN(p.AngleRad) || math.IsInf(p.AngleRad, 0) || math.IsNaN(p.LossDB) || math.IsInf(p.LossDB, 0) {
			return nil, fmt.Errorf("point %d is not a finite number", i+1)
		}
		if i > 0 && p.AngleRad == s[i-1].AngleRad {
			return nil, fmt.Errorf("angle %.6g deg is given twice", degrees(p.AngleRad))
		}
		least = min(least, p.LossDB)
	}
	turn := s[len(s)-1].AngleRad - s[0].AngleRad
	if turn > 2*math.Pi || closed && turn == 2*math.Pi {
		return nil, fmt.Errorf("the angles span %.6g deg, more than one turn", degrees(turn))
	}
	c := &Cut{closed: closed}
	for i := range s {
		s[i].LossDB = min(s[i].LossDB-least, maxLossDB)
		c.x = append(c.x, s[i].AngleRad)
		c.y = append(c.y, s[i].LossDB)
	}
	c.samples = s
	if closed {
		c.x = append(c.x, s[0].AngleRad+2*math.Pi)
		c.y = append(c.y, s[0].LossDB)
	}
	c.index()
	return c, nil
}

func (c *Cut) index() {
	n := len(c.x) - 1
	step := math.Inf(1)
	for i := 0; i < n; i++ {
		c.slope = append(c.slope, (c.y[i+1]-c.y[i])/(c.x[i+1]-c.x[i]))
		step = min(step, c.x[i+1]-c.x[i])
	}
	length := c.x[n] - c.x[0]
	bins := int(min(mostBins, math.Ceil(length/step)+1))
	c.perRad = float64(bins) / length
	c.bin = make([]int32, bins+1)
	seg := 0
	for b := range c.bin {
		at := c.x[0] + float64(b)/c.perRad
		for seg < n-1 && c.x[seg+1] <= at {
			seg++
		}
		// One back, so that rounding of the bin cannot overshoot.
		c.bin[b] = int32(max(0, seg-1))
	}
	first := make([]span, len(c.y))
	for i, v := range c.y {
		first[i] = span{v, v}
	}
	c.levels = [][]span{first}
	for w := 1; 2*w <= len(c.y); w *= 2 {
		below := c.levels[len(c.levels)-1]
		next := make([]span, len(c.y)-2*w+1)
		for i := range next {
			next[i] = span{min(below[i].lo, below[i+w].lo), max(below[i].hi, below[i+w].hi)}
		}
		c.levels = append(c.levels, next)
	}
}

// Samples returns the cut's points by rising angle, the least loss 0.
func (c *Cut) Samples() []Sample { return append([]Sample(nil), c.samples...) }

// Closed reports whether the cut runs round the whole circle.
func (c *Cut) Closed() bool { return c.closed }

// Loss returns the loss in dB at an angle in rad, at most one turn away from
// the cut's own angles.
func (c *Cut) Loss(angle float64) float64 {
	v, _ := c.at(c.turned(angle))
	return v
}

// turned brings an angle into the cut's own turn.
func (c *Cut) turned(a float64) float64 {
	if c.closed {
		if a < c.x[0] {
			a += 2 * math.Pi
		} else if a >= c.x[len(c.x)-1] {
			a -= 2 * math.Pi
		}
	}
	return a
}

// at returns the loss at a turned angle, and its segment.
func (c *Cut) at(a float64) (float64, int) {
	n := len(c.slope)
	if a <= c.x[0] {
		return c.y[0], 0
	}
	if a >= c.x[n] {
		return c.y[n], n - 1
	}
	i := int(c.bin[min(int((a-c.x[0])*c.perRad), len(c.bin)-1)])
	for i < n-1 && c.x[i+1] <= a {
		i++
	}
	return c.y[i] + (a-c.x[i])*c.slope[i], i
}

// LossRange encloses Loss over an interval of angles at most a turn wide: exact
// at both ends, the least and largest sample between them.
func (c *Cut) LossRange(a Interval) (lo, hi float64) {
	if c.closed && a.Hi-a.Lo >= 2*math.Pi-angleSlack {
		s := c.whole()
		return s.lo, s.hi
	}
	p, q := c.turned(a.Lo), c.turned(a.Hi)
	u, i := c.at(p)
	v, j := c.at(q)
	lo, hi = min(u, v), max(u, v)
	switch {
	case c.closed && p > q:
		s, t := c.between(i+1, len(c.y)-1), c.between(0, j)
		lo, hi = min(lo, s.lo, t.lo), max(hi, s.hi, t.hi)
	case i < j:
		s := c.between(i+1, j)
		lo, hi = min(lo, s.lo), max(hi, s.hi)
	}
	// Rounding of the end values: a segment spans at most 200 dB, and an
	// angle brought back by a turn moves by angleSlack at most.
	slack := 1e-12 + angleSlack*(math.Abs(c.slope[i])+math.Abs(c.slope[j]))
	return max(0, lo-slack), hi + slack
}

func (c *Cut) whole() span { return c.between(0, len(c.y)-1) }

// between returns the extremes of samples i to j, both included, i <= j.
func (c *Cut) between(i, j int) span {
	k := bits.Len(uint(j-i+1)) - 1
	l := c.levels[k]
	s, t := l[i], l[j-1<<k+1]
	return span{min(s.lo, t.lo), max(s.hi, t.hi)}
}

// Largest returns the largest loss of the cut in dB.
func (c *Cut) Largest() float64 { return c.whole().hi }

// PeakRad returns the angle in rad of the least loss: of a flat top its middle,
// of several equal tops the one nearest angle 0.
func (c *Cut) PeakRad() float64 {
	peak, _ := c.peakWithin(math.Inf(1))
	return peak
}

// peakWithin returns the angle of the least loss among the samples within reach
// of angle 0, and that loss.
func (c *Cut) peakWithin(reach float64) (peak, loss float64) {
	n := len(c.samples)
	loss = math.Inf(1)
	for _, s := range c.samples {
		if math.Abs(s.AngleRad) <= reach {
			loss = min(loss, s.LossDB)
		}
	}
	peak = math.Inf(1)
	for i := 0; i < n; i++ {
		if c.samples[i].LossDB != loss || math.Abs(c.samples[i].AngleRad) > reach {
			continue
		}
		from := c.samples[i].AngleRad
		for i+1 < n && c.samples[i+1].LossDB == loss {
			i++
		}
		to := c.samples[i].AngleRad
		// A flat top that runs over the seam of a closed cut ends behind it.
		if c.closed && i == n-1 && from > c.samples[0].AngleRad {
			for j := 0; j < n && c.samples[j].LossDB == loss; j++ {
				to = c.samples[j].AngleRad + 2*math.Pi
			}
		}
		if mid := (from + to) / 2; math.Abs(mid) < math.Abs(peak) {
			peak = mid
		}
	}
	return peak, loss
}

// Mirrored returns the cut with its angles negated.
func (c *Cut) Mirrored() *Cut {
	s := make([]Sample, len(c.samples))
	for i, p := range c.samples {
		s[i] = Sample{-p.AngleRad, p.LossDB}
	}
	m, err := NewCut(s, c.closed)
	if err != nil {
		panic("antenna: mirrored cut: " + err.Error())
	}
	return m
}

// Asymmetry returns the largest difference in dB between the cut and its mirror
// image, losses beyond 40 dB counted as 40 dB.
func (c *Cut) Asymmetry() float64 {
	most := 0.0
	for _, p := range c.samples {
		most = max(most, math.Abs(min(40, p.LossDB)-min(40, c.Loss(-p.AngleRad))))
	}
	return most
}
