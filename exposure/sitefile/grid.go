package sitefile

import (
	"fmt"
	"strings"

	"example.org/standclear/exposure"
)

// grid is one table as its carrier (a CSV file or a sheet) gives it: text cells
// in rows, the comment rows kept apart, nothing interpreted. Both carriers make
// grids, and everything after that is shared:
//
//	readCSV(file, table string, data []byte, windows1252 bool) (*grid, Faults)
//	readWorkbook(file string, data []byte) ([]*grid, Faults)
//
// Either may return grids and faults together; a fault means that nothing of
// the input is used, yet the rest is read on to find the other faults.
type grid struct {
	table string // antennas, in lower case: the name the schema knows
	file  string // antennas.csv, or site.xlsx
	sheet string // antennas in a workbook, "" for a CSV file
	// decimalComma says that a comma may stand for the decimal point.
	decimalComma bool
	// rows are the header row and the rows under it, in order. Blank rows and
	// rows whose first cell starts with # are not among them.
	rows []gridRow
	// comments are the rows whose first cell starts with #, wherever they stand.
	comments []gridRow
	// warnings are what the carrier noticed (a hidden row, a sheet of an unknown
	// name): things an assessor must know that do not stop the reading.
	warnings []exposure.Warning
}

// gridRow is one row of a grid.
type gridRow struct {
	number int      // the line of a CSV file or the row of a sheet, from one
	cells  []string // trimmed of outer blanks
	// col names column i (from 0) as the user sees it ("F" in a workbook); nil in
	// a CSV file, where the header names it.
	col func(i int) string
}

// cell returns the text in column i, "" beyond the row's end.
func (r gridRow) cell(i int) string {
	if i < 0 || i >= len(r.cells) {
		return ""
	}
	return r.cells[i]
}

// add takes one row from a carrier and puts it where it belongs: a row without
// text is dropped, one that starts with # is a comment.
func (g *grid) add(r gridRow) {
	n := len(r.cells)
	for n > 0 && r.cells[n-1] == "" {
		n--
	}
	r.cells = r.cells[:n]
	switch {
	case n == 0:
	case strings.HasPrefix(r.cells[0], "#"):
		g.comments = append(g.comments, r)
	default:
		g.rows = append(g.rows, r)
	}
}

// place names a row of the grid: antennas.csv:7 or site.xlsx antennas!7. Row 0
// is the table as a whole.
func (g *grid) place(row int) string { return placeOf(g.file, g.sheet, "", row) }

func placeOf(file, sheet, col string, row int) string {
	switch {
	case sheet == "" && row == 0:
		return file
	case sheet == "":
		return fmt.Sprintf("%s:%d", file, row)
	case row == 0:
		return file + " " + sheet
	}
	return fmt.Sprintf("%s %s!%s%d", file, sheet, col, row)
}
