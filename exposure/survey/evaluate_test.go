package survey_test

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/exposure/sitefile/demo"
	"example.org/standclear/exposure/survey"
)

// tables of a small invented site: one isotropic source of 100 W on 900 MHz at
// the origin, one on 1800 MHz, and limits of 40 V/m and 60 V/m.
var plainSite = map[string]string{
	"site.csv":        "item,value\nname,test site\nsurvey date,2026-05-01\nlatitude [deg],48\nlongitude [deg],11\n",
	"antennas.csv":    "id,x [m],y [m],z [m],pattern,gain [dBi],frequency [MHz],power [W],data from\nA900,0,0,10,isotropic,0,900,100,me\nA1800,0,0,10,isotropic,0,1800,50,me\n",
	"places.csv":      "id,x [m],y [m],z [m],class\ndoor,10,0,8.5,public\nyard,0,30,8.5,public\n",
	"limits.csv":      "class,quantity,from [MHz],to [MHz],coefficient,unit,average [min],over body,source\npublic,E,30,1000,40,V/m,6,mean,test\npublic,E,1000,6000,60,V/m,6,mean,test\nworker,E,30,6000,100,V/m,6,largest,test\n",
	"instruments.csv": "id,kind,from [MHz],to [MHz],calibration factor,antenna factor [dB/m],cable loss [dB],floor [V/m],overload [V/m],calibrated on,calibration due\nB,broadband,30,6000,1.1,,,0.5,200,2025-06-01,2027-06-01\nS,selective,500,3000,1,28,2,0.01,50,2025-06-01,2027-06-01\nOLD,selective,500,3000,1,28,2,0.01,50,2020-06-01,2022-06-01\n",
	"uncertainty.csv": "instrument,component,value,unit,distribution,coverage factor\nB,calibration,2,dB,normal,2\nS,calibration,1,dB,normal,2\nOLD,calibration,1,dB,normal,2\n",
}

// evaluate works out readings on the plain site, some of whose tables are
// replaced.
func evaluate(t *testing.T, readings string, replaced ...string) *survey.Result {
	t.Helper()
	result, err := tryEvaluate(readings, replaced...)
	require.NoError(t, err)
	return result
}

func tryEvaluate(readings string, replaced ...string) (*survey.Result, error) {
	fsys := fstest.MapFS{}
	for name, text := range plainSite {
		fsys[name] = &fstest.MapFile{Data: []byte(text)}
	}
	for i := 0; i < len(replaced); i += 2 {
		fsys[replaced[i]] = &fstest.MapFile{Data: []byte(replaced[i+1])}
	}
	fsys["readings.csv"] = &fstest.MapFile{Data: []byte(readings)}
	site, measured, err := sitefile.LoadSurveyFS(fsys, sitefile.Options{})
	if err != nil {
		return nil, err
	}
	model, err := exposure.New(site, exposure.Options{})
	if err != nil {
		return nil, err
	}
	return survey.Evaluate(context.Background(), model, measured)
}

// Tolerances of this file: 1e-9 relative where both sides are worked out from the
// same closed form, for rounding.
const rounding = 1e-9

func TestCorrectionOfEachQuantity(t *testing.T) {
	r := evaluate(t, `id,place,height [m],instrument,E [V/m],H [A/m],S [W/m2],port level [dBm],frequency [MHz]
E,door,1.5,B,10,,,,900
H,door,1.5,B,,0.02,,,900
S,door,1.5,B,,,0.3,,900
P,door,1.5,S,,,,-20,900
`)
	z0 := 376.730313412
	for i, want := range []float64{11, 0.02 * z0 * 1.1, math.Sqrt(0.3*z0) * 1.1, math.Pow(10, (-20+106.9897000434+28+2-120)/20)} {
		assert.InEpsilon(t, want, *r.Readings[i].FieldVPerM, rounding, r.Readings[i].ID)
		assert.InEpsilon(t, math.Pow(want/40, 2), float64(r.Readings[i].ExposureRatio), rounding)
		assert.Equal(t, exposure.Within, r.Readings[i].Verdict)
	}
	// JCGM 100: 2 dB at k = 2 is 1 dB, expanded by 1.96.
	assert.InDelta(t, 1.96, *r.Readings[0].ExpandedDB, 1e-12)
	assert.Equal(t, 8.5+1.5, r.Readings[0].ZM)
}

// The predicted field of an isotropic source is sqrt(30 P)/r to 0.04 % (the
// textbook 30 stands for Z0/(4 pi) = 29.979 ohm; ITU-R P.525, from memory).
func TestPredictionBesideReading(t *testing.T) {
	r := evaluate(t, "id,place,height [m],instrument,E [V/m],frequency [MHz],antennas\na,door,1.5,S,5,900,\nb,door,1.5,S,5,1795,\nc,door,1.5,S,5,700,\nd,door,1.5,B,5,,\ne,door,1.5,B,5,,A1800\n")
	p900, p1800 := math.Sqrt(30*100)/10, math.Sqrt(30*50)/10
	for i, want := range []float64{p900, p1800, 0, math.Hypot(p900, p1800), p1800} {
		x := r.Readings[i]
		if want == 0 {
			assert.Nil(t, x.PredictedVPerM)
			assert.Equal(t, "the inventory has no antenna at 700 MHz", x.Note)
			continue
		}
		require.NotNil(t, x.PredictedVPerM, x.ID)
		assert.InEpsilon(t, want, *x.PredictedVPerM, 5e-4, x.ID)
		assert.InDelta(t, 20*math.Log10(*x.FieldVPerM/want), *x.DifferenceDB, 0.005, x.ID)
	}
	assert.InEpsilon(t, math.Pow(p900/40, 2)+math.Pow(p1800/60, 2), *r.Readings[3].PredictedRatio, 1e-3, "by frequency")
	assert.InEpsilon(t, math.Pow(5.5/40, 2), float64(r.Readings[3].ExposureRatio), rounding, "the lowest level of the band")
}

func TestAxesAddBeforeAveraging(t *testing.T) {
	r := evaluate(t, `id,place,height [m],instrument,axis,group,E [V/m],frequency [MHz]
1x,door,1.1,S,x,g,3,900
1y,door,1.1,S,y,g,4,900
1z,door,1.1,S,z,g,12,900
2x,door,1.5,S,x,g,1,900
2y,door,1.5,S,y,g,2,900
2z,door,1.5,S,z,g,2,900
`)
	require.Len(t, r.Readings, 2)
	assert.InDelta(t, 13, *r.Readings[0].FieldVPerM, 1e-12)
	assert.InDelta(t, 3, *r.Readings[1].FieldVPerM, 1e-12)
	assert.Equal(t, "1x+1y+1z", r.Readings[0].ID)
	require.Len(t, r.Groups, 1)
	assert.InDelta(t, math.Sqrt((169+9)/2.), *r.Groups[0].FieldVPerM, 1e-12)
}

func TestMeanOverHeights(t *testing.T) {
	readings := `id,place,height [m],instrument,group,E [V/m],frequency [MHz]
a,door,1.1,S,g,30,900
b,door,1.5,S,g,45,900
c,door,1.7,S,g,20,900
`
	r := evaluate(t, readings)
	g := r.Groups[0]
	mean2 := (900 + 2025 + 400) / 3.
	assert.InEpsilon(t, math.Sqrt(mean2), *g.FieldVPerM, rounding)
	assert.Equal(t, 45.0, *g.LargestVPerM)
	assert.InEpsilon(t, mean2/1600, float64(g.ExposureRatio), rounding)
	assert.InEpsilon(t, 2025/1600., g.LargestRatio, rounding)
	assert.Equal(t, exposure.Within, g.Verdict, "the limit rows compare the mean over the body")
	assert.Equal(t, []float64{1.1, 1.5, 1.7}, g.Heights)
	assert.Equal(t, exposure.Above, r.Readings[1].Verdict, "one height by itself")
	require.Len(t, r.Places, 1)
	assert.Equal(t, []string{"g"}, r.Places[0].Counted, "a group counts once")
	assert.InEpsilon(t, mean2/1600, float64(r.Places[0].ExposureRatio), rounding)
	// Components of one instrument do not average out.
	assert.Equal(t, *r.Readings[0].ExpandedDB, *g.ExpandedDB)

	largest := evaluate(t, readings, "limits.csv", strings.ReplaceAll(plainSite["limits.csv"], ",mean,", ",largest,"))
	assert.Equal(t, exposure.Above, largest.Groups[0].Verdict)
	assert.Contains(t, largest.Groups[0].Reason, "compare the largest over the body")
	assert.InEpsilon(t, mean2/1600, float64(largest.Groups[0].ExposureRatio), rounding, "the mean is what is printed")
}

func TestPlacesAddOverBands(t *testing.T) {
	r := evaluate(t, `id,place,height [m],instrument,E [V/m],frequency [MHz],antennas
a,door,1.5,S,12,900,
b,door,1.5,S,16,1800,
c,door,1.5,S,10,900,
d,yard,1.5,S,3,900,A900
e,yard,1.5,S,4,901,A1800
`)
	door := r.Places[0]
	assert.InDelta(t, 20, *door.FieldVPerM, 1e-12, "root-sum-square of 12 and 16")
	assert.InEpsilon(t, 144/1600.+256/3600., float64(door.ExposureRatio), rounding)
	assert.Equal(t, []string{"a", "b"}, door.Counted)
	assert.Equal(t, []string{"c"}, door.NotCounted, "the same band again")
	assert.InDelta(t, 5, *r.Places[1].FieldVPerM, 1e-12, "different antennas are different signals")
	require.NotNil(t, door.PredictedRatio)

	// A wide reading counts by what narrow ones in its band leave: 33 V/m after
	// calibration, 900 and 1800 MHz hold 20, sqrt(33^2 - 20^2) is the rest.
	wide := evaluate(t, `id,place,height [m],instrument,E [V/m],frequency [MHz]
a,door,1.5,S,12,900
b,door,1.5,S,16,1800
w,door,1.5,B,30,
`).Places[0]
	assert.InDelta(t, 33, *wide.FieldVPerM, 1e-9)
	assert.InEpsilon(t, 144/1600.+256/3600.+(33*33-400)/1600., float64(wide.ExposureRatio), rounding)
	assert.Equal(t, []string{"a", "b", "rest of w"}, wide.Counted)
	assert.Equal(t, []string{"w"}, wide.NotCounted)
}

func TestWhatAnInstrumentCannotRead(t *testing.T) {
	r := evaluate(t, `id,place,height [m],instrument,E [V/m],frequency [MHz]
low,door,1.5,B,0.1,900
over,door,1.5,S,51,1800
range,door,1.5,S,5,400
due,door,1.5,OLD,5,900
old above,door,1.5,OLD,45,900
`)
	low := r.Readings[0]
	assert.True(t, low.BelowFloor)
	assert.Equal(t, 0.5, *low.FieldVPerM, "the floor counts")
	assert.Equal(t, exposure.Within, low.Verdict)
	for i, want := range []string{"beyond what S can read", "outside the range of S", "was due on 2022-06-01"} {
		x := r.Readings[i+1]
		assert.Equal(t, exposure.NotAssessed, x.Verdict, x.ID)
		assert.Contains(t, x.Reason, want)
	}
	assert.Equal(t, exposure.Above, r.Readings[4].Verdict, "a lapsed calibration never makes above into within")
}

func TestShapedReading(t *testing.T) {
	r := evaluate(t, "id,place,height [m],instrument,share of limit [%],share of\na,door,1.5,B,10,public\nb,yard,1.5,B,10,worker\n")
	a := r.Readings[0]
	assert.Nil(t, a.FieldVPerM)
	assert.InEpsilon(t, 0.1*1.1*1.1, float64(a.ExposureRatio), rounding, "a factor of field goes into a share of power squared")
	assert.Equal(t, "worker", r.Readings[1].Class)
	assert.Equal(t, exposure.NotAssessed, r.Places[1].Verdict, "a share of another class's limit")
}

func TestDecisionRules(t *testing.T) {
	readings := "id,place,height [m],instrument,E [V/m],frequency [MHz]\na,door,1.5,S,20,900\nb,door,1.5,S,38,900\nc,door,1.5,S,41,900\n"
	simple := evaluate(t, readings)
	guarded := evaluate(t, readings, "site.csv", plainSite["site.csv"]+"decision rule,guarded\n")
	for i, want := range [][2]exposure.Verdict{{exposure.Within, exposure.Within}, {exposure.Within, exposure.WithinGuardBand}, {exposure.Above, exposure.Above}} {
		assert.Equal(t, want[0], simple.Readings[i].Verdict)
		assert.Equal(t, want[1], guarded.Readings[i].Verdict)
		assert.Equal(t, "guarded", guarded.Readings[i].Rule)
	}
	// 0.5 dB standard, 20 log10(40/38) = 0.4455 dB away: 1 - Phi(0.891) = 0.1865.
	assert.InDelta(t, 0.1865, *simple.Readings[1].ProbabilityAbove, 5e-4)
	bare := evaluate(t, readings, "site.csv", plainSite["site.csv"]+"decision rule,guarded\n", "uncertainty.csv", "instrument,component,value,unit\nB,x,1,dB\n")
	assert.Equal(t, exposure.NotAssessed, bare.Readings[0].Verdict, "guarded needs an uncertainty")
	assert.Nil(t, bare.Readings[0].ExpandedDB)
}

func TestNoLevelIsNotAssessed(t *testing.T) {
	r := evaluate(t, "id,x [m],y [m],z [m],instrument,E [V/m],frequency [MHz],from [MHz],to [MHz]\na,1,2,3,B,5,900,,\nb,1,2,3,S,5,,1000,3000\n",
		"limits.csv", "class,quantity,from [MHz],to [MHz],coefficient,unit,average [min],source\npublic,E,1000,1500,40,V/m,6,test\n")
	assert.Equal(t, exposure.NotAssessed, r.Readings[0].Verdict)
	assert.Contains(t, r.Readings[0].Reason, "no level of thermal, whole body, mean at 900 MHz")
	assert.Equal(t, exposure.NotAssessed, r.Readings[1].Verdict, "a transmitter lies in the part without a level")
	assert.Contains(t, r.Readings[1].Remarks[len(r.Readings[1].Remarks)-1], "no class is stated")
}

func TestScaledReading(t *testing.T) {
	r := evaluate(t, "id,place,height [m],instrument,E [V/m],frequency [MHz],scale to maximum\na,door,1.5,S,2,900,power share: share 25 %\n")
	x := r.Readings[0]
	assert.InDelta(t, 4, *x.FieldVPerM, 1e-12)
	assert.InDelta(t, 2, *x.MeasuredVPerM, 1e-12)
	assert.InEpsilon(t, 16/1600., float64(x.ExposureRatio), rounding)
	assert.Equal(t, "power share: sqrt(1/share, share 0.25) = 2 (6.02 dB)", x.ScaleFormula)
}

func TestSeriesOfTheTable(t *testing.T) {
	var b strings.Builder
	b.WriteString("id,place,height [m],instrument,E [V/m],frequency [MHz],series,time\n")
	for i := range 20 {
		e := 5
		if i >= 8 && i < 14 {
			e = 20
		}
		fmt.Fprintf(&b, "s%d,door,1.5,S,%d,900,log,2026-05-01T10:%02d:00+02:00\n", i, e, i)
	}
	r := evaluate(t, b.String())
	assert.Empty(t, r.Readings)
	s := r.Series[0]
	assert.InDelta(t, 20, *s.FieldVPerM, 1e-12, "six of one minute")
	assert.Equal(t, 360.0, s.AveragingS)
	assert.Equal(t, "2026-05-01T10:13:00+02:00", s.LargestEnd)
	assert.InEpsilon(t, 400/1600., float64(s.ExposureRatio), rounding)
	assert.Equal(t, 20, s.Samples)
	assert.Equal(t, 10, s.Daily[len(s.Daily)-1].Hour)
	assert.Equal(t, []string{"log"}, r.Places[0].Counted)
}

// Each level is compared with the mean over its own averaging time.
func TestSeriesUnderTwoAveragingTimes(t *testing.T) {
	var b strings.Builder
	b.WriteString("id,place,height [m],instrument,E [V/m],frequency [MHz],series,time\n")
	for i := range 40 {
		e := 6
		if i >= 20 && i < 26 {
			e = 24
		}
		fmt.Fprintf(&b, "s%d,door,1.5,S,%d,900,log,2026-05-01T10:%02d:00Z\n", i, e, i)
	}
	r := evaluate(t, b.String(), "limits.csv", "class,quantity,from [MHz],to [MHz],coefficient,unit,average [min],region,source\npublic,E,30,6000,40,V/m,30,whole body,test\npublic,E,30,6000,60,V/m,6,local,test\n")
	whole := (6*576 + 24*36) / 30.
	s := r.Series[0]
	assert.InEpsilon(t, max(whole/1600, 576/3600.), float64(s.ExposureRatio), rounding)
	assert.Equal(t, "thermal, local, mean", s.GovernedBy)
	assert.Equal(t, 360.0, s.AveragingS)
	assert.Contains(t, s.Remarks, fmt.Sprintf("%.4g V/m is the largest mean over 30 min", math.Sqrt(whole)))
}

// Every answer is JSON without nulls where a list is meant.
func TestResultIsJSON(t *testing.T) {
	b, err := json.Marshal(evaluate(t, "id,place,height [m],instrument,E [V/m],frequency [MHz]\na,door,1.5,S,2,900\n"))
	require.NoError(t, err)
	for _, key := range []string{`"groups":[]`, `"series":[]`, `"unexplained":[]`, `"id":"a"`, `"field_v_per_m":2`, `"expanded_uncertainty_db":`, `"exposure_ratio":`, `"verdict":"within"`, `"predicted_ratio":`, `"difference_db":`} {
		assert.Contains(t, string(b), key)
	}
}

// The demo's inventory has a row whose carriers were taken from an old drawing;
// two readings contradict it, and the row is named with what is wrong with it.
func TestDemoReasonIsFound(t *testing.T) {
	site, measured, err := sitefile.LoadSurveyFS(demo.FS, sitefile.Options{})
	require.NoError(t, err)
	model, err := exposure.New(site, exposure.Options{})
	require.NoError(t, err)
	r, err := survey.Evaluate(context.Background(), model, measured)
	require.NoError(t, err)
	require.Len(t, r.Unexplained, 2)
	for i, id := range []string{"R11", "R13"} {
		f := r.Unexplained[i]
		assert.Equal(t, id, f.ID)
		assert.Greater(t, f.DifferenceDB, f.CombinedDB)
		require.NotEmpty(t, f.Suspects)
		assert.Equal(t, "TV2-1800", f.Suspects[0].Antenna)
		assert.InDelta(t, 3, float64(f.Suspects[0].Factor), 0.2, "one carrier where three are on air")
		assert.Contains(t, strings.Join(f.Suspects[0].Why, "; "), "its carriers: 1 where TV1-1800, TV3-1800 of the same service have 3: 4.8 dB more with theirs")
	}
	assert.Len(t, measured.Instruments, 3)
	assert.Len(t, r.Groups, 2)
	assert.Len(t, r.Groups[0].Heights, 3)
	assert.Len(t, r.Series, 1)
	assert.Equal(t, []string{"balcony log"}, r.Agreement.BelowByMore, "the log was not taken at full load")
	assert.Equal(t, r.Agreement.Compared-3, r.Agreement.Explained, "all else agrees")

	// With the row corrected nothing is left unexplained.
	for i := range site.Sources {
		if site.Sources[i].ID == "TV2-1800" {
			site.Sources[i].Power.Carriers = 3
		}
	}
	model, err = exposure.New(site, exposure.Options{})
	require.NoError(t, err)
	r, err = survey.Evaluate(context.Background(), model, measured)
	require.NoError(t, err)
	assert.Empty(t, r.Unexplained)
	assert.InDelta(t, 0, *r.Agreement.BiasDB, 1, "the noise that was put on the invented readings")
}

func TestPlanListsPlacesByExpectation(t *testing.T) {
	site, measured, err := sitefile.LoadSurveyFS(demo.FS, sitefile.Options{})
	require.NoError(t, err)
	model, err := exposure.New(site, exposure.Options{})
	require.NoError(t, err)
	planned, err := survey.Plan(context.Background(), model, measured)
	require.NoError(t, err)
	require.NotEmpty(t, planned)
	ids := map[string]bool{}
	for _, p := range planned {
		assert.False(t, ids[p.ID], p.ID)
		ids[p.ID] = true
		assert.Positive(t, p.ExpectedVPerM)
		assert.NotEqual(t, "balcony", p.Group, "in use")
	}
	assert.Equal(t, []float64{1.1, 1.5, 1.7}, []float64{planned[0].HeightM, planned[1].HeightM, planned[2].HeightM})
	assert.GreaterOrEqual(t, planned[0].ExpectedRatio, planned[len(planned)-1].ExpectedRatio)
}
