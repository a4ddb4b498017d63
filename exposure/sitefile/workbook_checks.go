package sitefile

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"github.com/xuri/excelize/v2"
)

// checks puts a check on each column of the rows from first to last.
func (b *workbookBuilder) checks(p sheetPlan, first, last int) {
	for i, c := range p.columns {
		b.check(p.name, c, cellName(i+1, first), cellName(i+1, last))
	}
}

// check puts what the reader demands of a column on its cells: a drop-down for a
// choice, a number check with the schema's own range, a date check.
func (b *workbookBuilder) check(sheet string, c columnPlan, from, to string) {
	dv := excelize.NewDataValidation(true)
	dv.Sqref = from + ":" + to
	message := ""
	switch {
	case len(c.choices) > 0:
		dv.Type = "list"
		dv.Formula1 = b.list(c.choices)
		message = "Choose one of: " + strings.Join(c.choices, ", ")
	case c.listFrom != "":
		if b.listed[c.listFrom] == "" {
			return // a list must not point to a sheet that is not there
		}
		dv.Type = "list"
		dv.Formula1 = b.listed[c.listFrom]
	case c.kind == numberCell:
		dv.Type, dv.Operator, dv.Formula1, dv.Formula2 = numberCheck(c, from)
		message = "Type a number"
		if c.rule != "" {
			message += ": " + c.rule
		}
		if len(c.words) > 0 {
			message += ", or " + strings.Join(c.words, " or ")
		}
	case c.kind == dateCell:
		dv.Type, dv.Operator, dv.Formula1 = "date", "greaterThanOrEqual", "367" // 1901-01-01
		message = "Type a date, such as 2026-03-31"
	default:
		return
	}
	if c.open {
		dv.ShowErrorMessage = false
	} else {
		dv.SetError(excelize.DataValidationErrorStyleStop, truncate(c.header, 32), truncate(message+".", 255))
	}
	dv.Formula1 = escapeFormula.Replace(dv.Formula1) // the library writes it as it is
	b.do(b.book.AddDataValidation(sheet, dv))
}

var escapeFormula = strings.NewReplacer("&", "&amp;", "<", "&lt;", ">", "&gt;")

// numberCheck turns a range into a check of the cell cell. A rule that no plain
// check can say becomes a formula.
func numberCheck(c columnPlan, cell string) (kind, operator, first, second string) {
	f := func(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) }
	r := c.limits
	if r == nil {
		r = &Range{}
	}
	if len(c.words) == 0 {
		kind = "decimal"
		if r.Whole {
			kind = "whole"
		}
		switch {
		case r.HasMin && r.HasMax && !r.Above:
			return kind, "between", f(r.Min), f(r.Max)
		case r.HasMin && !r.HasMax && r.Above:
			return kind, "greaterThan", f(r.Min), ""
		case r.HasMin && !r.HasMax:
			return kind, "greaterThanOrEqual", f(r.Min), ""
		case r.HasMax && !r.HasMin:
			return kind, "lessThanOrEqual", f(r.Max), ""
		}
	}
	all := []string{"ISNUMBER(" + cell + ")"}
	if r.HasMin && r.Above {
		all = append(all, cell+">"+f(r.Min))
	} else if r.HasMin {
		all = append(all, cell+">="+f(r.Min))
	}
	if r.HasMax {
		all = append(all, cell+"<="+f(r.Max))
	}
	if r.Whole {
		all = append(all, cell+"=INT("+cell+")")
	}
	formula := all[0]
	if len(all) > 1 {
		formula = "AND(" + strings.Join(all, ",") + ")"
	}
	if len(c.words) > 0 {
		any := []string{formula}
		for _, w := range c.words {
			any = append(any, cell+`="`+w+`"`)
		}
		formula = "OR(" + strings.Join(any, ",") + ")"
	}
	return "custom", "", formula, ""
}

// choiceList is one column of the hidden sheet that drop-downs list.
type choiceList struct{ items []string }

// list returns the range that holds the choices. A list in the check itself
// could hold neither a comma nor more than 255 characters.
func (b *workbookBuilder) list(items []string) string {
	at := -1
	for i, l := range b.choices {
		if strings.Join(l.items, "\n") == strings.Join(items, "\n") {
			at = i
		}
	}
	if at < 0 {
		b.choices = append(b.choices, choiceList{items})
		at = len(b.choices) - 1
	}
	letters := columnLetters(at + 1)
	return fmt.Sprintf("%s!$%s$1:$%s$%d", sheetChoices, letters, letters, len(items))
}

// writeChoices writes the hidden sheet.
func (b *workbookBuilder) writeChoices() {
	if len(b.choices) == 0 {
		return
	}
	_, err := b.book.NewSheet(sheetChoices)
	b.do(err)
	for i, l := range b.choices {
		for j, item := range l.items {
			b.text(sheetChoices, i+1, j+1, item)
		}
	}
	b.protect(sheetChoices)
	b.do(b.book.SetSheetVisible(sheetChoices, false))
}

// protect locks the cells that must not change. There is no password: whoever
// needs another unit in a header lifts it.
func (b *workbookBuilder) protect(sheet string) {
	b.do(b.book.ProtectSheet(sheet, &excelize.SheetProtectionOptions{
		SelectLockedCells: true, SelectUnlockedCells: true, FormatCells: true, FormatColumns: true, FormatRows: true,
		InsertRows: true, DeleteRows: true, InsertHyperlinks: true, Sort: true, AutoFilter: true}))
}

// layout freezes the header and sets up the page.
func (b *workbookBuilder) layout(p sheetPlan, header int) {
	b.do(b.book.SetPanes(p.name, &excelize.Panes{Freeze: true, XSplit: 1, YSplit: header,
		TopLeftCell: cellName(2, header+1), ActivePane: "bottomRight",
		Selection: []excelize.Selection{{SQRef: cellName(1, header+1), ActiveCell: cellName(1, header+1), Pane: "bottomLeft"},
			{SQRef: cellName(2, header+1), ActiveCell: cellName(2, header+1), Pane: "bottomRight"}}}))
	width := 0.0
	for _, c := range p.columns {
		width += c.width
	}
	b.page(p.name, width)
	b.do(b.book.SetDefinedName(&excelize.DefinedName{Name: "_xlnm.Print_Titles", Scope: p.name,
		RefersTo: fmt.Sprintf("'%s'!$A:$A,'%s'!$%d:$%d", p.name, p.name, header, header)}))
}

// page sets up the print of a sheet that is width characters wide: upright where
// that fits, else across, on as many pages as it takes to be read.
func (b *workbookBuilder) page(sheet string, width float64) {
	const upright, across = 105, 185 // characters of a line on A4 that can still be read
	orientation, pages := "portrait", 1
	if width > upright {
		orientation, pages = "landscape", int(math.Ceil(width/across))
	}
	b.do(b.book.SetPageLayout(sheet, &excelize.PageLayoutOptions{Size: new(9), Orientation: &orientation,
		FitToWidth: &pages, FitToHeight: new(0), PageOrder: new("overThenDown")}))
	b.do(b.book.SetSheetProps(sheet, &excelize.SheetPropsOptions{FitToPage: new(true)}))
	b.do(b.book.SetHeaderFooter(sheet, &excelize.HeaderFooterOptions{OddHeader: "&L&A", OddFooter: "&L&F&RPage &P of &N"}))
}

// truncate cuts a text at n characters.
func truncate(s string, n int) string {
	r := []rune(s)
	if len(r) > n {
		return string(r[:n-1]) + "…"
	}
	return s
}
