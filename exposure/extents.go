package exposure

import (
	"cmp"
	"container/heap"
	"context"
	"math"
	"slices"
)

// The search for an extent brackets the boundary to within extentFine of the
// distance (or extentFineM) while that is cheap, and after extentCheap bounds is
// content with extentCoarse (or extentCoarseM). After extentMost it ends with
// the bracket it has.
const (
	extentFine, extentFineM     = 1e-3, 0.005
	extentCoarse, extentCoarseM = 5e-3, 0.02
	extentCheap, extentMost     = 1500, 12_000
)

// farBox is a box of the search for an extent, by its farthest coordinate, with
// the terms that are still worth bounding in it.
type farBox struct {
	b    box
	far  float64
	open *slab
}

type farHeap []farBox

func (h farHeap) Len() int { return len(h) }
func (h farHeap) Less(i, j int) bool {
	if h[i].far != h[j].far {
		return h[i].far > h[j].far
	}
	return h[i].b.h.Y < h[j].b.h.Y // small boxes first: they decide sooner
}
func (h farHeap) Swap(i, j int) { h[i], h[j] = h[j], h[i] }
func (h *farHeap) Push(x any)   { *h = append(*h, x.(farBox)) }
func (h *farHeap) Pop() any {
	old := *h
	x := old[len(old)-1]
	*h = old[:len(old)-1]
	return x
}

// reachAlong finds the largest x coordinate of the boundary volume, farthest
// box first: a box whose ratio is below the share is dropped; one above it, or a
// point above it, raises the inner end. The outer end is the far side of the
// farthest box that could not be dropped. A boundary that lies behind the centre
// as a whole has both ends at zero.
func (e *evaluator) reachAlong(ctx context.Context, radius float64) bracket {
	inner, tip, some := e.feel(radius) // some: a boundary exists, ahead of the centre or behind it
	outer, found := 0.0, inner > 0
	scratch := search{e: e}
	everything := e.everything(&plane{})
	h := farHeap{{box{h: Point{X: radius, Y: radius, Z: radius}}, radius, &everything}}
	for effort := 0; len(h) > 0 && ctx.Err() == nil; {
		top := heap.Pop(&h).(farBox)
		gap := math.Max(extentFine*top.far, extentFineM)
		if effort > extentCheap {
			gap = math.Max(extentCoarse*top.far, extentCoarseM)
		}
		if found && top.far <= inner+gap || effort > extentMost || some && top.far <= 0 {
			outer, some = math.Max(outer, top.far), true
			break
		}
		effort += 1 + len(top.open.active)
		v, reactive := scratch.decide(top.b, &top.open)
		if v < 0 {
			continue
		}
		if v > 0 || reactive {
			inner, outer = math.Max(inner, top.far), math.Max(outer, top.far)
			found, some, tip = true, true, top.b.c
			break
		}
		if math.Max(top.b.h.X, math.Max(top.b.h.Y, top.b.h.Z)) <= extentFineM/2 {
			// It stays open, so it counts; go on to find out how near a point
			// above the share lies.
			outer, some = math.Max(outer, top.far), true
			if _, at := e.at(top.b.c); at > e.share && top.b.c.X > inner {
				inner, found, tip = top.b.c.X, true, top.b.c
			}
			continue
		}
		if !some {
			_, at := e.at(top.b.c)
			some = at > e.share
		}
		for _, b := range halves(top.b) {
			heap.Push(&h, farBox{b, b.c.X + b.h.X, top.open})
		}
	}
	if !some {
		return bracket{none: true}
	}
	return bracket{inner: inner, outer: math.Max(outer, inner) + boxSlack, at: tip}
}

// decide is evaluator.decide on the terms that are still open; it freezes those
// whose gap together moves the boundary by less than half a percent.
func (s *search) decide(b box, list **slab) (verdict int, reactive bool) {
	b = grown(b)
	open := *list
	switch s.reaching(b, list) {
	case unreached:
		return 0, true
	case partReach:
		return 0, false
	}
	lo, hi := s.bound(b, open)
	switch {
	case hi <= s.e.share:
		return -1, false
	case lo > s.e.share:
		return 1, false
	}
	limit := s.negligible(0.002 * s.e.share)
	if limit < 0 {
		return 0, false
	}
	count := 0
	for _, w := range s.width {
		if w <= limit {
			count++
		}
	}
	next := **list
	next.active = make([]int32, 0, len(open.active)-count)
	var l, h groupRatios
	for k, i := range open.active {
		if !(s.width[k] <= limit) {
			next.active = append(next.active, i)
			continue
		}
		s.e.terms[i].over(b, s.e.rule, &l, &h)
		for g := 0; g < s.e.ng; g++ {
			next.flo[g] += l[g]
			next.fhi[g] += h[g]
		}
	}
	*list = &next
	return 0, false
}

// reaching narrows the list of reactive regions as reaches does, on a copy where
// it changes.
func (s *search) reaching(b box, list **slab) reach {
	open := *list
	worst := reached
	var near []int32
	for _, i := range open.near {
		switch s.e.reach[i].reaches(b) {
		case unreached:
			return unreached
		case partReach:
			worst = partReach
			near = append(near, i)
		}
	}
	if len(near) < len(open.near) {
		next := *open
		next.near = near
		*list = &next
	}
	return worst
}

// feel walks from each source outward along rays spread over the half space
// ahead and returns the point above the share that reaches farthest along x: a
// start for the search, and the inner end of its bracket. some says that a point
// above the share was met, ahead or behind.
func (e *evaluator) feel(radius float64) (best float64, tip Point, some bool) {
	const rays, steps = 24, 14
	budget := 1200 / max(1, len(e.terms)) // points looked at, so that a big site costs no more
	try := func(p Point) bool {
		if _, v := e.at(p); v <= e.share || e.reaches(box{c: p}) != reached {
			return false
		}
		some = true
		if p.X > best {
			best, tip = p.X, p
		}
		return true
	}
	// Every source's first ray before any source's second, those that could
	// reach farthest first.
	order := e.byReach()
	for k := 0; k < rays; k++ {
		// The spiral of equal areas over the half space, axis first.
		cos := 1 - float64(k)/rays
		sin := math.Sqrt(1 - cos*cos)
		s, c := math.Sincos(2.399963229728653 * float64(k)) // golden angle
		for _, w := range order {
			dir := Point{X: cos, Y: sin * c, Z: sin * s}
			if k%2 == 1 {
				// Every other ray leans to where the source points.
				dir = dir.Add(w.axes.Boresight.Scale(2))
				dir = dir.Scale(1 / dir.Norm())
			}
			lo, hi := 0.0, radius
			for step := 0; step < steps && budget > 0; step++ {
				mid := (lo + hi) / 2
				budget--
				if try(w.pos.Add(dir.Scale(mid))) {
					lo = mid
				} else {
					hi = mid
				}
			}
		}
	}
	if best == 0 {
		return best, tip, some
	}
	// Climb from there: sideways, and farther out, in ever smaller steps.
	for step := 0.3 * best; step > 0.002*best; step /= 1.6 {
		from := tip
		for k := 0; k < 9; k++ {
			s, c := math.Sincos(math.Pi / 4 * float64(k))
			side := Point{Y: step * c, Z: step * s}
			if k == 8 {
				side = Point{}
			}
			p := from.Add(side)
			p.X = tip.X + 0.25*step
			for n := 0; n < 4 && try(p); n++ {
				p.X += 0.25 * step
			}
		}
	}
	return best, tip, some
}

// byReach lists where the sources stand, by how far along the frame's x axis each
// could carry the boundary alone, whatever its pattern.
func (e *evaluator) byReach() []*placement {
	type source struct {
		w   *placement
		far float64
	}
	var list []source
	for i := range e.terms {
		t := &e.terms[i]
		for j, em := range t.em {
			g, _ := em.falloff()
			most := 0.0
			for k := range t.w {
				s := t.pw[j][e.rule.power[k]] * g / (4 * math.Pi)
				most = math.Max(most, t.w[k].ratio(density{s, s}))
			}
			w := em.(placed).where()
			list = append(list, source{w, w.pos.X + math.Sqrt(most/e.share)})
		}
	}
	slices.SortStableFunc(list, func(a, b source) int { return cmp.Compare(b.far, a.far) })
	out := make([]*placement, len(list))
	for i := range list {
		out[i] = list[i].w
	}
	return out
}

// aim looks for a point of the boundary where the search for an extent ended
// without one: on the lines through each member's centre along the direction.
func (e *evaluator) aim(ctx context.Context, b *bracket, f frame, m *Model, members []int, radius float64) {
	if b.none || b.at != (Point{}) {
		return
	}
	for _, i := range members {
		p := f.point(m.sources[i].src.Position)
		line := frame{f.back(Point{Y: p.Y, Z: p.Z}), f.x, f.y, f.z}
		along := m.evaluator(e.rule, func(j int) bool { return contains(members, j) }, m.groundFactor(0), line, e.share)
		c := along.outermost(ctx, radius)
		if c.none {
			continue
		}
		at := Point{X: c.inner * (1 - 1e-6), Y: p.Y, Z: p.Z}
		if _, v := e.at(at); v > e.share && at.X > b.inner && at.X <= b.outer {
			b.inner, b.at = at.X, at
		}
	}
}

// halves splits a box across its longest side.
func halves(b box) [2]box {
	x, y := b, b
	switch {
	case b.h.X >= b.h.Y && b.h.X >= b.h.Z:
		x.h.X, y.h.X = b.h.X/2, b.h.X/2
		x.c.X, y.c.X = b.c.X-x.h.X, b.c.X+x.h.X
	case b.h.Y >= b.h.Z:
		x.h.Y, y.h.Y = b.h.Y/2, b.h.Y/2
		x.c.Y, y.c.Y = b.c.Y-x.h.Y, b.c.Y+x.h.Y
	default:
		x.h.Z, y.h.Z = b.h.Z/2, b.h.Z/2
		x.c.Z, y.c.Z = b.c.Z-x.h.Z, b.c.Z+x.h.Z
	}
	return [2]box{x, y}
}
