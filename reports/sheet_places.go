package reports

import (
	"strings"

	"example.org/standclear/exposure"
	"github.com/xuri/excelize/v2"
)

var placeColumns = []column{
	{head: "place", width: 16}, {head: "row", width: 12}, {head: "class", width: 13}, {head: "may be there", width: 8},
	{head: "x", unit: "m", width: 8, digits: cents, what: whatX},
	{head: "y", unit: "m", width: 8, digits: cents, what: whatY},
	{head: "z", unit: "m", width: 8, digits: cents, what: whatZ},
	{head: "height over z", unit: "m", width: 8, digits: cents, what: "height above z at which E, H and S hold: that of the largest ratio over the body"},
	{head: "E", unit: "V/m", width: 8, digits: figures, what: "electric field strength, root-sum-square over the sources", method: "WAVE-2"},
	{head: "H", unit: "A/m", width: 8, digits: figures, what: "magnetic field strength, root-sum-square over the sources", method: "WAVE-2"},
	{head: "S", unit: "W/m2", width: 8, digits: figures, what: "power density: the sum over sources of the larger of E2/Z0 and Z0 H2", method: "WAVE-2"},
	{head: "exposure ratio", unit: "1", width: 9, digits: figures, what: "total exposure ratio of the covered sources for the class; above 1 is above the limits supplied", method: "RATIO-1"},
	{head: "verdict", width: 30}, {head: "governed by", width: 21}, {head: "verdict changes at ground factors", width: 11},
}

// places writes the verdict on every place for every class.
func (r *report) places() {
	all := r.found.all
	r.write(page{
		name: sheetPlaces, title: "Places", landscape: true,
		intro:  "One line for each place and class. Each source's part is on sheet " + sheetContributions + ", from which the ratios come.",
		widths: widthsOf(placeColumns), headRow: firstRow, filterTo: firstRow + len(all),
		before: func(_ *excelize.File, sheet string) error {
			const mostLinks = 2000 // a link costs more than a row
			for i, v := range all {
				if v.point.Place == nil || i >= mostLinks {
					continue
				}
				if err := r.linkTo(sheet, cellName(2, firstRow+1+i), v.point.Place.Row); err != nil {
					return err
				}
			}
			return nil
		},
	}, func(s *sheet) {
		s.table(placeColumns)
		for _, v := range all {
			p, there := v.point, "no"
			if v.own {
				there = "yes"
			}
			var flips []string
			for _, k := range v.result.GroundFlips {
				flips = append(flips, significant(k, 2))
			}
			var ratio any = v.result.ExposureRatio
			if total, ok := r.plan.totalCell(r.a, p, v.class); ok {
				ratio = calc{total, float64(v.result.ExposureRatio)}
			} else if v.result.Verdict == exposure.NotAssessed && !hasRatio(p, v.class) {
				ratio = nil
			}
			s.line(p.ID, placeRow(p), v.class, there, p.XM, p.YM, p.ZM, p.HeightM, p.EVPerM, p.HAPerM, p.SWPerM2, ratio,
				verdictCell(v.result), v.result.GovernedBy, strings.Join(flips, " and "))
		}
		if len(all) == 0 {
			s.line("No place is listed.")
		}
	})
}

// verdictCell keeps the verdict alone where it is an answer, so that it stands
// out, and adds the reason where it is none.
func verdictCell(c *exposure.ClassRatio) any {
	if c.Verdict == exposure.Above && c.Reason == "" {
		return c.Verdict
	}
	if c.Reason == "" {
		return verdictWords(c.Verdict)
	}
	return verdictWords(c.Verdict) + ": " + c.Reason
}

func hasRatio(p *exposure.PointResult, class string) bool {
	for _, c := range p.Ratios {
		if c.Class == class {
			return true
		}
	}
	return false
}
