package exposure

import (
	"testing"

	"github.com/stretchr/testify/assert"
)

// What a line says of itself: the resolution where points are compared, the width
// left open where means are.
func TestEnclosesSaysHowClosely(t *testing.T) {
	square := func(a float64) MultiPolygon {
		return MultiPolygon{{Ring{{-a, -a}, {a, -a}, {a, a}, {-a, a}, {-a, -a}}}}
	}
	z := Zone{ResolutionM: 0.05, Averaging: "peak", Outer: square(5.1), Inner: square(5)}
	z.OuterAreaM2, z.InnerAreaM2 = z.Outer.Area(), z.Inner.Area()
	z.BandM = z.band()
	// 1e-12: rounding. (10.2^2 - 10^2)/((40.8 + 40)/2) = 0.1, the gap between the squares.
	assert.InDelta(t, 0.1, z.BandM, 1e-12)
	assert.Equal(t, "encloses the model's boundary to within 0.05 m", z.Encloses())
	mean := z
	mean.Averaging = "mean"
	assert.Equal(t, "encloses the model's boundary; on average 0.1 m lie between it and the area certainly above (resolution 0.05 m)", mean.Encloses())
	bare := mean
	bare.Inner, bare.InnerAreaM2 = nil, 0
	bare.BandM = bare.band()
	assert.Equal(t, "encloses the model's boundary (resolution 0.05 m)", bare.Encloses())
	coarse := z
	coarse.ResolutionM = 0.5
	assert.Equal(t, &mean, LoosestLine([]Zone{z, mean, coarse}), "a mean's line is the loosest whatever the resolution")
	assert.Equal(t, &coarse, LoosestLine([]Zone{z, coarse}))
}
