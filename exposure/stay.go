package exposure

import (
	"fmt"
	"math"

	"example.org/standclear/limits"
)

// neverAveraged is the rule with only the groups that no stay may average over:
// stimulation and peak levels.
func (r *rule) neverAveraged() *rule {
	out := &rule{class: r.class, covers: r.covers}
	var keep []int
	for i, g := range r.groups {
		if g.Effect == limits.Stimulation || g.Kind == limits.Peak {
			keep = append(keep, i)
			out.groups, out.power = append(out.groups, g), append(out.power, r.power[i])
		}
	}
	for _, t := range r.terms {
		k := term{members: t.members, covered: t.covered}
		for _, i := range keep {
			k.w = append(k.w, t.w[i])
		}
		out.terms = append(out.terms, k)
	}
	return out
}

// averagingRule is what the limit rows of a class say about stays, over every
// source that radiates.
type averagingRule struct {
	timeS  float64 // the shortest averaging time, +Inf where none is stated
	all    bool    // every row that holds allows averaging
	short  bool    // a local or brief level exists
	briefs []briefLevel
}

// briefLevel is a row with brief terms at the frequency of a source.
type briefLevel struct {
	row limits.Row
	hz  float64
	s   float64 // its level as power density, W/m2
}

func (m *Model) averagingRule(r *rule) averagingRule {
	a := averagingRule{timeS: math.Inf(1), all: true}
	for i := range m.sources {
		s := &m.sources[i]
		if s.silent() {
			continue
		}
		for _, at := range m.site.Limits.At(r.class, s.src.FrequencyHz) {
			if at.Group.Effect == limits.Stimulation || at.Group.Kind == limits.Peak {
				continue
			}
			if at.Group.Region == limits.Local {
				a.short = true
			}
			a.all = a.all && (at.None || at.TimeAveraging)
			if at.AverageS > 0 {
				a.timeS = math.Min(a.timeS, at.AverageS)
			}
			for _, k := range at.Rows {
				row := m.site.Limits.Rows[k]
				if !row.HasBrief || row.None {
					continue
				}
				a.short = true
				b := briefLevel{row: row, hz: s.src.FrequencyHz, s: row.Level(s.src.FrequencyHz)}
				switch row.Quantity {
				case limits.E:
					b.s = SFromE(b.s)
				case limits.H:
					b.s = SFromH(b.s)
				case limits.B:
					b.s = SFromH(b.s / Mu0)
				}
				a.briefs = append(a.briefs, b)
			}
		}
	}
	return a
}

// share is the share of the averaging rule that a stay of t seconds at the
// limit itself takes up: t/T, or more where the brief levels of a source are
// stricter for short stays.
func (a *averagingRule) share(t float64) float64 {
	share := t / a.timeS
	for _, b := range a.briefs {
		if energy, ok := b.row.BriefEnergy(b.hz, t); ok && energy > 0 {
			share = math.Max(share, b.s*t/energy)
		}
	}
	return share
}

// stayTime is how long a stay at ratio r may last in s, with r0 elsewhere: the
// averaging rule's time, cut down until the brief levels hold too.
func (a *averagingRule) stayTime(r, r0 float64) (t float64, brief bool) {
	t = StayTime(a.timeS, r, r0)
	fits := func(t float64) bool { return (r-r0)*a.share(t) <= 1-r0 }
	if fits(t * (1 - 1e-12)) {
		return t, false
	}
	lo, hi := 0.0, t
	for i := 0; i < 60; i++ {
		if mid := (lo + hi) / 2; fits(mid) {
			lo = mid
		} else {
			hi = mid
		}
	}
	return lo, true
}

// stay says how long a stay may last by the averaging rule, before any
// reduction.
func (m *Model) stay(w *Work, r *rule, points []PointResult, q *WorkQuery) {
	none := func(why string) {
		zero := 0.0
		w.StayMin, w.StayReason = &zero, why
	}
	if w.Verdict == NotAssessed || w.Reason != "" {
		none("no stay is proposed where anything is not assessed: " + w.Reason)
		return
	}
	if w.Verdict == Within {
		w.StayAllowed = true
		w.StayReason = "the exposure ratio is not above 1: the levels supplied set no end to a stay"
		return
	}
	ratio := 0.0
	for _, p := range points {
		for i, g := range p.class(r.class).Groups {
			x := float64(g.ExposureRatio)
			if (r.groups[i].Effect == limits.Stimulation || r.groups[i].Kind == limits.Peak) && x > 1 {
				none("no stay: the " + r.groups[i].String() + " levels are exceeded, and they are never averaged")
				return
			}
			ratio = math.Max(ratio, x)
		}
	}
	a := m.averagingRule(r)
	switch {
	case !a.all:
		none("no stay: the limit rows of this class do not all say that a stay may be averaged (time averaging = yes)")
	case !a.short:
		none("no stay: the table has no local or brief levels for this class, which a short stay must be held against")
	case math.IsInf(a.timeS, 1):
		none("no stay: the limit rows state no averaging time")
	case q.Elsewhere >= 1:
		none("no stay: the ratio elsewhere already takes up the limit")
	default:
		t, brief := a.stayTime(math.Max(ratio, 1+bodyGap), q.Elsewhere)
		t /= 60
		w.StayMin, w.StayAllowed = &t, true
		w.StayReason = fmt.Sprintf("at a ratio of %.3g for the stay and %.3g for the rest of any %.4g min", ratio, q.Elsewhere, a.timeS/60)
		if brief {
			w.StayReason += ", shortened by the levels for brief exposure"
		}
		if q.StayS > 0 && q.StayS/60 > t {
			w.StayAllowed = false
			w.StayReason += fmt.Sprintf("; the %.4g min asked are longer than that", q.StayS/60)
		}
	}
}

// StayTime returns how long, in s, a stay at exposure ratio r may last within
// the averaging time T (s) when the ratio is r0 for the rest of it: t = T (1 -
// r0)/(r - r0), for r > 1 and 0 <= r0 < 1. It is exact for constant ratios.
// Source: [STAY].
func StayTime(averagingS, r, r0 float64) float64 { return averagingS * (1 - r0) / (r - r0) }
