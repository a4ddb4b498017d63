package exposure

import "math"

// straightenRings replaces runs of vertices by single edges where that only
// adds area (outward) or only takes it away (inward) and never moves a line by
// more than tolerance, in units of the finest cell.
//
// A chord from vertex i to vertex j may stand for the run between them if every
// vertex of the run lies on the region's side of the chord (outward: left of
// it; inward: right of it) or on it, none is farther from it than tolerance,
// and the pocket between run and chord holds no vertex of any other run. The
// last condition keeps rings simple and apart: an edge that crossed a chord
// would have to end in its pocket, cross the run (whose ring is simple), or
// cross the chord twice.
//
// Outward chords are not drawn past a vertex on the surface's outline, which
// they would leave.
func straightenRings(rings [][]latticePoint, tolerance float64, outward bool, outline []latticeEdge) [][]latticePoint {
	s := straightener{tolerance: tolerance, sign: 1, grid: map[[2]int32][]vertexRef{}}
	if !outward {
		s.sign = -1
	}
	s.cell = math.Max(4*tolerance, 1)
	for r, ring := range rings {
		for i, p := range ring {
			k := s.key(p)
			s.grid[k] = append(s.grid[k], vertexRef{int32(r), int32(i)})
		}
	}
	s.rings = rings
	out := make([][]latticePoint, 0, len(rings))
	for r := range rings {
		var fixed []bool
		if outward {
			fixed = onOutline(rings[r], outline)
		}
		out = append(out, s.ring(r, fixed))
	}
	return out
}

type vertexRef struct{ ring, at int32 }

type straightener struct {
	rings     [][]latticePoint
	grid      map[[2]int32][]vertexRef
	cell      float64
	tolerance float64
	sign      float64
	runs      []int // scratch of candidates
}

func (s *straightener) key(p latticePoint) [2]int32 {
	return [2]int32{int32(math.Floor(p.x / s.cell)), int32(math.Floor(p.y / s.cell))}
}

// longestRun bounds the work of one chord.
const longestRun = 64

func (s *straightener) ring(r int, fixed []bool) []latticePoint {
	ring := s.rings[r]
	n := len(ring)
	if n < 5 {
		return ring
	}
	// Start at an extreme vertex, which belongs to the hull and stays.
	start := 0
	for i, p := range ring {
		q := ring[start]
		if p.y < q.y || p.y == q.y && p.x < q.x {
			start = i
		}
	}
	var out []latticePoint
	for i := 0; i < n; {
		best := 1
		runs := s.candidates(ring, start+i, min(longestRun, n-i), fixed)
		for k := len(runs) - 1; k >= 0; k-- {
			if s.chord(r, start+i, runs[k]) {
				best = runs[k]
				break
			}
		}
		out = append(out, ring[(start+i)%n])
		i += best
	}
	if len(out) < 3 || (latticeArea(out) > 0) != (latticeArea(ring) > 0) {
		return ring
	}
	return out
}

// candidates lists the runs from vertex i whose chord may pass the distance
// test: the directions that keep every vertex passed on the region's side and
// within tolerance form a cone, which only narrows.
func (s *straightener) candidates(ring []latticePoint, i, longest int, fixed []bool) []int {
	n := len(ring)
	a := ring[i%n]
	s.runs = s.runs[:0]
	lo, hi := -math.Pi/2, math.Pi/2
	var first float64
	for run := 1; run <= longest; run++ {
		p := ring[(i+run)%n]
		dx, dy := p.x-a.x, p.y-a.y
		angle := fastAtan2(dy, dx)
		if run == 1 {
			first = angle
		}
		angle = math.Remainder(angle-first, 2*math.Pi)
		const slack = 1e-9
		if run > 1 && angle >= lo-slack && angle <= hi+slack {
			s.runs = append(s.runs, run)
		}
		if fixed != nil && fixed[(i+run)%n] {
			break // the line follows the outline there
		}
		// Outward: the vertex lies left of the chord, at most tolerance away.
		stray := math.Pi
		if d := math.Hypot(dx, dy); d > s.tolerance {
			stray = math.Asin(s.tolerance / d)
		}
		if s.sign > 0 {
			lo, hi = math.Max(lo, angle-stray), math.Min(hi, angle)
		} else {
			lo, hi = math.Max(lo, angle), math.Min(hi, angle+stray)
		}
		if lo > hi+slack {
			break
		}
	}
	return s.runs
}

// chord tests the chord over run edges from vertex i.
func (s *straightener) chord(r, i, run int) bool {
	ring := s.rings[r]
	n := len(ring)
	a, b := ring[i%n], ring[(i+run)%n]
	dx, dy := b.x-a.x, b.y-a.y
	length := math.Hypot(dx, dy)
	if length == 0 {
		return false
	}
	lox, hix := math.Min(a.x, b.x), math.Max(a.x, b.x)
	loy, hiy := math.Min(a.y, b.y), math.Max(a.y, b.y)
	for k := 1; k < run; k++ {
		p := ring[(i+k)%n]
		off := s.sign * (dx*(p.y-a.y) - dy*(p.x-a.x)) / length
		along := (dx*(p.x-a.x) + dy*(p.y-a.y)) / length
		if off < 0 || off > s.tolerance || along < 0 || along > length {
			return false
		}
		lox, hix = math.Min(lox, p.x), math.Max(hix, p.x)
		loy, hiy = math.Min(loy, p.y), math.Max(hiy, p.y)
	}
	// No other vertex may lie in the pocket.
	pocket := make([]latticePoint, run+1)
	for k := range pocket {
		pocket[k] = ring[(i+k)%n]
	}
	ka, kb := s.key(latticePoint{lox, loy}), s.key(latticePoint{hix, hiy})
	for gx := ka[0]; gx <= kb[0]; gx++ {
		for gy := ka[1]; gy <= kb[1]; gy++ {
			for _, v := range s.grid[[2]int32{gx, gy}] {
				if int(v.ring) == r {
					if d := (int(v.at) - i%n + n) % n; d <= run {
						continue
					}
				}
				if inPocket(pocket, s.rings[v.ring][v.at]) {
					return false
				}
			}
		}
	}
	return true
}

// inPocket reports whether q lies in or on the closed polygon.
func inPocket(poly []latticePoint, q latticePoint) bool {
	in := false
	for i, a := range poly {
		b := poly[(i+1)%len(poly)]
		cross := (b.x-a.x)*(q.y-a.y) - (b.y-a.y)*(q.x-a.x)
		if math.Abs(cross) <= 1e-9 && q.x >= math.Min(a.x, b.x) && q.x <= math.Max(a.x, b.x) && q.y >= math.Min(a.y, b.y) && q.y <= math.Max(a.y, b.y) {
			return true
		}
		if (a.y > q.y) != (b.y > q.y) && q.x < a.x+(q.y-a.y)/(b.y-a.y)*(b.x-a.x) {
			in = !in
		}
	}
	return in
}

// onOutline marks the vertices that lie on the surface's outline: there the
// line follows the surface and must not be moved outward.
func onOutline(ring []latticePoint, outline []latticeEdge) []bool {
	out := make([]bool, len(ring))
	for i, p := range ring {
		for k := range outline {
			e := &outline[k]
			dx, dy := e.x2-e.x1, e.y2-e.y1
			length := math.Hypot(dx, dy)
			if length == 0 {
				continue
			}
			off := math.Abs(dx*(p.y-e.y1)-dy*(p.x-e.x1)) / length
			along := (dx*(p.x-e.x1) + dy*(p.y-e.y1)) / length
			if off < 1e-6 && along > -1e-6 && along < length+1e-6 {
				out[i] = true
				break
			}
		}
	}
	return out
}
