package exposure

import (
	"cmp"
	"math"
	"slices"
)

// edgeEvent is one end of a cell's side on a grid line; summed along the line,
// sides of neighbouring cells cancel and what is left is the boundary.
type edgeEvent struct {
	line float64 // the grid line, in finest cells
	pos  float64 // along it
	sign int8
}

// latticePoint is a vertex in units of the finest cell.
type latticePoint struct{ x, y float64 }

// grain is a power of two: corners that do not lie on the lattice are rounded to
// whole 1/grain of a finest cell, which is 2 to 4 nm. So corners that differ
// still do when they are written to a nanometre, and slivers of less than that,
// where the outline passes a corner of the lattice, close up.
type grain float64

func newGrain(step float64) grain {
	return grain(math.Exp2(math.Floor(math.Log2(step / 2e-9))))
}

func (g grain) snap(x float64) float64 { return math.Round(x*float64(g)) / float64(g) }

// directed is a boundary edge with the region on its left.
type directed struct{ from, to latticePoint }

// trace joins the leaves that pick chooses into simple closed rings in units of
// the finest cell, region on the left. Work grows with the number of leaves,
// not with the area.
func trace(leaves []leaf, outline []latticeEdge, g grain, pick func(leaf) bool) [][]latticePoint {
	count := 0
	for _, l := range leaves {
		if pick(l) {
			count++
		}
	}
	vertical, horizontal := make([]edgeEvent, 0, 4*count), make([]edgeEvent, 0, 4*count)
	var edges []directed
	side := func(a, b latticePoint) {
		switch {
		case a.x == b.x && a.y == b.y:
		case a.x == b.x:
			s := int8(1)
			lo, hi := a.y, b.y
			if lo > hi {
				lo, hi, s = hi, lo, -1
			}
			vertical = append(vertical, edgeEvent{a.x, lo, s}, edgeEvent{a.x, hi, -s})
		case a.y == b.y:
			s := int8(1)
			lo, hi := a.x, b.x
			if lo > hi {
				lo, hi, s = hi, lo, -1
			}
			horizontal = append(horizontal, edgeEvent{a.y, lo, s}, edgeEvent{a.y, hi, -s})
		default:
			edges = append(edges, directed{a, b})
		}
	}
	rings := outlineRings(outline)
	for _, l := range leaves {
		if !pick(l) {
			continue
		}
		x, y := float64(l.x), float64(l.y)
		w := float64(int32(1) << l.level)
		if !l.clip {
			a, b, c, d := latticePoint{x, y}, latticePoint{x + w, y}, latticePoint{x + w, y + w}, latticePoint{x, y + w}
			side(a, b)
			side(b, c)
			side(c, d)
			side(d, a)
			continue
		}
		for _, r := range rings {
			piece := clipRing(r, g, x, y, x+w, y+w)
			for i := range piece {
				side(piece[i], piece[(i+1)%len(piece)])
			}
		}
	}
	edges = append(edges, remaining(vertical, func(line, a, b float64) directed {
		return directed{latticePoint{line, a}, latticePoint{line, b}}
	})...)
	edges = append(edges, remaining(horizontal, func(line, a, b float64) directed {
		return directed{latticePoint{a, line}, latticePoint{b, line}}
	})...)
	return link(edges)
}

// remaining sums the sides along each grid line and returns what does not
// cancel, one edge for each run of one sign.
func remaining(events []edgeEvent, edge func(line, a, b float64) directed) []directed {
	events = byLine(events)
	var out []directed
	for i := 0; i < len(events); {
		line := events[i].line
		sum, start, running := 0, 0.0, 0
		for i < len(events) && events[i].line == line {
			pos := events[i].pos
			for i < len(events) && events[i].line == line && events[i].pos == pos {
				sum += int(events[i].sign)
				i++
			}
			sign := 0
			if sum > 0 {
				sign = 1
			} else if sum < 0 {
				sign = -1
			}
			if sign == running {
				continue
			}
			if running > 0 {
				out = append(out, edge(line, start, pos))
			} else if running < 0 {
				out = append(out, edge(line, pos, start))
			}
			running, start = sign, pos
		}
	}
	return out
}

// byLine sorts events by line and position. Nearly all lie on lines of the
// lattice, which are whole numbers: those are dealt into their lines first, so
// that only the few of one line are left to compare.
func byLine(events []edgeEvent) []edgeEvent {
	compare := func(a, b edgeEvent) int {
		switch { // nothing is NaN here
		case a.line < b.line:
			return -1
		case a.line > b.line:
			return 1
		case a.pos < b.pos:
			return -1
		case a.pos > b.pos:
			return 1
		}
		return 0
	}
	most := 0.0
	for i := range events {
		most = math.Max(most, events[i].line)
		if events[i].line < 0 {
			most = math.Inf(1)
		}
	}
	if !(most <= 4*float64(len(events))+1024) {
		slices.SortFunc(events, compare)
		return events
	}
	// start[k] is where the events of [k, k+1) begin.
	start := make([]int32, int(most)+2)
	for i := range events {
		start[int(events[i].line)+1]++
	}
	for k := 1; k < len(start); k++ {
		start[k] += start[k-1]
	}
	next := slices.Clone(start)
	sorted := make([]edgeEvent, len(events))
	for i := range events {
		k := int(events[i].line)
		sorted[next[k]] = events[i]
		next[k]++
	}
	for k := 0; k+1 < len(start); k++ {
		slices.SortFunc(sorted[start[k]:start[k+1]], compare)
	}
	return sorted
}

// link follows the edges into closed rings and splits rings that touch
// themselves, so that every ring is simple.
func link(edges []directed) [][]latticePoint {
	slices.SortFunc(edges, func(a, b directed) int {
		for _, c := range []int{cmp.Compare(a.from.y, b.from.y), cmp.Compare(a.from.x, b.from.x), cmp.Compare(a.to.y, b.to.y)} {
			if c != 0 {
				return c
			}
		}
		return cmp.Compare(a.to.x, b.to.x)
	})
	first := make(map[latticePoint]int32, len(edges))
	for i := len(edges) - 1; i >= 0; i-- {
		first[edges[i].from] = int32(i)
	}
	used := make([]bool, len(edges))
	var rings [][]latticePoint
	for i := range edges {
		if used[i] {
			continue
		}
		var path []latticePoint
		for k := int32(i); ; {
			used[k] = true
			path = append(path, edges[k].from)
			next := int32(-1)
			best := math.Inf(-1)
			at := edges[k].to
			if j, ok := first[at]; ok {
				for ; int(j) < len(edges) && edges[j].from == at; j++ {
					if used[j] {
						continue
					}
					if turn := leftTurn(edges[k], edges[j]); turn > best {
						best, next = turn, j
					}
				}
			}
			if next < 0 {
				break
			}
			k = next
		}
		rings = append(rings, splitRing(path)...)
	}
	return rings
}

// leftTurn is the angle from a's direction to b's, larger to the left.
func leftTurn(a, b directed) float64 {
	ax, ay := a.to.x-a.from.x, a.to.y-a.from.y
	bx, by := b.to.x-b.from.x, b.to.y-b.from.y
	return math.Atan2(ax*by-ay*bx, ax*bx+ay*by)
}

// splitRing cuts a closed path at vertices it visits twice.
func splitRing(path []latticePoint) [][]latticePoint {
	var out [][]latticePoint
	at := map[latticePoint]int{}
	var stack []latticePoint
	for _, p := range path {
		if i, ok := at[p]; ok {
			ring := append([]latticePoint(nil), stack[i:]...)
			for _, q := range ring {
				delete(at, q)
			}
			stack = stack[:i]
			if r := straighten(ring); len(r) >= 3 {
				out = append(out, r)
			}
		}
		at[p] = len(stack)
		stack = append(stack, p)
	}
	if r := straighten(stack); len(r) >= 3 {
		out = append(out, r)
	}
	return out
}

// straighten drops vertices on straight grid lines.
func straighten(r []latticePoint) []latticePoint {
	var out []latticePoint
	n := len(r)
	for i, p := range r {
		a, b := r[(i+n-1)%n], r[(i+1)%n]
		if a.x == p.x && p.x == b.x || a.y == p.y && p.y == b.y {
			continue
		}
		out = append(out, p)
	}
	return out
}

// outlineRings puts the outline's edges back into rings, outer ring
// counter-clockwise and holes clockwise as they were given.
func outlineRings(edges []latticeEdge) [][]latticePoint {
	var rings [][]latticePoint
	var ring []latticePoint
	for i, e := range edges {
		ring = append(ring, latticePoint{e.x1, e.y1})
		if i+1 == len(edges) || edges[i+1].x1 != e.x2 || edges[i+1].y1 != e.y2 || len(ring) > 1 && e.x2 == ring[0].x && e.y2 == ring[0].y {
			rings = append(rings, ring)
			ring = nil
		}
	}
	return rings
}

// clipRing cuts a ring by a rectangle (Sutherland and Hodgman 1974). Every cut
// with a grid line is computed from the whole edge of the outline it lies on,
// so that neighbouring cells find the same point; where the ring leaves and
// comes back, the bridges along the rectangle's sides cancel in the trace.
func clipRing(ring []latticePoint, g grain, lox, loy, hix, hiy float64) []latticePoint {
	type vertex struct {
		latticePoint
		edge int // the outline edge that runs from this vertex, -1 = a rectangle's side
	}
	cur := make([]vertex, len(ring), len(ring)+8)
	for i, p := range ring {
		cur[i] = vertex{p, i}
	}
	n := len(ring)
	cut := func(edge int, vertical bool, line float64) latticePoint {
		a, b := ring[edge], ring[(edge+1)%n]
		if vertical {
			return latticePoint{line, g.snap(a.y + (line-a.x)*((b.y-a.y)/(b.x-a.x)))}
		}
		return latticePoint{g.snap(a.x + (line-a.y)*((b.x-a.x)/(b.y-a.y))), line}
	}
	half := func(inside func(p latticePoint) bool, vertical bool, line float64) {
		var next []vertex
		for i := range cur {
			a, b := cur[i], cur[(i+1)%len(cur)]
			ina, inb := inside(a.latticePoint), inside(b.latticePoint)
			cross := func() latticePoint {
				if a.edge >= 0 {
					return cut(a.edge, vertical, line)
				}
				if vertical {
					return latticePoint{line, a.y}
				}
				return latticePoint{a.x, line}
			}
			switch {
			case ina && inb:
				next = append(next, a)
			case ina:
				next = append(next, a, vertex{cross(), -1})
			case inb:
				next = append(next, vertex{cross(), a.edge})
			}
		}
		cur = next
	}
	half(func(p latticePoint) bool { return p.x >= lox }, true, lox)
	half(func(p latticePoint) bool { return p.x <= hix }, true, hix)
	half(func(p latticePoint) bool { return p.y >= loy }, false, loy)
	half(func(p latticePoint) bool { return p.y <= hiy }, false, hiy)
	out := make([]latticePoint, len(cur))
	for i, v := range cur {
		out[i] = v.latticePoint
	}
	return out
}
