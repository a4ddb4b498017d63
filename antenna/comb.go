package antenna

import "math"

// comb is the array factor of n equal elements in a row, D(x) = (sin(pi n x)/(n
// sin(pi x)))^2 with x the phase step from element to element in turns, by the
// distance x from a main lobe, 0 to 1/2.
type comb struct {
	n     int
	peaks []turn // of the side lobe between k/n and (k+1)/n, k = 1, 2, ...
}

func newComb(n int) comb {
	c := comb{n: n, peaks: make([]turn, n/2+3)}
	for k := 1; 2*k < n; k++ {
		lo, hi := float64(k)/float64(n), float64(k+1)/float64(n)
		at := 0.5
		if hi <= 0.5 {
			at = extreme(lo, hi, true, c.value)
		}
		c.peaks[k] = turn{at, c.value(at)}
	}
	return c
}

// value returns D(x).
func (c *comb) value(x float64) float64 {
	if x < 1e-9 {
		return 1
	}
	n := float64(c.n)
	r := math.Sin(math.Pi*n*x) / (n * math.Sin(math.Pi*x))
	return r * r
}

// beyond returns the largest D at the distance x or any farther one, which falls
// as x grows.
func (c *comb) beyond(x float64) float64 {
	k := int(x * float64(c.n))
	if k > 0 && x < c.peaks[k].at {
		return c.peaks[k].value
	}
	return max(c.value(x), c.peaks[k+1].value)
}

// over encloses beyond for the intervals [lo+x, hi+x], 0 <= x <= reach.
func (c *comb) over(lo, hi, reach float64) Interval {
	// What rounding can move an argument by: a few ulps of at most 20 turns.
	const slack = 2e-14
	near := max(0, distance(lo-slack, hi+reach+slack))
	far := min(0.5, farthest(lo, hi, reach)+slack)
	return Interval{c.beyond(far), c.beyond(near)}
}
