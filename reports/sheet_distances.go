package reports

import (
	"fmt"
	"slices"

	"example.org/standclear/exposure"
	"github.com/xuri/excelize/v2"
)

// distances writes how far people must keep away from everything together and
// from each housing, and the distances along rays that were asked for.
func (r *report) distances() {
	var kept []reach
	for _, x := range reaches(r.a) {
		if x.antenna == "" {
			kept = append(kept, x)
		}
	}
	slices.SortStableFunc(kept, func(a, b reach) int { return order(a) - order(b) })
	r.write(page{
		name: sheetDistances, title: "Keep-out distances", landscape: true,
		intro: "How far the boundary reaches from the mean of the centres of radiation: the extents of the smallest box that holds it. " +
			"A housing is taken alone, as if nothing else radiated; only the lines \"everything together\" count all sources.",
		widths: []float64{24, 16, 10, 10, 10, 10, 10, 10, 10, 42},
	}, func(s *sheet) {
		r.reachTables(s, kept)
		var rays []exposure.Distance
		for _, d := range r.a.Distances {
			if d.Kind == "ray" {
				rays = append(rays, d)
			}
		}
		if len(rays) > 0 {
			s.section("Along a direction: the outermost crossing")
			s.table([]column{
				{head: "what"}, {head: "class"},
				{head: "azimuth from y axis", unit: "deg", digits: tenths, what: "direction of the ray in plan, clockwise from the site's y axis"},
				{head: "elevation", unit: "deg", digits: tenths, what: "elevation of the ray above the horizon"},
				{head: "distance", unit: "m", digits: cents, what: "outermost crossing of the boundary along the ray", method: "DIST-1"},
				{head: "bracket", unit: "m", digits: cents, what: whatBracket, method: "DIST-1"},
				{head: ""}, {head: ""}, {head: ""}, {head: "nearer than that"},
			})
			for _, d := range rays {
				s.line(subject(d), d.Class, d.AzimuthDeg, d.ElevationDeg, d.DistanceM, d.BracketM, nil, nil, nil,
					reachWords(reach{verdict: d.Verdict, reason: d.Reason}))
			}
		}
		if len(kept) == 0 && len(rays) == 0 {
			s.merged("No distance was asked for.", look{role: bodyPlain}, 0)
		}
	})
}

const whatBracket = "the boundary lies at most this much nearer than the distance"

// reachTables writes extents, one table for each set of directions.
func (r *report) reachTables(s *sheet, all []reach) {
	var sets [][]string
	for _, x := range all {
		if !slices.ContainsFunc(sets, func(d []string) bool { return slices.Equal(d, x.direction) }) {
			sets = append(sets, x.direction)
		}
	}
	for i, set := range sets {
		if i > 0 {
			s.blank()
		}
		columns := []column{{head: "what"}, {head: "class"}}
		for _, d := range set {
			columns = append(columns, column{head: d, unit: "m", digits: cents, what: directionWords(d), method: "DIST-1"})
		}
		columns = append(columns, column{head: "bracket", unit: "m", digits: cents, what: whatBracket, method: "DIST-1"}, column{head: "inside these extents"})
		s.table(columns)
		for _, x := range all {
			if slices.Equal(x.direction, set) {
				r.reachLine(s, x)
			}
		}
	}
}

func (r *report) reachLine(s *sheet, x reach) {
	values := []any{x.subject, x.class}
	for _, d := range x.distance {
		if x.verdict == exposure.Within {
			values = append(values, "none")
			continue
		}
		values = append(values, d.DistanceM)
	}
	s.line(append(values, x.bracket, reachWords(x))...)
}

func directionWords(d string) string {
	switch d {
	case "front", "back", "left", "right":
		return "extent of the boundary to the " + d + " of the antenna, as seen from behind it"
	case "up", "down":
		return "extent of the boundary " + d + "ward"
	}
	return "extent of the boundary to the " + d + " (the site's axes)"
}

// distancesByAntenna writes the extents of each row alone.
func (r *report) distancesByAntenna() {
	var kept []reach
	for _, x := range reaches(r.a) {
		if x.antenna != "" {
			kept = append(kept, x)
		}
	}
	var directions []string
	for _, x := range kept {
		for _, d := range x.direction {
			if !slices.Contains(directions, d) {
				directions = append(directions, d)
			}
		}
	}
	columns := []column{{head: "antenna", width: 15}, {head: "class", width: 16}}
	for _, d := range directions {
		columns = append(columns, column{head: d, unit: "m", width: 10, digits: cents, what: directionWords(d), method: "DIST-1"})
	}
	columns = append(columns, column{head: "bracket", unit: "m", width: 9, digits: cents, what: whatBracket, method: "DIST-1"},
		column{head: "governed by", width: 24}, column{head: "inside these extents", width: 30})
	r.write(page{
		name: sheetByAntenna, title: "Keep-out distances by antenna row", landscape: true,
		intro:  "Each row alone, as if nothing else radiated, measured from its own centre of radiation. Where several rows radiate together the boundary lies farther out: see " + sheetDistances + " and " + sheetBoundaries + ".",
		widths: widthsOf(columns), headRow: firstRow, filterTo: firstRow + len(kept),
	}, func(s *sheet) {
		s.table(columns)
		for _, x := range kept {
			values := []any{x.antenna, x.class}
			for _, d := range directions {
				m, ok := x.along(d)
				switch {
				case !ok:
					values = append(values, nil)
				case x.verdict == exposure.Within:
					values = append(values, "none")
				default:
					values = append(values, m)
				}
			}
			s.line(append(values, x.bracket, x.governed, reachWords(x))...)
		}
	})
}

var boundaryColumns = []column{
	{head: "surface or section", width: 18}, {head: "class", width: 13}, {head: "may be there", width: 8},
	{head: "keep-out area", unit: "m2", width: 9, digits: figures, what: "area inside the keep-out line", method: "BOUND-1"},
	{head: "certainly above", unit: "m2", width: 9, digits: figures, what: "area of the inner polygon: there the model's ratio exceeds the share everywhere", method: "BOUND-1"},
	{head: "of surface", unit: "m2", width: 9, digits: figures, what: "area of the surface's outline"},
	{head: "ratio at least", unit: "1", width: 8, digits: figures, what: "largest exposure ratio on the surface: the lower bound", method: "BOUND-1"},
	{head: "ratio at most", unit: "1", width: 8, digits: figures, what: "largest exposure ratio on the surface: the upper bound", method: "BOUND-1"},
	{head: "share of limit", unit: "1", width: 7, digits: cents, what: "the exposure ratio that the line is drawn for"},
	{head: "resolution", unit: "m", width: 9, digits: millis, what: "the finest step of the search: the keep-out line encloses the model's boundary to within this distance where the largest over the body is compared, less closely where a mean is", method: "BOUND-1"},
	{head: "from", unit: "m", width: 7, digits: cents, what: "height above the surface at which the body begins"},
	{head: "to", unit: "m", width: 7, digits: cents, what: "height above the surface at which the body ends"},
	{head: "added by straightening", unit: "m2", width: 11, digits: figures, what: "area that straightening the keep-out line added; part of the keep-out area", method: "BOUND-1"},
	{head: "verdict", width: 36},
}

// boundaries writes the keep-out areas of every surface and class.
func (r *report) boundaries() {
	intro := "Keep-out lines enclose the model's boundary: to within the resolution where the largest over the body is compared, less closely where a mean is. Their corners are in settingout.csv, zones.geojson and zones.kml."
	if len(r.pictures) > 0 {
		intro += " Plans are on sheet " + sheetFigures + "."
	}
	r.write(page{
		name: sheetBoundaries, title: "Boundaries on surfaces", intro: intro, landscape: true,
		widths: widthsOf(boundaryColumns), headRow: firstRow, filterTo: firstRow + len(r.a.Zones),
	}, func(s *sheet) {
		s.table(boundaryColumns)
		for _, z := range r.a.Zones {
			there := "no"
			if mayBeThere(r.a, z) {
				there = "yes"
			}
			verdict := verdictFull(zoneVerdict(z), z.Reason)
			if z.Level != "" {
				verdict = joined("line drawn at "+z.Level, verdict)
			}
			s.line(zoneName(z), z.Class, there, z.OuterAreaM2, z.InnerAreaM2, z.SurfaceAreaM2, z.MaxRatioLower, z.MaxRatioUpper,
				z.Share, z.ResolutionM, z.FromM, z.ToM, z.OuterAddedM2, joined(verdict, bodyWords(z.Averaging)))
		}
	})
}

func bodyWords(averaging string) string {
	switch averaging {
	case "mean":
		return "body mean compared"
	case "peak":
		return "largest over the body compared"
	}
	return averaging
}

// Room for a figure on a portrait page, in points. A row of a sheet is at most
// 409 points high, so that a tall figure hangs over two rows.
const (
	figureWidth  = 488.0
	figureHeight = 660.0
)

// figures puts each figure on a page of its own.
func (r *report) figures() {
	rows := make([]int, len(r.pictures)+1) // of the captions
	rows[0] = 3
	for i, p := range r.pictures {
		rows[i+1] = rows[i] + 1 + len(rowHeights(p))
	}
	r.write(page{
		name: sheetFigures, title: "Figures", free: true,
		intro:  "The same figures are beside this workbook as SVG and PNG. Classes are told apart by line style and hatching.",
		widths: []float64{41, 41},
		before: func(f *excelize.File, sheet string) error {
			for i, p := range r.pictures {
				// The writer takes an image as 96 pixels to the inch; ours has more.
				scale := p.scale() * 96 / 72 * p.width / float64(p.pixels)
				err := f.AddPictureFromBytes(sheet, cellName(1, rows[i]+1), &excelize.Picture{
					Extension: ".png", File: p.png,
					Format: &excelize.GraphicOptions{AltText: p.title, ScaleX: scale, ScaleY: scale, Positioning: "oneCell", OffsetX: 2, OffsetY: 2},
				})
				if err != nil {
					return err
				}
				if i > 0 {
					if err := f.InsertPageBreak(sheet, cellName(1, rows[i])); err != nil {
						return err
					}
				}
			}
			return nil
		},
	}, func(s *sheet) {
		for i, p := range r.pictures {
			s.row = rows[i]
			s.merged(fmt.Sprintf("Figure %d (%s.svg)", i+1, p.name), look{role: section}, 20)
			for _, h := range rowHeights(p) {
				s.put([]any{excelize.Cell{}}, h)
			}
		}
	})
}

// scale is the factor that fits a picture to the page.
func (p picture) scale() float64 { return min(1, figureWidth/p.width, figureHeight/p.height) }

// rowHeights are the heights of the rows over which a picture hangs.
func rowHeights(p picture) []float64 {
	h := p.height*p.scale() + 8
	if h <= tallestRow {
		return []float64{h}
	}
	return []float64{tallestRow, h - tallestRow}
}
