package exposure

import "math"

// latticeEdge is one edge of an outline in units of the finest cell.
type latticeEdge struct{ x1, y1, x2, y2 float64 }

// touches reports whether the edge may touch the closed rectangle; it may say
// yes where they only come near, never no where they meet.
func (e *latticeEdge) touches(lox, loy, hix, hiy float64) bool {
	const near = 1e-6 // of a finest cell
	if math.Max(e.x1, e.x2) < lox-near || math.Min(e.x1, e.x2) > hix+near ||
		math.Max(e.y1, e.y2) < loy-near || math.Min(e.y1, e.y2) > hiy+near {
		return false
	}
	// Which side of the edge's line the corners lie on.
	dx, dy := e.x2-e.x1, e.y2-e.y1
	slack := near * (math.Abs(dx) + math.Abs(dy))
	side := func(x, y float64) float64 { return dx*(y-e.y1) - dy*(x-e.x1) }
	a, b, c, d := side(lox, loy), side(hix, loy), side(hix, hiy), side(lox, hiy)
	least, most := math.Min(math.Min(a, b), math.Min(c, d)), math.Max(math.Max(a, b), math.Max(c, d))
	return least <= slack && most >= -slack
}

// insideEdges reports whether a point is inside closed rings of edges, by the
// even-odd rule.
func insideEdges(edges []latticeEdge, x, y float64) bool {
	in := false
	for i := range edges {
		e := &edges[i]
		if (e.y1 > y) != (e.y2 > y) && x < e.x1+(y-e.y1)/(e.y2-e.y1)*(e.x2-e.x1) {
			in = !in
		}
	}
	return in
}

// ringArea is the signed area of a closed ring, positive when it runs
// counter-clockwise.
func ringArea(r Ring) float64 {
	sum := 0.0
	for i := 0; i+1 < len(r); i++ {
		// about the first vertex, so that far-off coordinates cost no digits
		ax, ay := r[i][0]-r[0][0], r[i][1]-r[0][1]
		bx, by := r[i+1][0]-r[0][0], r[i+1][1]-r[0][1]
		sum += ax*by - bx*ay
	}
	return sum / 2
}

// Area returns the area of the polygons in m2.
func (p MultiPolygon) Area() float64 {
	sum := 0.0
	for _, poly := range p {
		for _, r := range poly {
			sum += ringArea(r) // holes run clockwise
		}
	}
	return sum
}

// Contains reports whether a point lies in the polygons; points within 1e-9 m
// of a line count as inside.
func (p MultiPolygon) Contains(x, y float64) bool {
	in := false
	for _, poly := range p {
		for _, r := range poly {
			for i := 0; i+1 < len(r); i++ {
				ax, ay, bx, by := r[i][0], r[i][1], r[i+1][0], r[i+1][1]
				if nearSegment(x, y, ax, ay, bx, by) {
					return true
				}
				if (ay > y) != (by > y) && x < ax+(y-ay)/(by-ay)*(bx-ax) {
					in = !in
				}
			}
		}
	}
	return in
}

func nearSegment(x, y, ax, ay, bx, by float64) bool {
	const near = 1e-9
	if x < math.Min(ax, bx)-near || x > math.Max(ax, bx)+near || y < math.Min(ay, by)-near || y > math.Max(ay, by)+near {
		return false
	}
	return math.Abs((bx-ax)*(y-ay)-(by-ay)*(x-ax)) <= near*math.Hypot(bx-ax, by-ay)
}
