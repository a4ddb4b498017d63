package reports

import (
	"archive/zip"
	"bytes"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"github.com/xuri/excelize/v2"
)

// program finds an office program; without it the test is passed over on a
// desk and fails where CI is set, which installs it.
func program(t *testing.T, name string) string {
	t.Helper()
	path, err := exec.LookPath(name)
	if err != nil {
		if os.Getenv("CI") == "true" {
			t.Fatalf("%s is missing: .ci/run installs it", name)
		}
		t.Skipf("%s is missing: the printed pages are not looked at", name)
	}
	return path
}

// convert runs the office program on a workbook and returns the result's path.
func convert(t *testing.T, raw []byte, to string) string {
	t.Helper()
	office := program(t, "soffice")
	dir := t.TempDir()
	in := filepath.Join(dir, "report.xlsx")
	require.NoError(t, os.WriteFile(in, raw, 0o666))
	out := filepath.Join(dir, "out")
	cmd := exec.CommandContext(t.Context(), office, "-env:UserInstallation=file://"+filepath.Join(dir, "profile"), "--headless", "--convert-to", to, "--outdir", out, in)
	text, err := cmd.CombinedOutput()
	require.NoError(t, err, "%s", text)
	path := filepath.Join(out, "report."+to)
	require.FileExists(t, path, "%s", text)
	return path
}

// Every sheet fits the width of its pages: a page that lacked the sheet's last
// columns would be a page more than the sheet's rows need, and would lack the
// last header of the row that is repeated on each page.
func TestPrintedPagesFitTheirWidth(t *testing.T) {
	if testing.Short() {
		t.Skip("starts an office program")
	}
	raw, f := sampleBook(t)
	pdf := convert(t, raw, "pdf")
	text, err := exec.CommandContext(t.Context(), program(t, "pdftotext"), "-layout", pdf, "-").Output()
	require.NoError(t, err)
	last := map[string]string{} // by sheet: the last word of the last header of the repeated row
	for _, sheet := range f.GetSheetList() {
		rows, err := f.GetRows(sheet)
		require.NoError(t, err)
		if repeats(f, sheet) {
			words := strings.Fields(rows[firstRow-1][len(rows[firstRow-1])-1])
			last[sheet] = words[len(words)-1]
		}
	}
	require.Greater(t, len(last), 8)
	pages := map[string]int{}
	for page := range strings.SplitSeq(strings.TrimRight(string(text), "\f"), "\f") {
		mark := regexp.MustCompile(`\s{2,}(\S.*), 2026-03-14\n`).FindStringSubmatch(page)
		require.NotNil(t, mark, "a page without its header:\n%s", page)
		sheet := mark[1]
		pages[sheet]++
		assert.Contains(t, page, footerCaution)
		if word, ok := last[sheet]; ok {
			assert.Contains(t, page, word, "a page of sheet %s lacks its last column", sheet)
		}
	}
	for _, sheet := range f.GetSheetList() {
		assert.Positive(t, pages[sheet], "sheet %s was not printed", sheet)
	}
	pictures, err := draw(t.Context(), sample(8, 6))
	require.NoError(t, err)
	for sheet, want := range map[string]int{"Cautions": 1, "Result": 1, "Site": 1, "Levels": 1, "Distances": 1, "Figures": len(pictures), "Sign-off": 2} {
		assert.Equal(t, want, pages[sheet], "pages of sheet %s", sheet)
	}
	if dir := os.Getenv("REPORT_PAGES"); dir != "" {
		require.NoError(t, os.MkdirAll(dir, 0o777))
		out, err := exec.CommandContext(t.Context(), program(t, "pdftoppm"), "-r", "80", "-png", pdf, filepath.Join(dir, "page")).CombinedOutput()
		require.NoError(t, err, "%s", out)
	}
}

// repeats reports whether a sheet repeats its header row on every page.
func repeats(f *excelize.File, sheet string) bool {
	for _, n := range f.GetDefinedName() {
		if n.Name == "_xlnm.Print_Titles" && n.Scope == sheet {
			return true
		}
	}
	return false
}

// The stored numbers are what most programs show; the formulas are what a
// reviewer follows. With the stored numbers taken out, an office program that
// works every formula out must come to the same numbers.
func TestFormulasGiveTheStoredNumbers(t *testing.T) {
	if testing.Short() {
		t.Skip("starts an office program")
	}
	raw, f := sampleBook(t)
	worked, err := excelize.OpenFile(convert(t, withoutStored(t, raw), "xlsx"))
	require.NoError(t, err)
	defer worked.Close()
	formulas := 0
	eachCell(t, f, func(sheet string, col, row int, kind excelize.CellType, text, formula string) {
		if formula == "" {
			return
		}
		formulas++
		name := cellName(col, row)
		want, err := strconv.ParseFloat(text, 64)
		require.NoError(t, err, "%s!%s", sheet, name)
		shown, err := worked.GetCellValue(sheet, name, excelize.Options{RawCellValue: true})
		require.NoError(t, err)
		got, err := strconv.ParseFloat(shown, 64)
		require.NoError(t, err, "%s!%s = %s gives %q", sheet, name, formula, shown)
		// 2e-9: the bound of agree, and the fifteen digits that a workbook keeps.
		assert.InDelta(t, want, got, 2e-9*math.Abs(want)+1e-300, "%s!%s = %s", sheet, name, formula)
	})
	assert.Greater(t, formulas, 200)
}

// withoutStored removes the stored number of every formula cell.
func withoutStored(t *testing.T, raw []byte) []byte {
	t.Helper()
	z, err := zip.NewReader(bytes.NewReader(raw), int64(len(raw)))
	require.NoError(t, err)
	stored := regexp.MustCompile(`(</f>)<v>[^<]*</v>`)
	var out bytes.Buffer
	w := zip.NewWriter(&out)
	removed := 0
	for _, p := range z.File {
		text, err := readPart(p)
		require.NoError(t, err)
		if strings.HasPrefix(p.Name, "xl/worksheets/sheet") {
			removed += len(stored.FindAll(text, -1))
			text = stored.ReplaceAll(text, []byte("$1"))
		}
		to, err := w.Create(p.Name)
		require.NoError(t, err)
		_, err = to.Write(text)
		require.NoError(t, err)
	}
	require.NoError(t, w.Close())
	require.Greater(t, removed, 200, "the sheets hold stored numbers beside formulas")
	return out.Bytes()
}
