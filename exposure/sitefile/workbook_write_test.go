package sitefile

import (
	"bytes"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile/demo"
	"example.org/standclear/exposure/units"
	"example.org/standclear/limits"
	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"github.com/xuri/excelize/v2"
	"pgregory.net/rapid"
)

// rowsOf returns the cells of a grid's rows without their numbers, short rows
// filled up to the header.
func rowsOf(g *grid) [][]string {
	var out [][]string
	for _, r := range g.rows {
		cells := slices.Clone(r.cells)
		for len(cells) < len(g.rows[0].cells) {
			cells = append(cells, "")
		}
		out = append(out, cells)
	}
	return out
}

// TestTablesSurviveTheWorkbook: every cell of every CSV table of the demo site
// comes back from the workbook as it was typed.
func TestTablesSurviveTheWorkbook(t *testing.T) {
	want := demoGrids(t)
	grids, faults, warnings := readWorkbook("site.xlsx", demoWorkbook(t), tableNames())
	require.Empty(t, faults)
	require.Empty(t, warnings)
	byTable := map[string]*grid{}
	for _, g := range grids {
		byTable[g.table] = g
		assert.Empty(t, g.warnings, g.table)
	}
	for _, w := range want {
		require.NotNil(t, byTable[w.table], w.table)
		assert.Equal(t, rowsOf(w), rowsOf(byTable[w.table]), w.table)
	}
}

// demoFolder writes the demo site, with its tables as a workbook or as CSV files.
func demoFolder(t testing.TB, workbook []byte) string {
	t.Helper()
	dir := t.TempDir()
	require.NoError(t, fs.WalkDir(demo.FS, ".", func(name string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		if workbook != nil && tableSchema(strings.TrimSuffix(name, ".csv")) != nil {
			return nil
		}
		data, err := fs.ReadFile(demo.FS, name)
		if err != nil {
			return err
		}
		return os.WriteFile(filepath.Join(dir, name), data, 0o666)
	}))
	if workbook == nil {
		return dir
	}
	name := filepath.Join(dir, "site.xlsx")
	require.NoError(t, os.WriteFile(name, workbook, 0o666))
	return name
}

// loaded reads a site and takes away what says where it was read from.
func loaded(t testing.TB, name string) *exposure.Site {
	t.Helper()
	s, err := Load(name, Options{})
	require.NoError(t, err)
	s.Inputs = exposure.Inputs{}
	for i := range s.Sources {
		s.Sources[i].Row = nil
	}
	for i := range s.Operators {
		s.Operators[i].Row = nil
	}
	for i := range s.Surfaces {
		s.Surfaces[i].Row = nil
	}
	for i := range s.Places {
		s.Places[i].Row = nil
	}
	return s
}

// assertSameSite compares two sites value by value, exactly: the same text makes
// the same number.
func assertSameSite(t *testing.T, want, got *exposure.Site) {
	t.Helper()
	assert.Equal(t, want.About, got.About)
	assert.Equal(t, want.Ground, got.Ground)
	assert.Equal(t, want.Operators, got.Operators)
	assert.Equal(t, want.Surfaces, got.Surfaces)
	assert.Equal(t, want.Places, got.Places)
	require.Len(t, got.Sources, len(want.Sources))
	for i := range want.Sources {
		assert.Equal(t, want.Sources[i], got.Sources[i], want.Sources[i].ID)
	}
	assert.Equal(t, want.Limits.About, got.Limits.About)
	assert.Equal(t, withoutLines(want.Limits).Rows, withoutLines(got.Limits).Rows)
	assert.Equal(t, withoutLines(want.Limits).Spots, withoutLines(got.Limits).Spots)
}

// withoutLines returns a copy of a table that does not say where its rows stood.
func withoutLines(table *limits.Table) limits.Table {
	out := limits.Table{Rows: slices.Clone(table.Rows), Spots: slices.Clone(table.Spots)}
	for i := range out.Rows {
		out.Rows[i].Line = 0
	}
	for i := range out.Spots {
		out.Spots[i].Line = 0
	}
	return out
}

// TestWorkbookGivesTheSameSite: the demo site from its folder and from a workbook.
func TestWorkbookGivesTheSameSite(t *testing.T) {
	want := loaded(t, demoFolder(t, nil))
	assertSameSite(t, want, loaded(t, demoFolder(t, demoWorkbook(t))))
}

// TestFilledInWorkbookGivesTheSameSite fills the workbook that Init writes with
// the demo site's data, as a user does, and reads it.
func TestFilledInWorkbookGivesTheSameSite(t *testing.T) {
	want := loaded(t, demoFolder(t, nil))
	assertSameSite(t, want, loaded(t, demoFolder(t, fillIn(t, fillInBytes(t), demoGrids(t)))))
}

// fillIn types tables into the workbook by header and item; figures as numbers,
// days as dates, all else as text.
func fillIn(t testing.TB, data []byte, grids []*grid) []byte {
	t.Helper()
	f, err := excelize.OpenReader(bytes.NewReader(data))
	require.NoError(t, err)
	defer f.Close()
	type_ := func(sheet string, column, row int, text string) {
		cell := cellName(column, row)
		if v, err := strconv.ParseFloat(text, 64); err == nil {
			require.NoError(t, f.SetCellValue(sheet, cell, v))
		} else if day, err := time.Parse(time.DateOnly, text); err == nil {
			style, err := f.GetCellStyle(sheet, cell)
			require.NoError(t, err)
			require.NoError(t, f.SetCellValue(sheet, cell, day))
			if style != 0 { // the program keeps the format of the cell
				require.NoError(t, f.SetCellStyle(sheet, cell, cell, style))
			}
		} else {
			require.NoError(t, f.SetCellStr(sheet, cell, text))
		}
	}
	rows := func(sheet string) [][]string {
		all, err := f.GetRows(sheet)
		require.NoError(t, err)
		return all
	}
	for _, g := range grids {
		sheet := rows(g.table)
		if tableSchema(g.table).Vertical {
			for _, r := range g.rows[1:] {
				at := slices.IndexFunc(sheet, func(cells []string) bool { return len(cells) > 0 && cells[0] == r.cell(0) })
				require.GreaterOrEqual(t, at, 0, r.cell(0))
				type_(g.table, 2, at+1, r.cell(1))
			}
			continue
		}
		header := sheet[1]
		for n, r := range g.rows[1:] {
			for i, text := range r.cells {
				at := slices.Index(header, g.rows[0].cell(i))
				require.GreaterOrEqual(t, at, 0, "%s: no column %q in the fill-in workbook", g.table, g.rows[0].cell(i))
				if text != "" {
					type_(g.table, at+1, 4+n, text)
				}
			}
		}
		for _, r := range g.comments {
			key, value, _ := strings.Cut(strings.TrimPrefix(r.cell(0), "#"), ":")
			key, value = strings.TrimSpace(key), strings.TrimSpace(value)
			if key == "spot" {
				row := len(rows(limitsSpotsTable.Name)) + 1
				for i, text := range append([]string{value}, r.cells[1:]...) {
					type_(limitsSpotsTable.Name, i+1, row, text)
				}
				continue
			}
			about := rows(limitsAboutTable.Name)
			at := slices.IndexFunc(about, func(cells []string) bool { return len(cells) > 0 && cells[0] == key })
			if at >= 0 && value != "" {
				type_(limitsAboutTable.Name, 2, at+1, strings.Join(append([]string{value}, r.cells[1:]...), ", "))
			}
		}
	}
	var b bytes.Buffer
	require.NoError(t, f.Write(&b))
	return b.Bytes()
}

// TestSpreadsheetProgramSavesTheSame: the filled-in workbook, opened and saved by
// a spreadsheet program, still gives the same site.
func TestSpreadsheetProgramSavesTheSame(t *testing.T) {
	office, err := exec.LookPath("libreoffice")
	if err != nil || testing.Short() {
		t.Skip("needs libreoffice, and time")
	}
	dir := t.TempDir()
	for name, data := range map[string][]byte{"filled": fillIn(t, fillInBytes(t), demoGrids(t)), "demo": demoWorkbook(t)} {
		in := filepath.Join(dir, name+".xlsx")
		require.NoError(t, os.WriteFile(in, data, 0o666))
		cmd := exec.Command(office, "-env:UserInstallation=file://"+filepath.Join(dir, "profile"), "--headless",
			"--convert-to", "xlsx", "--outdir", filepath.Join(dir, "out"), in)
		out, err := cmd.CombinedOutput()
		require.NoError(t, err, string(out))
		saved, err := os.ReadFile(filepath.Join(dir, "out", name+".xlsx"))
		require.NoError(t, err)
		assertSameSite(t, loaded(t, demoFolder(t, nil)), loaded(t, demoFolder(t, saved)))
	}
}

// TestTextStaysText: whatever a cell says comes back as it was, and is no formula.
func TestTextStaysText(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		lead := rapid.SampledFrom([]string{"", "=", "+", "-", "@", "\t", "_x0041_", "__x000D_x000D_", "_x005F_x005f_xGGGG_", "007", "1e3", "'", "<", "&"}).Draw(rt, "lead")
		body := rapid.StringMatching(`[ -~äµΩ中😀]{0,20}`).Draw(rt, "body")
		text := strings.TrimSpace(lead + body)
		kind := rapid.SampledFrom([]cellKind{textCell, numberCell, dateCell}).Draw(rt, "kind")
		var b bytes.Buffer
		plan := sheetPlan{name: "antennas", columns: []columnPlan{{header: "id", width: 10}, {header: "x", kind: kind, width: 10}},
			rows: []rowPlan{{cells: []string{"A1", text}}}}
		require.NoError(rt, writeWorkbook(&b, []sheetPlan{plan}))
		grids, faults, _ := readWorkbook("site.xlsx", b.Bytes(), tableNames())
		require.Empty(rt, faults)
		require.Equal(rt, text, grids[0].rows[1].cell(1))
		f, err := excelize.OpenReader(bytes.NewReader(b.Bytes()))
		require.NoError(rt, err)
		formula, err := f.GetCellFormula("antennas", "B3")
		require.NoError(rt, err)
		require.Empty(rt, formula)
		require.NoError(rt, f.Close())
	})
}

// TestTextThatNoCellCanHold is refused, not cut or replaced.
func TestTextThatNoCellCanHold(t *testing.T) {
	for _, text := range []string{"bell\a", strings.Repeat("x", 32768), "\xff"} {
		plan := sheetPlan{name: "antennas", columns: []columnPlan{{header: "id", width: 10}}, rows: []rowPlan{{cells: []string{text}}}}
		err := writeWorkbook(&bytes.Buffer{}, []sheetPlan{plan})
		require.Error(t, err)
		assert.Contains(t, err.Error(), "antennas!A3")
	}
}

// TestNumbersKeepAllDigits: every float64 and every way of typing one.
func TestNumbersKeepAllDigits(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		v := rapid.Float64().Draw(rt, "v")
		text := numberText(v)
		back, err := units.ParseNumber(text, false)
		require.NoError(rt, err)
		require.Equal(rt, v, back)
		require.GreaterOrEqual(rt, typedDecimals(text), 0)
	})
	for text, decimals := range map[string]int{"0.30": 2, "20.0": 1, "20": 0, "-0.5": 1, "0.00": 2, "1e3": -1, "+5": -1, ".5": -1, "5.": -1, "007": -1, "A1": -1, "": -1} {
		assert.Equal(t, decimals, typedDecimals(text), text)
	}
}

// TestEveryTableSurvives: the schema's own example row of every table, also of
// those that the demo site does not have.
func TestEveryTableSurvives(t *testing.T) {
	var want []*grid
	for _, s := range Schema() {
		g := &grid{table: s.Name, file: s.Name + ".csv"}
		var header, row []string
		for _, c := range s.Columns {
			header, row = append(header, c.Header()), append(row, c.Example)
		}
		if s.Vertical {
			g.add(gridRow{number: 1, cells: []string{"item", "value"}})
			for i := range header {
				g.add(gridRow{number: 2 + i, cells: []string{header[i], row[i]}})
			}
		} else {
			g.add(gridRow{number: 1, cells: header})
			g.add(gridRow{number: 2, cells: row})
		}
		want = append(want, g)
	}
	var b bytes.Buffer
	require.NoError(t, writeGrids(&b, want))
	got, faults, warnings := readWorkbook("site.xlsx", b.Bytes(), tableNames())
	require.Empty(t, faults)
	require.Empty(t, warnings)
	require.Len(t, got, len(want))
	for i := range want {
		assert.Equal(t, want[i].table, got[i].table)
		assert.Equal(t, rowsOf(want[i]), rowsOf(got[i]), want[i].table)
	}
}

// TestFaultNamesTheCell: a fault of the shared reader names the cell of a sheet.
func TestFaultNamesTheCell(t *testing.T) {
	grids := demoGrids(t)
	column, cell := -1, ""
	for _, g := range grids {
		if g.table == "antennas" {
			column = slices.Index(g.rows[0].cells, "power [W]")
			require.GreaterOrEqual(t, column, 0)
			g.rows[2].cells[column] = "20O"
			cell = cellName(column+1, 4) // a line of advice, the header, the first row, then this one
		}
	}
	var b bytes.Buffer
	require.NoError(t, writeGrids(&b, grids))
	_, err := Load(demoFolder(t, b.Bytes()), Options{})
	var faults Faults
	require.ErrorAs(t, err, &faults)
	require.Len(t, faults, 1)
	assert.Equal(t, "site.xlsx antennas!"+cell+`: power [W]: "20O" is not a number; write digits only, such as 200`, faults[0].Error())
}
