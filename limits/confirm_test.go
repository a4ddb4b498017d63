package limits_test

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/limits"
)

// twoBands is the power density column of a table such as 47 CFR 1.1310's
// general population, in W/m2.
func twoBands() []limits.Row {
	a, b := flat("public", limits.S, 30, 300, 2), flat("public", limits.S, 300, 1500, 10.0/1500)
	b.Exponent = 1
	a.Line, b.Line = 5, 6
	return []limits.Row{a, b}
}

func TestSpotValuesAndConfirmation(t *testing.T) {
	at98 := limits.Spot{Class: "public", Quantity: limits.S, FrequencyHz: 98e6, Level: 2, HalfDigit: 0.5, Text: "public, S, 98 MHz, 2 W/m2", Line: 2}
	at850 := limits.Spot{Class: "public", Quantity: limits.S, FrequencyHz: 850e6, Level: 5.67, HalfDigit: 0.005, Text: "public, S, 850 MHz, 5.67 W/m2", Line: 3}
	checked := limits.About{CheckedBy: "A. Reader", CheckedOn: "2026-01-31"}
	for name, c := range map[string]struct {
		about   limits.About
		spots   []limits.Spot
		because string // "" = confirmed
	}{
		"nobody":          {limits.About{}, []limits.Spot{at98, at850}, "nobody has confirmed"},
		"blank name":      {limits.About{CheckedBy: "  "}, []limits.Spot{at98, at850}, "nobody has confirmed"},
		"no spots":        {checked, nil, "2 bands have no spot value (first row 5: public, S, 30 MHz to 300 MHz)"},
		"a band short":    {checked, []limits.Spot{at98}, "one band has no spot value (row 6: public, S, 300 MHz to 1.5 GHz)"},
		"twice in a band": {checked, []limits.Spot{at98, at98}, "one band has no spot value"},
		"all":             {checked, []limits.Spot{at98, at850}, ""},
	} {
		t.Run(name, func(t *testing.T) {
			table, faults, warnings := limits.New(twoBands(), c.about, c.spots)
			require.Empty(t, faults)
			assert.Equal(t, c.because == "", table.Confirmed())
			if c.because == "" {
				assert.Empty(t, table.Unconfirmed())
				assert.Empty(t, warnings)
				return
			}
			assert.Contains(t, table.Unconfirmed(), c.because)
			require.NotEmpty(t, warnings)
			assert.Equal(t, table.Unconfirmed(), warnings[0].Message)
		})
	}
	// A deliberate gap needs no spot value.
	none := flat("public", limits.S, 1500, 3000, 0)
	none.None = true
	table, _, _ := limits.New(append(twoBands(), none), checked, []limits.Spot{at98, at850})
	assert.True(t, table.Confirmed())
	// One spot value at an edge stands for both rows that it reproduces.
	edge := limits.Spot{Class: "public", Quantity: limits.S, FrequencyHz: 300e6, Level: 2.0, HalfDigit: 0.05}
	table, _, _ = limits.New(twoBands(), checked, []limits.Spot{edge})
	assert.True(t, table.Confirmed())
}

func TestSpotFaults(t *testing.T) {
	spot := func(class string, q limits.Quantity, mhz, level, half float64) limits.Spot {
		return limits.Spot{Class: class, Quantity: q, FrequencyHz: mhz * 1e6, Level: level, HalfDigit: half, Line: 3}
	}
	for name, c := range map[string]struct {
		spot limits.Spot
		want string // "" = reproduced
	}{
		"within half a digit":   {spot("public", limits.S, 850, 5.7, 0.05), ""},
		"on the half digit":     {spot("public", limits.S, 150, 2.5, 0.5), ""},
		"beyond half a digit":   {spot("public", limits.S, 850, 5.673, 0.005), "5.667 W/m2 in row 6 (300 MHz to 1.5 GHz)"},
		"a step of another row": {spot("public", limits.S, 850, 2, 0.5), "5.667 W/m2"},
		"no such class":         {spot("workers", limits.S, 850, 5.67, 0.005), `no S level for "workers" at 850 MHz`},
		"no such quantity":      {spot("public", limits.E, 850, 5.67, 0.005), `no E level`},
		"outside":               {spot("public", limits.S, 29, 2, 0.5), "at 29 MHz"},
		"not a level":           {spot("public", limits.S, 98, 0, 0.5), "write class, quantity, frequency and level"},
		"not a frequency":       {spot("public", limits.S, 0, 2, 0.5), "write class, quantity, frequency and level"},
	} {
		t.Run(name, func(t *testing.T) {
			_, faults, _ := limits.New(twoBands(), limits.About{}, []limits.Spot{c.spot})
			if c.want == "" {
				assert.Empty(t, faults)
				return
			}
			require.Len(t, faults, 1)
			assert.Equal(t, 3, faults[0].Line)
			assert.Equal(t, "spot", faults[0].Column)
			assert.Contains(t, faults[0].Message, c.want)
		})
	}
	_, faults, _ := limits.New(twoBands(), limits.About{}, []limits.Spot{{Class: "public", Quantity: limits.S, FrequencyHz: 98e6, Level: 3, Text: "public, S, 98 MHz, 3 W/m2"}})
	require.Len(t, faults, 1)
	assert.True(t, strings.HasPrefix(faults[0].Message, `spot value "public, S, 98 MHz, 3 W/m2": the table gives 2 W/m2`), "as typed")
}

// A misread figure is found: each published example, with one coefficient 7 %
// too high, is refused if a spot value is in its band, and warned about at its
// edges otherwise.
func TestASlipIsFound(t *testing.T) {
	for _, file := range allFiles {
		rows, about, spots := readTable(t, file)
		for i := range rows {
			if rows[i].None || rows[i].FromHz == rows[i].ToHz || file == fileC95L || rows[i].Kind == limits.Peak {
				continue // alone in its list, or computed from other rows
			}
			bent := append([]limits.Row(nil), rows...)
			bent[i].Coefficient *= 1.07
			_, faults, warnings := limits.New(bent, about, spots)
			assert.True(t, len(faults) > 0 || len(warnings) > 1, "%s:%d", file, rows[i].Line)
		}
	}
}

func TestWarnings(t *testing.T) {
	messages := func(rows ...limits.Row) []string {
		for i := range rows {
			rows[i].Line = i + 2
		}
		_, faults, warnings := limits.New(rows, limits.About{}, nil)
		require.Empty(t, faults)
		var list []string
		for _, w := range warnings[1:] { // the first: nobody has confirmed
			list = append(list, w.Message)
		}
		return list
	}
	none := func(q limits.Quantity, from, to float64) limits.Row {
		r := flat("public", q, from, to, 0)
		r.None = true
		return r
	}
	assert.Empty(t, messages(flat("public", limits.E, 1, 30, 28), flat("public", limits.H, 1, 30, 0.073)))
	assert.Empty(t, messages(flat("public", limits.E, 1, 30, 28), flat("public", limits.B, 1, 30, 9e-8)), "B stands for H")
	assert.Empty(t, messages(flat("public", limits.E, 30, 400, 28)), "above 30 MHz one is enough")
	assert.Empty(t, messages(flat("public", limits.H, 1, 30, 0.073), none(limits.E, 1, 30)), "a deliberate gap speaks")

	list := messages(flat("public", limits.E, 1, 400, 28))
	require.Len(t, list, 1)
	assert.Equal(t, "from 1 MHz to 30 MHz public (thermal, whole body, mean) has a level of E but none of H or B; below 30 MHz the one does not stand for the other", list[0])
	list = messages(flat("public", limits.E, 5, 10, 28), flat("public", limits.H, 1, 20, 0.073))
	require.Len(t, list, 2)
	assert.Contains(t, list[0], "from 1 MHz to 5 MHz public (thermal, whole body, mean) has a level of H or B but none of E")
	assert.Contains(t, list[1], "from 10 MHz to 20 MHz")

	list = messages(flat("public", limits.S, 100, 300, 2), flat("public", limits.S, 300, 400, 2.12))
	require.Len(t, list, 1)
	assert.Equal(t, "at 300 MHz the S level for public steps by +6 %, from 2 W/m2 (row 2 (100 MHz to 300 MHz)) to 2.12 W/m2; check both rows against the source", list[0])
	assert.Empty(t, messages(flat("public", limits.S, 100, 300, 2), flat("public", limits.S, 300, 400, 2.09)))
	assert.Empty(t, messages(flat("public", limits.S, 100, 300, 2), none(limits.S, 300, 400)))

	list = messages(flat("public", limits.S, 100, 300, 2), flat("public", limits.S, 301, 400, 2))
	require.Len(t, list, 1)
	assert.Contains(t, list[0], "no row between 300 MHz and 301 MHz: an antenna there is not assessed")
	assert.Empty(t, messages(flat("public", limits.S, 100, 300, 2), flat("public", limits.E, 300, 400, 28)), "another quantity fills it")
	assert.Empty(t, messages(flat("public", limits.E, 100, 400, 28), flat("public", limits.S, 150, 200, 2), flat("public", limits.S, 300, 500, 2)), "a narrow band within a wide one ends nothing")
}
