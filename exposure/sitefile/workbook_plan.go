package sitefile

import (
	"cmp"
	"fmt"
	"io"
	"slices"
	"strings"
	"unicode/utf8"

	"example.org/standclear/exposure/units"
)

// roomRows is how many rows below the last one get drop-downs and checks. More
// may be filled in: the reader checks every row all the same.
const roomRows = 2000

// writeFillIn writes the workbook to be filled in: one sheet a table.
func writeFillIn(w io.Writer) error {
	var plans []sheetPlan
	for _, t := range Schema() {
		plans = append(plans, fillInPlan(t))
	}
	return writeWorkbook(w, plans)
}

// writeGrids writes tables that were read from CSV files as one workbook, which
// can be filled in further.
func writeGrids(w io.Writer, grids []*grid) error {
	var plans []sheetPlan
	for _, g := range grids {
		t := tableSchema(g.table)
		if t == nil {
			return fmt.Errorf("sitefile: no table is named %q", g.table)
		}
		plans = append(plans, gridPlan(*t, g))
		if g.table == limitsTable.Name && !slices.ContainsFunc(grids, func(o *grid) bool { return strings.HasPrefix(o.table, "limits ") }) {
			plans = append(plans, limitsPlans(g)...)
		}
	}
	return writeWorkbook(w, plans)
}

func fillInPlan(t TableSchema) sheetPlan {
	p := sheetPlan{name: t.Name, guide: guideLine(t), fillIn: true, room: roomRows}
	columns := slices.Clone(t.Columns)
	if t.Vertical {
		p.columns = verticalColumns()
		p.room = 0
		for _, c := range columns {
			p.labels = append(p.labels, planColumn(c))
			p.rows = append(p.rows, rowPlan{cells: []string{c.Header(), ""}})
		}
		return p
	}
	slices.SortStableFunc(columns, func(a, b ColumnSchema) int { return cmp.Compare(rank(a), rank(b)) })
	ex := rowPlan{grey: true}
	for i, c := range columns {
		p.columns = append(p.columns, planColumn(c))
		text := c.Example
		if i == 0 {
			text = "# example " + text
		}
		ex.cells = append(ex.cells, text)
	}
	p.rows = []rowPlan{ex}
	return p
}

// rank puts the rare columns behind the others, and the note last.
func rank(c ColumnSchema) int {
	switch {
	case c.Name == "note":
		return 2
	case c.Rare:
		return 1
	}
	return 0
}

// gridPlan lays out a table as read, its comments in grey between the rows.
func gridPlan(t TableSchema, g *grid) sheetPlan {
	p := sheetPlan{name: t.Name, guide: guideLine(t), fillIn: true, room: roomRows}
	if len(g.rows) == 0 {
		return fillInPlan(t)
	}
	if t.Vertical {
		p.columns, p.room = verticalColumns(), 0
	}
	for i, h := range g.rows[0].cells {
		if t.Vertical && i < 2 {
			continue
		}
		p.columns = append(p.columns, headerPlan(t, h))
	}
	for _, r := range g.rows[1:] {
		p.rows = append(p.rows, rowPlan{cells: plainDecimals(p, g, r.cells)})
		if t.Vertical {
			p.labels = append(p.labels, headerPlan(t, r.cell(0)))
		}
	}
	for i := range p.columns {
		for _, r := range p.rows {
			if i < len(r.cells) && !t.Vertical {
				n := float64(utf8.RuneCountInString(r.cells[i])) + 3
				p.columns[i].width = max(p.columns[i].width, min(n, 60))
			}
		}
	}
	if t.Name != limitsTable.Name && !t.Vertical {
		p.rows = slices.Concat(commentRows(g), p.rows)
	}
	return p
}

func commentRows(g *grid) []rowPlan {
	var out []rowPlan
	for _, r := range g.comments {
		out = append(out, rowPlan{cells: r.cells, grey: true})
	}
	return out
}

// plainDecimals writes numbers with a decimal point where the table had a comma.
func plainDecimals(p sheetPlan, g *grid, cells []string) []string {
	if !g.decimalComma {
		return cells
	}
	cells = slices.Clone(cells)
	for i, text := range cells {
		if i < len(p.columns) && p.columns[i].kind == numberCell {
			if _, err := units.ParseNumber(text, true); err == nil {
				cells[i] = strings.Replace(text, ",", ".", 1)
			}
		}
	}
	return cells
}

// limitsPlans turns the leading rows of a limit table into its two sheets.
func limitsPlans(g *grid) []sheetPlan {
	about, spots := fillInPlan(limitsAboutTable), fillInPlan(limitsSpotsTable)
	spots.rows = nil
	for _, r := range g.comments {
		key, rest, ok := strings.Cut(strings.TrimPrefix(r.cell(0), "#"), ":")
		key, rest = strings.ToLower(strings.TrimSpace(key)), strings.TrimSpace(rest)
		if !ok {
			continue
		}
		if key == "spot" {
			spots.rows = append(spots.rows, rowPlan{cells: append([]string{rest}, r.cells[1:]...)})
			continue
		}
		for i := range about.rows {
			if about.rows[i].cells[0] == key {
				about.rows[i].cells[1] = strings.Join(append([]string{rest}, r.cells[1:]...), ", ")
			}
		}
	}
	return []sheetPlan{about, spots}
}

// headerPlan finds the column that a header names; one that the schema does not
// know is text. The range holds only in the schema's own unit.
func headerPlan(t TableSchema, header string) columnPlan {
	name, unit, _ := splitHeader(header)
	var c ColumnSchema
	ok := false
	for _, one := range t.Columns {
		if strings.EqualFold(one.Name, name) {
			c, ok = one, true
		}
	}
	if !ok {
		return columnPlan{header: header, width: 24}
	}
	p := planColumn(c)
	p.header = header
	if unit != "" && unit != c.Unit {
		p.limits, p.rule = nil, ""
	}
	return p
}

func verticalColumns() []columnPlan {
	return []columnPlan{
		{header: "item", note: "Given by the program: leave it as it is.", required: true, width: 26},
		{header: "value", note: "Fill in; a blank value takes the default that the item's note names.", required: true, width: 48},
	}
}

// planColumn turns a column of the schema into what the sheet shows and checks.
func planColumn(c ColumnSchema) columnPlan {
	p := columnPlan{name: c.Name, header: c.Header(), note: noteOf(c), choices: c.Choices, words: c.Words,
		limits: c.Range, rule: c.Rule, required: c.Required && c.Unless == ""}
	switch c.Kind {
	case Number:
		p.kind, p.width = numberCell, 12
	case Date:
		p.kind, p.width = dateCell, 12
	case Symbol:
		p.choices, p.open, p.width = unitsOf(c), true, 11
	case Choice:
		p.width = 13
	default:
		p.width = 18
	}
	if c.Name == "pattern" {
		p.choices, p.open = builtinPatterns, true
	}
	if from, ok := suggestions[c.Name]; ok && c.Kind == Text {
		p.listFrom, p.open = from, true
	}
	for word := range strings.FieldsSeq(p.header) {
		p.width = max(p.width, float64(len(word))*1.15+2)
	}
	switch c.Name {
	case "outline", "source", "note", "help":
		p.width = 44
	}
	return p
}

// suggestions are columns that name a row of another table.
var suggestions = map[string]string{"on": "surfaces", "place": "places", "instrument": "instruments"}

// unitsOf lists common units that a unit cell may hold.
func unitsOf(c ColumnSchema) []string {
	if c.Dimension == units.Frequency {
		return []string{"Hz", "kHz", "MHz", "GHz"}
	}
	return []string{"V/m", "A/m", "uT", "W/m2", "mW/cm2"}
}

// noteOf writes the help of a column.
func noteOf(c ColumnSchema) string {
	lines := []string{strings.ToUpper(c.Help[:1]) + c.Help[1:] + "."}
	switch {
	case c.Required && c.Unless != "":
		lines = append(lines, "Required, unless there is "+c.Unless+".")
	case c.Required:
		lines = append(lines, "Required.")
	case c.Default != "":
		lines = append(lines, "Blank: "+c.Default+".")
	}
	if len(c.Choices) > 0 {
		lines = append(lines, "One of: "+strings.Join(c.Choices, ", ")+".")
	}
	if c.Rule != "" {
		lines = append(lines, strings.ToUpper(c.Rule[:1])+c.Rule[1:]+".")
	}
	if len(c.Words) > 0 {
		lines = append(lines, "Or the word "+strings.Join(c.Words, ", ")+".")
	}
	if c.Example != "" {
		lines = append(lines, "Example: "+c.Example)
	}
	if c.Unit != "" && !c.UnitOptional {
		lines = append(lines, "In "+c.Unit+"; any other unit of its kind is read where the header says so.")
	}
	return strings.Join(lines, "\n")
}

// guideLine is the grey line above a header. It has no colon, which would make it
// a heading of the limit table.
func guideLine(t TableSchema) string {
	help, _, _ := strings.Cut(t.Help, ";")
	help, _, _ = strings.Cut(help, ":")
	if t.Vertical {
		return help
	}
	return help + ". Rows that begin with # are not read"
}
