package limits_test

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/limits"
)

func TestLowestOverABand(t *testing.T) {
	table := published(t, fileI98)
	// ICNIRP 1998, Table 7: 28 V/m up to 400 MHz, 1.375 f^0.5 above it, which
	// begins at 27.5 V/m: a probe of 100 kHz to 3 GHz is held against that at 400
	// MHz. H is lowest, 0.073 A/m, where 0.73/f meets it at 10 MHz.
	l := lowest(t, table, pub, heating, 1e6, 3e9)
	assert.InDelta(t, 27.5, l.E, 1e-9, "rounding")
	assert.Equal(t, 400e6, l.EAtHz)
	assert.InDelta(t, 0.073, l.H, 1e-12, "rounding")
	assert.Equal(t, 10e6, l.HAtHz)
	assert.InDelta(t, 2, l.S, 1e-12, "rounding")
	assert.Empty(t, l.Gaps)
	l = lowest(t, table, pub, heating, 1e9, 3e9)
	assert.InDelta(t, 1.375*math.Sqrt(1000), l.E, 1e-9, "rounding")
	assert.Equal(t, 1e9, l.EAtHz)

	l = lowest(t, published(t, fileFCC), pub, heating, 100e3, 110e9)
	assert.Equal(t, []limits.Band{{FromHz: 100e3, ToHz: 300e3}, {FromHz: 100e9, ToHz: 110e9}}, l.Gaps)
	assert.True(t, l.Covered(), "in part")
	l = lowest(t, published(t, fileFCC), pub, heating, 100e3, 200e3)
	assert.False(t, l.Covered())
	assert.Equal(t, []limits.Band{{FromHz: 100e3, ToHz: 200e3}}, l.Gaps)
	assert.Nil(t, table.LowestOver(pub, 2e9, 1e9))
	assert.Nil(t, table.LowestOver("nobody", 1e9, 2e9))
	assert.Nil(t, table.LowestOver(pub, math.NaN(), 2e9))
}

func lowest(t testing.TB, table *limits.Table, class string, g limits.Group, from, to float64) limits.Lowest {
	t.Helper()
	for _, l := range table.LowestOver(class, from, to) {
		if l.Group == g {
			return l
		}
	}
	require.Fail(t, "no such group")
	return limits.Lowest{}
}

// A band that begins a last bit above a row's upper edge meets that edge and no
// more of the row's law.
func TestLowestMeetsAnEdgeOnly(t *testing.T) {
	r := flat("public", limits.S, 100, 200, 1000)
	r.Exponent = -1
	table := build(t, r)
	l := lowest(t, table, "public", heating, math.Nextafter(200e6, 1e9), 400e6)
	assert.InDelta(t, 5, l.S, 1e-12, "1000/200; rounding")
	assert.InDelta(t, 200e6, l.SAtHz, 1)
	l = lowest(t, table, "public", heating, 50e6, math.Nextafter(100e6, 0))
	assert.InDelta(t, 10, l.S, 1e-12, "1000/100; rounding")
}

// randomTable draws bands that may meet, leave gaps or be deliberate gaps.
func randomTable(t *rapid.T) *limits.Table {
	var rows []limits.Row
	for _, class := range []string{"public", "workers"}[:rapid.IntRange(1, 2).Draw(t, "classes")] {
		for _, q := range []limits.Quantity{limits.E, limits.H, limits.B, limits.S} {
			f := math.Exp(rapid.Float64Range(math.Log(1e3), math.Log(1e9)).Draw(t, "ln f"))
			for range rapid.IntRange(0, 4).Draw(t, "bands") {
				if rapid.Bool().Draw(t, "gap") {
					f *= rapid.Float64Range(1.01, 5).Draw(t, "gap width")
				}
				to := f * rapid.Float64Range(1, 30).Draw(t, "width")
				r := limits.Row{Class: class, Quantity: q, FromHz: f, ToHz: to, Source: "drawn", FUnitHz: 1e6,
					Coefficient: rapid.Float64Range(0.01, 1000).Draw(t, "c"), Exponent: rapid.Float64Range(-2, 2).Draw(t, "e"),
					AverageS: rapid.Float64Range(1, 2000).Draw(t, "T"), AverageExp: rapid.Float64Range(-1.2, 0).Draw(t, "Te"),
					TimeAveraging: rapid.Bool().Draw(t, "stay"),
					None:          rapid.IntRange(0, 5).Draw(t, "none") == 0}
				if rapid.Bool().Draw(t, "mean") {
					r.OverBody = limits.BodyMean
				}
				if rapid.Bool().Draw(t, "add") {
					r.Combine = limits.CombineAdd
				}
				if to == f && len(rows) > 0 && rows[len(rows)-1].ToHz == f {
					continue // a single frequency stands once
				}
				rows = append(rows, r)
				f = to
			}
		}
	}
	if len(rows) == 0 {
		rows = append(rows, flat("public", limits.E, 1, 10, 28))
	}
	table, faults, _ := limits.New(rows, limits.About{}, nil)
	if len(faults) > 0 {
		t.Fatalf("%v", faults)
	}
	return table
}

// frequency draws one within, at or beside the edges of a table.
func frequency(t *rapid.T, table *limits.Table, name string) float64 {
	r := table.Rows[rapid.IntRange(0, len(table.Rows)-1).Draw(t, name+" row")]
	switch rapid.IntRange(0, 4).Draw(t, name+" where") {
	case 0:
		return r.FromHz
	case 1:
		return r.ToHz
	case 2:
		return r.ToHz * rapid.Float64Range(1, 3).Draw(t, name+" beyond")
	}
	return r.FromHz * math.Pow(r.ToHz/r.FromHz, rapid.Float64Range(0, 1).Draw(t, name+" within"))
}

// At never answers with a level above that of any row that holds, and every
// part of its answer is one of those rows'.
func TestAtIsTheLowestOfWhatHolds(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		table := randomTable(t)
		f := frequency(t, table, "f")
		for _, class := range table.Classes() {
			for _, a := range table.At(class, f) {
				least := map[limits.Quantity]float64{}
				average, mean, stay, add, levels := math.Inf(1), true, true, false, 0
				var rows []int
				for i, r := range table.Rows {
					if r.Class != class || r.Group() != a.Group || !r.Holds(f) {
						continue
					}
					rows = append(rows, i)
					if r.None {
						continue
					}
					levels++
					if v := r.Level(f); least[r.Quantity] == 0 || v < least[r.Quantity] {
						least[r.Quantity] = v
					}
					average = math.Min(average, r.AveragingTime(f))
					mean, stay, add = mean && r.OverBody == limits.BodyMean, stay && r.TimeAveraging, add || r.Combine == limits.CombineAdd
				}
				for _, q := range limits.Quantities() {
					// Where f meets an edge within its slack the level is that at the edge.
					if math.Abs(of(a, q)-least[q]) > 1e-11*least[q] {
						t.Fatalf("%s at %g: %g, want %g", q, f, of(a, q), least[q])
					}
				}
				if len(rows) != len(a.Rows) || a.Covered() != (len(rows) > 0) {
					t.Fatalf("rows %v, want %v", a.Rows, rows)
				}
				if levels > 0 && (a.TimeAveraging != stay || (a.OverBody == limits.BodyMean) != mean || (a.Combine == limits.CombineAdd) != add || math.Abs(a.AverageS-average) > 1e-11*average) {
					t.Fatalf("%+v: want stay %v, mean %v, add %v, average %g", a, stay, mean, add, average)
				}
			}
		}
	})
}

// The lowest level over a band is below every level in it, and is one of them.
func TestLowestIsBelowEveryLevelOfTheBand(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		table := randomTable(t)
		lo, hi := frequency(t, table, "lo"), frequency(t, table, "hi")
		if lo > hi {
			lo, hi = hi, lo
		}
		for _, class := range table.Classes() {
			band := table.LowestOver(class, lo, hi)
			for k := range 41 {
				f := lo * math.Pow(hi/lo, float64(k)/40)
				for i, a := range table.At(class, f) {
					for _, q := range limits.Quantities() {
						v, l := of(a, q), of(band[i].At, q)
						if v > 0 && (l == 0 || l > v*(1+1e-11)) {
							t.Fatalf("%s at %g: %g is below the lowest %g", q, f, v, l)
						}
					}
					inGap := false
					for _, g := range band[i].Gaps {
						inGap = inGap || f > g.FromHz*(1+1e-9) && f < g.ToHz*(1-1e-9)
					}
					if inGap && a.Covered() {
						t.Fatalf("%g lies in a gap and is covered", f)
					}
				}
			}
			for _, l := range band {
				for q, f := range map[limits.Quantity]float64{limits.E: l.EAtHz, limits.H: l.HAtHz, limits.B: l.BAtHz, limits.S: l.SAtHz} {
					v := of(l.At, q)
					if (v > 0) != (f > 0) || f > 0 && (f < lo*(1-1e-11) || f > hi*(1+1e-11)) {
						t.Fatalf("%s: %g at %g, asked %g to %g", q, v, f, lo, hi)
					}
					if f > 0 && math.Abs(atGroup(table, class, l.Group, f, q)-v) > 1e-11*v {
						t.Fatalf("%s: %g at %g, but At says %g", q, v, f, atGroup(table, class, l.Group, f, q))
					}
				}
			}
		}
	})
}

func atGroup(table *limits.Table, class string, g limits.Group, f float64, q limits.Quantity) float64 {
	for _, a := range table.At(class, f) {
		if a.Group == g {
			return of(a, q)
		}
	}
	return 0
}

// Within a row a level only rises or only falls.
func TestLevelsAreMonotone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		table := randomTable(t)
		for _, r := range table.Rows {
			if r.None {
				continue
			}
			last := r.Level(r.FromHz)
			for k := 1; k <= 20; k++ {
				v := r.Level(r.FromHz * math.Pow(r.ToHz/r.FromHz, float64(k)/20))
				if r.Exponent >= 0 && v < last*(1-1e-13) || r.Exponent <= 0 && v > last*(1+1e-13) { // rounding
					t.Fatalf("%+v turns at step %d", r, k)
				}
				last = v
			}
		}
	})
}
