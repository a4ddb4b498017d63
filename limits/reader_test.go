package limits_test

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/standclear/limits"
)

// scale turns the units of the published tables into SI.
var scale = map[string]float64{
	"V/m": 1, "A/m": 1, "uT": 1e-6, "W/m2": 1, "mW/cm2": 10,
	"Hz": 1, "kHz": 1e3, "MHz": 1e6, "GHz": 1e9, "": 1e6,
}

// published reads a transcription and has it checked: it must have no fault.
func published(t testing.TB, name string) *limits.Table {
	t.Helper()
	rows, about, spots := readTable(t, name)
	table, faults, _ := limits.New(rows, about, spots)
	require.Empty(t, faults, "faults of %s", name)
	return table
}

// readTable reads the columns that the transcriptions use, strictly: a second
// reading of these files beside the program's own.
func readTable(t testing.TB, name string) ([]limits.Row, limits.About, []limits.Spot) {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "testdata", "limits", filepath.FromSlash(name)))
	require.NoError(t, err)
	var about limits.About
	var spots []limits.Spot
	lines := strings.Split(strings.TrimSuffix(string(text), "\n"), "\n")
	skip := 0
	for strings.HasPrefix(lines[skip], "#") {
		key, value, ok := strings.Cut(strings.TrimPrefix(lines[skip], "# "), ": ")
		require.True(t, ok, "%s:%d", name, skip+1)
		skip++
		switch key {
		case "spot":
			spots = append(spots, spot(t, value, skip))
		case "title":
			about.Title = value
		case "issued by":
			about.IssuedBy = value
		case "edition":
			about.Edition = value
		case "transcribed by", "checked by", "checked on":
			require.Empty(t, strings.TrimSpace(value), "nobody has confirmed the examples")
		default:
			require.Fail(t, "unknown key", "%s:%d: %s", name, skip, key)
		}
	}
	records, err := csv.NewReader(strings.NewReader(strings.Join(lines[skip:], "\n"))).ReadAll()
	require.NoError(t, err)
	var rows []limits.Row
	for i, cells := range records[1:] {
		r := record{t: t, cells: map[string]string{}}
		for k, h := range records[0] {
			r.cells[h] = cells[k]
		}
		rows = append(rows, r.row(skip+2+i))
		require.Empty(t, r.cells, "%s:%d: columns that this reader does not know", name, skip+2+i)
	}
	return rows, about, spots
}

type record struct {
	t     testing.TB
	cells map[string]string
}

func (r record) text(column string) string {
	s := r.cells[column]
	delete(r.cells, column)
	return s
}

func (r record) number(column string) float64 { return number(r.t, r.text(column)) }

func (r record) unit(column string) float64 {
	u := r.text(column)
	require.Contains(r.t, scale, u)
	return scale[u]
}

func (r record) row(line int) limits.Row {
	r.text("note")
	brief := r.cells["brief a"] != ""
	return limits.Row{
		Class: r.text("class"), Quantity: limits.Quantity(r.text("quantity")),
		FromHz: r.number("from [MHz]") * 1e6, ToHz: r.number("to [MHz]") * 1e6,
		Coefficient: r.number("coefficient") * r.unit("unit"), Exponent: r.number("exponent"), FUnitHz: r.unit("f unit"),
		None:     r.text("level") == "none",
		AverageS: r.number("average [min]") * 60, AverageExp: r.number("average exponent"), AverageFUnitHz: r.unit("average f unit"),
		TimeAveraging: r.text("time averaging") == "yes", OverBody: limits.Over(r.text("over body")),
		AreaM2:   r.number("area [cm2]") * 1e-4,
		HasBrief: brief, BriefA: r.number("brief a"), BriefB: r.number("brief b"), BriefExp: r.number("brief exponent"),
		Region: limits.Region(r.text("region")), Effect: limits.Effect(r.text("effect")), Kind: limits.Kind(r.text("kind")),
		Combine: limits.Combine(r.text("combine")), Source: r.text("source"), Line: line,
	}
}

// number reads a cell; a blank one is 0.
func number(t testing.TB, s string) float64 {
	t.Helper()
	if s == "" {
		return 0
	}
	v, err := strconv.ParseFloat(s, 64)
	require.NoError(t, err)
	return v
}

// halfDigit returns half a unit of the last digit of a printed number.
func halfDigit(printed string) float64 {
	mantissa, exponent, _ := strings.Cut(strings.ToLower(printed), "e")
	e, _ := strconv.Atoi(exponent)
	_, decimals, _ := strings.Cut(mantissa, ".")
	return 0.5 * math.Pow(10, float64(e-len(decimals)))
}

func spot(t testing.TB, text string, line int) limits.Spot {
	t.Helper()
	parts := strings.Split(text, ", ")
	require.Len(t, parts, 4, "spot %q", text)
	f, fUnit, _ := strings.Cut(parts[2], " ")
	v, unit, _ := strings.Cut(parts[3], " ")
	require.Contains(t, scale, fUnit)
	require.Contains(t, scale, unit)
	return limits.Spot{Class: parts[0], Quantity: limits.Quantity(parts[1]), FrequencyHz: number(t, f) * scale[fUnit],
		Level: number(t, v) * scale[unit], HalfDigit: halfDigit(v) * scale[unit], Text: text, Line: line}
}
