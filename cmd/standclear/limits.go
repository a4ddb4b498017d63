package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/limits"
)

func newLimits(std streams) *cobra.Command {
	return group("limits", "Read a limit table: as it stands, its faults, its levels at a frequency, and where two tables differ.",
		`  standclear limits show mysite/limits.csv
  standclear limits at mysite/limits.csv --frequency 900MHz`,
		newLimitsShow(std), newLimitsCheck(std), newLimitsAt(std), newLimitsCompare(std))
}

// limitsFile is a limit table that was read, with what was found about it.
type limitsFile struct {
	path     string
	table    *limits.Table
	warnings []exposure.Warning
}

func readLimits(path string) (limitsFile, error) {
	t, in, err := sitefile.LoadLimits(path, sitefile.Options{})
	if err != nil {
		return limitsFile{}, readError(path, err)
	}
	return limitsFile{path, t, orEmpty(in.Warnings)}, nil
}

// aboutTable is a table's provenance as it is printed.
type aboutTable struct {
	Title         string `json:"title"`
	IssuedBy      string `json:"issued_by"`
	Edition       string `json:"edition"`
	TranscribedBy string `json:"transcribed_by"`
	CheckedBy     string `json:"checked_by"`
	CheckedOn     string `json:"checked_on"`
	Confirmed     bool   `json:"confirmed"`
	Unconfirmed   string `json:"unconfirmed_because,omitempty"`
}

func about(t *limits.Table) aboutTable {
	a := t.About
	return aboutTable{a.Title, a.IssuedBy, a.Edition, a.TranscribedBy, a.CheckedBy, a.CheckedOn, t.Confirmed(), t.Unconfirmed()}
}

func printAbout(w io.Writer, a aboutTable) {
	for _, line := range [][2]string{
		{"title", a.Title}, {"issued by", a.IssuedBy}, {"edition", a.Edition},
		{"transcribed by", a.TranscribedBy}, {"checked by", a.CheckedBy}, {"checked on", a.CheckedOn},
	} {
		if line[1] == "" {
			line[1] = "not stated"
		}
		fmt.Fprintf(w, "%-15s %s\n", line[0], line[1])
	}
	if a.Confirmed {
		fmt.Fprintln(w, "Someone has confirmed this transcription: every band reproduces a printed spot value.")
	} else {
		fmt.Fprintln(w, "Not confirmed: "+a.Unconfirmed+".")
	}
}

func newLimitsShow(std streams) *cobra.Command {
	var asJSON, force bool
	var draw string
	c := &cobra.Command{
		Use:   "show FILE",
		Short: "Show a limit table as it was read, with who stands behind it.",
		Example: `  standclear limits show mysite/limits.csv
  standclear limits show mysite/limits.csv --figure levels.svg`,
		Args: arguments(1, 1, "FILE"),
		RunE: func(_ *cobra.Command, args []string) error {
			f, err := readLimits(args[0])
			if err != nil {
				return err
			}
			if draw != "" {
				if err := drawLimits(f, draw, force); err != nil {
					return err
				}
			}
			r := f.shown()
			if asJSON {
				return printJSON(std, r)
			}
			return printLimits(std, r)
		},
	}
	jsonFlag(c, &asJSON)
	c.Flags().StringVar(&draw, "figure", "", "draw the levels against frequency to `FILE`.svg or FILE.png")
	c.Flags().BoolVar(&force, "force", false, "replace a figure that is already there")
	return c
}

// limitBand is one band of a table as it is shown.
type limitBand struct {
	Line          int     `json:"row"`
	Class         string  `json:"class"`
	Quantity      string  `json:"quantity"`
	FromHz        float64 `json:"from_hz"`
	ToHz          float64 `json:"to_hz"`
	Level         string  `json:"level"`
	AverageS      string  `json:"averaging"`
	TimeAveraging bool    `json:"time_averaging"`
	OverBody      string  `json:"over_body"`
	Combine       string  `json:"combine"`
	Group         string  `json:"group"`
	Source        string  `json:"source"`
}

type limitsShown struct {
	aboutTable
	Bands    []limitBand        `json:"bands"`
	Warnings []exposure.Warning `json:"warnings"`
}

func (f limitsFile) shown() limitsShown {
	r := limitsShown{aboutTable: about(f.table), Bands: []limitBand{}, Warnings: f.warnings}
	for _, row := range f.table.Rows {
		r.Bands = append(r.Bands, limitBand{
			Line: row.Line, Class: row.Class, Quantity: string(row.Quantity), FromHz: row.FromHz, ToHz: row.ToHz,
			Level: levelFormula(row), AverageS: averagingFormula(row), TimeAveraging: row.TimeAveraging,
			OverBody: string(row.OverBody), Combine: string(row.Combine), Group: row.Group().String(), Source: row.Source,
		})
	}
	return r
}

// levelFormula prints "1.375 f^0.5 V/m (f in MHz)".
func levelFormula(r limits.Row) string {
	if r.None {
		return "none, on purpose"
	}
	if r.Exponent == 0 {
		return limits.LevelText(r.Quantity, r.Coefficient)
	}
	number, unit, _ := strings.Cut(limits.LevelText(r.Quantity, r.Coefficient), " ")
	return fmt.Sprintf("%s f^%s %s (f in %s)", number, plain(r.Exponent), unit, unitOf(r.FUnitHz))
}

// averagingFormula prints "6 min" or "68 min f^-1.05 (f in GHz)".
func averagingFormula(r limits.Row) string {
	switch {
	case r.None:
		return ""
	case r.AverageS == 0:
		return "never"
	case r.AverageExp == 0:
		return minutes(r.AverageS)
	}
	return fmt.Sprintf("%s f^%s (f in %s)", minutes(r.AverageS), plain(r.AverageExp), unitOf(r.AverageFUnitHz))
}

func minutes(s float64) string { return sig(s/60) + " min" }

// unitOf prints the unit of a formula's frequency: MHz.
func unitOf(hz float64) string { return strings.TrimPrefix(limits.Hz(hz), "1 ") }

func bandText(fromHz, toHz float64) string {
	if fromHz == toHz {
		return limits.Hz(fromHz)
	}
	return limits.Hz(fromHz) + " to " + limits.Hz(toHz)
}

func printLimits(std streams, r limitsShown) error {
	printAbout(std.out, r.aboutTable)
	fmt.Fprintln(std.out)
	t := newTable(">row", "class", "quantity", "band", "level", "averaging", "over body", "levels against", "source")
	for _, b := range r.Bands {
		t.add(fmt.Sprint(b.Line), b.Class, b.Quantity, bandText(b.FromHz, b.ToHz), b.Level, b.AverageS, b.OverBody, b.Group, b.Source)
	}
	if err := t.print(std.out); err != nil {
		return err
	}
	for _, w := range r.Warnings {
		fmt.Fprintln(std.err, "warning: "+warningLine(w))
	}
	return nil
}

func newLimitsCheck(std streams) *cobra.Command {
	var asJSON bool
	c := &cobra.Command{
		Use:   "check FILE",
		Short: "List the faults and warnings of a limit table, and hold it against the spot values typed in with it.",
		Example: `  standclear limits check mysite/limits.csv
  standclear limits check mysite/limits.csv --json`,
		Args: arguments(1, 1, "FILE"),
		RunE: func(_ *cobra.Command, args []string) error {
			f, err := readLimits(args[0])
			if err != nil {
				return err
			}
			r := f.checked()
			if asJSON {
				return printJSON(std, r)
			}
			return printLimitsCheck(std, args[0], r)
		},
	}
	jsonFlag(c, &asJSON)
	return c
}

type limitsChecked struct {
	aboutTable
	Faults   sitefile.Faults    `json:"faults"`
	Warnings []exposure.Warning `json:"warnings"`
	Bands    int                `json:"bands"`
	Classes  []string           `json:"classes"`
	Spots    []string           `json:"spot_values"`
}

func (f limitsFile) checked() limitsChecked {
	r := limitsChecked{
		aboutTable: about(f.table), Faults: sitefile.Faults{}, Warnings: f.warnings,
		Bands: len(f.table.Rows), Classes: f.table.Classes(), Spots: []string{},
	}
	for _, s := range f.table.Spots {
		r.Spots = append(r.Spots, s.Text)
	}
	return r
}

func printLimitsCheck(std streams, path string, r limitsChecked) error {
	for _, w := range r.Warnings {
		fmt.Fprintln(std.out, "warning: "+warningLine(w))
	}
	for _, s := range r.Spots {
		fmt.Fprintln(std.out, "spot value reproduced: "+s)
	}
	printAbout(std.out, r.aboutTable)
	_, err := fmt.Fprintf(std.out, "%s: no fault and %s in %s, %s (%s), %s\n", path, count(len(r.Warnings), "warning"),
		count(r.Bands, "band"), count(len(r.Classes), "class"), strings.Join(r.Classes, ", "), count(len(r.Spots), "spot value"))
	return err
}
