package exposure

import (
	"context"
	"sort"
)

// planned lists the steps that add what an assessment says about work and about
// itself: a plan for each place and surface that is above, the schedule of
// barriers, where to measure first, what each assumption is worth, and the
// operating states. They need the places, distances and zones to be there.
func (m *Model) planned(a *Assessment) []func(context.Context) error {
	return []func(context.Context) error{
		func(ctx context.Context) (err error) {
			a.Work, err = m.workForAbove(ctx, a)
			return err
		},
		func(ctx context.Context) (err error) {
			if a.Boundaries, err = m.Schedule(ctx, a.Zones); err != nil {
				return err
			}
			a.MeasureFirst, err = m.MeasureFirst(ctx, m.site.Places, a.Zones)
			return err
		},
		func(ctx context.Context) (err error) {
			few := m.site.Places
			if len(few) > mostAssumptionPlaces {
				few = m.largestPlaces(a.Points)
			}
			a.Assumptions, err = m.Assumptions(ctx, few, a.Distances)
			return err
		},
		func(ctx context.Context) (err error) {
			a.States, err = m.States(ctx)
			return err
		},
	}
}

// An assessment of many places asks what assumptions are worth only at those
// with the largest ratios, and plans work only for so many.
const (
	mostAssumptionPlaces = 40
	mostWorkPlaces       = 40
)

// largestPlaces picks the places with the largest ratios for their own class, in
// the site's order.
func (m *Model) largestPlaces(points []PointResult) []Place {
	own := func(p *PointResult) float64 {
		largest := 0.0
		for _, c := range m.classesAt(p.Class) {
			if r := float64(p.class(c).ExposureRatio); r > largest {
				largest = r
			}
		}
		return largest
	}
	order := make([]int, len(points))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(i, j int) bool { return own(&points[order[i]]) > own(&points[order[j]]) })
	keep := map[int]bool{}
	for _, i := range order[:min(mostAssumptionPlaces, len(order))] {
		keep[i] = true
	}
	var out []Place
	for i := range m.site.Places {
		if keep[i] {
			out = append(out, m.site.Places[i])
		}
	}
	return out
}

// workForAbove plans for every place and surface that is above the limits
// supplied for the class that may be there.
func (m *Model) workForAbove(ctx context.Context, a *Assessment) ([]Work, error) {
	out := []Work{}
	plan := func(q WorkQuery) error {
		w, err := m.Work(ctx, q)
		if err == nil {
			out = append(out, *w)
		}
		return err
	}
	for i := range a.Points {
		p := &a.Points[i]
		if p.Place == nil || !contains(m.classes, p.Class) || p.class(p.Class).Verdict != Above || len(out) >= mostWorkPlaces {
			continue
		}
		if err := plan(WorkQuery{Places: []Place{*p.Place}, Class: p.Class}); err != nil {
			return nil, err
		}
	}
	for i := range a.Zones {
		z := &a.Zones[i]
		if s := m.surface(z.Surface); z.Section == nil && s != nil && s.Class == z.Class && z.Verdict == Above {
			if err := plan(WorkQuery{Surface: z.Surface, Class: z.Class}); err != nil {
				return nil, err
			}
		}
	}
	return out, nil
}
