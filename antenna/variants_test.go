package antenna

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"
)

// Each variant is ordered as its name says, leaves other patterns alone, and
// keeps its range around its values: no tolerance, that is the contract of
// Pattern.
func TestVariantsOfPatterns(t *testing.T) {
	cuts, err := TwoCuts(irregularCut(t, -math.Pi, math.Pi, true), irregularCut(t, -math.Pi, math.Pi, true))
	require.NoError(t, err)
	beam, err := TwoBeamwidth(radians(65), radians(8), 25, radians(4))
	require.NoError(t, err)
	sum, ok := PlainSum(cuts)
	require.True(t, ok)
	larger, ok := LargerOfCuts(cuts)
	require.True(t, ok)
	open, ok := WithoutFloor(beam)
	require.True(t, ok)
	for _, f := range []func(Pattern) (Pattern, bool){PlainSum, LargerOfCuts} {
		_, ok = f(beam)
		assert.False(t, ok)
	}
	_, ok = WithoutFloor(cuts)
	assert.False(t, ok)
	rapid.Check(t, func(t *rapid.T) {
		phi, theta := drawBox(t)
		p := wrapped(rapid.Float64Range(phi.Lo, phi.Hi).Draw(t, "p"))
		e := rapid.Float64Range(theta.Lo, theta.Hi).Draw(t, "e")
		for _, v := range []Pattern{sum, larger, open} {
			x, r := v.Relative(p, e), v.RelativeRange(phi, theta)
			if x < r.Lo || x > r.Hi {
				t.Fatalf("%T: %g outside [%g, %g]", v, x, r.Lo, r.Hi)
			}
		}
		if larger.Relative(p, e) < sum.Relative(p, e) {
			t.Fatal("the larger of two losses is more than their sum")
		}
		if open.Relative(p, e) > beam.Relative(p, e) {
			t.Fatal("without its floor a pattern radiates more")
		}
	})
}
