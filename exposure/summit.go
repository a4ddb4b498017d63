package exposure

import (
	"container/heap"
	"context"
	"math"
)

// summit is the largest ratio over a region: an attained value, where it is
// attained, and an upper bound.
type summit struct {
	lower, upper float64
	at           Point // in the question's frame
	reach        reach // whether the region touches a reactive region
}

// peakBox is a box of the search for the largest ratio, by its upper bound, with
// the terms that are still worth bounding in it.
type peakBox struct {
	b     box
	upper float64
	open  slab
}

type peakHeap []peakBox

func (h peakHeap) Len() int           { return len(h) }
func (h peakHeap) Less(i, j int) bool { return h[i].upper > h[j].upper }
func (h peakHeap) Swap(i, j int)      { h[i], h[j] = h[j], h[i] }
func (h *peakHeap) Push(x any)        { *h = append(*h, x.(peakBox)) }
func (h *peakHeap) Pop() any {
	old := *h
	x := old[len(old)-1]
	*h = old[:len(old)-1]
	return x
}

// The search for the largest ratio ends at this relative gap, or after this many
// bounds of single terms with the gap it has: fewer where the verdict does not
// hang on it, and fewer still on a section, which is laid through antennas.
const (
	summitGap     = 2e-2
	summitSettled = 0.1 // the gap that is enough where the share lies outside the bracket
	summitEffort  = 200_000
	summitDecided = 40_000
	summitSection = 5_000
)

// largestOver finds the largest ratio over the body volume of a plane, best
// bound first (branch and bound), to within summitGap or, at the
// edge of a reactive region, to the finest cell. What lies inside a reactive
// region that a method does not reach is not assessed and stays out of it.
func (e *evaluator) largestOver(ctx context.Context, p *plane, most int) summit {
	side := float64(int64(1)<<p.root) * p.step
	first := box{c: Point{X: p.x0 + side/2, Y: p.y0 + side/2, Z: (p.from + p.to) / 2}, h: Point{X: side / 2, Y: side / 2, Z: (p.to - p.from) / 2}}
	s := summit{}
	inside := func(b box) (any, centre bool) {
		x, y := (b.c.X-p.x0)/p.step, (b.c.Y-p.y0)/p.step
		hx, hy := b.h.X/p.step, b.h.Y/p.step
		centre = insideEdges(p.outline, x, y)
		if centre {
			return true, true
		}
		for i := range p.outline {
			if p.outline[i].touches(x-hx, y-hy, x+hx, y+hy) {
				return true, false
			}
		}
		return false, false
	}
	scratch := search{e: e, p: p}
	h := peakHeap{}
	effort := 0
	consider := func(b box, open slab) {
		any, centre := inside(b)
		if !any {
			return
		}
		near := scratch.reaches(grown(b), &open)
		if near != reached {
			s.reach = partReach
			if near == unreached && !p.mean {
				return
			}
		}
		lo, hi, terms := scratch.body(b, &open, s.lower)
		effort += terms
		if hi <= s.lower {
			return
		}
		if centre && near == reached {
			if !p.mean {
				_, lo = e.at(b.c)
				effort += len(e.terms) / 2
			}
			if lo > s.lower {
				s.lower, s.at = lo, b.c
			}
		}
		heap.Push(&h, peakBox{b, hi, open})
	}
	e.seed(p, &s)
	consider(first, e.everything(p))
	s.reach = e.touchesReactive(p, first, inside)
	for len(h) > 0 && ctx.Err() == nil {
		top := h[0]
		s.upper = math.Max(top.upper, s.lower)
		small := top.b.h.X <= p.step/2 && top.b.h.Z <= p.step/2
		gap := summitGap
		if s.upper <= e.share || s.lower > e.share {
			gap = summitSettled
		}
		if top.upper <= s.lower*(1+gap) || small || effort > most {
			break
		}
		heap.Pop(&h)
		for _, b := range split(top.b, p.mean) {
			consider(b, top.open)
		}
	}
	if p.mean && s.lower > 0 {
		// A column was bounded from below; say what it comes to, and where.
		by, z := e.body(s.at.X, s.at.Y, p.from, p.to, true)
		v, _ := by.largest(e.ng)
		s.lower, s.at.Z = math.Max(s.lower, v), z
	}
	if len(h) == 0 {
		s.upper = s.lower // every box that was left could not hold more
	}
	s.upper = math.Max(s.upper, s.lower)
	return s
}

// everything is a column with every term still open.
func (e *evaluator) everything(p *plane) slab {
	all := slab{lo: p.from, hi: p.to}
	for i := range e.terms {
		all.active = append(all.active, int32(i))
	}
	for i := range e.reach {
		all.near = append(all.near, int32(i))
	}
	return all
}

// grown covers the rounding of a box's coordinates.
func grown(b box) box {
	b.h = b.h.Add(Point{X: boxSlack, Y: boxSlack, Z: boxSlack})
	return b
}

// seed looks in front of each source, so that the search starts with a good
// value to beat.
func (e *evaluator) seed(p *plane, s *summit) {
	best, at := 0.0, Point{}
	for i := range e.terms {
		for _, em := range e.terms[i].em {
			w := em.(placed).where()
			for _, d := range [4]float64{0.5, 1, 2, 4} {
				c := w.pos.Add(w.axes.Boresight.Scale(d))
				c.Z = math.Min(math.Max(c.Z, p.from), p.to)
				if !insideEdges(p.outline, (c.X-p.x0)/p.step, (c.Y-p.y0)/p.step) {
					continue
				}
				line := box{c: c}
				if p.mean {
					line = line.heights(p.from, p.to)
				}
				if e.reaches(line) != reached {
					continue
				}
				if _, v := e.at(c); v > best {
					best, at = v, c
				}
			}
		}
	}
	if best == 0 {
		return
	}
	if p.mean {
		by := e.bodyNear(at.X, at.Y, at.Z, p.from, p.to)
		best, _ = by.largest(e.ng)
	}
	s.lower, s.at = best, at
}

// body encloses the class's ratio over a box of the body volume: of points, or
// of whole columns where a mean is compared. Terms whose gap no longer matters
// beside best are frozen in open. terms is the number of bounds it took.
func (s *search) body(b box, open *slab, best float64) (lo, hi float64, terms int) {
	count := 1
	b = grown(b)
	if s.p.mean {
		count = min(max(1, int(math.Ceil((s.p.to-s.p.from)/(2*math.Max(b.h.X, s.p.step))))), mostSlabs)
	}
	if count > 1 {
		lo, hi, _ = s.columnBounds(b, open, count)
		s.columnWidths()
	} else {
		// Bounds over the whole box enclose means over it as well.
		lo, hi = s.bound(b, open)
	}
	terms = count * len(open.active)
	limit := s.negligible(0.2 * summitGap * best)
	next := *open
	next.active = nil
	var l, h groupRatios
	for k, i := range open.active {
		if !(s.width[k] <= limit) {
			next.active = append(next.active, i)
			continue
		}
		if count > 1 {
			l, h = s.means[k].lo, s.means[k].hi
		} else {
			s.e.terms[i].over(b, s.e.rule, &l, &h)
		}
		for g := 0; g < s.e.ng; g++ {
			next.flo[g] += l[g]
			next.fhi[g] += h[g]
		}
	}
	*open = next
	return lo, hi, terms
}

// split halves a box along its longest sides; a column that is compared by its
// mean keeps its height.
func split(b box, keepHeight bool) []box {
	longest := math.Max(b.h.X, b.h.Y)
	if !keepHeight {
		longest = math.Max(longest, b.h.Z)
	}
	out := []box{b}
	cut := func(get func(*Point) *float64) {
		for _, x := range out[:len(out):len(out)] {
			y := x
			*get(&x.h) /= 2
			*get(&y.h) /= 2
			*get(&x.c) -= *get(&x.h)
			*get(&y.c) += *get(&y.h)
			out = append(out[1:], x, y)
		}
	}
	for _, get := range []func(*Point) *float64{
		func(p *Point) *float64 { return &p.X },
		func(p *Point) *float64 { return &p.Y },
		func(p *Point) *float64 { return &p.Z },
	} {
		if v := *get(&b.h); v >= longest*0.6 && v > 0 && !(keepHeight && get(&b.h) == &b.h.Z) {
			cut(get)
		}
	}
	return out
}

// touchesReactive says whether the body volume touches a region that a method
// does not reach.
func (e *evaluator) touchesReactive(p *plane, first box, inside func(box) (bool, bool)) reach {
	work := []box{first}
	for len(work) > 0 {
		b := work[len(work)-1]
		work = work[:len(work)-1]
		switch e.reaches(b) {
		case reached:
			continue
		case unreached:
			if any, _ := inside(b); any {
				return unreached
			}
			continue
		}
		if any, _ := inside(b); !any {
			continue
		}
		if b.h.X <= p.step/2 && b.h.Z <= p.step/2 {
			return partReach
		}
		work = append(work, split(b, false)...)
	}
	return reached
}
