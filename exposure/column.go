package exposure

import "math"

// mostSlabs is the largest number of slabs a column is cut into for a mean.
const mostSlabs = 160

// termMean collects one term's bounds over the slabs of a column: of its mean,
// and of its values.
type termMean struct{ lo, hi, least, most groupRatios }

// columnBounds encloses the ratio of every column over the plan of b, cut into
// count slabs: means are bounded by the means of the slabs' bounds, the terms
// that are compared by their largest value by the largest slab. s.means then
// holds the bounds of each active term.
func (s *search) columnBounds(b box, sl *slab, count int) (lo, hi float64, widest float64) {
	e := s.e
	height := s.p.to - s.p.from
	share := 1 / float64(count)
	s.cells += count
	if need := len(sl.active); cap(s.means) < need {
		s.means = make([]termMean, need, 2*need)
	}
	s.means = s.means[:len(sl.active)]
	for i := range s.means {
		s.means[i] = termMean{}
		for g := range s.means[i].least {
			s.means[i].least[g] = math.Inf(1)
		}
	}
	var peakLo, peakHi, l, h groupRatios
	for k := 0; k < count; k++ {
		part := b.heights(s.p.from+height*float64(k)*share, s.p.from+height*float64(k+1)*share)
		var slo, shi groupRatios
		for i, ti := range sl.active {
			t := &e.terms[ti]
			t.over(part, e.rule, &l, &h)
			m := &s.means[i]
			for g := 0; g < e.ng; g++ {
				m.lo[g] += l[g] * share
				m.hi[g] += h[g] * share
				m.least[g] = math.Min(m.least[g], l[g])
				m.most[g] = math.Max(m.most[g], h[g])
				if !t.w[g].mean {
					slo[g] += l[g]
					shi[g] += h[g]
				}
			}
		}
		for g := 0; g < e.ng; g++ {
			peakLo[g] = math.Max(peakLo[g], slo[g])
			peakHi[g] = math.Max(peakHi[g], shi[g])
		}
	}
	sumLo, sumHi := sl.flo, sl.fhi
	for g := 0; g < e.ng; g++ {
		sumLo[g] += peakLo[g]
		sumHi[g] += peakHi[g]
		for i, ti := range sl.active {
			if e.terms[ti].w[g].mean {
				sumLo[g] += s.means[i].lo[g]
				sumHi[g] += s.means[i].hi[g]
			}
		}
	}
	for i, ti := range sl.active {
		s.means[i].keep(&e.terms[ti], e.ng)
	}
	lo, _ = sumLo.largest(e.ng)
	hi, _ = sumHi.largest(e.ng)
	lo, hi = lo*(1-sumSlack), hi*(1+sumSlack)
	return lo, hi, hi - lo
}

// keep puts the bounds that count for the column into lo and hi: those of the
// mean, or those of the values where the largest counts.
func (m *termMean) keep(t *evalTerm, groups int) {
	for g := 0; g < groups; g++ {
		if !t.w[g].mean {
			m.lo[g], m.hi[g] = m.least[g], m.most[g]
		}
	}
}

// column treats a square where some terms are compared by their mean over the
// body. The column stays whole; its slabs thin as the square shrinks.
func (s *search) column(n *node) (open []slab, done bool) {
	plan, side := s.plan(n)
	sl := n.slabs[0]
	method := s.reaches(plan.heights(s.p.from, s.p.to), &sl)
	if method == partReach {
		method = s.columnReach(plan, &sl, side)
	}
	if method == unreached {
		s.leave(n, outerOnly)
		return nil, true
	}
	count := min(max(1, int(math.Ceil((s.p.to-s.p.from)/side))), mostSlabs)
	lo, hi, gap := s.columnBounds(plan, &sl, count)
	if method == reached {
		if hi <= s.e.share {
			return nil, true
		}
		if lo > s.e.share {
			s.leave(n, innerToo)
			return nil, true
		}
	}
	next := sl
	s.columnWidths()
	limit := s.negligible(0.1 * math.Min(gap, s.e.share) * s.p.step / side)
	from := len(s.ints)
	for i, ti := range sl.active {
		if !(s.width[i] <= limit) {
			s.ints = append(s.ints, ti)
			continue
		}
		m := &s.means[i]
		for g := 0; g < s.e.ng; g++ {
			next.flo[g] += m.lo[g]
			next.fhi[g] += m.hi[g]
		}
	}
	next.active = s.ints[from:len(s.ints):len(s.ints)]
	s.slabs = append(s.slabs, next)
	return s.slabs[len(s.slabs)-1 : len(s.slabs) : len(s.slabs)], false
}

// columnWidths puts the gap of each active term's bounds over the column into
// width.
func (s *search) columnWidths() {
	s.width = s.width[:0]
	for i := range s.means {
		wide := 0.0
		for g := 0; g < s.e.ng; g++ {
			wide = math.Max(wide, s.means[i].hi[g]-s.means[i].lo[g])
		}
		s.width = append(s.width, wide)
	}
}

// columnReach looks at the column's slabs one by one: a slab that lies in a
// reactive region as a whole settles it.
func (s *search) columnReach(plan box, sl *slab, side float64) reach {
	count := min(max(1, int(math.Ceil((s.p.to-s.p.from)/side))), mostSlabs)
	height := s.p.to - s.p.from
	worst := reached
	for k := 0; k < count; k++ {
		b := plan.heights(s.p.from+height*float64(k)/float64(count), s.p.from+height*float64(k+1)/float64(count))
		for _, i := range sl.near {
			switch s.e.reach[i].reaches(b) {
			case unreached:
				return unreached
			case partReach:
				worst = partReach
			}
		}
	}
	return worst
}
