package survey

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

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
// such bundle the narrow readings count, and of a wide one the rest that they
// leave unaccounted for.
// Source: [RDG-SUM].
func (s *session) place(id string, parts []*part) PlaceResult {
	res := PlaceResult{Place: id, Counted: []string{}}
	class := parts[0].place.Class
	var counted []*part
	for _, bundle := range bundles(parts) {
		narrow, rest, others := s.sortOut(bundle, class)
		counted = append(counted, narrow...)
		if rest != nil {
			counted = append(counted, rest)
		}
		for _, p := range others {
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
		if p.kind != "rest" && p.result.Verdict == exposure.Above {
			j.Verdict = exposure.Above
		}
	}
	for _, p := range counted {
		if p.kind == "rest" && p.whole.result.Verdict == exposure.Above && j.Verdict == exposure.Within {
			text := fmt.Sprintf("%s alone, held against the lowest level of its band, is above; the readings by frequency account for all but %.3g V/m of it", p.whole.id, p.e)
			j.Reason = strings.TrimPrefix(j.Reason+"; "+text, "; ")
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
func bundles(parts []*part) [][]*part {
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

// sortOut picks what of a bundle counts: its narrow readings that do not overlap
// each other (of two of one width the one with the larger ratio), and what the
// widest field leaves beyond them. others are the readings that do not count.
func (s *session) sortOut(bundle []*part, class string) (narrow []*part, rest *part, others []*part) {
	if len(bundle) == 1 {
		return bundle, nil, nil
	}
	ratio := func(p *part) float64 {
		r, _ := s.sum([]*part{p}, class, 1)
		return r
	}
	byWidth := slices.Clone(bundle)
	slices.SortStableFunc(byWidth, func(a, b *part) int {
		return cmp.Or(cmp.Compare(a.hi-a.lo, b.hi-b.lo), cmp.Compare(ratio(b), ratio(a)))
	})
	for _, p := range byWidth {
		if len(bundles(append(slices.Clone(narrow), p))) == len(narrow)+1 {
			narrow = append(narrow, p)
		}
	}
	most := 0.0
	for _, p := range bundle {
		if slices.Contains(narrow, p) {
			continue
		}
		others = append(others, p)
		left := s.beyond(p, narrow)
		if r := ratio(left); r > most || rest == nil {
			most, rest = r, left
		}
	}
	// In the order in which they were given.
	slices.SortStableFunc(narrow, func(a, b *part) int { return slices.Index(bundle, a) - slices.Index(bundle, b) })
	if most == 0 && rest.whole.result.Verdict != exposure.Above {
		rest = nil
	}
	return narrow, rest, others
}

// beyond returns what a wide reading holds beyond narrow ones that lie in its
// band: in power, as the wide reading sees their sum.
func (s *session) beyond(wide *part, narrow []*part) *part {
	left := *wide
	left.kind, left.whole, left.id = "rest", wide, "rest of "+wide.id
	left.byAverage = nil
	e2, share := wide.e*wide.e, wide.share
	for _, p := range narrow {
		inside := p.lo >= wide.lo*(1-edge) && p.hi <= wide.hi*(1+edge)
		switch {
		case !inside && (p.lo != wide.lo || p.hi != wide.hi):
		case wide.quantity == ShareOfLimit:
			r, _ := p.ratio(s.levelsFor(p, wide.shareOf), 1, true)
			share -= r
		default:
			e2 -= p.e * p.e
		}
	}
	left.e, left.share = math.Sqrt(max(e2, 0)), max(share, 0)
	left.largestE, left.largestS = left.e, left.share
	return &left
}
