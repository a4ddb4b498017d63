package sitefile

import (
	"math"
	"strings"

	"example.org/standclear/exposure/units"
	"example.org/standclear/limits"
)

// quantityDimension tells what dimension a level of each quantity has.
var quantityDimension = map[limits.Quantity]units.Dimension{
	limits.E: units.EField, limits.H: units.HField, limits.B: units.FluxDensity, limits.S: units.PowerDensity,
}

// limits binds the limit table; nil where there is none or it is at fault.
func (l *loader) limits() *limits.Table {
	t := l.tables["limits"]
	if t == nil {
		return nil
	}
	before := len(l.faults)
	byLine := map[int]*record{}
	rows := make([]limits.Row, 0, len(t.records))
	for i := range t.records {
		r := &t.records[i]
		byLine[r.row.number] = r
		rows = append(rows, l.limitRow(r))
	}
	about, aboutPlace := l.limitsAbout(t)
	spots, spotPlace := l.limitSpots(t)
	for _, f := range l.faults {
		if f.File == t.grid.file && (f.Sheet == t.grid.sheet || strings.HasPrefix(strings.ToLower(f.Sheet), "limits")) {
			return nil // levels that were not understood make no bands
		}
	}
	if len(l.faults) > before {
		return nil
	}
	table, faults, warnings := limits.New(rows, about, spots)
	for _, p := range faults {
		switch r := byLine[p.Line]; {
		case spotPlace[p.Line] != nil && (p.Column == "spot" || r == nil):
			l.faults = append(l.faults, spotPlace[p.Line].fault(p.Message))
		case r != nil && t.find(p.Column) >= 0:
			l.fault(r, p.Column, "%s", p.Message)
		case r != nil:
			l.faults = append(l.faults, t.grid.fault(*r.row, -1, p.Column, "%s", p.Message))
		default:
			l.faults = append(l.faults, Fault{File: t.grid.file, Sheet: t.grid.sheet, Column: p.Column, Message: p.Message})
		}
	}
	for _, p := range warnings {
		place, column := t.grid.place(p.Line), p.Column
		if r := byLine[p.Line]; r != nil {
			if k, ok := t.index[p.Column]; ok {
				column = t.headers[k]
			}
		} else if at, ok := aboutPlace[p.Column]; ok {
			place = at
		}
		l.warn(place, column, "%s", p.Message)
	}
	return table
}

// limitRow turns a row into SI units.
func (l *loader) limitRow(r *record) limits.Row {
	q := limits.Quantity(r.text("quantity"))
	row := limits.Row{
		Class: r.text("class"), Quantity: q, FromHz: r.value("from"), ToHz: r.value("to"),
		Exponent: r.value("exponent"), FUnitHz: frequencyUnit(r.text("f unit")), None: r.text("level") == "none",
		AverageS: r.value("average"), AverageExp: r.value("average exponent"), AverageFUnitHz: frequencyUnit(r.text("average f unit")),
		TimeAveraging: r.text("time averaging") == "yes", OverBody: limits.Over(r.text("over body")), AreaM2: r.value("area"),
		HasBrief: r.has("brief a") || r.has("brief b"), BriefA: r.value("brief a"), BriefB: r.value("brief b"), BriefExp: r.value("brief exponent"),
		Region: limits.Region(r.text("region")), Effect: limits.Effect(r.text("effect")), Kind: limits.Kind(r.text("kind")),
		Combine: limits.Combine(r.text("combine")), Source: r.text("source"), Line: r.row.number,
	}
	for _, column := range []string{"coefficient", "unit", "average"} {
		if r.cell(column).state == absent && !row.None {
			c, _ := limitsTable.Column(column)
			l.fault(r, column, "the cell is blank and every level needs it; write %s", wanted(&c))
		}
	}
	u, ok := units.Lookup(r.text("unit"))
	v, given := r.number("coefficient")
	switch {
	case row.None || !ok || !given || q == "":
	case u.Dimension != quantityDimension[q]:
		l.fault(r, "unit", "%s is not a unit of %s; write one of %s", u.Symbol, q, strings.Join(units.Symbols(quantityDimension[q]), ", "))
	case u.IsLog() && row.Exponent != 0:
		l.fault(r, "unit", "a level in %s cannot rise with a power of the frequency; write the coefficient in %s", u.Symbol, q.Unit())
	default:
		row.Coefficient = u.ToSI(v)
		if math.IsInf(row.Coefficient, 0) {
			l.fault(r, "coefficient", "the level is too large a number; check the figure and its unit")
		}
	}
	return row
}

func frequencyUnit(symbol string) float64 {
	if u, ok := units.Lookup(symbol); ok {
		return u.ToSI(1)
	}
	return 1e6
}

// limitsAbout reads who stands behind the table, from its sheet or from the
// leading rows # key: value, with the place of each item.
func (l *loader) limitsAbout(t *bound) (about limits.About, place map[string]string) {
	place = map[string]string{}
	into := map[string]*string{"title": &about.Title, "issued by": &about.IssuedBy, "edition": &about.Edition,
		"transcribed by": &about.TranscribedBy, "checked by": &about.CheckedBy, "checked on": &about.CheckedOn}
	if rows := l.rows("limits about"); len(rows) > 0 {
		r := &rows[0]
		for key, to := range into {
			*to = r.text(key)
			if c := r.cell(key); c.row != nil {
				place[key] = r.t.grid.place(c.row.number)
			}
		}
	}
	var keys []string
	for _, c := range limitsAboutTable.Columns {
		keys = append(keys, c.Name)
	}
	keys = append(keys, "spot")
	for i := range t.grid.comments {
		row := t.grid.comments[i]
		key, value, ok := comment(row, t.grid.decimalComma)
		if !ok || key == "spot" || isNote(key) {
			continue
		}
		to := into[key]
		if to == nil {
			if near := units.NearName(key, keys); near != "" && len(key) > 3 {
				l.warn(t.grid.place(row.number), "", "%q is read as a remark; did you mean %q?", "# "+key, "# "+near)
			}
			continue
		}
		if place[key] != "" && *to != "" {
			l.faults = append(l.faults, t.grid.fault(row, 0, "", "%q is given twice; keep one", key))
			continue
		}
		if key == "checked on" && value != "" && !isDate(value) {
			l.faults = append(l.faults, t.grid.fault(row, 0, "", "%q is not a date; write it as 2026-03-31", value))
			continue
		}
		*to, place[key] = value, t.grid.place(row.number)
	}
	return about, place
}

// comment splits a row "# key: value" whose value may run over several cells.
func comment(row gridRow, semicolons bool) (key, value string, ok bool) {
	join := ", "
	if semicolons {
		join = "; "
	}
	key, value, ok = strings.Cut(strings.TrimLeft(strings.Join(row.cells, join), "# "), ":")
	return strings.ToLower(strings.Join(strings.Fields(key), " ")), strings.TrimSpace(value), ok
}

// spotRow is where a spot value stands.
type spotRow struct {
	grid *grid
	row  gridRow
	i    int
}

func (s *spotRow) fault(message string) Fault {
	f := s.grid.fault(s.row, s.i, "", "%s", message)
	if s.grid.table == "limits spots" && len(s.grid.rows) > 0 {
		f.Column = s.grid.rows[0].cell(s.i)
	} else {
		f.Column = "spot"
	}
	return f
}

// limitSpots reads the spot values, from their sheet or from rows # spot: ...
// The key of the second result is Spot.Line.
func (l *loader) limitSpots(t *bound) ([]limits.Spot, map[int]*spotRow) {
	var spots []limits.Spot
	place := map[int]*spotRow{}
	take := func(at *spotRow, line int, class, quantity, frequency, level string, decimalComma bool) {
		s, problem := spot(class, quantity, frequency, level, decimalComma)
		if problem != "" {
			l.faults = append(l.faults, at.fault(problem))
			return
		}
		s.Line = line
		place[line] = at
		spots = append(spots, s)
	}
	for i := range l.rows("limits spots") {
		r := &l.rows("limits spots")[i]
		if !r.sound("class", "quantity", "frequency", "level") {
			continue
		}
		take(&spotRow{r.t.grid, *r.row, r.cell("level").i}, r.row.number, r.text("class"), r.text("quantity"), r.text("frequency"), r.text("level"), r.t.grid.decimalComma)
	}
	for _, row := range t.grid.comments {
		key, value, ok := comment(row, t.grid.decimalComma)
		if !ok || key != "spot" {
			continue
		}
		at := &spotRow{t.grid, row, 0}
		parts := strings.FieldsFunc(value, func(c rune) bool { return c == ';' })
		if len(parts) != 4 {
			parts = strings.FieldsFunc(value, func(c rune) bool { return c == ',' || c == ';' || c == '\t' })
		}
		if len(parts) != 4 {
			l.faults = append(l.faults, at.fault("a spot value has four parts; write class, quantity, frequency, level, such as # spot: public, E, 900 MHz, 41.25 V/m"))
			continue
		}
		for i := range parts {
			parts[i] = strings.TrimSpace(parts[i])
		}
		take(at, row.number, parts[0], parts[1], parts[2], parts[3], t.grid.decimalComma)
	}
	return spots, place
}

// spot reads the four parts of a spot value.
func spot(class, quantity, frequency, level string, decimalComma bool) (limits.Spot, string) {
	q := limits.Quantity(strings.ToUpper(quantity))
	if _, ok := quantityDimension[q]; !ok {
		return limits.Spot{}, quote(quantity) + " is not a quantity; write E, H, B or S"
	}
	point := func(s string) string {
		if decimalComma {
			s = strings.Replace(s, ",", ".", 1)
		}
		return s
	}
	f, u, err := units.Parse(point(frequency))
	switch {
	case err != nil:
		return limits.Spot{}, err.Error()
	case u.Dimension != units.Frequency || f <= 0:
		return limits.Spot{}, quote(frequency) + " is not a frequency; write one such as 900 MHz"
	}
	v, u, err := units.Parse(point(level))
	switch {
	case err != nil:
		return limits.Spot{}, err.Error()
	case u.Dimension != quantityDimension[q]:
		return limits.Spot{}, quote(level) + " is not a level of " + string(q) + "; its unit is one of " + strings.Join(units.Symbols(quantityDimension[q]), ", ")
	}
	half := halfDigit(point(level))
	n, _, _ := units.Split(point(level))
	return limits.Spot{Class: class, Quantity: q, FrequencyHz: f, Level: v,
		HalfDigit: math.Abs(u.ToSI(n+half)-u.ToSI(n-half)) / 2, Text: strings.Join([]string{class, string(q), frequency, level}, ", ")}, ""
}

func quote(s string) string { return "\"" + s + "\"" }

// halfDigit returns half a unit of the last digit that a number is printed with:
// 0.005 for 41.25, 0.5 for 61.
func halfDigit(text string) float64 {
	text = strings.TrimSpace(text)
	mantissa := strings.TrimLeft(text, "+-")
	end := strings.IndexFunc(mantissa, func(c rune) bool { return c != '.' && (c < '0' || c > '9') })
	exponent := 0
	if end >= 0 {
		rest := mantissa[end:]
		mantissa = mantissa[:end]
		if len(rest) > 1 && (rest[0] == 'e' || rest[0] == 'E') {
			sign, digits := 1, 0
			for i, c := range rest[1:] {
				switch {
				case i == 0 && c == '-':
					sign = -1
					continue
				case i == 0 && c == '+':
					continue
				case '0' <= c && c <= '9' && digits < 1000:
					digits = 10*digits + int(c-'0')
					continue
				}
				break
			}
			exponent = sign * digits
		}
	}
	decimals := 0
	if i := strings.IndexByte(mantissa, '.'); i >= 0 {
		decimals = len(mantissa) - i - 1
	}
	return 0.5 * math.Pow10(exponent-decimals)
}
