package limits_test

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/limits"
)

// ICNIRP 1998, Table 7, E for heating: corners at 0.1, 1, 10, 400, 2000 MHz and
// 10 and 300 GHz, steps at 10, 400 and 2000 MHz.
func TestCornersOfAGuideline(t *testing.T) {
	for _, c := range published(t, fileI98).Curves(0) {
		if c.Class != pub || c.Quantity != limits.E || c.Group != heating {
			continue
		}
		require.Len(t, c.Lines, 1)
		want := []limits.CurvePoint{
			{FrequencyHz: 0.1e6, Level: 275.118}, {FrequencyHz: 1e6, Level: 87}, {FrequencyHz: 10e6, Level: 27.512},
			{FrequencyHz: 10e6, Level: 28}, {FrequencyHz: 400e6, Level: 28}, {FrequencyHz: 400e6, Level: 27.5},
			{FrequencyHz: 2e9, Level: 61.492}, {FrequencyHz: 2e9, Level: 61}, {FrequencyHz: 10e9, Level: 61}, {FrequencyHz: 300e9, Level: 61},
		}
		require.Len(t, c.Lines[0], len(want))
		for i, p := range c.Lines[0] {
			assert.Equal(t, want[i].FrequencyHz, p.FrequencyHz)
			assert.InDelta(t, want[i].Level, p.Level, 5e-4, "half a unit of the third decimal")
		}
		return
	}
	assert.Fail(t, "no such curve")
}

func TestCurvesStopAtGaps(t *testing.T) {
	none := flat("public", limits.E, 20, 30, 0)
	none.None = true
	table := build(t, flat("public", limits.E, 1, 10, 5), flat("public", limits.E, 15, 20, 6), none, flat("public", limits.E, 30, 40, 7), flat("workers", limits.S, 0, 1000, 8))
	curves := table.Curves(0)
	require.Len(t, curves, 2)
	require.Len(t, curves[0].Lines, 3)
	assert.Equal(t, []limits.CurvePoint{{FrequencyHz: 1e6, Level: 5}, {FrequencyHz: 10e6, Level: 5}}, curves[0].Lines[0])
	assert.Equal(t, []limits.CurvePoint{{FrequencyHz: 15e6, Level: 6}, {FrequencyHz: 20e6, Level: 6}}, curves[0].Lines[1])
	assert.Equal(t, []limits.CurvePoint{{FrequencyHz: 1, Level: 8}, {FrequencyHz: 1e9, Level: 8}}, curves[1].Lines[0], "0 Hz is not on a logarithmic axis")

	assert.Len(t, build(t, flat("public", limits.E, 1, 10, 5)).Curves(10)[0].Lines[0], 11)
	assert.Len(t, build(t, flat("public", limits.E, 5, 5, 5)).Curves(10)[0].Lines[0], 1, "a single frequency is a point")
	assert.Empty(t, build(t, none).Curves(0))
}

// Sampling keeps every corner, rises in frequency, and lies on the table.
func TestCurvesLieOnTheTable(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		table := randomTable(t)
		corners, fine := table.Curves(0), table.Curves(rapid.IntRange(1, 20).Draw(t, "per decade"))
		if len(corners) != len(fine) {
			t.Fatalf("%d and %d curves", len(corners), len(fine))
		}
		for i, c := range fine {
			points := map[limits.CurvePoint]bool{}
			for _, line := range c.Lines {
				last := 0.0
				for _, p := range line {
					points[p] = true
					if p.FrequencyHz < last {
						t.Fatalf("falls back to %g", p.FrequencyHz)
					}
					last = p.FrequencyHz
					// At an edge a curve has both levels, At the lower one.
					if low := atGroup(table, c.Class, c.Group, p.FrequencyHz, c.Quantity); low == 0 || p.Level < low*(1-1e-11) || math.IsInf(p.Level, 0) {
						t.Fatalf("%v lies below the table's %g", p, low)
					}
				}
			}
			for _, line := range corners[i].Lines {
				for _, p := range line {
					if !points[p] {
						t.Fatalf("corner %v is lost", p)
					}
				}
			}
		}
	})
}
