package reports

import (
	"bytes"
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"
	"unicode/utf8"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
	"github.com/xuri/excelize/v2"
)

// column is one column of a table: its header, how it prints, and what the
// methods sheet says about it.
type column struct {
	head   string  // "E"
	unit   string  // "V/m", "1" for a plain ratio, "" for text
	width  float64 // in digits of the standard font
	digits digits
	what   string // what the figure is, for the methods sheet
	method string // the row of the methods table it rests on, "" = as typed or counted
}

// header returns the text of the column's header cell.
func (c column) header() string {
	if c.unit == "" {
		return c.head
	}
	return c.head + " [" + c.unit + "]"
}

// calc is a number with the formula that gives it.
type calc struct {
	formula string
	value   float64
}

// page is one sheet's set-up, which has to be known before its first row.
type page struct {
	name, title, intro string
	landscape          bool
	onePage            bool      // shrink to a single page
	free               bool      // do not shrink: the sheet is cut by its own page breaks
	widths             []float64 // of the columns, in digits of the standard font
	headRow            int       // the row to repeat on every page and to keep in sight, 0 = none
	filterTo           int       // last row of the table under headRow, 0 = no filter
	before             func(f *excelize.File, sheet string) error
}

// firstRow is the row of the first table header on every sheet: title,
// introduction, a blank row, header.
const firstRow = 4

// book is a workbook being written.
type book struct {
	f         *excelize.File
	a         *exposure.Assessment
	measured  *survey.Result // nil = nothing was measured
	styles    map[look]int
	explained []explained
	logCharts int // charts, counted from the first, whose x axis is made logarithmic
	asTyped   []string
	err       error
}

// explained is a numeric column with the sheet it stands on.
type explained struct {
	sheet string
	column
}

// keep remembers the first error.
func (b *book) keep(err error) {
	if b.err == nil && err != nil {
		b.err = err
	}
}

// sheet is one sheet being streamed, row by row.
type sheet struct {
	b       *book
	page    page
	sw      *excelize.StreamWriter
	row     int // the next row to be written
	columns []column
}

// widthsOf returns the widths of a table's columns.
func widthsOf(columns []column) []float64 {
	w := make([]float64, len(columns))
	for i, c := range columns {
		w[i] = c.width
	}
	return w
}

// write sets a sheet up and streams its rows.
func (b *book) write(p page, rows func(s *sheet)) {
	if b.err != nil {
		return
	}
	b.setUp(p)
	if p.before != nil && b.err == nil {
		b.keep(p.before(b.f, p.name))
	}
	if b.err != nil {
		return
	}
	sw, err := b.f.NewStreamWriter(p.name)
	if err != nil {
		b.keep(err)
		return
	}
	s := &sheet{b: b, page: p, sw: sw, row: 1}
	s.merged(p.title, look{role: title}, 24)
	s.merged(p.intro, look{role: intro}, 0)
	s.blank()
	rows(s)
	if b.err != nil {
		b.err = fmt.Errorf("sheet %s: %w", p.name, b.err)
		return
	}
	b.keep(sw.Flush())
}

// Page margins and paper, in inches and by the number of the paper table.
const (
	sideMargin = 0.55
	topMargin  = 0.85
	footMargin = 0.9
	edgeMargin = 0.35
	paperA4    = 9
)

func ptr[T any](v T) *T { return &v }

// setUp does everything that must stand before a sheet's first streamed row.
func (b *book) setUp(p page) {
	f := b.f
	orientation := "portrait"
	if p.landscape {
		orientation = "landscape"
	}
	layout := &excelize.PageLayoutOptions{Size: ptr(paperA4), Orientation: &orientation}
	if p.free {
		layout.AdjustTo = ptr(uint(100))
	} else {
		layout.FitToWidth, layout.FitToHeight = ptr(1), ptr(0)
		if p.onePage {
			layout.FitToHeight = ptr(1)
		}
	}
	b.keep(f.SetPageLayout(p.name, layout))
	b.keep(f.SetPageMargins(p.name, &excelize.PageLayoutMarginsOptions{
		Left: ptr(sideMargin), Right: ptr(sideMargin), Top: ptr(topMargin), Bottom: ptr(footMargin),
		Header: ptr(edgeMargin), Footer: ptr(edgeMargin), Horizontally: ptr(false),
	}))
	b.keep(f.SetHeaderFooter(p.name, &excelize.HeaderFooterOptions{
		OddHeader: headerText(b.a.SiteName, reportDate(b.a), p.name),
		OddFooter: footerText(),
	}))
	b.keep(f.SetSheetView(p.name, 0, &excelize.ViewOptions{ShowGridLines: ptr(false)}))
	for i, w := range p.widths {
		name, err := excelize.ColumnNumberToName(i + 1)
		b.keep(err)
		b.keep(f.SetColWidth(p.name, name, name, w))
	}
	if p.headRow > 0 {
		b.keep(f.SetDefinedName(&excelize.DefinedName{
			Name: "_xlnm.Print_Titles", Scope: p.name,
			RefersTo: fmt.Sprintf("%s!$%d:$%d", quoteSheet(p.name), p.headRow, p.headRow),
		}))
		b.keep(f.SetPanes(p.name, &excelize.Panes{
			Freeze: true, YSplit: p.headRow, TopLeftCell: "A" + strconv.Itoa(p.headRow+1), ActivePane: "bottomLeft",
		}))
		if p.filterTo > p.headRow {
			b.keep(f.AutoFilter(p.name, fmt.Sprintf("A%d:%s", p.headRow, cellName(len(p.widths), p.filterTo)), nil))
		}
	}
	if !p.free {
		// Last: a filter resets the sheet's properties.
		b.keep(f.SetSheetProps(p.name, &excelize.SheetPropsOptions{FitToPage: ptr(true)}))
	}
}

// headerText is the header of every printed page. User text in it is cut to a
// length that Excel takes and has its ampersands doubled, or it would be read
// as layout codes; it never follows a font size, whose digits it would join.
func headerText(site, date, sheet string) string {
	const most = 90
	if r := []rune(site); len(r) > most {
		site = string(r[:most-1]) + "…"
	}
	site = strings.ReplaceAll(oneLine(site), "&", "&&")
	return `&L&"` + fontName + `,Regular" ` + site + `&R&"` + fontName + `,Regular" ` + sheet + dateMark(date)
}

func dateMark(date string) string {
	if date == "" {
		return ""
	}
	return ", " + strings.ReplaceAll(oneLine(date), "&", "&&")
}

func footerText() string {
	return `&L&"` + fontName + `,Italic"` + footerCaution + `&R&"` + fontName + `,Regular"page &P of &N`
}

// oneLine replaces line breaks and other control characters by spaces.
func oneLine(s string) string {
	return strings.Join(strings.FieldsFunc(s, func(r rune) bool { return r < ' ' || r == 0x7f || r == ' ' }), " ")
}

// quoteSheet quotes a sheet's name for use in a reference.
func quoteSheet(name string) string { return "'" + strings.ReplaceAll(name, "'", "''") + "'" }

// cellName returns the name of a cell, column and row counted from one.
func cellName(col, row int) string {
	name, err := excelize.CoordinatesToCellName(col, row)
	if err != nil {
		panic("reports: " + err.Error()) // a programmer's mistake: the caller counts from one
	}
	return name
}

var escapeLike = regexp.MustCompile(`_x[0-9A-Fa-f]{4}_`)

// cellText makes any text fit for a cell: what looks like the file format's own
// escape is escaped, and text beyond the format's limit is cut with a mark.
func cellText(s string) string {
	const most = 32000
	if !utf8.ValidString(s) {
		s = strings.ToValidUTF8(s, "\uFFFD")
	}
	if utf8.RuneCountInString(s) > most {
		s = string([]rune(s)[:most]) + " … (cut)"
	}
	return escapeLike.ReplaceAllStringFunc(s, func(m string) string { return "_x005F" + m })
}

// blank leaves a row empty.
func (s *sheet) blank() { s.row++ }

// merged writes one text over all columns of the sheet, with a height (in
// points) that its length needs when none is given: merged cells do not grow by
// themselves.
func (s *sheet) merged(text string, l look, height float64) {
	n := len(s.page.widths)
	var width float64
	for _, w := range s.page.widths {
		width += w
	}
	if height == 0 {
		height = textHeight(text, width, s.lineHeight(l))
	}
	s.put([]any{excelize.Cell{StyleID: s.b.style(l), Value: cellText(text)}}, height)
	if n > 1 {
		s.b.keep(s.sw.MergeCell(cellName(1, s.row-1), cellName(n, s.row-1)))
	}
}

// Heights of a line of text in points, and of the tallest row that the format
// has room for, with a margin.
const (
	bodyLine   = 11.5
	tallestRow = 400.0
)

func (s *sheet) lineHeight(l look) float64 {
	if l.role == section {
		return 16
	}
	return bodyLine
}

// textHeight estimates the height in points of text wrapped to a width.
func textHeight(text string, width, line float64) float64 {
	return math.Min(wrapped(text, width)*line+3, tallestRow)
}

// wrapped estimates the number of lines that a text takes in a column of a
// width that is stated, as widths are, in digits of the standard font: text is
// set smaller. Programs do not agree on row heights, so that a row of wrapped
// text states its own.
func wrapped(text string, width float64) float64 {
	const perDigit = 1.32
	room := math.Max(width*perDigit-1, 1)
	lines := 0.0
	for part := range strings.SplitSeq(text, "\n") {
		n, left := 1.0, room
		for word := range strings.FieldsSeq(part) {
			w := float64(utf8.RuneCountInString(word))
			if w > left && left < room {
				n++
				left = room
			}
			for w > left {
				n++
				w -= left
				left = room
			}
			left -= w + 1
		}
		lines += n
	}
	return lines
}

// section writes a heading between two tables of a sheet.
func (s *sheet) section(text string) {
	s.blank()
	s.merged(text, look{role: section}, 20)
}

// table writes a header row and remembers its columns for the rows that follow
// and for the methods sheet.
func (s *sheet) table(columns []column) {
	s.columns = columns
	cells := make([]any, len(columns))
	height := 0.0
	for i, c := range columns {
		l := look{role: head, indent: s.indented(i)}
		if c.digits != asText {
			l = look{role: headNumber}
			s.b.explained = append(s.b.explained, explained{s.page.name, c})
		}
		cells[i] = excelize.Cell{StyleID: s.b.style(l), Value: cellText(c.header())}
		height = math.Max(height, wrapped(c.header(), s.room(i)*0.92)*bodyLine+4)
	}
	s.put(cells, height)
}

// room is the width that a column has for text.
func (s *sheet) room(i int) float64 {
	const indent = 1.4
	if s.indented(i) {
		return s.width(i) - indent
	}
	return s.width(i)
}

func (s *sheet) width(i int) float64 {
	if i < len(s.page.widths) {
		return s.page.widths[i]
	}
	return 9
}

// line writes a row of the current table; strong rows are totals or results
// that must not be overlooked.
func (s *sheet) line(values ...any)   { s.cells(false, values) }
func (s *sheet) strong(values ...any) { s.cells(true, values) }

func (s *sheet) cells(strong bool, values []any) {
	cells := make([]any, len(values))
	lines := 1.0
	for i, v := range values {
		d := asText
		if i < len(s.columns) {
			d = s.columns[i].digits
		}
		c := s.b.cell(v, d, strong, s.indented(i))
		if text, ok := c.Value.(string); ok {
			lines = math.Max(lines, wrapped(text, s.room(i)))
		}
		cells[i] = c
	}
	height := 0.0 // one line: left to the program that shows it
	if lines > 1 {
		height = math.Min(lines*bodyLine+3, tallestRow)
	}
	s.put(cells, height)
}

// indented reports whether a column of text is set off from the column to its
// left, which it would touch.
func (s *sheet) indented(i int) bool {
	return i > 0 && i < len(s.columns) && s.columns[i].digits == asText
}

// cell turns a value into a styled cell. Infinite numbers become words, since a
// cell holds none; not-a-number is a fault of the caller and stops the report.
func (b *book) cell(v any, d digits, strong, indent bool) excelize.Cell {
	text := look{role: body, strong: strong, indent: indent, right: d != asText}
	switch v := v.(type) {
	case nil:
		return excelize.Cell{StyleID: b.style(text)}
	case string:
		return excelize.Cell{StyleID: b.style(text), Value: cellText(v)}
	case exposure.Verdict:
		text.strong = strong || v == exposure.Above
		return excelize.Cell{StyleID: b.style(text), Value: verdictWords(v)}
	case exposure.Number:
		return b.cell(float64(v), d, strong, indent)
	case int:
		return b.cell(float64(v), d, strong, indent)
	case calc:
		c := b.cell(v.value, d, strong, indent)
		if _, ok := c.Value.(float64); ok {
			c.Formula = v.formula
		}
		return c
	case float64:
		if math.IsNaN(v) {
			b.keep(fmt.Errorf("a figure is not a number"))
			return excelize.Cell{}
		}
		if math.IsInf(v, 0) {
			text.right = true
			return excelize.Cell{StyleID: b.style(text), Value: "no bound"}
		}
		return excelize.Cell{StyleID: b.style(look{role: body, strong: strong, format: d.numberFormat(v)}), Value: v}
	}
	panic(fmt.Sprintf("reports: no cell for a %T", v))
}

// plain is a cell of text outside a table.
func (b *book) plain(text any, strong bool) excelize.Cell {
	return b.cell(text, asText, strong, false)
}

// put streams one row of ready cells.
func (s *sheet) put(cells []any, height float64) {
	if s.b.err != nil {
		return
	}
	var opts []excelize.RowOpts
	if height > 0 {
		opts = append(opts, excelize.RowOpts{Height: height})
	}
	s.b.keep(s.sw.SetRow(cellName(1, s.row), cells, opts...))
	s.row++
}

// bytes closes the workbook and returns it.
func (b *book) bytes() ([]byte, error) {
	defer b.f.Close()
	if b.err != nil {
		return nil, b.err
	}
	var raw bytes.Buffer
	if err := b.f.Write(&raw); err != nil {
		return nil, err
	}
	return rezip(raw.Bytes(), b)
}

// keepMerged joins two columns of the row just written.
func (s *sheet) keepMerged(from, to int) {
	s.b.keep(s.sw.MergeCell(cellName(from, s.row-1), cellName(to, s.row-1)))
}

// styled is an empty cell of a role.
func styled(r *report, as role) excelize.Cell {
	return excelize.Cell{StyleID: r.style(look{role: as})}
}
