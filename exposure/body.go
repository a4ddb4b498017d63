package exposure

import "math"

// bodyGap is the relative gap at which the search for the largest ratio over a
// body ends: the value found is at most this much below the true largest, and a
// verdict allows for it. A local search makes it far better where the ratio is
// smooth.
const bodyGap = 1e-3

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
		if !t.anyMean() {
			continue
		}
		means := t.meansOver(e.rule, x, y, from, to)
		for g := 0; g < e.ng; g++ {
			if t.w[g].mean {
				by[g] += means[g]
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
	if to <= from || !t.anyMean() {
		return by
	}
	means := t.meansOver(e.rule, x, y, from, to)
	for g := 0; g < e.ng; g++ {
		if t.w[g].mean {
			by[g] = means[g]
		}
	}
	return by
}

func (t *evalTerm) anyMean() bool {
	for g := range t.w {
		if t.w[g].mean {
			return true
		}
	}
	return false
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
	// Look at a few heights first: a good value to beat saves most of the bounds.
	const looks = 8
	for k := 1; k < looks; k++ {
		z := from + (to-from)*float64(k)/looks
		if v := value(z); v > best {
			at, best = z, v
		}
	}
	at, best = climb(value, at, best, from, to, (to-from)/looks)
	type part struct{ lo, hi float64 }
	work := []part{{from, to}}
	for bounds := 0; len(work) > 0; bounds++ {
		if bounds > mostBodyBounds {
			return e.sampled(value, at, best, from, to)
		}
		p := work[len(work)-1]
		work = work[:len(work)-1]
		most := base + e.peaksOver(box{c: Point{X: x, Y: y}}.heights(p.lo, p.hi), skipMean)[g]
		if most <= best*(1+bodyGap) || p.hi-p.lo < 1e-4 {
			continue
		}
		mid := (p.lo + p.hi) / 2
		if v := value(mid); v > best {
			at, best = climb(value, mid, v, from, to, p.hi-p.lo)
		}
		work = append(work, part{p.lo, mid}, part{mid, p.hi})
	}
	return at, best
}

// mostBodyBounds ends a search whose bounds do not close: those of two rays over
// ground on an array, which are sums of amplitudes.
const mostBodyBounds = 1000

// sampled looks at every centimetre of the body, far finer than the fringes of
// any wave it is used for, and improves the best.
func (e *evaluator) sampled(value func(float64) float64, at, best, from, to float64) (float64, float64) {
	n := int(math.Ceil((to - from) / 0.01))
	for k := 1; k < n; k++ {
		z := from + (to-from)*float64(k)/float64(n)
		if v := value(z); v > best {
			at, best = z, v
		}
	}
	return climb(value, at, best, from, to, 0.02)
}

// climb improves a height by steps that halve where they find nothing better.
func climb(value func(float64) float64, at, best, from, to, step float64) (float64, float64) {
	for step /= 2; step > 1e-4; {
		moved := false
		for _, z := range [2]float64{math.Max(from, at-step), math.Min(to, at+step)} {
			if v := value(z); v > best {
				at, best, moved = z, v, true
				break
			}
		}
		if !moved {
			step /= 2
		}
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

// meanOver is the mean of a term's ratio in group g over the body.
func (t *evalTerm) meanOver(r *rule, g int, x, y, from, to float64) float64 {
	return t.meansOver(r, x, y, from, to)[g]
}

// meansOver is the mean of a term's ratios over the body, by group:
// Gauss-Legendre with four points on halves until two levels agree to 1e-5. It is
// good to 1e-7 where the ratio is smooth, and to a few 1e-4 where a sampled
// pattern has kinks, which bodyGap covers in a verdict.
func (t *evalTerm) meansOver(r *rule, x, y, from, to float64) groupRatios {
	n := len(t.w)
	rule := func(a, b float64) (sum groupRatios) {
		var one groupRatios
		for k, u := range gauss4 {
			for _, s := range [2]float64{-1, 1} {
				t.at(Point{X: x, Y: y, Z: (a+b)/2 + s*u*(b-a)/2}, r, &one)
				for g := 0; g < n; g++ {
					sum[g] += gauss4w[k] * one[g] * (b - a) / 2
				}
			}
		}
		return sum
	}
	var adapt func(a, b float64, whole groupRatios, depth int) groupRatios
	adapt = func(a, b float64, whole groupRatios, depth int) groupRatios {
		mid := (a + b) / 2
		left, right := rule(a, mid), rule(mid, b)
		agree := true
		for g := 0; g < n; g++ {
			agree = agree && math.Abs(left[g]+right[g]-whole[g]) <= 1e-5*math.Abs(whole[g])+1e-9*(b-a)
		}
		if depth > 0 && !agree {
			left, right = adapt(a, mid, left, depth-1), adapt(mid, b, right, depth-1)
		}
		for g := 0; g < n; g++ {
			left[g] += right[g]
		}
		return left
	}
	sum := adapt(from, to, rule(from, to), 14)
	for g := range sum {
		sum[g] /= to - from
	}
	return sum
}

// Nodes and weights of the four-point Gauss-Legendre rule, positive half
// (Abramowitz and Stegun 1964, table 25.4).
var (
	gauss4  = [2]float64{0.339981043584856, 0.861136311594053}
	gauss4w = [2]float64{0.652145154862546, 0.347854845137454}
)
