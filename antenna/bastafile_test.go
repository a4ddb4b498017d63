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

// bastaSphere writes an antenna of our own making, whose peak lies 30 deg to the
// right and 10 deg down, wider to the right than to the left and wider above
// than below, in one of the four coordinate systems.
func bastaSphere(system string, direction func(theta, phi float64) (az, el float64), theta, phi [3]float64) string {
	var b strings.Builder
	fmt.Fprintf(&b, `{
 "BASTA_AA_WP_version": "3.0",
 "Supplier": "Nobody", "Antenna_Model": "Demonstration",
 "Coordinate_System": %q,
 "Frequency": {"value": 3500, "unit": "MHz"},
 "Frequency_Range": {"lower": 3.4, "upper": 3.8, "unit": "GHz"},
 "Gain": {"value": 17.35, "unit": "dBd"},
 "Nominal_Polarization": "+45",
 "Theta_Sampling": [%g, %g, %g],
 "Phi_Sampling": [%g, %g, %g],
 "Data_Set_Row_Structure": ["MagAttenuationTP"],
 "Data_Set": [
`, system, theta[0], theta[1], theta[2], phi[0], phi[1], phi[2])
	comma := ""
	for t := theta[0]; t <= theta[2]+1e-9; t += theta[1] {
		for p := phi[0]; p <= phi[2]+1e-9; p += phi[1] {
			az, el := direction(t, p)
			da, de := math.Remainder(az-30, 360), el+10
			wa, we := 40.0, 20.0
			if da < 0 {
				wa = 20
			}
			if de < 0 {
				we = 10
			}
			fmt.Fprintf(&b, "%s[%.4f]", comma, math.Min(30, 3*da*da/wa/wa+3*de*de/we/we))
			comma = ",\n"
		}
	}
	b.WriteString("]}\n")
	return b.String()
}

func bastaSystems() map[string]string {
	return map[string]string{
		// theta from the zenith, phi counter-clockwise
		"SPCS_Polar": bastaSphere("SPCS_Polar", func(t, p float64) (float64, float64) { return -p, 90 - t }, [3]float64{0, 5, 180}, [3]float64{0, 5, 355}),
		// theta positive downward, phi clockwise
		"SPCS_CW": bastaSphere("SPCS_CW", func(t, p float64) (float64, float64) { return p, -t }, [3]float64{-90, 5, 90}, [3]float64{-180, 5, 180}),
		// the same, counter-clockwise
		"SPCS_CCW": bastaSphere("SPCS_CCW", func(t, p float64) (float64, float64) { return -p, -t }, [3]float64{-90, 5, 90}, [3]float64{0, 5, 360}),
		// theta from the nadir, phi clockwise
		"SPCS_Geo": bastaSphere("SPCS_Geo", func(t, p float64) (float64, float64) { return p, t - 90 }, [3]float64{0, 5, 180}, [3]float64{-180, 5, 175}),
	}
}

// The four coordinate systems of the pattern JSON (NGMN BASTA, second-hand) all
// give one and the same lopsided antenna. Tolerance 1e-3 dB: printed decimals.
func TestBASTASenses(t *testing.T) {
	for system, text := range bastaSystems() {
		t.Run(system, func(t *testing.T) {
			f, err := Read(strings.NewReader(text), ReadOptions{FrequencyHz: 3.6e9})
			require.NoError(t, err)
			assert.InDelta(t, 0, lossAt(f.Pattern, 30, -10), 1e-3)
			assert.InDelta(t, 3, lossAt(f.Pattern, 70, -10), 1e-3, "to the right")
			assert.InDelta(t, 3, lossAt(f.Pattern, 10, -10), 1e-3, "to the left")
			assert.InDelta(t, 3, lossAt(f.Pattern, 30, 10), 1e-3, "up")
			assert.InDelta(t, 3, lossAt(f.Pattern, 30, -20), 1e-3, "down")
			assert.InDelta(t, 30, degrees(f.PeakAzimuthRad), 1e-9)
			assert.InDelta(t, 10, degrees(f.PeakTiltRad), 1e-9)
			assert.InDelta(t, 17.35+2.15, f.PeakGain.DBi(), 1e-9)
			assert.Equal(t, Interval{3.4e9, 3.8e9}, f.FrequencyHz)
			assert.Equal(t, "Nobody Demonstration", f.Description)
			assert.Equal(t, "+45", f.Polarization)
		})
	}
}

// Faults of the pattern JSON, each with its line where one can be named.
func TestBASTAFaults(t *testing.T) {
	good := bastaSystems()["SPCS_Polar"]
	at := strings.Index(good, `"Data_Set": [`) + len(`"Data_Set": [`) + 1
	for name, c := range map[string]struct {
		text string
		line int
		want string
	}{
		"system":       {strings.Replace(good, "SPCS_Polar", "SPCS_Other", 1), 4, "is not a coordinate system"},
		"no system":    {strings.Replace(good, `"Coordinate_System"`, `"Coordinates"`, 1), 0, "Coordinate_System is missing"},
		"syntax":       {strings.Replace(good, `"Gain": {`, `"Gain": {{`, 1), 7, "not readable as JSON"},
		"text":         {good[:at] + `["x"],` + good[at+len("[30.0000],"):], 13, "not a list of numbers"},
		"null":         {good[:at] + `[null],` + good[at+len("[30.0000],"):], 13, "is not a number"},
		"two values":   {good[:at] + `[30, 1],` + good[at+len("[30.0000],"):], 13, "has 2 values"},
		"negative":     {good[:at] + `[-3],` + good[at+len("[30.0000],"):], 13, "zero or more"},
		"too few":      {good[:at] + good[at+len("[30.0000],"):], 12, "2664 rows, 2663 are given"},
		"unit":         {strings.Replace(good, `"dBd"`, `"dBx"`, 1), 7, "is not a unit of gain"},
		"frequency":    {strings.Replace(good, `"upper": 3.8`, `"upper": 3.45`, 1), 0, "outside the pattern file's 3400 to 3450 MHz"},
		"half sphere":  {strings.Replace(strings.Replace(good, "[0, 5, 180]", "[0, 5, 90]", 1), "[0, 5, 355]", "[0, 2.5, 357.5]", 1), 0, "rows"},
		"list":         {"[" + good + "]", 1, "one pattern to a file"},
		"no columns":   {strings.Replace(good, "MagAttenuationTP", "MagnitudeTP", 1), 11, "neither MagAttenuationTP"},
		"twice":        {strings.Replace(good, `"Supplier"`, `"Coordinate_System": "SPCS_CW", "Supplier"`, 1), 4, "is given twice"},
		"sampling":     {strings.Replace(good, "[0, 5, 180]", "[0, 7, 180]", 1), 9, "does not lead from start to stop"},
		"cut off":      {good[:len(good)/2], 0, "not readable as JSON"},
		"no data":      {`{"Coordinate_System": "SPCS_CW"}`, 0, "no Data_Set"},
		"not a object": {`{"Data_Set": 5}`, 1, "not a list of rows"},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := Read(strings.NewReader(c.text), ReadOptions{FrequencyHz: 3.6e9})
			var re *ReadError
			require.True(t, errors.As(err, &re), "%v", err)
			assert.Contains(t, err.Error(), c.want)
			if c.line > 0 {
				assert.Equal(t, c.line, re.Line, "%v", err)
			}
		})
	}
}

// Directions given as columns, co- and cross-polar parts: 10 log(10^-1 + 10^-1) =
// 6.99 dB below, worked out by hand; tolerance 1e-2 dB.
func TestBASTAColumns(t *testing.T) {
	var b strings.Builder
	b.WriteString(`{"Coordinate_System":"SPCS_CW","Data_Set_Row_Structure":["Theta","Phi","MagAttenuationCo","MagAttenuationCr"],"Data_Set":[`)
	comma := ""
	for th := -90; th <= 90; th += 5 {
		for ph := -180; ph < 180; ph += 5 {
			co, cr := 10.0, 10.0
			if th == 0 && ph == 0 {
				co, cr = 0, 60
			}
			fmt.Fprintf(&b, "%s[%d,%d,%g,%g]", comma, th, ph, co, cr)
			comma = ","
		}
	}
	b.WriteString("]}")
	f, err := Read(strings.NewReader(b.String()), ReadOptions{})
	require.NoError(t, err)
	assert.InDelta(t, 6.99, lossAt(f.Pattern, 90, 0), 1e-2)
	assert.False(t, f.HasGain)
}
