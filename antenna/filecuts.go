package antenna

import (
	"math"
	"sort"
)

// point is a sample of a cut as a file has it.
type point struct {
	deg, db float64 // db: a loss, or a gain where the file has gains
	line    int
}

// What is allowed of a file's cuts (choices of this project).
const (
	repeatDB    = 0.05 // one direction given twice, as -180 and 180
	gapDeg      = 5.0  // a gap is a fault beyond this and 2.5 usual steps
	gapSteps    = 2.5
	asymmetryDB = 0.5 // a vertical cut more lopsided than this needs its sense
	cutsDB      = 0.5 // between the peak gains of the two cuts
	offHorizon  = 75.0
)

// cutOf makes a cut of a file's points, whose db is a loss. A horizontal cut
// must run round the circle; a vertical one may hold the front half only.
func (f *File) cutOf(name string, vertical bool, pts []point) (*Cut, error) {
	if len(pts) < 3 {
		line := 0
		if len(pts) > 0 {
			line = pts[0].line
		}
		return nil, faultAt(line, "", "the %s cut has %d points; it needs the whole circle", name, len(pts))
	}
	p := append([]point(nil), pts...)
	seen := make(map[float64]int, len(p))
	for i := range p {
		if math.Abs(p[i].deg) > 360 {
			return nil, faultAt(p[i].line, "", "the angle %g deg of the %s cut is not between -360 and 360", p[i].deg, name)
		}
		if at, ok := seen[p[i].deg]; ok {
			return nil, faultAt(p[i].line, "", "the angle %g deg of the %s cut repeats line %d; give each angle once", p[i].deg, name, at)
		}
		seen[p[i].deg] = p[i].line
		switch {
		case p[i].deg >= 180:
			p[i].deg -= 360
		case p[i].deg < -180:
			p[i].deg += 360
		}
	}
	sort.SliceStable(p, func(i, j int) bool { return p[i].deg < p[j].deg })
	once := p[:1]
	for _, q := range p[1:] {
		last := &once[len(once)-1]
		if q.deg-last.deg > 1e-9 {
			once = append(once, q)
			continue
		}
		if math.Abs(q.db-last.db) > repeatDB {
			return nil, faultAt(q.line, "", "the %s cut gives one direction twice (see line %d) with values %.2f dB apart", name, last.line, math.Abs(q.db-last.db))
		}
		f.forgive("line %d: the %s cut gives the direction of line %d again; the lesser loss stands", q.line, name, last.line)
		last.db = min(last.db, q.db)
	}
	p = once
	closed, err := f.closure(name, vertical, p)
	if err != nil {
		return nil, err
	}
	s := make([]Sample, len(p))
	for i, q := range p {
		s[i] = Sample{radians(q.deg), q.db}
	}
	if !closed {
		// The ends stand at the poles to within gapDeg; hold them there.
		s[0].AngleRad = min(s[0].AngleRad, -math.Pi/2)
		s[len(s)-1].AngleRad = max(s[len(s)-1].AngleRad, math.Pi/2)
	}
	c, err := NewCut(s, closed)
	if err != nil {
		return nil, faultAt(p[0].line, "", "%s cut: %v", name, err)
	}
	return c, nil
}

// closure tells whether sorted points run round the circle, and refuses a gap.
func (f *File) closure(name string, vertical bool, p []point) (bool, error) {
	n := len(p)
	steps := make([]float64, n)
	for i := range p {
		next := p[(i+1)%n].deg
		if i == n-1 {
			next += 360
		}
		steps[i] = next - p[i].deg
	}
	sorted := append([]float64(nil), steps...)
	sort.Float64s(sorted)
	allowed := max(gapDeg, gapSteps*sorted[n/2]) + 1e-9
	back := vertical && p[0].deg >= -90-1e-9 && p[n-1].deg <= 90+1e-9
	for i, step := range steps {
		if step <= allowed {
			continue
		}
		if back && i == n-1 {
			if p[0].deg > -90+1e-9 || p[n-1].deg < 90-1e-9 {
				if p[0].deg+90 > allowed || 90-p[n-1].deg > allowed {
					return false, faultAt(p[i].line, "", "the %s cut reaches from %g to %g deg only; it needs -90 to 90, or the whole circle", name, p[0].deg, p[n-1].deg)
				}
				f.forgive("the %s cut ends at %g and %g deg; its end values are held to the poles", name, p[0].deg, p[n-1].deg)
			}
			return false, nil
		}
		return false, faultAt(p[i].line, "", "the %s cut has a gap from %g to %g deg, in which a beam could hide; give every angle", name, p[i].deg, p[i].deg+step)
	}
	return true, nil
}

// useCuts makes the file's pattern of its two cuts. sense is what the file says
// of the vertical cut's positive angles; line is where that cut starts.
func (f *File) useCuts(h, v *Cut, sense, told VerticalSense, line int) error {
	if told != SenseUnknown {
		if sense != SenseUnknown && told != sense {
			f.warn("the positive angles of the vertical cut count %s, as the row says, though the file says %s", told, sense)
		}
		sense = told
	} else if sense == SenseUp && f.HasStatedTilt && math.Abs(f.StatedTiltRad) > tiltTolerance &&
		math.Abs(v.frontPeak()-f.StatedTiltRad) <= tiltTolerance && math.Abs(v.frontPeak()+f.StatedTiltRad) > tiltTolerance {
		// The format's rule and the file's own tilt contradict each other.
		return faultAt(line, "", "the elevation cut peaks %.1f deg above the horizon though the file states %.1f deg of downtilt; say which way its positive angles point in the column \"vertical cut\"",
			degrees(v.frontPeak()), degrees(f.StatedTiltRad))
	}
	if sense == SenseUnknown {
		if a := v.Asymmetry(); a > asymmetryDB {
			return faultAt(line, "", "the vertical cut is not symmetric (by %.1f dB) and the file does not say whether positive angles point up or down; say it in the column \"vertical cut\"", a)
		}
	}
	if sense == SenseDown {
		v = v.Mirrored()
	}
	if peak := degrees(v.frontPeak()); math.Abs(peak) > offHorizon {
		return faultAt(line, "", "the vertical cut peaks at %.1f deg from the horizon in front; its angles must count from there (not from the zenith, not from behind)", peak)
	}
	p, err := TwoCuts(h, v)
	if err != nil {
		return faultAt(line, "", "%v", err)
	}
	f.Pattern, f.Horizontal, f.Vertical = p, h, v
	f.PeakTiltRad = -v.frontPeak()
	f.PeakAzimuthRad = h.PeakRad()
	f.checkPeaks()
	return nil
}

// frontPeak returns the elevation of the vertical cut's peak: in front, unless
// what is behind is more than a dB stronger (a round antenna has both alike).
func (c *Cut) frontPeak() float64 {
	if peak, loss := c.peakWithin(math.Pi/2 + 1e-9); loss <= 1 {
		return peak
	}
	return c.PeakRad()
}

func (f *File) checkPeaks() {
	if f.HasStatedTilt && math.Abs(f.StatedTiltRad-f.PeakTiltRad) > tiltTolerance {
		f.warn("the file states an electrical tilt of %.1f deg, but its vertical cut peaks at %.1f deg of tilt", degrees(f.StatedTiltRad), degrees(f.PeakTiltRad))
	}
	for _, c := range []struct {
		name string
		cut  *Cut
	}{{"horizontal", f.Horizontal}, {"vertical", f.Vertical}} {
		w, ok := c.cut.Beamwidth(3)
		if !ok {
			continue
		}
		if step := c.cut.stepAt(c.cut.PeakRad()); step > w/3 {
			f.warn("the %s cut has a point every %.3g deg only, for a beam of %.3g deg", c.name, degrees(step), degrees(w))
		}
	}
}
