package figure

import (
	"errors"
	"fmt"
	"math"
)

// SeriesData is a field measured over time.
type SeriesData struct {
	Title, Note string
	TimeS       []float64 // s from the start
	FieldVPerM  []float64
	// The running mean, root-mean-square over the averaging time, at the end of
	// each window; may be empty.
	MeanTimeS    []float64
	MeanVPerM    []float64
	AveragingS   float64
	LimitVPerM   float64 // level of the limits supplied; 0 = none to draw
	LimitLabel   string
	LargestTimeS float64 // end of the window of the largest running mean
	LargestVPerM float64 // 0 = not marked
	Caution      string  // at the foot; "" = none
}

// Series draws a field against time with its running mean and the level.
func Series(d SeriesData) (f *Figure, err error) {
	defer caught(&err)
	x0, x1, ok := span(false, d.TimeS)
	_, y1, ok2 := span(false, d.FieldVPerM, d.MeanVPerM)
	if !ok || !ok2 || x0 == x1 {
		return nil, errors.New("figure: a series needs two times and a field")
	}
	if d.LimitVPerM > y1 && d.LimitVPerM < 4*y1 {
		y1 = d.LimitVPerM
	}
	_, y1 = linearRange(0, math.Max(y1, 1e-9))
	unit, per := "s", 1.0
	if x1-x0 > 600 {
		unit, per = "min", 60
	}
	if x1-x0 > 6*3600 {
		unit, per = "h", 3600
	}
	scaled := func(s []float64) []float64 {
		out := make([]float64, len(s))
		for i, v := range s {
			out[i] = v / per
		}
		return out
	}
	p := newPage()
	p.heading(d.Title, d.Note)
	b := p.diagram(215)
	a := newAxes(b, x0/per, x1/per, 0, y1)
	p.panels = append(p.panels, a.Panel)
	a.draw(p.sheet, linearTicks(a.X0, a.X1, 9), linearTicks(0, y1, 8), "time ["+unit+"]", "electric field strength E [V/m]", true)
	curves := []curve{{scaled(d.TimeS), d.FieldVPerM, stroke{width: 0.5, grey: 120}, "field as read, corrected"}}
	if len(d.MeanVPerM) > 0 {
		text := "running mean"
		if d.AveragingS > 0 {
			text += " over " + span60(d.AveragingS) + ", root-mean-square"
		}
		curves = append(curves, curve{scaled(d.MeanTimeS), d.MeanVPerM, stroke{width: 1.6}, text})
	}
	note := ""
	if d.LimitVPerM > 0 {
		label := d.LimitLabel
		if label == "" {
			label = "level of the limits supplied"
		}
		if d.LimitVPerM <= y1 {
			curves = append(curves, curve{[]float64{a.X0, a.X1}, []float64{d.LimitVPerM, d.LimitVPerM}, stroke{width: 1.1, dash: []float64{7, 3}}, label})
		} else {
			note = fmt.Sprintf("The %s, %s V/m, lies above the panel.", label, digits(d.LimitVPerM, 3))
		}
	}
	for i, c := range curves {
		curves[i].x, curves[i].y = fewer(c.x, c.y, a.X0, a.X1, int(2*b.W()))
	}
	a.trace(p.sheet, curves)
	if d.LargestVPerM > 0 {
		if q := a.at(pt{d.LargestTimeS / per, d.LargestVPerM}); finite(q) && b.contains(q) {
			p.circle(q, 2.8, true, 255, stroke{width: 0.9})
			c := newClutter(b)
			for _, cv := range curves {
				c.lines(a.clipped(cv.points()), 0.3, false)
			}
			placed, lost := place(b.grow(-2), []tag{{text: "largest running mean " + digits(d.LargestVPerM, 3) + " V/m", anchor: q, face: labelFace, gap: 4, toward: math.Pi / 2}}, c)
			p.sheet.labels(placed)
			p.labels, p.lost = placed, lost
		}
	}
	a.frame(p.sheet)
	p.under(b.Y0-axisBeneath-4, entriesOf(curves))
	return p.foot(d.Title, note, d.Caution), nil
}

// fewer thins a long series for drawing: of each of n equal stretches of time
// the first, lowest, highest and last sample are kept, in their order.
func fewer(x, y []float64, x0, x1 float64, n int) (fx, fy []float64) {
	x = x[:min(len(x), len(y))]
	if len(x) <= 4*n {
		return x, y
	}
	column := func(i int) int { return int(float64(n) * (x[i] - x0) / (x1 - x0)) }
	for i := 0; i < len(x); {
		lo, hi, j := i, i, i
		for ; j < len(x) && column(j) == column(i); j++ {
			if y[j] < y[lo] {
				lo = j
			}
			if y[j] > y[hi] {
				hi = j
			}
		}
		last := -1
		for _, k := range []int{i, min(lo, hi), max(lo, hi), j - 1} {
			if k != last {
				fx, fy, last = append(fx, x[k]), append(fy, y[k]), k
			}
		}
		i = j
	}
	return fx, fy
}

// span60 writes a time in s, or in min where it is a whole number of them.
func span60(s float64) string {
	if s >= 60 && math.Mod(s, 60) == 0 {
		return length(s/60) + " min"
	}
	return length(s) + " s"
}

// Comparison is a prediction beside a measurement, in V/m.
type Comparison struct {
	Label                 string
	PredictedVPerM        float64
	MeasuredVPerM         float64
	ExpandedUncertaintyDB float64 // of the measured value
	BelowFloor            bool    // the instrument's floor stands in for the reading
	AboveCombined         bool    // above its prediction by more than the combined uncertainty
}

// ScatterData is what a figure of readings against prediction shows.
type ScatterData struct {
	Title, Note string
	Points      []Comparison
	BandDB      float64 // half width of the band drawn about equality, in dB; 0 = none
	Caution     string  // at the foot; "" = none
}

// Scatter draws measured against predicted field, both logarithmic and at the
// same scale, with the line of equality and a band about it. Each reading
// carries its own expanded uncertainty as an upright; one that lies further
// above its prediction than the combined uncertainty is named and filled.
func Scatter(d ScatterData) (f *Figure, err error) {
	defer caught(&err)
	var values []float64
	for _, q := range d.Points {
		values = append(values, q.PredictedVPerM, q.MeasuredVPerM)
	}
	lo, hi, ok := span(true, values)
	if !ok {
		return nil, errors.New("figure: nothing measured and predicted to compare")
	}
	lo, hi = logRange(lo/1.5, hi*1.5)
	p := newPage()
	p.heading(d.Title, d.Note)
	const edge = 330
	x := pageMargin + axisRoom + 6
	b := Box{x, p.y - edge, x + edge, p.y}
	a := newAxes(b, lo, hi, lo, hi)
	a.LogX, a.LogY = true, true
	p.panels = append(p.panels, a.Panel)
	band := math.Pow(10, d.BandDB/20)
	if d.BandDB > 0 {
		h := a.clipBand(band)
		p.fill([][]pt{h}, 232)
	}
	ticks := logTicks(lo, hi, 8, plainOrPower)
	a.draw(p.sheet, ticks, ticks, "predicted E [V/m]", "measured E [V/m]", true)
	p.lines(a.clipped([]pt{{lo, lo}, {hi, hi}}), stroke{width: 0.9})
	entries := []entry{{lineSample(stroke{width: 0.9}), "measured equal to predicted"}}
	if d.BandDB > 0 {
		for _, k := range []float64{band, 1 / band} {
			p.lines(a.clipped([]pt{{lo, lo * k}, {hi, hi * k}}), stroke{width: 0.6, dash: []float64{4, 2}})
		}
		entries = append(entries, entry{lineSample(stroke{width: 0.6, dash: []float64{4, 2}}),
			"± " + digits(d.BandDB, 2) + " dB: expanded uncertainty of the difference"})
	}
	c := newClutter(b)
	var tags []tag
	missing := 0
	var inside, beyond, floor bool
	for _, q := range d.Points {
		at := a.at(pt{q.PredictedVPerM, q.MeasuredVPerM})
		if !finite(at) || !b.contains(at) {
			missing++
			continue
		}
		if u := math.Pow(10, q.ExpandedUncertaintyDB/20); u > 1 && isFinite(u) {
			p.lines(a.clipped([]pt{{q.PredictedVPerM, q.MeasuredVPerM / u}, {q.PredictedVPerM, q.MeasuredVPerM * u}}), stroke{width: 0.6})
		}
		draw := placeWithin
		switch {
		case q.AboveCombined:
			draw, beyond = placeAbove, true
		case q.BelowFloor:
			draw, floor = placeOpen, true
		default:
			inside = true
		}
		draw(p.sheet, at)
		c.box(Box{at[0] - 3, at[1] - 3, at[0] + 3, at[1] + 3}, 2)
		tags = append(tags, tag{text: shorten(q.Label, 24), anchor: at, face: labelFace, gap: 4})
	}
	a.frame(p.sheet)
	placed, lost := place(b.grow(-2), tags, c)
	p.sheet.labels(placed)
	p.labels, p.lost = placed, lost
	upright := "; upright: its expanded uncertainty"
	if inside {
		entries = append(entries, entry{markSample(placeWithin), "reading" + upright})
		upright = ""
	}
	if beyond {
		entries = append(entries, entry{markSample(placeAbove), "reading above its prediction by more than the combined uncertainty: the model or the inventory is wrong" + upright})
		upright = ""
	}
	if floor {
		entries = append(entries, entry{markSample(placeOpen), "below the instrument's floor, drawn at the floor" + upright})
	}
	used := p.legend("", entries, pt{b.X1 + 10, b.Y1}, pageWidth-pageMargin-b.X1-10, 1)
	p.y = math.Min(b.Y0-axisBeneath, b.Y1-used) - 6
	note := ""
	if missing > 0 {
		note = count(missing, "reading has", "readings have") + " no positive field in both and cannot be drawn here."
	}
	if n := len(lost); n > 0 {
		note += fmt.Sprintf(" No room for %s.", count(n, "label", "labels"))
	}
	return p.foot(d.Title, note, d.Caution), nil
}

// clipBand returns the band from y = x/k to y = x*k as a ring on the page,
// within a panel whose axes are alike.
func (a axes) clipBand(k float64) []pt {
	s := math.Log(k) / math.Log(a.X1/a.X0) * a.Box.W()
	s = math.Min(s, a.Box.W())
	b := a.Box
	return []pt{{b.X0, b.Y0}, {b.X0 + s, b.Y0}, {b.X1, b.Y1 - s}, {b.X1, b.Y1}, {b.X1 - s, b.Y1}, {b.X0, b.Y0 + s}}
}
