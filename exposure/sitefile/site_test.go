package sitefile

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"github.com/wroge/wgs84"
	"pgregory.net/rapid"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
	"example.org/standclear/limits"
)

const degree = math.Pi / 180

// ulps is the relative slack for one conversion of units: a few roundings.
const ulps = 1e-15

func TestSmallSite(t *testing.T) {
	s := mustLoad(t, small())
	assert.Equal(t, "Mill Lane", s.About.Name)
	assert.True(t, s.About.HasPosition)
	assert.InDelta(t, 49.5, s.About.LatitudeDeg, 49.5*ulps)
	require.Len(t, s.Sources, 2)
	a := s.Sources[0]
	assert.Equal(t, "A1", a.ID)
	assert.Equal(t, "A1", a.Transmitter, "a row is its own transmitter unless it says otherwise")
	assert.Equal(t, exposure.On, a.State)
	assert.Equal(t, exposure.Point{X: 10, Y: 5, Z: 6}, a.Position)
	assert.InDelta(t, 120*degree, a.Pose.AzimuthRad, 4*ulps)
	assert.Equal(t, 900e6, a.FrequencyHz)
	assert.Equal(t, 40.0, a.Power.TransmitterW)
	assert.InDelta(t, math.Pow(10, -0.1), a.Power.Loss, ulps)
	assert.Equal(t, 1.0, a.Power.Duty)
	assert.Equal(t, "40", a.Row.Cell("power"))
	assert.Equal(t, 2, a.Row.Row)
	assert.Equal(t, []string{"public"}, s.Limits.Classes())
	assert.Equal(t, 2.0, s.Surfaces[0].To, "a body is 2 m unless the table says otherwise")
	var names []string
	for _, f := range s.Inputs.Files {
		names = append(names, f.Name)
		assert.Len(t, f.SHA256, 64)
	}
	assert.Equal(t, []string{"site.csv", "antennas.csv", "surfaces.csv", "places.csv", "limits.csv"}, names)
	assert.Equal(t, []string{"limits.csv: nobody has confirmed this transcription of the limits"}, warningLines(s))
}

// The hash is that of the bytes: FIPS 180-2, B.1, SHA-256 of "abc".
func TestHashOfAFile(t *testing.T) {
	l := newLoader(nil, Options{})
	l.record("abc", []byte("abc"))
	assert.Equal(t, "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad", l.files[0].SHA256)
	assert.Equal(t, int64(3), l.files[0].Bytes)
}

func TestHousing(t *testing.T) {
	s := mustLoad(t, with("antennas.csv", "id,housing,operator,operator reference,x [m],y [m],z [m],azimuth [deg],tilt [deg],roll [deg],pattern,frequency [MHz],power [W]\n"+
		"A1,P,,,,,6,,,,isotropic,900,1\n"+
		"A2,P,Op,R-1,10,5,6,30,2,1,isotropic,1800,1\n"+
		"A3,P,,R-3,,,6.5,,,,isotropic,1800,1\n"+
		"B1,,Other,,1,2,3,0,,,isotropic,900,1\n"))
	for i := range 3 {
		a := s.Sources[i]
		assert.Equal(t, "Op", a.Operator)
		assert.Equal(t, 10.0, a.Position.X)
		assert.Equal(t, 5.0, a.Position.Y)
		assert.Equal(t, s.Sources[1].Pose, a.Pose, a.ID)
	}
	assert.Equal(t, "R-1", s.Sources[0].OperatorReference)
	assert.Equal(t, "R-3", s.Sources[2].OperatorReference)
	assert.Equal(t, 6.5, s.Sources[2].Position.Z, "rows of one housing may stand at different heights")
	assert.Equal(t, antenna.Pose{}, s.Sources[3].Pose)
}

// A blank z needs one height in the housing.
func TestHousingWithSeveralHeights(t *testing.T) {
	assert.Equal(t, []string{`antennas.csv:4: z [m]: the cell is blank, and the rows of housing "P" differ in z; write the one of this row`},
		faultLines(t, with("antennas.csv", "id,housing,x [m],y [m],z [m],azimuth [deg],pattern,frequency [MHz],power [W]\n"+
			"A1,P,1,1,6,0,isotropic,900,1\nA2,P,,,7,,isotropic,900,1\nA3,P,,,,,isotropic,900,1\n")))
}

func TestTransmitter(t *testing.T) {
	s := mustLoad(t, with("antennas.csv", "id,transmitter,signal,x [m],y [m],z [m],azimuth [deg],pattern,frequency [MHz],power [W]\n"+
		"A1,T,S,1,1,6,0,isotropic,900,1\nA2,,S,1,1,6,0,isotropic,900,1\nA3,,,1,1,6,0,isotropic,900,1\n"))
	assert.Equal(t, []string{"T", "S", "A3"}, []string{s.Sources[0].Transmitter, s.Sources[1].Transmitter, s.Sources[2].Transmitter})
}

func TestPower(t *testing.T) {
	load := func(pairs ...string) exposure.Source {
		t.Helper()
		return mustLoad(t, antennaRow(append([]string{"pattern", "two-beamwidth", "gain [dBi]", "17.15", "horizontal beamwidth [deg]", "65", "vertical beamwidth [deg]", "7", "length [m]", "2"}, pairs...)...)).Sources[0]
	}
	eirp := func(s exposure.Source) float64 { return s.Power.ThermalW() * float64(s.Gain) }
	gain := math.Pow(10, 1.715)

	a := load("power [W]", "40", "loss [dB]", "3", "carriers", "2", "duty [%]", "75", "power reduction factor", "0.5", "peak factor [dB]", "10")
	// 1e-12: a handful of roundings in powers of ten.
	assert.InEpsilon(t, 40*math.Pow(10, -0.3)*2, a.Power.OnAirW(), 1e-12)
	assert.InEpsilon(t, 40*math.Pow(10, -0.3)*2*0.75*0.5, a.Power.ThermalW(), 1e-12)
	assert.InEpsilon(t, 40*math.Pow(10, -0.3)*2*10, a.Power.PeakW(), 1e-12)
	assert.InEpsilon(t, gain, float64(a.Gain), 1e-12)

	assert.InEpsilon(t, 20, load("power [dBm]", "43.0103", "power [W]", none).Power.TransmitterW, 1e-6, "43.0103 dBm is 20 W to its digits")
	a = load("power [W]", "", "EIRP [W]", "1000", "carriers", "2", "duty", "0.5")
	assert.InEpsilon(t, 1000*2*0.5, eirp(a), 1e-12, "carriers and duty apply to an EIRP")
	// 47 CFR 2.1: ERP is over a half-wave dipole, 2.15 dB.
	assert.InEpsilon(t, 1000*math.Pow(10, 0.215), eirp(load("power [W]", "", "ERP [W]", "1000")), 1e-12)
	assert.InEpsilon(t, gain, float64(load("gain [dBd]", "15", "gain [dBi]", none).Gain), 1e-12)

	a = load("power [W]", "Unknown")
	assert.True(t, a.Power.Unknown)
	assert.Equal(t, 1.0, a.Power.Carriers)
	a = load("power [W]", "", "EIRP [W]", "unknown")
	assert.True(t, a.Power.Unknown)
}

func TestAzimuthReference(t *testing.T) {
	azimuth := func(site, typed string) float64 {
		t.Helper()
		files := antennaRow("azimuth [deg]", typed)
		files["site.csv"] = "item,value\nname,x\n" + site
		return mustLoad(t, files).Sources[0].Pose.AzimuthRad / degree
	}
	// 1e-12 deg: sums of a few angles.
	assert.InDelta(t, 350, azimuth("", "350"), 1e-12)
	assert.InDelta(t, 350, azimuth("", "-10"), 1e-12)
	assert.InDelta(t, 0, azimuth("", "360"), 1e-12)
	assert.InDelta(t, 90, azimuth("grid bearing [deg],30\n", "120"), 1e-12, "true azimuths turn with the grid")
	assert.InDelta(t, 350, azimuth("grid bearing [deg],30\n", "20"), 1e-12)
	assert.InDelta(t, 120, azimuth("grid bearing [deg],30\nazimuth reference,grid\n", "120"), 1e-12)
	assert.InDelta(t, 92.5, azimuth("grid bearing [deg],30\nazimuth reference,magnetic\ndeclination [deg],2.5\n", "120"), 1e-12, "a declination to the east adds")
}

// A position by latitude and longitude is held against another library's WGS 84.
func TestPositionByLatitude(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		lat0, lon0 := rapid.Float64Range(-85, 85).Draw(t, "latitude"), rapid.Float64Range(-179, 179).Draw(t, "longitude")
		dlat, dlon := rapid.Float64Range(-0.01, 0.01).Draw(t, "north"), rapid.Float64Range(-0.01, 0.01).Draw(t, "east")
		l := newLoader(nil, Options{})
		l.about = exposure.About{HasPosition: true, LatitudeDeg: lat0, LongitudeDeg: lon0}
		g := &grid{table: "antennas", file: "antennas.csv"}
		number := func(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }
		g.add(gridRow{number: 1, cells: []string{"latitude [deg]", "longitude [deg]"}})
		g.add(gridRow{number: 2, cells: []string{number(lat0 + dlat), number(lon0 + dlon)}})
		b := l.bind(g)
		got := l.statedXY(&b.records[0])
		if !got.ok {
			t.Fatalf("%v", l.faults)
		}
		toGeocentric := wgs84.LonLat().To(wgs84.XYZ())
		x0, y0, z0 := toGeocentric(lon0, lat0, 0)
		x, y, z := toGeocentric(lon0+dlon, lat0+dlat, 0)
		sp, cp := math.Sincos(lat0 * degree)
		sl, cl := math.Sincos(lon0 * degree)
		dx, dy, dz := x-x0, y-y0, z-z0
		east := -sl*dx + cl*dy
		north := -sp*cl*dx - sp*sl*dy + cp*dz
		// 1e-6 m: two closed formulas over coordinates of 6e6 m.
		if math.Abs(got.v[0]-east) > 1e-6 || math.Abs(got.v[1]-north) > 1e-6 {
			t.Fatalf("(%v, %v) m, want (%v, %v)", got.v[0], got.v[1], east, north)
		}
	})
}

func TestHeightOnASurface(t *testing.T) {
	files := antennaRow("z [m]", "", "on", "roof", "height [ft]", "10")
	files["surfaces.csv"] = strings.Replace(files["surfaces.csv"], ",0,public", ",14,public", 1)
	files["places.csv"] = "id,x [m],y [m],on,to [m],class\ndoor,2,3,roof,2,public\n"
	s := mustLoad(t, files)
	assert.InDelta(t, 14+3.048, s.Sources[0].Position.Z, 1e-12, "10 ft are 3.048 m (NIST SP 811)")
	assert.Equal(t, 14.0, s.Places[0].At.Z)
	assert.Equal(t, "roof", s.Places[0].On)
}

func TestGround(t *testing.T) {
	site := "item,value\nname,x\nground,factor\nground factor,1.6\nground permittivity,15\nground conductivity [mS/m],5\nground z [m],-2\n"
	assert.Equal(t, exposure.Ground{Method: exposure.GroundFactor, Factor: 1.6, Permittivity: 15, Conductivity: 0.005, Z: -2}, mustLoad(t, with("site.csv", site)).Ground)
	s, err := loadFiles(with("site.csv", site), Options{Ground: &exposure.Ground{Method: exposure.GroundFresnel, Z: -3}})
	require.NoError(t, err)
	assert.Equal(t, exposure.Ground{Method: exposure.GroundFresnel, Factor: 1, Permittivity: 15, Conductivity: 0.005, Z: -3}, s.Ground)
	s, err = loadFiles(small(), Options{Ground: &exposure.Ground{Method: exposure.GroundFactor, Factor: 2}, OnlyOn: true})
	require.NoError(t, err)
	assert.Equal(t, 2.0, s.Ground.Factor)
	assert.True(t, s.OnlyOn)
	_, err = loadFiles(small(), Options{Ground: &exposure.Ground{Method: exposure.GroundFresnel}})
	require.ErrorContains(t, err, `ground permittivity: the ground is "fresnel", so this is needed`)
}

func TestLimitsAboutAndSpots(t *testing.T) {
	for name, comments := range map[string]string{
		"typed":    "# title: Levels, general\n# Issued by: Office\n#checked by: Me\n# checked on: 2026-03-31\n# spot: public, S, 900 MHz, 10.0 W/m2\n# nothing to see\n",
		"saved":    "\"# title: Levels, general\",,,,,,,\n# Issued by: Office,,,,,,,\n#checked by: Me,,,,,,,\n# checked on: 2026-03-31,,,,,,,\n\"# spot: public, S, 900 MHz, 10.0 W/m2\",,,,,,,\n",
		"in cells": "# title: Levels, general\n# Issued by: Office\n#checked by: Me\n# checked on: 2026-03-31\n# spot: public,S,900 MHz,10.0 W/m2,,,,\n",
	} {
		s := mustLoad(t, with("limits.csv", comments+small()["limits.csv"]))
		assert.Equal(t, limits.About{Title: "Levels, general", IssuedBy: "Office", CheckedBy: "Me", CheckedOn: "2026-03-31"}, s.Limits.About, name)
		require.Len(t, s.Limits.Spots, 1, name)
		spot := s.Limits.Spots[0]
		assert.Equal(t, 900e6, spot.FrequencyHz)
		assert.Equal(t, 10.0, spot.Level)
		assert.InDelta(t, 0.05, spot.HalfDigit, 1e-12, "half of the last digit printed")
		assert.True(t, s.Limits.Confirmed(), name)
		assert.Empty(t, s.Inputs.Warnings, name)
	}
	s := mustLoad(t, with("limits.csv", "# chekced by: Me\n"+small()["limits.csv"]))
	assert.Contains(t, warningLines(s), `limits.csv:1: "# chekced by" is read as a remark; did you mean "# checked by"?`)
	semicolons := "# spot: public; S; 900 MHz; 10,0 W/m2\n" + strings.ReplaceAll(small()["limits.csv"], ",", ";")
	assert.Equal(t, 10.0, mustLoad(t, with("limits.csv", semicolons)).Limits.Spots[0].Level)
}

func TestHalfDigit(t *testing.T) {
	for text, want := range map[string]float64{"41.25 V/m": 0.005, "61V/m": 0.5, "1.375e2 V/m": 0.05, "2e-3 T": 0.0005, "0.073 A/m": 0.0005, "10.": 0.5} {
		assert.InEpsilon(t, want, halfDigit(text), 1e-12, text)
	}
}

func TestLimitUnits(t *testing.T) {
	s := mustLoad(t, with("limits.csv", "class,quantity,from [kHz],to [GHz],coefficient,exponent,unit,f unit,average [min],average exponent,average f unit,area [cm2],time averaging,source\n"+
		"public,S,30000,300,5,1,uW/cm2,GHz,68,-1.05,GHz,20,yes,made up\npublic,B,3,0.03,6.25,,\u00b5T,,0,,,,,made up\n"))
	r := s.Limits.Rows[0]
	assert.InEpsilon(t, 0.05, r.Coefficient, 4*ulps)
	assert.Equal(t, 30e6, r.FromHz)
	assert.Equal(t, 300e9, r.ToHz)
	assert.Equal(t, 1e9, r.FUnitHz)
	assert.Equal(t, 68*60.0, r.AverageS)
	assert.Equal(t, 1e9, r.AverageFUnitHz)
	assert.InEpsilon(t, 0.002, r.AreaM2, 4*ulps)
	assert.True(t, r.TimeAveraging)
	assert.InEpsilon(t, 6.25e-6, s.Limits.Rows[1].Coefficient, 4*ulps)
	assert.Equal(t, 1e6, s.Limits.Rows[1].FUnitHz, "f is in MHz unless the row says otherwise")
}

func TestWarnings(t *testing.T) {
	files := with(
		"antennas.csv", "id,operator,x [m],y [m],z [m],azimuth [deg],pattern,gain [dBi],horizontal beamwidth [deg],vertical beamwidth [deg],frequency [MHz],power [W],note colour\n"+
			"A1,Op 1,1,1,-2,0,two-beamwidth,18.4,65,7,1000,1,red\nA2,Op 2,1,1,6,0,isotropic,,,,900,1,\n",
		"operators.csv", "operator,contact\nOp 1,desk\n",
		"places.csv", "id,x [m],y [m],z [m],class\ndoor,2,3,0.05,public\nyard,200,3,0,public\n",
		"antenas.csv", "id\n", "panel.csv", "cut\n")
	lines := warningLines(mustLoad(t, files))
	for _, want := range []string{
		`antenas.csv: the file is not read: no table has its name; if it is meant to be antennas, name it antennas.csv`,
		`places.csv:2: to [m]: the place "door" is a point on the surface "roof" itself; for a person who stands there write 2 under "to [m]"`,
		`antennas.csv: data from: nobody is named who gave the figures of any of the 2 antennas`,
		`antennas.csv: data date: no date is given for the figures of any of the 2 antennas`,
		`antennas.csv:3: operator: the operators table has no "Op 2"; did you mean "Op 1"?`,
		// 0.886 lambda/theta3 = 0.886 * 0.29979/0.12217 = 2.17 m, 2 L2/lambda = 31.5 m (common practice, no source).
		`antennas.csv:2: length: no length is given, so the near field of "A1" is not reckoned with; its vertical beamwidth of 7 deg implies about 2.17 m, whose far field begins at 31.5 m: write the length of the array`,
		`antennas.csv:2: the antenna "A1" lies 2 m below the surface "roof"; check its z`,
	} {
		assert.Contains(t, lines, want)
	}
	for _, line := range lines {
		assert.NotContains(t, line, "panel.csv")
		assert.NotContains(t, line, "colour")
		assert.NotContains(t, line, "yard")
	}
}

func TestWarningsOfOneRow(t *testing.T) {
	panel := []string{"pattern", "sector", "gain [dBi]", "17", "horizontal beamwidth [deg]", "65", "vertical beamwidth [deg]", "7"}
	for want, pairs := range map[string][]string{
		`antennas.csv:2: power: the row "A1" radiates no power and counts for nothing; write unknown where the power is not known`:                  {"power [W]", "0"},
		`antennas.csv:2: length: a panel of 0.1 m is shorter than half a wavelength (0.1666 m); check length and frequency`:                         append(panel, "length [m]", "0.1"),
		`antennas.csv:2: gain: a gain of 25.0 dBi is 6.7 dB from the 18.3 dBi that beamwidths of 65 and 7 deg suggest; check both`:                  append(panel, "length [m]", "2", "gain [dBi]", "25"),
		`antennas.csv:2: pattern: the pattern "sector" is a reference pattern from 400 MHz to 6 GHz; at 98 MHz nobody has held it against antennas`: append(panel, "length [m]", "6", "frequency [MHz]", "98"),
		`antennas.csv:2: efficiency: the gain of 36.00 dBi implies an efficiency of 0.514, not 0.7; the near field uses the one stated`:             {"pattern", "dish", "gain [dBi]", "36", "diameter [m]", "1.2", "efficiency", "0.7", "frequency [MHz]", "7000"},
	} {
		assert.Contains(t, warningLines(mustLoad(t, antennaRow(pairs...))), want)
	}
}

func TestTwoLimitTables(t *testing.T) {
	_, err := loadFiles(small(), Options{LimitsFile: "nowhere.csv"})
	assert.ErrorContains(t, err, "nowhere.csv: there is no such file; check its name")
}

func TestPatterns(t *testing.T) {
	panel := []string{"gain [dBi]", "17", "horizontal beamwidth [deg]", "65", "vertical beamwidth [deg]", "7", "length [m]", "2"}
	for name, c := range map[string]struct {
		pairs []string
		dBi   float64
		round bool
	}{
		"isotropic":        {nil, 0, true},
		"half-wave dipole": {nil, 2.15, true},
		"Short Dipole":     {nil, 1.7609, true},
		"small loop":       {nil, 1.7609, false},
		"monopole":         {[]string{"length [m]", "0.0832757"}, 5.16, true},
		"two-beamwidth":    {panel, 17, false},
		"omni":             {[]string{"gain [dBi]", "9", "length [m]", "2"}, 9, true},
		"sector":           {panel, 17, false},
		"dish":             {[]string{"diameter [m]", "1.2", "efficiency [%]", "60", "frequency [MHz]", "7000"}, 36.68, false},
		"active": {[]string{"gain [dBi]", "24", "horizontal beamwidth [deg]", "65", "vertical beamwidth [deg]", "65", "elements", "8", "elements across", "8", "spacing [m]", "0.05",
			"spacing across [m]", "0.043", "scan range [deg]", "60", "scan range down [deg]", "15", "frequency [MHz]", "3500"}, 24, false},
	} {
		s := mustLoad(t, antennaRow(append([]string{"pattern", name}, c.pairs...)...)).Sources[0]
		require.NotNil(t, s.Pattern, name)
		assert.Equal(t, strings.ToLower(name), string(s.PatternKind))
		assert.Equal(t, name, s.PatternName)
		// 0.01 dB: the digits written above.
		assert.InDelta(t, c.dBi, s.Gain.DBi(), 0.01, name)
		assert.Equal(t, c.round, isRound(s.Pattern), name)
		assert.LessOrEqual(t, s.Pattern.Relative(0.3, 0.1), 1.0, name)
	}
	assert.False(t, isRound(mustLoad(t, antennaRow("pattern", "half-wave dipole", "polarization", "horizontal")).Sources[0].Pattern), "a wire that lies is not round")
	assert.True(t, isRound(mustLoad(t, antennaRow("pattern", "small loop", "polarization", "horizontal", "azimuth [deg]", "")).Sources[0].Pattern))
}

const cuts = "cut,angle [deg],gain [dBi]\nhorizontal,-180,-10\nhorizontal,-90,0\nhorizontal,0,15\nhorizontal,90,0\nvertical,-90,-15\nvertical,-4,15\nvertical,90,-15\n"

func TestPatternFile(t *testing.T) {
	files := func(pairs ...string) map[string]string {
		f := antennaRow(append([]string{"pattern", "panel.csv", "vertical cut", "up", "length [m]", "2"}, pairs...)...)
		f["panel.csv"] = cuts
		return f
	}
	s := mustLoad(t, files())
	a := s.Sources[0]
	assert.Equal(t, exposure.PatternFile, a.PatternKind)
	assert.InDelta(t, 15, a.Gain.DBi(), 1e-9)
	assert.InDelta(t, 4*degree, a.ElectricalTiltRad, 1e-12, "the file's own tilt, where the row states none")
	assert.Equal(t, "panel.csv", s.Inputs.Files[len(s.Inputs.Files)-1].Name, "pattern files are inputs too")

	assert.Equal(t, []string{`antennas.csv:2: gain [dBi]: "17" contradicts the 15.00 dBi of panel.csv; correct it, or leave it blank`}, faultLines(t, files("gain [dBi]", "17")))
	mustLoad(t, files("gain [dBi]", "15.04"))
	mustLoad(t, files("electrical tilt [deg]", "4.5"))
	assert.Len(t, faultLines(t, files("electrical tilt [deg]", "8")), 1)
	broken := files()
	broken["panel.csv"] = strings.Replace(cuts, "-90,0", "-90,zero", 1)
	lines := faultLines(t, broken)
	require.Len(t, lines, 1)
	assert.True(t, strings.HasPrefix(lines[0], `panel.csv:3: "zero" `), lines[0])
}

func TestColumnsMapping(t *testing.T) {
	s := mustLoad(t, with("columns.csv", "table,from,to,unit\nreadings,Level,E,V/m\nreadings,Probe,instrument,\n",
		"readings.csv", "id,Level,Probe,Battery,x [m],y [m],z [m]\nR1,2.5,M1,90,1,2,1\n",
		"instruments.csv", "id,from [MHz],to [MHz]\nM1,30,3000\n"))
	var found bool
	for _, table := range s.Inputs.Tables {
		if table.Name == "readings" {
			found = true
			assert.Equal(t, exposure.InputColumn{Header: "Level", Name: "E", Unit: "V/m"}, table.Columns[1])
			assert.Equal(t, "2.5", table.Rows[0].Cell("E"))
		}
	}
	assert.True(t, found)
	assert.Contains(t, warningLines(s), "readings.csv:1: not read, since the columns table does not map them: Battery")
}
