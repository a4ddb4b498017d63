package reports

import (
	"fmt"
	"math"
	"strings"

	"example.org/standclear/exposure"
	"github.com/xuri/excelize/v2"
)

// What the coordinates are, wherever they are printed.
const (
	whatX = "x in the site's frame: east, or along the site's own grid"
	whatY = "y in the site's frame: north, or along the site's own grid"
	whatZ = "height above the site's datum"
)

const degree = math.Pi / 180

// site writes what the site table says, its surfaces and its operators.
func (r *report) site() {
	a := r.a
	r.write(page{
		name: sheetSite, title: "Site", intro: "As stated in the tables site, surfaces and operators.",
		widths: []float64{27, 16, 9, 9, 9, 9, 16, 38}, landscape: true,
	}, func(s *sheet) {
		if a.Site == nil {
			return
		}
		about := a.Site.About
		item := func(name, value string) {
			if value == "" {
				value = "not stated"
			}
			s.put([]any{r.plain(name, true), r.plain(value, false)}, textHeight(value, 106, bodyLine))
			s.keepMerged(2, len(s.page.widths))
		}
		item("name", about.Name)
		item("reference", about.Reference)
		if about.HasPosition {
			item("position of x = y = 0, WGS 84", fmt.Sprintf("latitude %.6f deg, longitude %.6f deg", about.LatitudeDeg, about.LongitudeDeg))
		} else {
			item("position", "not stated: no map files in latitude and longitude")
		}
		item("height z = 0", about.Datum)
		item("true bearing of the y axis", fmt.Sprintf("%.2f deg", about.GridBearingRad/degree))
		azimuths := about.AzimuthReference
		if azimuths == "magnetic" {
			azimuths += fmt.Sprintf(", declination %.2f deg", about.DeclinationRad/degree)
		}
		item("azimuths as typed refer to", azimuths)
		item("prepared for", about.PreparedFor)
		item("prepared by", about.PreparedBy)
		item("assessor named in the site table", joined(about.Assessor, about.Licence))
		item("survey date", about.SurveyDate)
		item("report date", about.ReportDate)
		item("decision rule for readings", string(about.DecisionRule))
		item("ground reflection", a.Ground)
		if about.Note != "" {
			item("note", about.Note)
		}

		s.section("Surfaces: where people walk")
		s.table([]column{
			{head: "surface"}, {head: "class that may be there"},
			{head: "z", unit: "m", digits: cents, what: whatZ},
			{head: "from", unit: "m", digits: cents, what: "height above the surface at which the body begins"},
			{head: "to", unit: "m", digits: cents, what: "height above the surface at which the body ends"},
			{head: "ground factor", unit: "1", digits: cents, what: "reflecting field factor of the surface itself; blank: the site's ground", method: "OET65-5"},
			{head: "row"}, {head: "averaging over the body; note"},
		})
		for _, f := range a.Site.Surfaces {
			var factor any
			if f.GroundFactor > 0 {
				factor = f.GroundFactor
			}
			s.line(f.ID, f.Class, f.Z, f.From, f.To, factor, rowName(f.Row), joined(averagingWords(f.Averaging), f.Note))
		}

		if len(a.Site.Operators) > 0 {
			s.section("Operators: whom to call before a transmitter is switched off")
			s.columns = nil
			heads := []any{}
			for _, h := range []string{"operator", "row", "contact"} {
				heads = append(heads, excelize.Cell{StyleID: r.style(look{role: head}), Value: h})
			}
			blank := excelize.Cell{StyleID: r.style(look{role: head})}
			heads = append(heads, blank, blank, blank, excelize.Cell{StyleID: r.style(look{role: head}), Value: "notice"}, blank)
			s.put(heads, 16)
			for _, o := range a.Site.Operators {
				s.line(o.Name, rowName(o.Row), o.Contact, nil, nil, nil, o.Notice, nil)
				s.keepMerged(3, 6)
				s.keepMerged(7, 8)
			}
		}
	})
}

func averagingWords(v exposure.Averaging) string {
	if v == exposure.AveragePeak {
		return "the largest over the body"
	}
	return "as the limit row says"
}

// joined joins what is not blank.
func joined(parts ...string) string {
	kept := parts[:0:0]
	for _, p := range parts {
		if p != "" {
			kept = append(kept, p)
		}
	}
	return strings.Join(kept, "; ")
}

var antennaColumns = []column{
	{head: "antenna", width: 13}, {head: "row", width: 14}, {head: "operator", width: 15}, {head: "service", width: 11},
	{head: "housing", width: 10}, {head: "state", width: 8},
	{head: "x", unit: "m", width: 8, digits: cents, what: whatX},
	{head: "y", unit: "m", width: 8, digits: cents, what: whatY},
	{head: "z", unit: "m", width: 8, digits: cents, what: whatZ + ", of the centre of radiation"},
	{head: "azimuth from y axis", unit: "deg", width: 9, digits: tenths, what: "direction of the main beam in plan, clockwise from the site's y axis"},
	{head: "tilt", unit: "deg", width: 7, digits: tenths, what: "mechanical tilt, down is positive"},
	{head: "electrical tilt", unit: "deg", width: 9, digits: tenths, what: "electrical tilt, down is positive"},
	{head: "length or diameter", unit: "m", width: 9, digits: cents, what: "largest dimension stated: the array's or wire's length, or the dish's diameter"},
	{head: "pattern", width: 17}, {head: "polarization", width: 11},
	{head: "data from", width: 17}, {head: "data date", width: 11},
}

// antennas writes the inventory, a line for each row.
func (r *report) antennas() {
	var sources []exposure.Source
	if r.a.Site != nil {
		sources = r.a.Site.Sources
	}
	r.write(page{
		name: sheetAntennas, title: "Antennas", landscape: true,
		intro:  "The inventory: one line for each antenna input and frequency. The row points to the input table as typed.",
		widths: widthsOf(antennaColumns), headRow: firstRow, filterTo: firstRow + len(sources),
		before: func(_ *excelize.File, sheet string) error {
			for i, s := range sources {
				if err := r.linkTo(sheet, cellName(2, firstRow+1+i), s.Row); err != nil {
					return err
				}
			}
			return nil
		},
	}, func(s *sheet) {
		s.table(antennaColumns)
		for _, x := range sources {
			var size any
			if d := max(x.LengthM, x.DiameterM); d > 0 {
				size = d
			}
			azimuth := math.Mod(x.Pose.AzimuthRad/degree+360, 360)
			s.line(x.ID, rowName(x.Row), joined(x.Operator, x.OperatorReference), x.Service, x.Housing, string(x.State),
				x.Position.X, x.Position.Y, x.Position.Z, azimuth, x.Pose.TiltRad/degree, x.ElectricalTiltRad/degree, size,
				x.PatternName, string(x.Polarization), x.DataFrom, x.DataDate)
		}
	})
}

// Columns of the power sheet that formulas point at, counted from one.
const (
	powerGain = 9
)

var powerColumns = []column{
	{head: "antenna", width: 13},
	{head: "frequency", unit: "MHz", width: 10, digits: shortest, what: "carrier frequency"},
	{head: "power of one carrier", unit: "W", width: 9, digits: figures, what: "mean power of one carrier over its modulation while transmitting, at the transmitter; worked back from EIRP or ERP where that was given"},
	{head: "loss", unit: "dB", width: 7, digits: cents, what: "loss between transmitter and antenna"},
	{head: "carriers", unit: "1", width: 8, digits: whole, what: "number of carriers"},
	{head: "duty", unit: "1", width: 7, digits: millis, what: "share of the time on air"},
	{head: "power reduction factor", unit: "1", width: 9, digits: millis, what: "actual-maximum share of the configured power"},
	{head: "peak factor", unit: "dB", width: 7, digits: cents, what: "peak over mean while transmitting"},
	{head: "gain", unit: "dBi", width: 8, digits: cents, what: "peak gain"},
	{head: "on air", unit: "W", width: 9, digits: figures, what: "power at the antenna's input while transmitting: power of one carrier, less the loss, times carriers"},
	{head: "mean", unit: "W", width: 9, digits: figures, what: "power that counts against thermal mean levels: on air times duty times power reduction factor"},
	{head: "mean EIRP", unit: "W", width: 10, digits: figures, what: "mean power times gain", method: "EIRP-1"},
	{head: "reactive region", unit: "m", width: 9, digits: millis, what: "extent of the reactive region, from the nearest point of the radiating body", method: "REGION-1"},
	{head: "far field from", unit: "m", width: 9, digits: cents, what: "where the far field begins, from the nearest point of the radiating body", method: "REGION-2"},
	{head: "method", width: 12}, {head: "why", width: 58},
}

// powers writes the chain from transmitter to EIRP with live formulas, the
// regions, and which method was chosen and why.
func (r *report) powers() {
	byID := map[string]*exposure.Source{}
	if r.a.Site != nil {
		for i := range r.a.Site.Sources {
			byID[r.a.Site.Sources[i].ID] = &r.a.Site.Sources[i]
		}
	}
	r.write(page{
		name: sheetPower, title: "Power, regions and methods", landscape: true,
		intro:  "The chain from the transmitter to the radiated power, and the method by which each row's field was computed.",
		widths: widthsOf(powerColumns), headRow: firstRow, filterTo: firstRow + len(r.a.Sources),
	}, func(s *sheet) {
		s.table(powerColumns)
		for _, x := range r.a.Sources {
			n := s.row
			source := x.Source
			if source == nil {
				source = byID[x.Antenna]
			}
			if source == nil || x.PowerUnknown {
				s.line(x.Antenna, x.FrequencyHz/1e6, "unknown", nil, nil, nil, nil, nil, x.GainDBi, "unknown", "unknown", "unknown",
					x.ReactiveM, x.FarFieldM, x.Method, x.Why)
				continue
			}
			p := source.Power
			loss := lossDB(p.Loss)
			onAir := p.TransmitterW * math.Pow(10, -loss/10) * p.Carriers
			gain := math.Pow(10, x.GainDBi/10)
			s.line(x.Antenna, x.FrequencyHz/1e6, p.TransmitterW, loss, p.Carriers, p.Duty, p.ReductionFactor, 10*math.Log10(p.PeakFactor), x.GainDBi,
				traced(x.OnAirW, onAir, "C%d*10^(-D%d/10)*E%d", n, n, n),
				traced(x.MeanW, x.OnAirW*p.Duty*p.ReductionFactor, "J%d*F%d*G%d", n, n, n),
				traced(x.EIRPW, x.MeanW*gain, "K%d*10^(I%d/10)", n, n),
				x.ReactiveM, x.FarFieldM, x.Method, x.Why)
		}
	})
}

// lossDB turns a share into decibels of loss; no loss is 0, not -0.
func lossDB(share float64) float64 {
	if share == 1 {
		return 0
	}
	return -10 * math.Log10(share)
}
