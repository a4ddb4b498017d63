package sitefile

import (
	"fmt"
	"slices"
	"strings"

	"example.org/standclear/exposure"
)

// scenarioTables are the tables whose rows a scenario may change.
var scenarioTables = []string{"site", "antennas", "surfaces", "places"}

// scenarioCell is a cell that a scenario changed, with the row that did.
type scenarioCell struct {
	file, sheet string
	row         int
	column      string // header as typed
	by          *record
}

// untouched copies the tables as the carriers gave them, where there is a table
// of scenarios to be applied to them later; nil where there is none.
func (l *loader) untouched() []*grid {
	if !slices.ContainsFunc(l.grids, func(g *grid) bool { return g.table == "scenarios" }) {
		return nil
	}
	return copyGrids(l.grids)
}

func copyGrids(grids []*grid) []*grid {
	var out []*grid
	for _, g := range grids {
		c := *g
		c.rows = make([]gridRow, len(g.rows))
		for i, r := range g.rows {
			r.cells = slices.Clone(r.cells)
			c.rows[i] = r
		}
		out = append(out, &c)
	}
	return out
}

// scenarios reads the site once for each scenario, with its cells in place of
// those of the tables, in the order in which they are named. What is wrong with
// a value is a fault of the scenarios table.
func (l *loader) scenarios(raw []*grid) []exposure.Scenario {
	records := l.rows("scenarios")
	var names []string
	rows := map[string][]*record{}
	for i := range records {
		r := &records[i]
		name := r.text("scenario")
		if name == "" {
			continue
		}
		if rows[name] == nil {
			names = append(names, name)
		}
		rows[name] = append(rows[name], r)
	}
	if len(l.faults) > 0 {
		return nil // a site with faults has no scenarios either
	}
	var out []exposure.Scenario
	for _, name := range names {
		if s, ok := l.scenario(name, rows[name], raw); ok {
			out = append(out, s)
		}
	}
	return out
}

func (l *loader) scenario(name string, rows []*record, raw []*grid) (exposure.Scenario, bool) {
	s := exposure.Scenario{Name: name}
	v := newLoader(l.fsys, l.options)
	v.options.LimitsFile = "" // it is among the tables already
	v.book = l.book
	for _, g := range copyGrids(raw) {
		if !slices.Contains([]string{"scenarios", "readings", "instruments", "uncertainty"}, g.table) {
			v.grids = append(v.grids, g)
		}
	}
	before := len(l.faults)
	var cells []scenarioCell
	for _, r := range rows {
		c, was, ok := l.change(v.grids, r)
		if !ok {
			continue
		}
		for _, o := range cells {
			if o.file == c.file && o.sheet == c.sheet && o.row == c.row && o.column == c.column {
				l.fault(r, "value", "scenario %q changes this cell twice; keep one row", name)
			}
		}
		cells = append(cells, c)
		if was == "" {
			was = "a blank cell"
		}
		s.Changes = append(s.Changes, fmt.Sprintf("%s %s %s: %s in place of %s", r.text("table"), r.text("id"), c.column, r.text("value"), was))
	}
	if len(l.faults) > before {
		return s, false
	}
	site, err := v.site()
	if err != nil {
		l.blame(name, rows[0], cells, err)
		return s, false
	}
	s.Site = site
	return s, true
}

// change puts a scenario's value into its cell.
func (l *loader) change(grids []*grid, r *record) (c scenarioCell, was string, ok bool) {
	name := strings.ToLower(r.text("table"))
	if !slices.Contains(scenarioTables, name) {
		l.fault(r, "table", "a scenario changes rows of %s, not of %q%s", strings.Join(scenarioTables, ", "), r.text("table"), didYouMean(name, scenarioTables))
		return c, "", false
	}
	i := slices.IndexFunc(grids, func(g *grid) bool { return g.table == name })
	if i < 0 || len(grids[i].rows) == 0 {
		l.fault(r, "table", "the site has no table %s", name)
		return c, "", false
	}
	g := grids[i]
	t := &bound{schema: tableSchema(name), index: map[string]int{}}
	for k, col := range t.schema.Columns {
		t.index[col.Name] = k
	}
	idColumn := t.schema.Columns[0].Name
	if t.schema.Vertical {
		idColumn = "item"
	}
	id := columnOf(g, idColumn)
	n := slices.IndexFunc(g.rows[1:], func(row gridRow) bool { return id >= 0 && strings.EqualFold(row.cell(id), r.text("id")) }) + 1
	if n == 0 {
		var ids []string
		for _, row := range g.rows[1:] {
			ids = append(ids, row.cell(max(id, 0)))
		}
		l.fault(r, "id", "%s has no row %q%s", name, r.text("id"), didYouMean(r.text("id"), ids))
		return c, "", false
	}
	column := r.text("column")
	if plain, _, hasUnit := splitHeader(column); hasUnit {
		column = plain
	}
	at := columnOf(g, column)
	if at < 0 {
		k := t.find(column)
		if t.schema.Vertical || k < 0 {
			l.fault(r, "column", "no column of %s has this name; %s", name, t.suggest(column))
			return c, "", false
		}
		at = len(g.rows[0].cells)
		g.rows[0].cells = append(g.rows[0].cells, t.schema.Columns[k].Header())
	}
	row := &g.rows[n]
	was = row.cell(at)
	for len(row.cells) <= at {
		row.cells = append(row.cells, "")
	}
	row.cells[at] = r.text("value")
	return scenarioCell{g.file, g.sheet, row.number, g.rows[0].cells[at], r}, was, true
}

// columnOf finds a column by its name in a header as typed, or -1.
func columnOf(g *grid, name string) int {
	return slices.IndexFunc(g.rows[0].cells, func(h string) bool {
		plain, _, _ := splitHeader(h)
		return strings.EqualFold(plain, name)
	})
}

// blame turns what is wrong with a scenario's site into faults of the scenarios
// table: at the value that was put there, else at the scenario as a whole.
func (l *loader) blame(name string, first *record, cells []scenarioCell, err error) {
	faults, ok := err.(Faults)
	if !ok {
		l.fault(first, "scenario", "scenario %q cannot be read: %v", name, err)
		return
	}
	for _, f := range faults {
		i := slices.IndexFunc(cells, func(c scenarioCell) bool {
			return c.file == f.File && c.sheet == f.Sheet && c.row == f.Row && c.column == f.Column
		})
		if i >= 0 {
			l.fault(cells[i].by, "value", "%s", f.Message)
			continue
		}
		l.fault(first, "scenario", "with the changes of scenario %q, %s", name, f.Error())
	}
}
