package reports

import (
	"fmt"
	"math"

	"example.org/standclear/exposure"
)

var boundaryPointColumns = []column{
	{head: "boundary", width: 14}, {head: "class", width: 12}, {head: "point", width: 12},
	{head: "x", unit: "m", width: 7, digits: cents, what: whatX},
	{head: "y", unit: "m", width: 7, digits: cents, what: whatY},
	{head: "z", unit: "m", width: 7, digits: cents, what: "height above the site datum at which E, S and the chain hold: that of the largest ratio over the body"},
	{head: "antenna", width: 13},
	{head: "method", width: 16},
	{head: "distance", unit: "m", width: 8, digits: cents, what: "distance from the source's centre of radiation"},
	{head: "azimuth off boresight", unit: "deg", width: 9, digits: tenths, what: "azimuth of the point in the antenna's frame"},
	{head: "elevation", unit: "deg", width: 8, digits: tenths, what: "elevation of the point in the antenna's frame"},
	{head: "pattern loss", unit: "dB", width: 7, digits: tenths, what: "gain toward the point below the peak gain"},
	{head: "mean power", unit: "W", width: 7, digits: figures, what: "mean power used"},
	{head: "ground factor", unit: "1", width: 7, digits: cents, what: "field factor of reflection", method: "OET65-5"},
	{head: "E", unit: "V/m", width: 7, digits: figures, what: "electric field strength of the source; on the total line of all sources", method: "OET65-3"},
	{head: "S", unit: "W/m2", width: 8, digits: figures, what: "power density of the source; on the total line of all sources", method: "WAVE-2"},
	{head: "ratio", unit: "1", width: 8, digits: figures, what: "the source's own exposure ratio; on the total line the engine's total", method: "RATIO-1"},
	{head: "remark", width: 24},
}

// boundaryPoints writes the calculation at points of each boundary, for an
// assessor to check by hand.
func (r *report) boundaryPoints() {
	r.write(page{
		name: sheetChecks, title: "Boundaries: points to check by hand", landscape: true,
		intro: "For each boundary on a surface the place of the largest ratio and twelve points spread evenly along the keep-out line, away from the surface's own edge where some of the line runs there. " +
			"On such a point the ratio is that of the line, or a little below: the line encloses the boundary. Each source is written out from distance to ratio; those below 0.001 are only counted. " +
			"A total that is not the plain sum is the engine's: there rows share a signal, and add in amplitude, or a body mean is compared. " +
			"The points of the vertical sections are in results.json.",
		widths: widthsOf(boundaryPointColumns), headRow: firstRow,
	}, func(s *sheet) {
		s.table(boundaryPointColumns)
		for i := range r.a.BoundaryPoints {
			if p := &r.a.BoundaryPoints[i]; p.Section == nil {
				r.boundaryPoint(s, p)
			}
		}
	})
}

func (r *report) boundaryPoint(s *sheet, p *exposure.BoundaryPoint) {
	where := []any{p.Surface, p.Class, p.ID, p.XM, p.YM, p.ZM + p.HeightM}
	if p.Note != "" || len(p.Ratios) == 0 {
		s.line(append(where, nil, nil, nil, nil, nil, nil, nil, nil, nil, nil, nil, p.Note)...)
		return
	}
	sum := float64(p.UnlistedRatio)
	for k := range p.Contributions {
		c := &p.Contributions[k]
		line := append(where[:len(where):len(where)], c.Antenna, c.Method, c.DistanceM, c.AzimuthDeg, c.ElevationDeg, c.PatternLossDB)
		switch {
		case c.Unknown:
			line = append(line, "unknown", c.GroundFactor, "unknown", "unknown", "unknown")
		case !c.Ratios[0].Covered:
			line = append(line, c.PowerW, c.GroundFactor, c.EVPerM, c.SWPerM2, "not covered")
		default:
			sum += float64(c.Ratios[0].ExposureRatio)
			line = append(line, c.PowerW, c.GroundFactor, c.EVPerM, c.SWPerM2, c.Ratios[0].ExposureRatio)
		}
		s.line(append(line, nil)...)
	}
	total := p.Ratios[0]
	remark := ""
	if p.OnEdge {
		remark = "on the surface's edge"
	}
	if p.Unlisted > 0 {
		remark = joined(remark, fmt.Sprintf("%s not listed, %s together", count(p.Unlisted, "source"), ratioText(p.UnlistedRatio)))
	}
	if !agree(sum, float64(total.ExposureRatio)) && !math.IsInf(sum, 0) {
		remark = joined(remark, "not the plain sum")
	}
	if total.Verdict == exposure.NotAssessed {
		remark = joined(remark, verdictFull(total.Verdict, total.Reason))
	}
	s.strong(append(where, "total", nil, nil, nil, nil, nil, nil, nil, p.EVPerM, p.SWPerM2, total.ExposureRatio, remark)...)
}
