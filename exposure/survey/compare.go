package survey

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"example.org/standclear/exposure"
)

// frequencySlack is how far, as a share, the frequency of an antenna row may lie
// from that of a selective reading that names no antennas (a choice of this
// project: the width of a channel about its centre).
const frequencySlack = 0.01

// antennasOf returns the inventory rows that a part is of.
func (s *session) antennasOf(p *part) []string {
	var out []string
	for i := range s.site.Sources {
		x := &s.site.Sources[i]
		if !s.active(x) {
			continue
		}
		if len(p.antennas) > 0 {
			if slices.Contains(p.antennas, x.ID) {
				out = append(out, x.ID)
			}
			continue
		}
		slack := edge
		if p.lo == p.hi {
			slack = frequencySlack
		}
		if x.FrequencyHz >= p.lo*(1-slack) && x.FrequencyHz <= p.hi*(1+slack) {
			out = append(out, x.ID)
		}
	}
	return out
}

// modelOf returns the model of some of the site's rows alone.
func (s *session) modelOf(ids []string) (*exposure.Model, error) {
	key := strings.Join(ids, "\x00")
	if m := s.models[key]; m != nil {
		return m, nil
	}
	site := *s.site
	site.Sources = nil
	for _, x := range s.site.Sources {
		if slices.Contains(ids, x.ID) {
			site.Sources = append(site.Sources, x)
		}
	}
	m, err := exposure.New(&site, exposure.Options{})
	s.models[key] = m
	return m, err
}

// predict fills in the comparison of each part.
func (s *session) predict(ctx context.Context, parts []*part) error {
	for _, p := range parts {
		if err := s.compare(ctx, p); err != nil {
			return err
		}
	}
	return nil
}

// compare puts the prediction beside one part: over several heights the mean of
// the power, as for the readings.
func (s *session) compare(ctx context.Context, p *part) error {
	c := p.compare
	c.Of = s.antennasOf(p)
	if len(c.Of) == 0 {
		c.Of = []string{}
		c.Note = fmt.Sprintf("the inventory has no antenna at %s", bandText(p.lo, p.hi))
		return nil
	}
	m, err := s.modelOf(c.Of)
	if err != nil {
		return err
	}
	points, err := m.Field(ctx, p.heights)
	if err != nil {
		return err
	}
	e2, ratio, varPlus := 0.0, 0.0, 0.0
	n := float64(len(points))
	for i := range points {
		e := float64(points[i].EVPerM)
		e2 += e * e / n
		for _, r := range points[i].Ratios {
			if r.Class == p.result.Class {
				ratio += float64(r.ExposureRatio) / n
			}
		}
		varPlus = max(varPlus, s.predictionDB(&points[i]))
	}
	for _, id := range c.Of {
		if x := s.source(id); x != nil && x.Power.Unknown {
			c.Note = fmt.Sprintf("the power of %s is unknown: no prediction", id)
			return nil
		}
	}
	e := math.Sqrt(e2)
	c.PredictedVPerM, c.PredictedRatio = &e, &ratio
	c.PredictionDB = CoverageFactor * varPlus
	measured := 0.0
	if p.expanded != nil {
		measured = *p.expanded
	}
	c.CombinedDB = math.Hypot(measured, c.PredictionDB)
	var d float64
	switch {
	case p.quantity == ShareOfLimit && p.share > 0 && ratio > 0:
		d = 10 * math.Log10(p.share/ratio)
	case p.quantity != ShareOfLimit && p.e > 0 && e > 0:
		d = 20 * math.Log10(p.e/e)
	default:
		c.Note = "nothing measured or nothing predicted: no difference can be formed"
		return nil
	}
	c.DifferenceDB = &d
	c.Explained = d <= c.CombinedDB
	return nil
}

func (s *session) source(id string) *exposure.Source {
	for i := range s.site.Sources {
		if s.site.Sources[i].ID == id {
			return &s.site.Sources[i]
		}
	}
	return nil
}

// predictionDB returns the combined standard uncertainty in dB of the predicted
// field at a point, to first order: each row's power and gain on their own, and
// what its pose and position do to its pattern and distance, in common to the
// rows of one housing. A row's dB count by its part of the power.
// Source: [RDG-DIFF].
func (s *session) predictionDB(p *exposure.PointResult) float64 {
	total := 0.0
	for _, c := range p.Contributions {
		total += float64(c.EVPerM) * float64(c.EVPerM)
	}
	if total == 0 {
		return 0
	}
	var independent []float64
	common := map[string]*[3]float64{} // tilt, azimuth, position, by housing
	var order []string
	for _, c := range p.Contributions {
		x := s.source(c.Antenna)
		if x == nil {
			continue
		}
		w := float64(c.EVPerM) * float64(c.EVPerM) / total
		u := x.Uncertainty
		independent = append(independent, w*u.PowerDB, w*u.GainDB)
		key := x.Housing
		if key == "" {
			key = "row " + x.ID
		}
		if common[key] == nil {
			common[key] = new([3]float64)
			order = append(order, key)
		}
		tilt, azimuth, position := geometryDB(x, exposure.Point{X: p.XM, Y: p.YM, Z: p.ZM + p.HeightM})
		for k, v := range []float64{tilt, azimuth, position} {
			common[key][k] += w * v
		}
	}
	for _, key := range order {
		independent = append(independent, common[key][:]...)
	}
	return CombinedDB(independent)
}

// geometryDB returns what one standard uncertainty of tilt, azimuth and position
// of a source does to its field at a point, in dB: the larger of the two ways it
// can go.
func geometryDB(x *exposure.Source, at exposure.Point) (tilt, azimuth, position float64) {
	level := func(dTilt, dAzimuth float64) float64 {
		pose := x.Pose
		pose.TiltRad += dTilt
		pose.AzimuthRad += dAzimuth
		phi, theta := pose.Axes().Direction(at.Sub(x.Position))
		return 10 * math.Log10(math.Max(x.Pattern.Relative(phi, theta), 1e-12))
	}
	change := func(dTilt, dAzimuth float64) float64 {
		here := level(0, 0)
		return math.Max(math.Abs(level(dTilt, dAzimuth)-here), math.Abs(level(-dTilt, -dAzimuth)-here))
	}
	if u := x.Uncertainty.TiltRad; u > 0 {
		tilt = change(u, 0)
	}
	if u := x.Uncertainty.AzimuthRad; u > 0 {
		azimuth = change(0, u)
	}
	if u, r := x.Uncertainty.PositionM, at.Sub(x.Position).Norm(); u > 0 && r > u {
		position = 20 * math.Log10(r/(r-u))
	}
	return tilt, azimuth, position
}

// placePredictions puts the prediction of all rows beside each place.
func (s *session) placePredictions(ctx context.Context) error {
	for i := range s.result.Places {
		res := &s.result.Places[i]
		k := slices.IndexFunc(s.site.Places, func(p exposure.Place) bool { return p.ID == res.Place })
		if k < 0 {
			continue
		}
		points, err := s.model.Field(ctx, []exposure.Place{s.site.Places[k]})
		if err != nil {
			return err
		}
		e := float64(points[0].EVPerM)
		res.PredictedVPerM = &e
		for _, r := range points[0].Ratios {
			if r.Class == res.Class {
				v := float64(r.ExposureRatio)
				res.PredictedRatio = &v
			}
		}
	}
	return nil
}
