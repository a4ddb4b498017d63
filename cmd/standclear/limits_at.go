package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/limits"
)

type limitsAtOptions struct {
	frequency string
	classes   []string
	json      bool
}

func newLimitsAt(std streams) *cobra.Command {
	var o limitsAtOptions
	c := &cobra.Command{
		Use:   "at FILE --frequency F",
		Short: "Tell the levels that hold at a frequency, for each class.",
		Example: `  standclear limits at mysite/limits.csv --frequency 98MHz
  standclear limits at mysite/limits.csv --frequency 3.5GHz --json`,
		Args: arguments(1, 1, "FILE"),
		RunE: func(_ *cobra.Command, args []string) error { return runLimitsAt(std, o, args[0]) },
	}
	c.Flags().StringVar(&o.frequency, "frequency", "", "`FREQUENCY`, such as 900MHz")
	classFlag(c, &o.classes)
	jsonFlag(c, &o.json)
	return c
}

// levelsAt is what holds for one class and one group of levels.
type levelsAt struct {
	Class         string   `json:"class"`
	Group         string   `json:"group"`
	Covered       bool     `json:"covered"`
	E             float64  `json:"e_v_per_m,omitempty"`
	H             float64  `json:"h_a_per_m,omitempty"`
	B             float64  `json:"b_t,omitempty"`
	S             float64  `json:"s_w_per_m2,omitempty"`
	None          bool     `json:"no_level_on_purpose"`
	AverageS      float64  `json:"averaging_s"`
	TimeAveraging bool     `json:"time_averaging"`
	OverBody      string   `json:"over_body"`
	Combine       string   `json:"combine"`
	Rows          []int    `json:"rows"`
	Sources       []string `json:"sources"`
}

type limitsAtResult struct {
	FrequencyHz float64            `json:"frequency_hz"`
	Levels      []levelsAt         `json:"levels"`
	Confirmed   bool               `json:"confirmed"`
	Unconfirmed string             `json:"unconfirmed_because,omitempty"`
	Warnings    []exposure.Warning `json:"warnings"`
}

func runLimitsAt(std streams, o limitsAtOptions, path string) error {
	if o.frequency == "" {
		return usageError{"--frequency", "", "is missing; write one such as --frequency 900MHz"}
	}
	hz, err := frequencyFlag(o.frequency)
	if err != nil {
		return err
	}
	f, err := readLimits(path)
	if err != nil {
		return err
	}
	classes := f.table.Classes()
	if err := chosen("--class", "a class of the limit table", o.classes, classes); err != nil {
		return err
	}
	if len(o.classes) > 0 {
		classes = o.classes
	}
	r := limitsAtResult{FrequencyHz: hz, Levels: []levelsAt{}, Confirmed: f.table.Confirmed(), Unconfirmed: f.table.Unconfirmed(), Warnings: f.warnings}
	for _, class := range classes {
		for _, at := range f.table.At(class, hz) {
			r.Levels = append(r.Levels, levels(f.table, class, at))
		}
	}
	if o.json {
		return printJSON(std, r)
	}
	return printLimitsAt(std, r)
}

func levels(t *limits.Table, class string, at limits.At) levelsAt {
	l := levelsAt{
		Class: class, Group: at.Group.String(), Covered: at.Covered(), E: at.E, H: at.H, B: at.B, S: at.S, None: at.None,
		AverageS: at.AverageS, TimeAveraging: at.TimeAveraging, OverBody: string(at.OverBody), Combine: string(at.Combine),
		Rows: []int{}, Sources: []string{},
	}
	for _, i := range at.Rows {
		row := t.Rows[i]
		l.Rows = append(l.Rows, row.Line)
		if n := len(l.Sources); n == 0 || l.Sources[n-1] != row.Source {
			l.Sources = append(l.Sources, row.Source)
		}
	}
	return l
}

func printLimitsAt(std streams, r limitsAtResult) error {
	fmt.Fprintf(std.out, "levels at %s\n", limits.Hz(r.FrequencyHz))
	t := newTable("class", "levels against", ">E [V/m]", ">H [A/m]", ">B [uT]", ">S [W/m2]", ">averaging [min]", "over body", "rows", "source")
	for _, l := range r.Levels {
		row := []string{l.Class, l.Group, level(l.E), level(l.H), level(l.B * 1e6), level(l.S)}
		switch {
		case !l.Covered:
			t.add(append(row, "", "", "", "not assessed: no row at this frequency")...)
			continue
		case l.E == 0 && l.H == 0 && l.B == 0 && l.S == 0:
			t.add(append(row, "", "", lines(l.Rows), "no level, on purpose: "+strings.Join(l.Sources, "; "))...)
			continue
		}
		average := "never"
		if l.AverageS > 0 {
			average = sig(l.AverageS / 60)
		}
		t.add(append(row, average, l.OverBody, lines(l.Rows), strings.Join(l.Sources, "; "))...)
	}
	if err := t.print(std.out); err != nil {
		return err
	}
	if !r.Confirmed {
		fmt.Fprintln(std.out, "\nNot confirmed: "+r.Unconfirmed+".")
	}
	return nil
}

// level prints a level, or a dash where there is none.
func level(v float64) string {
	if v == 0 {
		return "-"
	}
	return sig(v)
}

func lines(n []int) string {
	out := make([]string, len(n))
	for i, v := range n {
		out[i] = fmt.Sprint(v)
	}
	return strings.Join(out, ", ")
}
