package antenna

import (
	"math"
	"sort"
)

// Summary is what there is to say of a pattern: what `antenna show` prints.
type Summary struct {
	Horizontal CutSummary `json:"horizontal"`
	Vertical   CutSummary `json:"vertical"`
	// Directivity is by integration over the sphere; Gain is the stated one, 0
	// where none is; DifferenceDB is directivity less gain.
	Directivity  Gain     `json:"directivity"`
	Gain         Gain     `json:"gain"`
	DifferenceDB float64  `json:"difference_db"`
	Round        bool     `json:"round"`
	Caveats      []string `json:"caveats"`
	Warnings     []string `json:"warnings"`

	// HorizontalCut and VerticalCut are for drawing.
	HorizontalCut *Cut `json:"-"`
	VerticalCut   *Cut `json:"-"`
}

// CutSummary describes one cut. Angles are in rad; a width of 0 means that the
// cut never falls that far.
type CutSummary struct {
	PeakRad             float64    `json:"peak_rad"`
	HalfPowerWidthRad   float64    `json:"half_power_width_rad"`
	TenDBWidthRad       float64    `json:"ten_db_width_rad"`
	FrontToBackDB       float64    `json:"front_to_back_db"`        // loss opposite the peak
	FrontToBackRegionDB float64    `json:"front_to_back_region_db"` // least loss within 30 deg of there
	HasBack             bool       `json:"has_back"`
	SideLobes           []SideLobe `json:"side_lobes"` // the strongest first
	Points              int        `json:"points"`
}

// SideLobe is a local peak outside the main lobe.
type SideLobe struct {
	AngleRad float64 `json:"angle_rad"`
	LevelDB  float64 `json:"level_db"` // below the peak, negative
}

// Summarize describes a pattern; peak is its stated gain, 0 where there is none.
// File patterns have their own cuts: use File.Summarize.
func Summarize(p Pattern, peak Gain) (Summary, error) {
	h, v, err := CutsOf(p)
	if err != nil {
		return Summary{}, err
	}
	return summarize(p, peak, h, v), nil
}

// Summarize describes the file's pattern; peak is the gain stated elsewhere, 0
// to take the file's own.
func (f *File) Summarize(peak Gain) Summary {
	if peak == 0 && f.HasGain {
		peak = f.PeakGain
	}
	s := summarize(f.Pattern, peak, f.Horizontal, f.Vertical)
	own := s.Warnings
	s.Warnings = append([]string(nil), f.Warnings...)
	if !f.Envelope && !(f.HasGain && peak == f.PeakGain) {
		// With the file's own gain the reader has said it already.
		s.Warnings = append(s.Warnings, own...)
	}
	return s
}

func summarize(p Pattern, peak Gain, h, v *Cut) Summary {
	s := Summary{
		Horizontal: h.Summary(), Vertical: v.Summary(),
		Directivity: Directivity(p), Gain: peak,
		HorizontalCut: h, VerticalCut: v,
	}
	if peak > 0 {
		s.DifferenceDB = s.Directivity.DBi() - peak.DBi()
		if !bounding(p) {
			if err := describeGain(s.Directivity, peak, 0); err != nil {
				s.Warnings = append(s.Warnings, err.Error())
			}
		}
	}
	if r, ok := p.(Round); ok {
		s.Round = r.IsRound()
	}
	if c, ok := p.(Coverage); ok {
		s.Caveats = c.Caveats()
	}
	return s
}

// Summary describes the cut.
func (c *Cut) Summary() CutSummary {
	s := CutSummary{PeakRad: c.PeakRad(), Points: len(c.samples), SideLobes: c.SideLobes()}
	s.HalfPowerWidthRad, _ = c.Beamwidth(3)
	s.TenDBWidthRad, _ = c.Beamwidth(10)
	if c.closed {
		s.HasBack = true
		behind := c.round(s.PeakRad + math.Pi)
		s.FrontToBackDB = c.Loss(behind)
		const region = 30 * math.Pi / 180
		s.FrontToBackRegionDB, _ = c.LossRange(Interval{behind - region, behind + region})
	}
	return s
}

// SideLobes returns the local peaks outside the main lobe, the strongest first:
// those that stand 0.5 dB or more above the dips on both sides.
func (c *Cut) SideLobes() []SideLobe {
	peak := c.PeakRad()
	var lobes []SideLobe
	for _, sense := range [2]float64{1, -1} {
		lobes = append(lobes, c.lobesFrom(peak, sense)...)
	}
	sort.SliceStable(lobes, func(i, j int) bool { return lobes[i].LevelDB > lobes[j].LevelDB })
	// The lobe opposite the peak is met from both sides.
	var once []SideLobe
	for _, l := range lobes {
		if n := len(once); n == 0 || math.Abs(math.Remainder(l.AngleRad-once[n-1].AngleRad, 2*math.Pi)) > 1e-9 {
			once = append(once, l)
		}
	}
	return once
}

func (c *Cut) lobesFrom(peak, sense float64) []SideLobe {
	const stands = 0.5
	reach := 2 * math.Pi
	if !c.closed {
		reach = math.Pi
	}
	half := math.Pi
	var lobes []SideLobe
	dip, best, at := 0.0, math.Inf(1), 0.0
	for _, d := range c.distances(peak, sense, reach) {
		l := c.Loss(c.round(peak + sense*d))
		if math.IsInf(best, 1) {
			if l <= dip-stands {
				best, at = l, d
			}
			dip = max(dip, l)
			continue
		}
		if l < best {
			best, at = l, d
		}
		if l >= best+stands {
			if at <= half+1e-9 {
				lobes = append(lobes, SideLobe{math.Remainder(peak+sense*at, 2*math.Pi), -best})
			}
			if at > half {
				break
			}
			dip, best = l, math.Inf(1)
		}
	}
	return lobes
}

// CutsOf samples the cuts of a pattern through its peak: the vertical one in the
// plane of boresight, the horizontal one at the elevation of its peak; a point
// every 0.1 deg, and every 0.005 deg within a degree of the peak.
func CutsOf(p Pattern) (horizontal, vertical *Cut, err error) {
	along := func(a float64) float64 {
		if math.Abs(a) <= math.Pi/2 {
			return lossOfRatio(p.Relative(0, a))
		}
		return lossOfRatio(p.Relative(math.Pi, math.Copysign(math.Pi, a)-a))
	}
	peak, best := 0.0, math.Inf(1)
	// From the horizon outward, so that a flat pattern peaks there.
	for i := 0; i <= 18000; i++ {
		for _, a := range [2]float64{radians(0.005) * float64(i), -radians(0.005) * float64(i)} {
			if l := along(a); l < best-1e-9 {
				peak, best = a, l
			}
		}
	}
	if vertical, err = NewCut(fineSamples(peak, along), true); err != nil {
		return nil, nil, err
	}
	horizontal, err = NewCut(fineSamples(0, func(a float64) float64 { return lossOfRatio(p.Relative(a, peak)) }), true)
	return horizontal, vertical, err
}

// fineSamples samples f round the circle, more finely about the peak.
func fineSamples(peak float64, f func(float64) float64) []Sample {
	var s []Sample
	for i := -1800; i < 1800; i++ {
		a := float64(i) * 0.1
		if d := math.Abs(a - degrees(peak)); d > 1.0001 {
			s = append(s, Sample{radians(a), f(radians(a))})
		}
	}
	for i := -200; i <= 200; i++ {
		a := math.Remainder(peak+radians(0.005)*float64(i), 2*math.Pi)
		s = append(s, Sample{a, f(a)})
	}
	return s
}
