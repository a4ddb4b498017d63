package limits

import (
	"math"
	"slices"
	"sort"
)

// At returns what holds for a class at a frequency in Hz, one entry for each
// group that has a row of that class, covered or not, in the order of Groups;
// nil for a class that the table does not have. At an edge both neighbours hold
// and the lower level counts.
func (t *Table) At(class string, fHz float64) []At {
	x := t.idx()
	var list []At
	for i := range x.byClass[class] {
		list = append(list, t.lowest(&x.byClass[class][i], fHz, fHz).At)
	}
	return list
}

// Band is a range of frequencies in Hz, edges included.
type Band struct {
	FromHz float64 `json:"from_hz"`
	ToHz   float64 `json:"to_hz"`
}

// Lowest is what holds somewhere in a band of frequencies: the lowest level of
// each quantity, and where in the band it is lowest. A reading that does not
// tell frequencies apart is held against it.
type Lowest struct {
	At
	EAtHz, HAtHz, BAtHz, SAtHz float64 // 0 where there is no such level
	// Gaps are the parts of the band in which the group has no row at all: what
	// lies there is not assessed.
	Gaps []Band
}

// LowestOver returns the lowest levels of a class between two frequencies in Hz,
// edges included, one entry for each group of the class. Levels are power laws
// of frequency, so that the lowest lies at an end of a row's share of the band:
// the result is exact. It is nil for a class that the table does not have, and
// where fromHz exceeds toHz.
func (t *Table) LowestOver(class string, fromHz, toHz float64) []Lowest {
	if !(fromHz <= toHz) {
		return nil
	}
	x := t.idx()
	var list []Lowest
	for i := range x.byClass[class] {
		list = append(list, t.lowest(&x.byClass[class][i], fromHz, toHz))
	}
	return list
}

// BriefEnergy returns the lowest incident energy density in J/m2 that the rows
// holding for a class at fHz allow an exposure of tS seconds; ok is false where
// no row does.
func (t *Table) BriefEnergy(class string, fHz, tS float64) (jPerM2 float64, ok bool) {
	for _, a := range t.At(class, fHz) {
		for _, i := range a.Rows {
			if u, has := t.Rows[i].BriefEnergy(fHz, tS); has && (!ok || u < jPerM2) {
				jPerM2, ok = u, true
			}
		}
	}
	return jPerM2, ok
}

// lowest joins the rows of a group that hold anywhere from lo to hi.
func (t *Table) lowest(g *groupIndex, lo, hi float64) Lowest {
	l := Lowest{At: At{Group: g.group, Combine: CombineLargest, OverBody: BodyMean, TimeAveraging: true, AverageS: math.Inf(1)}}
	level := [...]*float64{&l.E, &l.H, &l.B, &l.S}
	at := [...]*float64{&l.EAtHz, &l.HAtHz, &l.BAtHz, &l.SAtHz}
	var held []Band
	levels := false
	for q, bands := range g.bands {
		first := 0
		if g.plain {
			first = sort.Search(len(bands), func(k int) bool { return t.Rows[bands[k]].ToHz*(1+edgeSlack) >= lo })
		}
		for _, i := range bands[first:] {
			r := &t.Rows[i]
			if !(r.FromHz*(1-edgeSlack) <= hi) {
				break
			}
			if !(r.ToHz*(1+edgeSlack) >= lo) {
				continue
			}
			l.Rows = append(l.Rows, i)
			a, b := max(r.FromHz, lo), min(r.ToHz, hi)
			if a > b {
				a, b = b, a // they meet within the slack of an edge
			}
			held = append(held, Band{a, b})
			if r.None {
				l.None = true
				continue
			}
			levels = true
			for _, f := range [...]float64{a, b} {
				if v := r.Level(f); *level[q] == 0 || v < *level[q] {
					*level[q], *at[q] = v, f
				}
				l.AverageS = min(l.AverageS, r.AveragingTime(f))
			}
			if r.Combine == CombineAdd {
				l.Combine = CombineAdd
			}
			if r.OverBody != BodyMean {
				l.OverBody = Largest
			}
			if !r.TimeAveraging {
				l.TimeAveraging = false
			}
		}
	}
	if !levels {
		l.OverBody, l.TimeAveraging, l.AverageS = Largest, false, 0
	}
	slices.Sort(l.Rows)
	if hi > lo {
		l.Gaps = gaps(held, lo, hi)
	}
	return l
}

// gaps returns what of lo to hi the bands leave out.
func gaps(held []Band, lo, hi float64) []Band {
	slices.SortFunc(held, func(a, b Band) int {
		if a.FromHz < b.FromHz {
			return -1
		} else if a.FromHz > b.FromHz {
			return 1
		}
		return 0
	})
	var out []Band
	end := lo
	for _, b := range held {
		if b.FromHz > end*(1+edgeSlack) {
			out = append(out, Band{end, b.FromHz})
		}
		end = max(end, b.ToHz)
	}
	if hi > end*(1+edgeSlack) {
		out = append(out, Band{end, hi})
	}
	return out
}

// Field is the field of one source at one point, or of one reading: E in V/m
// RMS, H in A/m RMS, B in T RMS, S in W/m2.
type Field struct{ E, H, B, S float64 }

// Ratio returns the exposure ratio of one source under the levels that hold, a
// plain ratio to be summed over sources:
//
//	thermal:     the largest of (E/E_L)^2, (H/H_L)^2, (B/B_L)^2 and S/S_L
//	stimulation: the largest of E/E_L, H/H_L and B/B_L
//
// or, where a row that holds says that they add, the sum of the terms of E, of
// the magnetic field (the larger of those of H and B, which are one field) and
// of S. Quantities without a level do not count; with none the ratio is 0. It
// errs on the high side: every level has to be met, whichever would suffice.
// Source: [LIM-SUM].
func (a At) Ratio(f Field) float64 {
	e, h, b := share(f.E, a.E), share(f.H, a.H), share(f.B, a.B)
	s := share(f.S, a.S)
	if a.Group.Effect == Stimulation {
		s = 0
	} else {
		e, h, b = e*e, h*h, b*b
	}
	if a.Combine == CombineAdd {
		return e + max(h, b) + s
	}
	return max(e, h, b, s)
}

func share(x, level float64) float64 {
	if !(level > 0) {
		return 0
	}
	return x / level
}
