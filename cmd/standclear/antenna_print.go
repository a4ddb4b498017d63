package main

import (
	"fmt"
	"math"
	"strconv"

	"example.org/standclear/antenna"
)

// shownCut is a cut as JSON has it, angles in degrees.
type shownCut struct {
	PeakDeg           float64     `json:"peak_deg"`
	HalfPowerWidthDeg float64     `json:"half_power_width_deg"`
	TenDBWidthDeg     float64     `json:"ten_db_width_deg"`
	FrontToBackDB     float64     `json:"front_to_back_db"`
	HasBack           bool        `json:"has_back"`
	SideLobes         []shownLobe `json:"side_lobes"`
	AngleDeg          []float64   `json:"angle_deg"`
	LossDB            []float64   `json:"loss_db"`
}

type shownLobe struct {
	AngleDeg float64 `json:"angle_deg"`
	LevelDB  float64 `json:"level_db"`
}

type shownAntenna struct {
	Name           string   `json:"antenna"`
	Format         string   `json:"format"`
	Description    string   `json:"description"`
	FrequencyHz    float64  `json:"frequency_hz,omitempty"`
	GainDBi        *float64 `json:"gain_dbi"` // null where none is stated
	DirectivityDBi float64  `json:"directivity_dbi"`
	DifferenceDB   *float64 `json:"difference_db"`
	Round          bool     `json:"round"`
	Horizontal     shownCut `json:"horizontal"`
	Vertical       shownCut `json:"vertical"`
	Caveats        []string `json:"caveats"`
	Warnings       []string `json:"warnings"`
}

func degrees(rad float64) float64 { return rad * 180 / math.Pi }

func (p shownPattern) json() shownAntenna {
	s := p.summary
	a := shownAntenna{
		Name: p.name, Format: p.format, Description: p.description, FrequencyHz: p.frequencyHz,
		DirectivityDBi: s.Directivity.DBi(), Round: s.Round,
		Horizontal: cutJSON(s.Horizontal, s.HorizontalCut), Vertical: cutJSON(s.Vertical, s.VerticalCut),
		Caveats: append([]string{}, s.Caveats...), Warnings: append([]string{}, s.Warnings...),
	}
	if s.Gain > 0 {
		g, d := s.Gain.DBi(), s.DifferenceDB
		a.GainDBi, a.DifferenceDB = &g, &d
	}
	return a
}

func cutJSON(s antenna.CutSummary, c *antenna.Cut) shownCut {
	out := shownCut{
		PeakDeg: degrees(s.PeakRad), HalfPowerWidthDeg: degrees(s.HalfPowerWidthRad), TenDBWidthDeg: degrees(s.TenDBWidthRad),
		FrontToBackDB: s.FrontToBackDB, HasBack: s.HasBack, SideLobes: []shownLobe{}, AngleDeg: []float64{}, LossDB: []float64{},
	}
	for _, l := range s.SideLobes {
		out.SideLobes = append(out.SideLobes, shownLobe{degrees(l.AngleRad), l.LevelDB})
	}
	for _, p := range c.Samples() {
		out.AngleDeg = append(out.AngleDeg, degrees(p.AngleRad))
		out.LossDB = append(out.LossDB, p.LossDB)
	}
	return out
}

func printAntenna(std streams, o antennaOptions, p shownPattern) error {
	s := p.summary
	fmt.Fprintf(std.out, "%s (%s)\n", p.name, p.format)
	if p.description != "" {
		fmt.Fprintln(std.out, p.description)
	}
	fmt.Fprintf(std.out, "directivity by integration  %s dBi\n", decibels(s.Directivity.DBi()))
	if s.Gain > 0 {
		fmt.Fprintf(std.out, "stated gain                 %s dBi, so directivity is %s dB from it\n", decibels(s.Gain.DBi()), signed(s.DifferenceDB))
	} else {
		fmt.Fprintln(std.out, "stated gain                 none (give one with --gain)")
	}
	fmt.Fprintln(std.out)
	t := newTable("cut", ">peak at [deg]", ">half-power width [deg]", ">10 dB width [deg]", ">front to back [dB]", "strongest side lobes: level [dB] at [deg]")
	t.add(append([]string{"horizontal"}, cutRow(s.Horizontal)...)...)
	t.add(append([]string{"vertical"}, cutRow(s.Vertical)...)...)
	if err := t.print(std.out); err != nil {
		return err
	}
	fmt.Fprintln(std.out)
	if err := printCuts(std, s); err != nil {
		return err
	}
	for _, c := range s.Caveats {
		fmt.Fprintln(std.out, "note: "+c)
	}
	for _, w := range s.Warnings {
		fmt.Fprintln(std.err, "warning: "+w)
	}
	if o.figure != "" {
		fmt.Fprintln(std.out, "figure: "+o.figure)
	}
	return nil
}

// shownLobes is how many side lobes of a cut are shown.
const shownLobes = 3

func cutRow(s antenna.CutSummary) []string {
	lobes, ftb := "", "-"
	for i, l := range s.SideLobes {
		if i == shownLobes {
			break
		}
		if i > 0 {
			lobes += ", "
		}
		lobes += decibels(l.LevelDB) + " at " + tenth(degrees(l.AngleRad))
	}
	if lobes == "" {
		lobes = "none"
	}
	if s.HasBack {
		ftb = tenth(s.FrontToBackDB)
	}
	return []string{tenth(degrees(s.PeakRad)), width(s.HalfPowerWidthRad), width(s.TenDBWidthRad), ftb, lobes}
}

// printCuts prints both cuts every 15 degrees, and every 5 near boresight.
func printCuts(std streams, s antenna.Summary) error {
	t := newTable(">angle [deg]", ">horizontal loss [dB]", ">vertical loss [dB]")
	for a := -180; a < 180; a++ {
		if a%15 != 0 && (a < -30 || a > 30 || a%5 != 0) {
			continue
		}
		t.add(strconv.Itoa(a), lossAt(s.HorizontalCut, a), lossAt(s.VerticalCut, a))
	}
	return t.print(std.out)
}

// lossAt prints a cut's loss at an angle in degrees, or a dash where an open cut
// does not reach.
func lossAt(c *antenna.Cut, deg int) string {
	rad := float64(deg) * math.Pi / 180
	if !c.Closed() {
		s := c.Samples()
		if rad < s[0].AngleRad-1e-9 || rad > s[len(s)-1].AngleRad+1e-9 {
			return "-"
		}
	}
	if loss := c.Loss(rad); loss < mostShownDB {
		return tenth(loss)
	}
	return "null"
}

// mostShownDB is the loss from which a direction is shown as a null: no antenna
// is known that well.
const mostShownDB = 100

func width(rad float64) string {
	if rad == 0 {
		return "-"
	}
	return tenth(degrees(rad))
}

func decibels(v float64) string {
	s := strconv.FormatFloat(v, 'f', 2, 64)
	if s == "-0.00" {
		return "0.00"
	}
	return s
}

func signed(v float64) string { return fmt.Sprintf("%+.2f", v) }

func tenth(v float64) string {
	s := strconv.FormatFloat(v, 'f', 1, 64)
	if s == "-0.0" {
		return "0.0"
	}
	return s
}
