package figure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/exposure"
)

// star draws a ring about a centre whose radius varies from corner to corner.
func star(t *rapid.T, label string, cx, cy, r float64, clockwise bool) []pt {
	n := rapid.IntRange(3, 40).Draw(t, label+" corners")
	var out []pt
	for i := range n {
		a := 2 * math.Pi * float64(i) / float64(n)
		if clockwise {
			a = -a
		}
		k := r * rapid.Float64Range(0.5, 1).Draw(t, label+" radius")
		out = append(out, pt{cx + k*math.Cos(a), cy + k*math.Sin(a)})
	}
	return out
}

func area(r []pt) float64 {
	s := 0.0
	for i := range r {
		a, b := r[i], r[(i+1)%len(r)]
		s += a[0]*b[1] - b[0]*a[1]
	}
	return math.Abs(s) / 2
}

func TestHatchingStaysInsideThePolygonAndOutOfItsHoles(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		outer := star(t, "outer", 100, 100, 90, false)
		hole := star(t, "hole", 100, 100, 20, true) // inside half of 90
		rings := [][]pt{outer, hole}
		angle := rapid.Float64Range(-math.Pi/2, math.Pi/2).Draw(t, "angle")
		spacing := rapid.Float64Range(1, 6).Draw(t, "spacing")
		total := 0.0
		for _, s := range scan(rings, angle, spacing, 0) {
			total += dist(s[0], s[1])
			for _, k := range []float64{1e-6, 0.25, 0.5, 0.75, 1 - 1e-6} {
				p := between(s[0], s[1], k)
				if !within(rings, p) {
					// On the edge itself rounding decides: a tiny way inward must be in.
					q := between(s[0], s[1], 0.5+(k-0.5)*0.999)
					if dist(s[0], s[1]) > 1e-3 && !within(rings, q) {
						t.Fatalf("hatching at %v is outside", p)
					}
				}
			}
		}
		// The lines times their spacing give the area: the error of a midpoint rule
		// is at most one spacing times the length of the outline across the lines.
		want := area(outer) - area(hole)
		if d := math.Abs(total*spacing - want); d > spacing*4*90 {
			t.Fatalf("hatching covers %.0f of %.0f", total*spacing, want)
		}
	})
}

func TestHatchingLeavesAHoleEmpty(t *testing.T) {
	rings := [][]pt{Box{0, 0, 100, 100}.ring()[:4], {{30, 30}, {30, 70}, {70, 70}, {70, 30}}}
	spans := scan(rings, 0, 10, 5)
	require.Len(t, spans, 14) // 3 below, 4 twice beside the hole, 3 above
	for _, s := range spans {
		y := s[0][1]
		if y > 30 && y < 70 {
			assert.True(t, s[1][0] <= 30 || s[0][0] >= 70, "%v", s)
		} else {
			assert.InDelta(t, 100, s[1][0]-s[0][0], 1e-9)
		}
	}
}

func TestLineClippedToAnAreaStaysInside(t *testing.T) {
	rings := [][]pt{Box{0, 0, 100, 100}.ring()[:4], {{30, 30}, {30, 70}, {70, 70}, {70, 30}}}
	parts := clipTo(rings, []pt{{-50, 50}, {50, 50}, {150, 50}})
	require.Len(t, parts, 2)
	const exact = 1e-9
	assert.InDelta(t, 0, parts[0][0][0], exact)
	assert.InDelta(t, 30, parts[0][len(parts[0])-1][0], exact)
	assert.InDelta(t, 70, parts[1][0][0], exact)
	assert.InDelta(t, 100, parts[1][len(parts[1])-1][0], exact)
	assert.Empty(t, clipTo(rings, []pt{{40, 40}, {60, 60}}))
}

func cone(n int, f func(x, y float64) float64) *exposure.RatioGrid {
	g := &exposure.RatioGrid{X0: -10, Y0: -10, Step: 20 / float64(n-1), NX: n, NY: n}
	for j := range n {
		for i := range n {
			g.Values = append(g.Values, exposure.Number(f(-10+float64(i)*g.Step, -10+float64(j)*g.Step)))
		}
	}
	return g
}

func TestContourOfAFieldThatFallsAsTheSquareIsACircle(t *testing.T) {
	// Ratio 25/r^2 is 1 at r = 5 and 5 at r = sqrt 5.
	f := newField(cone(101, func(x, y float64) float64 { return 25 / (x*x + y*y) }))
	for _, c := range []struct{ ratio, radius float64 }{{1, 5}, {5, math.Sqrt(5)}, {0.5, math.Sqrt(50)}} {
		lines := f.contour(c.ratio)
		require.Lenf(t, lines, 1, "ratio %v", c.ratio)
		l := lines[0]
		assert.Equal(t, l[0], l[len(l)-1], "closed")
		for _, p := range l {
			// Proportion in the logarithm over one step h: error below h^2 |u''|/8,
			// u'' at most 2/(r^2 ln 10), over the slope 2/(r ln 10): h^2/(8 r) < 0.0023.
			assert.InDelta(t, c.radius, math.Hypot(p[0], p[1]), 0.0025)
		}
	}
}

func TestContourThatLeavesTheGridIsOpen(t *testing.T) {
	f := newField(cone(41, func(x, _ float64) float64 { return math.Pow(10, x/10) }))
	lines := f.contour(1)
	require.Len(t, lines, 1)
	require.Len(t, lines[0], 41)
	for _, p := range lines[0] {
		assert.InDelta(t, 0, p[0], 1e-9, "the logarithm is linear in x: exact but for rounding")
	}
}

func TestContourOfASaddleHoldsTwoLines(t *testing.T) {
	g := &exposure.RatioGrid{Step: 1, NX: 2, NY: 2, Values: []exposure.Number{10, 0.5, 0.5, 10}}
	lines := newField(g).contour(1)
	require.Len(t, lines, 2)
	// The mean of the four logarithms is above 0: the high corners are joined, so
	// each line cuts off a low corner.
	for _, l := range lines {
		m := between(l[0], l[1], 0.5)
		assert.Greater(t, math.Abs(m[0]-m[1]), 0.5)
	}
	g.Values = []exposure.Number{2, 0.1, 0.1, 2}
	for _, l := range newField(g).contour(1) {
		m := between(l[0], l[1], 0.5)
		assert.Less(t, math.Abs(m[0]-m[1]), 0.5)
	}
}

func TestContourLeavesCellsWithoutASample(t *testing.T) {
	g := cone(41, func(x, y float64) float64 { return 25 / (x*x + y*y) })
	g.Values[20*41+30] = exposure.Number(math.NaN()) // at x = 5, y = 0
	lines := newField(g).contour(1)
	require.Len(t, lines, 1)
	assert.NotEqual(t, lines[0][0], lines[0][len(lines[0])-1], "open where the sample is missing")
	for _, p := range lines[0] {
		assert.False(t, p[0] > 4.5 && p[0] < 5.5 && math.Abs(p[1]) < 0.49, "%v", p)
	}
}

func TestUnusableGridIsNoField(t *testing.T) {
	for _, g := range []*exposure.RatioGrid{nil, {}, {NX: 2, NY: 2, Step: 1, Values: make([]exposure.Number, 3)},
		{NX: 2, NY: 2, Values: make([]exposure.Number, 4)}, {NX: 2, NY: 2, Step: 1, X0: math.NaN(), Values: make([]exposure.Number, 4)}} {
		assert.Nil(t, newField(g))
	}
}

func TestThinnedLineStaysWithinATenthOfItsWidth(t *testing.T) {
	ring := []pt(staircase(200, 200, 150, 120, 0.02))
	kept := append([]pt(nil), ring...)
	out := thin(ring)
	assert.Equal(t, kept, ring, "the line given is not changed")
	assert.Less(t, len(out), len(ring)/20)
	assert.Equal(t, out[0], out[len(out)-1])
	for i := 0; i < len(ring); i += 7 {
		best := math.Inf(1)
		for k := 0; k+1 < len(out); k++ {
			best = math.Min(best, toSegment(ring[i], out[k], out[k+1]))
		}
		require.LessOrEqual(t, best, thinPoints+1e-9)
	}
}

func toSegment(p, a, b pt) float64 {
	dx, dy := b[0]-a[0], b[1]-a[1]
	l := dx*dx + dy*dy
	if l == 0 {
		return dist(p, a)
	}
	k := math.Min(math.Max(((p[0]-a[0])*dx+(p[1]-a[1])*dy)/l, 0), 1)
	return dist(p, between(a, b, k))
}

func TestRingTooSmallToShowDoesNotVanish(t *testing.T) {
	tiny := []pt(ellipse(10, 10, 0.01, 0.01, 50, false))
	out := thin(tiny)
	require.GreaterOrEqual(t, len(out), 4)
	b, _ := around(out)
	for _, p := range tiny {
		assert.True(t, b.grow(thinPoints).contains(p))
	}
	assert.Greater(t, b.W(), 0.0)
}

func TestTicks(t *testing.T) {
	label := func(ts []tick) (out []string) {
		for _, x := range ts {
			if x.label != "" {
				out = append(out, x.label)
			}
		}
		return out
	}
	assert.Equal(t, []string{"−10", "0", "10", "20", "30"}, label(linearTicks(-12, 33, 5)))
	assert.Equal(t, []string{"0.0", "0.2", "0.4"}, label(linearTicks(0, 0.5, 4)))
	assert.Equal(t, []string{"0.01", "0.1", "1", "10"}, label(logTicks(0.004, 60, 5, plainOrPower)))
	assert.Equal(t, []string{"0.5", "1", "2", "5", "10"}, label(logTicks(0.5, 10, 8, plainOrPower)))
	assert.Equal(t, []string{"1e−7", "1e−5", "0.001"}, label(logTicks(1e-7, 1e-2, 3, plainOrPower)))
	assert.Equal(t, "100 kHz", frequency(1e5))
	assert.Equal(t, "98.1 MHz", frequency(98.1e6))
	assert.Equal(t, "300G", shortHz(300e9))
	assert.Equal(t, "50", shortHz(50))
}

func TestRatioNearOneIsNotRoundedOntoIt(t *testing.T) {
	for _, c := range []struct {
		v    float64
		want string
	}{{0.34, "0.34"}, {0.999, "0.999"}, {1.004, "1.004"}, {1, "1.0"}, {0.99999, "0.99999"}, {12.3, "12"}, {0.0004, "< 0.001"},
		{1234, "1200"}, {math.NaN(), "not assessed"}, {math.Inf(1), "no bound"}} {
		assert.Equal(t, c.want, ratioText(c.v))
	}
}

func TestWrapBreaksLinesAndOverlongWords(t *testing.T) {
	for _, text := range []string{"one two three four five six seven", "incomprehensibilitiesandmoreofthesame short", "", "ééééééééééééééééééééééé"} {
		for _, l := range wrap(text, 40, bodyFace) {
			assert.LessOrEqual(t, bodyFace.width(l), 40.0)
		}
	}
}

func TestSeriesKeepsItsPeaksWhenThinned(t *testing.T) {
	n := 86400
	x, y := make([]float64, n), make([]float64, n)
	for i := range x {
		x[i], y[i] = float64(i), math.Sin(float64(i)/1000)
	}
	y[43210], y[60001] = 9, -9
	fx, fy := fewer(x, y, 0, float64(n), 500)
	assert.Less(t, len(fx), 2001)
	assert.Contains(t, fy, 9.0)
	assert.Contains(t, fy, -9.0)
	assert.IsIncreasing(t, fx)
}

func TestOutermostCrossing(t *testing.T) {
	// 25/r^2 meets 1 at r = 5, and the interpolation is exact for a power law.
	var x, y []float64
	for r := 0.5; r < 40; r *= 1.3 {
		x, y = append(x, r), append(y, 25/r/r)
	}
	at, ok := outermost(x, y)
	require.True(t, ok)
	assert.InDelta(t, 5, at, 1e-9)
	// A dip below 1 and a second lobe above it: the farther crossing counts.
	at, ok = outermost([]float64{1, 2, 4, 8}, []float64{4, 0.25, 4, 0.25})
	require.True(t, ok)
	assert.InDelta(t, 4*math.Sqrt2, at, 1e-9)
	_, ok = outermost([]float64{1, 2}, []float64{0.5, 0.2})
	assert.False(t, ok)
	_, ok = outermost([]float64{1, 2}, []float64{math.NaN(), 0.2})
	assert.False(t, ok)
}
