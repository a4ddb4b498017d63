package antenna

import (
	"math"
	"sort"
)

// direction is one sample of a full sphere as a file has it: azimuth clockwise,
// elevation upward, both in deg, and a loss in dB.
type direction struct {
	az, el, db float64
	line       int
}

// mostSamples bounds a sphere: 0.25 deg both ways.
const mostSamples = 1440 * 721

// sphere reads the rows of a full-sphere CSV.
func (t csvTable) sphere() error {
	t.f.Format = "plain CSV, full sphere"
	var d []direction
	least := math.Inf(1)
	for _, r := range t.rows {
		if err := t.fits(r); err != nil {
			return err
		}
		az, err := t.number(r, "azimuth")
		if err != nil {
			return err
		}
		el, err := t.number(r, "elevation")
		if err != nil {
			return err
		}
		db, err := t.value(r)
		if err != nil {
			return err
		}
		least = min(least, db)
		d = append(d, direction{az, el, db, r.line})
	}
	t.setGain(least)
	return t.f.useSphere(d)
}

// useSphere makes the file's pattern of samples over the whole sphere: a regular
// grid, each direction once, from pole to pole.
func (f *File) useSphere(d []direction) error {
	if len(d) > mostSamples {
		return faultAt(d[mostSamples].line, "", "the sphere has more than %d samples", mostSamples)
	}
	for i := range d {
		if math.Abs(d[i].az) > 360 {
			return faultAt(d[i].line, "", "the azimuth %g deg is not between -360 and 360", d[i].az)
		}
		if math.Abs(d[i].el) > 90 {
			return faultAt(d[i].line, "", "the elevation %g deg is not between -90 and 90", d[i].el)
		}
		// A ten-millionth of a degree is noise of the file's own arithmetic.
		d[i].az, d[i].el = math.Round(d[i].az*1e7)/1e7, math.Round(d[i].el*1e7)/1e7
		for d[i].az >= 180 {
			d[i].az -= 360
		}
		for d[i].az < -180 {
			d[i].az += 360
		}
	}
	sort.SliceStable(d, func(i, j int) bool {
		if d[i].el != d[j].el {
			return d[i].el < d[j].el
		}
		return d[i].az < d[j].az
	})
	rows := [][]direction{}
	repeats := 0
	for _, s := range d {
		if n := len(rows); n > 0 && s.el-rows[n-1][0].el < 1e-6 {
			last := &rows[n-1][len(rows[n-1])-1]
			if s.az-last.az > 1e-6 {
				rows[n-1] = append(rows[n-1], s)
				continue
			}
			// At a pole every azimuth is one direction in space, but the grid
			// keeps them apart; elsewhere a repeat must agree.
			if math.Abs(s.db-last.db) > repeatDB {
				return faultAt(s.line, "", "azimuth %g, elevation %g deg is given twice (see line %d) with values %.2f dB apart", s.az, s.el, last.line, math.Abs(s.db-last.db))
			}
			last.db = min(last.db, s.db)
			repeats++
			continue
		}
		rows = append(rows, []direction{s})
	}
	if repeats > 0 {
		f.forgive("%d directions are given twice with the same value", repeats)
	}
	n := len(rows)
	if n < 3 || rows[0][0].el > -90+1e-6 || rows[n-1][0].el < 90-1e-6 {
		return faultAt(0, "", "the sphere does not reach from -90 to 90 deg of elevation")
	}
	rows = f.fillPoles(rows)
	first := rows[0]
	m := len(first)
	stepEl, stepAz := 180/float64(n-1), 360/float64(m)
	loss := make([][]float64, n)
	for i, row := range rows {
		if len(row) != m {
			return faultAt(row[0].line, "", "elevation %g deg has %d azimuths where others have %d; every elevation needs the same azimuths", row[0].el, len(row), m)
		}
		if want := -90 + float64(i)*stepEl; math.Abs(row[0].el-want) > 1e-3*stepEl {
			return faultAt(row[0].line, "", "elevation %g deg breaks the even step of %.4g deg; a sphere needs equal steps without a gap", row[0].el, stepEl)
		}
		for j, s := range row {
			if want := first[0].az + float64(j)*stepAz; math.Abs(s.az-want) > 1e-3*stepAz {
				return faultAt(s.line, "", "azimuth %g deg at elevation %g deg breaks the even step of %.4g deg; a sphere needs equal steps without a gap", s.az, s.el, stepAz)
			}
			loss[i] = append(loss[i], s.db)
		}
	}
	p, err := newSphere(radians(first[0].az), loss)
	if err != nil {
		return faultAt(0, "", "%v", err)
	}
	f.Pattern, f.Horizontal, f.Vertical = p, p.horizontal, p.vertical
	f.PeakTiltRad, f.PeakAzimuthRad = -p.vertical.frontPeak(), p.horizontal.PeakRad()
	if stepAz > gapDeg+1e-9 || stepEl > gapDeg+1e-9 {
		f.warn("the sphere has a point every %.3g deg of azimuth and %.3g deg of elevation only", stepAz, stepEl)
	}
	f.checkPeaks()
	return nil
}

// fillPoles spreads a pole given by one sample over every azimuth.
func (f *File) fillPoles(rows [][]direction) [][]direction {
	n := len(rows)
	for _, at := range [2][2]int{{0, 1}, {n - 1, n - 2}} {
		pole, next := rows[at[0]], rows[at[1]]
		if len(pole) != 1 || len(next) < 2 {
			continue
		}
		full := make([]direction, len(next))
		for i, s := range next {
			full[i] = direction{s.az, pole[0].el, pole[0].db, pole[0].line}
		}
		rows[at[0]] = full
		f.forgive("the pole at %g deg is given once; its value holds at every azimuth", pole[0].el)
	}
	return rows
}
