package sitefile

import (
	"math"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
)

// antennas binds the antennas table.
func (l *loader) antennas() []exposure.Source {
	records := l.rows("antennas")
	unique := l.unique("id")
	fit := l.fittings(records)
	out := make([]exposure.Source, 0, len(records))
	for i := range records {
		r := &records[i]
		unique(r)
		s := exposure.Source{
			ID: r.text("id"), Operator: fit[i].operator, OperatorReference: fit[i].reference, Service: r.text("service"),
			Housing: r.text("housing"), Transmitter: r.text("transmitter"), Signal: r.text("signal"),
			State: exposure.State(r.text("state")), DataFrom: r.text("data from"), DataDate: r.text("data date"),
			Position: fit[i].at, ElectricalTiltRad: r.value("electrical tilt"), Polarization: antenna.Polarization(r.text("polarization")),
			HorizontalBeamwidthRad: r.value("horizontal beamwidth"), VerticalBeamwidthRad: r.value("vertical beamwidth"), FrontToBackDB: r.value("front to back"),
			LengthM: r.value("length"), WidthM: r.value("width"), DiameterM: r.value("diameter"), Efficiency: r.value("efficiency"),
			Elements: int(r.value("elements")), ElementsAcross: int(r.value("elements across")), SpacingM: r.value("spacing"), SpacingAcrossM: r.value("spacing across"),
			FrequencyHz: r.value("frequency"), SweepRad: r.value("sweep"), Method: exposure.Method(r.text("method")),
			Uncertainty: exposure.Uncertainty{PowerDB: r.value("power uncertainty"), GainDB: r.value("gain uncertainty"),
				TiltRad: r.value("tilt uncertainty"), AzimuthRad: r.value("azimuth uncertainty"), PositionM: r.value("position uncertainty")},
			Row: r.in,
		}
		if s.Transmitter == "" {
			s.Transmitter = s.Signal
		}
		if s.Transmitter == "" {
			s.Transmitter = s.ID
		}
		l.pattern(r, &s)
		l.pose(r, fit[i], &s)
		l.power(r, &s)
		out = append(out, s)
	}
	return out
}

// pose sets the orientation. The azimuth of the table counts from the site's
// azimuth reference, that of the pose from the site's y axis.
func (l *loader) pose(r *record, f fitting, s *exposure.Source) {
	s.Pose.TiltRad, s.Pose.RollRad = f.tilt, f.roll
	switch {
	case f.hasAzimuth:
		a := f.azimuth
		switch l.about.AzimuthReference {
		case "magnetic":
			a += l.about.DeclinationRad - l.about.GridBearingRad
		case "true":
			a -= l.about.GridBearingRad
		}
		if a < 0 || a >= 2*math.Pi {
			a = math.Mod(math.Mod(a, 2*math.Pi)+2*math.Pi, 2*math.Pi)
		}
		s.Pose.AzimuthRad = a
	case f.severalAzimuths:
		l.fault(r, "azimuth", "the cell is blank, and the rows of housing %q have several azimuths; write the one of this row", s.Housing)
	case !r.sound("azimuth") || s.Pattern == nil:
	case !isRound(s.Pattern):
		l.fault(r, "azimuth", "the cell is blank, and the pattern %q is not round; write the direction of its main beam in degrees", s.PatternName)
	case f.tilt != 0:
		l.fault(r, "azimuth", "the cell is blank, and the antenna is tilted by %.4g deg; write the direction it is tilted to", f.tilt*180/math.Pi)
	}
}

func isRound(p antenna.Pattern) bool {
	round, ok := p.(antenna.Round)
	return ok && round.IsRound()
}

// power sets the power: that of the transmitter with its loss, or what radiates
// (EIRP or ERP) brought back to it through the gain.
func (l *loader) power(r *record, s *exposure.Source) {
	s.Power = exposure.Power{
		Loss: math.Pow(10, -r.value("loss")/10), Carriers: r.value("carriers"), Duty: r.value("duty"),
		ReductionFactor: r.value("power reduction factor"), PeakFactor: math.Pow(10, r.value("peak factor")/10),
	}
	filled := ""
	for _, column := range []string{"power", "EIRP", "ERP"} {
		if !r.has(column) {
			continue
		}
		if filled != "" {
			l.fault(r, column, "%s and %s are both given; keep one", filled, column)
			return
		}
		filled = column
	}
	if filled == "" {
		l.fault(r, "power", "the cell is blank; write the power of one carrier, or its EIRP or ERP, or the word unknown")
		return
	}
	c := r.cell(filled)
	if c.state == wordCell {
		s.Power.Unknown = true
		if filled == "power" {
			return
		}
	}
	switch filled {
	case "power":
		s.Power.TransmitterW = c.v
		return
	case "ERP":
		s.Power.TransmitterW = c.v * float64(antenna.GainFromDBd(0))
	case "EIRP":
		s.Power.TransmitterW = c.v
	}
	if s.Gain > 0 {
		s.Power.TransmitterW /= float64(s.Gain)
	}
	s.Power.Loss = 1
	if r.has("loss") {
		l.fault(r, "loss", "%s is what leaves the antenna, so no loss goes with it; leave one of the two blank", filled)
	}
}
