package reports

import (
	"fmt"
	"slices"
	"strings"

	"example.org/standclear/exposure"
	"example.org/standclear/limits"
)

var limitColumns = []column{
	{head: "class", width: 14}, {head: "quantity", width: 8},
	{head: "from", unit: "MHz", width: 10, digits: shortest, what: "lower edge of the band, which belongs to it"},
	{head: "to", unit: "MHz", width: 10, digits: shortest, what: "upper edge of the band, which belongs to it"},
	{head: "coefficient", unit: "unit of the level", width: 11, digits: shortest, what: "level = coefficient times (f in the unit of frequency)^exponent"},
	{head: "exponent", unit: "1", width: 9, digits: shortest, what: "exponent of the frequency in the level"},
	{head: "unit of the level", width: 8},
	{head: "unit of frequency", unit: "MHz", width: 10, digits: shortest, what: "the unit in which the formula takes the frequency, in MHz"},
	{head: "averaging", unit: "min", width: 9, digits: shortest, what: "averaging time; 0 = never averaged; blank where it depends on frequency"},
	{head: "over body", width: 9}, {head: "group", width: 22}, {head: "source", width: 34}, {head: "line", width: 7},
}

// limitTable writes the limits supplied, with their provenance first.
func (r *report) limitTable() {
	var t *limits.Table
	if r.a.Site != nil {
		t = r.a.Site.Limits
	}
	intro := "No limit table was given."
	if t != nil {
		intro = provenance(t)
	}
	p := page{
		name: sheetLimits, title: "Limits supplied", intro: intro, landscape: true,
		widths: widthsOf(limitColumns), headRow: firstRow,
	}
	if t != nil {
		p.filterTo = firstRow + len(t.Rows)
	}
	r.write(p, func(s *sheet) {
		s.table(limitColumns)
		if t == nil {
			return
		}
		for _, row := range t.Rows {
			var average any = row.AverageS / 60
			if row.AverageExp != 0 {
				average = nil
			}
			line := ""
			if row.Line > 0 {
				line = fmt.Sprint(row.Line)
			}
			if row.None {
				s.line(row.Class, string(row.Quantity), row.FromHz/1e6, row.ToHz/1e6, "none", nil, nil, nil, nil, nil, row.Group().String(), row.Source, line)
				continue
			}
			fUnit := row.FUnitHz
			if fUnit == 0 {
				fUnit = 1e6
			}
			s.line(row.Class, string(row.Quantity), row.FromHz/1e6, row.ToHz/1e6, row.Coefficient, row.Exponent, row.Quantity.Unit(), fUnit/1e6,
				average, string(row.OverBody), row.Group().String(), row.Source, line)
		}
		if len(t.Spots) > 0 {
			s.section("Spot levels as printed in the source, typed in by whoever checked the table")
			s.table([]column{
				{head: "class"}, {head: "quantity"},
				{head: "frequency", unit: "MHz", digits: shortest, what: "frequency of the spot level"}, {head: ""},
				{head: "level", unit: "unit of the level", digits: shortest, what: "level as printed in the source"}, {head: ""},
				{head: "unit of the level"}, {head: ""},
			})
			for _, x := range t.Spots {
				s.line(x.Class, string(x.Quantity), x.FrequencyHz/1e6, nil, x.Level, nil, x.Quantity.Unit(), nil)
			}
		}
	})
}

// provenance says in words who stands behind a limit table.
func provenance(t *limits.Table) string {
	part := func(label, v string) string {
		if v == "" {
			v = "not stated"
		}
		return label + ": " + v + ". "
	}
	text := part("Title", t.About.Title) + part("Issued by", t.About.IssuedBy) + part("Edition", t.About.Edition) +
		part("Transcribed by", t.About.TranscribedBy) + part("Checked by", joined(t.About.CheckedBy, t.About.CheckedOn))
	if !t.Confirmed() {
		text += "Nobody has confirmed this transcription: hold every row against its source before anything rests on it."
	}
	return strings.TrimSpace(text)
}

// levelKey tells one line of the levels sheet from another.
type levelKey struct {
	class, group string
	frequencyHz  float64
}

type levelRow struct {
	key levelKey
	at  limits.At
}

// levelsFirst is the first line of levels on its sheet: the wave impedance
// stands above them.
const levelsFirst = firstRow + 4

// levelRows lists the levels that hold at the site's frequencies.
func levelRows(a *exposure.Assessment) ([]levelRow, map[levelKey]int) {
	var rows []levelRow
	at := map[levelKey]int{}
	if a.Site == nil || a.Site.Limits == nil {
		return nil, at
	}
	var frequencies []float64
	for _, s := range a.Sources {
		frequencies = append(frequencies, s.FrequencyHz)
	}
	slices.Sort(frequencies)
	frequencies = slices.Compact(frequencies)
	for _, class := range a.Classes {
		for _, f := range frequencies {
			for _, x := range a.Site.Limits.At(class, f) {
				k := levelKey{class, x.Group.String(), f}
				at[k] = levelsFirst + len(rows)
				rows = append(rows, levelRow{k, x})
			}
		}
	}
	return rows, at
}

// Columns of the levels sheet that formulas point at, counted from one.
const (
	levelE = 4
	levelH = 5
	levelS = 7
)

var levelColumns = []column{
	{head: "class", width: 18},
	{head: "frequency", unit: "MHz", width: 12, digits: shortest, what: "a frequency of the inventory"},
	{head: "group", width: 28},
	{head: "E level", unit: "V/m", width: 9, digits: figures, what: "electric field strength level that holds there"},
	{head: "H level", unit: "A/m", width: 9, digits: figures, what: "magnetic field strength level that holds there"},
	{head: "B level", unit: "uT", width: 9, digits: figures, what: "magnetic flux density level that holds there"},
	{head: "S level", unit: "W/m2", width: 9, digits: figures, what: "power density level that holds there"},
	{head: "averaging", unit: "min", width: 9, digits: figures, what: "the shortest averaging time of the rows that hold"},
	{head: "over body", width: 11},
	{head: "how E, H and S join", width: 13},
	{head: "covered", width: 12},
}

// levelTable writes the levels at the site's frequencies: the figures that the
// exposure ratios divide by.
func (r *report) levelTable() {
	r.write(page{
		name: sheetLevels, title: "Levels at the site's frequencies", landscape: true,
		intro:  "What the limits supplied come to at each frequency of the inventory. The exposure ratios divide by these.",
		widths: widthsOf(levelColumns),
	}, func(s *sheet) {
		s.table([]column{{head: "constant"}, {head: "value", unit: "ohm", digits: millis, what: "wave impedance of free space", method: "CODATA-2022"}})
		s.line("wave impedance Z0", exposure.Z0)
		s.blank()
		s.table(levelColumns)
		some := func(v, scale float64) any {
			if v == 0 {
				return nil
			}
			return v * scale
		}
		for _, l := range r.levels {
			covered := "yes"
			switch {
			case l.at.None:
				covered = "no level, on purpose"
			case !l.at.Covered():
				covered = "no: not assessed"
			}
			s.line(l.key.class, l.key.frequencyHz/1e6, l.key.group, some(l.at.E, 1), some(l.at.H, 1), some(l.at.B, 1e6), some(l.at.S, 1),
				l.at.AverageS/60, string(l.at.OverBody), string(l.at.Combine), covered)
		}
	})
}
