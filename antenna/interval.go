package antenna

import "math"

// Rounding. A pattern's Relative and RelativeRange evaluate the same monotone
// pieces, so that they part only by the rounding of a handful of operations and
// of one exponential whose argument stays below 100 (434 dB): less than
// 100 * 8 * 2^-53 = 9e-14 of the value. rangeSlack covers that; rangeFloor
// covers what is left of a value that cancels to nothing (a null).
const (
	rangeSlack = 1e-13
	rangeFloor = 1e-15
	// angleSlack in rad covers the rounding of an azimuth brought back by a
	// whole turn.
	angleSlack = 2e-15
)

// nepers is ln(10)/10: 10^(-A/10) = exp(-A nepers).
const nepers = math.Ln10 / 10

// perNeper is 10/ln(10): 10 log10(x) = perNeper ln(x), and faster so.
const perNeper = 10 / math.Ln10

// maxLossDB is the largest loss that is told from none at all: deeper nulls are
// read as this deep, which can only raise a field.
const maxLossDB = 200

// ratioOfLoss returns the power ratio of a loss in dB.
func ratioOfLoss(db float64) float64 { return math.Exp(-nepers * db) }

// lossOfRatio returns the loss in dB, at most maxLossDB, of a power ratio.
func lossOfRatio(ratio float64) float64 {
	if ratio <= 1e-20 {
		return maxLossDB
	}
	return -10 * math.Log10(ratio)
}

// widened returns [lo, hi] opened by the rounding allowance, inside [0, 1].
func widened(lo, hi float64) Interval {
	lo = lo*(1-rangeSlack) - rangeFloor
	hi = hi*(1+rangeSlack) + rangeFloor
	if lo < 0 {
		lo = 0
	}
	if hi > 1 {
		hi = 1
	}
	return Interval{lo, hi}
}

// rangeOfLoss returns the power ratios of the losses between lo and hi dB.
func rangeOfLoss(lo, hi float64) Interval {
	return widened(ratioOfLoss(hi), ratioOfLoss(lo))
}

// foldAzimuth returns the smallest and the largest |phi|, phi taken into
// [-pi, pi], over an interval of azimuths.
func foldAzimuth(phi Interval) (lo, hi float64) {
	if phi.Lo < -math.Pi {
		phi.Lo += 2 * math.Pi
		phi.Hi += 2 * math.Pi
	}
	if phi.Hi <= math.Pi {
		switch {
		case phi.Lo >= 0:
			return phi.Lo, phi.Hi
		case phi.Hi <= 0:
			return -phi.Hi, -phi.Lo
		}
		return 0, max(-phi.Lo, phi.Hi)
	}
	// The interval holds pi, and runs on behind the antenna.
	if phi.Lo <= 0 || phi.Hi >= 2*math.Pi-angleSlack {
		return 0, math.Pi
	}
	return max(0, min(phi.Lo, 2*math.Pi-phi.Hi)-angleSlack), math.Pi
}

// foldElevation returns the smallest and the largest |x| over an interval.
func foldElevation(x Interval) (lo, hi float64) {
	switch {
	case x.Lo >= 0:
		return x.Lo, x.Hi
	case x.Hi <= 0:
		return -x.Hi, -x.Lo
	}
	return 0, max(-x.Lo, x.Hi)
}
