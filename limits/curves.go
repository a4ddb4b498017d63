package limits

import "math"

// Curve is the levels of one class, quantity and group against frequency.
type Curve struct {
	Class    string   `json:"class"`
	Quantity Quantity `json:"quantity"`
	Group    Group    `json:"group"`
	// Lines are polylines by rising frequency, one for each stretch without a
	// gap. Where bands meet, a line has both levels at the same frequency.
	Lines [][]CurvePoint `json:"lines"`
}

// CurvePoint is a point of a curve; the level is in the SI unit of the quantity.
type CurvePoint struct {
	FrequencyHz float64 `json:"frequency_hz"`
	Level       float64 `json:"level"`
}

// lowestDrawnHz stands for 0 Hz on a logarithmic axis.
const lowestDrawnHz = 1

// Curves returns the levels of the table as polylines for a figure, in the order
// of classes, groups and quantities; deliberate gaps are gaps. Every corner is
// exact. On two logarithmic axes a power law is a straight line, so that the
// corners alone (perDecade 0) draw the table exactly; for other axes perDecade
// gives the number of points a decade of frequency, evenly spaced in log f.
func (t *Table) Curves(perDecade int) []Curve {
	var list []Curve
	t.eachList(func(g Group, q Quantity, bands []int) {
		c := Curve{Class: t.Rows[bands[0]].Class, Quantity: q, Group: g}
		var line []CurvePoint
		end := func() {
			if len(line) > 0 {
				c.Lines = append(c.Lines, line)
			}
			line = nil
		}
		for k, i := range bands {
			r := t.Rows[i]
			if r.None {
				end()
				continue
			}
			if k > 0 && !meet(t.Rows[bands[k-1]], r) {
				end()
			}
			line = appendRow(line, r, perDecade)
		}
		end()
		if len(c.Lines) > 0 {
			list = append(list, c)
		}
	})
	return list
}

// appendRow adds a row's points, without repeating one that is there already.
func appendRow(line []CurvePoint, r Row, perDecade int) []CurvePoint {
	lo := max(r.FromHz, min(lowestDrawnHz, r.ToHz))
	steps := 1
	if perDecade > 0 {
		steps = max(1, int(math.Ceil(float64(perDecade)*math.Log10(r.ToHz/lo))))
	}
	for k := 0; k <= steps; k++ {
		f := lo * math.Pow(r.ToHz/lo, float64(k)/float64(steps))
		switch k { // corners are exact
		case 0:
			f = lo
		case steps:
			f = r.ToHz
		}
		p := CurvePoint{f, r.Level(f)}
		if n := len(line); n > 0 && line[n-1] == p {
			continue
		}
		line = append(line, p)
	}
	return line
}
