package figure

import (
	"bytes"
	"encoding/xml"
	"errors"
	"image/color"
	"image/png"
	"io"
	"math"
	"regexp"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/sync/errgroup"
	"gonum.org/v1/plot/vg"

	"example.org/standclear/exposure"
)

func TestSVGIsWellFormedAndItsPictureIsCalledAPNG(t *testing.T) {
	f, err := Plan(samplePlan())
	require.NoError(t, err)
	svg, err := f.SVG()
	require.NoError(t, err)
	assert.Contains(t, string(svg), "data:image/png;base64,")
	assert.NotContains(t, string(svg), "image/jpg")
	assert.Contains(t, string(svg), "<title>Harbour mill (invented): plan of surface main roof, exposure ratio for general public</title>")
	assert.Contains(t, string(svg), "font-family:'Liberation Sans',Arial")
	wellFormed(t, svg)
}

func wellFormed(t *testing.T, svg []byte) {
	t.Helper()
	d := xml.NewDecoder(bytes.NewReader(svg))
	for {
		_, err := d.Token()
		if errors.Is(err, io.EOF) {
			return
		}
		require.NoError(t, err)
	}
}

func TestTextOfTheUserIsNeverMarkup(t *testing.T) {
	d := samplePlan()
	d.Site.About.Name = "</text><script>alert(1)</script>&amp;\x00\x1b[31m\xff"
	d.Site.Sources[0].ID = `<image href="x"/>`
	d.Points[0].ID = "a\nb\tc"
	f, err := Plan(d)
	require.NoError(t, err)
	svg, err := f.SVG()
	require.NoError(t, err)
	wellFormed(t, svg)
	assert.NotContains(t, string(svg), "<script")
	assert.NotContains(t, string(svg), `<image href`)
	_, err = f.PNG()
	require.NoError(t, err)
}

func TestPNGIsGreyAndTwiceTheSize(t *testing.T) {
	f, err := Plan(samplePlan())
	require.NoError(t, err)
	b, err := f.PNG()
	require.NoError(t, err)
	img, err := png.Decode(bytes.NewReader(b))
	require.NoError(t, err)
	assert.Equal(t, color.GrayModel, img.ColorModel())
	w, h := f.Size()
	// Points to pixels of 1/96 inch, twice; the library rounds to whole pixels.
	assert.InDelta(t, w*96/72*2, img.Bounds().Dx(), 0.5)
	assert.InDelta(t, h*96/72*2, img.Bounds().Dy(), 0.5)
}

func TestOnlyGreysAreDrawn(t *testing.T) {
	hex := regexp.MustCompile(`#([0-9A-F]{2})([0-9A-F]{2})([0-9A-F]{2})`)
	for _, d := range drawings() {
		f, err := d.draw()
		require.NoError(t, err)
		svg, err := f.SVG()
		require.NoError(t, err)
		for _, m := range hex.FindAllStringSubmatch(string(svg), -1) {
			require.Truef(t, m[1] == m[2] && m[2] == m[3], "%s draws the colour %s", d.name, m[0])
		}
	}
}

func TestClassesAreToldApartWithoutColour(t *testing.T) {
	for i := range 16 {
		for j := range i {
			a, b := classLine(i), classLine(j)
			assert.Falsef(t, a.width == b.width && assert.ObjectsAreEqual(a.dash, b.dash), "classes %d and %d have one line", j, i)
			if i < len(hatches) && j < len(hatches) {
				assert.NotEqualf(t, hatches[i], hatches[j], "classes %d and %d have one hatching", j, i)
			}
		}
	}
}

// Words that promise what a model cannot: none may reach a reader.
var promises = regexp.MustCompile(`(?i)\b(safe|safely|safety|compliant|compliance|guarantee[sd]?|proven)\b`)

func TestNoFigurePromisesMoreThanAModelCan(t *testing.T) {
	for _, d := range drawings() {
		f, err := d.draw()
		require.NoError(t, err)
		for _, x := range f.Layout().Texts {
			assert.NotRegexp(t, promises, x.Text)
		}
	}
	f, err := Plan(samplePlan())
	require.NoError(t, err)
	assert.Contains(t, allText(f), "encloses the model's boundary to within 0.05 m")
	assert.Contains(t, allText(f), "not assessed")
}

func allText(f *Figure) string {
	var t []string
	for _, x := range f.Layout().Texts {
		t = append(t, x.Text)
	}
	return strings.Join(t, " ")
}

func TestEveryCharacterHasAGlyph(t *testing.T) {
	ft := fonts.Lookup(labelFace.style().Font, 8)
	var buf sfnt.Buffer
	for _, d := range drawings() {
		f, err := d.draw()
		require.NoError(t, err)
		for _, r := range allText(f) + "²≥−±°×∞…µ" {
			g, err := ft.Face.GlyphIndex(&buf, r)
			require.NoError(t, err)
			assert.NotZerof(t, g, "%s: no glyph for %q", d.name, r)
		}
	}
}

func TestNumbersThatAreNoneLeaveNoTrace(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	p := samplePlan()
	p.Zones[0].Outer[0][0][5] = [2]float64{nan, 3}
	p.Zones[0].Inner[0][0][7] = [2]float64{4, -inf}
	p.Zones = append(p.Zones, exposure.Zone{Surface: "main roof", Class: "nobody", Outer: exposure.MultiPolygon{{{{nan, nan}, {nan, inf}}}, {}}})
	p.Points[0].XM = nan
	p.Points[1].Ratios[0].ExposureRatio = exposure.Number(inf)
	p.Site.Sources[0].Position.X = inf
	for i := range p.Grid.Values {
		switch i % 97 {
		case 3:
			p.Grid.Values[i] = exposure.Number(nan)
		case 5:
			p.Grid.Values[i] = exposure.Number(inf)
		case 7:
			p.Grid.Values[i] = -1
		}
	}
	r := sampleProfile()
	r.Lines[0].Ratio[3], r.Lines[0].Ratio[9], r.Lines[0].DistanceM[20] = exposure.Number(inf), 0, nan
	l := sampleLevels()
	l.Lines[0].Level[2], l.Lines[0].Hz[3] = 0, -1
	c := samplePattern(true)
	c.Cuts[0].LossDB[4], c.Cuts[1].LossDB[9] = nan, inf
	s := sampleSeries()
	s.FieldVPerM[10], s.TimeS[20] = inf, nan
	sc := sampleScatter()
	sc.Points[0].MeasuredVPerM, sc.Points[1].PredictedVPerM, sc.Points[2].ExpandedUncertaintyDB = nan, 0, inf
	for name, draw := range map[string]func() (*Figure, error){
		"plan":    func() (*Figure, error) { return Plan(p) },
		"profile": func() (*Figure, error) { return Profile(r) },
		"levels":  func() (*Figure, error) { return Levels(l) },
		"pattern": func() (*Figure, error) { return Pattern(c) },
		"series":  func() (*Figure, error) { return Series(s) },
		"scatter": func() (*Figure, error) { return Scatter(sc) },
	} {
		f, err := draw()
		require.NoError(t, err, name)
		svg, err := f.SVG()
		require.NoError(t, err, name)
		// Numbers only: the picture's base64 may hold any letters.
		text := regexp.MustCompile(`base64,[^"]*`).ReplaceAllString(string(svg), "")
		assert.NotContains(t, text, "NaN", name)
		assert.NotContains(t, text, "Inf", name)
		_, err = f.PNG()
		require.NoError(t, err, name)
	}
}

func TestWhatCannotBeDrawnIsAnError(t *testing.T) {
	flat := samplePlan()
	flat.Site.Surfaces[0].Outline = []exposure.Ring{rectangle(0, 0, 30, 0)}
	unknown := samplePlan()
	unknown.Surface = "cellar"
	point := sampleSection()
	point.Section.X2M, point.Section.Y2M = point.Section.X1M, point.Section.Y1M
	for name, draw := range map[string]func() (*Figure, error){
		"no site":       func() (*Figure, error) { return Plan(PlanData{}) },
		"no area":       func() (*Figure, error) { return Plan(flat) },
		"no surface":    func() (*Figure, error) { return Plan(unknown) },
		"no section":    func() (*Figure, error) { return Section(point) },
		"no ratio":      func() (*Figure, error) { return Profile(ProfileData{}) },
		"no level":      func() (*Figure, error) { return Levels(LevelsData{}) },
		"no cut":        func() (*Figure, error) { return Pattern(PatternData{}) },
		"no field":      func() (*Figure, error) { return Series(SeriesData{}) },
		"no comparison": func() (*Figure, error) { return Scatter(ScatterData{}) },
	} {
		f, err := draw()
		assert.Error(t, err, name)
		assert.Nil(t, f, name)
	}
}

func TestAPanicOfTheDrawingLibraryIsAnError(t *testing.T) {
	f := &Figure{sheet: &sheet{w: 10, h: 10, ops: []func(vg.Canvas){func(vg.Canvas) { panic("no such font") }}}}
	_, err := f.SVG()
	assert.ErrorContains(t, err, "no such font")
	_, err = f.PNG()
	assert.ErrorContains(t, err, "no such font")
}

func TestFiguresMayBeDrawnAtTheSameTime(t *testing.T) {
	want, err := Plan(samplePlan())
	require.NoError(t, err)
	svg, err := want.SVG()
	require.NoError(t, err)
	var group errgroup.Group
	for range 4 {
		group.Go(func() error {
			f, err := Plan(samplePlan())
			if err != nil {
				return err
			}
			if _, err = f.PNG(); err != nil {
				return err
			}
			got, err := f.SVG()
			if err == nil && !bytes.Equal(got, svg) {
				err = errors.New("another drawing at the same time changed this one")
			}
			return err
		})
	}
	assert.NoError(t, group.Wait())
}

func TestDataIsNotTouched(t *testing.T) {
	d := samplePlan()
	zones, grid := sampleZones(), samplePlan().Grid
	_, err := Plan(d)
	require.NoError(t, err)
	assert.Equal(t, zones, d.Zones)
	assert.Equal(t, grid, d.Grid)
}

func BenchmarkPlanPNG(b *testing.B) {
	for range b.N {
		f, err := Plan(samplePlan())
		if err != nil {
			b.Fatal(err)
		}
		if _, err = f.PNG(); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkPlanOfManyVertices(b *testing.B) {
	d := samplePlan()
	d.Zones[0].Outer = exposure.MultiPolygon{{staircase(12, 12, 11, 11, 0.0005)}} // 88,000 vertices
	b.ResetTimer()
	for range b.N {
		f, err := Plan(d)
		if err != nil {
			b.Fatal(err)
		}
		if _, err = f.SVG(); err != nil {
			b.Fatal(err)
		}
	}
}
