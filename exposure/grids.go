package exposure

import (
	"context"
	"math"
	"sort"
	"sync"
	"sync/atomic"
)

// leastContour is the lowest ratio that a contour line is drawn for.
const leastContour = 0.05

// gridSamples is the number of samples of a ratio grid along its longer side.
const gridSamples = 64

// Grids samples the exposure ratio for the contour lines of each zone given. A
// grid is a picture: no boundary and no verdict rests on it.
func (m *Model) Grids(ctx context.Context, lists ...[]Zone) ([]RatioGrid, error) {
	var out []RatioGrid
	for _, zones := range lists {
		zones = shownOnSection(zones)
		for i := range zones {
			z := &zones[i]
			r := m.rule(z.Class)
			if r == nil || z.MaxRatioUpper < leastContour {
				continue // a plain field level has no class to draw, and a faint field no line
			}
			q := ZoneQuery{Section: z.Section}
			if z.Section == nil {
				q.Surfaces = []string{z.Surface}
			}
			regions, err := m.regions(&q)
			if err != nil {
				return nil, err
			}
			g, err := m.grid(ctx, &regions[0], r)
			if err != nil {
				return nil, err
			}
			g.Surface, g.Section = z.Surface, z.Section
			out = append(out, g)
		}
	}
	return out, ctx.Err()
}

// shownOnSection keeps of each section the class whose ratio is largest: a figure
// of a section shows the contour lines of one class. Boundaries on surfaces stay.
func shownOnSection(zones []Zone) []Zone {
	var out []Zone
	for _, z := range zones {
		n := len(out)
		if n == 0 || z.Section == nil || *out[n-1].Section != *z.Section {
			out = append(out, z)
		} else if z.MaxRatioLower > out[n-1].MaxRatioLower {
			out[n-1] = z
		}
	}
	return out
}

// grid samples one class over the extent of a region, over the body heights as
// the class compares them.
func (m *Model) grid(ctx context.Context, g *region, r *rule) (RatioGrid, error) {
	e := m.evaluator(r, nil, g.factor, g.frame, 1)
	x0, y0, x1, y1 := math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)
	for _, v := range g.rings[0] {
		x0, x1 = math.Min(x0, v[0]), math.Max(x1, v[0])
		y0, y1 = math.Min(y0, v[1]), math.Max(y1, v[1])
	}
	step := math.Max(x1-x0, y1-y0) / (gridSamples - 1)
	out := RatioGrid{Class: r.class, X0: x0, Y0: y0, Step: step, NX: int(math.Ceil((x1-x0)/step-1e-9)) + 1, NY: int(math.Ceil((y1-y0)/step-1e-9)) + 1}
	out.Values = make([]Number, out.NX*out.NY)
	mean := r.anyMean && !g.peak
	var next atomic.Int64
	var group sync.WaitGroup
	for w := 0; w < m.options.Workers; w++ {
		group.Add(1)
		go func() {
			defer group.Done()
			for {
				j := int(next.Add(1)) - 1
				if j >= out.NY || ctx.Err() != nil {
					return
				}
				for i := 0; i < out.NX; i++ {
					out.Values[j*out.NX+i] = Number(e.sample(x0+float64(i)*step, y0+float64(j)*step, g.from, g.to, mean))
				}
			}
		}()
	}
	group.Wait()
	return out, ctx.Err()
}

// sample is the ratio over a body at three heights: the largest of foot, middle
// and head, or the three-point Gauss mean.
func (e *evaluator) sample(x, y, from, to float64, mean bool) float64 {
	if to <= from {
		_, v := e.at(Point{X: x, Y: y, Z: from})
		return v
	}
	mid, half := (from+to)/2, (to-from)/2
	var best groupRatios
	if mean {
		for k, u := range [3]float64{-0.774596669241483, 0, 0.774596669241483} {
			by, _ := e.at(Point{X: x, Y: y, Z: mid + u*half})
			for g := 0; g < e.ng; g++ {
				best[g] += by[g] * [3]float64{5. / 18, 8. / 18, 5. / 18}[k]
			}
		}
	} else {
		for _, u := range [3]float64{-1, 0, 1} {
			by, _ := e.at(Point{X: x, Y: y, Z: mid + u*half})
			for g := 0; g < e.ng; g++ {
				best[g] = math.Max(best[g], by[g])
			}
		}
	}
	v, _ := best.largest(e.ng)
	return v
}

// sectionStep is how much coarser an assessment's sections are than its
// surfaces: they are for looking at.
const sectionStep = 4

// mostSections bounds the sections of an assessment: of very many housings only
// those whose boundary reaches farthest have one.
const mostSections = 24

// housingSections lays a vertical plane through each housing along its first
// row's azimuth, long enough to show the whole boundary, and bounds every class
// on it.
func (m *Model) housingSections(ctx context.Context, distances []Distance, resolution float64) ([]Zone, error) {
	if resolution == 0 {
		resolution = DefaultResolutionM
	}
	far, rear := map[string]float64{}, map[string]float64{}
	for _, d := range distances {
		if d.Housing != "" {
			far[d.Housing] = math.Max(far[d.Housing], d.DistanceM)
			// Of extents by the compass any may lie behind.
			if d.Direction != "front" && d.Direction != "up" && d.Direction != "down" && d.Direction != "left" && d.Direction != "right" {
				rear[d.Housing] = math.Max(rear[d.Housing], d.DistanceM)
			}
		}
	}
	first := m.housings()
	order := append([]*Source(nil), first...)
	sort.SliceStable(order, func(i, j int) bool { return far[order[i].Housing] > far[order[j].Housing] })
	shown := map[string]bool{}
	for _, s := range order[:min(mostSections, len(order))] {
		shown[s.Housing] = true
	}
	var out []Zone
	for _, s := range first {
		if !shown[s.Housing] {
			continue
		}
		sin, cos := math.Sincos(s.Pose.AzimuthRad)
		back, ahead := 5+math.Max(0.3*far[s.Housing], rear[s.Housing]), 8+1.3*far[s.Housing]
		section := Section{
			X1M: s.Position.X - back*sin, Y1M: s.Position.Y - back*cos,
			X2M: s.Position.X + ahead*sin, Y2M: s.Position.Y + ahead*cos,
			FromZM: math.Floor(s.Position.Z - 3 - 0.5*far[s.Housing]), ToZM: math.Ceil(s.Position.Z + 3 + 0.5*far[s.Housing]),
		}
		for _, f := range m.site.Surfaces {
			if f.Z < s.Position.Z && cutBy(&f, section) {
				section.FromZM = math.Min(section.FromZM, math.Max(math.Floor(f.Z)-1, math.Floor(s.Position.Z-3-far[s.Housing])))
			}
		}
		zones, err := m.Zones(ctx, ZoneQuery{Section: &section, ResolutionM: sectionStep * resolution})
		if err != nil {
			return nil, err
		}
		for k := range zones {
			zones[k].Through = s.Housing
		}
		out = append(out, zones...)
	}
	return out, nil
}

// housings lists the first row of each housing.
func (m *Model) housings() []*Source {
	var out []*Source
	seen := map[string]bool{}
	for i := range m.sources {
		if s := m.sources[i].src; s.Housing != "" && !seen[s.Housing] {
			seen[s.Housing] = true
			out = append(out, s)
		}
	}
	return out
}

// cutBy reports whether a section passes over a surface, to within a hundredth
// of its length.
func cutBy(f *Surface, s Section) bool {
	const steps = 100
	for k := 0; k <= steps; k++ {
		t := float64(k) / steps
		if insidePolygon([2]float64{s.X1M + t*(s.X2M-s.X1M), s.Y1M + t*(s.Y2M-s.Y1M)}, f.Outline) {
			return true
		}
	}
	return false
}
