package exposure

import (
	"context"
	"fmt"
	"math"

	"example.org/standclear/limits"
)

// DefaultResolutionM is the resolution of a boundary where none is asked.
const DefaultResolutionM = 0.05

// Zones returns the boundary of each class asked on each surface asked, in the
// order of the surfaces and of the classes, or on one vertical section. See the
// package doc for what a boundary promises.
func (m *Model) Zones(ctx context.Context, q ZoneQuery) ([]Zone, error) {
	if q.ResolutionM == 0 {
		q.ResolutionM = DefaultResolutionM
	}
	if !(q.ResolutionM >= 0.001 && q.ResolutionM <= 100) {
		return nil, fmt.Errorf("resolution %v m is not between 0.001 and 100", q.ResolutionM)
	}
	if q.Share == 0 {
		q.Share = 1
	}
	if !(q.Share > 0) || math.IsInf(q.Share, 0) {
		return nil, fmt.Errorf("share %v is not a positive number", q.Share)
	}
	rules, err := m.zoneRules(&q)
	if err != nil {
		return nil, err
	}
	regions, err := m.regions(&q)
	if err != nil {
		return nil, err
	}
	var out []Zone
	total := float64(len(regions) * len(rules))
	for _, g := range regions {
		for _, r := range rules {
			z, err := m.zone(ctx, g, r, &q)
			if err != nil {
				return nil, err
			}
			out = append(out, z)
			if m.options.Progress != nil {
				m.options.Progress(float64(len(out)) / total)
			}
		}
	}
	return out, nil
}

// zoneRules picks the classes asked, or makes one class of a plain field level.
func (m *Model) zoneRules(q *ZoneQuery) ([]*rule, error) {
	if q.LevelEVPerM == 0 && q.LevelSWPerM2 == 0 {
		return m.rulesFor(q.Classes)
	}
	at := limits.At{E: q.LevelEVPerM, S: q.LevelSWPerM2}
	if at.E > 0 && at.S > 0 {
		return nil, fmt.Errorf("ask for a level of E or of S, not of both")
	}
	r := &rule{class: "level", groups: []limits.Group{{Effect: limits.Thermal, Region: limits.WholeBody, Kind: limits.Mean}}, power: []powerKind{meanPower}}
	for _, members := range m.signalList {
		r.terms = append(r.terms, term{members: members, w: []weights{newWeights(at, limits.Thermal)}, covered: true})
	}
	for i := range m.sources {
		if s := m.sources[i].src; s.Power.Unknown {
			r.uncovered = append(r.uncovered, "power of "+s.ID+" unknown")
		}
	}
	return []*rule{r}, nil
}

// region is a surface or a section made ready for a search.
type region struct {
	surface  *Surface
	section  *Section
	frame    frame
	rings    []Ring // in the region's own plane, outer ring counter-clockwise
	from, to float64
	factor   float64
	peak     bool // the largest over the body, whatever the limit row says
}

func (m *Model) regions(q *ZoneQuery) ([]region, error) {
	if q.Section != nil {
		g, err := m.sectionRegion(*q.Section)
		if err != nil {
			return nil, err
		}
		return []region{g}, nil
	}
	var out []region
	for i := range m.site.Surfaces {
		s := &m.site.Surfaces[i]
		if q.Surfaces != nil && !contains(q.Surfaces, s.ID) {
			continue
		}
		g := region{surface: s, frame: siteFrame, from: s.Z + s.From, to: s.Z + s.To, factor: m.groundFactor(s.GroundFactor), peak: s.Averaging == AveragePeak}
		for k, r := range s.Outline {
			g.rings = append(g.rings, oriented(r, k == 0))
		}
		if len(g.rings) == 0 || len(g.rings[0]) < 4 {
			return nil, fmt.Errorf("surface %s: the outline is not a closed polygon", s.ID)
		}
		out = append(out, g)
	}
	for _, id := range q.Surfaces {
		if m.surface(id) == nil {
			var ids []string
			for _, s := range m.site.Surfaces {
				ids = append(ids, s.ID)
			}
			return nil, fmt.Errorf("no surface %q; the site has %s", id, listText(ids))
		}
	}
	return out, nil
}

func (m *Model) surface(id string) *Surface {
	for i := range m.site.Surfaces {
		if m.site.Surfaces[i].ID == id {
			return &m.site.Surfaces[i]
		}
	}
	return nil
}

func contains[T comparable](list []T, s T) bool {
	for _, x := range list {
		if x == s {
			return true
		}
	}
	return false
}

// oriented returns the ring closed and turned the way asked.
func oriented(r Ring, counterClockwise bool) Ring {
	c := append(Ring(nil), r...)
	if len(c) > 0 && c[0] != c[len(c)-1] {
		c = append(c, c[0])
	}
	if (ringArea(c) > 0) != counterClockwise {
		for i, j := 0, len(c)-1; i < j; i, j = i+1, j-1 {
			c[i], c[j] = c[j], c[i]
		}
	}
	return c
}

// sectionRegion stands a vertical rectangle on the section's line. Heights that
// are both zero are chosen to hold every antenna and surface with room.
func (m *Model) sectionRegion(s Section) (region, error) {
	dx, dy := s.X2M-s.X1M, s.Y2M-s.Y1M
	length := math.Hypot(dx, dy)
	if !(length > 0.1) || math.IsInf(length, 0) {
		return region{}, fmt.Errorf("the section's ends are %v m apart; at least 0.1 m is needed", length)
	}
	if s.FromZM == 0 && s.ToZM == 0 {
		lo, hi := math.Inf(1), math.Inf(-1)
		for i := range m.sources {
			z := m.sources[i].src.Position.Z
			lo, hi = math.Min(lo, z-5), math.Max(hi, z+8)
		}
		for _, f := range m.site.Surfaces {
			lo, hi = math.Min(lo, f.Z), math.Max(hi, f.Z+3)
		}
		if lo > hi {
			lo, hi = 0, 3
		}
		s.FromZM, s.ToZM = math.Floor(lo), math.Ceil(hi)
	}
	if !(s.ToZM > s.FromZM) {
		return region{}, fmt.Errorf("the section's heights run from %v to %v m", s.FromZM, s.ToZM)
	}
	x := Point{X: dx / length, Y: dy / length}
	up := Point{Z: 1}
	g := region{section: &s, frame: frame{Point{X: s.X1M, Y: s.Y1M}, x, up, x.Cross(up)}, factor: m.groundFactor(0), peak: true}
	g.rings = []Ring{{{0, s.FromZM}, {length, s.FromZM}, {length, s.ToZM}, {0, s.ToZM}, {0, s.FromZM}}}
	return g, nil
}

// zone answers one class on one region.
func (m *Model) zone(ctx context.Context, g region, r *rule, q *ZoneQuery) (Zone, error) {
	z, e, p, err := m.lines(ctx, g, r, q)
	if err != nil {
		return z, err
	}
	effort := summitEffort
	if z.InnerAreaM2 > 0 {
		effort = summitDecided
	}
	if g.section != nil {
		effort = summitSection
	}
	top := e.largestOver(ctx, p, effort)
	z.MaxRatioLower, z.MaxRatioUpper = Number(top.lower), Number(top.upper)
	at := g.frame.back(top.at)
	z.MaxAt = [3]float64{at.X, at.Y, at.Z}
	z.Covered = len(r.uncovered) == 0
	z.Verdict, z.Reason = zoneVerdict(&z, r, top)
	if low := m.lowFor(g.from); g.frame == siteFrame && low != "" && z.Verdict != Above {
		z.Verdict, z.Reason = NotAssessed, "part of it lies "+low
	}
	return z, ctx.Err()
}

// lines finds the outer and inner polygons, and returns what found them.
func (m *Model) lines(ctx context.Context, g region, r *rule, q *ZoneQuery) (Zone, *evaluator, *plane, error) {
	e := m.evaluator(r, nil, g.factor, g.frame, q.Share)
	mean := r.anyMean && !g.peak && g.to > g.from
	p := newPlane(g.rings, q.ResolutionM, g.from, g.to, mean)
	if mean {
		// Means cost a whole column for each square: stop at the resolution.
		p = p.coarser(refineLevels)
	}
	z := Zone{Class: r.class, Share: q.Share, ResolutionM: q.ResolutionM, FromM: g.from, ToM: g.to, Averaging: "peak", Section: g.section}
	if mean {
		z.Averaging = "mean"
	}
	if g.surface != nil {
		z.Surface = g.surface.ID
		z.FromM, z.ToM = g.surface.From, g.surface.To
	}
	switch {
	case q.LevelEVPerM > 0:
		z.Level = fmt.Sprintf("%g V/m", q.LevelEVPerM)
	case q.LevelSWPerM2 > 0:
		z.Level = fmt.Sprintf("%g W/m2", q.LevelSWPerM2)
	}
	for _, ring := range g.rings {
		z.SurfaceAreaM2 += ringArea(ring)
	}
	leaves, cells, err := e.run(ctx, p, m.options.Workers)
	if err != nil {
		return z, nil, nil, err
	}
	z.Cells = cells
	sideBySide(m.options.Workers > 1,
		func() {
			z.Outer, z.OuterAddedM2 = p.polygons(leaves, func(l leaf) bool { return true }, q.ResolutionM/4, true)
		},
		func() {
			z.Inner, z.InnerRemovedM2 = p.polygons(leaves, func(l leaf) bool { return l.kind == innerToo }, q.ResolutionM/4, false)
		})
	z.OuterAreaM2, z.InnerAreaM2 = z.Outer.Area(), z.Inner.Area()
	z.BandM = z.band()
	return z, e, p, ctx.Err()
}

// sideBySide runs two steps, each in a goroutine of its own where it may.
func sideBySide(may bool, a, b func()) {
	if !may {
		a()
		b()
		return
	}
	done := make(chan struct{})
	go func() {
		defer close(done)
		a()
	}()
	b()
	<-done
}

// zoneVerdict compares the largest ratio with the share.
func zoneVerdict(z *Zone, r *rule, top summit) (Verdict, string) {
	switch {
	case top.lower > z.Share || z.InnerAreaM2 > 0:
		return Above, ""
	case len(r.uncovered) > 0:
		return NotAssessed, listText(r.uncovered)
	case top.reach != reached:
		return NotAssessed, "part of it lies in the reactive region of an antenna: measure there"
	case top.upper > z.Share:
		return Above, "the largest ratio is at the limit to within what the search can tell"
	}
	return Within, ""
}

// newPlane lays a lattice of quarter resolutions over the rings' extent.
func newPlane(rings []Ring, resolution, from, to float64, mean bool) *plane {
	p := &plane{x0: math.Inf(1), y0: math.Inf(1), step: resolution / (1 << refineLevels), from: from, to: to, mean: mean}
	x1, y1 := math.Inf(-1), math.Inf(-1)
	for _, v := range rings[0] {
		p.x0, p.y0 = math.Min(p.x0, v[0]), math.Min(p.y0, v[1])
		x1, y1 = math.Max(x1, v[0]), math.Max(y1, v[1])
	}
	p.grain = newGrain(p.step)
	cells := math.Max(x1-p.x0, y1-p.y0) / p.step
	for float64(int64(1)<<p.root) < cells {
		p.root++
	}
	p.setOutline(rings)
	return p
}

func (p *plane) setOutline(rings []Ring) {
	p.outline = p.outline[:0]
	at := func(v [2]float64) latticePoint {
		return latticePoint{p.grain.snap((v[0] - p.x0) / p.step), p.grain.snap((v[1] - p.y0) / p.step)}
	}
	for _, r := range rings {
		for i := 0; i+1 < len(r); i++ {
			if a, b := at(r[i]), at(r[i+1]); a != b {
				p.outline = append(p.outline, latticeEdge{a.x, a.y, b.x, b.y})
			}
		}
	}
}

// coarser returns the plane with finest cells 2^levels times as large.
func (p *plane) coarser(levels uint8) *plane {
	c := *p
	if levels > c.root {
		levels = c.root
	}
	k := float64(int(1) << levels)
	c.step *= k
	c.grain *= grain(k) // the same length in metres
	c.root -= levels
	c.outline = nil
	for _, e := range p.outline {
		c.outline = append(c.outline, latticeEdge{e.x1 / k, e.y1 / k, e.x2 / k, e.y2 / k})
	}
	return &c
}
