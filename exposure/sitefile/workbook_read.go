package sitefile

import (
	"bytes"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/units"
	"github.com/xuri/excelize/v2"
)

// Sheets of the fill-in workbook that hold no table.
const (
	sheetChoices = "choices" // what the drop-downs list
	sheetGuide   = "how to fill in"
)

// readWorkbook makes grids of the sheets of a workbook that bear the known names
// of tables, in the order of the workbook. file is the name that faults give. The
// warnings are of sheets that are no table.
func readWorkbook(file string, data []byte, known []string) ([]*grid, Faults, []exposure.Warning) {
	scan, refused := verifyWorkbook(file, data)
	if refused != nil {
		return nil, Faults{*refused}, nil
	}
	f, err := excelize.OpenReader(bytes.NewReader(data), excelize.Options{RawCellValue: true,
		UnzipSizeLimit: workbookMaxUnpacked, UnzipXMLSizeLimit: workbookMaxUnpacked})
	if err != nil {
		return nil, Faults{{File: file, Message: damaged("%v", err).Error()}}, nil
	}
	defer f.Close()
	r := &workbookReader{file: file, scan: scan, book: f, known: known, byTable: map[string]*grid{}}
	for i := range scan.sheets {
		r.sheet(&scan.sheets[i])
	}
	if len(r.grids) == 0 && len(r.faults) == 0 {
		return nil, Faults{{File: file, Message: "no sheet bears the name of a table; the sheets are named " + strings.Join(known, ", ")}}, nil
	}
	return r.grids, r.faults, r.warnings
}

type workbookReader struct {
	file     string
	scan     *workbookScan
	book     *excelize.File
	known    []string
	grids    []*grid
	byTable  map[string]*grid
	faults   Faults
	warnings []exposure.Warning // of sheets that are no table
}

// sheet reads one sheet where its name is that of a table.
func (r *workbookReader) sheet(s *sheetScan) {
	table := strings.Join(strings.Fields(strings.ToLower(s.name)), " ")
	place := placeOf(r.file, s.name, "", 0)
	fault := func(message string) {
		r.faults = append(r.faults, Fault{File: r.file, Sheet: s.name, Message: message})
	}
	if table == sheetChoices || table == sheetGuide {
		return
	}
	if !slices.Contains(r.known, table) {
		if s.filled() {
			r.warnings = append(r.warnings, exposure.Warning{Place: place,
				Message: fmt.Sprintf("no table is named %q, so the sheet is not read%s", s.name, didYouMean(table, r.known))})
		}
		return
	}
	if twin := r.byTable[table]; twin != nil {
		fault(fmt.Sprintf("the sheet %q is the table %s as well; join the two", twin.sheet, table))
		return
	}
	g, faults, err := r.cells(s)
	if err != nil {
		fault(err.Error())
		return
	}
	g.table = table
	r.byTable[table] = g
	if len(g.rows) == 0 && len(g.comments) == 0 && len(faults) == 0 {
		return
	}
	r.faults = append(append(r.faults, faults...), mergedFaults(g, s)...)
	if s.hidden {
		g.warn(place, "the sheet is hidden and read all the same; unhide it to see what is reckoned with")
	}
	g.warnHidden(s)
	r.grids = append(r.grids, g)
}

func (g *grid) warn(place, format string, args ...any) {
	g.warnings = append(g.warnings, exposure.Warning{Place: place, Message: fmt.Sprintf(format, args...)})
}

// filled says whether anything is stored in the sheet.
func (s *sheetScan) filled() bool {
	return slices.ContainsFunc(s.rows, func(r rowScan) bool {
		return slices.ContainsFunc(r.cells, func(c cellScan) bool { return c.stored || c.formula })
	})
}

// cellFault is a fault of a cell before the header of its column is known.
type cellFault struct {
	row     gridRow
	i       int
	message string
	failed  bool // the row begins with a failed formula, which is no comment
}

// cells reads the rows of a sheet. The structure comes from the sheet's own XML,
// the text from the spreadsheet library; where the two differ the sheet is refused.
func (r *workbookReader) cells(s *sheetScan) (*grid, Faults, error) {
	g := &grid{file: r.file, sheet: s.name}
	rows, err := r.book.Rows(s.name)
	if err != nil {
		return nil, nil, damaged("sheet %s: %v", s.name, err)
	}
	defer rows.Close()
	var found []cellFault
	var percent []cellFault
	at := 0 // the row that the library stands on
	for _, scanned := range s.rows {
		var texts []string
		for at < scanned.number {
			if !rows.Next() {
				return nil, nil, damaged("sheet %s ends at row %d of %d", s.name, at, s.rows[len(s.rows)-1].number)
			}
			at++
			if texts, err = rows.Columns(); err != nil {
				return nil, nil, damaged("sheet %s row %d: %v", s.name, at, err)
			}
		}
		row := gridRow{number: scanned.number, col: func(i int) string { return columnLetters(i + 1) }}
		failed := len(scanned.cells) > 0 && scanned.cells[0].column == 1 && scanned.cells[0].kind == "e"
		for _, c := range scanned.cells {
			if !c.formula && !c.stored {
				continue
			}
			for len(row.cells) < c.column {
				row.cells = append(row.cells, "")
			}
			got := ""
			if c.column <= len(texts) {
				got = texts[c.column-1]
			}
			text, fault, err := r.cell(c, got)
			if err != nil {
				return nil, nil, damaged("cell %s!%s: %v", s.name, cellName(c.column, scanned.number), err)
			}
			row.cells[c.column-1] = strings.TrimSpace(text)
			if fault != "" {
				found = append(found, cellFault{row, c.column - 1, fault, failed})
			}
			if isNumber(c) && r.format(c).kind == percentShown {
				percent = append(percent, cellFault{row, c.column - 1, fmt.Sprintf(
					"%s is formatted as a percentage, so that %s is stored and %s %% shown; format the cell as a number and type the number in the unit of the header",
					cellName(c.column, scanned.number), text, hundredfold(text)), failed})
			}
		}
		g.add(row)
	}
	if rows.Next() || rows.Error() != nil {
		return nil, nil, damaged("sheet %s goes on after row %d", s.name, at)
	}
	header := gridRow{}
	if len(g.rows) > 0 {
		header = g.rows[0]
	}
	for _, p := range percent {
		if strings.Contains(header.cell(p.i), "[") && p.row.number > header.number {
			found = append(found, p)
		}
	}
	var faults Faults
	for _, c := range found {
		if strings.HasPrefix(c.row.cell(0), "#") && !c.failed {
			continue // nothing in a comment is read
		}
		faults = append(faults, g.fault(c.row, c.i, header.cell(c.i), "%s", c.message))
	}
	return g, faults, nil
}

func isNumber(c cellScan) bool { return (c.kind == "" || c.kind == "n") && c.value != "" }

func (r *workbookReader) format(c cellScan) numberFormat {
	if c.style < len(r.scan.formats) {
		return r.scan.formats[c.style]
	}
	return numberFormat{}
}

// cell returns the text of a cell as one would type it, the fault it has, or an
// error where what the library read (got) is not what the sheet stores.
func (r *workbookReader) cell(c cellScan, got string) (text, fault string, err error) {
	differs := fmt.Errorf("it stores %q and is read as %q", c.value, got)
	const uncalculated = "the formula has no stored value: the workbook was never calculated; open it in a spreadsheet program and save it, or type the value"
	if c.formula && !c.stored {
		return "", uncalculated, nil
	}
	switch c.kind {
	case "e":
		return c.value, fmt.Sprintf("%q is what a formula gives that failed; mend the formula or type the value", c.value), nil
	case "b":
		if want := map[string]string{"1": "TRUE", "0": "FALSE"}[c.value]; got == want || got == c.value {
			return want, "", nil
		}
		return "", "", differs
	case "d":
		return strings.TrimSuffix(c.value, "T00:00:00"), "", nil
	case "s":
		n, err := strconv.Atoi(c.value)
		if err != nil || n >= len(r.scan.texts) || (r.scan.texts[n] == "") != (got == "") {
			return "", "", differs
		}
		return got, "", nil
	case "str":
		if (c.value == "") != (got == "") {
			return "", "", differs
		}
		return got, "", nil
	case "inlineStr":
		return got, "", nil
	}
	if c.value == "" {
		if c.formula {
			return "", uncalculated, nil
		}
		if got != "" {
			return "", "", differs
		}
		return "", "", nil
	}
	v, err := units.ParseNumber(c.value, false)
	if err != nil {
		return "", "", err
	}
	if w, err := units.ParseNumber(got, false); err != nil || w != v {
		return "", "", differs
	}
	f := r.format(c)
	if f.kind == dateNumber || f.kind == timeNumber {
		text, err := dateText(v, f.kind, r.scan.date1904)
		if err != nil {
			return numberText(v), err.Error() + " does not exist; type the date as 2026-03-31", nil
		}
		return text, "", nil
	}
	return f.shown(v), "", nil
}

// hundredfold writes what a percentage format shows of a stored number.
func hundredfold(text string) string {
	v, err := units.ParseNumber(text, false)
	if err != nil {
		return text
	}
	return strconv.FormatFloat(v*100, 'g', 10, 64)
}

// mergedFaults returns a fault for each merged range that reaches into the table:
// only its first cell has a value, the others read as blank.
func mergedFaults(g *grid, s *sheetScan) Faults {
	if len(g.rows) == 0 {
		return nil
	}
	header := g.rows[0]
	var out Faults
	for _, m := range s.merged {
		if m.row1 == m.row2 && m.col1 == m.col2 || m.col1 > len(header.cells) {
			continue
		}
		for _, row := range g.rows {
			if row.number < m.row1 || row.number > m.row2 {
				continue
			}
			out = append(out, g.fault(row, m.col1-1, header.cell(m.col1-1), "the cells %s to %s are merged, and only the first has a value; unmerge them and fill each",
				cellName(m.col1, m.row1), cellName(m.col2, m.row2)))
			break
		}
	}
	return out
}

// warnHidden warns of rows and columns that are read but not seen.
func (g *grid) warnHidden(s *sheetScan) {
	hidden := map[int]bool{}
	for _, row := range s.rows {
		hidden[row.number] = row.hidden
	}
	var rows []int
	for _, row := range g.rows {
		if hidden[row.number] {
			rows = append(rows, row.number)
		}
	}
	if len(rows) > 0 {
		g.warn(g.place(rows[0]), "%s hidden or filtered out and read all the same; show it to see what is reckoned with", count(len(rows), "row is", "rows are"))
	}
	if len(g.rows) == 0 {
		return
	}
	for i, h := range g.rows[0].cells {
		for _, c := range s.hiddenColumns {
			if h != "" && c[0] <= i+1 && i+1 <= c[1] {
				g.warn(placeOf(g.file, g.sheet, columnLetters(i+1), g.rows[0].number), "the column %q is hidden and read all the same; show it to see what is reckoned with", h)
			}
		}
	}
}

func count(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
