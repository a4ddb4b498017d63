package sitefile

import (
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

const scenarioHead = "scenario,table,id,column,value\n"

// A scenario is the site read with other cells: defaults, conversions and rules
// apply to them as to any cell, and the base stays as it is.
func TestScenariosChangeCells(t *testing.T) {
	s := mustLoad(t, with("scenarios.csv", scenarioHead+
		"night,antennas,A1,power,10\n"+
		"night,antennas,A2,power [W],0\n"+
		"lower tilt,antennas,A1,tilt,4\n"+
		"longer mast,antennas,A1,z,9\n"+
		"other name,site,name,value,Mill Lane by night\n"))
	require.Len(t, s.Scenarios, 4)
	night := s.Scenarios[0]
	assert.Equal(t, "night", night.Name)
	assert.Equal(t, []string{"antennas A1 power [W]: 10 in place of 40", "antennas A2 power [W]: 0 in place of 20"}, night.Changes)
	assert.Equal(t, 10.0, night.Site.Sources[0].Power.TransmitterW, "as typed")
	assert.Zero(t, night.Site.Sources[1].Power.TransmitterW)
	assert.Equal(t, 40.0, s.Sources[0].Power.TransmitterW, "the base is left alone")
	assert.InDelta(t, 4*3.141592653589793/180, s.Scenarios[1].Site.Sources[0].Pose.TiltRad, 1e-15, "one conversion; a column that the table does not have is added")
	assert.Equal(t, []string{"antennas A1 tilt [deg]: 4 in place of a blank cell"}, s.Scenarios[1].Changes)
	assert.Equal(t, 9.0, s.Scenarios[2].Site.Sources[0].Position.Z)
	assert.Equal(t, "Mill Lane by night", s.Scenarios[3].Site.About.Name)
	assert.Empty(t, night.Site.Scenarios)
}

// What is wrong with a scenario is a fault of its own row.
func TestScenarioFaults(t *testing.T) {
	for name, c := range map[string]struct{ rows, want string }{
		"value": {"night,antennas,A1,power,1O\n",
			`scenarios.csv:2: value: "1O" is not a number; write digits only, such as 10`},
		"row": {"night,antennas,A9,power,10\n",
			`scenarios.csv:2: id: antennas has no row "A9"; it may be one of A1, A2`},
		"column": {"night,antennas,A1,pwer,10\n",
			`scenarios.csv:2: column: no column of antennas has this name; did you mean "power [W]"?`},
		"table": {"night,antenas,A1,power,10\n",
			`scenarios.csv:2: table: a scenario changes rows of site, antennas, surfaces, places, not of "antenas"; did you mean "antennas"?`},
		"twice": {"night,antennas,A1,power,10\nnight,antennas,A1,power,11\n",
			`scenarios.csv:3: value: scenario "night" changes this cell twice; keep one row`},
		"elsewhere": {"night,antennas,A1,pattern,sector\n",
			`scenarios.csv:2: scenario: with the changes of scenario "night", antennas.csv:2: gain [dBi]: the cell is blank`},
	} {
		lines := faultLines(t, with("scenarios.csv", scenarioHead+c.rows))
		require.NotEmpty(t, lines, name)
		assert.Contains(t, lines[0], c.want, name)
	}
}
