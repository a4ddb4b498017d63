package limits

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// maxExponent is beyond every exponent of a published table (they stay within
// 2): a larger one is a slip of the pen.
const maxExponent = 4

// rowFaults checks each row by itself.
func (t *Table) rowFaults() []Problem {
	if len(t.Rows) == 0 {
		return []Problem{{Message: "the table has no rows; write one row for each class, quantity and band"}}
	}
	var list []Problem
	for _, r := range t.Rows {
		f := rowChecker{line: r.Line}
		f.words(r)
		f.band(r)
		f.level(r)
		f.averaging(r)
		f.brief(r)
		list = append(list, f.list...)
	}
	return list
}

type rowChecker struct {
	line int
	list []Problem
}

func (f *rowChecker) fault(column, format string, args ...any) {
	f.list = append(f.list, Problem{Line: f.line, Column: column, Message: fmt.Sprintf(format, args...)})
}

func oneOf[T ~string](f *rowChecker, column string, got T, want ...T) {
	if slices.Contains(want, got) {
		return
	}
	names := make([]string, len(want))
	for i, w := range want {
		names[i] = string(w)
	}
	f.fault(column, "%q is not one of %s", string(got), strings.Join(names, ", "))
}

func (f *rowChecker) words(r Row) {
	if strings.TrimSpace(r.Class) == "" {
		f.fault("class", "the class is blank; write who the level is for, such as public")
	}
	oneOf(f, "quantity", r.Quantity, quantities[:]...)
	oneOf(f, "over body", r.OverBody, Largest, BodyMean)
	oneOf(f, "region", r.Region, WholeBody, Local)
	oneOf(f, "effect", r.Effect, Thermal, Stimulation)
	oneOf(f, "kind", r.Kind, Mean, Peak)
	oneOf(f, "combine", r.Combine, CombineLargest, CombineAdd)
	if r.Effect == Stimulation && r.Quantity == S {
		f.fault("quantity", "a stimulation level is of E, H or B; power density S does not stimulate")
	}
	if strings.TrimSpace(r.Source) == "" {
		f.fault("source", "the source is blank; write document, edition and table")
	}
}

func (f *rowChecker) band(r Row) {
	switch {
	case !finite(r.FromHz) || r.FromHz < 0:
		f.fault("from", "%v Hz is not a frequency; write 0 or more", r.FromHz)
	case !finite(r.ToHz) || r.ToHz <= 0:
		f.fault("to", "%v Hz is not a frequency; write a number above 0", r.ToHz)
	case r.FromHz > r.ToHz:
		f.fault("from", "the band runs backwards, from %s to %s; exchange from and to", Hz(r.FromHz), Hz(r.ToHz))
	case r.FromHz == 0 && (r.Exponent != 0 || r.AverageExp != 0 || r.BriefExp != 0):
		f.fault("from", "a level or time that depends on frequency cannot begin at 0 Hz; write the lowest frequency it holds at")
	}
}

func (f *rowChecker) level(r Row) {
	if r.None {
		return
	}
	ok := true
	if !finite(r.Coefficient) || r.Coefficient <= 0 {
		f.fault("coefficient", "%v is not a level; write a number above 0, or level none for a deliberate gap", r.Coefficient)
		ok = false
	}
	ok = f.exponent("exponent", r.Exponent) && ok
	if !finite(r.FUnitHz) || r.FUnitHz <= 0 {
		f.fault("f unit", "%v Hz is not a unit of frequency; write Hz, kHz, MHz or GHz", r.FUnitHz)
		ok = false
	}
	if !ok || len(f.list) > 0 {
		return
	}
	for _, hz := range [...]float64{r.FromHz, r.ToHz} {
		if v := r.Level(hz); hz > 0 && (!finite(v) || v <= 0) {
			f.fault("exponent", "the level at %s comes out as %v; check coefficient, exponent and f unit", Hz(hz), v)
			return
		}
	}
}

func (f *rowChecker) exponent(column string, e float64) bool {
	if !finite(e) || math.Abs(e) > maxExponent {
		f.fault(column, "%v is not an exponent of a limit table; write a number from -%d to %d, 0 for a level that is the same over the band", e, maxExponent, maxExponent)
		return false
	}
	return true
}

func (f *rowChecker) averaging(r Row) {
	if !finite(r.AverageS) || r.AverageS < 0 {
		f.fault("average", "%v s is not a time; write 0 for a level that is never averaged", r.AverageS)
	}
	f.exponent("average exponent", r.AverageExp)
	if !finite(r.AverageFUnitHz) || r.AverageFUnitHz <= 0 {
		f.fault("average f unit", "%v Hz is not a unit of frequency; write Hz, kHz, MHz or GHz", r.AverageFUnitHz)
	}
	if r.AverageS == 0 && r.AverageExp != 0 {
		f.fault("average exponent", "an exponent needs an averaging time; fill average or leave this blank")
	}
	if r.TimeAveraging && r.AverageS == 0 {
		f.fault("time averaging", "a stay cannot be averaged without an averaging time; fill average or write no")
	}
	if !finite(r.AreaM2) || r.AreaM2 < 0 {
		f.fault("area", "%v m2 is not an area; write a number above 0 or leave it blank", r.AreaM2)
	}
}

// brief checks that brief terms stand where they mean something: beside a
// heating level of power density, mean, that is averaged.
func (f *rowChecker) brief(r Row) {
	if !r.HasBrief {
		if r.BriefA != 0 || r.BriefB != 0 || r.BriefExp != 0 {
			f.fault("brief a", "brief a and brief b go together; fill both or leave both blank")
		}
		return
	}
	const where = "brief exposure is limited by incident energy, beside a level S for heating of kind mean; move the figure to such a row"
	if r.None || r.Quantity != S || r.Effect != Thermal || r.Kind != Mean {
		f.fault("brief a", where)
		return
	}
	if r.AverageS == 0 {
		f.fault("brief a", "a brief exposure is one shorter than the averaging time; fill average")
	}
	for _, x := range []struct {
		column string
		value  float64
	}{{"brief a", r.BriefA}, {"brief b", r.BriefB}} {
		if !finite(x.value) || x.value < 0 {
			f.fault(x.column, "%v is not an energy; write 0 or more", x.value)
		}
	}
	if r.BriefA == 0 && r.BriefB == 0 {
		f.fault("brief a", "brief a and brief b are both 0: no brief exposure would be allowed; leave both blank where the source is silent")
	}
	f.exponent("brief exponent", r.BriefExp)
}

// overlapFaults finds bands of one class, quantity, region, effect and kind
// that overlap anywhere but at an edge.
func (t *Table) overlapFaults() []Problem {
	var list []Problem
	t.eachList(func(_ Group, _ Quantity, bands []int) {
		widest := bands[0] // the row that reaches furthest up so far
		for _, i := range bands[1:] {
			a, b := t.Rows[widest], t.Rows[i]
			twice := a.FromHz == b.FromHz && a.ToHz == b.ToHz // a single frequency may meet itself only by mistake
			if twice || b.FromHz < a.ToHz*(1-edgeSlack) {
				list = append(list, t.overlap(a, b))
			}
			if b.ToHz > a.ToHz {
				widest = i
			}
		}
	})
	return list
}

func (t *Table) overlap(a, b Row) Problem {
	if a.Line > b.Line {
		a, b = b, a
	}
	lo, hi := max(a.FromHz, b.FromHz), min(a.ToHz, b.ToHz)
	what := fmt.Sprintf("from %s to %s", Hz(lo), Hz(hi))
	if lo == hi {
		what = "at " + Hz(lo)
	}
	return Problem{Line: b.Line, Column: "from", Message: fmt.Sprintf(
		"%s overlaps %s %s for %s, %s, %s; bands may share an edge only",
		band(b), row(a), what, b.Class, b.Quantity, b.Group())}
}

// eachList calls f for each list of bands of one class, group and quantity, in
// the order of frequency.
func (t *Table) eachList(f func(g Group, q Quantity, bands []int)) {
	x := t.idx()
	for _, class := range x.classes {
		for _, g := range x.byClass[class] {
			for q, bands := range g.bands {
				if len(bands) > 0 {
					f(g.group, quantities[q], bands)
				}
			}
		}
	}
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

func sortProblems(list []Problem) {
	slices.SortStableFunc(list, func(a, b Problem) int { return a.Line - b.Line })
}
