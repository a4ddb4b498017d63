package survey

import (
	"math"
	"slices"

	"example.org/standclear/exposure"
)

// places adds up the bands measured at each place, in the order in which the
// places first appear.
func (s *session) places() {
	var order []string
	at := map[string][]*part{}
	add := func(p *part) {
		id := p.place.ID
		if id == "" || p.kind == "member" {
			return
		}
		if _, seen := at[id]; !seen {
			order = append(order, id)
		}
		at[id] = append(at[id], p)
	}
	for i := range s.result.Readings {
		add(s.result.Readings[i].part)
	}
	for i := range s.result.Groups {
		add(s.result.Groups[i].part)
	}
	for i := range s.result.Series {
		add(s.result.Series[i].part)
	}
	for _, id := range order {
		s.result.Places = append(s.result.Places, s.place(id, at[id]))
	}
}

// place adds up one place. Bands that overlap hold the same signals: of each
// such bundle the wide reading or the sum of the narrow ones counts, whichever
// is larger.
func (s *session) place(id string, parts []*part) PlaceResult {
	res := PlaceResult{Place: id, Counted: []string{}}
	class := parts[0].place.Class
	var counted []*part
	for _, bundle := range bundles(parts, class) {
		best, rest := heavier(s, bundle, class)
		counted = append(counted, best...)
		for _, p := range rest {
			res.NotCounted = append(res.NotCounted, p.id)
		}
	}
	var reasons []string
	e2, fields := 0.0, false
	var expanded *float64
	known := true
	for _, p := range counted {
		res.Counted = append(res.Counted, p.id)
		res.BelowFloor = res.BelowFloor || p.below
		if p.quantity != ShareOfLimit {
			e2 += p.e * p.e
			fields = true
		}
		if p.expanded == nil {
			known = false
		} else if expanded == nil || *p.expanded > *expanded {
			expanded = p.expanded
		}
		for _, reason := range reasonsOf(p.result, p.id) {
			if !slices.Contains(reasons, reason) {
				reasons = append(reasons, reason)
			}
		}
		if p.quantity == ShareOfLimit && class != "" && p.shareOf != class {
			reasons = append(reasons, p.id+" is a share of the limit of another class, "+p.shareOf)
		}
	}
	if known {
		res.ExpandedDB = expanded
	}
	if fields {
		e := math.Sqrt(e2)
		res.FieldVPerM = &e
	}
	j := decide(s.rule, class, func(k float64) (float64, string) { return s.sum(counted, class, k) }, res.ExpandedDB, reasons)
	for _, p := range counted {
		if p.result.Verdict == exposure.Above {
			j.Verdict = exposure.Above
		}
	}
	res.Judgement = j
	return res
}

// reasonsOf returns why a part is not assessed.
func reasonsOf(j *Judgement, id string) []string {
	if j.Verdict != exposure.NotAssessed || j.Reason == "" {
		return nil
	}
	return []string{id + ": " + j.Reason}
}

// sum adds the ratios of parts with their fields times a factor.
func (s *session) sum(parts []*part, class string, factor float64) (float64, string) {
	total, largest, governed := 0.0, -1.0, ""
	for _, p := range parts {
		c := class
		if c == "" {
			c = p.result.Class
		}
		r, g := p.ratio(s.levelsFor(p, c), factor, true)
		total += r
		if r > largest {
			largest, governed = r, g
		}
	}
	return total, governed
}

// bundles sorts the parts of a place into bundles of overlapping bands. Readings
// of different antennas in one band are different signals.
func bundles(parts []*part, class string) [][]*part {
	set := make([]int, len(parts))
	for i := range set {
		set[i] = i
	}
	var root func(i int) int
	root = func(i int) int {
		if set[i] != i {
			set[i] = root(set[i])
		}
		return set[i]
	}
	for i, a := range parts {
		for k := range i {
			b := parts[k]
			if a.lo <= b.hi*(1+edge) && b.lo <= a.hi*(1+edge) && !different(a.antennas, b.antennas) && (a.quantity == MagneticField) == (b.quantity == MagneticField) {
				x, y := root(i), root(k)
				set[max(x, y)] = min(x, y)
			}
		}
	}
	at := map[int]int{}
	var out [][]*part
	for i, p := range parts {
		r := root(i)
		n, ok := at[r]
		if !ok {
			n = len(out)
			at[r] = n
			out = append(out, nil)
		}
		out[n] = append(out[n], p)
	}
	return out
}

// different reports whether two lists of antennas are both stated and share
// none.
func different(a, b []string) bool {
	if len(a) == 0 || len(b) == 0 {
		return false
	}
	return !slices.ContainsFunc(a, func(x string) bool { return slices.Contains(b, x) })
}

// heavier picks what of a bundle counts: one of its parts alone, or the most of
// its narrow parts that do not overlap each other.
func heavier(s *session, bundle []*part, class string) (best, rest []*part) {
	if len(bundle) == 1 {
		return bundle, nil
	}
	ratio := func(p *part) float64 {
		r, _ := s.sum([]*part{p}, class, 1)
		return r
	}
	byWidth := slices.Clone(bundle)
	slices.SortStableFunc(byWidth, func(a, b *part) int {
		if d := (a.hi - a.lo) - (b.hi - b.lo); d != 0 {
			return int(math.Copysign(1, d))
		}
		return int(math.Copysign(1, ratio(b)-ratio(a)))
	})
	var narrow []*part
	for _, p := range byWidth {
		if len(bundles(append(slices.Clone(narrow), p), class)) == len(narrow)+1 {
			narrow = append(narrow, p)
		}
	}
	total, _ := s.sum(narrow, class, 1)
	best = narrow
	for _, p := range bundle {
		if r := ratio(p); r > total {
			best, total = []*part{p}, r
		}
	}
	for _, p := range bundle {
		if !slices.Contains(best, p) {
			rest = append(rest, p)
		}
	}
	// In the order in which they were given.
	slices.SortStableFunc(best, func(a, b *part) int { return slices.Index(bundle, a) - slices.Index(bundle, b) })
	return best, rest
}
