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

// peakBox is a box of the search for the largest ratio, by its upper bound.
type peakBox struct {
	b     box
	upper float64
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
// boxes with the gap it has.
const (
	summitGap   = 1e-2
	summitBoxes = 20000
)

// largestOver finds the largest ratio over the body volume of a plane, best
// bound first (branch and bound), to within summitGap or, at a source's own
// centre, to the finest cell.
func (e *evaluator) largestOver(ctx context.Context, p *plane) summit {
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
	h := peakHeap{}
	consider := func(b box) {
		any, centre := inside(b)
		if !any {
			return
		}
		_, hi := e.bodyOver(b, p)
		if centre {
			if v, at := e.bodyAt(b.c, p); v > s.lower {
				s.lower, s.at = v, at
			}
		}
		heap.Push(&h, peakBox{b, hi})
	}
	consider(first)
	s.reach = e.touchesReactive(p, first, inside)
	for boxes := 0; len(h) > 0 && ctx.Err() == nil; boxes++ {
		top := h[0]
		s.upper = math.Max(top.upper, s.lower)
		if top.upper <= s.lower*(1+summitGap) {
			return s
		}
		small := top.b.h.X <= p.step/2 && top.b.h.Z <= p.step/2
		if small || boxes > summitBoxes {
			// Beside a source's centre the bound never closes: say so.
			return s
		}
		heap.Pop(&h)
		for _, b := range split(top.b, p.mean) {
			consider(b)
		}
	}
	return s
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

// bodyOver encloses the class's ratio over a box of the body volume: of points,
// or of whole columns where a mean is compared.
func (e *evaluator) bodyOver(b box, p *plane) (lo, hi float64) {
	if !p.mean {
		b.h = b.h.Add(Point{X: boxSlack, Y: boxSlack, Z: boxSlack})
		return e.over(b)
	}
	s := search{e: e, p: p}
	count := min(max(1, int(math.Ceil((p.to-p.from)/(2*math.Max(b.h.X, p.step))))), mostSlabs)
	var all slab
	for i := range e.terms {
		all.active = append(all.active, int32(i))
	}
	lo, hi, _ = s.columnBounds(b, &all, count)
	return lo, hi
}

// bodyAt returns the ratio of the point or of the column through it.
func (e *evaluator) bodyAt(c Point, p *plane) (float64, Point) {
	if !p.mean {
		_, v := e.at(c)
		return v, c
	}
	by, at := e.body(c.X, c.Y, p.from, p.to, true)
	v, _ := by.largest(e.ng)
	c.Z = at
	return v, c
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
