package exposure

import (
	"context"
	"math"
	"strconv"
	"sync"
	"sync/atomic"
)

// BoundaryPoint is one point of a boundary with its calculation written out,
// for an assessor to check by hand: the place of the largest ratio, or one of
// twelve points spread along the keep-out line.
type BoundaryPoint struct {
	Surface string   `json:"surface,omitempty"`
	Section *Section `json:"section,omitempty"`
	Through string   `json:"through,omitempty"` // the housing a section was laid through
	Share   float64  `json:"share"`             // the ratio that the line is drawn for
	// OnEdge says that the line runs along the surface's own edge there, or along
	// the end of a section: then the ratio may be any above the share.
	OnEdge bool `json:"on_edge"`
	// Note says why there is no figure, "" where there is one.
	Note string `json:"note,omitempty"`
	// PointResult holds the point, with the body's foot as z, the boundary's class
	// and that class's ratio alone. The sources listed are those whose own ratio
	// is at least 0.001; contributions_not_listed counts the others.
	PointResult
	// UnlistedRatio is the sum of the own ratios of the sources not listed; on a
	// site of more than 200 sources, what the listed ones leave of the total.
	UnlistedRatio Number `json:"ratio_not_listed"`
}

// linePoints is the number of points along one boundary's keep-out line.
const linePoints = 12

// BoundaryPoints writes the calculation out at the place of the largest ratio of
// each boundary and at twelve points spread evenly along its keep-out line, in
// the order of the zones. Where some of the line does not run along the
// surface's edge, all twelve lie on that part: there the ratio is the share, to
// within what the resolution makes of it. Lines of a plain field level belong to
// no class and have none.
func (m *Model) BoundaryPoints(ctx context.Context, lists ...[]Zone) ([]BoundaryPoint, error) {
	var out []BoundaryPoint
	var places []Place
	for _, zones := range lists {
		for i := range zones {
			if z := &zones[i]; z.Level == "" && m.rule(z.Class) != nil && z.MaxRatioUpper > 0 {
				p, at := m.boundaryPoints(z)
				out, places = append(out, p...), append(places, at...)
			}
		}
	}
	var next atomic.Int64
	var group sync.WaitGroup
	for w := 0; w < min(m.options.Workers, len(out)); w++ {
		group.Add(1)
		go func() {
			defer group.Done()
			// Each boundary asks for its own class alone.
			models, sets := map[string]*Model{}, map[string]map[float64]*fieldSet{}
			for {
				i := int(next.Add(1)) - 1
				if i >= len(out) || ctx.Err() != nil {
					return
				}
				class := places[i].Class
				if models[class] == nil {
					one := *m
					one.rules = []*rule{m.rule(class)}
					models[class], sets[class] = &one, map[float64]*fieldSet{}
				}
				out[i].PointResult = models[class].writtenOut(&places[i], sets[class], &out[i])
			}
		}()
	}
	group.Wait()
	return out, ctx.Err()
}

// boundaryPoints lists the points of one boundary and the places they are.
func (m *Model) boundaryPoints(z *Zone) ([]BoundaryPoint, []Place) {
	s := m.surface(z.Surface)
	outline, site := []Ring(nil), func(p [2]float64) Point { return Point{X: p[0], Y: p[1]} }
	switch {
	case z.Section != nil:
		g, err := m.sectionRegion(*z.Section)
		if err != nil {
			return nil, nil // a section that has a boundary has a plane
		}
		outline = g.rings
		site = func(p [2]float64) Point { return g.frame.back(Point{X: p[0], Y: p[1]}) }
	case s != nil:
		outline = s.Outline
	default:
		return nil, nil
	}
	var out []BoundaryPoint
	var places []Place
	add := func(id string, at Point, edge bool) {
		pl := Place{ID: id, At: at, Class: z.Class, WallLoss: 1}
		if z.Section == nil {
			pl.At.Z, pl.From, pl.To, pl.On = s.Z, s.From, s.To, s.ID
		}
		places = append(places, pl)
		out = append(out, BoundaryPoint{Surface: z.Surface, Section: z.Section, Through: z.Through, Share: z.Share, OnEdge: edge})
	}
	if z.MaxRatioLower > 0 {
		add("largest ratio", Point{X: z.MaxAt[0], Y: z.MaxAt[1], Z: z.MaxAt[2]}, false)
	}
	along, edge := alongLine(z.Outer, outline, z.ResolutionM, linePoints)
	for k, p := range along {
		add("line "+strconv.Itoa(k+1), site(p), edge)
	}
	return out, places
}

// alongLine returns n points at equal steps along the rings, half a step from
// their start, on the part that does not run along the outline; where all of it
// does, on all, and edge is true.
func alongLine(rings MultiPolygon, outline []Ring, resolution float64, n int) (points [][2]float64, edge bool) {
	type piece struct {
		a, b [2]float64
		to   float64 // length at its end
	}
	var free, all []piece
	var freeM, allM float64
	for _, poly := range rings {
		for _, r := range poly {
			for i := 0; i+1 < len(r); i++ {
				a, b := r[i], r[i+1]
				length := math.Hypot(b[0]-a[0], b[1]-a[1])
				allM += length
				all = append(all, piece{a, b, allM})
				mid := [2]float64{(a[0] + b[0]) / 2, (a[1] + b[1]) / 2}
				if near := 1.5 * resolution; !(besideOutline(a, outline, near) && besideOutline(b, outline, near) && besideOutline(mid, outline, near)) {
					freeM += length
					free = append(free, piece{a, b, freeM})
				}
			}
		}
	}
	total := freeM
	if edge = freeM == 0; edge {
		free, total = all, allM
	}
	if !(total > 0) {
		return nil, false
	}
	at, from := 0, 0.0
	for k := range n {
		want := total * (float64(k) + 0.5) / float64(n)
		for at+1 < len(free) && free[at].to < want {
			from = free[at].to
			at++
		}
		p := free[at]
		t := 0.0
		if p.to > from {
			t = math.Min((want-from)/(p.to-from), 1)
		}
		points = append(points, [2]float64{p.a[0] + t*(p.b[0]-p.a[0]), p.a[1] + t*(p.b[1]-p.a[1])})
	}
	return points, edge
}

// writtenOut answers one point for its class alone. A point at which no field
// can be stated says so in the note.
func (m *Model) writtenOut(pl *Place, sets map[float64]*fieldSet, b *BoundaryPoint) PointResult {
	res, err := m.fieldAt(pl, sets)
	if err != nil {
		b.Note = err.Error()
		return PointResult{ID: pl.ID, XM: pl.At.X, YM: pl.At.Y, ZM: pl.At.Z, Class: pl.Class, Ratios: []ClassRatio{}, Contributions: []Contribution{}}
	}
	own := res.class(pl.Class)
	res.Ratios = []ClassRatio{own}
	listed, sum, trimmed := []Contribution{}, 0.0, res.Unlisted > 0
	for _, c := range res.Contributions {
		for _, r := range c.Ratios {
			if r.Class != pl.Class {
				continue
			}
			if r.ExposureRatio >= leastListed || c.Unknown || !r.Covered {
				c.Ratios = []ContributionRatio{r}
				listed = append(listed, c)
				sum += float64(r.ExposureRatio)
			} else {
				res.Unlisted++
				b.UnlistedRatio += r.ExposureRatio
			}
		}
	}
	if trimmed {
		b.UnlistedRatio = Number(math.Max(0, float64(own.ExposureRatio)-sum))
	}
	res.Contributions, res.Place = listed, nil
	return res
}
