package reports

import (
	"fmt"
	"math"
	"strings"

	"example.org/standclear/exposure"
	"example.org/standclear/limits"
)

// contributionPlan settles, before anything is written, which sources are shown
// at each place and on which rows they stand.
type contributionPlan struct {
	share float64 // only sources of at least this share of some class's ratio are shown; 0 = all
	kept  [][]int // by point: the contributions shown
	first []int   // by point: the row of the first
	total []int   // by point: the row of the total
	index map[*exposure.PointResult]int
	rows  int
}

// A sheet of every source at every place is read by nobody beyond a size: from
// mostContributions rows on, small sources are joined into one line.
const mostContributions = 20_000

func planContributions(a *exposure.Assessment) contributionPlan {
	n := 0
	for i := range a.Points {
		n += len(a.Points[i].Contributions)
	}
	share := 0.0
	if n > mostContributions {
		for _, share = range []float64{0.001, 0.01, 0.05, 0.1} {
			n = 0
			for i := range a.Points {
				n += len(shown(&a.Points[i], share))
			}
			if n <= mostContributions {
				break
			}
		}
	}
	plan := contributionPlan{share: share, index: map[*exposure.PointResult]int{}}
	row := firstRow + 1
	for i := range a.Points {
		p := &a.Points[i]
		kept := shown(p, share)
		plan.index[p] = i
		plan.kept = append(plan.kept, kept)
		plan.first = append(plan.first, row)
		row += len(kept)
		if len(kept) < len(p.Contributions) {
			row++
		}
		plan.total = append(plan.total, row)
		row++
	}
	plan.rows = row - 1
	return plan
}

// shown lists the contributions that reach the share of some class's ratio, or
// whose power is unknown.
func shown(p *exposure.PointResult, share float64) []int {
	var kept []int
	for i := range p.Contributions {
		if share == 0 || p.Contributions[i].Unknown || reachesShare(p, &p.Contributions[i], share) {
			kept = append(kept, i)
		}
	}
	return kept
}

func reachesShare(p *exposure.PointResult, c *exposure.Contribution, share float64) bool {
	for j := range c.Ratios {
		for k := range p.Ratios {
			if p.Ratios[k].Class == c.Ratios[j].Class && c.Ratios[j].ExposureRatio > 0 &&
				float64(c.Ratios[j].ExposureRatio) >= share*float64(p.Ratios[k].ExposureRatio) {
				return true
			}
		}
	}
	return false
}

// totalCell returns the cell that holds the total ratio of a class at a place.
func (plan contributionPlan) totalCell(a *exposure.Assessment, p *exposure.PointResult, class string) (string, bool) {
	i, ok := plan.index[p]
	if !ok || !hasRatio(p, class) {
		return "", false
	}
	for j, c := range a.Classes {
		if c == class {
			return ref(sheetContributions, contributionRatio+j, plan.total[i]), true
		}
	}
	return "", false
}

// Columns of the contributions sheet that formulas use, counted from one.
const (
	contributionE     = 11
	contributionH     = 12
	contributionS     = 13
	contributionRatio = 14 // the first class
)

func (r *report) contributionColumns() []column {
	columns := []column{
		{head: "place", width: 15}, {head: "antenna", width: 16},
		{head: "frequency", unit: "MHz", width: 10, digits: shortest, what: "carrier frequency of the source"},
		{head: "method", width: 17},
		{head: "distance", unit: "m", width: 8, digits: cents, what: "distance from the source's centre of radiation"},
		{head: "azimuth off boresight", unit: "deg", width: 9, digits: tenths, what: "azimuth of the place in the antenna's frame"},
		{head: "elevation", unit: "deg", width: 8, digits: tenths, what: "elevation of the place in the antenna's frame"},
		{head: "pattern loss", unit: "dB", width: 8, digits: tenths, what: "gain toward the place below the peak gain"},
		{head: "mean power", unit: "W", width: 8, digits: figures, what: "mean power used"},
		{head: "ground factor", unit: "1", width: 7, digits: cents, what: "field factor of reflection", method: "OET65-5"},
		{head: "E", unit: "V/m", width: 8, digits: figures, what: "electric field strength of the source; in the far field from power, gain, loss and distance", method: "OET65-3"},
		{head: "H", unit: "A/m", width: 8, digits: figures, what: "magnetic field strength of the source", method: "WAVE-2"},
		{head: "S", unit: "W/m2", width: 8, digits: figures, what: "power density of the source: the larger of E2/Z0 and Z0 H2", method: "WAVE-2"},
	}
	for _, class := range r.a.Classes {
		columns = append(columns, column{head: "ratio, " + oneLine(class), unit: "1", width: 10, digits: figures, what: "the source's own exposure ratio for the class; the total is their sum", method: "RATIO-1"})
	}
	return append(columns, column{head: "share of the place", unit: "%", width: 9, digits: tenths, what: "the source's share of the total ratio for the class that may be there", method: "RATIO-1"})
}

// contributions writes each source's part at each place, with the formulas that
// lead from power to field to ratio to total.
func (r *report) contributions() {
	columns := r.contributionColumns()
	intro := "Each source's part at each place. Formulas are live where a line can be followed by hand; other methods give the number alone."
	if r.a.Site != nil && !r.plainSums() {
		intro += " A total marked \"not the plain sum\" is the engine's: there rows share a signal, and add in amplitude, or a body mean is compared."
	}
	if r.plan.share > 0 {
		intro += fmt.Sprintf(" The list is long: sources below %s %% of a place's ratio for every class are joined into one line.", significant(r.plan.share*100, 2))
	}
	r.write(page{
		name: sheetContributions, title: "Contributions", intro: intro, landscape: true,
		widths: widthsOf(columns), headRow: firstRow, filterTo: r.plan.rows,
	}, func(s *sheet) {
		s.table(columns)
		for i := range r.a.Points {
			r.placeContributions(s, i)
		}
	})
}

func (r *report) placeContributions(s *sheet, at int) {
	p := &r.a.Points[at]
	own := -1
	totals := make([]*exposure.ClassRatio, len(r.a.Classes))
	for j, class := range r.a.Classes {
		for k := range p.Ratios {
			if p.Ratios[k].Class == class {
				totals[j] = &p.Ratios[k]
			}
		}
		if class == p.Class {
			own = j
		}
	}
	first, total := r.plan.first[at], r.plan.total[at]
	shownE, shownH, shownS := 0.0, 0.0, 0.0
	sums := make([]float64, len(totals))
	for _, k := range r.plan.kept[at] {
		c := &p.Contributions[k]
		values := r.sourceCells(s.row, p, c)
		shownE += sq(c.EVPerM)
		shownH += sq(c.HAPerM)
		shownS += float64(c.SWPerM2)
		for j, class := range r.a.Classes {
			ratio := ratioOf(c, class)
			if ratio == nil {
				values = append(values, "not covered")
				continue
			}
			if c.Unknown {
				values = append(values, "unknown")
				continue
			}
			sums[j] += float64(*ratio)
			values = append(values, r.ratioCell(s.row, c, class, totals[j], float64(*ratio)))
		}
		values = append(values, shareCell(s.row, total, own, c, r.a.Classes, totals))
		s.line(values...)
	}
	if left := len(p.Contributions) - len(r.plan.kept[at]); left > 0 {
		values := []any{p.ID, count(left, "smaller source"), nil, nil, nil, nil, nil, nil, nil, nil,
			rest(math.Sqrt(math.Max(0, sq(p.EVPerM)-shownE))), rest(math.Sqrt(math.Max(0, sq(p.HAPerM)-shownH))), rest(float64(p.SWPerM2) - shownS)}
		shownE, shownH, shownS = sq(p.EVPerM), sq(p.HAPerM), float64(p.SWPerM2)
		for j, t := range totals {
			if t == nil {
				values = append(values, nil)
				continue
			}
			left := rest(float64(t.ExposureRatio) - sums[j])
			sums[j] += left
			values = append(values, left)
		}
		s.line(values...)
	}
	last := s.row - 1
	span := func(col int) string { return cellName(col, first) + ":" + cellName(col, last) }
	values := []any{p.ID, "total", nil, nil, nil, nil, nil, nil, nil, nil}
	if last < first {
		values = append(values, p.EVPerM, p.HAPerM, p.SWPerM2)
	} else {
		values = append(values,
			traced(float64(p.EVPerM), math.Sqrt(shownE), "SQRT(SUMSQ(%s))", span(contributionE)),
			traced(float64(p.HAPerM), math.Sqrt(shownH), "SQRT(SUMSQ(%s))", span(contributionH)),
			traced(float64(p.SWPerM2), shownS, "SUM(%s)", span(contributionS)))
	}
	for j, t := range totals {
		switch {
		case t == nil:
			values = append(values, "no limits")
		case last < first:
			values = append(values, t.ExposureRatio)
		default:
			values = append(values, traced(float64(t.ExposureRatio), sums[j], "SUM(%s)", span(contributionRatio+j)))
		}
	}
	for j, t := range totals {
		// Shared signals add in amplitude and a body may be averaged: then the
		// engine's total is not the plain sum, and the line says so.
		if t != nil && last >= first && !agree(sums[j], float64(t.ExposureRatio)) {
			values[1] = "total (not the plain sum)"
		}
	}
	s.strong(values...)
}

// plainSums reports whether no row shares a signal and no level is compared as
// a body mean, so that every total is the sum of its lines.
func (r *report) plainSums() bool {
	signals := map[string]bool{}
	for _, x := range r.a.Site.Sources {
		if x.Signal != "" && signals[x.Signal] {
			return false
		}
		signals[x.Signal] = true
	}
	for _, l := range r.levels {
		if l.at.OverBody == limits.BodyMean {
			return false
		}
	}
	return true
}

func sq(n exposure.Number) float64 { return float64(n) * float64(n) }

// rest is what the joined sources come to: a difference, so that rounding can
// leave it a hair below nothing, or without meaning beside an infinite total.
func rest(v float64) float64 {
	if math.IsNaN(v) || v < 0 {
		return 0
	}
	return v
}

func ratioOf(c *exposure.Contribution, class string) *exposure.Number {
	for i := range c.Ratios {
		if c.Ratios[i].Class == class && c.Ratios[i].Covered {
			return &c.Ratios[i].ExposureRatio
		}
	}
	return nil
}

// sourceCells returns a source's line up to its power density.
func (r *report) sourceCells(row int, p *exposure.PointResult, c *exposure.Contribution) []any {
	values := []any{p.ID, c.Antenna, c.FrequencyHz / 1e6, c.Method, c.DistanceM, c.AzimuthDeg, c.ElevationDeg, c.PatternLossDB}
	if c.Unknown {
		return append(values, "unknown", c.GroundFactor, "unknown", "unknown", "unknown")
	}
	values = append(values, c.PowerW, c.GroundFactor)
	e, h, s := float64(c.EVPerM), float64(c.HAPerM), float64(c.SWPerM2)
	values = append(values, r.farField(row, p, c),
		traced(h, e/exposure.Z0, "K%d/wave_impedance", row),
		traced(s, math.Max(e*e/exposure.Z0, h*h*exposure.Z0), "MAX(K%d^2/wave_impedance,L%d^2*wave_impedance)", row, row))
	return values
}

// farField returns E, with the far-field formula where that is what was used.
func (r *report) farField(row int, p *exposure.PointResult, c *exposure.Contribution) any {
	e := float64(c.EVPerM)
	line, ok := r.power[c.Antenna]
	if !ok || !strings.Contains(c.Method, "far field") || c.DistanceM <= 0 {
		return e
	}
	info := r.a.Sources[line-firstRow-1]
	wall, by := 1.0, ""
	if p.Place != nil && p.Place.WallLoss > 0 && p.Place.WallLoss != 1 {
		wall = p.Place.WallLoss
		by = fmt.Sprintf("*%.15g", wall)
	}
	value := c.GroundFactor * math.Sqrt(exposure.Z0*c.PowerW*math.Pow(10, (info.GainDBi-c.PatternLossDB)/10)*wall/(4*math.Pi)) / c.DistanceM
	return traced(e, value, "J%d*SQRT(wave_impedance*I%d*10^((%s-H%d)/10)%s/(4*PI()))/E%d", row, row, ref(sheetPower, powerGain, line), row, by, row)
}

// ratioCell returns a source's ratio with the levels it divides by.
func (r *report) ratioCell(row int, c *exposure.Contribution, class string, total *exposure.ClassRatio, ratio float64) any {
	if total == nil {
		return ratio
	}
	line, ok := r.levelAt[levelKey{class, total.GovernedBy, c.FrequencyHz}]
	if !ok {
		return ratio
	}
	at := r.levels[line-levelsFirst].at
	var value float64
	var terms []string
	term := func(field, level float64, col int, levelCol int, power int) {
		if level == 0 {
			return
		}
		x := math.Pow(field/level, float64(power))
		if at.Combine == limits.CombineAdd {
			value += x
		} else {
			value = math.Max(value, x)
		}
		text := cellName(col, row) + "/" + ref(sheetLevels, levelCol, line)
		if power == 2 {
			text = "(" + text + ")^2"
		}
		terms = append(terms, text)
	}
	square := 2
	if at.Group.Effect == limits.Stimulation {
		square = 1
	}
	term(float64(c.EVPerM), at.E, contributionE, levelE, square)
	term(float64(c.HAPerM), at.H, contributionH, levelH, square)
	term(float64(c.SWPerM2), at.S, contributionS, levelS, 1)
	switch {
	case len(terms) == 0:
		return ratio
	case len(terms) == 1:
		return traced(ratio, value, "%s", terms[0])
	case at.Combine == limits.CombineAdd:
		return traced(ratio, value, "%s", strings.Join(terms, "+"))
	}
	return traced(ratio, value, "MAX(%s)", strings.Join(terms, ","))
}

// shareCell returns a source's share, in percent, of the ratio of the class that
// may be at the place.
func shareCell(row, total, own int, c *exposure.Contribution, classes []string, totals []*exposure.ClassRatio) any {
	if own < 0 || totals[own] == nil || c.Unknown {
		return nil
	}
	ratio, all := ratioOf(c, classes[own]), float64(totals[own].ExposureRatio)
	if ratio == nil || all <= 0 || math.IsInf(all, 0) || math.IsInf(float64(*ratio), 0) {
		return nil
	}
	col := contributionRatio + own
	return calc{fmt.Sprintf("100*%s/%s", cellName(col, row), cellName(col, total)), 100 * float64(*ratio) / all}
}
