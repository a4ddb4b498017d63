package reports

import (
	"example.org/standclear/exposure"
)

const (
	sheetAssumptions = "Assumptions"
	sheetStates      = "Operating states"
	sheetCoverage    = "Coverage"
)

var assumedColumns = []column{
	{head: "place or distance", width: 30}, {head: "class", width: 14},
	{head: "as assessed", unit: "1", width: 10, digits: figures, what: "total exposure ratio as assessed; at a distance's end, at the farthest point of its boundary", method: "RATIO-1"},
	{head: "conservative", unit: "1", width: 11, digits: figures, what: "ratio with field factor 2, full power all the time and the larger loss of two cuts", method: "ASSUME-1"},
	{head: "best estimate", unit: "1", width: 11, digits: figures, what: "ratio with the direct ray alone and no side-lobe floor, power as stated", method: "ASSUME-1"},
	{head: "distance", unit: "m", width: 9, digits: cents, what: "keep-out distance as assessed", method: "DIST-1"},
	{head: "conservative", unit: "m", width: 11, digits: cents, what: "outermost crossing of the line through the farthest point under the conservative choices", method: "ASSUME-1"},
	{head: "best estimate", unit: "m", width: 11, digits: cents, what: "outermost crossing of the line through the farthest point under the best-estimate choices", method: "ASSUME-1"},
}

// assumptions writes what each assumption is worth.
func (r *report) assumptions() {
	parts := r.assumptionColumns()
	columns := append(append([]column{}, assumedColumns...), parts...)
	r.write(page{
		name: sheetAssumptions, title: "What each assumption is worth", landscape: true,
		intro: "Each assumption is switched to another choice by the engine, alone, and the ratio compared: a positive figure means that the other choice gives more. " +
			"The conservative and the best-estimate figure turn all of them at once, so that the figure as assessed can be defended between the two.",
		widths: widthsOf(columns), headRow: firstRow, filterTo: firstRow + len(r.a.Assumptions),
	}, func(s *sheet) {
		s.table(columns)
		for _, a := range r.a.Assumptions {
			values := []any{assumedSubject(a), a.Class, a.Ratio, a.Conservative.Ratio, a.BestEstimate.Ratio}
			if a.Place != "" {
				values = append(values, nil, nil, nil)
			} else {
				values = append(values, a.DistanceM, a.Conservative.DistanceM, a.BestEstimate.DistanceM)
			}
			for _, p := range a.Parts {
				if a.Ratio == 0 {
					values = append(values, nil)
					continue
				}
				values = append(values, p.WorthDB)
			}
			s.line(values...)
		}
		if len(r.a.Assumptions) == 0 {
			s.line("No place is listed and no boundary exists.")
		}
	})
}

// assumptionColumns is a column for each choice, in the order of the result.
func (r *report) assumptionColumns() []column {
	if len(r.a.Assumptions) == 0 {
		return nil
	}
	var out []column
	for _, p := range r.a.Assumptions[0].Parts {
		out = append(out, column{
			head: p.Assumption + ": " + p.Choice, unit: "dB", width: 12, digits: tenths,
			what: "change of the exposure ratio where " + p.Assumption + " is " + p.Choice, method: "ASSUME-1",
		})
	}
	return out
}

var stateColumns = []column{
	{head: "where", width: 24}, {head: "class", width: 16}, {head: "state", width: 34},
	{head: "exposure ratio", unit: "1", width: 11, digits: figures, what: "total exposure ratio in that state; on a surface, the largest", method: "RATIO-1"},
	{head: "verdict", width: 36}, {head: "worst state", width: 9},
}

var stateDistanceColumns = []column{
	{head: "farthest"}, {head: "class"}, {head: "state"},
	{head: "keep-out distance", unit: "m", digits: cents, what: "farthest extent of everything together in that state", method: "DIST-1"},
	{head: "inside it"}, {head: ""},
}

// states writes every operating state beside the others.
func (r *report) states() {
	r.write(page{
		name: sheetStates, title: "Operating states", landscape: true,
		intro:  "Which rows can radiate together: all of them, those that are on, and each scenario of the site. The state with the largest ratio is named for each place and surface.",
		widths: widthsOf(stateColumns),
	}, func(s *sheet) {
		for _, st := range r.a.States {
			if len(st.Changes) > 0 {
				s.merged(st.State+": "+list(st.Changes, 12), look{role: bodyPlain}, 0)
			}
		}
		s.table(stateColumns)
		if len(r.a.States) == 0 {
			s.line("No operating state was assessed.")
			return
		}
		rows := func(pick func(exposure.StateResult) []exposure.StateRatio) {
			for k := range pick(r.a.States[0]) {
				for _, st := range r.a.States {
					all := pick(st)
					if k >= len(all) {
						continue
					}
					v, worst := all[k], ""
					for _, w := range st.Worst {
						if w.Where == v.Where && w.Class == v.Class {
							worst = "worst"
						}
					}
					s.line(v.Where, v.Class, st.State, v.ExposureRatio, verdictFull(v.Verdict, v.Reason), worst)
				}
			}
		}
		rows(func(st exposure.StateResult) []exposure.StateRatio { return st.Places })
		rows(func(st exposure.StateResult) []exposure.StateRatio { return st.Surfaces })
		s.blank()
		s.table(stateDistanceColumns)
		for _, st := range r.a.States {
			for _, d := range st.Distances {
				s.line(subject(d)+", "+d.Direction, d.Class, st.State, d.DistanceM, verdictFull(d.Verdict, d.Reason))
			}
		}
	})
}

var coverageColumns = []column{
	{head: "what", width: 24}, {head: "class", width: 14}, {head: "direction", width: 11},
	{head: "distance", unit: "m", width: 10, digits: cents, what: "keep-out distance of the data as stated", method: "DIST-1"},
	{head: "share covered", unit: "%", width: 9, digits: tenths, what: "share of what the data's standard uncertainties make possible that the distance covers"},
	{head: "distance that covers it", unit: "m", width: 11, digits: cents, what: "one-sided quantile of the distance over the standard uncertainties of the antenna table", method: "COVERAGE"},
	{head: "from", unit: "m", width: 9, digits: cents, what: "lower end of the 95 % confidence interval of that quantile", method: "COVERAGE"},
	{head: "to", unit: "m", width: 9, digits: cents, what: "upper end of the 95 % confidence interval of that quantile", method: "COVERAGE"},
	{head: "trials", unit: "1", width: 9, digits: whole, what: "number of random trials", method: "COVERAGE"},
	{head: "seed", unit: "1", width: 11, digits: whole, what: "seed of the random numbers: the same seed gives the same trials"},
	{head: "power and gain", unit: "m", width: 9, digits: cents, what: "standard deviation of the distance when power and gain alone vary", method: "COVERAGE"},
	{head: "tilt", unit: "m", width: 8, digits: cents, what: "standard deviation of the distance when tilt alone varies", method: "COVERAGE"},
	{head: "azimuth", unit: "m", width: 8, digits: cents, what: "standard deviation of the distance when azimuth alone varies", method: "COVERAGE"},
	{head: "position", unit: "m", width: 8, digits: cents, what: "standard deviation of the distance when position alone varies", method: "COVERAGE"},
}

// covers reports whether distances carry a coverage.
func covers(a *exposure.Assessment) bool {
	for _, d := range a.Distances {
		if d.Covered != nil {
			return true
		}
	}
	return false
}

// coverage writes the distances with the coverage asked.
func (r *report) coverage() {
	var kept []exposure.Distance
	for _, d := range r.a.Distances {
		if d.Covered != nil {
			kept = append(kept, d)
		}
	}
	r.write(page{
		name: sheetCoverage, title: "Distances with coverage", landscape: true,
		intro: "How far the boundary lies if power, gain, tilt, azimuth and position stray from the data by their standard uncertainties: the one-sided quantile, " +
			"with its own confidence interval, and what each input alone does. Rows without a standard uncertainty do not vary.",
		widths: widthsOf(coverageColumns), headRow: firstRow, filterTo: firstRow + len(kept),
	}, func(s *sheet) {
		s.table(coverageColumns)
		for _, d := range kept {
			c := d.Covered
			values := []any{subject(d), d.Class, d.Direction, d.DistanceM, 100 * c.Probability, c.DistanceM, c.LowM, c.HighM, c.Trials, int(c.Seed)}
			for _, name := range []string{"power and gain", "tilt", "azimuth", "position"} {
				var v any
				for _, in := range c.Inputs {
					if in.Input == name {
						v = in.DeviationM
					}
				}
				values = append(values, v)
			}
			s.line(values...)
		}
	})
}
