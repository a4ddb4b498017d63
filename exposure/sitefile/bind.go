package sitefile

import (
	"fmt"
	"math"
	"regexp"
	"strings"
	"time"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/units"
)

// state is what became of a cell.
type state uint8

const (
	absent   state = iota // blank, and no default
	assumed               // blank: the default holds
	given                 // read
	wordCell              // a word in place of a number: unknown
	bad                   // at fault: nothing may be concluded from it
)

// cell is one cell under one column of the schema.
type cell struct {
	state state
	v     float64 // SI
	text  string  // the canonical choice, symbol or word; else as typed
	row   *gridRow
	i     int // position in row
}

// record is one row of a table (or all items of a vertical one), by column of
// the schema.
type record struct {
	t     *bound
	in    *exposure.InputRow
	row   *gridRow
	cells []cell
}

// bound is a table whose header has been understood.
type bound struct {
	grid    *grid
	schema  *TableSchema
	input   *exposure.InputTable
	headers []string     // by schema column: as typed, or as Init writes it
	units   []units.Unit // by schema column
	at      []int        // by schema column: position in the file, -1 = no such column
	broken  []bool       // by schema column: the header itself is at fault
	index   map[string]int
	records []record
}

// binder collects what is wrong and what must be known over all tables.
type binder struct {
	faults   Faults
	warnings []exposure.Warning
	mappings map[string]map[string]mapping // table, header in lower case
}

// mapping is a row of the columns table.
type mapping struct{ to, unit string }

func (b *binder) warn(place, column, format string, args ...any) {
	b.warnings = append(b.warnings, exposure.Warning{Place: place, Column: column, Message: fmt.Sprintf(format, args...)})
}

// fault records a fault at a column of a record.
func (b *binder) fault(r *record, column, format string, args ...any) {
	k, ok := r.t.index[column]
	if !ok {
		panic("sitefile: no column " + column + " in " + r.t.schema.Name)
	}
	c := r.cells[k]
	row, i := c.row, c.i
	if row == nil {
		row, i = r.row, -1
	}
	b.faults = append(b.faults, r.t.grid.fault(*row, i, r.t.headers[k], format, args...))
}

// place names the record's row, column the header of a column as typed.
func (r *record) place() string               { return r.t.grid.place(r.row.number) }
func (r *record) header(column string) string { return r.t.headers[r.t.index[column]] }

func (r *record) cell(column string) cell {
	k, ok := r.t.index[column]
	if !ok {
		panic("sitefile: no column " + column + " in " + r.t.schema.Name)
	}
	return r.cells[k]
}

// number returns the SI value of a column: given or by default. ok is false for
// a cell that is blank without default, a word, or at fault.
func (r *record) number(column string) (v float64, ok bool) {
	c := r.cell(column)
	return c.v, c.state == given || c.state == assumed
}

// value is number where absence means zero.
func (r *record) value(column string) float64 { return r.cell(column).v }

// text returns a text, choice or symbol, "" where there is none.
func (r *record) text(column string) string { return r.cell(column).text }

// has reports whether a cell is filled, rightly or wrongly.
func (r *record) has(column string) bool {
	s := r.cell(column).state
	return s == given || s == wordCell || s == bad
}

// sound reports whether none of the columns is at fault.
func (r *record) sound(columns ...string) bool {
	for _, c := range columns {
		if r.cell(c).state == bad {
			return false
		}
	}
	return true
}

var headerForm = regexp.MustCompile(`^(.*?)\s*\[\s*([^\[\]]*?)\s*\]$`)

// splitHeader returns the name in single blanks and the unit of a header cell.
func splitHeader(h string) (name, unit string, hasUnit bool) {
	if m := headerForm.FindStringSubmatch(h); m != nil {
		return strings.Join(strings.Fields(m[1]), " "), m[2], true
	}
	return strings.Join(strings.Fields(h), " "), "", false
}

func isNote(name string) bool {
	n := strings.ToLower(name)
	return n == "note" || strings.HasPrefix(n, "note ")
}

// bind reads a grid by its schema: every header and every cell is checked, and
// every fault recorded.
func (b *binder) bind(g *grid) *bound {
	s := tableSchema(g.table)
	n := len(s.Columns)
	t := &bound{grid: g, schema: s, headers: make([]string, n), units: make([]units.Unit, n), at: make([]int, n), broken: make([]bool, n),
		index: make(map[string]int, n), input: &exposure.InputTable{Name: g.table, File: g.file, Sheet: g.sheet}}
	for k, c := range s.Columns {
		t.index[c.Name], t.headers[k], t.at[k] = k, c.Header(), -1
		t.units[k], _ = units.Lookup(c.Unit)
	}
	b.warnings = append(b.warnings, g.warnings...)
	switch {
	case len(g.rows) == 0:
		b.faults = append(b.faults, Fault{File: g.file, Sheet: g.sheet, Message: "the table has no header row; write " + headerHint(s)})
		return t
	case s.Vertical:
		b.bindItems(t)
	default:
		b.bindHeader(t)
		b.bindRows(t)
	}
	b.decimalMarks(t)
	return t
}

func headerHint(s *TableSchema) string {
	if s.Vertical {
		return "item,value"
	}
	var names []string
	for _, c := range s.Columns {
		if c.Required {
			names = append(names, c.Header())
		}
	}
	return strings.Join(names, ",")
}

// bindHeader understands the header row.
func (b *binder) bindHeader(t *bound) {
	g, header := t.grid, t.grid.rows[0]
	seen := map[string]int{}
	mapped := b.mappings[g.table]
	var unread []string
	for i, h := range header.cells {
		name, unit, hasUnit := splitHeader(h)
		if m, ok := mapped[strings.ToLower(h)]; ok {
			name, unit, hasUnit = m.to, m.unit, m.unit != ""
		}
		col := exposure.InputColumn{Header: h, Name: name, Unit: unit}
		switch {
		case h == "":
			for _, r := range g.rows[1:] {
				if r.cell(i) != "" {
					b.faults = append(b.faults, g.fault(header, i, fmt.Sprintf("column %d", i+1), "the column has no header, but row %d has %q in it; name the column, or delete it", r.number, r.cell(i)))
					break
				}
			}
		case isNote(name):
			col.Name = strings.ToLower(name)
			if k, ok := t.index["note"]; ok && col.Name == "note" && t.at[k] < 0 {
				t.at[k], t.headers[k] = i, h
			}
		default:
			k := t.find(name)
			if k < 0 && mapped != nil {
				unread = append(unread, h)
				break
			}
			if k < 0 {
				b.faults = append(b.faults, g.fault(header, i, h, "no column of %s has this name; %s", t.schema.Name, t.suggest(name)))
				break
			}
			c := t.schema.Columns[k]
			col.Name = c.Name
			if first, dup := seen[c.Name]; dup {
				b.faults = append(b.faults, g.fault(header, i, h, "the column %s is given twice, also as %q; keep one", c.Name, header.cells[first]))
				break
			}
			seen[c.Name] = i
			t.at[k], t.headers[k] = i, h
			u, problem := headerUnit(c, unit, hasUnit)
			if problem != "" {
				t.broken[k] = true
				b.faults = append(b.faults, g.fault(header, i, h, "%s", problem))
				break
			}
			t.units[k] = u
			if hasUnit {
				col.Unit = u.Symbol
			}
		}
		t.input.Columns = append(t.input.Columns, col)
	}
	if len(unread) > 0 {
		b.warn(g.place(header.number), "", "not read, since the columns table does not map them: %s", strings.Join(unread, ", "))
	}
	for k, c := range t.schema.Columns {
		if c.Required && c.Unless == "" && t.at[k] < 0 {
			b.faults = append(b.faults, g.fault(header, -1, c.Header(), "the column is missing and every row needs it; add it: %s", c.Help))
		}
	}
}

// find returns the schema column of a name, or -1.
func (t *bound) find(name string) int {
	if k, ok := t.index[name]; ok {
		return k
	}
	for k, c := range t.schema.Columns {
		if strings.EqualFold(c.Name, name) {
			return k
		}
	}
	return -1
}

func (t *bound) suggest(name string) string {
	var names []string
	for _, c := range t.schema.Columns {
		names = append(names, c.Name)
	}
	if near := units.NearName(name, names); near != "" {
		c, _ := t.schema.Column(near)
		return fmt.Sprintf("did you mean %q?", c.Header())
	}
	if len(names) <= 12 {
		return "the names are " + strings.Join(names, ", ")
	}
	return fmt.Sprintf("call it %q to keep it as a remark", "note "+name)
}

// headerUnit returns the unit of a column, or what is wrong with it.
func headerUnit(c ColumnSchema, symbol string, hasUnit bool) (units.Unit, string) {
	if c.Dimension == units.None || c.Kind == Symbol {
		if hasUnit {
			return units.Unit{}, fmt.Sprintf("the column takes no unit; write %q", c.Name)
		}
		return units.Unit{}, ""
	}
	if !hasUnit || symbol == "" {
		if c.UnitOptional {
			u, _ := units.Lookup(c.Unit)
			return u, ""
		}
		return units.Unit{}, fmt.Sprintf("the header names no unit; write %q", c.Header())
	}
	u, ok := units.Lookup(symbol)
	if ok && u.Dimension == c.Dimension {
		return u, ""
	}
	allowed := units.Symbols(c.Dimension)
	what := fmt.Sprintf("[%s] is not a unit of %s", symbol, c.Dimension)
	if near := units.NearName(symbol, allowed); near != "" {
		return units.Unit{}, fmt.Sprintf("%s; did you mean [%s]?", what, near)
	}
	return units.Unit{}, fmt.Sprintf("%s; write one of %s", what, strings.Join(allowed, ", "))
}

// bindRows reads the rows under the header.
func (b *binder) bindRows(t *bound) {
	g := t.grid
	header := g.rows[0]
	width := len(header.cells)
	t.records = make([]record, len(g.rows)-1)
	t.input.Rows = make([]*exposure.InputRow, len(g.rows)-1)
	all := make([]cell, len(t.records)*len(t.schema.Columns))
	for n := range t.records {
		row := &g.rows[n+1]
		if len(row.cells) > width {
			b.faults = append(b.faults, g.fault(*row, -1, "", "the row has %d cells and the header %d; put a cell that has a separator in it in quotation marks", len(row.cells), width))
		}
		in := &exposure.InputRow{Table: t.input, Row: row.number, Cells: make([]string, width)}
		copy(in.Cells, row.cells)
		t.input.Rows[n] = in
		cells := all[:len(t.schema.Columns):len(t.schema.Columns)]
		all = all[len(t.schema.Columns):]
		t.records[n] = record{t: t, in: in, row: row, cells: cells}
		for k := range t.schema.Columns {
			if t.at[k] < 0 {
				cells[k] = b.blankCell(t, k)
				continue
			}
			cells[k] = b.read(t, k, row, t.at[k])
		}
	}
}

// bindItems reads a vertical table: each row an item and its value.
func (b *binder) bindItems(t *bound) {
	g := t.grid
	header := g.rows[0]
	for i, h := range header.cells {
		name, _, _ := splitHeader(h)
		t.input.Columns = append(t.input.Columns, exposure.InputColumn{Header: h, Name: strings.ToLower(name)})
		if i >= 2 && h != "" && !isNote(name) {
			b.faults = append(b.faults, g.fault(header, i, h, "the table has two columns, item and value; call it %q to keep it as a remark", "note "+name))
		}
	}
	if !strings.EqualFold(header.cell(0), "item") || !strings.EqualFold(header.cell(1), "value") {
		b.faults = append(b.faults, g.fault(header, 0, header.cell(0), "the header is not item,value; write it as the first row"))
		return
	}
	r := record{t: t, row: &g.rows[0], cells: make([]cell, len(t.schema.Columns))}
	for n := range g.rows[1:] {
		row := &g.rows[n+1]
		in := &exposure.InputRow{Table: t.input, Row: row.number, Cells: make([]string, max(2, len(header.cells)))}
		copy(in.Cells, row.cells)
		t.input.Rows = append(t.input.Rows, in)
		if len(row.cells) > max(2, len(header.cells)) {
			b.faults = append(b.faults, g.fault(*row, -1, "", "the row has %d cells and the header %d; put a value that has a separator in it in quotation marks", len(row.cells), len(header.cells)))
		}
		h := row.cell(0)
		name, unit, hasUnit := splitHeader(h)
		k := t.find(name)
		switch {
		case isNote(name) && (k < 0 || t.at[k] >= 0):
			continue
		case k < 0:
			b.faults = append(b.faults, g.fault(*row, 0, h, "no item of %s has this name; %s", t.schema.Name, t.suggest(name)))
			continue
		case t.at[k] >= 0:
			b.faults = append(b.faults, g.fault(*row, 0, h, "the item is given twice, also in row %d; keep one", r.cells[k].row.number))
			continue
		}
		t.at[k], t.headers[k] = 1, h
		if c := t.schema.Columns[k]; row.cell(1) != "" || hasUnit {
			u, problem := headerUnit(c, unit, hasUnit)
			if problem != "" {
				t.broken[k] = true
				b.faults = append(b.faults, g.fault(*row, 0, h, "%s", problem))
			}
			t.units[k] = u
		}
		r.cells[k] = b.read(t, k, row, 1)
	}
	for k, c := range t.schema.Columns {
		if t.at[k] >= 0 {
			continue
		}
		r.cells[k] = b.blankCell(t, k)
		if c.Required {
			b.faults = append(b.faults, g.fault(header, -1, c.Header(), "the item is missing; add it: %s", c.Help))
		}
	}
	t.records = []record{r}
}

// blankCell is a cell without text: the default, or nothing.
func (b *binder) blankCell(t *bound, k int) cell {
	c := t.schema.Columns[k]
	if c.Default == "" {
		return cell{}
	}
	out := cell{state: assumed, text: c.Default}
	if c.Kind == Number {
		v, err := units.ParseNumber(c.Default, false)
		if err != nil {
			panic("sitefile: default of " + c.Name)
		}
		out.v, out.text = v, ""
		if u, ok := units.Lookup(c.Unit); ok {
			out.v = u.ToSI(v)
		}
	}
	return out
}

// read reads one cell by its column's kind and rule.
func (b *binder) read(t *bound, k int, row *gridRow, i int) cell {
	c := &t.schema.Columns[k]
	text := row.cell(i)
	fail := func(format string, args ...any) cell {
		b.faults = append(b.faults, t.grid.fault(*row, i, t.headers[k], format, args...))
		return cell{state: bad, row: row, i: i}
	}
	if t.broken[k] && text != "" {
		return cell{state: bad, row: row, i: i}
	}
	if text == "" {
		if c.Required && c.Unless == "" {
			return fail("the cell is blank and every row needs it; write %s", wanted(c))
		}
		out := b.blankCell(t, k)
		out.row, out.i = row, i
		return out
	}
	out := cell{state: given, text: text, row: row, i: i}
	switch c.Kind {
	case Number:
		for _, w := range c.Words {
			if strings.EqualFold(w, text) {
				out.state, out.text = wordCell, w
				return out
			}
		}
		v, err := units.ParseNumber(text, t.grid.decimalComma)
		if err != nil {
			if near := units.NearName(text, c.Words); near != "" {
				return fail("%q is not a number; did you mean %s?", text, near)
			}
			return fail("%s", err)
		}
		out.v = v
		if u := t.units[k]; u.Symbol != "" {
			out.v = u.ToSI(v)
		}
		if math.IsInf(out.v, 0) { // a level in dB beyond every power
			return fail("%q is too large a number; check the figure and its unit", text)
		}
		if problem := outOfRange(c, out.v, text, t.units[k]); problem != "" {
			return fail("%s", problem)
		}
	case Choice:
		for _, choice := range c.Choices {
			if strings.EqualFold(choice, text) {
				out.text = choice
				return out
			}
		}
		if near := units.NearName(text, c.Choices); near != "" {
			return fail("%q is not one of %s; did you mean %s?", text, strings.Join(c.Choices, ", "), near)
		}
		return fail("%q is not one of the words that can stand here; write one of %s", text, strings.Join(c.Choices, ", "))
	case Date:
		if !isDate(text) {
			return fail("%q is not a date; write it as 2026-03-31", text)
		}
	case Moment:
		if _, err := time.Parse(time.RFC3339, text); err != nil {
			return fail("%q is not a time; write it as 2026-03-31T10:05:00Z, with its zone", text)
		}
	case Symbol:
		u, ok := units.Lookup(text)
		if !ok || c.Dimension != units.None && u.Dimension != c.Dimension {
			var allowed []string
			hint := "write a unit such as V/m, A/m, uT or W/m2"
			if c.Dimension != units.None {
				allowed = units.Symbols(c.Dimension)
				hint = "write one of " + strings.Join(allowed, ", ")
			}
			near := units.NearName(text, allowed)
			if allowed == nil {
				near = units.Near(text)
			}
			if near != "" {
				hint = "did you mean " + near + "?"
			}
			return fail("%q is not a unit that can stand here; %s", text, hint)
		}
		out.text = u.Symbol
	}
	return out
}

// wanted says in words what a cell of the column may hold.
func wanted(c *ColumnSchema) string {
	switch {
	case c.Kind == Choice:
		return "one of " + strings.Join(c.Choices, ", ")
	case c.Kind == Number && len(c.Words) > 0:
		return numberWanted(c) + ", or " + c.Words[0]
	case c.Kind == Number:
		return numberWanted(c)
	case c.Kind == Date:
		return "a date such as 2026-03-31"
	case c.Kind == Symbol:
		return "a unit"
	case c.Example != "":
		return "one, such as " + c.Example
	}
	return "one: " + c.Help
}

func numberWanted(c *ColumnSchema) string {
	switch {
	case c.Range == nil:
		return "a number"
	case c.Range.Whole:
		return c.Range.String()
	}
	return "a number " + c.Range.String()
}

// outOfRange says what is wrong with a value in SI, or "".
func outOfRange(c *ColumnSchema, si float64, text string, typed units.Unit) string {
	if c.Range == nil {
		return ""
	}
	v, unit := si, ""
	if u, ok := units.Lookup(c.Unit); ok && typed.Symbol != "" {
		v = u.FromSI(si)
		// What a conversion leaves of a bound in its last bits is the bound.
		for _, bound := range []float64{c.Range.Min, c.Range.Max} {
			if math.Abs(v-bound) <= 1e-12*math.Abs(bound) {
				v = bound
			}
		}
		if typed.Symbol != u.Symbol && (c.Range.Min != 0 || c.Range.HasMax) {
			unit = " " + u.Symbol
		}
	}
	switch {
	case c.Range.allows(v):
		return ""
	case v < 0 && c.Range.HasMin && c.Range.Min == 0 && !c.Range.HasMax:
		return fmt.Sprintf("%q is negative; write a number %s", text, c.Range)
	}
	return fmt.Sprintf("%q is out of range; write %s%s", text, numberWanted(c), unit)
}

// isDate accepts a day, a month or a year of ISO 8601.
func isDate(text string) bool {
	for _, layout := range []string{"2006-01-02", "2006-01", "2006"} {
		if _, err := time.Parse(layout, text); err == nil {
			return true
		}
	}
	return false
}

var threeBehind = regexp.MustCompile(`^[+-]?[0-9]{1,3}[.,][0-9]{3}$`)

// decimalMarks finds numbers whose decimal mark may be a thousands separator, in
// files that may use a decimal comma: 1.800 in a file that has 1,8 elsewhere.
func (b *binder) decimalMarks(t *bound) {
	if !t.grid.decimalComma {
		return
	}
	points, commas, plainCommas := 0, 0, 0
	each := func(f func(r *record, k int, c cell)) {
		for n := range t.records {
			r := &t.records[n]
			for k, c := range r.cells {
				if c.state == given && t.schema.Columns[k].Kind == Number {
					f(r, k, c)
				}
			}
		}
	}
	each(func(_ *record, _ int, c cell) {
		if strings.Contains(c.text, ".") {
			points++
		}
		if strings.Contains(c.text, ",") {
			commas++
			if !threeBehind.MatchString(c.text) {
				plainCommas++
			}
		}
	})
	if points > 0 && commas > 0 {
		each(func(r *record, k int, c cell) {
			if threeBehind.MatchString(c.text) {
				whole := strings.NewReplacer(".", "", ",", "").Replace(c.text)
				b.faults = append(b.faults, t.grid.fault(*c.row, c.i, t.headers[k], "%q may be %s or %s, since the file has both decimal points and decimal commas; write the one that is meant, with one kind of mark throughout",
					c.text, whole, strings.Replace(c.text, ",", ".", 1)))
			}
		})
		return
	}
	if commas > 0 && plainCommas == 0 {
		warned := false
		each(func(r *record, k int, c cell) {
			if !warned && strings.Contains(c.text, ",") {
				warned = true
				b.warn(t.grid.place(c.row.number), t.headers[k], "%q is read as %s: the comma counts as the decimal mark in a file with semicolons or tabs", c.text, strings.Replace(c.text, ",", ".", 1))
			}
		})
	}
}
