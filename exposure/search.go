package exposure

import (
	"context"
	"math"
	"slices"
	"sync"
	"sync/atomic"
)

// refineLevels is how many times a cell is split below the resolution before
// it is left undecided.
const refineLevels = 2

// boxSlack grows every box, in m: it covers the rounding of coordinates up to
// 10 km and the rounding of the polygon's vertices to a nanometre.
const boxSlack = 4e-9

// leafKind is what is known of a cell when the search leaves it.
type leafKind uint8

const (
	outerOnly leafKind = iota // it may hold a point above the share, or is not assessed
	innerToo                  // every point of it is above the share
)

// leaf is a square of 2^level finest cells whose lower left corner is (x, y) in
// units of the finest cell.
type leaf struct {
	x, y  int32
	level uint8
	kind  leafKind
	clip  bool // it crosses the outline
}

// plane is the horizontal region of a question and how a column over it is
// compared.
type plane struct {
	x0, y0   float64 // lower left corner, m
	step     float64 // side of the finest cell, m
	root     uint8   // the root square has 2^root finest cells a side
	grain    grain   // to which corners that do not lie on the lattice are rounded
	outline  []latticeEdge
	from, to float64 // heights of the column, m
	mean     bool    // some terms are compared by their mean over the column
}

// slab is a part of a column with what is still open about it.
type slab struct {
	lo, hi   float64     // heights, m
	active   []int32     // terms that are still worth bounding
	near     []int32     // emitters whose reactive region may be touched
	flo, fhi groupRatios // sums of the frozen terms' bounds
}

// node is a square with the slabs over it that may still matter.
type node struct {
	x, y   int32
	level  uint8
	inside bool
	edges  []int32 // outline edges that touch the square; none = inside or outside as a whole
	slabs  []slab
}

// search is one worker's scratch.
type search struct {
	e      *evaluator
	p      *plane
	leaves []leaf
	cells  int
	ints   []int32 // arena of the active lists, used as a stack
	slabs  []slab  // arena of slabs, used as a stack
	work   []slab
	means  []termMean
	width  []float64
	sorted []float64
	emit   func(n *node) // when set, undecided nodes of level stop go here instead of being split
	stop   uint8
	lo, hi groupRatios
}

// run searches the plane with the given number of workers. The leaves come back
// in an order that does not depend on it.
func (e *evaluator) run(ctx context.Context, p *plane, workers int) ([]leaf, int, error) {
	root := node{level: p.root}
	root.slabs = []slab{e.everything(p)}
	for i := range p.outline {
		root.edges = append(root.edges, int32(i))
	}
	// Split in one goroutine down to a few hundred squares, then share them out.
	var tasks []node
	first := &search{e: e, p: p}
	if p.root > 5 {
		first.stop = p.root - 5
		if first.stop < refineLevels+3 {
			first.stop = 0
		}
	}
	if first.stop > 0 {
		first.emit = func(n *node) { tasks = append(tasks, n.clone()) }
	}
	first.visit(&root)
	leaves := first.leaves
	cells := first.cells
	if len(tasks) == 0 {
		return leaves, cells, ctx.Err()
	}
	results := make([]search, len(tasks))
	var next atomic.Int64
	var group sync.WaitGroup
	for w := 0; w < workers; w++ {
		group.Add(1)
		go func() {
			defer group.Done()
			s := search{e: e, p: p}
			for {
				i := int(next.Add(1)) - 1
				if i >= len(tasks) || ctx.Err() != nil {
					return
				}
				s.leaves, s.cells = nil, 0
				s.visit(&tasks[i])
				results[i].leaves, results[i].cells = s.leaves, s.cells
			}
		}()
	}
	group.Wait()
	for i := range results {
		leaves = append(leaves, results[i].leaves...)
		cells += results[i].cells
	}
	return leaves, cells, ctx.Err()
}

func (n *node) clone() node {
	c := *n
	c.edges = append([]int32(nil), n.edges...)
	c.slabs = append([]slab(nil), n.slabs...)
	for i := range c.slabs {
		c.slabs[i].active = append([]int32(nil), c.slabs[i].active...)
		c.slabs[i].near = append([]int32(nil), c.slabs[i].near...)
	}
	return c
}

// visit decides a square or splits it.
func (s *search) visit(n *node) {
	if !s.place(n) {
		return
	}
	ints, slabs := len(s.ints), len(s.slabs)
	defer func() { s.ints, s.slabs = s.ints[:ints], s.slabs[:slabs] }()
	var open []slab
	var done bool
	if s.p.mean {
		open, done = s.column(n)
	} else {
		open, done = s.largest(n)
	}
	if done {
		return
	}
	if n.level == 0 {
		s.leave(n, outerOnly)
		return
	}
	if s.emit != nil && n.level == s.stop {
		c := *n
		c.slabs = open
		s.emit(&c)
		return
	}
	before := len(s.leaves)
	half := int32(1) << (n.level - 1)
	for k := int32(0); k < 4; k++ {
		child := node{x: n.x + half*(k&1), y: n.y + half*(k>>1), level: n.level - 1, inside: n.inside, edges: n.edges, slabs: open}
		s.visit(&child)
	}
	s.merge(n, before)
}

// merge replaces the four leaves of a square's children by one where they are
// alike, so that the trace has fewer sides to cancel.
func (s *search) merge(n *node, before int) {
	l := s.leaves[before:]
	if len(l) != 4 {
		return
	}
	for i := range l {
		if l[i].level != n.level-1 || l[i].kind != l[0].kind || l[i].clip {
			return
		}
	}
	s.leaves = append(s.leaves[:before], leaf{n.x, n.y, n.level, l[0].kind, false})
}

// place narrows the outline's edges to those that touch the square and reports
// whether any of the square is on the surface.
func (s *search) place(n *node) bool {
	if n.inside {
		return true
	}
	from := len(s.ints)
	lox, loy := float64(n.x), float64(n.y)
	side := float64(int32(1) << n.level)
	for _, i := range n.edges {
		if s.p.outline[i].touches(lox, loy, lox+side, loy+side) {
			s.ints = append(s.ints, i)
		}
	}
	// The list stays on the stack until the node that made it returns.
	n.edges = s.ints[from:len(s.ints):len(s.ints)]
	if len(n.edges) > 0 {
		return true
	}
	n.inside = insideEdges(s.p.outline, lox+side/2, loy+side/2)
	return n.inside
}

func (s *search) leave(n *node, kind leafKind) {
	s.leaves = append(s.leaves, leaf{n.x, n.y, n.level, kind, !n.inside})
}

// plan returns the square's box with its heights still open.
func (s *search) plan(n *node) (b box, side float64) {
	side = float64(int32(1)<<n.level) * s.p.step
	b.c.X = s.p.x0 + float64(n.x)*s.p.step + side/2
	b.c.Y = s.p.y0 + float64(n.y)*s.p.step + side/2
	b.h.X, b.h.Y = side/2+boxSlack, side/2+boxSlack
	return b, side
}

func (b box) heights(lo, hi float64) box {
	b.c.Z, b.h.Z = (lo+hi)/2, (hi-lo)/2+boxSlack
	return b
}

// bound encloses the sums over the slab's terms on b; width[i] is the gap of the
// i-th active term.
func (s *search) bound(b box, sl *slab) (lo, hi float64) {
	s.cells++
	s.lo, s.hi = sl.flo, sl.fhi
	s.width = s.width[:0]
	var l, h groupRatios
	for _, i := range sl.active {
		t := &s.e.terms[i]
		t.over(b, s.e.rule, &l, &h)
		gap := 0.0
		for g := 0; g < s.e.ng; g++ {
			s.lo[g] += l[g]
			s.hi[g] += h[g]
			gap = math.Max(gap, h[g]-l[g])
		}
		s.width = append(s.width, gap)
	}
	lo, _ = s.lo.largest(s.e.ng)
	hi, _ = s.hi.largest(s.e.ng)
	return lo * (1 - sumSlack), hi * (1 + sumSlack)
}

// freeze moves the terms whose gaps can no longer matter from the active list
// into the frozen sums: together they are a small part of the gap that the whole
// sum will have at the finest cell.
func (s *search) freeze(b box, sl *slab, side, gap float64) slab {
	out := *sl
	limit := s.negligible(0.1 * math.Min(gap, s.e.share) * s.p.step / side)
	if limit < 0 {
		return out
	}
	from := len(s.ints)
	var l, h groupRatios
	for k, i := range sl.active {
		if !(s.width[k] <= limit) {
			s.ints = append(s.ints, i)
			continue
		}
		s.e.terms[i].over(b, s.e.rule, &l, &h)
		for g := 0; g < s.e.ng; g++ {
			out.flo[g] += l[g]
			out.fhi[g] += h[g]
		}
	}
	out.active = s.ints[from:len(s.ints):len(s.ints)]
	return out
}

// negligible returns the largest width such that all terms no wider than it
// have gaps of at most budget together, or -1 where there is none.
func (s *search) negligible(budget float64) float64 {
	s.sorted = append(s.sorted[:0], s.width...)
	slices.Sort(s.sorted)
	limit, sum := -1.0, 0.0
	for _, w := range s.sorted {
		if sum += w; !(sum <= budget) {
			break
		}
		limit = w
	}
	return limit
}

// reaches narrows the slab's list of reactive regions.
func (s *search) reaches(b box, sl *slab) reach {
	if len(sl.near) == 0 {
		return reached
	}
	worst := reached
	from := len(s.ints)
	for _, i := range sl.near {
		switch s.e.reach[i].reaches(b) {
		case unreached:
			worst = unreached
			s.ints = append(s.ints, i)
		case partReach:
			if worst == reached {
				worst = partReach
			}
			s.ints = append(s.ints, i)
		}
	}
	sl.near = s.ints[from:len(s.ints):len(s.ints)]
	return worst
}

// largest treats a square where the largest ratio over the body counts. It
// returns the slabs that are still open, or done where the square is decided.
func (s *search) largest(n *node) (open []slab, done bool) {
	plan, side := s.plan(n)
	thinnest := s.p.step / 16
	start := len(s.slabs)
	for i := range n.slabs {
		s.work = append(s.work[:0], n.slabs[i])
		for len(s.work) > 0 {
			sl := s.work[len(s.work)-1]
			s.work = s.work[:len(s.work)-1]
			b := plan.heights(sl.lo, sl.hi)
			method := s.reaches(b, &sl)
			if method == unreached {
				// All of it is not assessed: the square belongs to the outer
				// polygon whatever its other slabs hold.
				s.leave(n, outerOnly)
				return nil, true
			}
			lo, hi := s.bound(b, &sl)
			if method == reached {
				if hi <= s.e.share {
					continue
				}
				if lo > s.e.share {
					s.leave(n, innerToo)
					return nil, true
				}
			}
			thick := sl.hi - sl.lo
			if thick > thinnest {
				split := thick > 4*side
				if !split && !math.IsInf(hi, 1) {
					// Split in height where height is the larger part of the gap.
					next := s.freeze(b, &sl, side, hi-lo)
					mid := (sl.lo + sl.hi) / 2
					tlo, thi := s.bound(plan.heights(mid, mid), &next)
					if tlo > s.e.share && method == reached {
						// One height at which the whole square is above is enough.
						s.leave(n, innerToo)
						return nil, true
					}
					split = thi-tlo < 0.6*(hi-lo)
					sl = next
				} else if !split {
					split = thick > side
				}
				if split {
					mid := (sl.lo + sl.hi) / 2
					low, high := sl, sl
					low.hi, high.lo = mid, mid
					s.work = append(s.work, low, high)
					continue
				}
			} else if !math.IsInf(hi, 1) {
				sl = s.freeze(b, &sl, side, hi-lo)
			}
			s.slabs = append(s.slabs, sl)
		}
	}
	open = s.slabs[start:len(s.slabs):len(s.slabs)]
	return open, len(open) == 0
}
