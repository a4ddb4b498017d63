package antenna

import (
	"math"
	"sort"
	"strings"
)

// joined makes one cut of all cuts of a plane. The polarization pair of a cut is
// antenna/source: for each antenna port the powers of its co- and cross-polar
// cuts add (both measured against one maximum, as the format's DBR has it), and
// the ports' largest stands (a choice of this project: no beam is lost).
func (t *nsmaText) joined(cuts []*nsmaCut, vertical, relative bool) (*Cut, error) {
	ports := map[string][]*Cut{}
	levels := map[*Cut]float64{}
	var order []string
	most := math.Inf(-1)
	for _, c := range cuts {
		pts, peak, err := t.losses(c, relative)
		if err != nil {
			return nil, err
		}
		cut, err := t.f.cutOf(c.name, vertical, pts)
		if err != nil {
			return nil, err
		}
		if len(cuts) == 1 {
			return cut, nil
		}
		port, source, ok := strings.Cut(c.polarization, "/")
		if !ok || port == "" || source == "" {
			return nil, faultAt(c.line, c.polarization, "does not tell this %s cut from the others; write POLARI as antenna/source, such as V/V", c.name)
		}
		if _, known := ports[port]; !known {
			order = append(order, port)
		}
		ports[port] = append(ports[port], cut)
		levels[cut] = peak
		most = max(most, peak)
	}
	var angles []float64
	closed := true
	for _, port := range order {
		for _, c := range ports[port] {
			closed = closed && c.closed
			for _, s := range c.samples {
				angles = append(angles, s.AngleRad)
			}
		}
	}
	sort.Float64s(angles)
	var s []Sample
	for i, a := range angles {
		if i > 0 && a-angles[i-1] < 1e-9 || !closed && math.Abs(a) > math.Pi/2+1e-9 {
			continue
		}
		best := 0.0
		for _, port := range order {
			sum := 0.0
			for _, c := range ports[port] {
				sum += ratioOfLoss(c.Loss(a) + most - levels[c])
			}
			best = max(best, sum)
		}
		s = append(s, Sample{a, lossOfRatio(best)})
	}
	t.f.forgiveOnce("several polarizations: the powers of one port add, the larger of the ports stands")
	c, err := NewCut(s, closed)
	if err != nil {
		return nil, faultAt(cuts[0].line, "", "%v", err)
	}
	return c, nil
}

// losses turns the magnitudes of a cut into losses, and returns the cut's peak.
func (t *nsmaText) losses(c *nsmaCut, relative bool) ([]point, float64, error) {
	peak := math.Inf(-1)
	pts := make([]point, len(c.points))
	for i, p := range c.points {
		peak = max(peak, p.db)
		pts[i] = point{p.deg, -p.db, p.line}
		if relative && p.db > repeatDB {
			return nil, 0, faultAt(p.line, "", "the magnitude %g dB lies above the maximum it is relative to; DBR values are zero or negative", p.db)
		}
	}
	return pts, peak, nil
}
