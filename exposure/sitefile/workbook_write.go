package sitefile

import (
	"fmt"
	"io"
	"regexp"
	"strings"
	"time"
	"unicode/utf8"

	"example.org/standclear/exposure/units"
	"github.com/xuri/excelize/v2"
)

// sheetPlan is one sheet to be written: a table with its header, the rows in it
// and what the user may type under each column.
type sheetPlan struct {
	name    string
	guide   string // the grey line above the header
	columns []columnPlan
	rows    []rowPlan
	// fillIn sheets get drop-downs, checks and protection for room rows below the
	// last one.
	fillIn bool
	room   int
	// labels says that the first column is written by the program too (the items
	// of the site table): it is locked, and checks go by row.
	labels []columnPlan
}

// columnPlan is one column, or one item of the site table.
type columnPlan struct {
	name     string // of the schema's column: power
	header   string // power [W]
	note     string // shown at the header
	kind     cellKind
	choices  []string
	listFrom string   // a table whose first column is suggested
	open     bool     // choices are suggestions
	words    []string // allowed beside a number
	limits   *Range   // of the number, in the unit of the header
	rule     string   // the same in words
	required bool
	width    float64
}

type rowPlan struct {
	cells []string
	grey  bool // a comment or an example, which is not read
}

// cellKind is how a cell is written.
type cellKind int

const (
	textCell   cellKind = iota // always text: 007 stays 007
	numberCell                 // a number where it is one to the digit, else text
	dateCell                   // a date where it is an ISO date, else text
)

// writeWorkbook writes sheets as one workbook behind a sheet of advice, with the
// same bytes for the same sheets. Text is never a formula, whatever it begins with.
func writeWorkbook(w io.Writer, plans []sheetPlan) error {
	f := excelize.NewFile()
	defer f.Close()
	b := &workbookBuilder{book: f, style: map[string]int{}, looks: map[role]int{}, listed: map[string]string{}}
	b.styles()
	for _, p := range plans {
		first := 3 // below the line of advice and the header
		for _, r := range p.rows {
			if !r.grey {
				break
			}
			first++
		}
		b.listed[p.name] = fmt.Sprintf("%s!$A$%d:$A$%d", p.name, first, first+max(len(p.rows), p.room))
	}
	b.guide(plans)
	for _, p := range plans {
		b.sheet(p)
	}
	b.writeChoices()
	b.do(f.DeleteSheet("Sheet1"))
	b.do(f.SetDocProps(&excelize.DocProperties{Creator: "standclear", LastModifiedBy: "standclear",
		Created: "2000-01-01T00:00:00Z", Modified: "2000-01-01T00:00:00Z"}))
	f.SetActiveSheet(0)
	if b.err != nil {
		return fmt.Errorf("sitefile: write workbook: %w", b.err)
	}
	return packWorkbook(w, f)
}

type workbookBuilder struct {
	book    *excelize.File
	err     error
	style   map[string]int
	looks   map[role]int
	listed  map[string]string // by sheet: the range of its first column
	choices []choiceList
}

// do keeps the first error.
func (b *workbookBuilder) do(err error) {
	if b.err == nil {
		b.err = err
	}
}

// sheet writes one table.
func (b *workbookBuilder) sheet(p sheetPlan) {
	_, err := b.book.NewSheet(p.name)
	b.do(err)
	row := 1
	for i, c := range p.columns {
		letters := columnLetters(i + 1)
		b.do(b.book.SetColStyle(p.name, letters, b.look(role{kind: c.kind, decimals: -1})))
		b.do(b.book.SetColWidth(p.name, letters, letters, c.width))
	}
	if last := len(p.columns); last < 256 {
		b.do(b.book.SetColStyle(p.name, columnLetters(last+1)+":"+columnLetters(256), b.look(role{decimals: -1})))
	}
	// The first cell of the line is repeated on every page; the text is not.
	b.text(p.name, 1, row, "#")
	b.text(p.name, 2, row, p.guide)
	b.do(b.book.SetCellStyle(p.name, "A1", cellName(len(p.columns), row), b.look(role{grey: true})))
	row++
	header := row
	for i, c := range p.columns {
		b.text(p.name, i+1, row, c.header)
		look := "optional"
		if c.required {
			look = "required"
		}
		if c.kind == numberCell {
			look += " number"
		}
		b.do(b.book.SetCellStyle(p.name, cellName(i+1, row), cellName(i+1, row), b.style[look]))
		b.note(p.name, cellName(i+1, row), c.note)
	}
	b.do(b.book.SetRowHeight(p.name, row, headerHeight(p.columns)))
	for _, r := range p.rows {
		row++
		for i, text := range r.cells {
			kind := textCell
			if i < len(p.columns) {
				kind = p.columns[i].kind
			}
			if n := row - header - 1; i == 1 && n < len(p.labels) {
				kind = p.labels[n].kind
			}
			b.value(p.name, i+1, row, text, role{kind, r.grey, i == 1 && len(p.labels) > 0, -1})
		}
	}
	for i, r := range p.rows {
		if lines := linesOf(strings.Join(r.cells, " "), 40); len(p.labels) > 0 && lines > 2 {
			b.do(b.book.SetRowHeight(p.name, header+1+i, float64(13*lines+5)))
		}
	}
	if p.fillIn {
		b.checks(p, header+1, max(row, header)+p.room)
		b.labels(p, header)
		b.protect(p.name)
	}
	b.layout(p, header)
}

// headerHeight returns the height of the header row in points.
func headerHeight(columns []columnPlan) float64 {
	most := 1
	for _, c := range columns {
		most = max(most, linesOf(c.header, c.width-2))
	}
	return float64(13*most + 5)
}

// linesOf estimates how many lines a text takes when it is broken at blanks.
func linesOf(text string, width float64) int {
	lines, used := 1, 0.0
	for word := range strings.FieldsSeq(text) {
		n := float64(utf8.RuneCountInString(word))
		if used > 0 && used+1+n > width {
			lines, used = lines+1, 0
		}
		used += 1 + n
	}
	return lines
}

// labels locks and notes the first column of a table whose rows are given.
func (b *workbookBuilder) labels(p sheetPlan, header int) {
	for i, item := range p.labels {
		row := header + 1 + i
		look := "optional"
		if item.required {
			look = "required"
		}
		b.do(b.book.SetCellStyle(p.name, cellName(1, row), cellName(1, row), b.style[look]))
		b.note(p.name, cellName(1, row), item.note)
		b.check(p.name, item, cellName(2, row), cellName(2, row))
	}
}

// value writes one cell of a row.
func (b *workbookBuilder) value(sheet string, column, row int, text string, as role) {
	cell := cellName(column, row)
	switch {
	case text == "":
	case as.kind == numberCell && !as.grey && typedDecimals(text) >= 0:
		// SetCellDefault keeps all digits; the calls for numbers cut them at 15.
		v, _ := units.ParseNumber(text, false)
		b.do(b.book.SetCellDefault(sheet, cell, numberText(v)))
		if numberText(v) != text {
			as.decimals = typedDecimals(text)
		}
	case as.kind == dateCell && !as.grey && isTypedDate(text):
		day, _ := time.Parse(time.DateOnly, text)
		b.do(b.book.SetCellInt(sheet, cell, int64(day.Sub(dayZero)/(24*time.Hour))))
	default:
		b.text(sheet, column, row, text)
	}
	b.do(b.book.SetCellStyle(sheet, cell, cell, b.look(as)))
}

// dayZero is the day from which a workbook counts, for days from March 1900 on.
var dayZero = time.Date(1899, 12, 30, 0, 0, 0, 0, time.UTC)

// typedDecimals returns how many digits of a number stand behind its point, or
// -1 where the reader would not give back the very text: 1e3, +5, .5, 007.
func typedDecimals(text string) int {
	v, err := units.ParseNumber(text, false)
	if err != nil {
		return -1
	}
	_, decimals, _ := strings.Cut(text, ".")
	if numberText(v) == text || (numberFormat{fixedNumber, len(decimals)}).shown(v) == text {
		return len(decimals)
	}
	return -1
}

func isTypedDate(text string) bool {
	day, err := time.Parse(time.DateOnly, text)
	return err == nil && day.Year() > 1900 && day.Year() < 10000
}

// escapeMark follows the underscore of what a workbook reads as one character by
// its number: _x0041_ is A.
var escapeMark = regexp.MustCompile(`^x[0-9A-Fa-f]{4}_`)

// escapeMarks writes the underscore of each mark as a mark itself, which leaves
// the text as typed. Marks may share an underscore.
func escapeMarks(text string) string {
	if !strings.Contains(text, "_x") {
		return text
	}
	var b strings.Builder
	for i := range len(text) {
		b.WriteByte(text[i])
		if text[i] == '_' && escapeMark.MatchString(text[i+1:]) {
			b.WriteString("x005F_")
		}
	}
	return b.String()
}

// text writes a text that stays text: a leading = is no formula.
func (b *workbookBuilder) text(sheet string, column, row int, text string) {
	place := sheet + "!" + cellName(column, row)
	if utf8.RuneCountInString(text) > 32767 {
		b.do(fmt.Errorf("%s: %d characters, and a cell holds 32767", place, utf8.RuneCountInString(text)))
		return
	}
	for _, r := range text {
		if r < ' ' && r != '\n' && r != '\t' || r == 0xFFFE || r == 0xFFFF {
			b.do(fmt.Errorf("%s: a cell cannot hold the control character %U", place, r))
			return
		}
	}
	if !utf8.ValidString(text) {
		b.do(fmt.Errorf("%s: the text is not UTF-8", place))
		return
	}
	b.do(b.book.SetCellStr(sheet, cellName(column, row), escapeMarks(text)))
}

// note shows help at a header.
func (b *workbookBuilder) note(sheet, cell, text string) {
	if text == "" {
		return
	}
	lines := 1
	for _, l := range strings.Split(text, "\n") {
		lines += 1 + utf8.RuneCountInString(l)/42
	}
	b.do(b.book.AddComment(sheet, excelize.Comment{Cell: cell, Author: "standclear", Width: 300, Height: uint(18 * lines),
		Paragraph: []excelize.RichTextRun{{Text: text, Font: &excelize.Font{Family: "Arial", Size: 9}}}}))
}
