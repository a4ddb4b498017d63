package exposure

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"example.org/standclear/antenna"
	"example.org/standclear/limits"
)

// madeRoof scatters sector antennas over a square roof, all by the far field of
// two beamwidths, so that any program can redo the sum. The numbers are drawn
// from round figures of the trade; the seed fixes them.
func madeRoof(antennas int, side, from, to float64) *Site {
	r := rand.New(rand.NewPCG(1, uint64(antennas)))
	between := func(lo, hi float64) float64 { return lo + (hi-lo)*r.Float64() }
	pick := func(of ...float64) float64 { return of[r.IntN(len(of))] }
	const deg = math.Pi / 180
	site := &Site{}
	for i := 0; i < antennas; i++ {
		f := pick(800, 1800, 2100, 2600, 3500) * 1e6
		at := Point{X: between(0, side), Y: between(0, side), Z: between(1.8, 3.2)}
		pose := antenna.Pose{AzimuthRad: between(0, 360) * deg, TiltRad: between(0, 6) * deg}
		pattern, err := antenna.TwoBeamwidth(pick(60, 65, 70)*deg, pick(6, 7, 9)*deg, 30, 0)
		if err != nil {
			panic(err)
		}
		id := fmt.Sprintf("A%03d", i+1)
		site.Sources = append(site.Sources, Source{
			ID: id, Transmitter: id, State: On, Position: at, Pose: pose, Pattern: pattern, PatternKind: PatternBeamwidth,
			Gain: antenna.GainFromDBi(17.5), FrequencyHz: f, Method: MethodFarField,
			Power: Power{TransmitterW: pick(80, 160, 320), Loss: math.Pow(10, -0.05), Carriers: 1, Duty: 1, ReductionFactor: 1, PeakFactor: 1},
		})
	}
	site.Surfaces = []Surface{{ID: "roof", Class: "public", From: from, To: to, Outline: []Ring{{{0, 0}, {side, 0}, {side, side}, {0, side}, {0, 0}}}}}
	table, faults, _ := limits.New([]limits.Row{
		{Class: "public", Quantity: limits.S, FromHz: 400e6, ToHz: 2000e6, Coefficient: 0.005, Exponent: 1, AverageS: 1800, Source: "f/200 shape, for measuring only"},
		{Class: "public", Quantity: limits.S, FromHz: 2000e6, ToHz: 300e9, Coefficient: 10, AverageS: 1800, Source: "flat 10 W/m2, for measuring only"},
	}, limits.About{}, nil)
	if len(faults) > 0 {
		panic(fmt.Sprint(faults))
	}
	site.Limits = table
	return site
}

// BenchmarkRoofBoundary measures the boundary of one class on a large roof:
// polygons, areas and the largest ratio.
func BenchmarkRoofBoundary(b *testing.B) {
	for _, c := range []struct {
		name       string
		antennas   int
		from, to   float64
		resolution float64
		workers    int
	}{
		{"60antennas/flat/0.05m/1worker", 60, 1.5, 1.5, 0.05, 1},
		{"60antennas/flat/0.05m/2workers", 60, 1.5, 1.5, 0.05, 2},
		{"60antennas/flat/0.025m/1worker", 60, 1.5, 1.5, 0.025, 1},
		{"60antennas/body/0.05m/1worker", 60, 0, 2, 0.05, 1},
		{"60antennas/body/0.05m/2workers", 60, 0, 2, 0.05, 2},
		{"60antennas/body/0.025m/1worker", 60, 0, 2, 0.025, 1},
		{"240antennas/flat/0.05m/1worker", 240, 1.5, 1.5, 0.05, 1},
		{"240antennas/body/0.05m/1worker", 240, 0, 2, 0.05, 1},
	} {
		b.Run(c.name, func(b *testing.B) {
			m, err := New(madeRoof(c.antennas, 200, c.from, c.to), Options{Workers: c.workers})
			if err != nil {
				b.Fatal(err)
			}
			b.ReportAllocs()
			var zones []Zone
			for b.Loop() {
				if zones, err = m.Zones(context.Background(), ZoneQuery{ResolutionM: c.resolution}); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(zones[0].Outer.length(), "line_m")
			b.ReportMetric(float64(zones[0].Cells), "cells")
		})
	}
}
