package limits_test

import (
	"encoding/json"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/limits"
)

func TestATableDiffersNowhereFromItself(t *testing.T) {
	for _, file := range allFiles {
		table := published(t, file)
		assert.Empty(t, limits.Compare(table, table), file)
	}
	rapid.Check(t, func(t *rapid.T) {
		table := randomTable(t)
		if d := limits.Compare(table, table); len(d) > 0 {
			t.Fatalf("%v", d)
		}
	})
}

// The Council Recommendation repeats the guideline of 1998 for the public: as
// transcribed they differ in nothing for that class.
func TestARecommendationRepeatsAGuideline(t *testing.T) {
	a, b := published(t, fileI98), published(t, file519)
	assert.Empty(t, limits.CompareAs(a, b, [][2]string{{pub, pub}}))
	for _, d := range limits.Compare(a, b) {
		assert.Equal(t, occ, d.Class)
		assert.Equal(t, "no row", d.TextB)
	}
}

// Figures: 27.5 (47 CFR 1.1310) and 28 V/m (ICNIRP 1998, Table 7) for 2 W/m2;
// above 300 and up to 400 MHz only the latter has E.
func TestCompareWhereAndByHowMuch(t *testing.T) {
	a, b := published(t, fileFCC), published(t, fileI98)
	var e []limits.Difference
	for _, d := range limits.Compare(a, b) {
		if d.Class == pub && d.Quantity == limits.E && d.Group == heating && d.Item == "level" && d.FromHz >= 30e6 {
			e = append(e, d)
		}
	}
	require.NotEmpty(t, e)
	assert.Equal(t, 30e6, e[0].FromHz)
	assert.Equal(t, 300e6, e[0].ToHz)
	assert.Equal(t, 27.5, e[0].A)
	assert.Equal(t, 28.0, e[0].B)
	assert.InDelta(t, 1.818, e[0].Percent, 5e-4, "28/27.5, three decimals")
	assert.InDelta(t, 0.1565, e[0].DB, 5e-5, "20 log10(28/27.5), four decimals")
	assert.Equal(t, "public, E (thermal, whole body, mean), 30 MHz to 300 MHz: A 27.5 V/m, B 28 V/m at 30 MHz: B is +1.82 % (+0.16 dB)", e[0].String())
	assert.Equal(t, "public, E (thermal, whole body, mean), 300 MHz to 400 MHz: A no row, B 28 V/m", e[1].String())
	assert.Zero(t, e[1].A)
	assert.Equal(t, 28.0, e[1].B)

	// S from 300 to 400 MHz: f/1500 mW/cm2 against 2 W/m2; furthest at 400 MHz.
	for _, d := range limits.Compare(a, b) {
		if d.Class == pub && d.Quantity == limits.S && d.Group == heating && d.FromHz == 300e6 && d.Item == "level" {
			assert.Equal(t, 400e6, d.ToHz)
			assert.Equal(t, 400e6, d.AtHz)
			assert.InDelta(t, -25, d.Percent, 1e-9, "2/(400/150); rounding")
			assert.InDelta(t, 10*math.Log10(0.75), d.DB, 1e-9, "power density: 10 log; rounding")
			return
		}
	}
	assert.Fail(t, "no difference from 300 MHz")
}

func TestCompareWhatRowsSayBesides(t *testing.T) {
	a := flat("public", limits.S, 100, 200, 10)
	b := a
	b.AverageS, b.TimeAveraging, b.OverBody, b.AreaM2, b.Combine = 1800, true, limits.BodyMean, 4e-4, limits.CombineAdd
	b.HasBrief, b.BriefA, b.BriefB = true, 180, 10
	list := limits.Compare(build(t, a), build(t, b))
	var lines []string
	for _, d := range list {
		lines = append(lines, d.String())
	}
	const where = "public, S (thermal, whole body, mean), 100 MHz to 200 MHz: "
	assert.Equal(t, []string{
		where + "average A 6 min, B 30 min",
		where + "time averaging A no, B yes",
		where + "over body A largest, B mean",
		where + "area A none, B 4 cm2",
		where + "brief A none, B 190 J/m2 in 1 s and 604.3 J/m2 in 30 min",
		where + "combine A largest, B add",
	}, lines)

	none := a
	none.None = true
	list = limits.Compare(build(t, a), build(t, none))
	require.Len(t, list, 1)
	assert.Equal(t, where+"A 10 W/m2, B level none", list[0].String())

	falling := a
	falling.Exponent, falling.Coefficient = -1, 1000
	list = limits.Compare(build(t, falling), build(t, none))
	require.Len(t, list, 1)
	assert.Equal(t, where+"A 10 W/m2 to 5 W/m2, B level none", list[0].String())

	// Another name for the same people.
	other := a
	other.Class, other.Coefficient = "general population", 5
	assert.Len(t, limits.Compare(build(t, a), build(t, other)), 2, "each class in one table only")
	list = limits.CompareAs(build(t, a), build(t, other), [][2]string{{"public", "general population"}})
	require.Len(t, list, 1)
	assert.Equal(t, "public (in B general population), S (thermal, whole body, mean), 100 MHz to 200 MHz: A 10 W/m2, B 5 W/m2 at 100 MHz: B is -50 % (-3.01 dB)", list[0].String())

	// A level for one frequency alone.
	point := flat("public", limits.S, 200, 200, 9)
	list = limits.Compare(build(t, a), build(t, a, point))
	require.Len(t, list, 1)
	assert.Equal(t, "public, S (thermal, whole body, mean), 200 MHz: A 10 W/m2, B 9 W/m2 at 200 MHz: B is -10 % (-0.46 dB)", list[0].String())

	text, err := json.Marshal(list[0])
	require.NoError(t, err)
	var keys map[string]any
	require.NoError(t, json.Unmarshal(text, &keys))
	assert.Equal(t, "thermal, whole body, mean", keys["group"])
	assert.InDelta(t, -10, keys["percent"], 1e-12, "rounding")
	for _, key := range []string{"class", "class_b", "quantity", "from_hz", "to_hz", "item", "at_hz", "a", "b", "db", "a_text", "b_text"} {
		assert.Contains(t, keys, key)
	}
}

// Nowhere do two tables differ more than the comparison says, and where it says
// nothing they agree.
func TestCompareMissesNothing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := randomTable(t), randomTable(t)
		list := limits.Compare(a, b)
		f := frequency(t, a, "f")
		for _, tab := range []*limits.Table{a, b} {
			for _, r := range tab.Rows {
				if math.Abs(f/r.FromHz-1) < 1e-9 || math.Abs(f/r.ToHz-1) < 1e-9 {
					return // both neighbours hold at an edge
				}
			}
		}
		for _, class := range []string{"public", "workers"} {
			for _, q := range limits.Quantities() {
				va, vb := atGroup(a, class, heating, f, q), atGroup(b, class, heating, f, q)
				found := limits.Difference{}
				for _, d := range list {
					if d.Class == class && d.Quantity == q && d.Item == "level" && d.FromHz < f && f < d.ToHz {
						found = d
					}
				}
				switch {
				case va == 0 && vb == 0 || va == vb:
				case found.Item == "":
					t.Fatalf("%s, %s at %g: %g and %g, and nothing said", class, q, f, va, vb)
				case va > 0 && vb > 0:
					if math.Abs(math.Log(vb/va)) > math.Abs(math.Log(found.B/found.A))+1e-9 {
						t.Fatalf("%s, %s at %g: %g and %g differ by more than %v", class, q, f, va, vb, found)
					}
				}
			}
		}
	})
}
