package figure

import (
	"math"
	"slices"
)

// scan cuts the inside of rings into parallel spans: lines at the given angle,
// offset + k*spacing apart from the origin. A point is inside where a line to
// infinity crosses the rings an odd number of times, so that holes stay empty.
func scan(rings [][]pt, angle, spacing, offset float64) [][2]pt {
	sin, cos := math.Sincos(angle)
	// u runs along the lines, v across them.
	u := func(p pt) float64 { return p[0]*cos + p[1]*sin }
	v := func(p pt) float64 { return -p[0]*sin + p[1]*cos }
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, r := range rings {
		for _, p := range r {
			lo, hi = math.Min(lo, v(p)), math.Max(hi, v(p))
		}
	}
	if !(lo < hi) {
		return nil
	}
	k0 := int(math.Ceil((lo - offset) / spacing))
	k1 := int(math.Floor((hi - offset) / spacing))
	if k1 < k0 {
		return nil
	}
	crossings := make([][]float64, k1-k0+1)
	for _, r := range rings {
		for i := range r {
			a, b := r[i], r[(i+1)%len(r)]
			va, vb := v(a), v(b)
			if va == vb {
				continue
			}
			ua, ub := u(a), u(b)
			if va > vb {
				va, vb, ua, ub = vb, va, ub, ua
			}
			// A line counts the end of an edge it meets at the lower end only.
			for k := int(math.Ceil((va - offset) / spacing)); ; k++ {
				vk := offset + float64(k)*spacing
				if vk >= vb || k > k1 {
					break
				}
				if vk < va || k < k0 {
					continue
				}
				crossings[k-k0] = append(crossings[k-k0], ua+(vk-va)/(vb-va)*(ub-ua))
			}
		}
	}
	var out [][2]pt
	for i, c := range crossings {
		slices.Sort(c)
		vk := offset + float64(k0+i)*spacing
		for j := 0; j+1 < len(c); j += 2 {
			if c[j+1] > c[j] {
				out = append(out, [2]pt{
					{c[j]*cos - vk*sin, c[j]*sin + vk*cos},
					{c[j+1]*cos - vk*sin, c[j+1]*sin + vk*cos},
				})
			}
		}
	}
	return out
}

// hatch draws the hatching of the i-th class inside rings on the page.
func (s *sheet) hatch(rings [][]pt, i int) {
	h := hatches[i%len(hatches)]
	spans := scan(openRings(rings), h.angle, h.spacing, 0)
	lines := make([][]pt, len(spans))
	for k, sp := range spans {
		lines[k] = sp[:]
	}
	s.lines(lines, h.stroke)
}

// within reports whether p lies inside the rings, counting crossings.
func within(rings [][]pt, p pt) bool {
	in := false
	for _, r := range rings {
		for i := range r {
			a, b := r[i], r[(i+1)%len(r)]
			if (a[1] > p[1]) != (b[1] > p[1]) && p[0] < a[0]+(p[1]-a[1])/(b[1]-a[1])*(b[0]-a[0]) {
				in = !in
			}
		}
	}
	return in
}

// clipTo returns the parts of a line that lie inside the rings.
func clipTo(rings [][]pt, line []pt) [][]pt {
	var out [][]pt
	var run []pt
	flush := func() {
		if len(run) > 1 {
			out = append(out, run)
		}
		run = nil
	}
	for i := 0; i+1 < len(line); i++ {
		a, b := line[i], line[i+1]
		cuts := []float64{0, 1}
		for _, r := range rings {
			for k := range r {
				if t, ok := crossing(a, b, r[k], r[(k+1)%len(r)]); ok {
					cuts = append(cuts, t)
				}
			}
		}
		slices.Sort(cuts)
		for k := 0; k+1 < len(cuts); k++ {
			p, q := between(a, b, cuts[k]), between(a, b, cuts[k+1])
			if cuts[k+1]-cuts[k] < 1e-12 {
				continue
			}
			if !within(rings, between(p, q, 0.5)) {
				flush()
				continue
			}
			if len(run) == 0 {
				run = append(run, p)
			}
			run = append(run, q)
		}
	}
	flush()
	return out
}

func between(a, b pt, t float64) pt { return pt{a[0] + t*(b[0]-a[0]), a[1] + t*(b[1]-a[1])} }

// crossing returns where between a and b, from 0 to 1, the segment crosses the
// segment from c to d.
func crossing(a, b, c, d pt) (float64, bool) {
	rx, ry := b[0]-a[0], b[1]-a[1]
	sx, sy := d[0]-c[0], d[1]-c[1]
	den := rx*sy - ry*sx
	if den == 0 {
		return 0, false
	}
	t := ((c[0]-a[0])*sy - (c[1]-a[1])*sx) / den
	w := ((c[0]-a[0])*ry - (c[1]-a[1])*rx) / den
	return t, t >= 0 && t <= 1 && w >= 0 && w <= 1
}
