package sitefile

import (
	"encoding/csv"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/exposure/sitefile/demo"
)

func TestInit(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "new", "site")
	files, err := Init(dir, InitOptions{})
	require.NoError(t, err)
	var tables []string
	for _, f := range files {
		require.FileExists(t, f)
		tables = append(tables, strings.TrimSuffix(filepath.Base(f), ".csv"))
	}
	assert.Equal(t, []string{"site", "antennas", "operators", "surfaces", "places", "limits", "readings", "instruments", "uncertainty", "columns", "scenarios"}, tables)

	// Every column of the schema stands there with its unit, and the example is
	// a comment: an empty site lacks only what it lacks.
	for _, f := range files {
		data, err := os.ReadFile(f)
		require.NoError(t, err)
		table := tableSchema(strings.TrimSuffix(filepath.Base(f), ".csv"))
		g, faults := readCSV(filepath.Base(f), table.Name, data, false)
		require.Empty(t, faults)
		require.NotEmpty(t, g.comments, f)
		var want, got []string
		for _, c := range table.Columns {
			want = append(want, c.Header())
		}
		if table.Vertical {
			for _, r := range g.rows[1:] {
				got = append(got, r.cell(0))
			}
		} else {
			require.Len(t, g.rows, 1, f)
			got = g.rows[0].cells
		}
		assert.ElementsMatch(t, want, got, f)
	}
	_, err = Load(dir, Options{})
	assert.EqualError(t, err, "site.csv:3: name: the cell is blank and every row needs it; write one, such as Mill Lane roof\n"+
		"limits.csv: the table has no rows; write one row for each class, quantity and band")

	_, err = Init(dir, InitOptions{})
	var faults Faults
	require.True(t, errors.As(err, &faults))
	assert.Equal(t, "the file exists and is not overwritten; name another folder, or move it away", faults[0].Message)
}

// The example rows are good rows: with their # taken away the site has no fault.
func TestInitExamplesAreRight(t *testing.T) {
	dir := t.TempDir()
	files, err := Init(dir, InitOptions{})
	require.NoError(t, err)
	for _, f := range files {
		data, err := os.ReadFile(f)
		require.NoError(t, err)
		var rows [][]string
		r := csv.NewReader(strings.NewReader(string(data)))
		r.FieldsPerRecord = -1
		all, err := r.ReadAll()
		require.NoError(t, err)
		vertical := filepath.Base(f) == "site.csv"
		for _, row := range all {
			switch {
			case vertical && !strings.HasPrefix(row[0], "# ") && row[0] != "item":
				continue // the blank items
			case strings.HasPrefix(row[0], "# ") && len(row) == 1:
				continue // who stands behind the limit table
			}
			row[0] = strings.TrimPrefix(row[0], "# ")
			rows = append(rows, row)
		}
		var b strings.Builder
		w := csv.NewWriter(&b)
		require.NoError(t, w.WriteAll(rows))
		if filepath.Base(f) == "columns.csv" || filepath.Base(f) == "scenarios.csv" {
			continue // they point at other rows
		}
		require.NoError(t, os.WriteFile(f, []byte(b.String()), 0o644))
	}
	s, err := Load(dir, Options{})
	require.NoError(t, err)
	require.Len(t, s.Sources, 1)
	assert.Equal(t, "A1", s.Sources[0].ID)
	require.Len(t, s.Places, 1)
}

func TestInitDemo(t *testing.T) {
	dir := t.TempDir()
	files, err := Init(dir, InitOptions{Demo: true})
	require.NoError(t, err)
	assert.Len(t, files, demoFileCount(t))
	fromDisk, err := Load(dir, Options{})
	require.NoError(t, err)
	embedded, err := LoadFS(demo.FS, Options{})
	require.NoError(t, err)
	assert.Equal(t, embedded.Inputs.Files, fromDisk.Inputs.Files, "the same bytes")
	assert.Equal(t, len(embedded.Sources), len(fromDisk.Sources))
	assert.GreaterOrEqual(t, len(embedded.Sources), 20)
}

func TestInitWritesNothingWhereOneFileExists(t *testing.T) {
	dir := t.TempDir()
	require.NoError(t, os.WriteFile(filepath.Join(dir, "places.csv"), []byte("mine"), 0o644))
	_, err := Init(dir, InitOptions{})
	require.Error(t, err)
	entries, err := os.ReadDir(dir)
	require.NoError(t, err)
	assert.Len(t, entries, 1)
	data, err := os.ReadFile(filepath.Join(dir, "places.csv"))
	require.NoError(t, err)
	assert.Equal(t, "mine", string(data))
}

func TestInitWorkbook(t *testing.T) {
	dir := t.TempDir()
	files, err := Init(dir, InitOptions{Workbook: true})
	require.NoError(t, err)
	require.Equal(t, []string{filepath.Join(dir, "site.xlsx")}, files)
	dir = t.TempDir()
	_, err = Init(dir, InitOptions{Workbook: true, Demo: true})
	require.NoError(t, err)
	book, err := Load(filepath.Join(dir, "site.xlsx"), Options{})
	require.NoError(t, err)
	folder, err := LoadFS(demo.FS, Options{})
	require.NoError(t, err)
	require.Equal(t, len(folder.Sources), len(book.Sources))
	for i := range folder.Sources {
		a, b := folder.Sources[i], book.Sources[i]
		a.Row, b.Row, a.Pattern, b.Pattern = nil, nil, nil, nil
		assert.Equal(t, a, b)
	}
	require.Equal(t, len(folder.Places), len(book.Places))
	require.Equal(t, len(folder.Limits.Rows), len(book.Limits.Rows))
	for i := range folder.Limits.Rows {
		a, b := folder.Limits.Rows[i], book.Limits.Rows[i]
		a.Line, b.Line = 0, 0
		assert.Equal(t, a, b)
	}
	assert.Equal(t, folder.Limits.About, book.Limits.About)
	assert.Equal(t, len(folder.Limits.Spots), len(book.Limits.Spots))
}

func demoFileCount(t *testing.T) (n int) {
	t.Helper()
	require.NoError(t, fs.WalkDir(demo.FS, ".", func(_ string, e fs.DirEntry, err error) error {
		if err == nil && !e.IsDir() {
			n++
		}
		return err
	}))
	return n
}

func TestLoadOfOtherThings(t *testing.T) {
	dir := t.TempDir()
	write := func(name, text string) string {
		t.Helper()
		name = filepath.Join(dir, name)
		require.NoError(t, os.WriteFile(name, []byte(text), 0o644))
		return name
	}
	_, err := Load(filepath.Join(dir, "nowhere"), Options{})
	assert.ErrorContains(t, err, "there is no such file or folder; give the site folder or the workbook")
	_, err = Load(write("antennas.csv", "id\n"), Options{})
	assert.ErrorContains(t, err, "this is one table of a site; give the folder that it lies in")
	_, err = Load(write("site.pdf", "%PDF"), Options{})
	assert.EqualError(t, err, "site.pdf: this is neither a folder nor a workbook; give a site folder or an .xlsx file")

	table, inputs, err := LoadLimits(write("office.csv", small()["limits.csv"]), Options{})
	require.NoError(t, err)
	assert.Equal(t, []string{"public"}, table.Classes())
	assert.Equal(t, "office.csv", inputs.Files[0].Name)
	assert.NotEmpty(t, inputs.Warnings)

	s, err := loadFiles(small(), Options{LimitsFile: filepath.Join(dir, "office.csv")})
	require.NoError(t, err)
	assert.Contains(t, warningLines(s), "limits.csv: the file is not read: the limits come from office.csv")

	places, err := LoadPlaces(write("points.csv", "id,x [m],y [m],on,to [m],class\np,1,2,roof,2,public\n"), s, Options{})
	require.NoError(t, err)
	assert.Equal(t, "p", places[0].ID)
	_, err = LoadPlaces(write("points.csv", "id,x [m],y [m],on,to [m],class\np,1,2,attic,2,nobody\n"), s, Options{})
	assert.EqualError(t, err, `points.csv:2: on: there is no surface "attic"; it may be one of roof`+"\n"+
		`points.csv:2: class: the limit table has no class "nobody"; it may be one of public`)
}

func TestSchemaIsSound(t *testing.T) {
	seen := map[string]bool{}
	for _, table := range Schema() {
		assert.False(t, seen[table.Name])
		seen[table.Name] = true
		assert.NotEmpty(t, table.Help)
		names := map[string]bool{}
		for _, c := range table.Columns {
			assert.False(t, names[strings.ToLower(c.Name)], "%s: %s twice", table.Name, c.Name)
			names[strings.ToLower(c.Name)] = true
			assert.NotEmpty(t, c.Help, "%s: %s", table.Name, c.Name)
			assert.False(t, c.Required && c.Default != "", "%s: %s is required and has a default", table.Name, c.Name)
			if c.Kind == Choice && c.Default != "" {
				assert.Contains(t, c.Choices, c.Default)
			}
		}
	}
	// A caller's change of the list does not reach the reader.
	Schema()[0].Columns[0].Name = "changed"
	assert.Equal(t, "name", Schema()[0].Columns[0].Name)
}
