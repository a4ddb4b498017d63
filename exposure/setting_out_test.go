package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// On a roof with one isotropic source every step of a written-out line is
// S = P G / (4 pi d^2) (FCC OET Bulletin 65, edition 97-01, equation 3, with
// unity gain), and on the keep-out line that comes to the limit.
func TestBoundaryPointsCanBeCheckedByHand(t *testing.T) {
	m := onRoof(workSite(t, flatRow(), iso("A", 10, 400)))
	zones, err := m.Zones(t.Context(), ZoneQuery{})
	require.NoError(t, err)
	require.Len(t, zones, 1)
	points, err := m.BoundaryPoints(t.Context(), zones)
	require.NoError(t, err)
	require.Len(t, points, 1+linePoints)
	assert.Equal(t, "largest ratio", points[0].ID)
	// The body there is looked at from foot to head: no less than the value found
	// in the search, and no more than the bound, to within rounding.
	assert.GreaterOrEqual(t, float64(points[0].Ratios[0].ExposureRatio), float64(zones[0].MaxRatioLower)*(1-1e-9))
	assert.LessOrEqual(t, float64(points[0].Ratios[0].ExposureRatio), float64(zones[0].MaxRatioUpper)*(1+1e-9))
	for _, p := range points[1:] {
		require.Len(t, p.Contributions, 1)
		c := p.Contributions[0]
		s := c.PowerW * math.Pow(10, -c.PatternLossDB/10) / (4 * math.Pi * c.DistanceM * c.DistanceM)
		assert.InEpsilon(t, s, float64(c.SWPerM2), 1e-12, "rounding of a handful of operations")
		ratio := float64(p.Ratios[0].ExposureRatio)
		assert.LessOrEqual(t, ratio, 1+1e-9, "%s: the line encloses the boundary", p.ID)
		// One resolution nearer the ratio is above 1, and straightening moves the
		// line by at most a quarter of it.
		nearer := c.DistanceM - 1.5*DefaultResolutionM
		assert.GreaterOrEqual(t, ratio*math.Pow(c.DistanceM/nearer, 2), 1.0, p.ID)
		assert.False(t, p.OnEdge)
	}
}

// onRoof lays a surface two metres beneath the sources of a site, with people of
// 1.8 m on it.
func onRoof(m *Model) *Model {
	m.site.Surfaces = []Surface{{ID: "roof", Outline: []Ring{{{0, -10}, {30, -10}, {30, 10}, {0, 10}, {0, -10}}}, Z: -2, To: 1.8, Class: "worker", Averaging: AveragePeak}}
	return m
}

// Listed and unlisted sources come to the total, where no signal is shared, and
// a weak source is counted rather than listed.
func TestBoundaryPointsCountWhatTheyLeaveOut(t *testing.T) {
	m := onRoof(workSite(t, flatRow(), iso("A", 10, 400), iso("B", 12, 200), iso("weak", 11, 1e-5)))
	zones, err := m.Zones(t.Context(), ZoneQuery{})
	require.NoError(t, err)
	section := Section{X1M: 0, X2M: 30, FromZM: -1, ToZM: 12}
	upright, err := m.Zones(t.Context(), ZoneQuery{Section: &section, ResolutionM: 0.1})
	require.NoError(t, err)
	points, err := m.BoundaryPoints(t.Context(), zones, upright)
	require.NoError(t, err)
	require.Len(t, points, 2*(1+linePoints))
	unlisted := 0
	for _, p := range points {
		sum := float64(p.UnlistedRatio)
		for _, c := range p.Contributions {
			require.Len(t, c.Ratios, 1)
			assert.True(t, c.Ratios[0].ExposureRatio >= leastListed)
			sum += float64(c.Ratios[0].ExposureRatio)
		}
		assert.Equal(t, 3, len(p.Contributions)+p.Unlisted)
		unlisted += p.Unlisted
		assert.InEpsilon(t, float64(p.Ratios[0].ExposureRatio), sum, 1e-9, "three terms, rounded")
		if p.Section != nil && p.ID != "largest ratio" {
			assert.InDelta(t, 0, p.YM, 1e-9, "in the plane")
			assert.LessOrEqual(t, float64(p.Ratios[0].ExposureRatio), 1+1e-9)
		}
	}
	assert.Positive(t, unlisted)
}

// The points lie at equal steps on the part of a line that is not the surface's
// edge, and on the edge where there is no other part.
func TestPointsAlongALine(t *testing.T) {
	outline := []Ring{{{0, 0}, {10, 0}, {10, 10}, {0, 10}, {0, 0}}}
	// A band across the surface: only its two long sides are free.
	band := MultiPolygon{{{{0, 4}, {10, 4}, {10, 6}, {0, 6}, {0, 4}}}}
	points, edge := alongLine(band, outline, 0.05, 4)
	assert.False(t, edge)
	assert.Equal(t, [][2]float64{{2.5, 4}, {7.5, 4}, {7.5, 6}, {2.5, 6}}, points)
	points, edge = alongLine(MultiPolygon{outline}, outline, 0.05, 4)
	assert.True(t, edge)
	assert.Equal(t, [][2]float64{{5, 0}, {10, 5}, {5, 10}, {0, 5}}, points)
	points, _ = alongLine(nil, outline, 0.05, 4)
	assert.Empty(t, points)
}
