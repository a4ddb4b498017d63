package exposure

import "math"

// bodyGap is the relative gap at which the search for the largest ratio over a
// body ends: the value found is at most this much below the true largest, and a
// verdict allows for it.
const bodyGap = 1e-4

// body returns the class's ratios by group over the body above (x, y), each
// group's at the height where it is largest, and that height for the group that
// governs. useMean applies the body mean where the limit rows ask for it.
func (e *evaluator) body(x, y, from, to float64, useMean bool) (by groupRatios, at float64) {
	if to <= from {
		by, _ = e.at(Point{X: x, Y: y, Z: from})
		return by, from
	}
	var means groupRatios
	if useMean {
		means = e.means(x, y, from, to)
	}
	skipMean := useMean && e.hasPeaks()
	best := math.Inf(-1)
	at = from
	for g := 0; g < e.ng; g++ {
		base := 0.0
		if skipMean {
			base = means[g]
		}
		z, v := e.tallest(g, base, x, y, from, to, skipMean)
		if useMean && !skipMean {
			v = means[g] // all that counts; z is where the field is largest all the same
		}
		by[g] = v
		if v > best {
			best, at = v, z
		}
	}
	return by, at
}

// means returns, by group, the part of the ratio that is a mean over the body.
func (e *evaluator) means(x, y, from, to float64) (by groupRatios) {
	for i := range e.terms {
		t := &e.terms[i]
		for g := 0; g < e.ng; g++ {
			if t.w[g].mean {
				by[g] += t.meanOver(e.rule, g, x, y, from, to)
			}
		}
	}
	return by
}

// bodyNear returns the ratios at one height, with the mean over the body in
// place of the value for every term that is compared so.
func (e *evaluator) bodyNear(x, y, at, from, to float64) groupRatios {
	var by groupRatios
	for i := range e.terms {
		one := e.termNear(&e.terms[i], x, y, at, from, to)
		for g := 0; g < e.ng; g++ {
			by[g] += one[g]
		}
	}
	return by
}

func (e *evaluator) termNear(t *evalTerm, x, y, at, from, to float64) groupRatios {
	var by groupRatios
	t.at(Point{X: x, Y: y, Z: at}, e.rule, &by)
	for g := 0; g < e.ng; g++ {
		if t.w[g].mean && to > from {
			by[g] = t.meanOver(e.rule, g, x, y, from, to)
		}
	}
	return by
}

// tallest finds the height of a group's largest ratio over the body by branch
// and bound, to within bodyGap, and that ratio. With skipMean, the terms that are
// compared by their mean do not vary with height: base stands for them.
func (e *evaluator) tallest(g int, base, x, y, from, to float64, skipMean bool) (at, best float64) {
	value := func(z float64) float64 { return base + e.peaksAt(Point{X: x, Y: y, Z: z}, skipMean)[g] }
	at, best = from, value(from)
	if v := value(to); v > best {
		at, best = to, v
	}
	type part struct{ lo, hi float64 }
	work := []part{{from, to}}
	for len(work) > 0 {
		p := work[len(work)-1]
		work = work[:len(work)-1]
		mid := (p.lo + p.hi) / 2
		if v := value(mid); v > best {
			at, best = mid, v
		}
		most := base + e.peaksOver(box{c: Point{X: x, Y: y}}.heights(p.lo, p.hi), skipMean)[g]
		if most <= best*(1+bodyGap) || p.hi-p.lo < 1e-4 {
			continue
		}
		work = append(work, part{p.lo, mid}, part{mid, p.hi})
	}
	return at, best
}

// hasPeaks reports whether any term is compared by its largest value.
func (e *evaluator) hasPeaks() bool {
	for i := range e.terms {
		for g := range e.terms[i].w {
			if w := &e.terms[i].w[g]; !w.mean && (w.e > 0 || w.h > 0 || w.s > 0) {
				return true
			}
		}
	}
	return false
}

// peaksAt returns the ratios by group at p, without the terms that are compared
// by their mean where skipMean is set.
func (e *evaluator) peaksAt(p Point, skipMean bool) groupRatios {
	var by, one groupRatios
	for i := range e.terms {
		t := &e.terms[i]
		t.at(p, e.rule, &one)
		for g := 0; g < e.ng; g++ {
			if !(skipMean && t.w[g].mean) {
				by[g] += one[g]
			}
		}
	}
	return by
}

// peaksOver bounds peaksAt over b from above, by group.
func (e *evaluator) peaksOver(b box, skipMean bool) groupRatios {
	var sum, l, h groupRatios
	for i := range e.terms {
		t := &e.terms[i]
		t.over(b, e.rule, &l, &h)
		for g := 0; g < e.ng; g++ {
			if !(skipMean && t.w[g].mean) {
				sum[g] += h[g]
			}
		}
	}
	for g := range sum {
		sum[g] *= 1 + sumSlack
	}
	return sum
}

// meanOver is the mean of a term's ratio over the body: Gauss-Legendre with
// eight points on halves until two levels agree to 1e-7.
func (t *evalTerm) meanOver(r *rule, g int, x, y, from, to float64) float64 {
	var one groupRatios
	rule := func(a, b float64) float64 {
		sum := 0.0
		for k, u := range gauss8 {
			for _, s := range [2]float64{-1, 1} {
				t.at(Point{X: x, Y: y, Z: (a+b)/2 + s*u*(b-a)/2}, r, &one)
				sum += gauss8w[k] * one[g]
			}
		}
		return sum * (b - a) / 2
	}
	var adapt func(a, b, whole float64, depth int) float64
	adapt = func(a, b, whole float64, depth int) float64 {
		mid := (a + b) / 2
		left, right := rule(a, mid), rule(mid, b)
		if depth == 0 || math.Abs(left+right-whole) <= 1e-7*math.Abs(whole) {
			return left + right
		}
		return adapt(a, mid, left, depth-1) + adapt(mid, b, right, depth-1)
	}
	return adapt(from, to, rule(from, to), 12) / (to - from)
}

// Nodes and weights of the eight-point Gauss-Legendre rule, positive half
// (Abramowitz and Stegun 1964, table 25.4).
var (
	gauss8  = [4]float64{0.183434642495650, 0.525532409916329, 0.796666477413627, 0.960289856497536}
	gauss8w = [4]float64{0.362683783378362, 0.313706645877887, 0.222381034453374, 0.101228536290376}
)
