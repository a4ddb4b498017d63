package figure

import (
	"math"
)

// curve is a line of a diagram.
type curve struct {
	x, y  []float64
	style stroke
	text  string // in the legend; "" = not entered
}

func (c curve) points() []pt {
	out := make([]pt, min(len(c.x), len(c.y)))
	for i := range out {
		out[i] = pt{c.x[i], c.y[i]}
	}
	return out
}

// span returns the range of the finite values, on a logarithmic axis of the
// positive ones; ok is false where there is none.
func span(log bool, lists ...[]float64) (lo, hi float64, ok bool) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, l := range lists {
		for _, v := range l {
			if isFinite(v) && (v > 0 || !log) {
				lo, hi, ok = math.Min(lo, v), math.Max(hi, v), true
			}
		}
	}
	return lo, hi, ok
}

// logRange widens a range of positive values to whole steps of 1, 2, 5, at
// least a factor of four apart.
func logRange(lo, hi float64) (float64, float64) {
	lo, hi = lo*(1+1e-9), hi*(1-1e-9)
	if hi/lo < 4 {
		lo, hi = lo/2, hi*2
	}
	down := niceStep(lo)
	for _, k := range []float64{1, 0.5, 0.4} {
		if v := niceStep(lo * k * (1 - 1e-6)); v <= lo {
			down = v
			break
		}
	}
	return math.Min(down, lo), niceStep(hi)
}

// linearRange widens a range by a margin of one part in twenty.
func linearRange(lo, hi float64) (float64, float64) {
	d := (hi - lo) / 20
	if d == 0 {
		d = math.Max(math.Abs(lo)/10, 0.5)
	}
	return lo - d, hi + d
}

// trace draws curves clipped to the panel.
func (a axes) trace(s *sheet, curves []curve) {
	for _, c := range curves {
		s.lines(a.clipped(c.points()), c.style)
	}
}

// entriesOf returns the legend of curves.
func entriesOf(curves []curve) []entry {
	var out []entry
	for _, c := range curves {
		if c.text != "" {
			out = append(out, entry{lineSample(c.style), c.text})
		}
	}
	return out
}

// diagram opens a panel across the page of the given height.
func (p *page) diagram(height float64) Box {
	x := pageMargin + axisRoom + 6
	return Box{x, p.y - height, pageWidth - pageMargin - 6, p.y}
}

// under draws a legend across the page beneath a panel whose axis texts end at
// y, and leaves the page's pen beneath it.
func (p *page) under(y float64, entries []entry) {
	p.y = y
	if len(entries) == 0 {
		return
	}
	columns := min(len(entries), 3)
	p.y -= p.legend("", entries, pt{pageMargin, p.y}, pageWidth-2*pageMargin, columns) + 6
}
