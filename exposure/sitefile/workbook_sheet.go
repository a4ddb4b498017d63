package sitefile

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"

	"example.org/standclear/exposure/units"
	"github.com/xuri/excelize/v2"
)

// sheetLimits names a sheet and says how many cell styles there are.
type sheetLimits struct {
	name   string
	styles int
}

// scanSheet walks the cells of one sheet. Rows and cells must ascend, and each
// must lie in the caps; references to texts and styles must exist.
func scanSheet(one part, lim sheetLimits) (*sheetScan, error) {
	w := sheetWalk{part: one.name, lim: lim, sheet: &sheetScan{name: lim.name}}
	d := xml.NewDecoder(bytes.NewReader(one.data))
	var open []string // the elements around the token
	for {
		token, err := d.Token()
		if err == io.EOF && !w.begun {
			return nil, damaged("part %s is empty", one.name)
		}
		if err == io.EOF {
			return w.sheet, nil
		}
		if err != nil {
			return nil, damaged("part %s: %v", one.name, err)
		}
		switch t := token.(type) {
		case xml.StartElement:
			w.begun = true
			open = append(open, t.Name.Local)
			if err := w.start(open, t.Attr); err != nil {
				return nil, err
			}
		case xml.EndElement:
			open = open[:len(open)-1]
		case xml.CharData:
			if w.cell != nil && len(open) == 5 && open[4] == "v" {
				w.cell.value += string(t)
			}
		case xml.Directive:
			return nil, damaged("part %s declares a document type, which a workbook does not", one.name)
		}
	}
}

type sheetWalk struct {
	part  string
	lim   sheetLimits
	sheet *sheetScan
	cell  *cellScan // the last one begun
	last  int       // its column
	begun bool
}

// start takes an element, the last of those that are open.
func (w *sheetWalk) start(open []string, at []xml.Attr) error {
	is := func(path ...string) bool { return slices.Equal(open[1:], path) }
	if open[0] != "worksheet" {
		return damaged("part %s is no sheet", w.part)
	}
	switch {
	case is("sheetData", "row"):
		return w.row(at)
	case is("sheetData", "row", "c"):
		return w.begin(at)
	case is("sheetData", "row", "c", "f"):
		w.cell.formula = true
	case is("sheetData", "row", "c", "v"), is("sheetData", "row", "c", "is"):
		w.cell.stored = true
	case is("cols", "col"):
		from, err := strconv.Atoi(attribute(at, "min"))
		if err == nil && truth(attribute(at, "hidden")) {
			to, err := strconv.Atoi(attribute(at, "max"))
			if err != nil {
				to = from
			}
			w.sheet.hiddenColumns = append(w.sheet.hiddenColumns, [2]int{from, to})
		}
	case is("mergeCells", "mergeCell"):
		r, err := parseRange(attribute(at, "ref"))
		if err != nil {
			return damaged("sheet %s merges %q", w.lim.name, attribute(at, "ref"))
		}
		w.sheet.merged = append(w.sheet.merged, r)
	}
	return nil
}

// attribute returns an attribute that has no prefix, or "".
func attribute(at []xml.Attr, name string) string {
	for _, a := range at {
		if a.Name.Local == name && a.Name.Space == "" {
			return a.Value
		}
	}
	return ""
}

func (w *sheetWalk) row(at []xml.Attr) error {
	number := 1
	if n := len(w.sheet.rows); n > 0 {
		number = w.sheet.rows[n-1].number + 1
	}
	if r := attribute(at, "r"); r != "" {
		n, err := strconv.Atoi(r)
		if err != nil || n < number {
			return damaged("sheet %s has row %q after row %d", w.lim.name, r, number-1)
		}
		number = n
	}
	w.sheet.rows = append(w.sheet.rows, rowScan{number: number, hidden: truth(attribute(at, "hidden"))})
	w.cell, w.last = nil, 0
	return nil
}

func (w *sheetWalk) begin(at []xml.Attr) error {
	row := &w.sheet.rows[len(w.sheet.rows)-1]
	c := cellScan{column: w.last + 1, kind: attribute(at, "t")}
	if ref := attribute(at, "r"); ref != "" {
		col, r, err := excelize.CellNameToCoordinates(ref)
		if err != nil || r != row.number || col < c.column {
			return damaged("sheet %s has cell %q in row %d", w.lim.name, ref, row.number)
		}
		c.column = col
	}
	if s := attribute(at, "s"); s != "" {
		n, err := strconv.Atoi(s)
		if err != nil || n < 0 || n >= max(w.lim.styles, 1) {
			return damaged("sheet %s has style %q in row %d", w.lim.name, s, row.number)
		}
		c.style = n
	}
	switch c.kind {
	case "", "n", "s", "str", "inlineStr", "b", "e", "d":
	default:
		return damaged("sheet %s has a cell of kind %q in row %d", w.lim.name, c.kind, row.number)
	}
	if n := len(row.cells); n > 0 && !row.cells[n-1].stored && !row.cells[n-1].formula {
		row.cells = row.cells[:n-1] // styled and blank; programs leave many of these
	}
	row.cells = append(row.cells, c)
	w.last = c.column
	w.cell = &row.cells[len(row.cells)-1]
	return nil
}

// check holds what the cells store against the caps and the count of texts.
// Styled blank cells may lie far out and do not count.
func (s *sheetScan) check(texts int) error {
	for _, r := range s.rows {
		for _, c := range r.cells {
			if !c.formula && !c.stored {
				continue
			}
			place := s.name + "!" + cellName(c.column, r.number)
			if r.number > workbookMaxRows || c.column > workbookMaxColumns {
				return fmt.Errorf("the sheet reaches %s; rows beyond %d and columns beyond %s are not read: delete what stands out there",
					place, workbookMaxRows, columnLetters(workbookMaxColumns))
			}
			switch c.kind {
			case "s":
				if n, err := strconv.Atoi(c.value); err != nil || n < 0 || n >= texts {
					return damaged("cell %s refers to text %q of %d", place, c.value, texts)
				}
			case "", "n":
				if _, err := units.ParseNumber(c.value, false); c.value != "" && err != nil {
					return damaged("cell %s holds %q for a number", place, c.value)
				}
			case "b":
				if c.value != "0" && c.value != "1" {
					return damaged("cell %s holds %q for true or false", place, c.value)
				}
			}
		}
	}
	return nil
}

func columnLetters(column int) string {
	s, err := excelize.ColumnNumberToName(column)
	if err != nil {
		return strconv.Itoa(column)
	}
	return s
}

func cellName(column, row int) string { return columnLetters(column) + strconv.Itoa(row) }

func parseRange(ref string) (cellRange, error) {
	from, to, ok := strings.Cut(ref, ":")
	if !ok {
		to = from
	}
	c1, r1, err := excelize.CellNameToCoordinates(from)
	if err != nil {
		return cellRange{}, err
	}
	c2, r2, err := excelize.CellNameToCoordinates(to)
	return cellRange{min(r1, r2), min(c1, c2), max(r1, r2), max(c1, c2)}, err
}
