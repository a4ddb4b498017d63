package limits

import (
	"fmt"
	"math"
	"strconv"
)

// Hz returns a frequency in Hz as it is printed: "1.34 MHz".
func Hz(fHz float64) string {
	unit, scale := "Hz", 1.0
	switch a := math.Abs(fHz); {
	case a >= 1e9*(1-edgeSlack):
		unit, scale = "GHz", 1e9
	case a >= 1e6*(1-edgeSlack):
		unit, scale = "MHz", 1e6
	case a >= 1e3*(1-edgeSlack):
		unit, scale = "kHz", 1e3
	}
	return digits(fHz/scale, 6) + " " + unit
}

// LevelText returns a level as it is printed, to four digits with its unit; flux
// densities are printed in uT.
func LevelText(q Quantity, level float64) string {
	if q == B {
		return digits(level*1e6, 4) + " uT"
	}
	return digits(level, 4) + " " + q.Unit()
}

func digits(x float64, n int) string {
	s, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'g', n, 64), 64)
	return strconv.FormatFloat(s, 'g', -1, 64)
}

// row names a row in a message about another one.
func row(r Row) string {
	if r.Line == 0 {
		return "the band " + band(r)
	}
	return fmt.Sprintf("row %d (%s)", r.Line, band(r))
}

func band(r Row) string {
	if r.FromHz == r.ToHz {
		return Hz(r.FromHz)
	}
	return Hz(r.FromHz) + " to " + Hz(r.ToHz)
}
