package figure

import (
	"math"

	"example.org/standclear/limits"
)

func sampleLevels() LevelsData {
	d := LevelsData{Title: "Limit levels: sample table (invented)", Note: "Levels as read; nobody has confirmed this table."}
	for _, k := range []struct {
		label string
		f     float64
	}{{testClasses[0], 1}, {testClasses[1], 2.2}, {"trained riggers", 4}} {
		hz := []float64{1e5, 1e6, 1e6, 10e6, 10e6, 400e6, 400e6, 2e9, 2e9, 300e9}
		e := []float64{83, 83, 87, 28, 28, 28, 28, 61, 61, 61}
		nan := math.NaN()
		h := []float64{5, 0.7, nan, 0.7, 0.073, 0.073, 0.073, 0.16, 0.16, 0.16}
		s := []float64{nan, nan, nan, nan, 2, 2, 2, 10, 10, 10}
		for _, q := range []struct {
			q limits.Quantity
			u string
			v []float64
		}{{limits.E, "V/m", e}, {limits.H, "A/m", h}, {limits.S, "W/m2", s}} {
			l := LevelLine{Label: k.label, Quantity: q.q, Unit: q.u, Hz: hz}
			for _, v := range q.v {
				l.Level = append(l.Level, v*k.f)
			}
			d.Lines = append(d.Lines, l)
		}
	}
	return d
}

func samplePattern(polar bool) PatternData {
	d := PatternData{Name: "panel 65° (invented)", GainDBi: 17.1, Polar: polar, Cuts: []Cut{{Label: "horizontal cut, elevation −6°"}, {Label: "vertical cut through boresight"}}}
	for i := -180; i <= 180; i++ {
		a := float64(i)
		d.Cuts[0].AngleDeg = append(d.Cuts[0].AngleDeg, a)
		d.Cuts[0].LossDB = append(d.Cuts[0].LossDB, math.Min(12*a*a/65/65, 25))
		x := math.Pi * 6 * math.Sin((a+6)*math.Pi/180)
		v := 0.0
		if x != 0 {
			v = -20 * math.Log10(math.Abs(math.Sin(x)/x))
		}
		if math.Abs(a) > 90 {
			v += 25
		}
		d.Cuts[1].AngleDeg = append(d.Cuts[1].AngleDeg, a)
		d.Cuts[1].LossDB = append(d.Cuts[1].LossDB, v)
	}
	return d
}

func sampleSeries() SeriesData {
	d := SeriesData{Title: "Field over time: reading R7", AveragingS: 360, LimitVPerM: 6, LimitLabel: "level for the general public at 98 MHz"}
	sum := 0.0
	for i := 0; i < 1800; i++ {
		t := float64(i)
		e := 3.1 + 0.8*math.Sin(t/160) + 0.5*math.Sin(t*1.7) + 0.3*math.Sin(t*5.1+1)
		d.TimeS, d.FieldVPerM = append(d.TimeS, t), append(d.FieldVPerM, e)
		sum += e * e
		if i >= 360 {
			sum -= d.FieldVPerM[i-360] * d.FieldVPerM[i-360]
			m := math.Sqrt(sum / 360)
			d.MeanTimeS, d.MeanVPerM = append(d.MeanTimeS, t), append(d.MeanVPerM, m)
			if m > d.LargestVPerM {
				d.LargestTimeS, d.LargestVPerM = t, m
			}
		}
	}
	return d
}

func sampleScatter() ScatterData {
	d := ScatterData{Title: "Readings against prediction", BandDB: 4}
	for i := 0; i < 14; i++ {
		p := 0.4 * math.Pow(1.35, float64(i))
		q := Comparison{Label: "R" + string(rune('A'+i)), PredictedVPerM: p, MeasuredVPerM: p * math.Pow(10, 3*math.Sin(float64(i)*2.3)/20), ExpandedUncertaintyDB: 2.6}
		if i == 9 {
			q.MeasuredVPerM, q.AboveCombined = 2.2*p, true
		}
		if i == 0 {
			q.BelowFloor = true
		}
		d.Points = append(d.Points, q)
	}
	return d
}
