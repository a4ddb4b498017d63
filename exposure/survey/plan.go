package survey

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"example.org/standclear/exposure"
)

// Planned is a reading to be taken on site.
type Planned struct {
	ID            string  `json:"id"`
	Place         string  `json:"place"`
	HeightM       float64 `json:"height_m"`
	Group         string  `json:"group"`
	Instrument    string  `json:"instrument"`
	ExpectedVPerM float64 `json:"expected_v_per_m"`
	ExpectedRatio float64 `json:"expected_ratio"`
	Settings      string  `json:"settings"`
}

// standHeights are the heights in m over which the field on a standing person
// is averaged by three points (EN 50492 and ECC Recommendation (02)04, from
// memory).
var standHeights = []float64{1.1, 1.5, 1.7}

// Plan lists the readings to be taken: three heights where a person stands at a
// place, the point itself elsewhere; the place with the largest expected ratio
// for its class first. taken are the ids in use already.
func Plan(ctx context.Context, model *exposure.Model, s *Survey) ([]Planned, error) {
	site := model.Site()
	taken := map[string]bool{}
	for _, r := range s.Readings {
		taken[r.ID], taken[r.Group] = true, true
	}
	for _, r := range s.Series {
		taken[r.Reading.ID] = true
	}
	type stop struct {
		rows  []Planned
		worst float64
	}
	var stops []stop
	for i := range site.Places {
		p := site.Places[i]
		heights := []float64{0}
		if p.To > p.From {
			heights = nil
			for _, h := range standHeights {
				if h >= p.From && h <= p.To {
					heights = append(heights, h)
				}
			}
			if len(heights) == 0 {
				heights = []float64{(p.From + p.To) / 2}
			}
		}
		var at []exposure.Place
		for _, h := range heights {
			q := p
			q.At.Z += h
			q.From, q.To = 0, 0
			at = append(at, q)
		}
		points, err := model.Field(ctx, at)
		if err != nil {
			return nil, err
		}
		st := stop{}
		for k, pt := range points {
			ratio := 0.0
			for _, r := range pt.Ratios {
				if r.Class == p.Class || p.Class == "" {
					ratio = max(ratio, float64(r.ExposureRatio))
				}
			}
			st.worst = max(st.worst, ratio)
			row := Planned{Place: p.ID, HeightM: heights[k], ExpectedVPerM: float64(pt.EVPerM), ExpectedRatio: ratio}
			if len(heights) > 1 {
				row.Group = unused(taken, p.ID, 1)
			}
			row.Instrument, row.Settings = choose(s, site, row.ExpectedVPerM)
			st.rows = append(st.rows, row)
		}
		stops = append(stops, st)
	}
	slices.SortStableFunc(stops, func(a, b stop) int { return cmp.Compare(b.worst, a.worst) })
	out := []Planned{}
	n := 0
	for _, st := range stops {
		for _, row := range st.rows {
			for row.ID == "" || taken[row.ID] {
				n++
				row.ID = fmt.Sprintf("P%03d", n)
			}
			taken[row.ID] = true
			out = append(out, row)
		}
	}
	return out, nil
}

// unused returns a name that no group has yet.
func unused(taken map[string]bool, name string, n int) string {
	if !taken[name] {
		return name
	}
	for n++; taken[fmt.Sprintf("%s %d", name, n)]; n++ {
	}
	return fmt.Sprintf("%s %d", name, n)
}

// headroom is how far, as a factor, a field may exceed its prediction before an
// instrument's range is left.
const headroom = 2

// choose picks the broadband instrument that reaches the site's frequencies and
// the expected field, and says how to set it.
func choose(s *Survey, site *exposure.Site, e float64) (id, settings string) {
	lo, hi := math.Inf(1), 0.0
	for _, x := range site.Sources {
		lo, hi = min(lo, x.FrequencyHz), max(hi, x.FrequencyHz)
	}
	best, rank := -1, 0
	for i := range s.Instruments {
		in := &s.Instruments[i]
		if in.Kind != Broadband {
			continue
		}
		// What matters most counts most; of equals the first.
		r := 1
		if in.OverloadVPerM == 0 || e*headroom <= in.OverloadVPerM {
			r += 4
		}
		if in.CalibrationDue == "" || !Overdue(in.CalibrationDue, site.About.SurveyDate) {
			r += 8
		}
		if in.FromHz <= lo && in.ToHz >= hi {
			r += 2
		}
		if r > rank {
			best, rank = i, r
		}
	}
	set := []string{"rms detector, isotropic"}
	if best < 0 {
		return "", strings.Join(set, "; ")
	}
	in := &s.Instruments[best]
	if o := in.OverloadVPerM; o > 0 && e*headroom > o {
		set = append(set, "expected within a factor of 2 of its overload or beyond")
	}
	if in.FromHz > lo || in.ToHz < hi {
		set = append(set, fmt.Sprintf("the inventory runs from %s to %s, beyond this instrument", megahertz(lo), megahertz(hi)))
	}
	if in.FloorVPerM > 0 && e < in.FloorVPerM {
		set = append(set, "expected below its floor")
	}
	return in.ID, strings.Join(set, "; ")
}
