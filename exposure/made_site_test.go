package exposure

import (
	"fmt"
	"math"
	"math/rand/v2"

	"github.com/stretchr/testify/require"

	"example.org/standclear/antenna"
	"example.org/standclear/limits"
)

// madeSite is a small random site with one question about it. Everything follows
// from the seed, so that a failure can be met again.
type madeSite struct {
	seed  uint64
	site  *Site
	query ZoneQuery
	r     *rand.Rand // for what a test draws besides
}

func (s *madeSite) String() string { return fmt.Sprintf("made site %d", s.seed) }

func (s *madeSite) model(t require.TestingT, workers int) *Model {
	m, err := New(s.site, Options{Workers: workers})
	require.NoError(t, err, "%v", s)
	return m
}

func (s *madeSite) between(lo, hi float64) float64 { return lo + (hi-lo)*s.r.Float64() }
func (s *madeSite) chance(p float64) bool          { return s.r.Float64() < p }

// madeOutlines are the shapes of a made site's surface, in m before scaling:
// grid-parallel, slanting through corners of the lattice, concave, nearly grid-parallel, with holes.
var madeOutlines = [][]Ring{
	{{{0, 0}, {10, 0}, {10, 10}, {0, 10}, {0, 0}}},
	{{{0, 0}, {10, 0}, {10, 4}, {5, 4}, {5, 10}, {0, 10}, {0, 0}}, {{1, 1}, {1, 2.5}, {3, 2.5}, {3, 1}, {1, 1}}},
	{{{5, 0}, {10, 5}, {5, 10}, {0, 5}, {5, 0}}, {{5, 4}, {4, 5}, {5, 6}, {6, 5}, {5, 4}}},
	{{{0.3, 0.1}, {9.7, 1.9}, {7.2, 5.3}, {9.1, 9.9}, {4.4, 6.1}, {0.9, 8.8}, {2.1, 4.7}, {0.3, 0.1}}},
	{{{0, 0}, {10, 1e-10}, {10 + 1e-12, 10}, {0.5, 10 - 1e-9}, {0, 0}}},
	{{{0, 0}, {10, 0.37}, {9.2, 8.1}, {1.3, 9.4}, {0, 0}}, {{2, 2}, {4, 4.1}, {4.6, 2.2}, {2, 2}}, {{6, 3}, {5.5, 6.5}, {8, 5}, {6, 3}}},
}

// nearSeeds is where the seeds begin whose sites use the near-field methods too.
const nearSeeds = 1000

// newMadeSite draws a site of one to eight antennas in, beside and above the
// body volume of one surface.
func newMadeSite(seed uint64) *madeSite {
	s := &madeSite{seed: seed, site: &Site{}, r: rand.New(rand.NewPCG(seed, 7))}
	scale := s.between(0.8, 2.2)
	east, north := s.between(-40, 40), s.between(-40, 40)
	if s.chance(0.2) {
		east, north = east+9500, north-9500 // the far end of what boxSlack covers
	}
	f := Surface{ID: "roof", Z: s.between(-3, 12), Class: "anyone", From: 1.5, To: 1.5, Averaging: AverageAsLimit}
	for _, ring := range madeOutlines[s.r.IntN(len(madeOutlines))] {
		var moved Ring
		for _, v := range ring {
			moved = append(moved, [2]float64{east + scale*v[0], north + scale*v[1]})
		}
		f.Outline = append(f.Outline, moved)
	}
	if s.chance(0.6) {
		f.From, f.To = 0, 2
	}
	if s.chance(0.3) {
		f.Averaging = AveragePeak
	}
	if s.chance(0.3) {
		f.GroundFactor = s.between(1, 2)
	}
	if s.chance(0.3) {
		s.site.Ground = Ground{Method: GroundFactor, Factor: s.between(1, 2)}
	}
	if seed >= nearSeeds && s.chance(0.4) {
		s.site.Ground = Ground{Method: GroundFresnel, Permittivity: s.between(3, 30), Conductivity: s.between(0, 0.1), Z: f.Z - s.between(2, 6)}
		f.GroundFactor = 0
	}
	s.site.Limits = s.table()
	n := 1 + s.r.IntN(8)
	for i := 0; i < n; i++ {
		at := Point{X: east + scale*s.between(-1, 11), Y: north + scale*s.between(-1, 11), Z: f.Z + s.between(-0.5, 5)}
		s.site.Sources = append(s.site.Sources, s.source(i, at))
	}
	s.site.Surfaces = []Surface{f}
	s.query = ZoneQuery{ResolutionM: 0.2, Share: 1}
	if s.chance(0.25) {
		s.query.Share = s.between(0.3, 3)
	}
	return s
}

// table draws a limit table: one level of S; the body mean of it; E and H that
// add, with peak and stimulation levels beside; a body mean below 2 GHz and the
// largest above, with local levels beside.
func (s *madeSite) table() *limits.Table {
	mean := func(r *limits.Row) { r.OverBody = limits.BodyMean }
	peak := func(r *limits.Row) { r.Kind = limits.Peak }
	add := func(r *limits.Row) { r.Combine = limits.CombineAdd }
	local := func(r *limits.Row) { r.Region = limits.Local }
	stimulation := func(r *limits.Row) { r.Effect = limits.Stimulation }
	below := func(r *limits.Row) { r.ToHz = 2e9 }
	above := func(r *limits.Row) { r.FromHz = 2e9 }
	var rows []limits.Row
	switch s.r.IntN(4) {
	case 0:
		rows = []limits.Row{level(limits.S, 8)}
	case 1:
		rows = []limits.Row{level(limits.S, 8, mean)}
	case 2:
		rows = []limits.Row{
			level(limits.E, 60, mean, add), level(limits.H, 0.16, mean, add),
			level(limits.S, 250, peak), level(limits.E, 110, stimulation),
		}
	default:
		rows = []limits.Row{
			level(limits.S, 6, mean, below), level(limits.S, 10, above),
			level(limits.S, 20, local), level(limits.E, 61, below),
		}
	}
	table, faults, _ := limits.New(rows, limits.About{}, nil)
	if len(faults) > 0 {
		panic(fmt.Sprint(faults))
	}
	return table
}

// source draws an antenna whose boundary reaches a metre to some metres.
func (s *madeSite) source(i int, at Point) Source {
	rad := math.Pi / 180
	src := Source{
		ID: fmt.Sprintf("A%d", i+1), Transmitter: fmt.Sprintf("T%d", i+1), State: On, Position: at, Polarization: antenna.Vertical, Method: MethodFarField,
		Pose:        antenna.Pose{AzimuthRad: s.between(0, 2*math.Pi), TiltRad: s.between(-10, 30) * rad},
		FrequencyHz: []float64{450e6, 900e6, 1800e6, 3500e6, 26e9}[s.r.IntN(5)],
	}
	if k := len(s.site.Sources); k > 0 && s.chance(0.4) {
		first := &s.site.Sources[s.r.IntN(k)]
		first.Signal = "signal of " + first.ID
		src.Signal, src.FrequencyHz = first.Signal, first.FrequencyHz
	}
	if s.chance(0.3) {
		src.Pose.RollRad = s.between(-180, 180) * rad
	}
	src.Pattern, src.Gain, src.PatternKind = s.pattern(src.FrequencyHz)
	if s.chance(0.15) {
		src.SweepRad, src.HorizontalBeamwidthRad, src.WidthM = s.between(60, 360)*rad, s.between(5, 60)*rad, s.between(0.1, 1)
	}
	if s.chance(0.3) {
		src.LengthM, src.WidthM = s.between(0.2, 2), s.between(0.05, 0.4)
	}
	if s.seed >= nearSeeds && src.SweepRad == 0 {
		s.nearField(&src)
	}
	reach := s.between(0.5, 7)
	src.Power = Power{TransmitterW: 4 * math.Pi * reach * reach * 8 / float64(src.Gain), Loss: s.between(0.3, 1), Carriers: 1, Duty: s.between(0.3, 1), ReductionFactor: 1, PeakFactor: s.between(1, 8)}
	if k := s.r.IntN(10); k == 0 {
		src.Power.Duty = 0 // on air, but nothing of it counts against mean levels
	}
	return src
}

// nearField gives a source what its near-field methods need, and one of them. The
// bodies are kept short, so that arrays have few elements.
func (s *madeSite) nearField(src *Source) {
	lambda := Wavelength(src.FrequencyHz)
	src.Method = MethodAuto
	src.LengthM, src.WidthM = 0, 0
	switch src.PatternKind {
	case PatternDipole:
		if s.chance(0.5) {
			src.Polarization = antenna.Horizontal
		}
	case PatternShort:
		src.PatternKind = []PatternKind{PatternShort, PatternLoop}[s.r.IntN(2)]
	case PatternDish:
		src.DiameterM = 14 * lambda
	case PatternOmni, PatternSector, PatternBeamwidth, PatternFile:
		src.LengthM, src.FrontToBackDB = s.between(1, 6)*lambda, 25
		src.Polarization = []antenna.Polarization{antenna.Vertical, antenna.Horizontal, antenna.Slant}[s.r.IntN(3)]
		src.Method = []Method{MethodAuto, MethodAuto, MethodCylindrical, MethodArray}[s.r.IntN(4)]
	}
}

// pattern draws one of the built-in patterns.
func (s *madeSite) pattern(hz float64) (antenna.Pattern, antenna.Gain, PatternKind) {
	rad := math.Pi / 180
	must := func(p antenna.Pattern, err error) antenna.Pattern {
		if err != nil {
			panic(err)
		}
		return p
	}
	tilt := s.between(0, 10) * rad
	switch s.r.IntN(10) {
	case 0:
		p, g := antenna.Isotropic()
		return p, g, PatternIsotropic
	case 1:
		p, g := antenna.HalfWaveDipoleAlong(antenna.Axis(s.r.IntN(3)))
		return p, g, PatternDipole
	case 2:
		p, g := antenna.ShortDipole()
		return p, g, PatternShort
	case 3:
		return must(antenna.Omni(antenna.GainFromDBi(9), 0, tilt)), antenna.GainFromDBi(9), PatternOmni
	case 4:
		return must(antenna.Sector(antenna.GainFromDBi(16), 65*rad, 0, tilt)), antenna.GainFromDBi(16), PatternSector
	case 5:
		lambda := Wavelength(hz)
		return must(antenna.Dish(antenna.GainFromDBi(30), 14*lambda, lambda)), antenna.GainFromDBi(30), PatternDish
	case 6:
		return must(antenna.TwoCuts(s.cut(), s.cut())), antenna.GainFromDBi(12), PatternFile
	case 7:
		sphere := make([][]float64, 19)
		for i := range sphere {
			for j := 0; j < 24; j++ {
				sphere[i] = append(sphere[i], s.between(0, 25))
			}
		}
		return must(antenna.FullSphere(-math.Pi, sphere)), antenna.GainFromDBi(8), PatternFile
	}
	return must(antenna.TwoBeamwidth(s.between(30, 90)*rad, s.between(6, 40)*rad, s.between(15, 35), tilt)), antenna.GainFromDBi(s.between(8, 18)), PatternBeamwidth
}

// cut draws a closed cut of 10 deg steps that wanders between 0 and 30 dB.
func (s *madeSite) cut() *antenna.Cut {
	var samples []antenna.Sample
	loss := 0.0
	for k := -18; k < 18; k++ {
		samples = append(samples, antenna.Sample{AngleRad: float64(k) * math.Pi / 18, LossDB: loss})
		loss = math.Min(30, math.Abs(loss+s.between(-6, 6)))
	}
	c, err := antenna.NewCut(samples, true)
	if err != nil {
		panic(err)
	}
	return c
}
