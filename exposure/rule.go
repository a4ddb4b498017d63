package exposure

import (
	"math"

	"example.org/standclear/limits"
)

// powerKind is which of a source's powers counts against a group of levels.
type powerKind uint8

const (
	meanPower  powerKind = iota // thermal mean levels
	peakPower                   // peak levels
	onAirPower                  // stimulation levels: the power while transmitting
	powerKinds
)

// powerFor returns the power that counts against a group.
func powerFor(g limits.Group) powerKind {
	switch {
	case g.Kind == limits.Peak:
		return peakPower
	case g.Effect == limits.Stimulation:
		return onAirPower
	}
	return meanPower
}

// weights turn the two power densities of one signal into its exposure ratio
// in one group: the ratio is e*E, h*H and s*max(E, H), of which the largest or
// the sum counts (square roots of the first two for stimulation). A weight of
// zero is a quantity without a level.
type weights struct {
	e, h, s float64
	add     bool // combine = add
	root    bool // stimulation: ratios of field strengths
	mean    bool // the body mean is compared, not the largest over the body
}

func newWeights(at limits.At, effect limits.Effect) weights {
	w := weights{add: at.Combine == limits.CombineAdd, root: effect == limits.Stimulation}
	w.mean = at.OverBody == limits.BodyMean && effect == limits.Thermal && at.Group.Kind == limits.Mean && at.Group.Region == limits.WholeBody
	if at.E > 0 {
		w.e = Z0 / (at.E * at.E)
	}
	hLimit := at.H
	if at.B > 0 && (hLimit == 0 || at.B/Mu0 < hLimit) {
		hLimit = at.B / Mu0
	}
	if hLimit > 0 {
		w.h = 1 / (Z0 * hLimit * hLimit)
	}
	if at.S > 0 && !w.root {
		w.s = 1 / at.S
	}
	if !w.add {
		// max(e E, h H, s max(E, H)) = max(max(e, s) E, max(h, s) H)
		w.e, w.h, w.s = math.Max(w.e, w.s), math.Max(w.h, w.s), 0
	}
	return w
}

// ratio returns the exposure ratio of the power densities d (W/m2). It rises
// with both, so that it carries bounds to bounds.
func (w *weights) ratio(d density) float64 {
	a, b := 0.0, 0.0
	if w.e != 0 { // 0 times infinity at a source's centre would be NaN
		a = w.e * d.E
	}
	if w.h != 0 {
		b = w.h * d.H
	}
	if w.root {
		a, b = math.Sqrt(a), math.Sqrt(b)
	}
	if w.add {
		if w.s != 0 {
			return a + b + w.s*math.Max(d.E, d.H)
		}
		return a + b
	}
	return math.Max(a, b)
}

// maxGroups is the number of groups a class can have: two effects, two
// regions, two kinds.
const maxGroups = 8

// term is one signal of a class: a single source, or the rows that share a
// signal at one frequency, whose fields add in amplitude.
type term struct {
	members []int // indices of Model.sources
	w       []weights
	covered bool
}

// rule is a class of the limit table made ready for the sources of a model.
type rule struct {
	class     string
	groups    []limits.Group
	power     []powerKind // by group
	terms     []term
	anyMean   bool
	covers    []bool   // by source: the table speaks at its frequency in every group
	uncovered []string // why the class is not assessed wherever the covered sources do not exceed it
}

// asLargest is the rule with no body mean: the largest over the body counts for
// every level.
func (r *rule) asLargest() *rule {
	if !r.anyMean {
		return r
	}
	out := *r
	out.anyMean = false
	out.terms = append([]term(nil), r.terms...)
	for i := range out.terms {
		out.terms[i].w = append([]weights(nil), r.terms[i].w...)
		for g := range out.terms[i].w {
			out.terms[i].w[g].mean = false
		}
	}
	return &out
}

// newRule looks up every level that holds for the model's sources in a class.
func (m *Model) newRule(class string) *rule {
	t := m.site.Limits
	r := &rule{class: class, groups: t.Groups(class), covers: make([]bool, len(m.sources))}
	for _, g := range r.groups {
		r.power = append(r.power, powerFor(g))
	}
	for _, members := range m.signalList {
		first := m.sources[members[0]].src
		tm := term{members: members, covered: true}
		for i, at := range t.At(class, first.FrequencyHz) {
			tm.w = append(tm.w, newWeights(at, r.groups[i].Effect))
			if tm.w[i].mean {
				r.anyMean = true
			}
			if !at.Covered() {
				tm.covered = false
				for _, k := range members {
					if !m.sources[k].silent() {
						r.uncovered = append(r.uncovered, "no "+r.groups[i].String()+" limit at "+frequencyText(first.FrequencyHz)+" ("+m.sources[k].src.ID+")")
					}
				}
			}
		}
		for _, k := range members {
			r.covers[k] = tm.covered
		}
		r.terms = append(r.terms, tm)
	}
	for i := range m.sources {
		if s := &m.sources[i]; s.src.Power.Unknown {
			r.uncovered = append(r.uncovered, "power of "+s.src.ID+" unknown")
		}
	}
	return r
}

// signals groups the sources by shared signal and frequency, in order of first
// appearance.
func (m *Model) signals() [][]int {
	type key struct {
		signal string
		hz     float64
	}
	var out [][]int
	at := map[key]int{}
	for i := range m.sources {
		s := m.sources[i].src
		if s.Signal == "" {
			out = append(out, []int{i})
			continue
		}
		k := key{s.Signal, s.FrequencyHz}
		if j, ok := at[k]; ok {
			out[j] = append(out[j], i)
			continue
		}
		at[k] = len(out)
		out = append(out, []int{i})
	}
	return out
}
