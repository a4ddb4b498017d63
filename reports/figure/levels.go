package figure

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"example.org/standclear/limits"
)

// LevelLine is the level of one class and quantity against frequency. A NaN
// level cuts the line: there is no level there.
type LevelLine struct {
	Label     string // "general public"
	Quantity  limits.Quantity
	Unit      string // V/m, A/m, T, W/m2
	Hz, Level []float64
}

// LevelsData is what a figure of a limit table shows.
type LevelsData struct {
	Title   string
	Note    string // beneath the title: who issued the table and who checked it
	Lines   []LevelLine
	Caution string // at the foot; "" = none
}

var quantityNames = map[limits.Quantity]string{
	limits.E: "electric field strength", limits.H: "magnetic field strength", limits.B: "magnetic flux density", limits.S: "power density",
}

// Levels draws limit levels against frequency, both logarithmic, one panel a
// quantity, one line style a label.
func Levels(d LevelsData) (f *Figure, err error) {
	defer caught(&err)
	type group struct {
		quantity limits.Quantity
		unit     string
		lines    []LevelLine
	}
	var groups []*group
	var labels []string
	style := map[string]stroke{}
	var hz [][]float64
	for _, l := range d.Lines {
		if _, _, ok := span(true, l.Level); !ok {
			continue
		}
		var g *group
		for _, o := range groups {
			if o.quantity == l.Quantity && o.unit == l.Unit {
				g = o
			}
		}
		if g == nil {
			g = &group{quantity: l.Quantity, unit: l.Unit}
			groups = append(groups, g)
		}
		g.lines = append(g.lines, l)
		hz = append(hz, l.Hz)
		if _, ok := style[l.Label]; !ok {
			style[l.Label] = classLine(len(labels))
			labels = append(labels, l.Label)
		}
	}
	x0, x1, ok := span(true, hz...)
	if !ok {
		return nil, errors.New("figure: no level to draw")
	}
	p := newPage()
	p.heading(d.Title, d.Note)
	columns := min(len(groups), 2)
	room := (pageWidth - 2*pageMargin) / float64(columns)
	height := 215.0
	if columns == 1 {
		height = 270
	}
	top := p.y
	for i, g := range groups {
		cx, cy := i%columns, i/columns
		left := pageMargin + float64(cx)*room + axisRoom + 4
		b := Box{left, top - float64(cy)*(height+axisBeneath+14) - height, pageMargin + float64(cx+1)*room - 12, top - float64(cy)*(height+axisBeneath+14)}
		var ys [][]float64
		for _, l := range g.lines {
			ys = append(ys, l.Level)
		}
		y0, y1, _ := span(true, ys...)
		a := newAxes(b, x0, x1, 0, 0)
		a.LogX, a.LogY = true, true
		if x1/x0 < 1.01 {
			a.X0, a.X1 = x0/2, x1*2
		}
		a.Y0, a.Y1 = logRange(y0/1.3, y1*1.3)
		p.panels = append(p.panels, a.Panel)
		name := quantityNames[g.quantity]
		if name == "" {
			name = string(g.quantity)
		}
		a.draw(p.sheet, logTicks(a.X0, a.X1, int(b.W()/24), shortHz), logTicks(a.Y0, a.Y1, 8, plainOrPower),
			"frequency [Hz]", fmt.Sprintf("%s %s [%s]", name, g.quantity, strings.ReplaceAll(g.unit, "m2", "m²")), true)
		for _, l := range g.lines {
			a.trace(p.sheet, []curve{{x: l.Hz, y: l.Level, style: style[l.Label]}})
		}
		a.frame(p.sheet)
		p.y = math.Min(p.y, b.Y0-axisBeneath-6)
	}
	var entries []entry
	for _, l := range labels {
		entries = append(entries, entry{lineSample(style[l]), l})
	}
	if n := len(groups); n > 1 && n%2 == 1 {
		// The legend takes the place of the panel that is not there.
		last := p.panels[n-1].Box
		used := p.legend("", entries, pt{last.X1 + 40, last.Y1}, pageWidth-pageMargin-12-last.X1-40, 1)
		p.y = math.Min(p.y, last.Y1-used-6)
	} else {
		p.under(p.y, entries)
	}
	return p.foot(d.Title, d.Caution), nil
}
