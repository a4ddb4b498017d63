package antenna

import (
	"errors"
	"fmt"
	"math"
)

// ActivePanel describes a panel that steers its beam, after ITU-R M.2101.
type ActivePanel struct {
	// The element: half-power beamwidths in rad, front-to-back ratio Am and
	// side-lobe limit SLA in dB.
	HorizontalBeamwidthRad, VerticalBeamwidthRad float64
	FrontToBackDB, SideLobeDB                    float64
	// Rows lie above each other, columns side by side; spacings from element to
	// element in wavelengths.
	Rows, Columns             int
	RowSpacing, ColumnSpacing float64
	// The beams that may be formed: azimuths in rad clockwise from boresight,
	// and tilts in rad, down positive. Every beam in both ranges is counted.
	ScanRad, TiltRad Interval
}

// active is the envelope of every beam of a panel.
type active struct {
	element    twoBeamwidth
	sla        float64
	vertical   comb
	horizontal comb
	dv, dh     float64
	v, h       Interval // of the beams: sin tilt, and cos tilt sin scan
}

// Active returns the envelope of the patterns of an ITU-R M.2101 panel over the
// beams that may be formed, relative to the peak gain of the beam at boresight
// (that of the element times Rows times Columns).
//
// One beam is A_E(phi, theta) |sum w v|^2: with u_v = sin theta + sin tilt and u_h
// = cos theta sin phi - cos tilt sin scan, the array factor is the product of
// D(N, d u) = (sin(pi N d u)/(N sin(pi d u)))^2 over rows and columns. Over all
// beams, u_v and u_h each sweep an interval; D is replaced by its largest value
// at that distance from a main lobe or beyond, the two intervals taken as
// independent. So the result bounds the pattern of every single beam from above,
// nulls filled to the side lobes that follow; it is no pattern of one beam.
// Source: [M2101].
func Active(a ActivePanel) (Pattern, error) {
	if err := a.check(); err != nil {
		return nil, err
	}
	cLo, cHi := min(math.Cos(a.TiltRad.Lo), math.Cos(a.TiltRad.Hi)), max(math.Cos(a.TiltRad.Lo), math.Cos(a.TiltRad.Hi))
	if a.TiltRad.Contains(0) {
		cHi = 1
	}
	s0, s1 := math.Sin(a.ScanRad.Lo), math.Sin(a.ScanRad.Hi)
	return &active{
		element:    twoBeamwidth{12 / (a.HorizontalBeamwidthRad * a.HorizontalBeamwidthRad), 12 / (a.VerticalBeamwidthRad * a.VerticalBeamwidthRad), a.FrontToBackDB, 0},
		sla:        a.SideLobeDB,
		vertical:   newComb(a.Rows),
		horizontal: newComb(a.Columns),
		dv:         a.RowSpacing,
		dh:         a.ColumnSpacing,
		v:          Interval{math.Sin(a.TiltRad.Lo), math.Sin(a.TiltRad.Hi)},
		h:          Interval{min(cLo*s0, cHi*s0), max(cLo*s1, cHi*s1)},
	}, nil
}

func (a ActivePanel) check() error {
	if err := checkBeamwidth("horizontal", a.HorizontalBeamwidthRad, 2*math.Pi); err != nil {
		return err
	}
	if err := checkBeamwidth("vertical", a.VerticalBeamwidthRad, 2*math.Pi); err != nil {
		return err
	}
	if !(a.FrontToBackDB > 0 && a.FrontToBackDB <= maxLossDB && a.SideLobeDB > 0 && a.SideLobeDB <= maxLossDB) {
		return fmt.Errorf("front to back and side lobes of an element lie between 0 and %d dB", maxLossDB)
	}
	if a.Rows < 1 || a.Columns < 1 || a.Rows > 1024 || a.Columns > 1024 {
		return errors.New("an active panel has between 1 and 1024 rows and columns of elements")
	}
	if a.Rows > 1 && !(a.RowSpacing > 0 && a.RowSpacing <= 10) || a.Columns > 1 && !(a.ColumnSpacing > 0 && a.ColumnSpacing <= 10) {
		return errors.New("the spacing of elements lies between 0 and 10 wavelengths")
	}
	for _, r := range []Interval{a.ScanRad, a.TiltRad} {
		if !(r.Lo <= r.Hi && r.Lo > -math.Pi/2 && r.Hi < math.Pi/2) {
			return errors.New("the beams of an active panel lie between -90 and 90 deg of scan and of tilt")
		}
	}
	return nil
}

func (p *active) elementLoss(phi, theta float64) float64 {
	e := &p.element
	return min(min(e.kh*phi*phi, e.floor)+min(e.kv*theta*theta, p.sla), e.floor)
}

// distance returns how far from a whole number the nearest point of [lo, hi] is.
func distance(lo, hi float64) float64 {
	up := math.Ceil(lo)
	if up <= hi {
		return 0
	}
	return min(lo-(up-1), up-hi)
}

// farthest returns the largest distance over intervals [lo+x, hi+x], 0 <= x <=
// reach.
func farthest(lo, hi, reach float64) float64 {
	mid := (lo + hi) / 2
	if math.Floor(mid+0.5) != math.Floor(mid+reach+0.5) || math.Ceil(mid-0.5) == mid-0.5 {
		return max(0, 0.5-(hi-lo)/2)
	}
	return max(distance(lo, hi), distance(lo+reach, hi+reach))
}

func (p *active) Relative(phi, theta float64) float64 {
	s, c := math.Sincos(theta)
	y := c * math.Sin(phi)
	g := ratioOfLoss(p.elementLoss(phi, theta))
	if p.vertical.n > 1 {
		g *= p.vertical.beyond(distance(p.dv*(s+p.v.Lo), p.dv*(s+p.v.Hi)))
	}
	if p.horizontal.n > 1 {
		g *= p.horizontal.beyond(distance(p.dh*(y-p.h.Hi), p.dh*(y-p.h.Lo)))
	}
	return min(1, g)
}

func (p *active) RelativeRange(phi, theta Interval) Interval {
	fLo, fHi := foldAzimuth(phi)
	tLo, tHi := foldElevation(theta)
	lo, hi := ratioOfLoss(p.elementLoss(fHi, tHi)), ratioOfLoss(p.elementLoss(fLo, tLo))
	if p.vertical.n > 1 {
		s0, s1 := math.Sin(theta.Lo), math.Sin(theta.Hi)
		r := p.vertical.over(p.dv*(s0+p.v.Lo), p.dv*(s0+p.v.Hi), p.dv*(s1-s0))
		lo, hi = lo*r.Lo, hi*r.Hi
	}
	if p.horizontal.n > 1 {
		y0, y1 := sineRange(phi)
		c0, c1 := math.Cos(tHi), math.Cos(tLo)
		y0, y1 = min(y0*c0, y0*c1), max(y1*c0, y1*c1)
		r := p.horizontal.over(p.dh*(y0-p.h.Hi), p.dh*(y0-p.h.Lo), p.dh*(y1-y0))
		lo, hi = lo*r.Lo, hi*r.Hi
	}
	return widened(lo, hi)
}

// sineRange returns the extremes of sin phi over an interval that starts in
// [-pi, pi] and is at most a turn wide.
func sineRange(phi Interval) (lo, hi float64) {
	a, b := math.Sin(phi.Lo), math.Sin(phi.Hi)
	lo, hi = min(a, b), max(a, b)
	for _, quarter := range [...]float64{math.Pi / 2, 5 * math.Pi / 2} {
		if phi.Lo <= quarter && phi.Hi >= quarter {
			hi = 1
		}
	}
	for _, quarter := range [...]float64{-math.Pi / 2, 3 * math.Pi / 2} {
		if phi.Lo <= quarter && phi.Hi >= quarter {
			lo = -1
		}
	}
	return lo, hi
}

func (p *active) Caveats() []string {
	return []string{"envelope over the beams of the scan range, not the pattern of one beam"}
}
