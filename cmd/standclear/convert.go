package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/exposure/units"
	"example.org/standclear/limits"
)

type convertOptions struct {
	limits, class, frequency, distance string
	erp, json                          bool
}

func newConvert(std streams) *cobra.Command {
	var o convertOptions
	c := &cobra.Command{
		Use:   "convert VALUE...",
		Short: "Turn a field strength, a power density or an EIRP into every other figure of the same plane wave, and into its share of a limit.",
		Example: `  standclear convert 61.4V/m
  standclear convert 10W/m2 --limits mysite/limits.csv --frequency 900MHz`,
		Args: arguments(1, -1, "VALUE"),
		RunE: func(_ *cobra.Command, args []string) error { return runConvert(std, o, args) },
	}
	c.Flags().StringVar(&o.distance, "distance", "", "`DISTANCE` from the antenna, such as 10m: for an EIRP, and to get one")
	c.Flags().BoolVar(&o.erp, "erp", false, "a VALUE in W or dBm is an ERP (over a half-wave dipole), not an EIRP")
	c.Flags().StringVar(&o.limits, "limits", "", "limit table `FILE`: tell the share of its limits too")
	c.Flags().StringVar(&o.class, "class", "", "`CLASS` of the limit table (all where left out)")
	c.Flags().StringVar(&o.frequency, "frequency", "", "`FREQUENCY` of the wave, such as 900MHz: the limits depend on it")
	jsonFlag(c, &o.json)
	return c
}

// wave is one plane wave in every figure there is for it.
type wave struct {
	Value     string      `json:"value"`
	E         float64     `json:"e_v_per_m"`
	H         float64     `json:"h_a_per_m"`
	B         float64     `json:"b_t"`
	S         float64     `json:"s_w_per_m2"`
	EdBuV     float64     `json:"e_dbuv_per_m"`
	SmW       float64     `json:"s_mw_per_cm2"`
	SdBm      float64     `json:"s_dbm_per_m2"`
	DistanceM float64     `json:"distance_m,omitempty"`
	EIRP      float64     `json:"eirp_w,omitempty"`
	ERP       float64     `json:"erp_w,omitempty"`
	Frequency float64     `json:"frequency_hz,omitempty"`
	Ratios    []waveShare `json:"ratios,omitempty"`
}

// waveShare is the wave's share of one group of levels.
type waveShare struct {
	Class   string          `json:"class"`
	Group   string          `json:"group"`
	Ratio   exposure.Number `json:"exposure_ratio"`
	Covered bool            `json:"covered"`
	Verdict string          `json:"verdict"`
}

func runConvert(std streams, o convertOptions, args []string) error {
	distance, frequency := 0.0, 0.0
	var err error
	if o.distance != "" {
		if distance, _, err = quantity("--distance", o.distance, "10m", units.Length); err == nil && distance <= 0 {
			err = usageError{"--distance", o.distance, "is not above 0; write one such as 10m"}
		}
		if err != nil {
			return err
		}
	}
	if o.frequency != "" {
		if frequency, err = frequencyFlag(o.frequency); err != nil {
			return err
		}
	}
	if (o.limits == "") != (o.frequency == "") {
		return usageError{"convert", "", "--limits and --frequency go together; give both or neither"}
	}
	if o.class != "" && o.limits == "" {
		return usageError{"--class", o.class, "is of no limit table; give the table with --limits FILE"}
	}
	waves := []wave{}
	for _, text := range values(args) {
		w, err := o.wave(text, distance)
		if err != nil {
			return err
		}
		waves = append(waves, w)
	}
	if o.limits != "" {
		table, _, err := sitefile.LoadLimits(o.limits, sitefile.Options{})
		if err != nil {
			return readError(o.limits, err)
		}
		classes := table.Classes()
		if o.class != "" {
			if err := chosen("--class", "a class of the limit table", []string{o.class}, classes); err != nil {
				return err
			}
			classes = []string{o.class}
		}
		for i := range waves {
			waves[i].Frequency = frequency
			for _, c := range classes {
				waves[i].Ratios = append(waves[i].Ratios, waves[i].shares(table, c, frequency)...)
			}
		}
	}
	switch {
	case o.json && len(waves) == 1:
		return printJSON(std, waves[0])
	case o.json:
		return printJSON(std, map[string][]wave{"values": waves})
	}
	return printWaves(std, waves)
}

func frequencyFlag(text string) (float64, error) {
	f, _, err := quantity("--frequency", text, "900MHz", units.Frequency)
	if err == nil && f <= 0 {
		err = usageError{"--frequency", text, "is not above 0; write one such as 900MHz"}
	}
	return f, err
}

// values joins a number and the unit that stands apart from it.
func values(args []string) []string {
	var out []string
	for _, a := range args {
		if n := len(out); n > 0 && !startsNumber(a) {
			if _, err := units.ParseNumber(out[n-1], false); err == nil {
				out[n-1] += " " + a
				continue
			}
		}
		out = append(out, a)
	}
	return out
}

// wave reads one value.
func (o *convertOptions) wave(text string, distance float64) (wave, error) {
	v, u, err := quantity("VALUE", text, "61.4V/m", units.EField, units.HField, units.FluxDensity, units.PowerDensity, units.Power)
	if err != nil {
		return wave{}, err
	}
	if v < 0 {
		return wave{}, usageError{"VALUE", text, "is negative; write a magnitude, such as " + strings.TrimPrefix(text, "-")}
	}
	var s float64
	switch u.Dimension {
	case units.EField:
		s = exposure.SFromE(v)
	case units.HField:
		s = exposure.SFromH(v)
	case units.FluxDensity:
		s = exposure.SFromH(exposure.HFromB(v))
	case units.PowerDensity:
		s = v
	case units.Power:
		if distance == 0 {
			return wave{}, usageError{"VALUE", text, "is a power, which makes a field only at a distance; add --distance, such as --distance 10m"}
		}
		if o.erp {
			v = exposure.EIRPFromERP(v)
		}
		s = exposure.PowerDensity(v, 1, distance)
	}
	w := wave{Value: text, E: exposure.EFromS(s), H: exposure.HFromS(s), S: s}
	switch u.Dimension { // the figure that was given comes back as it was given
	case units.EField:
		w.E = v
	case units.HField:
		w.H = v
	}
	w.B = exposure.BFromH(w.H)
	w.EdBuV = mustUnit("dBuV/m").FromSI(w.E)
	w.SmW = mustUnit("mW/cm2").FromSI(w.S)
	w.SdBm = mustUnit("dBm/m2").FromSI(w.S)
	if distance > 0 {
		w.DistanceM = distance
		w.EIRP = s / exposure.PowerDensity(1, 1, distance)
		w.ERP = exposure.ERPFromEIRP(w.EIRP)
	}
	return w, nil
}

// shares tells the wave's share of each group of levels of a class.
func (w wave) shares(table *limits.Table, class string, frequencyHz float64) []waveShare {
	var out []waveShare
	for _, at := range table.At(class, frequencyHz) {
		s := waveShare{Class: class, Group: at.Group.String(), Covered: at.Covered(), Verdict: string(exposure.NotAssessed)}
		if s.Covered {
			r := at.Ratio(limits.Field{E: w.E, H: w.H, B: w.B, S: w.S})
			s.Ratio, s.Verdict = exposure.Number(r), string(exposure.Within)
			if r > 1 {
				s.Verdict = string(exposure.Above)
			}
		}
		out = append(out, s)
	}
	return out
}

func mustUnit(symbol string) units.Unit {
	u, ok := units.Lookup(symbol)
	if !ok {
		panic("standclear: no unit " + symbol)
	}
	return u
}

func printWaves(std streams, waves []wave) error {
	for i, w := range waves {
		if i > 0 {
			fmt.Fprintln(std.out)
		}
		fmt.Fprintf(std.out, "%s as a plane wave\n", w.Value)
		t := newTable("  quantity", ">value", "unit")
		t.add("  E", sig(w.E), "V/m")
		t.add("", sig(w.EdBuV), "dBuV/m")
		t.add("  H", sig(w.H), "A/m")
		t.add("  B", sig(w.B*1e6), "uT")
		t.add("  S", sig(w.S), "W/m2")
		t.add("", sig(w.SmW), "mW/cm2")
		t.add("", sig(w.SdBm), "dBm/m2")
		if w.DistanceM > 0 {
			t.add("  EIRP at "+plain(w.DistanceM)+" m", sig(w.EIRP), "W")
			t.add("  ERP at "+plain(w.DistanceM)+" m", sig(w.ERP), "W")
		}
		if err := t.print(std.out); err != nil {
			return err
		}
		if len(w.Ratios) == 0 {
			continue
		}
		fmt.Fprintf(std.out, "\nagainst the limits supplied at %s MHz\n", megahertz(w.Frequency))
		s := newTable("  class", "levels", ">ratio", "verdict")
		for _, r := range w.Ratios {
			shown := ""
			if r.Covered {
				shown = ratio(r.Ratio)
			}
			s.add("  "+r.Class, r.Group, shown, r.Verdict)
		}
		if err := s.print(std.out); err != nil {
			return err
		}
	}
	return nil
}
