package figure

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
)

// The site of these tests is invented: a roof with a stair head cut out of it,
// two housings and a dish, and zones made of ellipses in place of computed ones.

// roundPattern stands for any antenna that is the same at every azimuth.
type roundPattern struct{}

func (roundPattern) Relative(_, _ float64) float64 { return 1 }

func (roundPattern) RelativeRange(_, _ antenna.Interval) antenna.Interval {
	return antenna.Interval{Lo: 1, Hi: 1}
}

func (roundPattern) IsRound() bool { return true }

func ellipse(cx, cy, rx, ry float64, n int, clockwise bool) exposure.Ring {
	var r exposure.Ring
	for i := 0; i <= n; i++ {
		a := 2 * math.Pi * float64(i%n) / float64(n)
		if clockwise {
			a = -a
		}
		r = append(r, [2]float64{cx + rx*math.Cos(a), cy + ry*math.Sin(a)})
	}
	return r
}

func rectangle(x0, y0, x1, y1 float64) exposure.Ring {
	return exposure.Ring{{x0, y0}, {x1, y0}, {x1, y1}, {x0, y1}, {x0, y0}}
}

func reversed(r exposure.Ring) exposure.Ring {
	out := make(exposure.Ring, len(r))
	for i := range r {
		out[len(r)-1-i] = r[i]
	}
	return out
}

// staircase turns an ellipse into the outline of the cells of a fine grid that
// it touches: the shape in which the engine gives polygons.
func staircase(cx, cy, rx, ry, step float64) exposure.Ring {
	n := int(math.Ceil(ry / step))
	width := func(k int) float64 { // half width of the row of cells k
		y := math.Min(math.Abs(float64(k)), math.Abs(float64(k+1))) * step
		if k < 0 && k+1 > 0 || y >= ry {
			y = math.Min(y, ry)
		}
		return math.Ceil(rx*math.Sqrt(math.Max(0, 1-y*y/ry/ry))/step) * step
	}
	var r exposure.Ring
	for k := -n; k < n; k++ {
		r = append(r, [2]float64{cx + width(k), cy + float64(k)*step}, [2]float64{cx + width(k), cy + float64(k+1)*step})
	}
	for k := n - 1; k >= -n; k-- {
		r = append(r, [2]float64{cx - width(k), cy + float64(k+1)*step}, [2]float64{cx - width(k), cy + float64(k)*step})
	}
	return append(r, r[0])
}

var testClasses = []string{"general public", "briefed workers"}

func sampleSite() *exposure.Site {
	s := &exposure.Site{
		About: exposure.About{Name: "Harbour mill (invented)", GridBearingRad: 12 * math.Pi / 180},
		Surfaces: []exposure.Surface{
			{ID: "main roof", Z: 21, From: 0, To: 2, Class: "general public",
				Outline: []exposure.Ring{rectangle(0, 0, 30, 24), reversed(rectangle(18, 14, 24, 20))}},
			{ID: "lift house", Z: 24, From: 0, To: 2, Outline: []exposure.Ring{rectangle(18, 14, 24, 20)}},
		},
	}
	add := func(id string, x, y, z, az float64) *exposure.Source {
		s.Sources = append(s.Sources, exposure.Source{ID: id, Position: exposure.Point{X: x, Y: y, Z: z}, LengthM: 2, FrequencyHz: 900e6})
		q := &s.Sources[len(s.Sources)-1]
		q.Pose.AzimuthRad = az * math.Pi / 180
		q.Pose.TiltRad = 4 * math.Pi / 180
		return q
	}
	for i, az := range []float64{20, 140, 260} {
		add(fmt.Sprintf("S%d-800", i+1), 6, 18, 24, az)
		add(fmt.Sprintf("S%d-1800", i+1), 6, 18, 24, az)
	}
	add("link dish", 27, 3, 23.5, 70)
	add("FM dipole", 15, 6, 26, 0).Pattern = roundPattern{}
	return s
}

func samplePoints() []exposure.PointResult {
	place := func(id string, x, y float64, class string, ratio float64, v exposure.Verdict) exposure.PointResult {
		return exposure.PointResult{ID: id, XM: x, YM: y, ZM: 21, Class: class, Place: &exposure.Place{ID: id, On: "main roof"},
			Ratios: []exposure.ClassRatio{{Class: class, ExposureRatio: exposure.Number(ratio), Covered: v != exposure.NotAssessed, Verdict: v}}}
	}
	return []exposure.PointResult{
		place("stair door", 17.5, 17, testClasses[0], 0.34, exposure.Within),
		place("cable tray", 8.2, 19.5, testClasses[1], 1.8, exposure.Above),
		place("chiller", 26, 9, testClasses[0], 0.041, exposure.Within),
		place("hatch", 3, 3, testClasses[0], 0.0002, exposure.Within),
		place("dish foot", 27.3, 4, testClasses[0], 0.9, exposure.NotAssessed),
	}
}

func sampleZones() []exposure.Zone {
	return []exposure.Zone{
		{Surface: "main roof", Class: testClasses[0], Share: 1, ResolutionM: 0.05, Covered: true, Verdict: exposure.Above,
			Outer: exposure.MultiPolygon{{staircase(8, 17, 6, 5, 0.05), ellipse(4.5, 14.6, 0.7, 0.5, 40, true)}, {staircase(26.5, 3.2, 2.2, 1.6, 0.05)}},
			Inner: exposure.MultiPolygon{{ellipse(8, 17, 5.8, 4.8, 300, false), ellipse(4.5, 14.6, 0.9, 0.7, 40, true)}, {ellipse(26.5, 3.2, 2.0, 1.4, 80, false)}}},
		{Surface: "main roof", Class: testClasses[1], Share: 1, ResolutionM: 0.05, Covered: true, Verdict: exposure.Above,
			Outer: exposure.MultiPolygon{{ellipse(7.4, 17.6, 3.2, 2.6, 400, false)}},
			Inner: exposure.MultiPolygon{{ellipse(7.4, 17.6, 3.0, 2.4, 400, false)}}},
	}
}

// sampleGrid falls as the square of the distance from two antennas.
func sampleGrid(x0, y0, x1, y1, step float64, sources ...[2]float64) *exposure.RatioGrid {
	g := &exposure.RatioGrid{Class: testClasses[0], X0: x0, Y0: y0, Step: step,
		NX: int(math.Round((x1-x0)/step)) + 1, NY: int(math.Round((y1-y0)/step)) + 1}
	for j := 0; j < g.NY; j++ {
		for i := 0; i < g.NX; i++ {
			r := 0.0
			for k, s := range sources {
				dx, dy := x0+float64(i)*step-s[0], y0+float64(j)*step-s[1]
				r += 28 / float64(1+3*k) / (dx*dx/1.3 + dy*dy)
			}
			g.Values = append(g.Values, exposure.Number(r))
		}
	}
	return g
}

func samplePlan() PlanData {
	return PlanData{Site: sampleSite(), Surface: "main roof", Classes: testClasses, Zones: sampleZones(), Points: samplePoints(),
		Grid: sampleGrid(-1, -1, 31, 25, 0.25, [2]float64{7.5, 17.5}, [2]float64{26.5, 3.2})}
}

// show writes the figure where FIGURE_DIR says, for a person to look at.
func show(t *testing.T, name string, f *Figure) {
	t.Helper()
	dir := os.Getenv("FIGURE_DIR")
	if dir == "" {
		return
	}
	b, err := f.PNG()
	require.NoError(t, err)
	require.NoError(t, os.WriteFile(filepath.Join(dir, name+".png"), b, 0o644))
	b, err = f.SVG()
	require.NoError(t, err)
	require.NoError(t, os.WriteFile(filepath.Join(dir, name+".svg"), b, 0o644))
}
