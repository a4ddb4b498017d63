package limits

import (
	"fmt"
	"math"
	"slices"
)

// Difference is a band of frequencies in which two tables differ for one class,
// quantity and group.
type Difference struct {
	Class    string   `json:"class"`   // in table A
	ClassB   string   `json:"class_b"` // in table B; the same but for CompareAs
	Quantity Quantity `json:"quantity"`
	Group    Group    `json:"group"`
	FromHz   float64  `json:"from_hz"`
	ToHz     float64  `json:"to_hz"`
	// Item is what differs: "level", or the column of a row's other meaning:
	// "average", "time averaging", "over body", "area", "brief", "combine".
	Item string `json:"item"`
	// Of a level: where in the band B/A is furthest from 1, both levels there in
	// the SI unit of the quantity (0 = that table sets none), B/A less 1 in
	// percent, and in decibels (20 log for field strengths, 10 log for power
	// density). Percent and decibels are 0 where only one table has a level.
	AtHz    float64 `json:"at_hz"`
	A       float64 `json:"a"`
	B       float64 `json:"b"`
	Percent float64 `json:"percent"`
	DB      float64 `json:"db"`
	// TextA and TextB are both sides as printed.
	TextA string `json:"a_text"`
	TextB string `json:"b_text"`
}

// String says where and by how much the tables differ, in one line.
func (d Difference) String() string {
	class := d.Class
	if d.ClassB != d.Class {
		class += " (in B " + d.ClassB + ")"
	}
	s := fmt.Sprintf("%s, %s (%s), %s: ", class, d.Quantity, d.Group, band(Row{FromHz: d.FromHz, ToHz: d.ToHz}))
	if d.Item != "level" {
		s += d.Item + " "
	}
	s += "A " + d.TextA + ", B " + d.TextB
	if d.A > 0 && d.B > 0 && d.Item == "level" {
		s += fmt.Sprintf(" at %s: B is %+.3g %% (%+.2f dB)", Hz(d.AtHz), d.Percent, d.DB)
	}
	return s
}

// Compare returns where two tables differ, class by class of the same name, in
// the order of classes (those of a first), groups, quantities and frequency.
// Bands are split at the edges of both. A table compared with itself differs
// nowhere.
func Compare(a, b *Table) []Difference {
	var pairs [][2]string
	for _, class := range a.Classes() {
		pairs = append(pairs, [2]string{class, class})
	}
	for _, class := range b.Classes() {
		if !slices.Contains(pairs, [2]string{class, class}) {
			pairs = append(pairs, [2]string{class, class})
		}
	}
	return CompareAs(a, b, pairs)
}

// CompareAs is Compare for chosen pairs of classes, the first of each pair from
// a and the second from b: tables name the same people differently.
func CompareAs(a, b *Table, pairs [][2]string) []Difference {
	var list []Difference
	for _, pair := range pairs {
		for _, g := range groups {
			for q := range quantities {
				c := comparison{
					classA: pair[0], classB: pair[1], group: g, quantity: quantities[q],
					a: rowsOf(a, pair[0], g, q), b: rowsOf(b, pair[1], g, q),
				}
				list = append(list, c.run()...)
			}
		}
	}
	return list
}

func rowsOf(t *Table, class string, g Group, q int) []Row {
	var list []Row
	for _, gi := range t.idx().byClass[class] {
		if gi.group == g {
			for _, i := range gi.bands[q] {
				list = append(list, t.Rows[i])
			}
		}
	}
	return list
}

type comparison struct {
	classA, classB string
	group          Group
	quantity       Quantity
	a, b           []Row // by rising frequency
}

func (c comparison) run() []Difference {
	var list []Difference
	edges, points := breakpoints(c.a, c.b)
	for k, f := range edges {
		if points[k] {
			list = append(list, c.band(f, f)...)
		}
		if k+1 < len(edges) {
			list = append(list, c.band(f, edges[k+1])...)
		}
	}
	return list
}

// breakpoints returns the edges of all rows, rising and each once, and at which
// of them a row holds for that single frequency.
func breakpoints(a, b []Row) (edges []float64, points []bool) {
	var all []float64
	for _, r := range slices.Concat(a, b) {
		all = append(all, r.FromHz, r.ToHz)
	}
	slices.Sort(all)
	for _, f := range all {
		if n := len(edges); n == 0 || f > edges[n-1]*(1+edgeSlack) {
			edges = append(edges, f)
		}
	}
	points = make([]bool, len(edges))
	for _, r := range slices.Concat(a, b) {
		for k, f := range edges {
			if r.FromHz == r.ToHz && r.Holds(f) {
				points[k] = true
			}
		}
	}
	return edges, points
}

// band compares the rows that hold between two neighbouring edges, or at a
// single frequency.
func (c comparison) band(lo, hi float64) []Difference {
	a, okA := covering(c.a, lo, hi)
	b, okB := covering(c.b, lo, hi)
	if !okA && !okB {
		return nil
	}
	d := Difference{Class: c.classA, ClassB: c.classB, Quantity: c.quantity, Group: c.group, FromHz: lo, ToHz: hi, AtHz: lo}
	if !okA || !okB || a.None || b.None {
		d.Item, d.TextA, d.TextB = "level", c.side(a, okA, lo, hi), c.side(b, okB, lo, hi)
		if d.TextA == d.TextB {
			return nil
		}
		if okA && !a.None {
			d.A = a.Level(lo)
		}
		if okB && !b.None {
			d.B = b.Level(lo)
		}
		return []Difference{d}
	}
	var list []Difference
	// The ratio of two power laws is one: it is furthest from 1 at an end.
	for _, f := range [...]float64{lo, hi} {
		if f <= 0 {
			continue
		}
		if off(b.Level(f)/a.Level(f)) > off(ratio(d)) {
			d.AtHz, d.A, d.B = f, a.Level(f), b.Level(f)
		}
	}
	if off(ratio(d)) > sameWithin {
		d.Item = "level"
		d.Percent = 100 * (d.B/d.A - 1)
		d.DB = 20 * math.Log10(d.B/d.A)
		if c.quantity == S {
			d.DB /= 2
		}
		d.TextA, d.TextB = LevelText(c.quantity, d.A), LevelText(c.quantity, d.B)
		list = append(list, d)
	}
	return append(list, c.meanings(a, b, lo, hi)...)
}

// sameWithin is the difference of ln level below which two levels are the same:
// it forgives the last bits of levels typed in different units.
const sameWithin = 1e-9

func off(ratio float64) float64 { return math.Abs(math.Log(ratio)) }

func ratio(d Difference) float64 {
	if d.A == 0 || d.B == 0 {
		return 1
	}
	return d.B / d.A
}

func covering(rows []Row, lo, hi float64) (Row, bool) {
	var found Row
	ok := false
	for _, r := range rows {
		if !r.Holds(lo) || !r.Holds(hi) {
			continue
		}
		// At a single frequency the lowest level counts.
		if !ok || r.Level(lo) < found.Level(lo) {
			found, ok = r, true
		}
	}
	return found, ok
}

func (c comparison) side(r Row, ok bool, lo, hi float64) string {
	switch {
	case !ok:
		return "no row"
	case r.None:
		return "level none"
	}
	from, to := LevelText(c.quantity, r.Level(lo)), LevelText(c.quantity, r.Level(hi))
	if from == to {
		return from
	}
	return from + " to " + to
}

// meanings compares what two rows say besides the level.
func (c comparison) meanings(a, b Row, lo, hi float64) []Difference {
	var list []Difference
	add := func(item, textA, textB string) {
		if textA != textB {
			list = append(list, Difference{Class: c.classA, ClassB: c.classB, Quantity: c.quantity, Group: c.group,
				FromHz: lo, ToHz: hi, AtHz: lo, Item: item, TextA: textA, TextB: textB})
		}
	}
	add("average", averageText(a, lo, hi), averageText(b, lo, hi))
	add("time averaging", yesNo(a.TimeAveraging), yesNo(b.TimeAveraging))
	add("over body", string(a.OverBody), string(b.OverBody))
	add("area", areaText(a), areaText(b))
	add("brief", briefText(a, lo, hi), briefText(b, lo, hi))
	add("combine", string(a.Combine), string(b.Combine))
	return list
}

func averageText(r Row, lo, hi float64) string {
	if r.AverageS == 0 {
		return "never"
	}
	from, to := digits(r.AveragingTime(lo)/60, 4)+" min", digits(r.AveragingTime(hi)/60, 4)+" min"
	if from == to {
		return from
	}
	return from + " to " + to
}

func yesNo(b bool) string {
	if b {
		return "yes"
	}
	return "no"
}

func areaText(r Row) string {
	if r.AreaM2 == 0 {
		return "none"
	}
	return digits(r.AreaM2*1e4, 4) + " cm2"
}

// briefText names the energy of a one-second exposure, which tells two formulas
// apart well enough beside the energy of the whole averaging time.
func briefText(r Row, lo, hi float64) string {
	if !r.HasBrief {
		return "none"
	}
	at := func(f float64) string {
		one := BriefEnergy(r.BriefA, r.BriefB, r.BriefExp, r.FUnitHz, f, 1)
		full := BriefEnergy(r.BriefA, r.BriefB, r.BriefExp, r.FUnitHz, f, r.AveragingTime(f))
		return fmt.Sprintf("%s J/m2 in 1 s and %s J/m2 in %s min", digits(one, 4), digits(full, 4), digits(r.AveragingTime(f)/60, 4))
	}
	if from, to := at(lo), at(hi); from != to {
		return from + ", to " + to
	}
	return at(lo)
}
