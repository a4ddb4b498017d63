package reports

import (
	"slices"
	"strings"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
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
	if r.measured != nil {
		notes = survey.Methods()
	}
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
