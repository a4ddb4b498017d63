package reports

import (
	"fmt"
	"strings"

	"example.org/standclear/exposure"
)

const (
	sheetBarriers = "Barriers and signs"
	sheetMeasure  = "Measure first"
)

var barrierColumns = []column{
	{head: "surface", width: 15}, {head: "keeps out", width: 13}, {head: "may be there", width: 8},
	{head: "area no.", unit: "1", width: 6, digits: whole, what: "number of the separate area on that surface for that class"},
	{head: "barrier", unit: "m", width: 8, digits: tenths, what: "length of the keep-out line over the surface, where a barrier can stand", method: "BARRIER"},
	{head: "along the edge", unit: "m", width: 8, digits: tenths, what: "length of the keep-out line along the surface's own edge", method: "BARRIER"},
	{head: "area", unit: "m2", width: 8, digits: figures, what: "area inside the line", method: "BOUND-1"},
	{head: "x from", unit: "m", width: 8, digits: cents, what: "westernmost end of the line"},
	{head: "x to", unit: "m", width: 8, digits: cents, what: "easternmost end of the line"},
	{head: "y from", unit: "m", width: 8, digits: cents, what: "southernmost end of the line"},
	{head: "y to", unit: "m", width: 8, digits: cents, what: "northernmost end of the line"},
	{head: "nearest corner of the surface", width: 21},
	{head: "corner to area", unit: "m", width: 8, digits: cents, what: "distance of that corner from the area", method: "BARRIER"},
	{head: "nearest place", width: 14},
	{head: "antennas behind it", width: 18},
	{head: "words on the sign: local rule", width: 16},
}

// barriers writes the schedule of barriers and signs.
func (r *report) barriers() {
	r.write(page{
		name: sheetBarriers, title: "Barriers and signs", landscape: true,
		intro: "Each separate area inside a keep-out line, for every class on every surface. A line for a class that is not there needs no barrier while that stays so. " +
			"Corners for setting out are in settingout.csv. The words and colours of signs are those of the local rule.",
		widths: widthsOf(barrierColumns), headRow: firstRow, filterTo: firstRow + len(r.a.Boundaries),
	}, func(s *sheet) {
		s.table(barrierColumns)
		for _, b := range r.a.Boundaries {
			there := "no"
			if b.MayBeThere {
				there = "yes"
			}
			s.line(b.Surface, b.Class, there, b.Number, b.LengthM, b.EdgeM, b.AreaM2, b.FromXM, b.ToXM, b.FromYM, b.ToYM,
				b.Corner, b.CornerM, b.Place, strings.Join(b.Antennas, ", "), nil)
		}
		if len(r.a.Boundaries) == 0 {
			s.line("No surface has a keep-out line.")
		}
	})
}

var measureColumns = []column{
	{head: "where", width: 22}, {head: "class", width: 13},
	{head: "x", unit: "m", width: 8, digits: cents, what: whatX},
	{head: "y", unit: "m", width: 8, digits: cents, what: whatY},
	{head: "z", unit: "m", width: 8, digits: cents, what: "height of the probe above the site datum: that of the largest predicted ratio"},
	{head: "predicted ratio", unit: "1", width: 9, digits: figures, what: "predicted total exposure ratio", method: "RATIO-1"},
	{head: "rank by ratio", unit: "1", width: 7, digits: whole, what: "place in the order of predicted ratios, largest first", method: "MEASURE-1"},
	{head: "standard uncertainty", unit: "dB", width: 10, digits: cents, what: "standard uncertainty of the predicted ratio from those of the antenna table", method: "MEASURE-1"},
	{head: "rank by uncertainty", unit: "1", width: 10, digits: whole, what: "place in the order of uncertainties, largest first", method: "MEASURE-1"},
	{head: "predicted E", unit: "V/m", width: 9, digits: figures, what: "predicted electric field strength", method: "WAVE-2"},
	{head: "instrument from", unit: "MHz", width: 10, digits: shortest, what: "lowest frequency that carries at least a twentieth of the ratio", method: "MEASURE-1"},
	{head: "to", unit: "MHz", width: 9, digits: shortest, what: "highest frequency that carries at least a twentieth of the ratio", method: "MEASURE-1"},
	{head: "reads from", unit: "V/m", width: 8, digits: figures, what: "field that the instrument must still read: a tenth of the lowest level", method: "MEASURE-1"},
	{head: "reads to", unit: "V/m", width: 8, digits: figures, what: "field that the instrument must bear: twice the larger of level and prediction", method: "MEASURE-1"},
}

// measureFirst writes where a measurement is worth most.
func (r *report) measureFirst() {
	r.write(page{
		name: sheetMeasure, title: "Where to measure first", landscape: true,
		intro:  "Places, and the point of the largest ratio on each surface, by predicted ratio. Where the prediction is large a measurement decides; where it is uncertain a measurement tells most. The instrument's range is what it must cover there.",
		widths: widthsOf(measureColumns), headRow: firstRow, filterTo: firstRow + len(r.a.MeasureFirst),
	}, func(s *sheet) {
		s.table(measureColumns)
		for _, m := range r.a.MeasureFirst {
			if m.ToHz == 0 {
				s.line(m.Where, m.Class, m.XM, m.YM, m.ZM, m.ExposureRatio, m.RankByRatio, m.UncertaintyDB, m.RankByUncertainty, m.Predicted)
				continue
			}
			s.line(m.Where, m.Class, m.XM, m.YM, m.ZM, m.ExposureRatio, m.RankByRatio, m.UncertaintyDB, m.RankByUncertainty, m.Predicted,
				m.FromHz/1e6, m.ToHz/1e6, m.FloorVPerM, m.TopVPerM)
		}
		if len(r.a.MeasureFirst) == 0 {
			s.line("No place and no surface is listed.")
		}
	})
}

// assumedSubject names the place or the distance of a set of assumptions.
func assumedSubject(a exposure.AssumptionSet) string {
	if a.Place != "" {
		return "place " + a.Place
	}
	return fmt.Sprintf("%s, %s", subject(exposure.Distance{Antenna: a.Antenna, Housing: a.Housing, All: a.All}), a.Direction)
}
