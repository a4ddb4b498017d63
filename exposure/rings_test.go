package exposure

import (
	"fmt"
	"math"
	"math/big"
	"slices"
	"sort"
)

// ringFault says what is wrong with a multipolygon, or "". It shares nothing
// with the code that makes polygons: coordinates are taken as whole nanometres
// and every orientation is exact.
//
// Every ring is closed, has at least three corners, does not touch or cross
// itself; no two rings cross; every point is in no polygon or in one; every hole
// lies in its polygon.
func ringFault(m MultiPolygon) string {
	var segments []nanoSegment
	rings := 0
	for pi, poly := range m {
		for ri, r := range poly {
			if len(r) < 4 || r[0] != r[len(r)-1] {
				return fmt.Sprintf("polygon %d ring %d is not closed or has fewer than three corners", pi, ri)
			}
			if (ringArea(r) > 0) != (ri == 0) {
				return fmt.Sprintf("polygon %d ring %d runs the wrong way round", pi, ri)
			}
			for i := 0; i+1 < len(r); i++ {
				s := nanoSegment{a: inNanos(r[i]), b: inNanos(r[i+1]), ring: rings, at: i, of: len(r) - 1}
				if s.a == s.b {
					return fmt.Sprintf("polygon %d ring %d repeats corner %v", pi, ri, r[i])
				}
				segments = append(segments, s)
			}
			rings++
		}
	}
	if s := crossing(segments); s != "" {
		return s
	}
	return nesting(m)
}

type nanoPoint struct{ x, y int64 }

func inNanos(v [2]float64) nanoPoint {
	return nanoPoint{int64(math.Round(v[0] * 1e9)), int64(math.Round(v[1] * 1e9))}
}

// nanoSegment is the at-th of the edges of a ring.
type nanoSegment struct {
	a, b         nanoPoint
	ring, at, of int
}

// side is the sign of the area of a, b, c.
func side(a, b, c nanoPoint) int {
	x1, y1, x2, y2 := b.x-a.x, b.y-a.y, c.x-a.x, c.y-a.y
	f := float64(x1)*float64(y2) - float64(y1)*float64(x2)
	if math.Abs(f) > 1e-15*(math.Abs(float64(x1)*float64(y2))+math.Abs(float64(y1)*float64(x2))) {
		if f > 0 {
			return 1
		}
		return -1
	}
	p := new(big.Int).Mul(big.NewInt(x1), big.NewInt(y2))
	return p.Cmp(new(big.Int).Mul(big.NewInt(y1), big.NewInt(x2)))
}

// on reports whether c, known to be on the line of s, lies between its ends.
func (s *nanoSegment) on(c nanoPoint) bool {
	return min(s.a.x, s.b.x) <= c.x && c.x <= max(s.a.x, s.b.x) && min(s.a.y, s.b.y) <= c.y && c.y <= max(s.a.y, s.b.y)
}

// crossing sweeps over the segments by x and names the first two that meet where
// they may not. Edges of one ring meet at common corners only; edges of two rings
// may touch, but not cross.
func crossing(segments []nanoSegment) string {
	slices.SortFunc(segments, func(p, q nanoSegment) int {
		return int(min(1, max(-1, min(p.a.x, p.b.x)-min(q.a.x, q.b.x))))
	})
	var live []*nanoSegment
	for i := range segments {
		s := &segments[i]
		from := min(s.a.x, s.b.x)
		kept := live[:0]
		for _, o := range live {
			if max(o.a.x, o.b.x) < from {
				continue
			}
			kept = append(kept, o)
			if max(o.a.y, o.b.y) < min(s.a.y, s.b.y) || min(o.a.y, o.b.y) > max(s.a.y, s.b.y) {
				continue
			}
			if bad := meet(s, o); bad != "" {
				return fmt.Sprintf("ring %d edge %d and ring %d edge %d %s at %v..%v", s.ring, s.at, o.ring, o.at, bad, s.a, s.b)
			}
		}
		live = append(kept, s)
	}
	return ""
}

func meet(s, o *nanoSegment) string {
	d1, d2 := side(s.a, s.b, o.a), side(s.a, s.b, o.b)
	d3, d4 := side(o.a, o.b, s.a), side(o.a, o.b, s.b)
	if d1*d2 < 0 && d3*d4 < 0 {
		return "cross"
	}
	if s.ring != o.ring {
		return ""
	}
	touch := d1 == 0 && s.on(o.a) || d2 == 0 && s.on(o.b) || d3 == 0 && o.on(s.a) || d4 == 0 && o.on(s.b)
	if !touch {
		return ""
	}
	switch {
	case (s.at+1)%s.of == o.at:
		if d2 == 0 && s.on(o.b) || d3 == 0 && o.on(s.a) {
			return "fold back"
		}
		return ""
	case (o.at+1)%o.of == s.at:
		if d1 == 0 && s.on(o.a) || d4 == 0 && o.on(s.b) {
			return "fold back"
		}
		return ""
	}
	return "touch"
}

// nesting counts how often the rings of the whole, and of each polygon, run
// round points between the lines: never but once or not at all.
func nesting(m MultiPolygon) string {
	if s := windings(m); s != "" {
		return "together: " + s
	}
	for i := range m {
		if s := windings(m[i : i+1]); s != "" {
			return fmt.Sprintf("polygon %d: %s", i, s)
		}
	}
	return ""
}

// windings looks along horizontal lines between the corners' heights.
func windings(m MultiPolygon) string {
	var ys []float64
	for _, poly := range m {
		for _, r := range poly {
			for _, v := range r {
				ys = append(ys, v[1])
			}
		}
	}
	sort.Float64s(ys)
	step := max(1, len(ys)/200)
	type cross struct {
		x float64
		d int
	}
	for k := 0; k+step < len(ys); k += step {
		y := (ys[k] + ys[k+1]) / 2
		if ys[k+1]-ys[k] < 1e-8 {
			continue
		}
		var hits []cross
		for _, poly := range m {
			for _, r := range poly {
				for i := 0; i+1 < len(r); i++ {
					a, b := r[i], r[i+1]
					if (a[1] > y) == (b[1] > y) {
						continue
					}
					d := 1
					if b[1] > a[1] {
						d = -1
					}
					hits = append(hits, cross{a[0] + (y-a[1])/(b[1]-a[1])*(b[0]-a[0]), d})
				}
			}
		}
		sort.Slice(hits, func(i, j int) bool { return hits[i].x < hits[j].x })
		n := 0
		for i, h := range hits {
			n += h.d
			if (n < 0 || n > 1) && (i+1 == len(hits) || hits[i+1].x-h.x > 1e-8) {
				return fmt.Sprintf("at (%v, %v) the lines run round %d times", h.x, y, n)
			}
		}
	}
	return ""
}

// bands answers MultiPolygon.Contains for many points: edges sorted into bands
// of y. It may err for points on a line, for which the caller asks Contains.
type bands struct {
	y0, step float64
	edges    [][][4]float64
}

func newBands(m MultiPolygon) *bands {
	b := &bands{y0: math.Inf(1)}
	y1, n := math.Inf(-1), 0
	for _, poly := range m {
		for _, r := range poly {
			n += len(r)
			for _, v := range r {
				b.y0, y1 = math.Min(b.y0, v[1]), math.Max(y1, v[1])
			}
		}
	}
	if n == 0 {
		return b
	}
	b.step = (y1 - b.y0) / float64(n)
	b.edges = make([][][4]float64, n+1)
	for _, poly := range m {
		for _, r := range poly {
			for i := 0; i+1 < len(r); i++ {
				lo, hi := b.at(min(r[i][1], r[i+1][1])), b.at(max(r[i][1], r[i+1][1]))
				for k := lo; k <= hi; k++ {
					b.edges[k] = append(b.edges[k], [4]float64{r[i][0], r[i][1], r[i+1][0], r[i+1][1]})
				}
			}
		}
	}
	return b
}

func (b *bands) at(y float64) int {
	return min(max(0, int((y-b.y0)/b.step)), len(b.edges)-1)
}

func (b *bands) contains(x, y float64) bool {
	if len(b.edges) == 0 || y < b.y0 || y > b.y0+b.step*float64(len(b.edges)-1) {
		return false
	}
	in := false
	for _, e := range b.edges[b.at(y)] {
		if (e[1] > y) != (e[3] > y) && x < e[0]+(y-e[1])/(e[3]-e[1])*(e[2]-e[0]) {
			in = !in
		}
	}
	return in
}

// length is the length of all rings in m.
func (p MultiPolygon) length() float64 {
	sum := 0.0
	for _, poly := range p {
		for _, r := range poly {
			for i := 0; i+1 < len(r); i++ {
				sum += math.Hypot(r[i+1][0]-r[i][0], r[i+1][1]-r[i][1])
			}
		}
	}
	return sum
}
