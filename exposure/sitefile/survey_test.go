package sitefile

import (
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"testing/fstest"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
	"example.org/standclear/exposure/units"
)

var surveySite = map[string]string{
	"site.csv":        "item,value\nname,test site\nlatitude [deg],48\nlongitude [deg],11\nsurvey date,2026-05-01\n",
	"antennas.csv":    "id,x [m],y [m],z [m],pattern,gain [dBi],frequency [MHz],power [W],data from,data date\nA1,0,0,10,isotropic,0,900,100,me,2026-01-01\n",
	"places.csv":      "id,x [m],y [m],z [m],class\ndoor,10,0,8.5,public\n",
	"limits.csv":      "class,quantity,from [MHz],to [MHz],coefficient,unit,average [min],source\npublic,E,30,6000,40,V/m,6,test\n",
	"instruments.csv": "id,kind,from [MHz],to [MHz],antenna factor [dB/m]\nB,broadband,30,6000,\nS,selective,500,3000,28\n",
}

func surveyFS(files ...string) fstest.MapFS {
	fsys := fstest.MapFS{}
	for name, text := range surveySite {
		fsys[name] = &fstest.MapFile{Data: []byte(text)}
	}
	for i := 0; i < len(files); i += 2 {
		fsys[files[i]] = &fstest.MapFile{Data: []byte(files[i+1])}
	}
	return fsys
}

func TestFaultsOfASurvey(t *testing.T) {
	for _, c := range []struct{ name, table, text, want string }{
		{"place", "readings.csv", "id,place,instrument,E [V/m]\na,dor,B,1\n", `readings.csv:2: place: the places table has no "dor"; did you mean "door"?`},
		{"no place", "readings.csv", "id,instrument,E [V/m]\na,B,1\n", "readings.csv:2: place: the cell is blank; write a place, or x, y and z"},
		{"both", "readings.csv", "id,place,x [m],y [m],z [m],instrument,E [V/m]\na,door,1,2,3,B,1\n", "both a place and a position"},
		{"z", "readings.csv", "id,x [m],y [m],instrument,E [V/m]\na,1,2,B,1\n", "readings.csv:2: z [m]: the cell is blank"},
		{"instrument", "readings.csv", "id,place,instrument,E [V/m]\na,door,X,1\n", `readings.csv:2: instrument: the instruments table has no "X"`},
		{"two figures", "readings.csv", "id,place,instrument,E [V/m],H [A/m]\na,door,B,1,1\n", "E and H are both given"},
		{"selective", "readings.csv", "id,place,instrument,E [V/m]\na,door,S,1\n", "a reading of the selective instrument \"S\" needs it"},
		{"antenna factor", "readings.csv", "id,place,instrument,port level [dBm]\na,door,B,-20\n", `the instrument "B" has no antenna factor`},
		{"share", "readings.csv", "id,place,instrument,share of limit [%]\na,door,B,20\n", "a share of the limit is of one class"},
		{"class", "readings.csv", "id,place,instrument,share of limit [%],share of\na,door,B,20,publik\n", `did you mean "public"?`},
		{"antennas", "readings.csv", "id,place,instrument,E [V/m],antennas\na,door,B,20,\"A1, A2\"\n", `the antennas table has no "A2"`},
		{"scale", "readings.csv", "id,place,instrument,E [V/m],scale to maximum\na,door,B,20,double\n", "names no method"},
		{"axis alone", "readings.csv", "id,place,instrument,E [V/m],axis\na,door,B,20,x\n", "needs the group whose three axes add up"},
		{"axis missing", "readings.csv", "id,place,instrument,E [V/m],axis,group\na,door,B,20,x,g\nb,door,B,20,z,g\n", "readings.csv:2: axis: of the three axes of this spot these are missing: y"},
		{"axis twice", "readings.csv", "id,place,instrument,E [V/m],axis,group\na,door,B,20,x,g\nb,door,B,20,x,g\n", "the axis x of this spot is in row 2 already"},
		{"series time", "readings.csv", "id,place,instrument,E [V/m],series\na,door,B,20,log\n", `the series "log" needs it`},
		{"series place", "readings.csv", "id,place,height [m],instrument,E [V/m],series,time\na,door,1,B,20,log,2026-01-01T00:00:00Z\nb,door,2,B,20,log,2026-01-01T00:00:01Z\n", "has another height"},
		{"no log", "readings.csv", "id,place,instrument,series\na,door,B,day.csv\n", `there is no file "day.csv"`},
		{"outside", "readings.csv", "id,place,instrument,series\na,door,B,../day.csv\n", `there is no file "../day.csv"`},
		{"band", "readings.csv", "id,place,instrument,E [V/m],from [MHz]\na,door,B,1,900\n", "the other end of the band is given"},
		{"latitude", "readings.csv", "id,latitude [deg],longitude [deg],z [m],instrument,E [V/m]\na,49,11,2,B,1\n", "the position lies 111 km from the site"},
		{"range", "instruments.csv", "id,from [MHz],to [MHz]\nB,30,3\n", "the range ends where it begins or before"},
		{"factor", "instruments.csv", "id,from [MHz],to [MHz],calibration factor\nB,30,3000,-1\n", "is not above 0"},
		{"factor file", "instruments.csv", "id,from [MHz],to [MHz],calibration factor\nB,30,3000,probe.csv\n", "neither a number nor a file"},
		{"floor", "instruments.csv", "id,from [MHz],to [MHz],floor [V/m],overload [V/m]\nB,30,3000,5,5\n", "the overload is not above the floor"},
		{"unknown", "uncertainty.csv", "instrument,component,value,unit\nX,a,1,dB\n", `the instruments table has no "X"`},
		{"k and divisor", "uncertainty.csv", "instrument,component,value,unit,divisor,coverage factor\nB,a,1,dB,2,2\n", "keep one"},
		{"k of a box", "uncertainty.csv", "instrument,component,value,unit,distribution,coverage factor\nB,a,1,dB,rectangular,2\n", "belongs to a normal distribution"},
		{"mapping", "columns.csv", "table,from,to,unit\nreadings,Level,E,V/n\n", `"V/n" is not a unit that can stand here`},
		{"zone", "columns.csv", "table,from,to,unit\nreadings,Zeit,time,CEST\n", `"CEST" is not a zone of time`},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, _, err := LoadSurveyFS(surveyFS(c.table, c.text), Options{})
			require.Error(t, err)
			assert.Contains(t, err.Error(), c.want)
			var faults Faults
			require.ErrorAs(t, err, &faults)
			assert.Positive(t, faults[0].Row)
		})
	}
}

func TestWarningsOfASurvey(t *testing.T) {
	site, s, err := LoadSurveyFS(surveyFS(
		"readings.csv", "id,place,instrument,E [V/m],frequency [MHz]\na,door,S,1,400\nb,door,OLD,2,\nc,door,B,,\n",
		"instruments.csv", "id,kind,from [MHz],to [MHz],calibration due\nB,broadband,30,6000,\nS,selective,500,3000,2027-01-01\nOLD,broadband,30,6000,2026-04-30\n",
	), Options{})
	require.NoError(t, err)
	require.Len(t, s.Readings, 2, "a row without a figure is left out, and said")
	var all []string
	for _, w := range site.Inputs.Warnings {
		all = append(all, w.Place+": "+w.Message)
	}
	text := strings.Join(all, "\n")
	for _, want := range []string{
		`readings.csv:2: the reading "a" lies outside the range of "S"`,
		`instruments.csv:4: the calibration of "OLD" was due on 2026-04-30`,
		`readings.csv:4: the row "c" has no figure and is left out`,
		`the uncertainty table has no component of "S"`,
	} {
		assert.Contains(t, text, want)
	}
}

// Position by latitude and longitude: a thousandth of a degree of latitude is
// 111.2 m at 48 deg north (WGS 84, meridian arc; 0.1 m).
func TestReadingByLatitude(t *testing.T) {
	_, s, err := LoadSurveyFS(surveyFS("readings.csv", "id,latitude [deg],longitude [deg],z [m],instrument,E [V/m]\na,48.001,11,2,B,1\n"), Options{})
	require.NoError(t, err)
	assert.InDelta(t, 111.2, s.Readings[0].At.At.Y, 0.1)
	assert.InDelta(t, 0, s.Readings[0].At.At.X, 1e-6)
	assert.Equal(t, 2.0, s.Readings[0].At.At.Z)
}

func TestCalibrationFile(t *testing.T) {
	_, s, err := LoadSurveyFS(surveyFS("instruments.csv", "id,from [MHz],to [MHz],calibration factor\nB,30,6000,probe.csv\n",
		"probe.csv", "# certificate 7\nfrequency [GHz];factor\n0,1;1,02\n1;1,10\n"), Options{})
	require.NoError(t, err)
	assert.Equal(t, []survey.CalibrationPoint{{FrequencyHz: 1e8, Factor: 1.02}, {FrequencyHz: 1e9, Factor: 1.1}}, s.Instruments[0].Calibration.Points)
	for text, want := range map[string]string{
		"frequency,factor\n1,1\n2,1\n":       "names no unit of frequency",
		"frequency [MHz],x\n1,1\n2,1\n":      "the columns are not",
		"frequency [MHz],factor\n2,1\n1,1\n": "probe.csv:3: frequency [MHz]: the frequencies do not rise",
		"frequency [MHz],factor\n1,a\n2,0\n": "is not a number",
		"frequency [MHz],factor\n1,1\n":      "two rows or more",
	} {
		_, faults := readCalibration("probe.csv", []byte(text), false)
		require.NotEmpty(t, faults, text)
		assert.Contains(t, faults.Error(), want)
	}
}

// An export as an instrument writes it: lines before the header, decimal commas,
// local time with its zone in the columns table, units in a row of their own.
func TestExportIsReadAsItIs(t *testing.T) {
	export := "Serial;000123\nFirmware 2.0 (\"stable\")\n\nNr;Ort;Zeit;Level;Probe;Batt\n;;;V/m;;%\n1;door;05.05.2026 10:00:00;1,5;B;77\n2;door;05.05.2026 10:06:00;2,25;B;76\n"
	columns := "table,from,to,unit\nreadings,Nr,id,\nreadings,Ort,place,\nreadings,Zeit,time,+02:00\nreadings,Level,E,\nreadings,Probe,instrument,\n"
	site, s, err := LoadSurveyFS(surveyFS("readings.csv", export, "columns.csv", columns), Options{UnitsRow: true})
	require.NoError(t, err)
	require.Len(t, s.Readings, 2)
	assert.Equal(t, 2.25, s.Readings[1].Value)
	assert.Equal(t, "2026-05-05T10:06:00+02:00", s.Readings[1].Time)
	assert.Equal(t, 7, s.Readings[1].Row.Row, "the line of the file")
	assert.Equal(t, "readings.csv", site.Inputs.Warnings[0].Place)
	assert.Contains(t, site.Inputs.Warnings[0].Message, "2 lines stand before the header")

	_, _, err = LoadSurveyFS(surveyFS("readings.csv", export, "columns.csv", columns), Options{})
	assert.ErrorContains(t, err, "names no unit", "without --units-row the units are missing, and said")
}

func each(t testing.TB, text string, o Options, columns map[string]mapping) (times []string, values []float64, log *logFile, err error) {
	log = &logFile{fsys: fstest.MapFS{"day.csv": &fstest.MapFile{Data: []byte(text)}}, name: "day.csv", mapped: columns, unitsRow: o.UnitsRow, windows1252: o.Windows1252}
	err = log.Each(context.Background(), func(ns int64, v float64) error {
		times = append(times, time.Unix(0, ns).UTC().Format(time.RFC3339Nano))
		values = append(values, v)
		return nil
	})
	return times, values, log, err
}

func TestLogIsReadAsItIs(t *testing.T) {
	times, values, log, err := each(t, "\ufeffProbe 7, serial 12\r\n# remark\r\nIndex,Date,Clock,E [mV/m],Batt\r\n1,2026-03-31,10:05:00.250,\"1500\",9\r\n2,2026/04/01,00:00:00,2e3,9\r\n3,2026-04-01,00:00:01,,9\r\n",
		Options{}, map[string]mapping{"date": {to: "time"}, "clock": {to: "time", unit: "UTC+2"}})
	require.NoError(t, err)
	assert.Equal(t, []string{"2026-03-31T08:05:00.25Z", "2026-03-31T22:00:00Z"}, times)
	assert.Equal(t, []float64{1.5, 2}, values)
	assert.Equal(t, []string{"1 rows of day.csv have no figure and were left out"}, log.Remarks())
	assert.Len(t, log.Files()[0].SHA256, 64)

	_, values, _, err = each(t, "time;port level\n;dBm\n2026-03-31T10:05:00Z;-20,5\n", Options{UnitsRow: true}, nil)
	require.NoError(t, err)
	assert.InEpsilon(t, math.Pow(10, -2.05)*1e-3, values[0], 1e-12, "dBm to W")
}

func TestLogIsRefusedWithAReason(t *testing.T) {
	for text, want := range map[string]string{
		"a,b\n1,2\n":                                     "no header row was found",
		"time,E\n2026-03-31T10:05:00Z,1\n":               "names no unit",
		"time,E [V]\n2026-03-31T10:05:00Z,1\n":           "[V] is not a unit",
		"time,E [V/m],H [A/m]\n":                         "map the one that counts",
		"time [CET],E [V/m]\n":                           "is not a zone of time",
		"time,E [V/m]\n2026-03-31 10:05:00,1\n":          `day.csv:2: time: "2026-03-31 10:05:00" has no zone`,
		"time [+01:00],E [V/m]\n03/04/2026 10:05:00,1\n": "is not a time",
		"time,E [V/m]\n2026-02-30T10:05:00Z,1\n":         "is not a time",
		"time,E [V/m]\n2026-03-31T10:05:00Z,1o\n":        `day.csv:2: E [V/m]: "1o" is not a number`,
		"time,E [V/m]\n2026-03-31T10:05:00Z,NaN\n":       "is not a number",
		"time,E [V/m]\n2026-03-31T10:05:00Z,-1\n":        "cannot be the level of a field",
		"PK\x03\x04": "a workbook or another zip file",
		"time,E [V/m]\n" + strings.Repeat("x", lineBuffer+9): "the line is too long",
	} {
		_, _, _, err := each(t, text, Options{}, nil)
		var faults Faults
		require.ErrorAs(t, err, &faults, "%.40q", text)
		assert.Contains(t, faults.Error(), want)
	}
}

// The fast readers agree with the strict ones to the last bit.
func TestFastNumberAndClock(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching(`-?[0-9]{0,9}[.,]?[0-9]{0,9}`).Draw(t, "number")
		comma := rapid.Bool().Draw(t, "comma")
		if v, ok := fastNumber([]byte(text), comma); ok {
			want, err := units.ParseNumber(text, comma)
			require.NoError(t, err, text)
			assert.Equal(t, math.Float64bits(want), math.Float64bits(v), text)
		}
		when := time.Unix(rapid.Int64Range(-2e9, 7e9).Draw(t, "s"), rapid.Int64Range(0, 999999999).Draw(t, "ns"))
		zone := time.FixedZone("", 60*rapid.IntRange(-14*60, 14*60).Draw(t, "zone"))
		var c clock
		for _, layout := range []string{time.RFC3339, time.RFC3339Nano, "2006-01-02 15:04:05Z07:00"} {
			stamp := when.In(zone).Format(layout)
			want, err := time.Parse(layout, stamp)
			require.NoError(t, err)
			ns, problem := c.parse([]byte(stamp))
			require.Empty(t, problem, stamp)
			assert.Equal(t, want.UnixNano(), ns, stamp)
		}
	})
}

func TestZones(t *testing.T) {
	for text, want := range map[string]int{"Z": 0, "UTC": 0, "+05:00": 18000, "-0330": -12600, "utc+5": 18000, "GMT-1": -3600, "+01": 3600} {
		z, ok := parseZone(text)
		assert.True(t, ok, text)
		assert.Equal(t, want, z.offsetS, text)
	}
	for _, text := range []string{"", "CET", "Europe/Berlin", "+25:00", "+1:7", "5", "+"} {
		_, ok := parseZone(text)
		assert.False(t, ok, text)
	}
}

// A log named by a reading, from folder to verdict.
func TestLogOfAReading(t *testing.T) {
	var b strings.Builder
	b.WriteString("time,E [V/m]\n")
	for i := range 3600 {
		e := 5.0
		if i >= 1000 && i < 1360 {
			e = 20
		}
		fmt.Fprintf(&b, "%s,%.4f\n", time.Unix(1.8e9+int64(i), 0).UTC().Format(time.RFC3339), e)
	}
	site, s, err := LoadSurveyFS(surveyFS("readings.csv", "id,place,instrument,series\nL,door,B,day.csv\n", "day.csv", b.String()), Options{})
	require.NoError(t, err)
	model, err := exposure.New(site, exposure.Options{})
	require.NoError(t, err)
	r, err := survey.Evaluate(context.Background(), model, s)
	require.NoError(t, err)
	assert.InDelta(t, 20, *r.Series[0].FieldVPerM, 1e-9)
	assert.Equal(t, "day.csv", r.Files[0].Name)

	_, s, err = LoadSurveyFS(surveyFS("readings.csv", "id,place,instrument,series\nL,door,B,day.csv\n", "day.csv", b.String()+"2030-01-01T00:00:00Z,x\n"), Options{})
	require.NoError(t, err)
	_, err = survey.Evaluate(context.Background(), model, s)
	assert.ErrorContains(t, err, `day.csv:3602: E [V/m]: "x" is not a number`)
}

// FuzzLog: no panic, and every fault has a place.
func FuzzLog(f *testing.F) {
	f.Add("time,E [V/m]\n2026-03-31T10:05:00Z,1\n", false)
	f.Add("Nr;time [+01:00];S [mW/m2]\n1;31.03.2026 10:05:00;1,5\n", false)
	f.Add("x\ttime\tport level\n\t\tdBm\n1\t2026-03-31 10:05:00.5-03:30\t-20\n", true)
	f.Fuzz(func(t *testing.T, text string, row bool) {
		_, values, _, err := each(t, text, Options{UnitsRow: row}, nil)
		var faults Faults
		if err != nil {
			require.ErrorAs(t, err, &faults)
			for _, one := range faults {
				assert.Equal(t, "day.csv", one.File)
				assert.NotEmpty(t, one.Message)
			}
		}
		for _, v := range values {
			assert.False(t, math.IsNaN(v) || math.IsInf(v, 0) || v < 0)
		}
		out, lead := exportLead([]byte(text), map[string]bool{"time": true, "e": true})
		assert.Equal(t, len(text)+2*lead, len(out))
	})
}

// The sheet to fill in holds the whole site and reads back as it is: without a
// figure a row is left out, with one it counts.
func TestSheetReadsBack(t *testing.T) {
	dir := t.TempDir()
	for name, text := range surveySite {
		require.NoError(t, os.WriteFile(filepath.Join(dir, name), []byte(text), 0o600))
	}
	require.NoError(t, os.WriteFile(filepath.Join(dir, "readings.csv"), []byte("id,place,height [cm],instrument,frequency [GHz],E [mV/m],note\nold,door,150,S,0.9,2500,taken before\n"), 0o600))
	planned := []survey.Planned{
		{ID: "P1", Place: "door", HeightM: 1.1, Group: "door", Instrument: "B", ExpectedVPerM: 5.4772, ExpectedRatio: 0.01875, Settings: "rms"},
		{ID: "P2", Place: "door", HeightM: 1.5, Group: "door", Instrument: "B", ExpectedVPerM: 5, ExpectedRatio: 0.02, Settings: "rms"},
	}
	name := filepath.Join(dir, "sheet.xlsx")
	file, err := os.Create(name)
	require.NoError(t, err)
	require.NoError(t, WriteSheet(file, dir, Options{}, planned))
	require.NoError(t, file.Close())
	site, s, err := LoadSurvey(name, Options{})
	require.NoError(t, err)
	require.Len(t, s.Readings, 1)
	assert.InDelta(t, 2.5, s.Readings[0].Value, 1e-12)
	assert.InDelta(t, 0.9e9, s.Readings[0].FrequencyHz, 1e-3)
	assert.InDelta(t, 1.5, s.Readings[0].HeightM, 1e-12)
	assert.Equal(t, "taken before", s.Readings[0].Note)
	said := 0
	for _, w := range site.Inputs.Warnings {
		if strings.Contains(w.Message, "has no figure and is left out") {
			said++
		}
	}
	assert.Equal(t, 2, said)
	assert.Len(t, site.Sources, 1)
}

// BenchmarkLog reads a log of a million rows from memory: bytes per second and
// rows per second tell what a day-long log takes.
func BenchmarkLog(b *testing.B) {
	var text strings.Builder
	text.WriteString("time,E [V/m]\n")
	const rows = 1_000_000
	for i := range rows {
		fmt.Fprintf(&text, "%s,%.4f\n", time.Unix(1.8e9+int64(i), 0).UTC().Format(time.RFC3339), 2+float64(i%1000)/1000)
	}
	log := &logFile{fsys: fstest.MapFS{"day.csv": &fstest.MapFile{Data: []byte(text.String())}}, name: "day.csv"}
	b.SetBytes(int64(text.Len()))
	b.ReportAllocs()
	for b.Loop() {
		run := survey.NewRunning(360, 0)
		require.NoError(b, log.Each(context.Background(), func(ns int64, v float64) error {
			run.Add(ns, v*v)
			return nil
		}))
		if run.Mean().Samples != rows {
			b.Fatal("rows are missing")
		}
	}
	b.ReportMetric(float64(rows)*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
}
