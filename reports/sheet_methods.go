package reports

import (
	"fmt"
	"slices"
	"strings"
	"unicode/utf8"

	"example.org/standclear/exposure"
	"github.com/xuri/excelize/v2"
)

var methodColumns = []column{
	{head: "method", width: 13}, {head: "name", width: 21}, {head: "formula", width: 36}, {head: "where it holds", width: 26},
	{head: "on which side it errs", width: 27}, {head: "source", width: 33},
}

var columnColumns = []column{
	{head: "sheet", width: 22}, {head: "column", width: 28}, {head: "what it is", width: 78}, {head: "method", width: 20},
}

// methods writes every method with its formula, range and source.
func (r *report) methods() {
	notes := exposure.Methods()
	r.write(page{
		name: sheetMethods, title: "Methods and sources", landscape: true,
		intro:  "Published methods, and choices of this program, which are marked \"own choice\". Sheet " + sheetColumns + " says which column of figures rests on which.",
		widths: widthsOf(methodColumns), headRow: firstRow,
	}, func(s *sheet) {
		s.table(methodColumns)
		for _, n := range notes {
			source := n.Source
			if n.Ours {
				source = "own choice: " + strings.TrimPrefix(source, "a choice of this project: ")
			}
			s.line(n.ID, n.Name, n.Formula, n.Range, n.Errs, source)
		}
	})
}

// columnMethods writes what every numeric column of the workbook is. It is
// written after all other sheets, whose columns it explains.
func (r *report) columnMethods() {
	r.write(page{
		name: sheetColumns, title: "Methods by column", landscape: true,
		intro:  "What every column of figures in this workbook is, and the row of sheet " + sheetMethods + " that it rests on.",
		widths: widthsOf(columnColumns), headRow: firstRow,
	}, func(s *sheet) {
		s.table(columnColumns)
		type key struct{ sheet, header string }
		done := map[key]bool{}
		for _, name := range r.order {
			for _, e := range r.explained {
				k := key{e.sheet, e.header()}
				if e.sheet != name || done[k] {
					continue
				}
				done[k] = true
				method := e.method
				if method == "" {
					method = "as typed or counted"
				}
				s.line(e.sheet, e.header(), e.what, method)
			}
		}
	})
}

// inputSheet is one input table with its place in the workbook.
type inputSheet struct {
	name   string
	table  *exposure.InputTable
	lineOf map[*exposure.InputRow]int // the sheet's row of the first block
	blocks [][]int                    // columns of the table, block by block
}

// Input tables are as wide as the user made them: blank columns are left out,
// and the others are laid out in blocks that fit a page.
const blockWidth = 125.0

func inputSheets(a *exposure.Assessment) []inputSheet {
	if a.Site == nil {
		return nil
	}
	var out []inputSheet
	taken := map[string]bool{}
	for _, t := range a.Site.Inputs.Tables {
		in := inputSheet{name: inputName(t, taken), table: t, lineOf: map[*exposure.InputRow]int{}}
		var block []int
		width := 0.0
		for i := range t.Columns {
			w := inputWidth(t, i)
			if w == 0 {
				continue
			}
			if width+w > blockWidth && len(block) > 0 {
				in.blocks = append(in.blocks, block)
				block, width = nil, 0
				if idColumn(t) >= 0 && idColumn(t) != i {
					block, width = []int{idColumn(t)}, inputWidth(t, idColumn(t))
				}
			}
			block = append(block, i)
			width += w
		}
		if len(block) > 0 {
			in.blocks = append(in.blocks, block)
		}
		for i, row := range t.Rows {
			in.lineOf[row] = firstRow + 1 + i
		}
		out = append(out, in)
	}
	return out
}

// idColumn is the column that names the rows, repeated in every block.
func idColumn(t *exposure.InputTable) int {
	for i, c := range t.Columns {
		if c.Name == "id" {
			return i
		}
	}
	return -1
}

// inputWidth is the width of a column as typed, 0 where all of it is blank.
func inputWidth(t *exposure.InputTable, i int) float64 {
	longest, any := 0, false
	for _, row := range t.Rows {
		if i < len(row.Cells) && row.Cells[i] != "" {
			any = true
			longest = max(longest, utf8.RuneCountInString(row.Cells[i]))
		}
	}
	if !any {
		return 0
	}
	for word := range strings.FieldsSeq(t.Columns[i].Header) {
		longest = max(longest, utf8.RuneCountInString(word)+1)
	}
	const narrowest, widest = 7, 34
	return float64(min(max(longest+2, narrowest), widest))
}

// inputName makes a sheet name of a table's name.
func inputName(t *exposure.InputTable, taken map[string]bool) string {
	const most = 31
	name := "In " + strings.Map(func(r rune) rune {
		if strings.ContainsRune(`:\/?*[]'`, r) || r < ' ' {
			return '_'
		}
		return r
	}, t.Name)
	if r := []rune(name); len(r) > most {
		name = string(r[:most])
	}
	base := []rune(name)
	for i := 2; taken[strings.ToLower(name)]; i++ {
		tail := fmt.Sprintf(" %d", i)
		name = string(base[:min(len(base), most-len(tail))]) + tail
	}
	taken[strings.ToLower(name)] = true
	return name
}

// inputTable writes one input table as it was typed, cell by cell.
func (r *report) inputTable(in inputSheet) {
	r.asTyped = append(r.asTyped, in.name)
	var widths []float64
	for _, block := range in.blocks {
		for j, c := range block {
			w := inputWidth(in.table, c)
			if j+1 >= len(widths) {
				for len(widths) <= j+1 {
					widths = append(widths, 7)
				}
			}
			widths[j+1] = max(widths[j+1], w)
		}
	}
	if len(widths) == 0 {
		widths = []float64{7, 40}
	}
	where := in.table.File
	if in.table.Sheet != "" {
		where += ", sheet " + in.table.Sheet
	}
	var total float64
	for _, w := range widths {
		total += w
	}
	r.write(page{
		name: in.name, title: "Input as typed: " + in.table.Name, landscape: total > 92,
		intro:  "From " + where + ". The first column is the row in that file. Columns without an entry are left out.",
		widths: widths, headRow: firstRow,
	}, func(s *sheet) {
		for i, block := range in.blocks {
			if i > 0 {
				s.section("The same rows, further columns")
			}
			columns := []column{{head: "row"}}
			for _, c := range block {
				columns = append(columns, column{head: in.table.Columns[c].Header})
			}
			s.table(columns)
			for _, row := range in.table.Rows {
				values := []any{fmt.Sprint(row.Row)}
				for _, c := range block {
					text := ""
					if c < len(row.Cells) {
						text = row.Cells[c]
					}
					values = append(values, text)
				}
				s.line(values...)
			}
		}
		if len(in.blocks) == 0 {
			s.merged("The table has no rows.", look{role: bodyPlain}, 0)
		}
	})
}

// inputFiles writes what was read, byte for byte, and by which program.
func (r *report) inputFiles() {
	columns := []column{
		{head: "file", width: 30},
		{head: "size", unit: "B", width: 10, digits: whole, what: "size of the input file"},
		{head: "SHA-256", width: 70},
	}
	files := slices.Clone(r.a.Inputs)
	r.write(page{
		name: sheetInputs, title: "Inputs", landscape: true,
		intro:  "The files this report rests on. The same files and the same program give the same report, byte for byte. Program: " + r.a.Program + ".",
		widths: widthsOf(columns), headRow: firstRow,
		before: func(f *excelize.File, sheet string) error { return nil },
	}, func(s *sheet) {
		s.table(columns)
		for _, f := range files {
			s.line(f.Name, int(f.Bytes), f.SHA256)
		}
		if len(files) == 0 {
			s.merged("The site was made in code: no file was read.", look{role: bodyPlain}, 0)
		}
	})
}
