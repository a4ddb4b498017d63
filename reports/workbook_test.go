package reports

import (
	"archive/zip"
	"bytes"
	"io"
	"math"
	"regexp"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"github.com/xuri/excelize/v2"

	"example.org/standclear/exposure"
)

// sampleBook returns the sample's workbook as bytes and opened.
func sampleBook(t *testing.T) ([]byte, *excelize.File) {
	t.Helper()
	a := sample(8, 6)
	pictures, err := draw(t.Context(), a)
	require.NoError(t, err)
	raw, err := workbook(a, pictures)
	require.NoError(t, err)
	return raw, open(t, raw)
}

func open(t *testing.T, raw []byte) *excelize.File {
	t.Helper()
	f, err := excelize.OpenReader(bytes.NewReader(raw))
	require.NoError(t, err)
	t.Cleanup(func() { f.Close() })
	return f
}

// eachCell walks every cell of a workbook that holds something.
func eachCell(t *testing.T, f *excelize.File, visit func(sheet string, col, row int, kind excelize.CellType, text, formula string)) {
	t.Helper()
	for _, sheet := range f.GetSheetList() {
		rows, err := f.GetRows(sheet, excelize.Options{RawCellValue: true})
		require.NoError(t, err)
		for r, cells := range rows {
			for c, text := range cells {
				name := cellName(c+1, r+1)
				formula, err := f.GetCellFormula(sheet, name)
				require.NoError(t, err)
				if text == "" && formula == "" {
					continue
				}
				kind, err := f.GetCellType(sheet, name)
				require.NoError(t, err)
				visit(sheet, c+1, r+1, kind, text, formula)
			}
		}
	}
}

// isNumber reports whether a cell holds a number rather than text.
func isNumber(kind excelize.CellType) bool {
	return kind == excelize.CellTypeNumber || kind == excelize.CellTypeUnset
}

func TestSheetsStandInAReadersOrder(t *testing.T) {
	_, f := sampleBook(t)
	assert.Equal(t, []string{"Cautions", "Result", "Site", "Antennas", "Power", "Limits", "Levels", "Distances", "Distances by antenna", "Boundaries",
		"Vertical sections", "Boundary points", "Figures", "Places", "Contributions", "Along the beams", "Work plan", "Switching", "Barriers and signs", "Measure first", "Assumptions", "Operating states", "Methods", "Methods by column", "Inputs", "In antennas", "In places", "Sign-off"}, f.GetSheetList())
}

// Every number stands under a header that names its unit, or says [1] for a
// plain ratio, and the sheet of methods by column explains that header.
func TestEveryNumericColumnHasAUnitAndAMethod(t *testing.T) {
	_, f := sampleBook(t)
	explained := map[string]bool{}
	methods := map[string]bool{"as typed or counted": true}
	for _, n := range exposure.Methods() {
		methods[n.ID] = true
	}
	rows, err := f.GetRows(sheetColumns)
	require.NoError(t, err)
	for _, r := range rows[firstRow:] {
		require.Len(t, r, 4, "%q", r)
		explained[r[0]+"|"+r[1]] = true
		assert.NotEmpty(t, r[2], "%q", r)
		assert.True(t, methods[r[3]], "%s, %s rests on %q, which is no row of the methods table", r[0], r[1], r[3])
	}
	unit := regexp.MustCompile(`\[[^\]]+\]$`)
	numbers := 0
	headers := map[string]string{} // by sheet and column: the header in force
	eachCell(t, f, func(sheet string, col, row int, kind excelize.CellType, text, formula string) {
		name := cellName(col, row)
		id, err := f.GetCellStyle(sheet, name)
		require.NoError(t, err)
		style, err := f.GetStyle(id)
		require.NoError(t, err)
		key := sheet + "|" + strings.TrimRight(name, "0123456789")
		if len(style.Fill.Color) > 0 {
			headers[key] = text
			return
		}
		if !isNumber(kind) && formula == "" {
			return
		}
		numbers++
		header := headers[key]
		assert.Regexp(t, unit, header, "%s!%s holds %s", sheet, name, text)
		assert.True(t, explained[sheet+"|"+header], "%s!%s: header %q has no line on sheet %s", sheet, name, header, sheetColumns)
	})
	assert.Greater(t, numbers, 500, "the walk saw the tables")
}

// What a user typed stays text: no formula comes from it, and it reads back as
// it was.
func TestUserTextNeverBecomesAFormula(t *testing.T) {
	raw, f := sampleBook(t)
	ours := regexp.MustCompile(`^[A-Z0-9+*/^(),:!$.' -]*$`)
	words := strings.NewReplacer("'Contributions'", "", "'Power'", "", "'Levels'", "", "wave_impedance", "", "E-", "E")
	formulas, seen := 0, 0
	eachCell(t, f, func(sheet string, col, row int, kind excelize.CellType, text, formula string) {
		if formula != "" {
			formulas++
			assert.Regexp(t, ours, words.Replace(formula), "%s!%s", sheet, cellName(col, row))
			assert.NotContains(t, formula, `"`)
		}
		// The escape of a text that looks like the format's own is undone by a
		// reader that follows the format; this one leaves it.
		if strings.ReplaceAll(text, "_x005F_", "_") == hostile {
			seen++
			assert.Empty(t, formula)
		}
	})
	assert.Greater(t, formulas, 100)
	assert.GreaterOrEqual(t, seen, 2, "the note of the site and the note of an antenna")
	for name, part := range parts(t, raw) {
		assert.NotContains(t, part, "<b>_x", "%s: markup from a cell", name)
		assert.NotContains(t, part, "externalLink", name)
	}
}

// parts returns the XML parts of a workbook.
func parts(t *testing.T, raw []byte) map[string]string {
	t.Helper()
	z, err := zip.NewReader(bytes.NewReader(raw), int64(len(raw)))
	require.NoError(t, err)
	out := map[string]string{}
	for _, p := range z.File {
		if !strings.HasSuffix(p.Name, ".xml") && !strings.HasSuffix(p.Name, ".rels") {
			continue
		}
		r, err := p.Open()
		require.NoError(t, err)
		text, err := io.ReadAll(r)
		require.NoError(t, err)
		out[p.Name] = string(text)
	}
	return out
}

// A report gives no promise: verdicts are within or above the limits supplied,
// or not assessed.
func TestVerdictWords(t *testing.T) {
	_, f := sampleBook(t)
	promise := regexp.MustCompile(`(?i)\b(safe|safely|unsafe|compliant|compliance|guaranteed?|proven|proves)\b`)
	verdicts := map[string]int{}
	eachCell(t, f, func(sheet string, col, row int, kind excelize.CellType, text, formula string) {
		if sheet != sheetMethods { // sources are quoted there by their titles
			assert.NotRegexp(t, promise, text, "%s!%s", sheet, cellName(col, row))
		}
		for _, v := range []string{"within the limits supplied", "above the limits supplied", "not assessed"} {
			if strings.HasPrefix(text, v) {
				verdicts[v]++
			}
		}
	})
	assert.Len(t, verdicts, 3, "the sample has each verdict: %v", verdicts)
	var screen bytes.Buffer
	require.NoError(t, Screen(&screen, sample(8, 6)))
	assert.NotRegexp(t, promise, screen.String())
	for _, c := range Cautions {
		assert.NotRegexp(t, promise, c)
	}
}

func TestEveryPageCarriesTheCautionAndItsNumber(t *testing.T) {
	raw, f := sampleBook(t)
	for _, sheet := range f.GetSheetList() {
		hf, err := f.GetHeaderFooter(sheet)
		require.NoError(t, err)
		assert.Contains(t, hf.OddFooter, footerCaution, sheet)
		assert.Contains(t, hf.OddFooter, "page &P of &N", sheet)
		assert.Contains(t, hf.OddHeader, "Kiln Lane works && yard", "%s: an ampersand of the site's name is no layout code", sheet)
		assert.Contains(t, hf.OddHeader, "2026-03-14", sheet)
		assert.LessOrEqual(t, len(hf.OddHeader), 255, sheet)
		assert.LessOrEqual(t, len(hf.OddFooter), 255, sheet)
	}
	props, err := f.GetDocProps()
	require.NoError(t, err)
	assert.Equal(t, "standclear", props.Creator)
	assert.Equal(t, "2026-03-14T00:00:00Z", props.Created)
	assert.Contains(t, parts(t, raw)["xl/charts/chart1.xml"], `logBase val="10"`)
}

// The sign-off is for people: no name, licence, date or signature stands in it.
func TestSignOffIsBlank(t *testing.T) {
	_, f := sampleBook(t)
	rows, err := f.GetRows(sheetSignOff)
	require.NoError(t, err)
	labels := 0
	for _, r := range rows {
		if len(r) == 0 {
			continue
		}
		switch r[0] {
		case "name", "licence number", "date", "signature":
			labels++
			for _, c := range r[1:] {
				assert.Empty(t, c)
			}
		}
	}
	assert.Equal(t, 12, labels)
}

// Inputs are shown as typed, with the row of the file, so that a figure can be
// followed to its cell.
func TestInputsPointBackToTheirCells(t *testing.T) {
	_, f := sampleBook(t)
	ok, target, err := f.GetCellHyperLink(sheetAntennas, "B6")
	require.NoError(t, err)
	require.True(t, ok)
	assert.Equal(t, "'In antennas'!A6", target)
	row, err := f.GetCellValue("In antennas", "A6")
	require.NoError(t, err)
	id, err := f.GetCellValue("In antennas", "B6")
	require.NoError(t, err)
	assert.Equal(t, "3", row)
	assert.Equal(t, "B2", id)
	kind, err := f.GetCellType("In antennas", "F6")
	require.NoError(t, err)
	assert.False(t, isNumber(kind), "as typed means as text")
	files, err := f.GetRows(sheetInputs)
	require.NoError(t, err)
	assert.Equal(t, []string{"antennas.csv", "2231", strings.Repeat("ab", 32)}, files[firstRow])
}

// A number that is not one stops the report; an infinite one is said in words.
func TestNumbersThatNoCellHolds(t *testing.T) {
	a := sample(4, 2)
	a.Zones[0].OuterAreaM2 = math.NaN()
	_, err := workbook(a, nil)
	require.ErrorContains(t, err, "not a number")
	a = sample(4, 2)
	a.Points[0].Ratios[0].ExposureRatio = exposure.Number(math.Inf(1))
	raw, err := workbook(a, nil)
	require.NoError(t, err)
	got, err := open(t, raw).GetCellValue(sheetPlaces, cellName(12, firstRow+1))
	require.NoError(t, err)
	assert.Equal(t, "no bound", got)
}

// From a size on, the contributions sheet joins small sources, says so, and its
// columns still add up to the totals.
func TestLongContributionsAreJoined(t *testing.T) {
	a := sample(60, 400)
	plan := planContributions(a)
	require.Greater(t, plan.share, 0.0)
	kept := 0
	for i := range plan.kept {
		kept += len(plan.kept[i])
		assert.Less(t, plan.first[i], plan.total[i])
	}
	assert.LessOrEqual(t, kept, mostContributions)
	raw, err := workbook(a, nil)
	require.NoError(t, err)
	f := open(t, raw)
	intro, err := f.GetCellValue(sheetContributions, "A2")
	require.NoError(t, err)
	assert.Contains(t, intro, "joined into one line")
	formula, err := f.GetCellFormula(sheetContributions, cellName(contributionRatio, plan.total[0]))
	require.NoError(t, err)
	assert.Equal(t, "SUM("+cellName(contributionRatio, plan.first[0])+":"+cellName(contributionRatio, plan.total[0]-1)+")", formula)
}

func TestSheetNamesOfInputTables(t *testing.T) {
	taken := map[string]bool{}
	for name, want := range map[string]string{"antennas": "In antennas", "a:b/c": "In a_b_c"} {
		assert.Equal(t, want, inputName(&exposure.InputTable{Name: name}, taken))
	}
	assert.Equal(t, "In ANTENNAS 2", inputName(&exposure.InputTable{Name: "ANTENNAS"}, taken), "names that differ only in case clash")
	long := inputName(&exposure.InputTable{Name: strings.Repeat("x", 60)}, taken)
	assert.Len(t, long, 31)
	assert.NotEqual(t, long, inputName(&exposure.InputTable{Name: strings.Repeat("x", 60)}, taken))
}
