package reports

import (
	"fmt"
	"strings"

	"example.org/standclear/exposure/survey"
)

const (
	sheetReadings    = "Readings"
	sheetMeasured    = "Measured places"
	sheetUnexplained = "Meter and model"
	sheetUncertainty = "Uncertainty"
)

var readingColumns = []column{
	{head: "what", width: 9}, {head: "id", width: 14}, {head: "place", width: 15},
	{head: "from", unit: "MHz", width: 9, digits: shortest, what: "lower end of the band read, or the frequency"},
	{head: "to", unit: "MHz", width: 9, digits: shortest, what: "upper end of the band read, or the frequency"},
	{head: "below floor", width: 7},
	{head: "E", unit: "V/m", width: 8, digits: figures, what: "corrected field, at maximum traffic where the row says so; of a group the mean over its heights, of a log the largest running mean", method: "RDG-CAL"},
	{head: "U", unit: "dB", width: 6, digits: tenths, what: "expanded uncertainty of the field, k = 1.96", method: "RDG-GUM"},
	{head: "class", width: 12},
	{head: "exposure ratio", unit: "1", width: 9, digits: figures, what: "exposure ratio of what was measured", method: "RATIO-1"},
	{head: "verdict", width: 30},
	{head: "predicted E", unit: "V/m", width: 9, digits: figures, what: "predicted field at the reading's point, from the antennas the reading is of", method: "RDG-DIFF"},
	{head: "difference", unit: "dB", width: 9, digits: tenths, what: "measured over predicted, in dB of field", method: "RDG-DIFF"},
	{head: "combined U", unit: "dB", width: 9, digits: tenths, what: "combined expanded uncertainty of measurement and prediction", method: "RDG-DIFF"},
	{head: "remarks", width: 36},
}

// readings writes every reading, group and log with its verdict and prediction.
func (r *report) readings() {
	m := r.measured
	rows := len(m.Readings) + len(m.Groups) + len(m.Series)
	r.write(page{
		name: sheetReadings, title: "Readings", landscape: true,
		intro:  "What was measured, corrected, beside what is predicted there. Decision rule " + m.RuleWords + ".",
		widths: widthsOf(readingColumns), headRow: firstRow, filterTo: firstRow + rows,
	}, func(s *sheet) {
		s.table(readingColumns)
		line := func(what, id, place string, lo, hi float64, below bool, field, expanded *float64, j survey.Judgement, c survey.Comparison, remarks []string) {
			floor := ""
			if below {
				floor = "<"
			}
			var combined any
			if c.DifferenceDB != nil {
				combined = c.CombinedDB
			}
			if c.Note != "" {
				remarks = append(append([]string(nil), remarks...), c.Note)
			}
			write := s.line
			if c.DifferenceDB != nil && !c.Explained {
				write = s.strong
			}
			write(what, id, place, lo/1e6, hi/1e6, floor, pointed(field), pointed(expanded), j.Class, j.ExposureRatio,
				verdictWithReason(j), pointed(c.PredictedVPerM), pointed(c.DifferenceDB), combined, strings.Join(remarks, "; "))
		}
		for _, x := range m.Readings {
			remarks := x.Remarks
			if x.ScaleFormula != "" {
				remarks = append([]string{"at maximum traffic: " + x.ScaleFormula}, remarks...)
			}
			line("reading", x.ID, x.Place, x.FromHz, x.ToHz, x.BelowFloor, x.FieldVPerM, x.ExpandedDB, x.Judgement, x.Comparison, remarks)
		}
		for _, x := range m.Groups {
			remarks := append([]string{"mean of " + strings.Join(x.Members, ", ")}, x.Remarks...)
			line("group", x.Group, x.Place, x.FromHz, x.ToHz, x.BelowFloor, x.FieldVPerM, x.ExpandedDB, x.Judgement, x.Comparison, remarks)
		}
		for _, x := range m.Series {
			remarks := append([]string{fmt.Sprintf("%s, largest mean over %s min ends %s", count(x.Samples, "sample"), significant(x.AveragingS/60, 3), x.LargestEnd)}, x.Remarks...)
			if x.ScaleFormula != "" {
				remarks = append(remarks, "at maximum traffic: "+x.ScaleFormula)
			}
			line("log", x.Series, x.Place, x.FromHz, x.ToHz, false, x.FieldVPerM, x.ExpandedDB, x.Judgement, x.Comparison, remarks)
		}
	})
}

// pointed is a figure that may be missing.
func pointed(v *float64) any {
	if v == nil {
		return nil
	}
	return *v
}

func verdictWithReason(j survey.Judgement) any {
	if j.Reason == "" {
		return j.Verdict
	}
	return verdictWords(j.Verdict) + ": " + j.Reason
}

var measuredColumns = []column{
	{head: "place", width: 20},
	{head: "E", unit: "V/m", width: 9, digits: figures, what: "root-sum-square over the bands measured at the place", method: "RDG-SUM"},
	{head: "U", unit: "dB", width: 7, digits: tenths, what: "largest expanded uncertainty of what adds up, k = 1.96", method: "RDG-GUM"},
	{head: "class", width: 14},
	{head: "total exposure ratio", unit: "1", width: 10, digits: figures, what: "sum of the exposure ratios over the bands measured", method: "RDG-SUM"},
	{head: "verdict", width: 40},
	{head: "predicted ratio", unit: "1", width: 10, digits: figures, what: "total exposure ratio predicted at the place from all antennas", method: "RATIO-1"},
	{head: "probability above", unit: "1", width: 10, digits: figures, what: "probability that the true ratio exceeds 1, normal in dB", method: "RDG-RULE"},
	{head: "counted", width: 30}, {head: "not counted", width: 20},
}

// measuredPlaces writes what all readings of each place come to.
func (r *report) measuredPlaces() {
	m := r.measured
	r.write(page{
		name: sheetMeasured, title: "Measured places", landscape: true,
		intro:  "The bands measured at a place add up: fields as root-sum-square, ratios as a sum. Of a wide reading only what the readings by frequency in its band leave is added. Bands that nobody measured are in no sum. Decision rule " + m.RuleWords + ".",
		widths: widthsOf(measuredColumns), headRow: firstRow, filterTo: firstRow + len(m.Places),
	}, func(s *sheet) {
		s.table(measuredColumns)
		for _, x := range m.Places {
			s.line(x.Place, pointed(x.FieldVPerM), pointed(x.ExpandedDB), x.Class, x.ExposureRatio, verdictWithReason(x.Judgement),
				pointed(x.PredictedRatio), pointed(x.ProbabilityAbove), strings.Join(x.Counted, ", "), strings.Join(x.NotCounted, ", "))
		}
	})
}

var unexplainedColumns = []column{
	{head: "reading", width: 12}, {head: "place", width: 18},
	{head: "difference", unit: "dB", width: 10, digits: tenths, what: "measured over predicted, in dB of field", method: "RDG-DIFF"},
	{head: "combined U", unit: "dB", width: 10, digits: tenths, what: "combined expanded uncertainty of measurement and prediction", method: "RDG-DIFF"},
	{head: "inventory row", width: 14}, {head: "at", width: 15},
	{head: "power times", unit: "1", width: 9, digits: figures, what: "factor of the row's power that would explain the reading if this row alone were wrong", method: "RDG-DIFF"},
	{head: "why", width: 76},
}

// unexplained writes the readings that the model cannot explain and the rows
// that could be wrong, and how well meter and model agree over all.
func (r *report) unexplained() {
	m := r.measured
	a := m.Agreement
	intro := "No reading has a prediction beside it."
	if a.Compared > 0 {
		intro = fmt.Sprintf("%s with a prediction: mean difference %s dB", count(a.Compared, "comparison"), signed(a.BiasDB))
		if a.SpreadDB != nil {
			intro += fmt.Sprintf(", standard deviation %s dB", signed(a.SpreadDB))
		}
		intro += fmt.Sprintf("; %d within the combined expanded uncertainty. A reading above its prediction by more than that means that the model or the inventory is wrong.", a.Explained)
		if len(a.BelowByMore) > 0 {
			intro += " Below their prediction by more: " + list(a.BelowByMore, 12) + "."
		}
	}
	r.write(page{name: sheetUnexplained, title: "Meter and model", landscape: true, intro: intro, widths: widthsOf(unexplainedColumns), headRow: firstRow}, func(s *sheet) {
		s.table(unexplainedColumns)
		for _, f := range m.Unexplained {
			for _, x := range f.Suspects {
				s.strong(f.ID, f.Place, f.DifferenceDB, f.CombinedDB, x.Antenna, x.Row, x.Factor, strings.Join(x.Why, "; "))
			}
			if len(f.Suspects) == 0 {
				s.strong(f.ID, f.Place, f.DifferenceDB, f.CombinedDB)
			}
		}
		if len(m.Unexplained) == 0 {
			s.line("No reading lies above its prediction by more than the combined expanded uncertainty.")
		}
	})
}

func signed(v *float64) string {
	if v == nil {
		return ""
	}
	return fmt.Sprintf("%.1f", *v)
}

var budgetColumns = []column{
	{head: "instrument", width: 14}, {head: "component", width: 34},
	{head: "value", unit: "1", width: 9, digits: shortest, what: "the component as typed, in the unit beside it"},
	{head: "unit", width: 7}, {head: "distribution", width: 14},
	{head: "divisor", unit: "1", width: 9, digits: millis, what: "that makes the value a standard uncertainty", method: "RDG-GUM"},
	{head: "sensitivity", unit: "1", width: 10, digits: shortest, what: "sensitivity coefficient"},
	{head: "standard uncertainty", unit: "dB", width: 11, digits: millis, what: "sensitivity times value over divisor; the last line of an instrument is the combined one, then the expanded one", method: "RDG-GUM"},
	{head: "at", width: 18},
}

// budgets writes the uncertainty budget of each instrument, with the formulas
// that combine it.
func (r *report) budgets() {
	r.write(page{
		name: sheetUncertainty, title: "Uncertainty of the instruments",
		intro:  "The budgets after the GUM (JCGM 100): components over their divisors, combined as root-sum-square, expanded by k = 1.96 for a coverage of 95 %.",
		widths: widthsOf(budgetColumns), headRow: firstRow, landscape: true,
	}, func(s *sheet) {
		s.table(budgetColumns)
		const standard = 8 // the column of standard uncertainties
		for _, b := range r.measured.Budgets {
			first := s.row
			for _, c := range b.Components {
				s.line(b.Instrument, c.Component, c.Value, c.Unit, string(c.Distribution), c.Divisor, c.Sensitivity, c.StandardDB, c.Row)
			}
			span := cellName(standard, first) + ":" + cellName(standard, s.row-1)
			s.strong(b.Instrument, "combined standard uncertainty", nil, nil, nil, nil, nil, calc{"SQRT(SUMSQ(" + span + "))", b.CombinedDB})
			s.strong(b.Instrument, fmt.Sprintf("expanded uncertainty, k = %g", b.CoverageFactor), nil, nil, nil, nil, nil,
				calc{fmt.Sprintf("%g*%s", b.CoverageFactor, cellName(standard, s.row-1)), b.ExpandedDB})
		}
	})
}
