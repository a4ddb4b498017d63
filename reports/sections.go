package reports

import (
	"fmt"
	"math"

	"example.org/standclear/exposure"
	"example.org/standclear/reports/figure"
)

// cut is a vertical plane with the boundaries of its classes.
type cut struct {
	section exposure.Section
	through string // the housing it was laid through, "" where a user laid it
	zones   []exposure.Zone
}

// cuts gathers the boundaries on vertical planes, plane by plane.
func cuts(a *exposure.Assessment) []cut {
	var out []cut
	for _, zones := range [][]exposure.Zone{a.Zones, a.Sections} {
		for _, z := range zones {
			if z.Section == nil {
				continue
			}
			if n := len(out); n == 0 || out[n-1].section != *z.Section || out[n-1].through != z.Through {
				out = append(out, cut{section: *z.Section, through: z.Through})
			}
			out[len(out)-1].zones = append(out[len(out)-1].zones, z)
		}
	}
	return out
}

// grid returns the sampled ratio of the plane, nil where there is none or where
// it reaches no contour line.
func (c *cut) grid(a *exposure.Assessment) *exposure.RatioGrid {
	for i := range a.Grids {
		g := &a.Grids[i]
		if g.Section == nil || *g.Section != c.section {
			continue
		}
		for _, z := range c.zones {
			if z.Class == g.Class && z.MaxRatioUpper >= lowestContour {
				return g
			}
		}
	}
	return nil
}

// drawing is the job of drawing the plane, with its file name.
func (c *cut) drawing(a *exposure.Assessment, number int) drawing {
	data := figure.SectionData{Site: a.Site, Section: c.section, Through: c.through, Classes: a.Classes, Zones: c.zones, Grid: c.grid(a)}
	name := fmt.Sprintf("section-%02d", number)
	if c.through != "" {
		name += "-" + slug(c.through)
	}
	return drawing{name, func() (*figure.Figure, error) { return figure.Section(data) }}
}

// length is the length of the line, in m.
func lineLength(s exposure.Section) float64 { return math.Hypot(s.X2M-s.X1M, s.Y2M-s.Y1M) }

// onLine returns the site's x and y of a distance along a section's line.
func onLine(s exposure.Section, along float64) (x, y float64) {
	t := along / lineLength(s)
	return s.X1M + t*(s.X2M-s.X1M), s.Y1M + t*(s.Y2M-s.Y1M)
}

// cutName names a vertical plane for a list.
func cutName(z exposure.Zone) string {
	if z.Through != "" {
		return "section through " + z.Through
	}
	return zoneName(z)
}

var sectionColumns = []column{
	{head: "through housing", width: 15}, {head: "class", width: 13},
	{head: "x start", unit: "m", width: 8, digits: cents, what: "x of the line's start in the site frame"},
	{head: "y start", unit: "m", width: 8, digits: cents, what: "y of the line's start in the site frame"},
	{head: "x end", unit: "m", width: 8, digits: cents, what: "x of the line's end in the site frame"},
	{head: "y end", unit: "m", width: 8, digits: cents, what: "y of the line's end in the site frame"},
	{head: "length", unit: "m", width: 8, digits: cents, what: "length of the line"},
	{head: "lowest", unit: "m", width: 7, digits: cents, what: "lowest height of the plane above the site datum"},
	{head: "highest", unit: "m", width: 7, digits: cents, what: "highest height of the plane above the site datum"},
	{head: "keep-out area", unit: "m2", width: 9, digits: figures, what: "area of the plane inside the keep-out line", method: "BOUND-1"},
	{head: "certainly above", unit: "m2", width: 9, digits: figures, what: "area of the plane inside the inner polygon: there the model's ratio exceeds the share everywhere", method: "BOUND-1"},
	{head: "ratio at least", unit: "1", width: 8, digits: figures, what: "largest exposure ratio on the plane: the lower bound", method: "BOUND-1"},
	{head: "ratio at most", unit: "1", width: 8, digits: figures, what: "largest exposure ratio on the plane: the upper bound", method: "BOUND-1"},
	{head: "at x", unit: "m", width: 8, digits: cents, what: "x of the point that reaches the lower bound", method: "BOUND-1"},
	{head: "at y", unit: "m", width: 8, digits: cents, what: "y of the point that reaches the lower bound", method: "BOUND-1"},
	{head: "at z", unit: "m", width: 8, digits: cents, what: "height above the site datum of the point that reaches the lower bound", method: "BOUND-1"},
	{head: "resolution", unit: "m", width: 9, digits: millis, what: "the keep-out line encloses the model's boundary to within this distance", method: "BOUND-1"},
	{head: "verdict", width: 25},
}

// sections writes the vertical planes and what was found on them.
func (r *report) sections() {
	all := cuts(r.a)
	rows := 0
	for _, c := range all {
		rows += len(c.zones)
	}
	r.write(page{
		name: sheetSections, title: "Vertical sections", landscape: true,
		intro: "A vertical plane through each housing, along the azimuth of its first row. The field on it is that of all sources, without a body: points of the plane are compared one by one. " +
			"A plane through an antenna runs through its body: the largest ratio is found there, where nobody can stand, and may have no bound. " +
			"Figures are on sheet " + sheetFigures + ", corners in settingout.csv.",
		widths: widthsOf(sectionColumns), headRow: firstRow, filterTo: firstRow + rows,
	}, func(s *sheet) {
		s.table(sectionColumns)
		for _, c := range all {
			for _, z := range c.zones {
				n, through := c.section, any(c.through)
				if c.through == "" {
					through = "a line of its own"
				}
				values := []any{through, z.Class, n.X1M, n.Y1M, n.X2M, n.Y2M, lineLength(n), n.FromZM, n.ToZM, z.OuterAreaM2, z.InnerAreaM2, z.MaxRatioLower, z.MaxRatioUpper}
				if z.MaxRatioLower > 0 {
					values = append(values, z.MaxAt[0], z.MaxAt[1], z.MaxAt[2])
				} else {
					values = append(values, nil, nil, nil)
				}
				s.line(append(values, z.ResolutionM, verdictFull(zoneVerdict(z), z.Reason))...)
			}
		}
	})
}
