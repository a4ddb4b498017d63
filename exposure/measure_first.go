package exposure

import (
	"context"
	"fmt"
	"math"
	"sort"
)

// MeasureHere is a place where a measurement is worth most, and what the
// instrument must be able to do there.
type MeasureHere struct {
	Where         string  `json:"where"` // a place, or a surface with its point
	Class         string  `json:"class"`
	XM            float64 `json:"x_m"`
	YM            float64 `json:"y_m"`
	ZM            float64 `json:"z_m"` // of the probe
	ExposureRatio Number  `json:"exposure_ratio"`
	// UncertaintyDB is the standard uncertainty of the predicted ratio from the
	// standard uncertainties of the antenna table.
	UncertaintyDB     float64 `json:"standard_uncertainty_db"`
	RankByRatio       int     `json:"rank_by_ratio"` // from one
	RankByUncertainty int     `json:"rank_by_uncertainty"`
	// What the instrument must cover.
	FromHz     float64 `json:"from_hz"`
	ToHz       float64 `json:"to_hz"`
	FloorVPerM Number  `json:"floor_v_per_m"` // it must read down to this
	TopVPerM   Number  `json:"top_v_per_m"`   // and up to this
	Predicted  Number  `json:"e_v_per_m"`
}

// The instrument must read fields from a tenth of the lowest level, which adds
// 1 % to a sum of ratios, to twice the larger of that level and the prediction
// (a choice of this project).
const (
	floorShare = 0.1
	topFactor  = 2
	// spanShare is the share of the place's ratio from which a source's
	// frequency must be covered.
	spanShare = 0.05
)

// MeasureFirst ranks the site's places, and the point of the largest ratio of
// each zone for the class that may be on its surface, by predicted ratio and by
// the standard uncertainty of that prediction, largest ratio first.
func (m *Model) MeasureFirst(ctx context.Context, places []Place, zones []Zone) ([]MeasureHere, error) {
	spots := append([]Place(nil), places...)
	for i := range zones {
		z := &zones[i]
		s := m.surface(z.Surface)
		if z.Section != nil || s == nil || s.Class != z.Class || z.MaxRatioLower == 0 {
			continue
		}
		spots = append(spots, Place{
			ID: fmt.Sprintf("%s (%.2f, %.2f)", s.ID, z.MaxAt[0], z.MaxAt[1]), At: Point{X: z.MaxAt[0], Y: z.MaxAt[1], Z: s.Z},
			From: s.From, To: s.To, Class: s.Class, WallLoss: 1, On: s.ID,
		})
	}
	points, err := m.Field(ctx, spots)
	if err != nil {
		return nil, err
	}
	out := []MeasureHere{}
	for i := range points {
		p := &points[i]
		for _, class := range m.classesAt(p.Class) {
			r := m.rule(class)
			c := p.class(class)
			h := MeasureHere{Where: p.ID, Class: class, XM: p.XM, YM: p.YM, ZM: p.ZM + p.HeightM, ExposureRatio: c.ExposureRatio, Predicted: p.EVPerM}
			if c.ExposureRatio > 0 {
				h.UncertaintyDB = m.ratioUncertainty(r, &spots[i], Point{X: h.XM, Y: h.YM, Z: h.ZM})
				h.instrument(m, p, class)
			}
			out = append(out, h)
		}
	}
	rank := func(less func(a, b *MeasureHere) bool, set func(h *MeasureHere, n int)) {
		order := make([]*MeasureHere, len(out))
		for i := range out {
			order[i] = &out[i]
		}
		sort.SliceStable(order, func(i, j int) bool { return less(order[i], order[j]) })
		for i, h := range order {
			set(h, i+1)
		}
	}
	rank(func(a, b *MeasureHere) bool { return a.UncertaintyDB > b.UncertaintyDB }, func(h *MeasureHere, n int) { h.RankByUncertainty = n })
	rank(func(a, b *MeasureHere) bool { return a.ExposureRatio > b.ExposureRatio }, func(h *MeasureHere, n int) { h.RankByRatio = n })
	sort.SliceStable(out, func(i, j int) bool { return out[i].RankByRatio < out[j].RankByRatio })
	return out, ctx.Err()
}

// instrument finds the span of frequencies and the range of fields.
func (h *MeasureHere) instrument(m *Model, p *PointResult, class string) {
	h.FromHz = math.Inf(1)
	for _, c := range p.Contributions {
		for _, own := range c.Ratios {
			if own.Class == class && own.ExposureRatio >= spanShare*h.ExposureRatio && own.ExposureRatio > 0 {
				h.FromHz, h.ToHz = math.Min(h.FromHz, c.FrequencyHz), math.Max(h.ToHz, c.FrequencyHz)
			}
		}
	}
	if math.IsInf(h.FromHz, 1) {
		h.FromHz, h.ToHz = 0, 0
		return
	}
	level := math.Inf(1)
	for _, l := range m.site.Limits.LowestOver(class, h.FromHz, h.ToHz) {
		if l.E > 0 {
			level = math.Min(level, l.E)
		}
		if l.S > 0 {
			level = math.Min(level, EFromS(l.S))
		}
	}
	if math.IsInf(level, 1) {
		level = float64(p.EVPerM) // only magnetic levels: the field itself sets the range
	}
	h.FloorVPerM = Number(floorShare * level)
	h.TopVPerM = Number(topFactor * math.Max(level, float64(p.EVPerM)))
}

// ratioUncertainty is the standard uncertainty in dB of a class's ratio at p: the
// root of the sum of squares over the inputs of half the change from one standard
// uncertainty below to one above (JCGM 100:2008, 5.1.2 with 5.1.3 note 2). Rows
// of one housing move together.
func (m *Model) ratioUncertainty(r *rule, pl *Place, p Point) float64 {
	e := m.evaluator(r, nil, m.placeFactor(pl), siteFrame, 1)
	line := m.responses(e, siteFrame, []Point{p})
	draw := make([][]memberDraw, len(line.terms))
	for k := range line.terms {
		draw[k] = make([]memberDraw, len(line.terms[k]))
	}
	housings, rows := line.counts()
	sum := 0.0
	half := func(set func(step float64)) {
		set(1)
		up := line.ratio(0, draw)
		set(-1)
		down := line.ratio(0, draw)
		set(0)
		if up > 0 && down > 0 {
			d := 5 * math.Log10(up/down)
			sum += d * d
		}
	}
	each := func(do func(r *response, d *memberDraw)) {
		for k := range line.terms {
			for j := range line.terms[k] {
				do(&line.terms[k][j], &draw[k][j])
			}
		}
	}
	for row := 0; row < rows; row++ {
		half(func(step float64) {
			each(func(r *response, d *memberDraw) {
				if r.own == row {
					d.db = step * r.sigmaDB * math.Ln10 / 10
				}
			})
		})
	}
	for h := 0; h < housings; h++ {
		for a := 0; a < len(memberDraw{}.pose); a++ {
			half(func(step float64) {
				each(func(r *response, d *memberDraw) {
					if r.housing == h && r.varies[a] {
						d.pose[a] = step
					}
				})
			})
		}
	}
	return math.Sqrt(sum)
}
