package sitefile

import (
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
	"example.org/standclear/exposure/units"
)

// WriteSheet writes a workbook to fill in on site: every table of the site as it
// is, and the planned readings with empty cells for the figures. It is a site
// workbook that Load and LoadSurvey read as it comes back. Readings that the
// site has already stay in front. name and o are those of Load.
func WriteSheet(w io.Writer, name string, o Options, planned []survey.Planned) error {
	l, err := open(name, o)
	if err != nil {
		return err
	}
	site, err := l.site()
	if err != nil {
		return err
	}
	has := func(table string) bool {
		return slices.ContainsFunc(l.grids, func(g *grid) bool { return g.table == table })
	}
	var plans []sheetPlan
	for _, t := range schema {
		for _, g := range l.grids {
			switch {
			case g.table != t.Name || t.Name == "readings" || t.Name == "columns" || t.Name == "places":
			default:
				plans = append(plans, gridPlan(t, g))
				if t.Name == limitsTable.Name && !has("limits about") && !has("limits spots") {
					plans = append(plans, limitsPlans(g)...)
				}
			}
		}
		if t.Name == "places" {
			plans = append(plans, placesPlan(site))
		}
		if t.Name == "readings" {
			plans = append(plans, l.sheetPlan(planned))
		}
		if !has(t.Name) && (t.Name == "instruments" || t.Name == "uncertainty") {
			plans = append(plans, fillInPlan(t))
		}
	}
	return writeWorkbook(w, plans)
}

// placesPlan lays out every place of a site, waypoints among them.
func placesPlan(site *exposure.Site) sheetPlan {
	p := fillInPlan(placesTable)
	p.rows = nil
	for _, x := range site.Places {
		row := make([]string, len(p.columns))
		for i, c := range p.columns {
			column, _ := placesTable.Column(c.name)
			switch c.name {
			case "id":
				row[i] = x.ID
			case "x":
				row[i] = numberIn(column, x.At.X)
			case "y":
				row[i] = numberIn(column, x.At.Y)
			case "z":
				if x.On == "" {
					row[i] = numberIn(column, x.At.Z)
				}
			case "on":
				row[i] = x.On
			case "from":
				row[i] = numberIn(column, x.From)
			case "to":
				row[i] = numberIn(column, x.To)
			case "class":
				row[i] = x.Class
			case "wall loss":
				row[i] = numberIn(column, wallLossDB(x.WallLoss))
			case "note":
				row[i] = x.Note
			}
		}
		p.rows = append(p.rows, rowPlan{cells: row})
	}
	return p
}

// wallLossDB returns the loss in dB of a share of power, without the last bits
// that a conversion leaves.
func wallLossDB(share float64) float64 { return math.Abs(math.Round(-1e10*math.Log10(share)) / 1e9) }

// sheetColumns are those of the readings sheet, in the order in which they are
// filled in on site; what was measured before may add others.
var sheetColumns = []string{"id", "place", "height", "group", "instrument", "frequency", "from", "to", "time", "E", "H", "S", "port level", "share of limit", "share of", "axis", "detector", "antennas", "scale to maximum", "series", "ports", "x", "y", "z"}

// sheetPlan lays the readings out: those there are, then the planned ones.
func (l *loader) sheetPlan(planned []survey.Planned) sheetPlan {
	p := sheetPlan{name: "readings", guide: "fill in time and figure on site; a row without a figure is left out. Rows that begin with # are not read", fillIn: true, room: roomRows}
	for _, name := range sheetColumns {
		c, _ := readingsTable.Column(name)
		p.columns = append(p.columns, planColumn(c))
	}
	expected := columnPlan{header: "note expected E [V/m]", kind: numberCell, width: 13}
	share := columnPlan{header: "note expected ratio", kind: numberCell, width: 13}
	settings := columnPlan{header: "note settings", width: 40}
	remark, _ := readingsTable.Column("note")
	p.columns = append(p.columns, expected, share, settings, planColumn(remark))
	for i := range l.rows("readings") {
		r := &l.rows("readings")[i]
		row := make([]string, len(p.columns))
		for k, name := range sheetColumns {
			row[k] = l.siText(r, name)
		}
		row[len(row)-1] = r.text("note")
		p.rows = append(p.rows, rowPlan{cells: row})
	}
	for _, x := range planned {
		row := make([]string, len(p.columns))
		set := func(column, text string) { row[slices.Index(sheetColumns, column)] = text }
		set("id", x.ID)
		set("place", x.Place)
		set("height", number4(x.HeightM))
		set("group", x.Group)
		set("instrument", x.Instrument)
		row[len(sheetColumns)] = number4(x.ExpectedVPerM)
		row[len(sheetColumns)+1] = number4(x.ExpectedRatio)
		row[len(sheetColumns)+2] = x.Settings
		p.rows = append(p.rows, rowPlan{cells: row})
	}
	for i := range p.columns {
		for _, r := range p.rows {
			p.columns[i].width = max(p.columns[i].width, min(float64(len([]rune(r.cells[i])))+3, 60))
		}
	}
	return p
}

// siText returns a cell in the unit of the schema's own header.
func (l *loader) siText(r *record, name string) string {
	c, _ := readingsTable.Column(name)
	cell := r.cell(name)
	if cell.state != given {
		return ""
	}
	if c.Kind != Number {
		return cell.text
	}
	return numberIn(c, cell.v)
}

func numberIn(c ColumnSchema, si float64) string {
	v := si
	if u := schemaUnit(c); u.Symbol != "" {
		v = u.FromSI(si)
	}
	return strconv.FormatFloat(v, 'g', 12, 64)
}

// number4 writes an expected figure with four digits.
func number4(v float64) string { return fmt.Sprintf("%.4g", v) }

func schemaUnit(c ColumnSchema) units.Unit {
	u, _ := units.Lookup(c.Unit)
	return u
}
