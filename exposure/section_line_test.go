package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
)

// TestSectionThroughHoldsTheSite: a section runs through its point, along its
// azimuth, and past every antenna and surface by the margin.
func TestSectionThroughHoldsTheSite(t *testing.T) {
	site := &Site{
		Sources:  []Source{{Position: Point{X: 40, Y: -3}}},
		Surfaces: []Surface{{Outline: []Ring{{{-5, 0}, {30, 0}, {30, 20}, {-5, 20}, {-5, 0}}}}},
	}
	// 1e-9 m: rounding of sine and cosine over lengths of tens of metres.
	const allowed = 1e-9
	s := SectionThrough(site, 10, 4, math.Pi/2)
	assert.InDelta(t, -5-sectionMarginM, s.X1M, allowed)
	assert.InDelta(t, 40+sectionMarginM, s.X2M, allowed)
	assert.InDelta(t, 4, s.Y1M, allowed)
	assert.InDelta(t, 4, s.Y2M, allowed)
	s = SectionThrough(site, 10, 4, 0)
	assert.InDelta(t, 10, s.X1M, allowed)
	assert.InDelta(t, -3-sectionMarginM, s.Y1M, allowed)
	assert.InDelta(t, 20+sectionMarginM, s.Y2M, allowed)
}
