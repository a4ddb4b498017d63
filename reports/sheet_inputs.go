package reports

import (
	"fmt"
	"strings"
	"unicode/utf8"

	"example.org/standclear/exposure"
)

// inputSheet is one input table, or a block of its columns, as a sheet.
type inputSheet struct {
	name    string
	table   *exposure.InputTable
	columns []int // of the table
	first   bool  // the block with the first columns
	lineOf  map[*exposure.InputRow]int
}

// Input tables are as wide as the user made them: blank columns are left out,
// and the others are laid out in blocks that fit a page, a sheet each.
const blockWidth = 125.0

func inputSheets(a *exposure.Assessment) []inputSheet {
	if a.Site == nil {
		return nil
	}
	var out []inputSheet
	taken := map[string]bool{}
	for _, t := range a.Site.Inputs.Tables {
		lineOf := map[*exposure.InputRow]int{}
		for i, row := range t.Rows {
			lineOf[row] = firstRow + 1 + i
		}
		for i, columns := range blocks(t) {
			out = append(out, inputSheet{inputName(t, taken), t, columns, i == 0, lineOf})
		}
	}
	return out
}

// blocks splits a table's columns, the blank ones left out; the column that
// names the rows leads every block.
func blocks(t *exposure.InputTable) [][]int {
	var out [][]int
	var block []int
	width := 0.0
	for i := range t.Columns {
		w := inputWidth(t, i)
		if w == 0 {
			continue
		}
		if width+w > blockWidth && len(block) > 0 {
			out = append(out, block)
			block, width = nil, 0
			if id := idColumn(t); id >= 0 && id != i {
				block, width = []int{id}, inputWidth(t, id)
			}
		}
		block = append(block, i)
		width += w
	}
	return append(out, block)
}

// idColumn is the column that names the rows, -1 where there is none.
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
	longest := 0
	for _, row := range t.Rows {
		if i < len(row.Cells) {
			longest = max(longest, utf8.RuneCountInString(row.Cells[i]))
		}
	}
	if longest == 0 && len(t.Rows) > 0 {
		return 0 // of a table without rows, the headers are shown
	}
	for word := range strings.FieldsSeq(t.Columns[i].Header) {
		longest = max(longest, utf8.RuneCountInString(word)+1)
	}
	const narrowest, widest = 7, 34
	return float64(min(max(longest+1, narrowest), widest))
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

// inputTable writes an input table as it was typed, cell by cell.
func (r *report) inputTable(in inputSheet) {
	r.asTyped = append(r.asTyped, in.name)
	columns := []column{{head: "row", width: 6}}
	total := columns[0].width
	for _, c := range in.columns {
		columns = append(columns, column{head: in.table.Columns[c].Header, width: inputWidth(in.table, c)})
		total += inputWidth(in.table, c)
	}
	where := in.table.File
	if in.table.Sheet != "" {
		where += ", sheet " + in.table.Sheet
	}
	title := "Input as typed: " + in.table.Name
	if !in.first {
		title += ", further columns"
	}
	const portrait = 92
	r.write(page{
		name: in.name, title: title, landscape: total > portrait,
		intro:  "From " + where + ". The first column is the row in that file. Columns without an entry are left out.",
		widths: widthsOf(columns), headRow: firstRow,
	}, func(s *sheet) {
		s.table(columns)
		for _, row := range in.table.Rows {
			values := []any{fmt.Sprint(row.Row)}
			for _, c := range in.columns {
				text := ""
				if c < len(row.Cells) {
					text = row.Cells[c]
				}
				values = append(values, text)
			}
			s.line(values...)
		}
	})
}
