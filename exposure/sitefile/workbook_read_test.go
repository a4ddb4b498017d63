package sitefile

import (
	"bytes"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"github.com/xuri/excelize/v2"
)

// typed makes a workbook by hand, as a surveyor would: fill sets the cells.
func typed(t testing.TB, fill func(f *excelize.File)) []byte {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	require.NoError(t, f.SetSheetName("Sheet1", "antennas"))
	require.NoError(t, f.SetSheetRow("antennas", "A1", &[]any{"id", "service", "data date", "power [W]", "duty", "gain [dBi]", "note"}))
	fill(f)
	var b bytes.Buffer
	require.NoError(t, f.Write(&b))
	return b.Bytes()
}

func set(t testing.TB, f *excelize.File, cell string, v any) {
	t.Helper()
	require.NoError(t, f.SetCellValue("antennas", cell, v))
}

func format(t testing.TB, f *excelize.File, cell, code string) {
	t.Helper()
	id, err := f.NewStyle(&excelize.Style{CustomNumFmt: &code})
	require.NoError(t, err)
	require.NoError(t, f.SetCellStyle("antennas", cell, cell, id))
}

func builtIn(t testing.TB, f *excelize.File, cell string, number int) {
	t.Helper()
	id, err := f.NewStyle(&excelize.Style{NumFmt: number})
	require.NoError(t, err)
	require.NoError(t, f.SetCellStyle("antennas", cell, cell, id))
}

// TestStoredValuesAreRead: what is stored counts, not what is shown.
func TestStoredValuesAreRead(t *testing.T) {
	data := typed(t, func(f *excelize.File) {
		set(t, f, "A2", "A1")
		set(t, f, "B2", true)
		set(t, f, "C2", 46112) // 2026-03-31
		format(t, f, "C2", "dd/mm/yyyy")
		require.NoError(t, f.SetCellDefault("antennas", "D2", "0.10000000000000001"))
		set(t, f, "E2", 0.75)
		format(t, f, "E2", "0%")
		set(t, f, "F2", 1234.5678)
		format(t, f, "F2", `#,##0.0" dBi"`)
		set(t, f, "G2", " 900 ")
		set(t, f, "A4", 7)
		set(t, f, "C4", "2026-03-31")
		builtIn(t, f, "D4", 2)
		require.NoError(t, f.SetCellDefault("antennas", "D4", "0.3"))
		builtIn(t, f, "E4", 2)
		require.NoError(t, f.SetCellDefault("antennas", "E4", "0.123456"))
		set(t, f, "F4", 1.5e-9)
		require.NoError(t, f.SetCellRichText("antennas", "G4", []excelize.RichTextRun{{Text: "bold "}, {Text: "and plain", Font: &excelize.Font{Bold: true}}}))
	})
	grids, faults, warnings := readWorkbook("site.xlsx", data, tableNames())
	require.Empty(t, faults)
	assert.Empty(t, warnings)
	require.Len(t, grids, 1)
	require.Len(t, grids[0].rows, 3)
	assert.Equal(t, []string{"A1", "TRUE", "2026-03-31", "0.1", "0.75", "1234.5678", "900"}, grids[0].rows[1].cells)
	assert.Equal(t, []string{"7", "", "2026-03-31", "0.30", "0.123456", "1.5e-09", "bold and plain"}, grids[0].rows[2].cells)
	assert.Equal(t, 4, grids[0].rows[2].number)
	assert.Equal(t, "F", grids[0].rows[2].col(5))
}

// TestDatesByStyleAndEpoch: the same day number under both epochs, and times.
// Source: ECMA-376 Part 1, 18.17.4 (from memory): 1 January 1904 is day 0 of the
// one epoch and day 1462 of the other.
func TestDatesByStyleAndEpoch(t *testing.T) {
	for _, c := range []struct {
		day      float64
		code     string
		date1904 bool
		want     string
	}{
		{46112, "yyyy-mm-dd", false, "2026-03-31"},
		{46112 - 1462, "yyyy-mm-dd", true, "2026-03-31"},
		{46112.5, "d.m.yy hh:mm", false, "2026-03-31T12:00:00"},
		{0.25, "hh:mm", false, "06:00:00"},
		{0.25, "[h]:mm", false, "06:00:00"},
		{46112, `"day "0`, false, "46112"},
		{46112, "mmm yyyy", false, "2026-03-31"},
		{46112, `[Red]0.0;[Blue]-0.0`, false, "46112.0"},
		{46112, "General", false, "46112"},
	} {
		data := typed(t, func(f *excelize.File) {
			set(t, f, "A2", "A1")
			set(t, f, "C2", c.day)
			format(t, f, "C2", c.code)
			require.NoError(t, f.SetWorkbookProps(&excelize.WorkbookPropsOptions{Date1904: &c.date1904}))
		})
		grids, faults, _ := readWorkbook("site.xlsx", data, tableNames())
		require.Empty(t, faults, c.code)
		assert.Equal(t, c.want, grids[0].rows[1].cell(2), "%v under %s", c.day, c.code)
	}
}

// TestFaultsOfCells: each names its cell as the user sees it.
func TestFaultsOfCells(t *testing.T) {
	for _, c := range []struct {
		name string
		fill func(f *excelize.File)
		want string
	}{
		{"formula never calculated", func(f *excelize.File) {
			require.NoError(t, f.SetCellFormula("antennas", "F12", "D12*2"))
		}, "site.xlsx antennas!F12: gain [dBi]: the formula has no stored value"},
		{"failed formula", func(f *excelize.File) {
			require.NoError(t, f.SetCellFormula("antennas", "D3", "1/0"))
		}, "site.xlsx antennas!D3: power [W]: "},
		{"percentage under a unit", func(f *excelize.File) {
			set(t, f, "D3", 0.5)
			builtIn(t, f, "D3", 9)
		}, "site.xlsx antennas!D3: power [W]: D3 is formatted as a percentage, so that 0.5 is stored and 50 % shown"},
		{"merged", func(f *excelize.File) {
			require.NoError(t, f.MergeCell("antennas", "B2", "C3"))
		}, "site.xlsx antennas!B2: service: the cells B2 to C3 are merged"},
		{"date before all dates", func(f *excelize.File) {
			set(t, f, "C2", -5)
			format(t, f, "C2", "yyyy-mm-dd")
		}, "site.xlsx antennas!C2: data date: a date of day number -5 does not exist"},
	} {
		data := typed(t, func(f *excelize.File) {
			for row := 2; row <= 12; row++ {
				set(t, f, cellName(1, row), "A"+cellName(1, row))
			}
			c.fill(f)
		})
		_, faults, _ := readWorkbook("site.xlsx", data, tableNames())
		if assert.Len(t, faults, 1, c.name) {
			assert.True(t, strings.HasPrefix(faults[0].Error(), c.want), "%s: %s", c.name, faults[0].Error())
		}
	}
}

// TestErrorValues: what a failed formula leaves is a fault even where its # would
// make the row a comment.
func TestErrorValues(t *testing.T) {
	data := repack(t, typed(t, func(f *excelize.File) {
		set(t, f, "A2", 11)
		set(t, f, "D2", 22)
		set(t, f, "A3", "# a remark")
		set(t, f, "D3", 33)
	}), func(name, body string) (string, string, bool) {
		if name == "xl/worksheets/sheet1.xml" {
			for _, v := range []string{"11", "22", "33"} {
				require.Contains(t, body, "><v>"+v+"</v>")
				body = strings.Replace(body, "><v>"+v+"</v>", ` t="e"><v>#N/A</v>`, 1)
			}
		}
		return name, body, true
	})
	_, faults, _ := readWorkbook("site.xlsx", data, tableNames())
	require.Len(t, faults, 2)
	assert.Contains(t, faults[0].Error(), `antennas!A2: id: "#N/A" is what a formula gives that failed`)
	assert.Contains(t, faults[1].Error(), `antennas!D2: power [W]: "#N/A"`)
}

// TestFormulaWithStoredValue: the value that the spreadsheet program saved counts.
func TestFormulaWithStoredValue(t *testing.T) {
	data := repack(t, typed(t, func(f *excelize.File) {
		set(t, f, "A2", "A1")
		set(t, f, "D2", 40)
		require.NoError(t, f.SetCellFormula("antennas", "D3", "D2/2"))
		set(t, f, "A3", "A2")
	}), func(name, body string) (string, string, bool) {
		return name, strings.Replace(body, "</f>", "</f><v>20</v>", 1), true
	})
	grids, faults, _ := readWorkbook("site.xlsx", data, tableNames())
	require.Empty(t, faults)
	assert.Equal(t, "20", grids[0].rows[2].cell(3))
}

// TestWarningsOfSheets: what is hidden is read, and said; a sheet of another name
// is not read, and said.
func TestWarningsOfSheets(t *testing.T) {
	data := typed(t, func(f *excelize.File) {
		set(t, f, "A2", "A1")
		set(t, f, "A3", "A2")
		require.NoError(t, f.SetRowVisible("antennas", 3, false))
		require.NoError(t, f.SetColVisible("antennas", "D", false))
		for _, name := range []string{"antenas", "Rough notes", "empty", "site"} {
			_, err := f.NewSheet(name)
			require.NoError(t, err)
			if name != "empty" {
				require.NoError(t, f.SetCellValue(name, "A1", "item"))
			}
		}
		require.NoError(t, f.SetSheetVisible("site", false))
	})
	grids, faults, warnings := readWorkbook("site.xlsx", data, tableNames())
	require.Empty(t, faults)
	require.Len(t, grids, 2)
	assert.Len(t, grids[0].rows, 3)
	require.Len(t, grids[0].warnings, 2)
	assert.Equal(t, "site.xlsx antennas!3", grids[0].warnings[0].Place)
	assert.Contains(t, grids[0].warnings[0].Message, "1 row is hidden")
	assert.Equal(t, "site.xlsx antennas!D1", grids[0].warnings[1].Place)
	assert.Contains(t, grids[0].warnings[1].Message, `the column "power [W]" is hidden`)
	require.Len(t, grids[1].warnings, 1)
	assert.Contains(t, grids[1].warnings[0].Message, "the sheet is hidden")
	require.Len(t, warnings, 2)
	assert.Contains(t, warnings[0].Message, `no table is named "antenas", so the sheet is not read; did you mean "antennas"?`)
	assert.Contains(t, warnings[1].Message, `no table is named "Rough notes"`)
}

// TestSheetNames: letter case and blanks do not count, and a table stands once.
func TestSheetNames(t *testing.T) {
	data := typed(t, func(f *excelize.File) {
		require.NoError(t, f.SetSheetName("antennas", " Antennas"))
	})
	grids, faults, _ := readWorkbook("site.xlsx", data, tableNames())
	require.Empty(t, faults)
	require.Len(t, grids, 1)
	assert.Equal(t, "antennas", grids[0].table)
	assert.Equal(t, " Antennas", grids[0].sheet)

	data = typed(t, func(f *excelize.File) {
		_, err := f.NewSheet("Antennas ")
		require.NoError(t, err)
		require.NoError(t, f.SetCellValue("Antennas ", "A1", "id"))
	})
	_, faults, _ = readWorkbook("site.xlsx", data, tableNames())
	require.Len(t, faults, 1)
	assert.Contains(t, faults[0].Message, `the sheet "antennas" is the table antennas as well`)

	data = typed(t, func(f *excelize.File) { require.NoError(t, f.SetSheetName("antennas", "masts")) })
	_, faults, _ = readWorkbook("site.xlsx", data, tableNames())
	require.Len(t, faults, 1)
	assert.Contains(t, faults[0].Message, "no sheet bears the name of a table")
}

// TestMergedCellsOutsideTheTable: a title over the table is a comment and may be
// merged, and so may cells beside the table.
func TestMergedCellsOutsideTheTable(t *testing.T) {
	data := typed(t, func(f *excelize.File) {
		set(t, f, "A2", "# a title")
		require.NoError(t, f.MergeCell("antennas", "A2", "F2"))
		require.NoError(t, f.MergeCell("antennas", "J1", "K3"))
		set(t, f, "A3", "A1")
	})
	_, faults, _ := readWorkbook("site.xlsx", data, tableNames())
	assert.Empty(t, faults)
}
