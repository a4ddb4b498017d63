package figure

import (
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/standclear/exposure"
)

func TestPlanOfTheSample(t *testing.T) {
	f, err := Plan(samplePlan())
	require.NoError(t, err)
	show(t, "plan", f)
	d := samplePlan()
	d.Grid = nil
	f, err = Plan(d)
	require.NoError(t, err)
	show(t, "plan-nogrid", f)
}

func TestSectionOfTheSample(t *testing.T) {
	sec := exposure.Section{X1M: 0, Y1M: 18, X2M: 30, Y2M: 18, FromZM: 18, ToZM: 30}
	zones := []exposure.Zone{
		{Section: &sec, Class: testClasses[0], Share: 1, ResolutionM: 0.05, Covered: true, Verdict: exposure.Above,
			Outer: exposure.MultiPolygon{{ellipse(8, 23.6, 6, 2.4, 400, false)}}, Inner: exposure.MultiPolygon{{ellipse(8, 23.6, 5.8, 2.2, 400, false)}}},
		{Section: &sec, Class: testClasses[1], Share: 1, ResolutionM: 0.05, Covered: true, Verdict: exposure.Above,
			Outer: exposure.MultiPolygon{{ellipse(7.4, 23.8, 3, 1.6, 400, false)}}, Inner: exposure.MultiPolygon{{ellipse(7.4, 23.8, 2.9, 1.5, 400, false)}}},
	}
	f, err := Section(SectionData{Site: sampleSite(), Section: sec, Classes: testClasses, Zones: zones,
		Grid: sampleGrid(0, 18, 30, 30, 0.25, [2]float64{7, 24})})
	require.NoError(t, err)
	show(t, "section", f)
}

func TestProfileOfTheSample(t *testing.T) {
	var lines []exposure.Profile
	for k, c := range testClasses {
		l := exposure.Profile{Antenna: "S1-800", Class: c, AzimuthDeg: 20, ElevationDeg: -4}
		for r := 0.1; r < 120; r *= 1.03 {
			l.DistanceM = append(l.DistanceM, r)
			l.Ratio = append(l.Ratio, exposure.Number(40/(1+4*float64(k))/(r*r+0.4*r)))
			m := "larger of array and cylindrical"
			if r > 24 {
				m = "far field"
			}
			l.Method = append(l.Method, m)
		}
		lines = append(lines, l)
	}
	f, err := Profile(ProfileData{SiteName: "Harbour mill (invented)", Lines: lines, Classes: testClasses,
		Source: &exposure.SourceInfo{FrequencyHz: 900e6, EIRPW: 1234, ReactiveM: 0.053, FarFieldM: 24},
		Marks: []exposure.Distance{{Antenna: "S1-800", Kind: "ray", AzimuthDeg: 20, ElevationDeg: -4, DistanceM: 6.13, Class: testClasses[0]},
			{Antenna: "S1-800", Kind: "ray", AzimuthDeg: 20, ElevationDeg: -4, DistanceM: 2.64, Class: testClasses[1]}}})
	require.NoError(t, err)
	show(t, "profile", f)
}
