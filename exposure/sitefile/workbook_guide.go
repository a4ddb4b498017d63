package sitefile

// advice is what the first sheet says about the others.
var advice = [][2]string{
	{"Sheets", "One sheet is one table. Leave a table that you do not need as it is; site, antennas and limits are the least there must be."},
	{"Headers", "A header is a name and, in brackets, the unit of the figures under it. Dark headers must be filled; light ones have a default or are needed now and then. Point at a header to read its note."},
	{"Other units", "Unprotect the sheet (there is no password), write another unit into the brackets, such as power [dBm] or z [ft], and type the figures in that unit."},
	{"Rows", "A row that begins with # is not read; the grey example is one. Hidden and filtered rows are read. Do not merge cells."},
	{"Figures", "Type figures without their unit. Do not format them as percentages. A formula may stand for a figure; save in a spreadsheet program, so that its value is stored with it."},
	{"Remarks", "A column named note, or whose name begins with note, is kept and printed and never interpreted."},
	{"Saving", "Save as .xlsx, without a password and without macros."},
}

// guide writes the first sheet: how the others are used, and what each is for.
func (b *workbookBuilder) guide(plans []sheetPlan) {
	_, err := b.book.NewSheet(sheetGuide)
	b.do(err)
	const width = 68
	b.do(b.book.SetColWidth(sheetGuide, "A", "A", 16))
	b.do(b.book.SetColWidth(sheetGuide, "B", "B", width))
	row := 0
	line := func(left, right, look string) {
		row++
		b.text(sheetGuide, 1, row, left)
		b.text(sheetGuide, 2, row, right)
		b.do(b.book.SetCellStyle(sheetGuide, cellName(1, row), cellName(1, row), b.style[look]))
		b.do(b.book.SetCellStyle(sheetGuide, cellName(2, row), cellName(2, row), b.style["prose"]))
		b.do(b.book.SetRowHeight(sheetGuide, row, float64(14*linesOf(right, width)+4)))
	}
	line("How to fill in this workbook", "", "title")
	b.do(b.book.SetRowHeight(sheetGuide, row, 26))
	for _, a := range advice {
		line(a[0], a[1], "term")
	}
	line("", "", "prose")
	line("The sheets", "", "title")
	b.do(b.book.SetRowHeight(sheetGuide, row, 26))
	for _, p := range plans {
		if t := tableSchema(p.name); t != nil {
			line(p.name, t.Help+".", "term")
			b.do(b.book.SetCellHyperLink(sheetGuide, cellName(1, row), "'"+p.name+"'!A2", "Location"))
		}
	}
	b.protect(sheetGuide)
	b.page(sheetGuide, 16+width)
}
