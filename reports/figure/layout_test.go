package figure

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/exposure"
)

// crowdedPlan holds sixty antennas on four masts and along two edges, and
// thirty places, many within reach of each other's labels.
func crowdedPlan() PlanData {
	d := samplePlan()
	d.Site.Sources = nil
	for i := 0; i < 60; i++ {
		mast := [][2]float64{{6, 18}, {7.5, 18.5}, {22, 4}, {28, 22}}[i%4]
		s := exposure.Source{ID: fmt.Sprintf("operator %d sector %d", i%4+1, i), Position: exposure.Point{X: mast[0], Y: mast[1], Z: 24}}
		if i >= 36 {
			s.Position = exposure.Point{X: float64(i-36) * 1.2, Y: 0.5 * float64(i%2), Z: 23}
		}
		s.Pose.AzimuthRad = float64(i*37) * math.Pi / 180
		d.Site.Sources = append(d.Site.Sources, s)
	}
	d.Points = nil
	for i := 0; i < 30; i++ {
		v, r := exposure.Within, 0.03*float64(i)
		if i%5 == 0 {
			v, r = exposure.Above, 1.2+float64(i)
		}
		d.Points = append(d.Points, exposure.PointResult{ID: fmt.Sprintf("place %d", i), Class: testClasses[0],
			XM: 4 + 0.7*float64(i%6), YM: 15 + 1.1*float64(i/6), ZM: 21, Place: &exposure.Place{On: "main roof"},
			Ratios: []exposure.ClassRatio{{Class: testClasses[0], ExposureRatio: exposure.Number(r), Covered: true, Verdict: v}}})
	}
	return d
}

// shapedPlan has a bare roof of the given size.
func shapedPlan(w, h float64) PlanData {
	d := samplePlan()
	d.Site.Surfaces = []exposure.Surface{{ID: "main roof", Z: 21, To: 2, Outline: []exposure.Ring{rectangle(0, 0, w, h)}}}
	d.Grid = nil
	return d
}

// manyClasses has eight classes, long names, a class without a line and one
// that is not assessed.
func manyClasses() PlanData {
	d := samplePlan()
	d.Site.About.Name = "A site whose name runs on and on past the end of the line because somebody put the whole postal address into it"
	d.Zones, d.Classes = nil, nil
	for i := 0; i < 8; i++ {
		c := fmt.Sprintf("class %d with a name that needs two lines", i+1)
		d.Classes = append(d.Classes, c)
		z := exposure.Zone{Surface: "main roof", Class: c, Share: 1, ResolutionM: 0.05, Covered: i != 2, Verdict: exposure.Above}
		if i == 2 {
			z.Verdict = exposure.NotAssessed
		}
		if i == 5 {
			z.Verdict = exposure.Within
		} else {
			r := 9 - float64(i)
			z.Outer = exposure.MultiPolygon{{ellipse(12, 12, r, r, 200, false)}}
			z.Inner = exposure.MultiPolygon{{ellipse(12, 12, r-0.3, r-0.3, 200, false)}}
		}
		d.Zones = append(d.Zones, z)
	}
	d.Grid = nil
	return d
}

func sampleSection() SectionData {
	sec := exposure.Section{X1M: 0, Y1M: 18, X2M: 30, Y2M: 18, FromZM: 18, ToZM: 30}
	return SectionData{Site: sampleSite(), Section: sec, Classes: testClasses,
		Zones: []exposure.Zone{
			{Section: &sec, Class: testClasses[0], Share: 1, ResolutionM: 0.05, Covered: true, Verdict: exposure.Above,
				Outer: exposure.MultiPolygon{{ellipse(8, 23.6, 6, 2.4, 400, false)}}, Inner: exposure.MultiPolygon{{ellipse(8, 23.6, 5.8, 2.2, 400, false)}}},
			{Section: &sec, Class: testClasses[1], Share: 1, ResolutionM: 0.05, Covered: true, Verdict: exposure.Above,
				Outer: exposure.MultiPolygon{{ellipse(7.4, 23.8, 3, 1.6, 400, false)}}, Inner: exposure.MultiPolygon{{ellipse(7.4, 23.8, 2.9, 1.5, 400, false)}}},
		},
		Grid: sampleGrid(0, 18, 30, 30, 0.25, [2]float64{7, 24})}
}

func sampleProfile() ProfileData {
	d := ProfileData{SiteName: "Harbour mill (invented)", Classes: testClasses,
		Source: &exposure.SourceInfo{FrequencyHz: 900e6, EIRPW: 1234, ReactiveM: 0.53, FarFieldM: 24}}
	for k, c := range testClasses {
		l := exposure.Profile{Antenna: "S1-800", Class: c, AzimuthDeg: 20, ElevationDeg: -4}
		for r := 0.1; r < 120; r *= 1.03 {
			m := "larger of array and cylindrical"
			if r > 24 {
				m = "far field"
			}
			l.DistanceM, l.Method = append(l.DistanceM, r), append(l.Method, m)
			l.Ratio = append(l.Ratio, exposure.Number(40/(1+4*float64(k))/(r*r+0.4*r)))
		}
		d.Lines = append(d.Lines, l)
		d.Marks = append(d.Marks, exposure.Distance{Antenna: "S1-800", Class: c, Kind: "ray", AzimuthDeg: 20, ElevationDeg: -4, DistanceM: []float64{6.13, 2.64}[k]})
	}
	return d
}

type drawing struct {
	name string
	draw func() (*Figure, error)
}

func drawings() []drawing {
	plan := func(d PlanData) func() (*Figure, error) { return func() (*Figure, error) { return Plan(d) } }
	bare := samplePlan()
	bare.Grid = nil
	return []drawing{
		{"plan", plan(samplePlan())},
		{"plan-without-contours", plan(bare)},
		{"plan-crowded", plan(crowdedPlan())},
		{"plan-wide", plan(shapedPlan(200, 30))},
		{"plan-tall", plan(shapedPlan(28, 60))},
		{"plan-many-classes", plan(manyClasses())},
		{"section", func() (*Figure, error) { return Section(sampleSection()) }},
		{"profile", func() (*Figure, error) { return Profile(sampleProfile()) }},
		{"profile-without-marks", func() (*Figure, error) {
			d := sampleProfile()
			d.Marks = nil
			d.Source.FresnelM, d.Source.DishFarFieldM, d.Source.FarFieldM = 6.8, 16.4, 54
			return Profile(d)
		}},
		{"levels", func() (*Figure, error) { return Levels(sampleLevels()) }},
		{"pattern", func() (*Figure, error) { return Pattern(samplePattern(false)) }},
		{"pattern-polar", func() (*Figure, error) { return Pattern(samplePattern(true)) }},
		{"series", func() (*Figure, error) { return Series(sampleSeries()) }},
		{"scatter", func() (*Figure, error) { return Scatter(sampleScatter()) }},
	}
}

func TestNoTextOverlapsAnotherOrLeavesThePage(t *testing.T) {
	for _, d := range drawings() {
		t.Run(d.name, func(t *testing.T) {
			f, err := d.draw()
			require.NoError(t, err)
			show(t, d.name, f)
			l := f.Layout()
			require.NotEmpty(t, l.Texts)
			page := Box{0, 0, l.Width, l.Height}
			for i, a := range l.Texts {
				assert.Truef(t, a.Box.Inside(page), "%q leaves the page: %v", a.Text, a.Box)
				for _, b := range l.Texts[:i] {
					assert.Falsef(t, a.Box.Overlaps(b.Box), "%q overlaps %q: %v, %v", a.Text, b.Text, a.Box, b.Box)
				}
			}
			for _, a := range l.Labels {
				inside := false
				for _, p := range l.Panels {
					inside = inside || a.Box.Inside(p.Box)
				}
				assert.Truef(t, inside, "label %q leaves its panel", a.Text)
			}
		})
	}
}

func TestEveryAntennaAndPlaceIsLabelledOrNamedAtTheFoot(t *testing.T) {
	f, err := Plan(crowdedPlan())
	require.NoError(t, err)
	l := f.Layout()
	said := ""
	for _, x := range l.Labels {
		said += x.Text + "\n"
	}
	said += strings.Join(l.Unlabelled, "\n")
	for i := 0; i < 30; i++ {
		assert.Contains(t, said, fmt.Sprintf("place %d: ", i))
	}
	for i := 0; i < 60; i++ {
		assert.Contains(t, said, fmt.Sprintf("sector %d", i))
	}
	// Every label of this site, crowded as it is, finds room.
	assert.Empty(t, l.Unlabelled)
}

func TestLabelsWithoutRoomAreCounted(t *testing.T) {
	area := Box{0, 0, 60, 12}
	tags := []tag{
		{text: "first name", anchor: pt{5, 6}, face: labelFace, gap: 3},
		{text: "second name", anchor: pt{6, 6}, face: labelFace, gap: 3},
	}
	placed, lost := place(area, tags, newClutter(area))
	assert.Len(t, placed, 1)
	assert.Len(t, lost, 1)
	// Past the number that can be placed, names go straight to the list.
	var many []tag
	for i := 0; i < maxTags+5; i++ {
		many = append(many, tag{text: fmt.Sprint(i), anchor: pt{float64(i), 50}, face: labelFace, gap: 3})
	}
	big := Box{0, 0, 400, 400}
	placed, lost = place(big, many, newClutter(big))
	assert.Len(t, lost, len(many)-len(placed))
	assert.GreaterOrEqual(t, len(lost), 5)
}

// TestLayoutNumbers pins where things stand. The numbers follow from the page's
// constants, not from a former run: the panel begins after margin and axis
// room, at 12 + 40, and ends at the right margin, 540 - 12.
func TestLayoutNumbers(t *testing.T) {
	f, err := Plan(samplePlan())
	require.NoError(t, err)
	l := f.Layout()
	const exact = 1e-9 // points; sums of a few floating-point numbers
	assert.InDelta(t, 540, l.Width, exact)
	require.Len(t, l.Panels, 1)
	p := l.Panels[0]
	assert.InDelta(t, 52, p.Box.X0, exact)
	assert.InDelta(t, 528, p.Box.X1, exact)
	// The roof is 30 m by 24 m and gets a margin of 0.07 * 30 m on each side.
	assert.InDelta(t, -2.1, p.X0, exact)
	assert.InDelta(t, 32.1, p.X1, exact)
	assert.InDelta(t, 476*28.2/34.2, p.Box.H(), exact)
	assert.Equal(t, l.Height, math.Trunc(l.Height))

	// A label with nothing about it stands to the right of its anchor, at its gap.
	area := Box{0, 0, 200, 100}
	placed, lost := place(area, []tag{{text: "mast", anchor: pt{50, 50}, face: labelFace, gap: 4}}, newClutter(area))
	require.Empty(t, lost)
	assert.InDelta(t, 54, placed[0].Box.X0, exact)
	assert.InDelta(t, 54+labelFace.width("mast")+3, placed[0].Box.X1, exact)
	assert.InDelta(t, 50, placed[0].Box.centre()[1], exact)
	assert.False(t, placed[0].Leader)
}

func TestPlansAndSectionsHaveOneScale(t *testing.T) {
	for _, d := range drawings()[:7] {
		f, err := d.draw()
		require.NoError(t, err)
		for _, p := range f.Layout().Panels {
			x, y := p.Box.W()/(p.X1-p.X0), p.Box.H()/(p.Y1-p.Y0)
			assert.InEpsilonf(t, x, y, 1e-12, "%s: a few roundings of float64 apart at most", d.name)
		}
	}
}

func TestSameInputSameBytes(t *testing.T) {
	for _, d := range drawings() {
		var svg, img []byte
		for run := 0; run < 4; run++ {
			f, err := d.draw()
			require.NoError(t, err)
			s, err := f.SVG()
			require.NoError(t, err)
			if run > 0 {
				require.Equal(t, string(svg), string(s), d.name)
			}
			svg = s
			if run < 2 {
				p, err := f.PNG()
				require.NoError(t, err)
				if run > 0 {
					require.Equal(t, img, p, d.name)
				}
				img = p
			}
		}
	}
}
