package reports

import (
	"fmt"

	"example.org/standclear/exposure"
	"github.com/xuri/excelize/v2"
)

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
	drawn := map[string]bool{}
	for _, lines := range beams(r.a) {
		drawn[lines[0].Antenna] = true
	}
	row := firstRow + len(charts)*chartRows + 1
	spans := make([]span, len(r.a.Profiles))
	for i, p := range r.a.Profiles {
		spans[i] = span{row, row + len(p.DistanceM) - 1}
		row += len(p.DistanceM)
	}
	r.write(page{
		name: sheetProfiles, title: "Exposure ratio along the main beams",
		intro: "Each row alone, along the direction of its main beam. The charts show the farthest-reaching row of each housing; they take their figures from the table below, " +
			"which has every row and is not printed.",
		widths: widthsOf(columns), headRow: 0,
		before: func(f *excelize.File, sheet string) error {
			err := f.SetDefinedName(&excelize.DefinedName{Name: "_xlnm.Print_Area", Scope: sheet,
				RefersTo: fmt.Sprintf("%s!$A$1:$G$%d", quoteSheet(sheet), firstRow+len(charts)*chartRows-1)})
			if err != nil {
				return err
			}
			for i, class := range charts {
				var series []excelize.ChartSeries
				for j, p := range r.a.Profiles {
					if p.Class != class || !drawn[p.Antenna] || len(series) == len(dashes) {
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
		Format:    excelize.GraphicOptions{AltText: "Exposure ratio against distance, class " + oneLine(class), Positioning: "oneCell", OffsetY: 6},
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
