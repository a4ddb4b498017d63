package reports

import (
	"fmt"
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

// profiles writes the exposure ratio along the main beams, with a chart that a
// reader can change.
func (r *report) profiles() {
	columns := []column{
		{head: "antenna", width: 15}, {head: "class", width: 15},
		{head: "azimuth from y axis", unit: "deg", width: 11, digits: tenths, what: "direction of the ray in plan, clockwise from the site's y axis"},
		{head: "elevation", unit: "deg", width: 10, digits: tenths, what: "elevation of the ray above the horizon"},
		{head: "distance", unit: "m", width: 10, digits: cents, what: "distance from the centre of radiation along the main beam"},
		{head: "exposure ratio", unit: "1", width: 11, digits: figures, what: "exposure ratio of the row alone at that distance", method: "RATIO-1"},
		{head: "method", width: 22},
	}
	type span struct{ first, last int }
	const chartRows, chartHeight = 1, 400.0
	charts := chartClasses(r.a)
	row := firstRow + len(charts)*chartRows + 1
	spans := make([]span, len(r.a.Profiles))
	for i, p := range r.a.Profiles {
		spans[i] = span{row, row + len(p.DistanceM) - 1}
		row += len(p.DistanceM)
	}
	r.write(page{
		name: sheetProfiles, title: "Exposure ratio along the main beams",
		intro:  "Each row alone, along the direction of its main beam. The charts take their figures from the table below.",
		widths: widthsOf(columns), headRow: 0,
		before: func(f *excelize.File, sheet string) error {
			for i, class := range charts {
				var series []excelize.ChartSeries
				for j, p := range r.a.Profiles {
					if p.Class != class || len(p.DistanceM) == 0 || len(series) == len(dashes) {
						continue
					}
					style := dashes[len(series)]
					series = append(series, excelize.ChartSeries{
						Name:       fmt.Sprintf("%s!$A$%d", quoteSheet(sheet), spans[j].first),
						Categories: fmt.Sprintf("%s!$E$%d:$E$%d", quoteSheet(sheet), spans[j].first, spans[j].last),
						Values:     fmt.Sprintf("%s!$F$%d:$F$%d", quoteSheet(sheet), spans[j].first, spans[j].last),
						Line:       excelize.LineOptions{Type: excelize.LineSolid, Dash: style.dash, Width: style.width, Fill: excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{style.color}}},
						Fill:       excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{style.color}},
						Marker:     excelize.ChartMarker{Symbol: "none"},
					})
				}
				if err := f.AddChart(sheet, cellName(1, firstRow+i*chartRows), ratioChart(class, series, r.a)); err != nil {
					return err
				}
				r.logCharts++
			}
			return nil
		},
	}, func(s *sheet) {
		for range charts {
			s.put([]any{excelize.Cell{}}, chartHeight)
		}
		s.table(columns)
		for _, p := range r.a.Profiles {
			for i := range p.DistanceM {
				method := ""
				if i < len(p.Method) {
					method = p.Method[i]
				}
				s.line(p.Antenna, p.Class, p.AzimuthDeg, p.ElevationDeg, p.DistanceM[i], p.Ratio[i], method)
			}
		}
	})
}

// chartClasses lists the classes that have profiles, in the table's order.
func chartClasses(a *exposure.Assessment) []string {
	var out []string
	for _, class := range a.Classes {
		for _, p := range a.Profiles {
			if p.Class == class && len(p.DistanceM) > 0 {
				out = append(out, class)
				break
			}
		}
	}
	return out
}

// dashes tell up to twelve lines of a chart apart without colour.
var dashes = []struct {
	color string
	dash  excelize.LineDashType
	width float64
}{
	{"000000", excelize.LineDashSolid, 1.5}, {"000000", excelize.LineDashDash, 1.5}, {"000000", excelize.LineDashSysDot, 1.5}, {"000000", excelize.LineDashLgDashDot, 1.5},
	{"6E6E6E", excelize.LineDashSolid, 1.5}, {"6E6E6E", excelize.LineDashDash, 1.5}, {"6E6E6E", excelize.LineDashSysDot, 1.5}, {"6E6E6E", excelize.LineDashLgDashDot, 1.5},
	{"A5A5A5", excelize.LineDashSolid, 2.25}, {"A5A5A5", excelize.LineDashDash, 2.25}, {"A5A5A5", excelize.LineDashSysDot, 2.25}, {"A5A5A5", excelize.LineDashLgDashDot, 2.25},
}

// ratioChart is a chart of ratio against distance, both logarithmic (the x axis
// is made so when the parts are written).
func ratioChart(class string, series []excelize.ChartSeries, a *exposure.Assessment) *excelize.Chart {
	least, most := 0.0, 0.0
	for _, p := range a.Profiles {
		for _, d := range p.DistanceM {
			if p.Class == class && d > 0 {
				if least == 0 || d < least {
					least = d
				}
				most = max(most, d)
			}
		}
	}
	axis := func(text string) excelize.ChartAxis {
		return excelize.ChartAxis{
			MajorGridLines: true, Font: excelize.Font{Family: fontName, Size: 9, Color: ink},
			Title: excelize.ChartTitle{Paragraph: []excelize.RichTextRun{{Text: text, Font: &excelize.Font{Family: fontName, Size: 9, Color: ink}}}},
		}
	}
	x, y := axis("distance from the centre of radiation [m]"), axis("ratio [1]")
	x.Minimum, x.Maximum = ptr(decadeBelow(least)), ptr(decadeAbove(most))
	y.LogBase = 10
	y.Minimum = ptr(1e-4)
	x.TickLabelPosition, y.TickLabelPosition = excelize.ChartTickLabelLow, excelize.ChartTickLabelLow
	x.NumFmt, y.NumFmt = excelize.ChartNumFmt{CustomNumFmt: "General"}, excelize.ChartNumFmt{CustomNumFmt: "General"}
	return &excelize.Chart{
		Type: excelize.Scatter, Series: series, XAxis: x, YAxis: y,
		Title:     excelize.ChartTitle{Paragraph: []excelize.RichTextRun{{Text: "Exposure ratio along the main beam, class " + oneLine(class), Font: &excelize.Font{Family: fontName, Size: 11, Bold: true, Color: ink}}}},
		Legend:    excelize.ChartLegend{Position: "right", Font: &excelize.Font{Family: fontName, Size: 9, Color: ink}},
		Dimension: excelize.ChartDimension{Width: 760, Height: 515},
		Format:    excelize.GraphicOptions{AltText: "Exposure ratio against distance, class " + oneLine(class), Positioning: "oneCell"},
	}
}

func decadeBelow(v float64) float64 {
	d := 1.0
	for d > v && v > 0 {
		d /= 10
	}
	for d*10 <= v {
		d *= 10
	}
	return d
}

func decadeAbove(v float64) float64 {
	d := 10.0
	for d < v {
		d *= 10
	}
	return d
}
