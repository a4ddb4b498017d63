package sitefile

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// Fault is one thing that is wrong with the input, with its place and what to
// do about it.
type Fault struct {
	File    string `json:"file"`
	Sheet   string `json:"sheet"`  // "" for a CSV file
	Row     int    `json:"row"`    // line or sheet row, from one; 0 = the table as a whole
	Column  string `json:"column"` // header as typed: "power [W]"
	Text    string `json:"text"`   // the cell as typed
	Message string `json:"message"`

	cell string // column letter in a workbook
}

// Error returns the fault in one line:
// antennas.csv:7: power [W]: "20O" is not a number; write digits only, such as 200
func (f Fault) Error() string {
	var b strings.Builder
	b.WriteString(placeOf(f.File, f.Sheet, f.cell, f.Row))
	b.WriteString(": ")
	if f.Column != "" {
		b.WriteString(f.Column)
		b.WriteString(": ")
	}
	b.WriteString(f.Message)
	return b.String()
}

// Faults are all faults of an input, in the order of the tables and rows. It is
// the error that Load returns where the input is at fault.
type Faults []Fault

func (fs Faults) Error() string {
	switch len(fs) {
	case 0:
		return "no fault"
	case 1:
		return fs[0].Error()
	}
	lines := make([]string, len(fs))
	for i, f := range fs {
		lines[i] = f.Error()
	}
	return strings.Join(lines, "\n")
}

// fault makes a fault of a cell. header is the column's header as typed, i its
// position (-1 = the row as a whole).
func (g *grid) fault(r gridRow, i int, header, format string, args ...any) Fault {
	f := Fault{File: g.file, Sheet: g.sheet, Row: r.number, Column: header, Message: fmt.Sprintf(format, args...)}
	if i >= 0 {
		f.Text = r.cell(i)
		if r.col != nil {
			f.cell = r.col(i)
		}
	} else if g.sheet != "" {
		f.cell = "A"
	}
	return f
}

// sorted returns the faults by table, row and column, the first of each cell
// only. order gives the ranks of a fault's table and column.
func (fs Faults) sorted(order func(Fault) (table, column int)) Faults {
	slices.SortStableFunc(fs, func(a, b Fault) int {
		ta, ca := order(a)
		tb, cb := order(b)
		return cmp.Or(cmp.Compare(ta, tb), cmp.Compare(a.File, b.File), cmp.Compare(a.Sheet, b.Sheet), cmp.Compare(a.Row, b.Row), cmp.Compare(ca, cb))
	})
	type cell struct {
		file, sheet, column string
		row                 int
	}
	seen := make(map[cell]bool, len(fs))
	out := fs[:0]
	for _, f := range fs {
		c := cell{f.File, f.Sheet, f.Column, f.Row}
		if c.column != "" && seen[c] {
			continue
		}
		seen[c] = true
		out = append(out, f)
	}
	return out
}
