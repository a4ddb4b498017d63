package exposure

import (
	"math"
	"strconv"
)

// lineLength is the length of all rings, m.
func (p MultiPolygon) lineLength() float64 {
	sum := 0.0
	for _, poly := range p {
		for _, r := range poly {
			for i := 0; i+1 < len(r); i++ {
				sum += math.Hypot(r[i+1][0]-r[i][0], r[i+1][1]-r[i][1])
			}
		}
	}
	return sum
}

// band is the mean width of what lies between the keep-out line and the area
// certainly above, m; zero where there is no such area.
func (z *Zone) band() float64 {
	if len(z.Inner) == 0 {
		return 0
	}
	return 2 * (z.OuterAreaM2 - z.InnerAreaM2) / (z.Outer.lineLength() + z.Inner.lineLength())
}

// Encloses says how closely the keep-out line follows the model's boundary. Where
// a body's mean is compared the resolution does not say it, since a column of
// slabs is bounded less closely than a point: the width of what is left open is
// said instead.
func (z *Zone) Encloses() string {
	two := func(x float64) string { return strconv.FormatFloat(x, 'g', 2, 64) }
	switch {
	case z.Averaging != "mean":
		return "encloses the model's boundary to within " + strconv.FormatFloat(z.ResolutionM, 'g', 4, 64) + " m"
	case z.BandM == 0:
		return "encloses the model's boundary (resolution " + two(z.ResolutionM) + " m)"
	}
	return "encloses the model's boundary; on average " + two(z.BandM) + " m lie between it and the area certainly above (resolution " + two(z.ResolutionM) + " m)"
}

// LoosestLine picks the zone whose sentence holds for all of them: one whose
// means leave the widest band, else the one of the coarsest resolution.
func LoosestLine(zones []Zone) *Zone {
	var worst *Zone
	rank := func(z *Zone) float64 {
		if z.Averaging == "mean" {
			return 1e6 + z.BandM
		}
		return z.ResolutionM
	}
	for i := range zones {
		if worst == nil || rank(&zones[i]) > rank(worst) {
			worst = &zones[i]
		}
	}
	return worst
}
