package reports

import (
	"fmt"
	"math"
	"strings"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
	"example.org/standclear/limits"
)

// hostile is text that must come out of every file as text.
const hostile = `=HYPERLINK("http://example.invalid","x") & <b>_x0041_</b>`

// plain is a pattern for samples: what is printed, not how it radiates, matters
// here.
type plain struct{}

func (plain) Relative(phi, theta float64) float64 { return 1 }
func (plain) RelativeRange(phi, theta antenna.Interval) antenna.Interval {
	return antenna.Interval{Lo: 1, Hi: 1}
}

// sample is an invented site with an assessment made by hand: every kind of
// verdict, a housing with several rows, a row of unknown power, a source
// without limits, and text that tries to be a formula, a tag and a path.
func sample(rows, places int) *exposure.Assessment {
	classes := []string{"general public", "occupational"}
	table, _, _ := limits.New([]limits.Row{
		{Class: classes[0], Quantity: limits.E, FromHz: 400e6, ToHz: 2000e6, Coefficient: 1.375, Exponent: 0.5, FUnitHz: 1e6, AverageS: 360, Source: "invented rule 7, table 2", Line: 2},
		{Class: classes[0], Quantity: limits.S, FromHz: 2000e6, ToHz: 300e9, Coefficient: 10, FUnitHz: 1e6, AverageS: 360, Source: "invented rule 7, table 2", Line: 3},
		{Class: classes[1], Quantity: limits.E, FromHz: 400e6, ToHz: 2000e6, Coefficient: 3, Exponent: 0.5, FUnitHz: 1e6, AverageS: 360, Source: "invented rule 7, table 3", Line: 4},
		{Class: classes[1], Quantity: limits.S, FromHz: 2000e6, ToHz: 300e9, Coefficient: 50, FUnitHz: 1e6, AverageS: 360, Source: "invented rule 7, table 3", Line: 5},
	}, limits.About{Title: "Invented rule 7", Edition: "2024", IssuedBy: "nobody"}, nil)

	input := &exposure.InputTable{Name: "antennas", File: "antennas.csv", Columns: []exposure.InputColumn{
		{Header: "id", Name: "id"}, {Header: "operator", Name: "operator"}, {Header: "x [m]", Name: "x", Unit: "m"}, {Header: "y [m]", Name: "y", Unit: "m"},
		{Header: "power [W]", Name: "power", Unit: "W"}, {Header: "frequency [MHz]", Name: "frequency", Unit: "MHz"}, {Header: "roll [deg]", Name: "roll", Unit: "deg"}, {Header: "note", Name: "note"},
	}}
	site := &exposure.Site{
		About: exposure.About{
			Name: "Kiln Lane works & yard", Reference: "KL-17", Datum: "yard level by the gate", ReportDate: "2026-03-14", SurveyDate: "2026-03-02",
			PreparedFor: "Works owner", HasPosition: true, LatitudeDeg: 52.1, LongitudeDeg: 5.3, GridBearingRad: 0.1, AzimuthReference: "true", DecisionRule: exposure.RuleSimple,
			Note: hostile,
		},
		Ground: exposure.Ground{Method: exposure.GroundNone, Factor: 1},
		Limits: table,
		Surfaces: []exposure.Surface{
			{ID: "main roof", Outline: []exposure.Ring{{{0, 0}, {40, 0}, {40, 22}, {0, 22}, {0, 0}}}, Z: 9, Class: classes[1], To: 2, Averaging: exposure.AverageAsLimit},
			{ID: "../yard", Outline: []exposure.Ring{{{-20, -15}, {60, -15}, {60, 0}, {-20, 0}, {-20, -15}}}, Z: 0, Class: classes[0], To: 2, Averaging: exposure.AveragePeak, Note: "deliveries"},
		},
		Operators: []exposure.Operator{{Name: "Alderway", Contact: "control room", Notice: "two working days"}, {Name: "=1+1", Contact: "-", Notice: "-"}},
	}
	site.Inputs.Tables = []*exposure.InputTable{input, {Name: "places", File: "places.csv", Columns: []exposure.InputColumn{{Header: "id", Name: "id"}, {Header: "z [m]", Name: "z"}}}}
	site.Inputs.Files = []exposure.InputFile{{Name: "antennas.csv", SHA256: strings.Repeat("ab", 32), Bytes: 2231}, {Name: "places.csv", SHA256: strings.Repeat("0c", 32), Bytes: 310}}
	a := &exposure.Assessment{
		Program: "standclear 0.1.0", Site: site, SiteName: site.About.Name, Ground: "none", Classes: classes,
		Inputs:   site.Inputs.Files,
		Warnings: []exposure.Warning{{Place: "antennas.csv:4", Column: "length", Message: "a panel without a length: 1.3 m would fit its beamwidth, far field from 14 m"}},
		Notices:  []string{"rows N1 and N2 have equal frequencies and no signal: their powers add"},
	}
	frequencies := []float64{806e6, 942.5e6, 1842.5e6, 3550e6}
	for i := range rows {
		f := frequencies[i%len(frequencies)]
		id := fmt.Sprintf("%c%d", 'A'+i%23, i+1)
		row := &exposure.InputRow{Table: input, Row: i + 2, Cells: []string{id, "Alderway", fmt.Sprint(10 + i%12), "11.0", "20", fmt.Sprint(f / 1e6), "", ""}}
		if i == 1 {
			row.Cells[7] = hostile
		}
		input.Rows = append(input.Rows, row)
		s := exposure.Source{
			ID: id, Operator: "Alderway", Service: "LTE", Housing: fmt.Sprintf("H%d", i/2+1), Transmitter: id, State: exposure.On,
			DataFrom: map[bool]string{true: "operator sheet"}[i%3 == 0], DataDate: map[bool]string{true: "2026-01-20"}[i%3 == 0],
			Position: exposure.Point{X: 10 + float64(i%12), Y: 11, Z: 12.5}, Pose: antenna.Pose{AzimuthRad: float64(i%3) * 120 * degree, TiltRad: 2 * degree},
			Polarization: antenna.Slant, Pattern: plain{}, PatternName: "two-beamwidth", PatternKind: exposure.PatternBeamwidth, Gain: antenna.GainFromDBi(16.5),
			LengthM: 1.4, FrequencyHz: f, Method: exposure.MethodAuto, Row: row,
			Power: exposure.Power{TransmitterW: 20, Loss: math.Pow(10, -0.15), Carriers: 2, Duty: 1, ReductionFactor: 1, PeakFactor: 1, Unknown: i == 3},
		}
		site.Sources = append(site.Sources, s)
	}
	for i := range site.Sources {
		s := &site.Sources[i]
		info := exposure.SourceInfo{
			Antenna: s.ID, Method: "far field", Why: "no length is needed at these distances", FrequencyHz: s.FrequencyHz, WavelengthM: exposure.C / s.FrequencyHz,
			GainDBi: s.Gain.DBi(), OnAirW: s.Power.OnAirW(), MeanW: s.Power.ThermalW(), PeakW: s.Power.PeakW(), EIRPW: s.Power.ThermalW() * float64(s.Gain),
			PowerUnknown: s.Power.Unknown, ReactiveM: exposure.C / s.FrequencyHz / (2 * math.Pi), FarFieldM: 2 * s.LengthM * s.LengthM * s.FrequencyHz / exposure.C, Source: s,
		}
		if i%2 == 0 {
			info.Caveats = []string{"side lobes not covered"}
		}
		a.Sources = append(a.Sources, info)
	}
	for i := range places {
		p := exposure.Place{ID: fmt.Sprintf("P%d", i+1), At: exposure.Point{X: 3 + float64(i%30), Y: 3 + float64(i/30%15), Z: 9}, To: 2, Class: classes[(i+1)%2], WallLoss: 1, On: "main roof"}
		switch i {
		case 0:
			p.ID = "roof door"
		case 1:
			p.ID = "=cmd|' /C calc'!A0"
		case 2:
			p.WallLoss, p.ID = math.Pow(10, -0.6), "plant room"
		}
		site.Places = append(site.Places, p)
	}
	for i := range site.Places {
		a.Points = append(a.Points, samplePoint(a, &site.Places[i]))
	}
	if len(a.Points) > 3 {
		a.Points[3].Ratios[0].Covered = false
	}
	sampleBoundaries(a)
	return a
}

// samplePoint fills a place with far fields that hold together, so that the
// workbook's formulas have something to agree with.
func samplePoint(a *exposure.Assessment, p *exposure.Place) exposure.PointResult {
	out := exposure.PointResult{ID: p.ID, XM: p.At.X, YM: p.At.Y, ZM: p.At.Z, HeightM: 2, Class: p.Class, Place: p}
	sums := make([]float64, len(a.Classes))
	var e2, s2 float64
	unknown := ""
	for i := range a.Sources {
		x := &a.Sources[i]
		d := p.At.Sub(x.Source.Position)
		d.Z += out.HeightM
		r := d.Norm()
		loss := math.Mod(3.7*float64(i), 28)
		e := math.Sqrt(exposure.Z0*x.MeanW*math.Pow(10, (x.GainDBi-loss)/10)*p.WallLoss/(4*math.Pi)) / r
		c := exposure.Contribution{
			Antenna: x.Antenna, FrequencyHz: x.FrequencyHz, Method: "far field", DistanceM: r, AzimuthDeg: math.Mod(17*float64(i), 180), ElevationDeg: -12,
			PatternLossDB: loss, PowerW: x.MeanW, GroundFactor: 1,
		}
		if x.PowerUnknown {
			unknown = x.Antenna
			c.Unknown, c.PowerW = true, 0
		} else {
			c.EVPerM, c.HAPerM, c.SWPerM2 = exposure.Number(e), exposure.Number(e/exposure.Z0), exposure.Number(e*e/exposure.Z0)
			e2 += e * e
			s2 += e * e / exposure.Z0
		}
		for j, class := range a.Classes {
			at := a.Site.Limits.At(class, x.FrequencyHz)[0]
			ratio := 0.0
			if at.E > 0 {
				ratio = math.Pow(float64(c.EVPerM)/at.E, 2)
			}
			if at.S > 0 {
				ratio = math.Max(ratio, float64(c.SWPerM2)/at.S)
			}
			sums[j] += ratio
			c.Ratios = append(c.Ratios, exposure.ContributionRatio{Class: class, ExposureRatio: exposure.Number(ratio), Covered: true})
		}
		out.Contributions = append(out.Contributions, c)
	}
	out.EVPerM, out.SWPerM2 = exposure.Number(math.Sqrt(e2)), exposure.Number(s2)
	out.HAPerM = out.EVPerM / exposure.Number(exposure.Z0)
	for j, class := range a.Classes {
		r := exposure.ClassRatio{Class: class, ExposureRatio: exposure.Number(sums[j]), Covered: true, Verdict: exposure.Within,
			GovernedBy: limits.Group{Effect: limits.Thermal, Region: limits.WholeBody, Kind: limits.Mean}.String()}
		switch {
		case sums[j] > 1:
			r.Verdict = exposure.Above
		case unknown != "":
			r.Verdict, r.Reason = exposure.NotAssessed, "power of "+unknown+" unknown"
		case sums[j] > 0.3:
			r.GroundFlips = []float64{1.6, 2}
		}
		out.Ratios = append(out.Ratios, r)
	}
	return out
}

func sampleBoundaries(a *exposure.Assessment) {
	circle := func(x, y, r float64, clockwise bool) exposure.Ring {
		var ring exposure.Ring
		for i := range 40 {
			t := 2 * math.Pi * float64(i) / 40
			if clockwise {
				t = -t
			}
			ring = append(ring, [2]float64{x + r*math.Cos(t), y + r*math.Sin(t)})
		}
		return append(ring, ring[0])
	}
	for i, s := range a.Site.Surfaces {
		for j, class := range a.Classes {
			z := exposure.Zone{Surface: s.ID, Class: class, Share: 1, SurfaceAreaM2: 880, ResolutionM: 0.05, MaxRatioLower: 12.3, MaxRatioUpper: exposure.Number(math.Inf(1)),
				Covered: true, Verdict: exposure.Above, Averaging: "peak", FromM: s.From, ToM: s.To, OuterAddedM2: 0.31, OuterAreaM2: 201.2, InnerAreaM2: 187.9}
			if i == 1 {
				z.Verdict, z.OuterAreaM2, z.InnerAreaM2, z.MaxRatioLower, z.MaxRatioUpper = exposure.Within, 0, 0, 0.21, 0.22
			} else {
				r := 8 - 3*float64(j)
				z.Outer = exposure.MultiPolygon{{circle(18, 11, r, false), circle(18, 11, 0.5, true)}}
				z.Inner = exposure.MultiPolygon{{circle(18, 11, r-0.1, false)}}
			}
			a.Zones = append(a.Zones, z)
		}
	}
	sampleSections(a, circle(8, 12.5, 3, false))
	extents := func(d exposure.Distance, directions ...string) {
		for k, name := range directions {
			d.Kind, d.Direction, d.DistanceM, d.BracketM, d.Verdict = "extent", name, 14.271/float64(k+1), 0.05, exposure.Above
			d.GovernedBy = "thermal, whole body, mean"
			a.Distances = append(a.Distances, d)
		}
	}
	for _, class := range a.Classes {
		extents(exposure.Distance{All: true, Class: class}, "north", "east", "south", "west", "up", "down")
		for i := 0; i < min(len(a.Sources), 8); i += 2 {
			extents(exposure.Distance{Housing: a.Sources[i].Source.Housing, Class: class, Alone: true}, "front", "back", "left", "right", "up", "down")
		}
		for i := range a.Sources {
			extents(exposure.Distance{Antenna: a.Sources[i].Antenna, Class: class, Alone: true}, "front", "back", "left", "right", "up", "down")
		}
		for i := 0; i < min(len(a.Sources), 3); i++ {
			p := exposure.Profile{Antenna: a.Sources[i].Antenna, Class: class, AzimuthDeg: 120 * float64(i), ElevationDeg: -2}
			for d := 0.5; d < 200; d *= 1.15 {
				p.DistanceM = append(p.DistanceM, d)
				p.Ratio = append(p.Ratio, exposure.Number(float64(30+10*i)/(d*d)))
				p.Method = append(p.Method, "far field")
			}
			a.Profiles = append(a.Profiles, p)
		}
	}
}

// sampleSections adds a vertical plane through two housings, and points of the
// first boundary with their calculation.
func sampleSections(a *exposure.Assessment, line exposure.Ring) {
	for i := 0; i < len(a.Sources) && i < 4; i += 2 {
		for j, class := range a.Classes {
			// Toward 53.13 degrees from the y axis, so that 5 m along are 4 m of x and 3 of y.
			s := exposure.Section{X1M: 2, Y1M: 5, X2M: 18, Y2M: 17, FromZM: 8, ToZM: 18}
			z := exposure.Zone{Section: &s, Through: a.Sources[i].Source.Housing, Class: class, Share: 1, SurfaceAreaM2: 200, ResolutionM: 0.1, MaxRatioLower: 40, MaxRatioUpper: 44,
				MaxAt: [3]float64{8.4, 9.8, 12.5}, Covered: true, Verdict: exposure.Above, Averaging: "peak", FromM: 8, ToM: 18}
			if j == 0 {
				z.Outer, z.OuterAreaM2 = exposure.MultiPolygon{{line}}, 28
			} else {
				z.Verdict, z.MaxRatioLower, z.MaxRatioUpper = exposure.Within, 0, 0.1
			}
			a.Sections = append(a.Sections, z)
		}
	}
	for i := range a.Points {
		p := a.Points[i]
		b := exposure.BoundaryPoint{Surface: a.Site.Surfaces[0].ID, Share: 1, PointResult: p}
		b.ID, b.Class, b.Place = "line "+fmt.Sprint(i+1), a.Classes[0], nil
		b.Ratios = p.Ratios[:1]
		b.Contributions = nil
		for _, c := range p.Contributions {
			c.Ratios = c.Ratios[:1]
			b.Contributions = append(b.Contributions, c)
		}
		switch i {
		case 0:
			b.ID = "largest ratio"
		case 1:
			b.Note, b.Ratios, b.Contributions = "place line 2 lies at the centre of antenna A1: no field can be stated there", nil, nil
		case 2:
			b.OnEdge, b.Unlisted, b.UnlistedRatio = true, 1, b.Contributions[0].Ratios[0].ExposureRatio
			b.Contributions = b.Contributions[1:]
		}
		a.BoundaryPoints = append(a.BoundaryPoints, b)
	}
}
