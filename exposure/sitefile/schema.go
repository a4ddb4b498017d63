package sitefile

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"example.org/standclear/exposure/units"
)

// TableSchema describes one table. The reader, Init, the fill-in workbook and
// the reference in --help all come from it.
type TableSchema struct {
	Name     string         `json:"table"`
	Help     string         `json:"help"`
	Required bool           `json:"required"`
	Columns  []ColumnSchema `json:"columns"`
	// Vertical tables have two columns, item and value: their Columns are the
	// items.
	Vertical bool `json:"vertical,omitempty"`
}

// Kind is what the cells of a column hold.
type Kind string

// The kinds of cells.
const (
	Text   Kind = "text"
	Number Kind = "number"
	Choice Kind = "choice"
	Date   Kind = "date" // ISO 8601
	Moment Kind = "time" // RFC 3339
	Symbol Kind = "unit" // a unit symbol of Dimension
)

// ColumnSchema describes one column.
type ColumnSchema struct {
	Name      string          `json:"name"`
	Kind      Kind            `json:"kind"`
	Dimension units.Dimension `json:"dimension,omitempty"`
	Unit      string          `json:"unit,omitempty"`    // the unit that Init writes; any of the dimension is read
	Default   string          `json:"default,omitempty"` // of a blank cell, in Unit
	Choices   []string        `json:"choices,omitempty"`
	Rule      string          `json:"rule,omitempty"` // in words: "more than 0"
	Range     *Range          `json:"range,omitempty"`
	Words     []string        `json:"words,omitempty"` // words that may stand for the number: unknown
	Required  bool            `json:"required"`
	Unless    string          `json:"unless,omitempty"` // what may stand in place of a required column
	Help      string          `json:"help"`
	Example   string          `json:"example,omitempty"`
	// UnitOptional columns may leave out the unit, which is then Unit.
	UnitOptional bool `json:"unit_optional,omitempty"`
	// Rare columns are written by Init behind the ones that most sites need.
	Rare bool `json:"rare,omitempty"`
}

// Header returns the header cell that Init writes: "power [W]".
func (c ColumnSchema) Header() string {
	if c.Unit == "" || c.UnitOptional || c.Kind == Symbol {
		return c.Name
	}
	return c.Name + " [" + c.Unit + "]"
}

// Range is what a number may be, in the column's Unit.
type Range struct {
	Min, Max       float64
	HasMin, HasMax bool
	Above          bool // Min itself is excluded
	Whole          bool // whole numbers only
}

// String returns the rule in words.
func (r Range) String() string {
	f := func(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }
	kind := ""
	if r.Whole {
		kind = "a whole number, "
	}
	switch {
	case r.HasMin && r.HasMax && r.Above:
		return fmt.Sprintf("%smore than %s, at most %s", kind, f(r.Min), f(r.Max))
	case r.HasMin && r.HasMax:
		return fmt.Sprintf("%sfrom %s to %s", kind, f(r.Min), f(r.Max))
	case r.HasMin && r.Above:
		return fmt.Sprintf("%smore than %s", kind, f(r.Min))
	case r.HasMin:
		return fmt.Sprintf("%s%s or more", kind, f(r.Min))
	case r.HasMax:
		return fmt.Sprintf("%sat most %s", kind, f(r.Max))
	}
	return strings.TrimSuffix(kind, ", ")
}

// allows reports whether v, in the column's Unit, is in the range.
func (r Range) allows(v float64) bool {
	switch {
	case r.HasMin && (v < r.Min || r.Above && v == r.Min), r.HasMax && v > r.Max:
		return false
	case r.Whole && v != float64(int64(v)):
		return false
	}
	return true
}

// Column returns the named column.
func (t TableSchema) Column(name string) (ColumnSchema, bool) {
	for _, c := range t.Columns {
		if c.Name == name {
			return c, true
		}
	}
	return ColumnSchema{}, false
}

// Schema returns every table in the order in which they are best filled in.
func Schema() []TableSchema {
	out := slices.Clone(schema)
	for i := range out {
		out[i].Columns = slices.Clone(out[i].Columns)
	}
	return out
}

// schema is the one place where tables and columns are written down.
var schema = []TableSchema{
	siteTable, antennasTable, operatorsTable, surfacesTable, placesTable,
	limitsTable, limitsAboutTable, limitsSpotsTable,
	readingsTable, instrumentsTable, uncertaintyTable, columnsTable, scenariosTable,
}

func tableSchema(name string) *TableSchema {
	for i := range schema {
		if schema[i].Name == name {
			return &schema[i]
		}
	}
	return nil
}

func tableNames() []string {
	names := make([]string, len(schema))
	for i, t := range schema {
		names[i] = t.Name
	}
	return names
}

// The functions below write a column in one line; the options follow.

type option func(*ColumnSchema)

func column(name string, kind Kind, help string, options []option) ColumnSchema {
	c := ColumnSchema{Name: name, Kind: kind, Help: help}
	for _, o := range options {
		o(&c)
	}
	if c.Range != nil && c.Rule == "" {
		c.Rule = c.Range.String()
	}
	if c.Kind == Date && c.Rule == "" {
		c.Rule = "ISO 8601, such as 2026-03-31"
	}
	return c
}

func text(name, help string, o ...option) ColumnSchema { return column(name, Text, help, o) }
func date(name, help string, o ...option) ColumnSchema { return column(name, Date, help, o) }
func number(name, help string, o ...option) ColumnSchema {
	return column(name, Number, help, o)
}

// quantity is a number with a unit: quantity("power", "W", ...).
func quantity(name, unit, help string, o ...option) ColumnSchema {
	u, ok := units.Lookup(unit)
	if !ok {
		panic("sitefile: no unit " + unit)
	}
	c := column(name, Number, help, o)
	c.Dimension, c.Unit = u.Dimension, unit
	return c
}

// share is a number without unit, or in %.
func share(name, help string, o ...option) ColumnSchema {
	c := quantity(name, "1", help, o...)
	c.UnitOptional = true
	return c
}

func choice(name, choices, help string, o ...option) ColumnSchema {
	c := column(name, Choice, help, o)
	c.Choices = strings.Split(choices, "|")
	return c
}

func symbol(name string, d units.Dimension, help string, o ...option) ColumnSchema {
	c := column(name, Symbol, help, o)
	c.Dimension = d
	return c
}

func required(c *ColumnSchema)   { c.Required = true }
func unless(what string) option  { return func(c *ColumnSchema) { c.Required, c.Unless = true, what } }
func blank(text string) option   { return func(c *ColumnSchema) { c.Default = text } }
func example(text string) option { return func(c *ColumnSchema) { c.Example = text } }
func orWord(word string) option  { return func(c *ColumnSchema) { c.Words = append(c.Words, word) } }
func rare(c *ColumnSchema)       { c.Rare = true }
func atLeast(v float64) option {
	return func(c *ColumnSchema) { c.Range = &Range{Min: v, HasMin: true} }
}
func moreThan(v float64) option {
	return func(c *ColumnSchema) { c.Range = &Range{Min: v, HasMin: true, Above: true} }
}
func whole(least, most float64) option {
	return func(c *ColumnSchema) {
		c.Range = &Range{Min: least, Max: most, HasMin: true, HasMax: true, Whole: true}
	}
}
func between(least, most float64) option {
	return func(c *ColumnSchema) { c.Range = &Range{Min: least, Max: most, HasMin: true, HasMax: true} }
}
func overTo(least, most float64) option {
	return func(c *ColumnSchema) {
		c.Range = &Range{Min: least, Max: most, HasMin: true, HasMax: true, Above: true}
	}
}
