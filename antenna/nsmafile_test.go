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

// nsmaCutText is one cut of our own making: a main lobe of the width given to
// the right (or up) and of half that width to the left, over the whole circle.
func nsmaCutText(name string, peak, width float64, override map[int]float64) string {
	var b strings.Builder
	fmt.Fprintf(&b, "PATCUT:,%s\r\nPOLARI:,V/V\r\nNUPOIN:,360\r\nFSTLST:,-180,179\r\n", name)
	for a := -180; a < 180; a++ {
		d := float64(a) - peak
		w := width
		if d < 0 {
			w = width / 2
		}
		v := -math.Min(30, 3*math.Pow(d/w, 2))
		if x, ok := override[a]; ok {
			v = x
		}
		fmt.Fprintf(&b, "%d,%.3f,,\r\n", a, v)
	}
	return b.String()
}

// nsmaFile is a file after the records of NSMA WG16.99.050 with the gain, the
// frequency and the tilt of the example of its annex C; the cuts are ours, with
// the annex's value at elevation 34.
func nsmaFile(cuts string, n int) string {
	return "REVNUM:,NSMA WG16.99.050\r\nREVDAT:,19990520\r\nANTMAN:,Nobody\r\nMODNUM:,Demonstration\r\n" +
		"LOWFRQ:,806\r\nHGHFRQ:,894\r\nGUNITS:,DBI/DBR\r\nMDGAIN:,16.8\r\nELTILT:,4.0,0.5\r\nPATTYP:,Typical\r\nNOFREQ:,1\r\n" +
		fmt.Sprintf("PATFRE:,851\r\nNUMCUT:,%d\r\n", n) + cuts + "ENDFIL:,EOF\r\n"
}

func annexC() string {
	return nsmaFile(nsmaCutText("EL", -4, 8, map[int]float64{34: -38.2})+nsmaCutText("AZ", 0, 32, nil), 2)
}

// NSMA WG16.99.050, annex C example (second-hand): elevation 34 deg reads -38.2
// dBr with MDGAIN 16.8 dBi, so that the gain toward azimuth 0, elevation 34 is
// -21.4 dBi. Tolerance 0.05 dB: half the printed digit.
func TestNSMAAnnexC(t *testing.T) {
	f, err := Read(strings.NewReader(annexC()), ReadOptions{FrequencyHz: 851e6})
	require.NoError(t, err)
	assert.InDelta(t, -21.4, f.PeakGain.DBi()-lossAt(f.Pattern, 0, 34), 0.05)
	assert.True(t, f.HasGain)
	assert.InDelta(t, 16.8, f.PeakGain.DBi(), 1e-9)
	assert.Equal(t, "Nobody Demonstration", f.Description)
	assert.Equal(t, Interval{806e6, 894e6}, f.FrequencyHz)
	assert.Equal(t, "V/V", f.Polarization)
	// EL counts up, AZ clockwise: the beam 4 deg down, wider above than below,
	// wider to the right.
	assert.InDelta(t, 4, degrees(f.PeakTiltRad), 1e-9)
	assert.InDelta(t, 3, lossAt(f.Pattern, 0, 4), 1e-3)
	assert.InDelta(t, 3, lossAt(f.Pattern, 0, -8), 1e-3)
	assert.InDelta(t, 3, lossAt(f.Pattern, 32, -4), 1e-3)
	assert.InDelta(t, 3, lossAt(f.Pattern, -16, -4), 1e-3)
	assert.NoError(t, f.CheckElectricalTilt(radians(4.9)))
	assert.ErrorContains(t, f.CheckElectricalTilt(radians(6)), "peaks at 4.0 deg")
	assert.ErrorContains(t, f.CheckElectricalTilt(0), "own tilt stands")
}

// Faults of a file, with their lines.
func TestNSMAFaults(t *testing.T) {
	good := annexC()
	for name, c := range map[string]struct {
		text string
		o    ReadOptions
		line int
		want string
	}{
		"frequency":      {good, ReadOptions{FrequencyHz: 900e6}, 0, "outside the pattern file's 806 to 894 MHz"},
		"units missing":  {strings.Replace(good, "GUNITS:,DBI/DBR\r\n", "", 1), ReadOptions{}, 0, "GUNITS is missing"},
		"units":          {strings.Replace(good, "DBI/DBR", "LIN/DBR", 1), ReadOptions{}, 7, "not known as GUNITS"},
		"positive":       {strings.Replace(good, "\r\n10,-9.188", "\r\n10,9.188", 1), ReadOptions{}, 208, "above the maximum"},
		"not a point":    {strings.Replace(good, "\r\n10,-9.188", "\r\n10;-9.188", 1), ReadOptions{}, 208, "is not a number for the angle"},
		"letters":        {strings.Replace(good, "\r\n10,-9.188", "\r\n10,-9.I88", 1), ReadOptions{}, 208, "is not a number"},
		"repeated":       {strings.Replace(good, "\r\n10,-9.188", "\r\n9,-9.188", 1), ReadOptions{}, 208, "repeats line 207"},
		"cut short":      {good[:strings.Index(good, "PATCUT:,AZ")], ReadOptions{}, 12, "2 cuts are announced"},
		"spherical":      {strings.Replace(good, "PATCUT:,EL", "PATCUT:,45", 1), ReadOptions{}, 14, "known are AZ, EL, H and V"},
		"sense":          {strings.Replace(good, "PATCUT:,EL", "PATCUT:,V", 1), ReadOptions{}, 14, `"vertical cut"`},
		"upside down":    {strings.Replace(good, nsmaCutText("EL", -4, 8, map[int]float64{34: -38.2}), nsmaCutText("EL", 4, 8, nil), 1), ReadOptions{}, 14, `"vertical cut"`},
		"second gain":    {strings.Replace(good, "ELTILT", "MDGAIN:,17\r\nELTILT", 1), ReadOptions{}, 9, "second, different MDGAIN"},
		"gap":            {gapped(good), ReadOptions{}, 0, "gap from"},
		"more announced": {strings.Replace(good, "NOFREQ:,1", "NOFREQ:,2", 1), ReadOptions{}, 11, "cut short"},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := Read(strings.NewReader(c.text), c.o)
			var re *ReadError
			require.True(t, errors.As(err, &re), "%v", err)
			assert.Contains(t, err.Error(), c.want)
			if c.line > 0 {
				assert.Equal(t, c.line, re.Line, "%v", err)
			}
		})
	}
}

// gapped leaves out the points from -3 to 9 deg of the last cut.
func gapped(s string) string {
	i := strings.LastIndex(s, "\r\n-3,")
	j := strings.LastIndex(s, "\r\n10,")
	return s[:i] + s[j:]
}

// What files in the wild get wrong without harm is read, and said.
func TestNSMAForgives(t *testing.T) {
	want, err := Read(strings.NewReader(annexC()), ReadOptions{})
	require.NoError(t, err)
	wild := strings.ReplaceAll(annexC(), "\r\n", "\n")
	wild = strings.ReplaceAll(wild, ",,\n", "\n")
	wild = strings.ReplaceAll(wild, ",-", ",\u2212")
	wild = strings.Replace(wild, "ELTILT:,4.0,0.5", "eltilt: 4.0 ! nominal", 1)
	wild = strings.Replace(wild, "ENDFIL:,EOF\n", "180,\u221230\n", 1)
	got, err := Read(strings.NewReader(wild), ReadOptions{})
	require.NoError(t, err)
	assert.Equal(t, want.Horizontal.Samples(), got.Horizontal.Samples())
	assert.Equal(t, want.Vertical.Samples(), got.Vertical.Samples())
	all := strings.Join(got.Forgiven, "\n")
	for _, s := range []string{"carriage return", "last comma", "typographic minus", "ELTILT without a tolerance", `comments after "!"`, "ENDFIL", "361 are given", "again"} {
		assert.Contains(t, all, s)
	}
}

// A file of several frequencies: the nearest is taken, none is guessed.
func TestNSMAFrequencies(t *testing.T) {
	second := "PATFRE:,880\r\nNUMCUT:,2\r\n" + nsmaCutText("EL", -4, 6, nil) + nsmaCutText("AZ", 0, 40, nil)
	text := strings.Replace(annexC(), "ENDFIL", second+"ENDFIL", 1)
	text = strings.Replace(text, "NOFREQ:,1", "NOFREQ:,2", 1)
	_, err := Read(strings.NewReader(text), ReadOptions{})
	assert.ErrorContains(t, err, "851, 880 MHz; name the frequency")
	f, err := Read(strings.NewReader(text), ReadOptions{FrequencyHz: 878e6})
	require.NoError(t, err)
	assert.Equal(t, 880e6, f.PatternFrequencyHz)
	assert.InDelta(t, 3, lossAt(f.Pattern, 40, -4), 1e-3)
	f, err = Read(strings.NewReader(text), ReadOptions{FrequencyHz: 810e6})
	require.NoError(t, err)
	assert.Equal(t, 851e6, f.PatternFrequencyHz)
}

// Co- and cross-polar cuts of one port add as powers, and the larger of two
// ports stands. 10 log(10^-3 + 10^-2.5) = -23.81 dB worked out by hand; tolerance
// 1e-2 dB.
func TestNSMAPolarizations(t *testing.T) {
	el := nsmaCutText("EL", 0, 10, nil)
	flat := func(pol string, v float64) string {
		s := "PATCUT:,AZ\r\nPOLARI:," + pol + "\r\nNUPOIN:,72\r\n"
		for a := 0; a < 360; a += 5 {
			x := v
			if a == 0 && pol[:1] == pol[len(pol)-1:] {
				x = 0
			}
			s += fmt.Sprintf("%d,%.2f,,\r\n", a, x)
		}
		return s
	}
	f, err := Read(strings.NewReader(nsmaFile(el+flat("V/V", -30)+flat("V/H", -25), 3)), ReadOptions{VerticalSense: SenseUp})
	require.NoError(t, err)
	peak := 10 * math.Log10(1+math.Pow(10, -2.5))
	assert.InDelta(t, 23.81+peak, lossAt(f.Pattern, 90, 0), 1e-2)
	f, err = Read(strings.NewReader(nsmaFile(el+flat("V/V", -30)+flat("H/H", -20), 3)), ReadOptions{VerticalSense: SenseUp})
	require.NoError(t, err)
	assert.InDelta(t, 20, lossAt(f.Pattern, 90, 0), 1e-2)
}

// A gain that the pattern's integral contradicts is called out.
func TestNSMAGainAgainstDirectivity(t *testing.T) {
	warned := func(gain string) bool {
		f, err := Read(strings.NewReader(strings.Replace(annexC(), "MDGAIN:,16.8", "MDGAIN:,"+gain, 1)), ReadOptions{})
		require.NoError(t, err)
		return strings.Contains(strings.Join(f.Warnings, "\n"), "integrates to a directivity")
	}
	f, err := Read(strings.NewReader(annexC()), ReadOptions{})
	require.NoError(t, err)
	d := Directivity(f.Pattern).DBi()
	assert.False(t, warned(fmt.Sprintf("%.2f", d-0.4)))
	assert.True(t, warned(fmt.Sprintf("%.2f", d-0.6)))
	assert.True(t, warned(fmt.Sprintf("%.2f", d+0.6)))
}
