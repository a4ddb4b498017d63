package antenna

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// On its two cuts the sphere is the cuts, front and back; tolerance 1e-9 dB,
// rounding.
func TestTwoCutsOnTheirCuts(t *testing.T) {
	h, v := irregularCut(t, -math.Pi, math.Pi, true), irregularCut(t, -math.Pi, math.Pi, true)
	p, err := TwoCuts(h, v)
	require.NoError(t, err)
	for a := -3.1; a < 3.14; a += 0.013 {
		want := h.Loss(a) + (1-math.Abs(a)/math.Pi)*v.Loss(0) // and w (Av(180) - Av(180)) = 0
		assert.InDelta(t, min(want, max(h.Largest(), v.Largest())), lossOfRatio(p.Relative(a, 0)), 1e-9, "azimuth %g", a)
		if math.Abs(a) < math.Pi/2 {
			want := h.Loss(0) + v.Loss(a)
			assert.InDelta(t, min(want, max(h.Largest(), v.Largest())), lossOfRatio(p.Relative(0, a)), 1e-9, "elevation %g", a)
			want = max(0, h.Loss(math.Pi)+v.Loss(math.Pi-a)-v.Loss(math.Pi))
			assert.InDelta(t, min(want, max(h.Largest(), v.Largest())), lossOfRatio(p.Relative(math.Pi, a)), 1e-9, "behind, %g", a)
		}
	}
	_, err = TwoCuts(irregularCut(t, -1, 1, false), v)
	assert.ErrorContains(t, err, "round the circle")
	_, err = TwoCuts(h, irregularCut(t, -1, 1, false))
	assert.ErrorContains(t, err, "-90 to 90")
}

// A full sphere returns its samples, and half way between two of them the mean
// of their dB; tolerance 1e-9 dB, rounding.
func TestSphereFollowsSamples(t *testing.T) {
	loss := ripples(37, 72)
	least := math.Inf(1)
	for _, r := range loss {
		for _, v := range r {
			least = min(least, v)
		}
	}
	p, err := FullSphere(-math.Pi, loss)
	require.NoError(t, err)
	for i := range loss {
		for j := range loss[i] {
			el, az := -90+5*float64(i), -180+5*float64(j)
			assert.InDelta(t, loss[i][j]-least, lossAt(p, az, el), 1e-9)
			assert.InDelta(t, (loss[i][j]+loss[i][(j+1)%72])/2-least, lossAt(p, az+2.5, el), 1e-9)
			if i+1 < len(loss) {
				assert.InDelta(t, (loss[i][j]+loss[i+1][j])/2-least, lossAt(p, az, el+2.5), 1e-9)
			}
		}
	}
}

// Recommendation ITU-R M.1851, cosecant-squared pattern, as printed in the unit
// tests of an open implementation: 34 dBi, theta3 4.8 deg, csc2 from 6 to 30 deg,
// floor 3.5 dBi: tilt 3.6; peak 34.0; 31.0 at 6.0 and 1.2; 17.39 at 30 deg (to
// 0.2); 3.5 at 45 and -5. Written as a file and read back: it holds reader,
// senses and interpolation to an asymmetric curve from outside. Tolerance 0.05
// dB where a decimal is printed.
func TestCosecantThroughAFile(t *testing.T) {
	gain := func(el float64) float64 {
		const tilt, theta3, floor = 6 - 4.8/2, 4.8, 3.5
		g := math.Inf(-1)
		x := math.Pi * 50.8 / theta3 * math.Sin(radians(el-tilt))
		switch {
		case el > 30:
		case el >= 6:
			g = 34 - 10*math.Log10(2) + 20*math.Log10(math.Sin(radians(6))/math.Sin(radians(el)))
		case el >= tilt-theta3/0.88:
			g = 34
			if x != 0 {
				g += 20 * math.Log10(math.Abs(math.Sin(x)/x))
			}
		}
		return max(g, floor)
	}
	var b strings.Builder
	b.WriteString("# vertical cut: up\ncut,angle [deg],gain [dBi]\n")
	for i := 0; i < 3600; i++ {
		el := float64(i-1800) / 10
		fmt.Fprintf(&b, "vertical,%.1f,%.4f\nhorizontal,%.1f,%.4f\n", el, gain(el), el, 34-math.Min(40, 12*math.Pow(el/1.45, 2)))
	}
	f, err := Read(strings.NewReader(b.String()), ReadOptions{})
	require.NoError(t, err)
	at := func(el float64) float64 { return f.PeakGain.DBi() - lossAt(f.Pattern, 0, el) }
	assert.InDelta(t, 34.0, f.PeakGain.DBi(), 0.05)
	assert.InDelta(t, -3.6, degrees(f.PeakTiltRad), 0.05)
	assert.InDelta(t, 31.0, at(6), 0.05)
	assert.InDelta(t, 31.0, at(1.2), 0.05)
	assert.InDelta(t, 17.39, at(30), 0.2)
	assert.InDelta(t, 3.5, at(45), 0.05)
	assert.InDelta(t, 3.5, at(-5), 0.05)
	w, ok := f.Vertical.Beamwidth(3)
	require.True(t, ok)
	assert.InDelta(t, 4.8, degrees(w), 0.05)
}

// An even line source has its first side lobe at -13.26 dB (textbook figure, to
// half its last digit) and its half-power width at 0.886 lambda/L.
func TestSummaryOfALine(t *testing.T) {
	const lengths = 10 // wavelengths
	var s []Sample
	for i := -1800; i < 1800; i++ {
		a := radians(float64(i) / 10)
		x := math.Pi * lengths * math.Sin(a)
		v := 1.0
		if x != 0 {
			v = math.Pow(math.Sin(x)/x, 2)
		}
		if math.Abs(a) > math.Pi/2 {
			v *= 0.01
		}
		s = append(s, Sample{a, lossOfRatio(v)})
	}
	c, err := NewCut(s, true)
	require.NoError(t, err)
	sum := c.Summary()
	assert.InDelta(t, 0.886/lengths, sum.HalfPowerWidthRad, 0.886/lengths*0.005, "sine against angle and 3.00 for 3.01 dB: 0.5 %")
	require.GreaterOrEqual(t, len(sum.SideLobes), 2)
	assert.InDelta(t, -13.26, sum.SideLobes[0].LevelDB, 0.05)
	assert.InDelta(t, math.Asin(1.4303/lengths), math.Abs(sum.SideLobes[0].AngleRad), radians(0.1))
	assert.InDelta(t, 20, sum.FrontToBackDB, 1e-6)
	assert.InDelta(t, 20, sum.FrontToBackRegionDB, 1e-6)
	assert.InDelta(t, 0, sum.PeakRad, 1e-9)
}

// A round antenna is as strong behind as in front: the peak counted is the one
// in front, and a tilt is not lost.
func TestRoundPeak(t *testing.T) {
	var s []Sample
	for i := -180; i < 180; i++ {
		a := float64(i)
		front := math.Min(20, 3*math.Pow((a+6)/5, 2))
		behind := math.Min(20, 3*math.Pow(math.Remainder(a-186, 360)/5, 2))
		s = append(s, Sample{radians(a), min(front, behind)})
	}
	c, err := NewCut(s, true)
	require.NoError(t, err)
	assert.InDelta(t, -6, degrees(c.PeakRad()), 1e-9)
	assert.InDelta(t, -6, degrees(c.frontPeak()), 1e-9)
}

// The summary of a built-in pattern, and of a gain it contradicts.
func TestSummarize(t *testing.T) {
	p, err := TwoBeamwidth(radians(65), radians(7), 30, radians(4))
	require.NoError(t, err)
	d := Directivity(p)
	s, err := Summarize(p, d)
	require.NoError(t, err)
	assert.InDelta(t, 65, degrees(s.Horizontal.HalfPowerWidthRad), 0.01)
	assert.InDelta(t, 7, degrees(s.Vertical.HalfPowerWidthRad), 0.01)
	assert.InDelta(t, -4, degrees(s.Vertical.PeakRad), 0.006, "half a step of the search")
	assert.InDelta(t, 30, s.Horizontal.FrontToBackDB, 1e-9)
	assert.Empty(t, s.Warnings)
	assert.NotEmpty(t, s.Caveats)
	s, err = Summarize(p, d*1.2)
	require.NoError(t, err)
	assert.Len(t, s.Warnings, 1)
	o, err := Omni(GainFromDBi(10), 0, 0)
	require.NoError(t, err)
	s, err = Summarize(o, GainFromDBi(10))
	require.NoError(t, err)
	assert.Empty(t, s.Warnings, "a reference pattern's integral is no test of its gain")
	assert.True(t, s.Round)
}
