package antenna

import (
	"math"
)

// PlainSum returns a pattern of two cuts with the loss Ah(phi) + Av(theta) in
// place of the weighted sum, kept between 0 and the largest loss in either cut;
// ok is false for a pattern that is not made of two cuts. It is there to tell
// what the weighting is worth, not to be chosen.
func PlainSum(p Pattern) (q Pattern, ok bool) {
	t, ok := p.(*twoCut)
	if !ok {
		return nil, false
	}
	c := *t
	c.back = false
	return &c, true
}

// LargerOfCuts returns a pattern of two cuts with the larger of the losses
// Ah(phi) and Av(theta) in place of their sum: never less gain than the plain
// sum gives; ok is false for a pattern that is not made of two cuts. It is there
// to tell what the summing is worth, not to be chosen.
func LargerOfCuts(p Pattern) (q Pattern, ok bool) {
	t, ok := p.(*twoCut)
	if !ok {
		return nil, false
	}
	return &largerOfCuts{*t}, true
}

type largerOfCuts struct{ twoCut }

func (p *largerOfCuts) Relative(phi, theta float64) float64 {
	return ratioOfLoss(p.kept(max(p.h.Loss(phi), p.v.Loss(theta))))
}

func (p *largerOfCuts) RelativeRange(phi, theta Interval) Interval {
	hLo, hHi := p.h.LossRange(phi)
	vLo, vHi := p.v.LossRange(theta)
	return rangeOfLoss(p.kept(max(hLo, vLo)), p.kept(max(hHi, vHi)))
}

// WithoutFloor returns a two-beamwidth pattern whose loss goes on falling off as
// the square of the angle, without the front to back ratio that bounds it, down
// to the lowest relative gain that patterns hold; ok is false for other
// patterns. It is there to tell what the floor is worth, not to be chosen: an
// antenna does radiate behind itself.
func WithoutFloor(p Pattern) (q Pattern, ok bool) {
	t, ok := p.(*twoBeamwidth)
	if !ok {
		return nil, false
	}
	c := *t
	c.floor = math.Max(c.floor, maxLossDB)
	return &c, true
}
