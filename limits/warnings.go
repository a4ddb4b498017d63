package limits

import (
	"fmt"
	"math"
	"slices"
)

const (
	// stepLimit is the relative step at an edge from which a slip of the pen is
	// likelier than a published step: those stay below it.
	stepLimit = 0.05
	// bothBelowHz is the frequency below which E and H are not tied together by a
	// plane wave at the distances people keep.
	bothBelowHz = 30e6
)

// warnings returns what an assessor must know about a table without faults.
func (t *Table) warnings() []Problem {
	var list []Problem
	if why := t.Unconfirmed(); why != "" {
		column := ""
		if t.About.CheckedBy != "" {
			column = "checked by"
		}
		list = append(list, Problem{Column: column, Message: why})
	}
	if len(t.Spots) == 0 && t.About.CheckedBy != "" {
		list = append(list, Problem{Column: "spot", Message: "there are no spot values; whoever checks the table types in levels as printed in the source"})
	}
	list = append(list, t.stepWarnings()...)
	list = append(list, t.oneFieldWarnings()...)
	list = append(list, t.gapWarnings()...)
	sortProblems(list)
	return list
}

// stepWarnings finds neighbours whose levels part by more than stepLimit where
// they meet.
func (t *Table) stepWarnings() []Problem {
	var list []Problem
	t.eachList(func(_ Group, _ Quantity, bands []int) {
		for k := 1; k < len(bands); k++ {
			a, b := t.Rows[bands[k-1]], t.Rows[bands[k]]
			if a.None || b.None || !meet(a, b) {
				continue
			}
			below, above := a.Level(a.ToHz), b.Level(b.FromHz)
			if step := above/below - 1; math.Abs(step) > stepLimit {
				list = append(list, Problem{Line: b.Line, Column: "coefficient", Message: fmt.Sprintf(
					"at %s the %s level for %s steps by %+.0f %%, from %s (%s) to %s; check both rows against the source",
					Hz(b.FromHz), b.Quantity, b.Class, 100*step, LevelText(a.Quantity, below), row(a), LevelText(b.Quantity, above))})
			}
		}
	})
	return list
}

func meet(a, b Row) bool { return math.Abs(b.FromHz-a.ToHz) <= edgeSlack*a.ToHz }

// oneFieldWarnings finds where, below 30 MHz, a class has levels of the electric
// field but not of the magnetic, or the other way round. A deliberate gap speaks.
func (t *Table) oneFieldWarnings() []Problem {
	var list []Problem
	x := t.idx()
	for _, class := range x.classes {
		for _, g := range x.byClass[class] {
			electric, magnetic := g.bands[0], slices.Concat(g.bands[1], g.bands[2])
			list = append(list, t.oneField(class, g, electric, magnetic, "E", "H or B")...)
			list = append(list, t.oneField(class, g, magnetic, electric, "H or B", "E")...)
		}
	}
	return list
}

func (t *Table) oneField(class string, g groupIndex, has, lacks []int, name, other string) []Problem {
	var list []Problem
	spoken := t.spans(lacks, bothBelowHz, true)
	for _, b := range t.spans(has, bothBelowHz, false) {
		for _, gap := range gaps(slices.Clone(spoken), b.FromHz, b.ToHz) {
			list = append(list, Problem{Line: t.firstLine(g), Column: "quantity", Message: fmt.Sprintf(
				"from %s to %s %s (%s) has a level of %s but none of %s; below 30 MHz the one does not stand for the other",
				Hz(gap.FromHz), Hz(gap.ToHz), class, g.group, name, other)})
		}
	}
	return list
}

// spans joins bands, cut off at top, into ranges that do not touch, with or
// without the deliberate gaps.
func (t *Table) spans(bands []int, top float64, withNone bool) []Band {
	var list []Band
	for _, i := range bands {
		if r := t.Rows[i]; r.FromHz < top && (withNone || !r.None) {
			list = append(list, Band{r.FromHz, min(r.ToHz, top)})
		}
	}
	return join(list)
}

// gapWarnings finds frequencies between a group's lowest and highest at which
// it has no row.
func (t *Table) gapWarnings() []Problem {
	var list []Problem
	x := t.idx()
	for _, class := range x.classes {
		for _, g := range x.byClass[class] {
			var all []int
			for _, bands := range g.bands {
				all = append(all, bands...)
			}
			held := t.spans(all, math.Inf(1), true)
			for k := 1; k < len(held); k++ {
				list = append(list, Problem{Line: t.firstLine(g), Column: "from", Message: fmt.Sprintf(
					"%s (%s) has no row between %s and %s: an antenna there is not assessed; write level none where the source sets none on purpose",
					class, g.group, Hz(held[k-1].ToHz), Hz(held[k].FromHz))})
			}
		}
	}
	return list
}

func (t *Table) firstLine(g groupIndex) int {
	first := -1
	for _, bands := range g.bands {
		for _, i := range bands {
			if first < 0 || i < first {
				first = i
			}
		}
	}
	return t.Rows[first].Line
}

// join merges bands that overlap or meet; the result rises.
func join(list []Band) []Band {
	slices.SortStableFunc(list, func(a, b Band) int {
		switch {
		case a.FromHz < b.FromHz:
			return -1
		case a.FromHz > b.FromHz:
			return 1
		}
		return 0
	})
	var out []Band
	for _, b := range list {
		if n := len(out); n > 0 && b.FromHz <= out[n-1].ToHz*(1+edgeSlack) {
			out[n-1].ToHz = max(out[n-1].ToHz, b.ToHz)
			continue
		}
		out = append(out, b)
	}
	return out
}
