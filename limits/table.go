package limits

import "slices"

// Table is a validated limit table: the bands of every class, in the order of
// the file, with who stands behind it.
type Table struct {
	Rows  []Row
	About About
	Spots []Spot

	index *index // nil in a Table not made by New: it is then rebuilt at each question
}

// index is a table's rows by class, group and quantity, each list in the order
// of frequency.
type index struct {
	classes []string
	byClass map[string][]groupIndex
}

type groupIndex struct {
	group Group
	bands [len(quantities)][]int // row numbers by quantity, by rising frequency
	plain bool                   // upper edges rise too: a binary search finds them
}

// quantities in the order in which they are printed.
var quantities = [...]Quantity{E, H, B, S}

// Quantities lists the quantities in the order in which they are printed.
func Quantities() []Quantity { return slices.Clone(quantities[:]) }

// Unit returns the SI unit of a quantity's levels.
func (q Quantity) Unit() string {
	switch q {
	case E:
		return "V/m"
	case H:
		return "A/m"
	case B:
		return "T"
	case S:
		return "W/m2"
	}
	return ""
}

// groups in the order in which they are printed.
var groups = func() (list []Group) {
	for _, effect := range []Effect{Thermal, Stimulation} {
		for _, region := range []Region{WholeBody, Local} {
			for _, kind := range []Kind{Mean, Peak} {
				list = append(list, Group{effect, region, kind})
			}
		}
	}
	return list
}()

// New checks a table and returns it with its warnings, or nil with its faults.
// Faults and warnings are in the order of their lines.
//
// Fields left empty take the defaults of a blank cell: FUnitHz and
// AverageFUnitHz 1e6, OverBody largest, Region whole body, Effect thermal, Kind
// mean, Combine largest. Frequencies are in Hz, levels and averaging times in SI
// units. The slices are copied.
func New(rows []Row, about About, spots []Spot) (t *Table, faults, warnings []Problem) {
	t = &Table{Rows: slices.Clone(rows), About: about, Spots: slices.Clone(spots)}
	for i := range t.Rows {
		t.Rows[i].setDefaults()
	}
	faults = t.rowFaults()
	if len(faults) == 0 {
		// Bands and spots only make sense where every row does.
		t.index = newIndex(t.Rows)
		faults = append(t.overlapFaults(), t.spotFaults()...)
	}
	if len(faults) > 0 {
		sortProblems(faults)
		return nil, faults, nil
	}
	return t, nil, t.warnings()
}

func (r *Row) setDefaults() {
	if r.FUnitHz == 0 {
		r.FUnitHz = 1e6
	}
	if r.AverageFUnitHz == 0 {
		r.AverageFUnitHz = 1e6
	}
	if r.OverBody == "" {
		r.OverBody = Largest
	}
	if r.Region == "" {
		r.Region = WholeBody
	}
	if r.Effect == "" {
		r.Effect = Thermal
	}
	if r.Kind == "" {
		r.Kind = Mean
	}
	if r.Combine == "" {
		r.Combine = CombineLargest
	}
}

func newIndex(rows []Row) *index {
	x := &index{byClass: map[string][]groupIndex{}}
	for _, r := range rows {
		if _, seen := x.byClass[r.Class]; !seen {
			x.byClass[r.Class] = nil
			x.classes = append(x.classes, r.Class)
		}
	}
	for _, class := range x.classes {
		for _, g := range groups {
			gi := groupIndex{group: g, plain: true}
			exists := false
			for q, quantity := range quantities {
				for i, r := range rows {
					if r.Class == class && r.Group() == g && r.Quantity == quantity {
						gi.bands[q] = append(gi.bands[q], i)
						exists = true
					}
				}
				slices.SortStableFunc(gi.bands[q], func(a, b int) int { return compareBands(rows[a], rows[b]) })
				for k := 1; k < len(gi.bands[q]); k++ {
					if rows[gi.bands[q][k]].ToHz < rows[gi.bands[q][k-1]].ToHz {
						gi.plain = false
					}
				}
			}
			if exists {
				x.byClass[class] = append(x.byClass[class], gi)
			}
		}
	}
	return x
}

func compareBands(a, b Row) int {
	switch {
	case a.FromHz < b.FromHz:
		return -1
	case a.FromHz > b.FromHz:
		return 1
	case a.ToHz < b.ToHz:
		return -1
	case a.ToHz > b.ToHz:
		return 1
	}
	return 0
}

func (t *Table) idx() *index {
	if t.index != nil {
		return t.index
	}
	return newIndex(t.Rows)
}

// Classes returns the classes of the table in the order in which they first
// appear.
func (t *Table) Classes() []string { return slices.Clone(t.idx().classes) }

// Groups returns the groups that have a row of the class, heating before
// stimulation, whole body before local, mean before peak; nil for a class that
// the table does not have.
func (t *Table) Groups(class string) []Group {
	var list []Group
	for _, g := range t.idx().byClass[class] {
		list = append(list, g.group)
	}
	return list
}
