package antenna

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// lopsided is an antenna of our own making, different to the right and to the
// left, above and below, before and behind, so that no sense can be swapped
// unseen: losses in dB by angle in deg, linear between.
func lopsided(right, left, up, down float64) string {
	var b strings.Builder
	b.WriteString("cut,angle [deg],loss [dB]\n")
	for a := -180; a < 180; a += 2 {
		w := right
		if a < 0 {
			w = left
		}
		fmt.Fprintf(&b, "horizontal,%d,%.4f\n", a, math.Min(25, 3*math.Pow(float64(a)/w, 2)))
	}
	for a := -180; a < 180; a += 2 {
		w := up
		if a < 0 {
			w = down
		}
		fmt.Fprintf(&b, "vertical,%d,%.4f\n", a, math.Min(25, 3*math.Pow(float64(a)/w, 2)))
	}
	return b.String()
}

func lossAt(p Pattern, phiDeg, thetaDeg float64) float64 {
	return lossOfRatio(p.Relative(radians(phiDeg), radians(thetaDeg)))
}

// The right and the left, up and down of a plain CSV, which defines clockwise
// from above and takes the sense of the vertical cut from the user. Tolerance
// 1e-3 dB: four printed decimals.
func TestCSVSenses(t *testing.T) {
	text := lopsided(40, 20, 12, 6)
	f, err := Read(strings.NewReader(text), ReadOptions{VerticalSense: SenseUp})
	require.NoError(t, err)
	assert.Equal(t, "plain CSV, two cuts", f.Format)
	assert.InDelta(t, 3, lossAt(f.Pattern, 40, 0), 1e-3, "to the right")
	assert.InDelta(t, 3, lossAt(f.Pattern, -20, 0), 1e-3, "to the left")
	assert.InDelta(t, 3, lossAt(f.Pattern, 0, 12), 1e-3, "up")
	assert.InDelta(t, 3, lossAt(f.Pattern, 0, -6), 1e-3, "down")

	f, err = Read(strings.NewReader(text), ReadOptions{VerticalSense: SenseDown})
	require.NoError(t, err)
	assert.InDelta(t, 3, lossAt(f.Pattern, 0, -12), 1e-3, "positive angles now point down")
	assert.InDelta(t, 3, lossAt(f.Pattern, 40, 0), 1e-3, "the horizontal cut stays")

	f, err = Read(strings.NewReader("# vertical cut: down\n"+text), ReadOptions{})
	require.NoError(t, err)
	assert.InDelta(t, 3, lossAt(f.Pattern, 0, -12), 1e-3, "the file's own remark")

	_, err = Read(strings.NewReader(text), ReadOptions{})
	var re *ReadError
	require.True(t, errors.As(err, &re))
	assert.Contains(t, re.Message, `"vertical cut"`)
	assert.Equal(t, 182, re.Line)
}

// A row of faults, each with its line.
func TestCSVFaults(t *testing.T) {
	good := lopsided(30, 30, 8, 8)
	for name, c := range map[string]struct {
		text string
		line int
		want string
	}{
		"not a number":   {strings.Replace(good, "horizontal,-120,25.0000", "horizontal,-120,2O", 1), 32, `"2O" is not a number`},
		"hexadecimal":    {strings.Replace(good, "horizontal,-120,25.0000", "horizontal,-120,0x12", 1), 32, "is not a number"},
		"NaN":            {strings.Replace(good, "horizontal,-120,25.0000", "horizontal,-120,NaN", 1), 32, "is not a number"},
		"blank":          {strings.Replace(good, "horizontal,-120,25.0000", "horizontal,-120,", 1), 32, "is blank"},
		"repeated":       {strings.Replace(good, "horizontal,-120,25.0000", "horizontal,-122,25", 1), 32, "repeats line 31"},
		"repeated turn":  {strings.Replace(good, "horizontal,-120,25.0000", "horizontal,-120,25\nhorizontal,240,20", 1), 33, "5.00 dB apart"},
		"gap":            {strings.Replace(strings.Replace(strings.Replace(good, "horizontal,-4,0.0533\n", "", 1), "horizontal,-2,0.0133\n", "", 1), "horizontal,0,0.0000\n", "", 1), 89, "gap from -6 to 2 deg"},
		"unknown cut":    {strings.Replace(good, "horizontal,-120", "sideways,-120", 1), 32, "is not a cut"},
		"unknown column": {strings.Replace(good, "loss [dB]", "losses", 1), 1, "is not a column"},
		"no unit":        {strings.Replace(good, "angle [deg]", "angle", 1), 1, "write angle [deg]"},
		"no vertical":    {good[:strings.Index(good, "vertical,")], 0, "vertical cut has 0 points"},
		"empty":          {"  \n", 0, "empty"},
		"angle":          {strings.Replace(good, "horizontal,-120", "horizontal,-420", 1), 32, "between -360 and 360"},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := Read(strings.NewReader(c.text), ReadOptions{})
			var re *ReadError
			require.True(t, errors.As(err, &re), "%v", err)
			assert.Equal(t, c.line, re.Line, "%v", err)
			assert.Contains(t, err.Error(), c.want)
		})
	}
}

// Decimal commas, semicolons, a byte order mark and -180 with 180 are read.
func TestCSVForgives(t *testing.T) {
	text := lopsided(30, 30, 8, 8)
	semi := "\ufeff" + strings.NewReplacer(",", ";", ".", ",").Replace(text) + "horizontal;180;25,0\n"
	f, err := Read(strings.NewReader(semi), ReadOptions{})
	require.NoError(t, err)
	g, err := Read(strings.NewReader(text), ReadOptions{})
	require.NoError(t, err)
	assert.Equal(t, g.Horizontal.Samples(), f.Horizontal.Samples())
	assert.Len(t, f.Forgiven, 1)
	assert.Contains(t, f.Forgiven[0], "again")
}

// A gain column fixes the peak gain. Tolerance 1e-9 dB: no arithmetic but one
// logarithm there and back.
func TestCSVGain(t *testing.T) {
	text := "azimuth [deg];elevation [deg];gain [dBi]\n"
	for el := -90; el <= 90; el += 5 {
		for az := 0; az < 360; az += 5 {
			g := 12.5 - 3*math.Pow(float64(el-5)/20, 2)
			if az == 45 && el == 5 {
				g = 13
			}
			text += fmt.Sprintf("%d;%d;%.4f\n", az, el, g)
		}
	}
	f, err := Read(strings.NewReader(text), ReadOptions{})
	require.NoError(t, err)
	assert.True(t, f.HasGain)
	assert.InDelta(t, 13, f.PeakGain.DBi(), 1e-9)
	assert.InDelta(t, 45, degrees(f.PeakAzimuthRad), 1e-9, "clockwise: to the right")
	assert.InDelta(t, -5, degrees(f.PeakTiltRad), 1e-9, "upward")
	assert.InDelta(t, 0.5+3, lossAt(f.Pattern, 0, 25), 1e-3)
}
