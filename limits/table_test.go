package limits_test

import (
	"math"
	"sync"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/limits"
)

// flat is a row without faults that tests bend.
func flat(class string, q limits.Quantity, fromMHz, toMHz, level float64) limits.Row {
	return limits.Row{Class: class, Quantity: q, FromHz: fromMHz * 1e6, ToHz: toMHz * 1e6, Coefficient: level, AverageS: 360, Source: "an example"}
}

func build(t testing.TB, rows ...limits.Row) *limits.Table {
	t.Helper()
	table, faults, _ := limits.New(rows, limits.About{}, nil)
	require.Empty(t, faults)
	return table
}

func TestFaultsOfARow(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for name, c := range map[string]struct {
		bend            func(r *limits.Row)
		column, message string
	}{
		"class":               {func(r *limits.Row) { r.Class = " " }, "class", "blank"},
		"quantity":            {func(r *limits.Row) { r.Quantity = "D" }, "quantity", `"D" is not one of E, H, B, S`},
		"over":                {func(r *limits.Row) { r.OverBody = "most" }, "over body", "largest, mean"},
		"region":              {func(r *limits.Row) { r.Region = "head" }, "region", "whole body, local"},
		"effect":              {func(r *limits.Row) { r.Effect = "cold" }, "effect", "thermal, stimulation"},
		"kind":                {func(r *limits.Row) { r.Kind = "median" }, "kind", "mean, peak"},
		"combine":             {func(r *limits.Row) { r.Combine = "sum" }, "combine", "largest, add"},
		"stimulation by S":    {func(r *limits.Row) { r.Effect = limits.Stimulation }, "quantity", "does not stimulate"},
		"no source":           {func(r *limits.Row) { r.Source = "" }, "source", "document, edition and table"},
		"from below zero":     {func(r *limits.Row) { r.FromHz = -1 }, "from", "not a frequency"},
		"from NaN":            {func(r *limits.Row) { r.FromHz = nan }, "from", "not a frequency"},
		"to infinite":         {func(r *limits.Row) { r.ToHz = inf }, "to", "not a frequency"},
		"backwards":           {func(r *limits.Row) { r.FromHz, r.ToHz = r.ToHz, r.FromHz }, "from", "runs backwards, from 2 GHz to 400 MHz"},
		"from zero":           {func(r *limits.Row) { r.FromHz, r.Exponent = 0, 1 }, "from", "cannot begin at 0 Hz"},
		"coefficient zero":    {func(r *limits.Row) { r.Coefficient = 0 }, "coefficient", "above 0, or level none"},
		"coefficient below":   {func(r *limits.Row) { r.Coefficient = -3 }, "coefficient", "-3 is not a level"},
		"coefficient NaN":     {func(r *limits.Row) { r.Coefficient = nan }, "coefficient", "NaN is not a level"},
		"coefficient Inf":     {func(r *limits.Row) { r.Coefficient = inf }, "coefficient", "is not a level"},
		"exponent":            {func(r *limits.Row) { r.Exponent = 43 }, "exponent", "43 is not an exponent"},
		"exponent NaN":        {func(r *limits.Row) { r.Exponent = nan }, "exponent", "not an exponent"},
		"level overflows":     {func(r *limits.Row) { r.Coefficient, r.Exponent, r.FUnitHz = 1e300, 4, 1 }, "exponent", "check coefficient, exponent and f unit"},
		"f unit":              {func(r *limits.Row) { r.FUnitHz = -1 }, "f unit", "MHz or GHz"},
		"average below":       {func(r *limits.Row) { r.AverageS = -6 }, "average", "0 for a level that is never averaged"},
		"average exponent":    {func(r *limits.Row) { r.AverageExp = 7 }, "average exponent", "not an exponent"},
		"average f unit":      {func(r *limits.Row) { r.AverageFUnitHz = nan }, "average f unit", "unit of frequency"},
		"exponent alone":      {func(r *limits.Row) { r.AverageS, r.AverageExp = 0, -1 }, "average exponent", "fill average"},
		"stay without time":   {func(r *limits.Row) { r.AverageS, r.TimeAveraging = 0, true }, "time averaging", "without an averaging time"},
		"area":                {func(r *limits.Row) { r.AreaM2 = -1 }, "area", "not an area"},
		"brief half":          {func(r *limits.Row) { r.BriefB = 3 }, "brief a", "go together"},
		"brief on E":          {func(r *limits.Row) { r.HasBrief, r.BriefA, r.Quantity = true, 1, limits.E }, "brief a", "beside a level S"},
		"brief on peak":       {func(r *limits.Row) { r.HasBrief, r.BriefA, r.Kind = true, 1, limits.Peak }, "brief a", "beside a level S"},
		"brief on a gap":      {func(r *limits.Row) { r.HasBrief, r.BriefA, r.None = true, 1, true }, "brief a", "beside a level S"},
		"brief never averged": {func(r *limits.Row) { r.HasBrief, r.BriefA, r.AverageS = true, 1, 0 }, "brief a", "fill average"},
		"brief below zero":    {func(r *limits.Row) { r.HasBrief, r.BriefA, r.BriefB = true, 1, -1 }, "brief b", "not an energy"},
		"brief nothing":       {func(r *limits.Row) { r.HasBrief = true }, "brief a", "both 0"},
		"brief exponent":      {func(r *limits.Row) { r.HasBrief, r.BriefA, r.BriefExp = true, 1, 9 }, "brief exponent", "not an exponent"},
	} {
		t.Run(name, func(t *testing.T) {
			r := flat("public", limits.S, 400, 2000, 2)
			r.Line = 7
			c.bend(&r)
			table, faults, warnings := limits.New([]limits.Row{r}, limits.About{}, nil)
			assert.Nil(t, table)
			assert.Empty(t, warnings)
			require.Len(t, faults, 1)
			assert.Equal(t, 7, faults[0].Line)
			assert.Equal(t, c.column, faults[0].Column)
			assert.Contains(t, faults[0].Message, c.message)
		})
	}
	_, faults, _ := limits.New(nil, limits.About{}, nil)
	require.Len(t, faults, 1)
	assert.Contains(t, faults[0].Message, "no rows")
}

func TestOverlaps(t *testing.T) {
	for name, c := range map[string]struct {
		a, b limits.Row
		bend func(b *limits.Row)
		want string // "" = allowed
	}{
		"apart":               {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 20, 30, 1), nil, ""},
		"edge":                {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 10, 30, 1), nil, ""},
		"edge, other way":     {flat("public", limits.E, 10, 30, 1), flat("public", limits.E, 1, 10, 1), nil, ""},
		"point at edge":       {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 10, 10, 1), nil, ""},
		"point at start":      {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 1, 1, 1), nil, ""},
		"another class":       {flat("public", limits.E, 1, 10, 1), flat("workers", limits.E, 1, 10, 1), nil, ""},
		"another quantity":    {flat("public", limits.E, 1, 10, 1), flat("public", limits.H, 1, 10, 1), nil, ""},
		"another region":      {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 1, 10, 1), func(b *limits.Row) { b.Region = limits.Local }, ""},
		"another effect":      {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 1, 10, 1), func(b *limits.Row) { b.Effect = limits.Stimulation }, ""},
		"another kind":        {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 1, 10, 1), func(b *limits.Row) { b.Kind = limits.Peak }, ""},
		"last bit of an edge": {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 10, 30, 1), func(b *limits.Row) { b.FromHz = math.Nextafter(10e6, 0) }, ""},
		"partly":              {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 9, 30, 1), nil, "from 9 MHz to 10 MHz"},
		"inside":              {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 2, 3, 1), nil, "from 2 MHz to 3 MHz"},
		"point inside":        {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 5, 5, 1), nil, "at 5 MHz"},
		"the same":            {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 1, 10, 1), nil, "from 1 MHz to 10 MHz"},
		"the same point":      {flat("public", limits.E, 5, 5, 1), flat("public", limits.E, 5, 5, 2), nil, "at 5 MHz"},
		"with a gap":          {flat("public", limits.E, 1, 10, 1), flat("public", limits.E, 2, 12, 0), func(b *limits.Row) { b.None = true }, "from 2 MHz to 10 MHz"},
	} {
		t.Run(name, func(t *testing.T) {
			a, b := c.a, c.b
			a.Line, b.Line = 4, 9
			if c.bend != nil {
				c.bend(&b)
			}
			_, faults, _ := limits.New([]limits.Row{a, b}, limits.About{}, nil)
			if c.want == "" {
				assert.Empty(t, faults)
				return
			}
			require.Len(t, faults, 1)
			assert.Equal(t, 9, faults[0].Line)
			assert.Contains(t, faults[0].Message, "overlaps row 4")
			assert.Contains(t, faults[0].Message, c.want)
		})
	}
	// A wide band hides behind a narrow one that follows it.
	_, faults, _ := limits.New([]limits.Row{
		flat("public", limits.E, 1, 100, 1), flat("public", limits.E, 2, 3, 1), flat("public", limits.E, 50, 60, 1),
	}, limits.About{}, nil)
	assert.Len(t, faults, 2)
}

func TestClassesAndGroups(t *testing.T) {
	local := flat("workers", limits.S, 6000, 300000, 200)
	local.Region = limits.Local
	st := flat("workers", limits.E, 0.003, 10, 170)
	st.Effect = limits.Stimulation
	table := build(t, st, local, flat("public", limits.E, 10, 400, 28), flat("workers", limits.E, 10, 400, 61))
	assert.Equal(t, []string{"workers", "public"}, table.Classes(), "in the order of first appearance")
	assert.Equal(t, []limits.Group{
		{Effect: limits.Thermal, Region: limits.WholeBody, Kind: limits.Mean},
		{Effect: limits.Thermal, Region: limits.Local, Kind: limits.Mean},
		{Effect: limits.Stimulation, Region: limits.WholeBody, Kind: limits.Mean},
	}, table.Groups("workers"))
	assert.Empty(t, table.Groups("nobody"))
	assert.Nil(t, table.At("nobody", 1e6))
	// One entry a group, covered or not.
	list := table.At("workers", 98e6)
	require.Len(t, list, 3)
	assert.True(t, list[0].Covered())
	assert.False(t, list[1].Covered())
	assert.False(t, list[2].Covered())
	for _, a := range table.At("workers", math.NaN()) {
		assert.False(t, a.Covered())
	}
	// A table that New has not seen answers alike.
	bare := &limits.Table{Rows: table.Rows}
	assert.Equal(t, list, bare.At("workers", 98e6))
	overlapping := &limits.Table{Rows: []limits.Row{table.Rows[3], table.Rows[3], table.Rows[3]}}
	overlapping.Rows[1].FromHz, overlapping.Rows[1].ToHz, overlapping.Rows[1].Coefficient = 20e6, 30e6, 5
	assert.Equal(t, []int{0, 2}, overlapping.At("workers", 98e6)[0].Rows, "also where bands overlap")
	assert.Equal(t, 5.0, overlapping.At("workers", 25e6)[0].E)
}

func TestEdgeOwnership(t *testing.T) {
	below, above := flat("public", limits.E, 10, 400, 28), flat("public", limits.E, 400, 2000, 1.375)
	above.Exponent, above.AverageS = 0.5, 1800
	below.OverBody, below.TimeAveraging = limits.BodyMean, true
	above.Combine = limits.CombineAdd
	s := flat("public", limits.S, 400, 2000, 2)
	table := build(t, below, above, s)
	edge := table.At("public", 400e6)[0]
	assert.Equal(t, []int{0, 1, 2}, edge.Rows)
	assert.InDelta(t, 27.5, edge.E, 1e-12, "1.375*20 is below 28; rounding")
	assert.Equal(t, 2.0, edge.S)
	assert.Equal(t, 360.0, edge.AverageS, "the shorter time")
	assert.Equal(t, limits.Largest, edge.OverBody, "mean only where every row says so")
	assert.Equal(t, limits.CombineAdd, edge.Combine, "add where any row says so")
	assert.False(t, edge.TimeAveraging, "only where every row allows it")
	assert.Equal(t, edge, table.At("public", math.Nextafter(400e6, 0))[0], "the last bit is the edge still")
	assert.Equal(t, edge.Rows, table.At("public", math.Nextafter(400e6, 1e9))[0].Rows)

	only := table.At("public", 399e6)[0]
	assert.Equal(t, limits.BodyMean, only.OverBody)
	assert.True(t, only.TimeAveraging)
	assert.Equal(t, limits.CombineLargest, only.Combine)

	// A deliberate gap covers, sets nothing, and has no say in the rest.
	none := flat("public", limits.E, 2000, 3000, 0)
	none.None = true
	gap := build(t, below, above, none)
	at := gap.At("public", 2500e6)[0]
	assert.True(t, at.Covered() && at.None)
	assert.Zero(t, at.E)
	assert.Zero(t, at.AverageS)
	assert.Equal(t, limits.Largest, at.OverBody)
	assert.False(t, at.TimeAveraging)
	at = gap.At("public", 2000e6)[0]
	assert.InDelta(t, 1.375*math.Sqrt(2000), at.E, 1e-12, "at the edge of a gap the level holds; rounding")
	assert.Equal(t, 1800.0, at.AverageS)
	assert.False(t, gap.At("public", 3001e6)[0].Covered())
	assert.False(t, gap.At("public", 9e6)[0].Covered())
}

func TestFrequencyDependentAveraging(t *testing.T) {
	r := flat("public", limits.S, 10000, 300000, 10)
	r.AverageS, r.AverageExp, r.AverageFUnitHz = 68*60, -1.05, 1e9
	table := build(t, r)
	for _, g := range []float64{10, 28, 300} {
		assert.InEpsilon(t, 68*60/math.Pow(g, 1.05), table.At("public", g*1e9)[0].AverageS, 1e-12, "68/f^1.05 min; rounding")
	}
	assert.InEpsilon(t, 68*60/math.Pow(30, 1.05), table.LowestOver("public", 10e9, 30e9)[0].AverageS, 1e-12, "the shortest of the band is at its upper end")
}

func TestConcurrentUse(t *testing.T) {
	table := published(t, fileI98)
	want := table.At(pub, 900e6)
	var group sync.WaitGroup
	for range 8 {
		group.Go(func() {
			for range 50 {
				assert.Equal(t, want, table.At(pub, 900e6))
			}
		})
	}
	group.Wait()
}

func BenchmarkAt(b *testing.B) {
	table := published(b, fileI98)
	for b.Loop() {
		table.At(pub, 900e6)
	}
}
