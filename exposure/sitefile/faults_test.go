package sitefile

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// Each fault has its exact words, for they are what a user has to work with.
func TestFaultText(t *testing.T) {
	for name, c := range map[string]struct {
		files map[string]string
		want  []string
	}{
		"letter for a digit": {antennaRow("power [W]", "20O"), []string{
			`antennas.csv:2: power [W]: "20O" is not a number; write digits only, such as 200`}},
		"negative power": {antennaRow("power [W]", "-20"), []string{
			`antennas.csv:2: power [W]: "-20" is negative; write a number 0 or more`}},
		"not a number": {antennaRow("power [W]", "NaN"), []string{
			`antennas.csv:2: power [W]: "NaN" is not a number that can be used; write a finite number, such as 12.5`}},
		"infinity": {antennaRow("loss [dB]", "+Inf"), []string{
			`antennas.csv:2: loss [dB]: "+Inf" is not a number that can be used; write a finite number, such as 12.5`}},
		"hexadecimal": {antennaRow("x [m]", "0x1p4"), []string{
			`antennas.csv:2: x [m]: "0x1p4" is hexadecimal; write a decimal number, such as 12.5`}},
		"underscore": {antennaRow("power [W]", "1_000"), []string{
			`antennas.csv:2: power [W]: "1_000" has an underscore; write digits only, such as 1000`}},
		"thousands comma": {antennaRow("power [W]", `"1,800"`), []string{
			`antennas.csv:2: power [W]: "1,800" has a comma; write 1800 or 1.800, whichever is meant`}},
		"thousands comma outside quotes": {antennaRow("data date", `1,800`), []string{
			`antennas.csv:2: the row has 11 cells and the header 10; put a cell that has a separator in it in quotation marks`,
			`antennas.csv:2: data date: "1" is not a date; write it as 2026-03-31`}},
		"unit in a cell": {antennaRow("power [W]", "20 W"), []string{
			`antennas.csv:2: power [W]: "20 W" has a unit in it; write 20 here and [W] in the header`}},
		"beyond a range": {antennaRow("tilt [deg]", "95"), []string{
			`antennas.csv:2: tilt [deg]: "95" is out of range; write a number from -90 to 90`}},
		"beyond a range in another unit": {antennaRow("tilt [rad]", "1.6"), []string{
			`antennas.csv:2: tilt [rad]: "1.6" is out of range; write a number from -90 to 90 deg`}},
		"zero frequency": {antennaRow("frequency [MHz]", "0"), []string{
			`antennas.csv:2: frequency [MHz]: "0" is out of range; write a number more than 0`}},
		"half an element": {antennaRow("elements", "2.5"), []string{
			`antennas.csv:2: elements: "2.5" is out of range; write a whole number, from 1 to 10000`}},
		"level beyond every power": {antennaRow("power [W]", "", "EIRP [dBm]", "9999"), []string{
			`antennas.csv:2: EIRP [dBm]: "9999" is too large a number; check the figure and its unit`}},
		"misspelt word for a number": {antennaRow("power [W]", "unkown"), []string{
			`antennas.csv:2: power [W]: "unkown" is not a number; did you mean unknown?`}},
		"misspelt choice": {antennaRow("polarization", "virtical"), []string{
			`antennas.csv:2: polarization: "virtical" is not one of vertical, horizontal, slant, circular; did you mean vertical?`}},
		"strange choice": {antennaRow("state", "broken"), []string{
			`antennas.csv:2: state: "broken" is not one of the words that can stand here; write one of on, standby`}},
		"date of another kind": {antennaRow("data date", "31/03/2026"), []string{
			`antennas.csv:2: data date: "31/03/2026" is not a date; write it as 2026-03-31`}},
		"day that does not exist": {antennaRow("data date", "2026-02-30"), []string{
			`antennas.csv:2: data date: "2026-02-30" is not a date; write it as 2026-03-31`}},
		"blank where one is needed": {antennaRow("frequency [MHz]", ""), []string{
			`antennas.csv:2: frequency [MHz]: the cell is blank and every row needs it; write a number more than 0`}},
		"blank power": {antennaRow("power [W]", ""), []string{
			`antennas.csv:2: power [W]: the cell is blank; write the power of one carrier, or its EIRP or ERP, or the word unknown`}},
		"no unit": {antennaRow("loss", "1"), []string{
			`antennas.csv:1: loss: the header names no unit; write "loss [dB]"`}},
		"unit of another dimension": {antennaRow("loss [m]", "1"), []string{
			`antennas.csv:1: loss [m]: [m] is not a unit of ratio in dB; write one of dB`}},
		"unit in the wrong case": {antennaRow("EIRP [DBM]", ""), []string{
			`antennas.csv:1: EIRP [DBM]: [DBM] is not a unit of power; did you mean [dBm]?`}},
		"unit where none belongs": {antennaRow("carriers [W]", "1"), []string{
			`antennas.csv:1: carriers [W]: the column takes no unit; write "carriers"`}},
		"misspelt column": {antennaRow("electrical tlit [deg]", "1"), []string{
			`antennas.csv:1: electrical tlit [deg]: no column of antennas has this name; did you mean "electrical tilt [deg]"?`}},
		"unknown column": {antennaRow("colour", "red"), []string{
			`antennas.csv:1: colour: no column of antennas has this name; call it "note colour" to keep it as a remark`}},
		"column twice, in two units": {antennaRow("z [ft]", "20"), []string{
			`antennas.csv:1: z [ft]: the column z is given twice, also as "z [m]"; keep one`}},
		"column without a header": {with("places.csv", "id,,x [m],y [m],z [m],class\ndoor,red,2,3,0,public\n"), []string{
			`places.csv:1: column 2: the column has no header, but row 2 has "red" in it; name the column, or delete it`}},
		"missing column": {with("places.csv", "id,x [m],y [m],z [m]\ndoor,2,3,0\n"), []string{
			`places.csv:1: class: the column is missing and every row needs it; add it: who may be there: a class of the limit table`}},
		"id twice": {with("antennas.csv", small()["antennas.csv"]+"A1,Op,,10,5,6,120,isotropic,900,40,1,me,2026\n"), []string{
			`antennas.csv:4: id: "A1" is used in row 2 already; give each row its own`}},
		"all faults at once, by table and cell": {with(
			"antennas.csv", "id,x [m],y [m],z [m],azimuth [deg],pattern,frequency [MHz],power [W]\nA1,1,1,x,0,isotropic,9OO,-1\n",
			"site.csv", "item,value\nnaem,x\n"), []string{
			`site.csv:1: name: the item is missing; add it: name of the site, as the report prints it`,
			`site.csv:2: naem: no item of site has this name; did you mean "name"?`,
			`antennas.csv:2: z [m]: "x" is not a number; write digits only, such as 12.5`,
			`antennas.csv:2: frequency [MHz]: "9OO" is not a number; write digits only, such as 900`,
			`antennas.csv:2: power [W]: "-1" is negative; write a number 0 or more`}},
		"EIRP and loss": {antennaRow("power [W]", "", "EIRP [W]", "100", "loss [dB]", "1"), []string{
			`antennas.csv:2: loss [dB]: EIRP is what leaves the antenna, so no loss goes with it; leave one of the two blank`}},
		"power and ERP": {antennaRow("ERP [W]", "100"), []string{
			`antennas.csv:2: ERP [W]: power and ERP are both given; keep one`}},
		"gain against the pattern": {antennaRow("pattern", "half-wave dipole", "gain [dBi]", "5"), []string{
			`antennas.csv:2: gain [dBi]: "5" contradicts the 2.15 dBi of the pattern half-wave dipole; correct it, or leave it blank`}},
		"no gain": {antennaRow("pattern", "two-beamwidth", "horizontal beamwidth [deg]", "65"), []string{
			`antennas.csv:2: gain [dBi]: the cell is blank, and the pattern "two-beamwidth" does not fix it; write the peak gain`,
			`antennas.csv:2: vertical beamwidth [deg]: the cell is blank, and the pattern "two-beamwidth" needs it; write a number more than 0, at most 180`}},
		"misspelt pattern": {antennaRow("pattern", "half wave dipole"), []string{
			`antennas.csv:2: pattern: "half wave dipole" is neither a built-in pattern nor a file in the site folder; did you mean "half-wave dipole"?`}},
		"pattern outside the folder": {antennaRow("pattern", "../panel.csv"), []string{
			`antennas.csv:2: pattern: "../panel.csv" is not a file of the site folder; put the file there and write its name`}},
		"blank azimuth": {antennaRow("azimuth [deg]", "", "pattern", "two-beamwidth", "gain [dBi]", "17", "horizontal beamwidth [deg]", "65", "vertical beamwidth [deg]", "7"), []string{
			`antennas.csv:2: azimuth [deg]: the cell is blank, and the pattern "two-beamwidth" is not round; write the direction of its main beam in degrees`}},
		"blank azimuth and a tilt": {antennaRow("azimuth [deg]", "", "pattern", "half-wave dipole", "tilt [deg]", "5"), []string{
			`antennas.csv:2: azimuth [deg]: the cell is blank, and the antenna is tilted by 5 deg; write the direction it is tilted to`}},
		"electrical tilt of a dipole": {antennaRow("pattern", "half-wave dipole", "electrical tilt [deg]", "5"), []string{
			`antennas.csv:2: electrical tilt [deg]: the pattern "half-wave dipole" has no electrical tilt; write 0, or the mechanical tilt under "tilt"`}},
		"unknown surface": {antennaRow("z [m]", "", "on", "rof", "height [m]", "3"), []string{
			`antennas.csv:2: on: there is no surface "rof"; did you mean "roof"?`}},
		"height without a surface": {antennaRow("z [m]", "", "on", "", "height [m]", "3"), []string{
			`antennas.csv:2: on: the cell is blank; write the surface that the height is above, or z in place of both`}},
		"surface without height": {antennaRow("z [m]", "", "on", "roof"), []string{
			`antennas.csv:2: height [m]: the cell is blank; write the height of the centre of radiation above the surface "roof"`}},
		"z and height": {antennaRow("on", "roof", "height [m]", "3"), []string{
			`antennas.csv:2: z [m]: z is given, and on or height as well; keep one way`}},
		"no height at all": {antennaRow("z [m]", ""), []string{
			`antennas.csv:2: z [m]: the cell is blank; write the height of the centre of radiation, or a surface under "on" and the height above it`}},
		"two positions": {antennaRow("latitude [deg]", "49.5", "longitude [deg]", "66.5"), []string{
			`antennas.csv:2: latitude [deg]: both x, y and latitude, longitude are given; keep one pair`}},
		"half a position": {antennaRow("y [m]", ""), []string{
			`antennas.csv:2: y [m]: the cell is blank, though x is given; write both`}},
		"position far away": {antennaRow("x [m]", "", "y [m]", "", "latitude [deg]", "-49.5", "longitude [deg]", "66.5"), []string{
			`antennas.csv:2: latitude [deg]: the position lies 9654 km from the site; check latitude and longitude`}},
		"housing in two places": {with("antennas.csv", "id,housing,operator,x [m],y [m],z [m],azimuth [deg],pattern,frequency [MHz],power [W]\n"+
			"A1,P,Op 1,1,1,6,0,isotropic,900,1\nA2,P,Op 2,1.5,1,6,0,isotropic,900,1\n"), []string{
			`antennas.csv:3: operator: "Op 2" is not the "Op 1" of row 2, in the same housing "P"; rows in one housing are one physical antenna: correct one, or name another housing`,
			`antennas.csv:3: x [m]: the x and y of row 2, in the same housing "P", differ; rows in one housing are one physical antenna: correct one, or name another housing`}},
		"housing with several azimuths": {with("antennas.csv", "id,housing,x [m],y [m],z [m],azimuth [deg],pattern,frequency [MHz],power [W]\n"+
			"A1,P,1,1,6,0,isotropic,900,1\nA2,P,,,,120,isotropic,900,1\nA3,P,,,,,isotropic,900,1\n"), []string{
			`antennas.csv:4: azimuth [deg]: the cell is blank, and the rows of housing "P" have several azimuths; write the one of this row`}},
		"unknown class": {with("places.csv", "id,x [m],y [m],z [m],class\ndoor,2,3,0,publik\n"), []string{
			`places.csv:2: class: the limit table has no class "publik"; did you mean "public"?`}},
		"body upside down": {with("places.csv", "id,x [m],y [m],z [m],from [m],to [m],class\ndoor,2,3,0,3,2,public\n"), []string{
			`places.csv:2: from [m]: the body runs from 3 to 2 m above the surface; write from below to`}},
		"place on nothing": {with("places.csv", "id,x [m],y [m],class\ndoor,2,3,public\n"), []string{
			`places.csv:2: z [m]: the cell is blank; write the height above the datum, or the surface it stands on under "on"`}},
		"latitude alone": {with("site.csv", "item,value\nname,Mill Lane\nlatitude [deg],49.5\n"), []string{
			`site.csv:1: longitude [deg]: latitude is given without longitude; give both or neither`}},
		"magnetic without declination": {with("site.csv", "item,value\nname,Mill Lane\nazimuth reference,magnetic\n"), []string{
			`site.csv:1: declination [deg]: azimuths are magnetic, so the declination is needed; write it in degrees, east positive`}},
		"item twice": {with("site.csv", "item,value\nname,Mill Lane\nname,Other\n"), []string{
			`site.csv:3: name: the item is given twice, also in row 2; keep one`}},
		"ground factor without a figure": {with("site.csv", "item,value\nname,Mill Lane\nground,factor\nground factor,\n"), []string{
			`site.csv:4: ground factor: the ground is "factor", so this is needed; write the field factor, 1.6 or 2`}},
		"no limit table": {with("limits.csv", ""), []string{
			`limits.csv: there is no limit table; put one there, or name one with --limits`}},
		"no antennas": {with("antennas.csv", ""), []string{
			`antennas.csv: the table is missing; every site needs it: one row per antenna input and frequency`}},
		"level of another quantity": {with("limits.csv", "class,quantity,from [MHz],to [MHz],coefficient,unit,average [min],source\npublic,E,30,300,10,W/m2,6,made up\n"), []string{
			`limits.csv:2: unit: W/m2 is not a unit of E; write one of V/m, mV/m, uV/m, kV/m, dBuV/m, dBV/m`}},
		"band backwards": {with("limits.csv", "class,quantity,from [MHz],to [MHz],coefficient,unit,average [min],source\npublic,E,300,30,10,V/m,6,made up\n"), []string{
			`limits.csv:2: from [MHz]: the band runs backwards, from 300 MHz to 30 MHz; exchange from and to`}},
		"spot of three parts": {with("limits.csv", "# spot: public, S, 900 MHz\n"+small()["limits.csv"]), []string{
			`limits.csv:1: spot: a spot value has four parts; write class, quantity, frequency, level, such as # spot: public, E, 900 MHz, 41.25 V/m`}},
		"spot that the table does not give": {with("limits.csv", "# spot: public, S, 900 MHz, 12 W/m2\n"+small()["limits.csv"]), []string{
			`limits.csv:1: spot: spot value "public, S, 900 MHz, 12 W/m2": the table gives 10 W/m2 in row 3 (30 MHz to 300 GHz); correct the row, or the spot value if it was misread`}},
		"spot without a unit": {with("limits.csv", "# spot: public, S, 900 MHz, 10\n"+small()["limits.csv"]), []string{
			`limits.csv:1: spot: "10" has no unit; write one behind it, such as 61.4V/m or 98MHz`}},
		"reading at an impossible time": {with("readings.csv", "id,instrument,time,x [m],y [m],z [m]\nR1,M1,2026-03-31 10:05,1,2,1\n",
			"instruments.csv", "id,from [MHz],to [MHz]\nM1,30,3000\n"), []string{
			`readings.csv:2: time: "2026-03-31 10:05" is not a time; write it as 2026-03-31T10:05:00Z, with its zone`}},
		"mapping to an unknown table": {with("columns.csv", "table,from,to,unit\nreading,Level,E,V/m\n"), []string{
			`columns.csv:2: table: there is no table "reading"; did you mean "readings"?`}},
		"workbook in a folder": {map[string]string{"site.xlsx": "PK"}, []string{
			`antennas.csv: the folder has no table antennas; to read the workbook in it, give site.xlsx by name`}},
		"table by two names": {with("Antennas.csv", small()["antennas.csv"]), []string{
			`antennas.csv: Antennas.csv is the table antennas as well; keep one`}},
	} {
		t.Run(name, func(t *testing.T) { assert.Equal(t, c.want, faultLines(t, c.files)) })
	}
}

func TestOutlineFaults(t *testing.T) {
	for wkt, want := range map[string]string{
		"POLYGON((0 0, 30 0, 30 20, 0 20))":                                                          "the outline is not closed; write its first corner again at its end",
		"POLYGON((0 0, 30 0, 0 0))":                                                                  "the outline has 2 different corners; an area needs at least 3",
		"POLYGON((0 0, 10 10, 10 0, 0 10, 0 0))":                                                     "the outline crosses or touches itself near (5 5); go round it once",
		"POLYGON((0 0, 10 0, 10 10, 10 0, 0 0))":                                                     "the outline crosses or touches itself near (10 0); go round it once",
		"POLYGON((0 0, 10 0, 20 0, 0 0))":                                                            "the outline has no area; its corners lie on one line",
		"POLYGON((0 0, 30 0, 30 20, 0 20, 0 0),(40 1, 42 1, 42 3, 40 1))":                            "hole 1 lies outside the outline; draw it inside, or give it a row of its own",
		"POLYGON((0 0, 30 0, 30 20, 0 20, 0 0),(20 1, 42 1, 42 3, 20 1))":                            "two rings cross near (30 1.90909); draw them apart",
		"POLYGON((0 0, 30 0, 30 20, 0 20, 0 0),(1 1, 9 1, 9 9, 1 9, 1 1),(2 2, 3 2, 3 3, 2 3, 2 2))": "holes 1 and 2 overlap; draw one",
		"LINESTRING(0 0, 1 1)":                                                                       "this is not a WKT POLYGON; write one such as POLYGON((0 0, 30 0, 30 20, 0 20, 0 0))",
		"a roof":                                                                                     "this is not a WKT POLYGON; write one such as POLYGON((0 0, 30 0, 30 20, 0 20, 0 0))",
		"POLYGON EMPTY":                                                                              "the polygon is empty; write at least three corners and the first again",
	} {
		files := with("surfaces.csv", "id,outline,z [m],class\nroof,\""+wkt+"\",0,public\n")
		assert.Equal(t, []string{"surfaces.csv:2: outline: " + want}, faultLines(t, files), wkt)
	}
}

func TestOutlineIsTurned(t *testing.T) {
	s := mustLoad(t, with("surfaces.csv", "id,outline,z [m],class\nroof,\"POLYGON((0 0, 0 20, 30 20, 30 0, 0 0),(1 1, 2 1, 2 2, 1 2, 1 1))\",0,public\n"))
	require.Len(t, s.Surfaces[0].Outline, 2)
	area := func(i int) (a float64) {
		r := s.Surfaces[0].Outline[i]
		for k := 1; k < len(r); k++ {
			a += (r[k-1][0]*r[k][1] - r[k][0]*r[k-1][1]) / 2
		}
		return a
	}
	// Exact: small whole numbers.
	assert.Equal(t, 600.0, area(0), "outer ring counter-clockwise")
	assert.Equal(t, -1.0, area(1), "hole clockwise")
}

func TestOneFaultACell(t *testing.T) {
	lines := faultLines(t, with("antennas.csv", strings.Replace(small()["antennas.csv"], "A2,Op,,12,5,6,120,isotropic,1800,20,1", "A2,Op,,12,5,6,120,isotropic,18OO,-20,1", 1)))
	assert.Equal(t, []string{
		`antennas.csv:3: frequency [MHz]: "18OO" is not a number; write digits only, such as 1800`,
		`antennas.csv:3: power [W]: "-20" is negative; write a number 0 or more`,
	}, lines)
}
