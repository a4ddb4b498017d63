package exposure

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/require"

	"example.org/standclear/antenna"
	"example.org/standclear/limits"
)

var benchSink float64

// benchPoint runs an emitter over points along a line in front of it, as the
// compiled loop that the far field is measured against does.
func benchPoint(b *testing.B, e emitter) {
	b.ReportAllocs()
	for i := 0; i < b.N; i++ {
		benchSink += e.at(Point{X: 0.01*float64(i%20000) - 100, Y: 30, Z: 1.5}).E
	}
}

func benchOver(b *testing.B, e emitter, half float64) {
	b.ReportAllocs()
	for i := 0; i < b.N; i++ {
		benchSink += e.over(box{c: Point{X: 0.01*float64(i%2000) - 10, Y: 5, Z: 18}, h: Point{X: half, Y: half, Z: half}}).Hi.E
	}
}

func benchPattern(b *testing.B) antenna.Pattern {
	p, err := antenna.TwoBeamwidth(65*deg, 7*deg, 30, 0)
	require.NoError(b, err)
	return p
}

func BenchmarkFarFieldPoint(b *testing.B) {
	benchPoint(b, newFarField(upright(0.3), benchPattern(b), 50))
}

func BenchmarkCylindricalPoint(b *testing.B) {
	benchPoint(b, newCylindrical(upright(0.3), benchPattern(b), 50, 2, 0))
}

func BenchmarkArrayPoint(b *testing.B) {
	benchPoint(b, sectorPanel(b, upright(0.3), antenna.Slant, 0))
}

func BenchmarkPanelPoint(b *testing.B) {
	benchPoint(b, made(b, panelRow(b, 0), Ground{}).em)
}

func BenchmarkAperturePoint(b *testing.B) {
	benchPoint(b, testDish(b, upright(0.03), 1.2, ApertureGain(0.6, 1.2, 0.03), 0.6, 0.03, 0))
}

func BenchmarkWirePoint(b *testing.B) { benchPoint(b, dipole(b, 0.5)) }

func BenchmarkShortDipolePoint(b *testing.B) {
	p := upright(1)
	benchPoint(b, newElementary(p, rod{p.pos, p.axes.Up}, 2*math.Pi, 1.5, false))
}

func BenchmarkFarFieldBox(b *testing.B) {
	benchOver(b, newFarField(upright(0.3), benchPattern(b), 50), 0.025)
}

func BenchmarkPanelBox(b *testing.B) {
	benchOver(b, made(b, panelRow(b, 0), Ground{}).em, 0.025)
}

// BenchmarkPanelZone is the keep-out line of one panel at 0.05 m on a roof, one
// worker.
func BenchmarkPanelZone(b *testing.B) {
	s := panelRow(b, 4*deg)
	s.Polarization = antenna.Slant
	s.Position, s.Power.TransmitterW = Point{X: 20, Y: 5, Z: 2.5}, 80
	table, faults, _ := limits.New([]limits.Row{level(limits.S, 5)}, limits.About{}, nil)
	require.Empty(b, faults)
	m, err := New(&Site{Sources: []Source{s}, Limits: table, Surfaces: []Surface{{
		ID: "roof", Outline: []Ring{{{0, 0}, {40, 0}, {40, 40}, {0, 40}, {0, 0}}}, To: 2, Class: "anyone",
	}}}, Options{Workers: 1})
	require.NoError(b, err)
	b.ResetTimer()
	for i := 0; i < b.N; i++ {
		z, err := m.Zones(context.Background(), ZoneQuery{ResolutionM: 0.05})
		require.NoError(b, err)
		b.ReportMetric(float64(z[0].Cells), "cells")
		b.ReportMetric(z[0].OuterAreaM2, "outer_m2")
		b.ReportMetric(z[0].OuterAreaM2-z[0].InnerAreaM2, "band_m2")
	}
}
