package exposure

import (
	"math"
	"sort"
)

// polygons traces the picked leaves, straightens the lines to within tolerance
// (outward for the outer polygon, inward for the inner one) and returns them in
// metres with the area that straightening added or removed.
func (p *plane) polygons(leaves []leaf, pick func(leaf) bool, tolerance float64, outward bool) (MultiPolygon, float64) {
	rings := trace(leaves, p.outline, p.grain, pick)
	before := 0.0
	for _, r := range rings {
		before += latticeArea(r)
	}
	rings = straightenRings(rings, tolerance/p.step, outward, p.outline)
	after := 0.0
	metric := make([]Ring, 0, len(rings))
	for _, r := range rings {
		after += latticeArea(r)
		metric = append(metric, p.metric(r))
	}
	change := math.Abs(after-before) * p.step * p.step
	return nest(metric), change
}

// metric turns a ring into closed metres, rounded to a nanometre.
func (p *plane) metric(r []latticePoint) Ring {
	out := make(Ring, 0, len(r)+1)
	for _, v := range r {
		out = append(out, [2]float64{nano(p.x0 + v.x*p.step), nano(p.y0 + v.y*p.step)})
	}
	return append(out, out[0])
}

func nano(x float64) float64 { return math.Round(x*1e9) / 1e9 }

func latticeArea(r []latticePoint) float64 {
	sum := 0.0
	for i, a := range r {
		b := r[(i+1)%len(r)]
		sum += (a.x-r[0].x)*(b.y-r[0].y) - (b.x-r[0].x)*(a.y-r[0].y)
	}
	return sum / 2
}

// nest sorts rings into polygons: each hole (clockwise) goes to the smallest
// outer ring around it.
func nest(rings []Ring) MultiPolygon {
	type outer struct {
		ring               Ring
		area               float64
		lox, hix, loy, hiy float64
		holes              []Ring
	}
	var outers []*outer
	var holes []Ring
	for _, r := range rings {
		a := ringArea(r)
		if a <= 0 {
			if a < 0 {
				holes = append(holes, r)
			}
			continue
		}
		o := &outer{ring: r, area: a, lox: math.Inf(1), loy: math.Inf(1), hix: math.Inf(-1), hiy: math.Inf(-1)}
		for _, v := range r {
			o.lox, o.hix = math.Min(o.lox, v[0]), math.Max(o.hix, v[0])
			o.loy, o.hiy = math.Min(o.loy, v[1]), math.Max(o.hiy, v[1])
		}
		outers = append(outers, o)
	}
	// Largest first: a reader sees the main piece first, and ties keep their order.
	sort.SliceStable(outers, func(i, j int) bool { return outers[i].area > outers[j].area })
	for _, h := range holes {
		// A point just inside the hole, so that a touching vertex cannot mislead.
		x, y := insideRing(h)
		for i := len(outers) - 1; i >= 0; i-- {
			o := outers[i]
			if x >= o.lox && x <= o.hix && y >= o.loy && y <= o.hiy && o.area >= -ringArea(h) && (MultiPolygon{{o.ring}}).Contains(x, y) {
				o.holes = append(o.holes, h)
				break
			}
		}
	}
	out := MultiPolygon{}
	for _, o := range outers {
		out = append(out, append([]Ring{o.ring}, o.holes...))
	}
	return out
}

// insideRing returns a point in the interior of a simple closed ring: the
// middle of the widest gap on a horizontal line that passes between vertices.
func insideRing(r Ring) (x, y float64) {
	ys := make([]float64, 0, len(r))
	for _, v := range r {
		ys = append(ys, v[1])
	}
	sort.Float64s(ys)
	gap := 0.0
	for i := 1; i < len(ys); i++ {
		if d := ys[i] - ys[i-1]; d > gap {
			gap, y = d, (ys[i]+ys[i-1])/2
		}
	}
	var xs []float64
	for i := 0; i+1 < len(r); i++ {
		a, b := r[i], r[i+1]
		if (a[1] > y) != (b[1] > y) {
			xs = append(xs, a[0]+(y-a[1])/(b[1]-a[1])*(b[0]-a[0]))
		}
	}
	sort.Float64s(xs)
	widest := -1.0
	for i := 0; i+1 < len(xs); i += 2 {
		if d := xs[i+1] - xs[i]; d > widest {
			widest, x = d, (xs[i]+xs[i+1])/2
		}
	}
	return x, y
}
