package sitefile

import (
	"bytes"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"github.com/xuri/excelize/v2"
)

// TestNumberChecksAreTheReadersRules: the check in the sheet takes just what the
// range of the schema takes, for every numeric column and around every bound.
func TestNumberChecksAreTheReadersRules(t *testing.T) {
	f := excelize.NewFile()
	defer f.Close()
	checked := 0
	for _, table := range Schema() {
		for _, c := range table.Columns {
			if c.Kind != Number {
				continue
			}
			r := Range{}
			if c.Range != nil {
				r = *c.Range
			}
			p := planColumn(c)
			kind, operator, first, second := numberCheck(p, "B1")
			for _, v := range []float64{r.Min - 1, r.Min - 1e-6, r.Min, r.Min + 1e-6, r.Min + 1, r.Min + 1.5, r.Max - 1e-6, r.Max, r.Max + 1e-6, r.Max + 1, 1e9, -1e9} {
				checked++
				assert.Equal(t, r.allows(v), takes(t, f, kind, operator, first, second, v), "%s %s: %g under %s %s %s %s", table.Name, c.Name, v, kind, operator, first, second)
			}
			for _, word := range append([]string{"unsure"}, c.Words...) {
				assert.Equal(t, slices.Contains(c.Words, word), takes(t, f, kind, operator, first, second, word), "%s %s: %s", table.Name, c.Name, word)
			}
		}
	}
	assert.Greater(t, checked, 500)
}

// takes works out a check as a spreadsheet program does.
func takes(t testing.TB, f *excelize.File, kind, operator, first, second string, v any) bool {
	t.Helper()
	if kind == "custom" {
		require.NoError(t, f.SetCellValue("Sheet1", "B1", v))
		require.NoError(t, f.SetCellFormula("Sheet1", "C1", first))
		got, err := f.CalcCellValue("Sheet1", "C1")
		require.NoError(t, err, first)
		return got == "TRUE"
	}
	n, ok := v.(float64)
	if !ok || kind == "whole" && n != float64(int64(n)) {
		return false
	}
	a, err := strconv.ParseFloat(first, 64)
	require.NoError(t, err)
	switch operator {
	case "between":
		b, err := strconv.ParseFloat(second, 64)
		require.NoError(t, err)
		return a <= n && n <= b
	case "greaterThan":
		return n > a
	case "greaterThanOrEqual":
		return n >= a
	case "lessThanOrEqual":
		return n <= a
	}
	t.Fatalf("operator %q", operator)
	return false
}

// TestFillInWorkbookForItsUser: drop-downs list the schema's choices, headers are
// locked and noted, the cells below are free.
func TestFillInWorkbookForItsUser(t *testing.T) {
	f, err := excelize.OpenReader(bytes.NewReader(fillInBytes(t)))
	require.NoError(t, err)
	defer f.Close()
	locked := func(sheet, cell string) bool {
		id, err := f.GetCellStyle(sheet, cell)
		require.NoError(t, err)
		s, err := f.GetStyle(id)
		require.NoError(t, err)
		return s.Protection == nil || s.Protection.Locked
	}
	for _, table := range Schema() {
		plan := fillInPlan(table)
		checks, err := f.GetDataValidations(table.Name)
		require.NoError(t, err)
		comments, err := f.GetComments(table.Name)
		require.NoError(t, err)
		protection, err := f.GetSheetProtection(table.Name)
		require.NoError(t, err)
		assert.True(t, protection.DeleteRows && protection.InsertRows, table.Name)
		want := len(table.Columns)
		if table.Vertical {
			want += 2
		}
		assert.Len(t, comments, want, "%s: a note at each header", table.Name)
		at := func(i int) (header, cell string) { return cellName(i+1, 2), cellName(i+1, 4) }
		columns := plan.columns
		if table.Vertical {
			columns = plan.labels
			at = func(i int) (header, cell string) { return cellName(1, 3+i), cellName(2, 3+i) }
		}
		for i, c := range columns {
			header, cell := at(i)
			assert.True(t, locked(table.Name, header), "%s!%s", table.Name, header)
			assert.False(t, locked(table.Name, cell), "%s!%s", table.Name, cell)
			schema, ok := table.Column(c.name)
			require.True(t, ok, c.header)
			if schema.Kind != Choice {
				continue
			}
			assert.Equal(t, schema.Choices, listed(t, f, checks, cell), "%s %s", table.Name, schema.Name)
		}
	}
	visible, err := f.GetSheetVisible(sheetChoices)
	require.NoError(t, err)
	assert.False(t, visible)
}

// listed returns what the drop-down of a cell lists.
func listed(t testing.TB, f *excelize.File, checks []*excelize.DataValidation, cell string) []string {
	t.Helper()
	col, row, err := excelize.CellNameToCoordinates(cell)
	require.NoError(t, err)
	for _, dv := range checks {
		r, err := parseRange(dv.Sqref)
		require.NoError(t, err)
		if dv.Type != "list" || row < r.row1 || row > r.row2 || col < r.col1 || col > r.col2 {
			continue
		}
		sheet, ref, ok := strings.Cut(strings.ReplaceAll(dv.Formula1, "$", ""), "!")
		require.True(t, ok)
		list, err := parseRange(ref)
		require.NoError(t, err)
		var out []string
		for n := list.row1; n <= list.row2; n++ {
			v, err := f.GetCellValue(sheet, cellName(list.col1, n))
			require.NoError(t, err)
			out = append(out, v)
		}
		assert.True(t, dv.ShowErrorMessage)
		return out
	}
	return nil
}

// TestListsPointToSheetsThatAreThere: a drop-down of a sheet that a site does not
// have would make a spreadsheet program repair the file.
func TestListsPointToSheetsThatAreThere(t *testing.T) {
	places := slices.DeleteFunc(demoGrids(t), func(g *grid) bool { return g.table == "surfaces" })
	var b bytes.Buffer
	require.NoError(t, writeGrids(&b, places))
	for _, data := range [][]byte{fillInBytes(t), demoWorkbook(t), b.Bytes()} {
		f, err := excelize.OpenReader(bytes.NewReader(data))
		require.NoError(t, err)
		lists := 0
		for _, sheet := range f.GetSheetList() {
			checks, err := f.GetDataValidations(sheet)
			require.NoError(t, err)
			for _, dv := range checks {
				if dv.Type == "list" {
					lists++
					from, _, _ := strings.Cut(dv.Formula1, "!")
					assert.Contains(t, f.GetSheetList(), from)
				}
			}
		}
		assert.Greater(t, lists, 5)
		require.NoError(t, f.Close())
	}
}
