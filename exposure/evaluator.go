package exposure

import "math"

// evaluator answers one class's exposure ratio for some of a model's sources in
// one frame, at points and over boxes. It is read-only once made; each
// goroutine brings its own scratch.
type evaluator struct {
	rule  *rule
	terms []evalTerm
	ng    int
	reach []emitter // emitters that have a reactive region
	share float64
}

type evalTerm struct {
	em []emitter
	// pw is the power in W times the ground's power factor, by member and
	// kind.
	pw  [][powerKinds]float64
	w   []weights
	one bool // one member: no amplitudes to add
	// rot holds, by member, the rotation of a rotating source, or nil.
	rot    []*rotation
	source []int // index of Model.sources, by member
}

// groupRatios holds one figure for each group of a class.
type groupRatios [maxGroups]float64

func (g *groupRatios) largest(n int) (best float64, at int) {
	best = g[0]
	for i := 1; i < n; i++ {
		if g[i] > best {
			best, at = g[i], i
		}
	}
	return best, at
}

// evaluator prepares class r for the sources that include(i) picks (nil = all),
// with the ground's field factor k, seen from frame f.
func (m *Model) evaluator(r *rule, include func(i int) bool, k float64, f frame, share float64) *evaluator {
	e := &evaluator{rule: r, ng: len(r.groups), share: share}
	for _, t := range r.terms {
		et := evalTerm{w: t.w}
		for _, i := range t.members {
			s := &m.sources[i]
			if s.silent() || include != nil && !include(i) {
				continue
			}
			em := s.em
			if f != siteFrame {
				em = em.in(f)
			}
			factor := 1.0
			if s.takesGround {
				factor = k * k
			}
			var pw [powerKinds]float64
			for kind := range pw {
				pw[kind] = s.power[kind] * factor
			}
			et.em = append(et.em, em)
			et.pw = append(et.pw, pw)
			et.rot = append(et.rot, s.rot)
			et.source = append(et.source, i)
			if s.reactive > 0 {
				e.reach = append(e.reach, em)
			}
		}
		if len(et.em) > 0 {
			et.one = len(et.em) == 1
			e.terms = append(e.terms, et)
		}
	}
	return e
}

// at returns the term's ratios by group at p.
func (t *evalTerm) at(p Point, r *rule, out *groupRatios) {
	if t.one {
		d := t.em[0].at(p)
		for g := range t.w {
			k := t.pw[0][r.power[g]] * t.rot[0].at(t.em[0], p, r.power[g])
			out[g] = 0
			if k > 0 { // at the very centre 0 times infinity would be NaN
				out[g] = t.w[g].ratio(density{k * d.E, k * d.H})
			}
		}
		return
	}
	var sum [powerKinds]density // amplitudes, sqrt(W/m2)
	for i, em := range t.em {
		d := em.at(p)
		for kind := range sum {
			k := math.Sqrt(t.pw[i][kind] * t.rot[i].at(em, p, powerKind(kind)))
			if k > 0 {
				sum[kind].E += k * math.Sqrt(d.E)
				sum[kind].H += k * math.Sqrt(d.H)
			}
		}
	}
	for g := range t.w {
		a := sum[r.power[g]]
		out[g] = t.w[g].ratio(density{a.E * a.E, a.H * a.H})
	}
}

// over encloses the term's ratios by group over b.
func (t *evalTerm) over(b box, r *rule, lo, hi *groupRatios) {
	if t.one {
		d := t.em[0].over(b)
		for g := range t.w {
			k := t.pw[0][r.power[g]]
			klo, khi := k, k
			if rot := t.rot[0]; rot != nil {
				x := rot.over(t.em[0], b, r.power[g])
				klo, khi = k*x.Lo, k*x.Hi
			}
			lo[g] = t.w[g].ratio(density{klo * d.Lo.E, klo * d.Lo.H})
			hi[g] = 0
			if khi > 0 { // no power against this group: not even at the centre, where 0 times infinity would be NaN
				hi[g] = t.w[g].ratio(density{khi * d.Hi.E, khi * d.Hi.H})
			}
		}
		return
	}
	var slo, shi [powerKinds]density
	for i, em := range t.em {
		d := em.over(b)
		elo, hlo, ehi, hhi := math.Sqrt(d.Lo.E), math.Sqrt(d.Lo.H), math.Sqrt(d.Hi.E), math.Sqrt(d.Hi.H)
		for kind := range slo {
			p := t.pw[i][kind]
			plo, phi := p, p
			if rot := t.rot[i]; rot != nil {
				x := rot.over(em, b, powerKind(kind))
				plo, phi = p*x.Lo, p*x.Hi
			}
			klo, khi := math.Sqrt(plo), math.Sqrt(phi)
			slo[kind].E += klo * elo
			slo[kind].H += klo * hlo
			if khi > 0 {
				shi[kind].E += khi * ehi
				shi[kind].H += khi * hhi
			}
		}
	}
	for g := range t.w {
		a, c := slo[r.power[g]], shi[r.power[g]]
		lo[g] = t.w[g].ratio(density{a.E * a.E, a.H * a.H})
		hi[g] = t.w[g].ratio(density{c.E * c.E, c.H * c.H})
	}
}

// at returns the class's ratios by group at p, and the largest.
func (e *evaluator) at(p Point) (by groupRatios, largest float64) {
	var x groupRatios
	for i := range e.terms {
		e.terms[i].at(p, e.rule, &x)
		for g := 0; g < e.ng; g++ {
			by[g] += x[g]
		}
	}
	largest, _ = by.largest(e.ng)
	return by, largest
}

// over encloses the class's largest ratio over b.
func (e *evaluator) over(b box) (lo, hi float64) {
	var l, h, slo, shi groupRatios
	for i := range e.terms {
		e.terms[i].over(b, e.rule, &l, &h)
		for g := 0; g < e.ng; g++ {
			slo[g] += l[g]
			shi[g] += h[g]
		}
	}
	lo, _ = slo.largest(e.ng)
	hi, _ = shi.largest(e.ng)
	return lo * (1 - sumSlack), hi * (1 + sumSlack)
}

// sumSlack widens every sum of ratios for the rounding of its terms: a few
// hundred terms, each good to a few ulps through a pattern, a square root and
// a weight.
const sumSlack = 1e-12

// reaches says whether every method holds over b.
func (e *evaluator) reaches(b box) reach {
	worst := reached
	for _, em := range e.reach {
		switch em.reaches(b) {
		case unreached:
			return unreached
		case partReach:
			worst = partReach
		}
	}
	return worst
}

// farBound is an upper bound of the largest ratio at every point farther than
// radius from the frame's origin, or +Inf where none is known.
func (e *evaluator) farBound(radius float64, centres [][]float64) float64 {
	var sum groupRatios
	for i := range e.terms {
		t := &e.terms[i]
		var amp [powerKinds]float64
		for j, em := range t.em {
			g, offset := em.falloff()
			free := radius - offset - centres[i][j]
			if free <= 0 {
				return math.Inf(1)
			}
			for kind := range amp {
				amp[kind] += math.Sqrt(t.pw[j][kind] * g / (4 * math.Pi * free * free))
			}
		}
		for k := range t.w {
			a := amp[e.rule.power[k]]
			sum[k] += t.w[k].ratio(density{a * a, a * a})
		}
	}
	best, _ := sum.largest(e.ng)
	return best * (1 + sumSlack)
}
