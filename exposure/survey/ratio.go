package survey

import (
	"fmt"
	"slices"

	"example.org/standclear/exposure"
	"example.org/standclear/limits"
)

// planeWaveFromHz is the frequency from which a reading of E or H stands for the
// other by the plane wave; below it, near fields are the rule and each is
// measured for itself (ICNIRP 1998 and 2020 ask both below 30 MHz).
const planeWaveFromHz = 30e6

// part is one figure that is held against the limits: a reading, the mean of a
// group, or the largest running mean of a log.
type part struct {
	id       string
	kind     string // reading, group, series
	place    exposure.Place
	lo, hi   float64
	quantity Quantity
	detector Detector
	shareOf  string
	share    float64 // shaped: the ratio
	e        float64 // V/m
	largestE float64 // over heights; e where there is one only
	largestS float64 // shaped: over heights
	scale    float64 // field factor to maximum traffic, in e already
	antennas []string
	expanded *float64
	below    bool
	reasons  []string
	heights  []exposure.Place // the points that the figure is of
	result   *Judgement
	// byAverage is the largest running mean of a log by averaging time in s.
	byAverage map[float64]float64
	whole     *part // of a rest: the reading it is left of
	compare   *Comparison
}

// levels are the levels of one class that a part is held against.
type levels struct {
	at      []limits.At
	reasons []string
	remarks []string
}

// levelsFor returns what holds for a class over the part's band.
func (s *session) levelsFor(p *part, class string) levels {
	var l levels
	table := s.site.Limits
	var gaps []string
	if p.lo == p.hi {
		for _, a := range table.At(class, p.lo) {
			if !a.Covered() {
				l.reasons = append(l.reasons, fmt.Sprintf("no level of %s at %s", a.Group, megahertz(p.lo)))
				continue
			}
			l.at = append(l.at, a)
		}
	} else {
		for _, a := range table.LowestOver(class, p.lo, p.hi) {
			for _, g := range a.Gaps {
				text := fmt.Sprintf("no level of %s from %s", a.Group, bandText(g.FromHz, g.ToHz))
				if s.sourceIn(g.FromHz, g.ToHz) {
					l.reasons = append(l.reasons, text+", where the inventory has a transmitter")
				} else {
					gaps = append(gaps, text)
				}
			}
			if a.Covered() {
				l.at = append(l.at, a.At)
			}
		}
	}
	l.remarks = gaps
	for _, a := range l.at {
		if a.Group.Kind == limits.Peak && p.detector != Peak && !a.None {
			l.reasons = append(l.reasons, fmt.Sprintf("levels of %s are not assessed by an rms reading", a.Group))
		}
	}
	if p.lo < planeWaveFromHz && p.quantity != ShareOfLimit {
		l.reasons = append(l.reasons, s.otherField(p, l.at)...)
	}
	return l
}

// otherField says what below 30 MHz a reading of E or H alone leaves open.
func (s *session) otherField(p *part, at []limits.At) []string {
	top := min(p.hi, planeWaveFromHz)
	if p.lo != p.hi && !s.sourceIn(p.lo, top) {
		return nil
	}
	for _, a := range at {
		switch {
		case p.quantity != MagneticField && (a.H > 0 || a.B > 0) && !s.measured(p, MagneticField):
			return []string{fmt.Sprintf("below %s H has levels of its own and was not measured here", megahertz(planeWaveFromHz))}
		case p.quantity == MagneticField && a.E > 0 && !s.measured(p, ElectricField):
			return []string{fmt.Sprintf("below %s E has levels of its own and was not measured here", megahertz(planeWaveFromHz))}
		}
	}
	return nil
}

// measured reports whether the other field was measured at the place over the
// part's band as well.
func (s *session) measured(p *part, q Quantity) bool {
	return slices.ContainsFunc(s.survey.Readings, func(r Reading) bool {
		if r.Quantity != q || r.At.ID != p.place.ID || r.At.ID == "" {
			return false
		}
		in := s.instruments[r.Instrument]
		c := prepare(&r, in, "")
		return c.lo <= p.lo*(1+edge) && c.hi >= min(p.hi, planeWaveFromHz)*(1-edge)
	})
}

func (s *session) sourceIn(lo, hi float64) bool {
	return slices.ContainsFunc(s.site.Sources, func(x exposure.Source) bool {
		return x.FrequencyHz >= lo*(1-edge) && x.FrequencyHz <= hi*(1+edge) && s.active(&x)
	})
}

func (s *session) active(x *exposure.Source) bool {
	return !s.site.OnlyOn || x.State != exposure.Standby
}

// fieldOf returns what a field of a part is held against the levels with. The
// plane wave gives what was not measured; below 30 MHz only what was measured
// counts.
func (p *part) fieldOf(e float64) limits.Field {
	f := limits.Field{E: e, H: exposure.HFromE(e), S: exposure.SFromE(e)}
	f.B = exposure.BFromH(f.H)
	if p.lo == p.hi && p.lo < planeWaveFromHz {
		if p.quantity == MagneticField {
			f.E = 0
		} else {
			f.H, f.B = 0, 0
		}
	}
	if p.lo != p.hi && p.lo < planeWaveFromHz && p.quantity == ElectricField {
		// An E probe over a wide band: the lowest H level stands at some other
		// frequency than the lowest E level, and H was not measured there.
		f.H, f.B = 0, 0
	}
	return f
}

// ratio returns the exposure ratio of a part for a class with its field times a
// factor, and the group that governs. The mean over heights is compared where
// every row that holds says so, else the largest; forMean takes the mean always.
func (p *part) ratio(l levels, factor float64, forMean bool) (float64, string) {
	if p.quantity == ShareOfLimit {
		x := p.share
		if !forMean {
			x = max(x, p.largestS)
		}
		return x * factor * factor, "share of the limit as read"
	}
	best, governed := 0.0, ""
	for _, a := range l.at {
		if a.Group.Kind == limits.Peak && p.detector != Peak {
			continue
		}
		e := p.e
		if !forMean && (a.OverBody != limits.BodyMean || a.Group.Region == limits.Local || a.Group.Effect == limits.Stimulation) {
			e = max(e, p.largestE)
		}
		if own, ok := p.byAverage[a.AverageS]; ok {
			e = own // each level is compared with the mean over its own time
		}
		if r := a.Ratio(p.fieldOf(e * factor)); r > best || governed == "" {
			best, governed = r, a.Group.String()
		}
	}
	return best, governed
}

// judge makes the verdict of a part for its class.
func (s *session) judge(p *part) (Judgement, []string) {
	if p.quantity == ShareOfLimit {
		return s.verdict(p, p.shareOf, levels{}), nil
	}
	classes := []string{p.place.Class}
	if p.place.Class == "" {
		classes = s.site.Limits.Classes()
	}
	var worst Judgement
	var remarks []string
	for i, class := range classes {
		l := s.levelsFor(p, class)
		j := s.verdict(p, class, l)
		if i == 0 || j.ExposureRatio > worst.ExposureRatio {
			worst, remarks = j, l.remarks
		}
	}
	if p.place.Class == "" {
		remarks = append(remarks, "no class is stated for the place: the one with the largest ratio is shown")
	}
	return worst, remarks
}

func (s *session) verdict(p *part, class string, l levels) Judgement {
	reasons := append(slices.Clone(p.reasons), l.reasons...)
	if p.quantity != ShareOfLimit && len(l.at) == 0 && len(l.reasons) == 0 {
		reasons = append(reasons, fmt.Sprintf("no level for %q at %s", class, bandText(p.lo, p.hi)))
	}
	j := decide(s.rule, class, func(k float64) (float64, string) { return p.ratio(l, k, false) }, p.expanded, reasons)
	if mean, governed := p.ratio(l, 1, true); mean != float64(j.ExposureRatio) {
		// The figure printed is that of the mean; the verdict rests on the largest.
		text := fmt.Sprintf("the largest of the heights has ratio %.3g, and the limit rows compare the largest over the body", float64(j.ExposureRatio))
		if j.Reason != "" {
			text = j.Reason + "; " + text
		}
		j.Reason, j.ExposureRatio, j.GovernedBy = text, exposure.Number(mean), governed
	}
	return j
}
