package antenna

import (
	"errors"
	"math"
)

// twoCut is a sphere made of a horizontal and a vertical cut.
type twoCut struct {
	h, v   *Cut
	back   bool    // the vertical cut has a back half
	behind float64 // vertical cut's loss at 180 deg
	most   float64 // the largest loss in either cut
}

// TwoCuts returns the sphere that two cuts span: with w = |phi|/180 deg the loss
// is Ah(phi) + (1-w) Av(theta) + w (Av(180 deg - theta) - Av(180 deg)), kept
// between 0 and the largest loss in either cut; w = 0 where the vertical cut has
// no back half.
//
// The horizontal cut is closed, angles clockwise from boresight seen from above.
// The vertical cut's angles rise from the horizon in front toward the antenna's
// top; it is closed, or reaches at least from -90 to 90 deg. The sum is an
// approximation, not an envelope: off both cuts it may stand below or above the
// antenna. Source: [TWO-CUT].
func TwoCuts(horizontal, vertical *Cut) (Pattern, error) {
	if !horizontal.Closed() {
		return nil, errors.New("the horizontal cut does not run round the circle")
	}
	s := vertical.samples
	if !vertical.Closed() && (s[0].AngleRad > -math.Pi/2+1e-9 || s[len(s)-1].AngleRad < math.Pi/2-1e-9) {
		return nil, errors.New("the vertical cut does not reach from -90 to 90 deg")
	}
	p := &twoCut{h: horizontal, v: vertical, back: vertical.Closed()}
	p.most = max(horizontal.Largest(), vertical.Largest())
	if p.back {
		p.behind = vertical.Loss(math.Pi)
	}
	return p, nil
}

func (p *twoCut) kept(a float64) float64 { return max(0, min(a, p.most)) }

func (p *twoCut) Relative(phi, theta float64) float64 {
	a := p.h.Loss(phi)
	if !p.back {
		return ratioOfLoss(p.kept(a + p.v.Loss(theta)))
	}
	w := min(1, math.Abs(phi)*(1/math.Pi))
	a += (1-w)*p.v.Loss(theta) + w*(p.v.Loss(math.Pi-theta)-p.behind)
	return ratioOfLoss(p.kept(a))
}

func (p *twoCut) RelativeRange(phi, theta Interval) Interval {
	hLo, hHi := p.h.LossRange(phi)
	vLo, vHi := p.v.LossRange(theta)
	if p.back {
		bLo, bHi := p.v.LossRange(Interval{math.Pi - theta.Hi, math.Pi - theta.Lo})
		bLo, bHi = bLo-p.behind, bHi-p.behind
		w0, w1 := foldAzimuth(phi)
		w0, w1 = w0*(1/math.Pi), min(1, w1*(1/math.Pi))
		// Linear in w, so the ends of w hold the extremes.
		vLo, vHi = min((1-w0)*vLo+w0*bLo, (1-w1)*vLo+w1*bLo), max((1-w0)*vHi+w0*bHi, (1-w1)*vHi+w1*bHi)
	}
	const slack = 1e-12
	return rangeOfLoss(p.kept(hLo+vLo-slack), p.kept(hHi+vHi+slack))
}

func (p *twoCut) HorizontalCut(phi float64) float64 { return ratioOfLoss(p.h.Loss(phi)) }

func (p *twoCut) HorizontalCutRange(phi Interval) Interval {
	return rangeOfLoss(p.h.LossRange(phi))
}

func (p *twoCut) Caveats() []string {
	c := []string{"sum of two cuts, not an envelope"}
	if !p.back {
		c = append(c, "the vertical cut has no back half: its front half stands for it")
	}
	return c
}
