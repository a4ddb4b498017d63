package main

import (
	"context"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/exposure/survey"
)

type readingsOptions struct {
	siteFlags
	strict bool
}

func newReadings(std streams) *cobra.Command {
	var o readingsOptions
	c := &cobra.Command{
		Use:   "readings SITE",
		Short: "Tell what the readings come to: corrected, averaged, at maximum traffic, with uncertainty and verdict, beside the prediction.",
		Example: `  standclear readings mysite
  standclear readings mysite --json`,
		Args: arguments(1, 1, "SITE"),
		RunE: func(cmd *cobra.Command, args []string) error {
			return runReadings(cmd.Context(), std, o, args[0])
		},
	}
	o.register(c)
	strictFlag(c, &o.strict)
	c.AddCommand(newReadingsSheet(std))
	return c
}

func runReadings(ctx context.Context, std streams, o readingsOptions, path string) error {
	so, err := o.options()
	if err != nil {
		return err
	}
	site, measured, err := sitefile.LoadSurvey(path, so)
	if err != nil {
		return readError(path, err)
	}
	if measured.Empty() {
		return usageError{"readings", path, "has no readings; fill in the tables readings and instruments, or write a sheet for the site with: standclear readings sheet " + quoted(path) + " -o sheet.xlsx"}
	}
	o.warn(std, site.Inputs.Warnings)
	model, err := compile(site, path, nil)
	if err != nil {
		return err
	}
	result, err := survey.Evaluate(ctx, model, measured)
	if err != nil {
		return err
	}
	o.notice(std, model.Notices())
	if o.json {
		err = printJSON(std, readingsAnswer{result, orEmpty(site.Inputs.Warnings), append([]string{}, model.Notices()...)})
	} else {
		err = printReadings(std.out, result)
	}
	if err == nil && o.strict && anyReadingFound(result) {
		err = errFound
	}
	return err
}

// readingsAnswer is the result with the warnings and notices that go with it.
type readingsAnswer struct {
	*survey.Result
	Warnings []exposure.Warning `json:"warnings"`
	Notices  []string           `json:"notices"`
}

// anyReadingFound reports whether something measured is above or not assessed.
func anyReadingFound(r *survey.Result) bool {
	found := func(v exposure.Verdict) bool { return v == exposure.Above || v == exposure.NotAssessed }
	for _, x := range r.Readings {
		if found(x.Verdict) {
			return true
		}
	}
	for _, x := range r.Groups {
		if found(x.Verdict) {
			return true
		}
	}
	for _, x := range r.Series {
		if found(x.Verdict) {
			return true
		}
	}
	for _, x := range r.Places {
		if found(x.Verdict) {
			return true
		}
	}
	return false
}

func printReadings(w io.Writer, r *survey.Result) error {
	printUnexplained(w, r)
	if err := printSingle(w, r.Readings); err != nil {
		return err
	}
	if err := printGroups(w, r.Groups); err != nil {
		return err
	}
	if err := printSeries(w, r.Series); err != nil {
		return err
	}
	if err := printMeasuredPlaces(w, r.Places); err != nil {
		return err
	}
	fmt.Fprintf(w, "\nDecision rule %s.\nThe verdicts are of the limits supplied. difference: measured over predicted, in dB; U: expanded uncertainty, k = 1.96; < marks the floor of the instrument in place of a reading below it.\n", r.RuleWords)
	printAgreement(w, r.Agreement)
	for _, b := range r.Budgets {
		fmt.Fprintf(w, "uncertainty of %s: %s, field times %.3f to %.3f\n", b.Instrument, b, b.LowerFactor, b.UpperFactor)
	}
	return printRemarks(w, r)
}

// printUnexplained names first what the model cannot explain.
func printUnexplained(w io.Writer, r *survey.Result) {
	for _, f := range r.Unexplained {
		fmt.Fprintf(w, "%s (%s): %s.\n", f.ID, f.Place, f.Words)
		for _, s := range f.Suspects {
			fmt.Fprintf(w, "  look at %s (%s): %s\n", s.Antenna, s.Row, strings.Join(s.Why, "; "))
		}
	}
	if len(r.Unexplained) > 0 {
		fmt.Fprintln(w)
	}
}

func printSingle(w io.Writer, list []survey.ReadingResult) error {
	if len(list) == 0 {
		return nil
	}
	t := newTable("reading", "place", ">height [m]", ">f [MHz]", ">E [V/m]", ">U [dB]", "class", ">ratio", "verdict", ">predicted ratio", ">difference [dB]")
	for _, x := range list {
		t.add(x.ID, placeText(x.Place, x.XM, x.YM), plain(x.Reading.HeightM), bandOf(x.FromHz, x.ToHz), fieldText(x.FieldVPerM, x.BelowFloor), db(x.ExpandedDB), x.Class,
			ratio(x.ExposureRatio), string(x.Verdict), optional(x.PredictedRatio), db(x.DifferenceDB))
	}
	return t.print(w)
}

func printGroups(w io.Writer, list []survey.GroupResult) error {
	if len(list) == 0 {
		return nil
	}
	fmt.Fprintln(w)
	t := newTable("group", "place", "heights [m]", ">mean E [V/m]", ">largest E [V/m]", ">U [dB]", "class", ">ratio", "verdict", ">predicted ratio", ">difference [dB]")
	for _, x := range list {
		var heights []string
		for _, h := range x.Heights {
			heights = append(heights, plain(h))
		}
		t.add(x.Group, x.Place, strings.Join(heights, " "), fieldText(x.FieldVPerM, x.BelowFloor), fieldText(x.LargestVPerM, false), db(x.ExpandedDB), x.Class,
			ratio(x.ExposureRatio), string(x.Verdict), optional(x.PredictedRatio), db(x.DifferenceDB))
	}
	return t.print(w)
}

func printSeries(w io.Writer, list []survey.SeriesResult) error {
	if len(list) == 0 {
		return nil
	}
	fmt.Fprintln(w)
	t := newTable("series", "place", ">samples", ">hours", ">mean over [min]", ">largest E [V/m]", "window ends", ">U [dB]", "class", ">ratio", "verdict", ">predicted ratio", ">difference [dB]")
	for _, x := range list {
		t.add(x.Series, x.Place, strconv.Itoa(x.Samples), sig(x.DurationS/3600), plain(x.AveragingS/60), fieldText(x.FieldVPerM, false), x.LargestEnd, db(x.ExpandedDB), x.Class,
			ratio(x.ExposureRatio), string(x.Verdict), optional(x.PredictedRatio), db(x.DifferenceDB))
	}
	return t.print(w)
}

func printMeasuredPlaces(w io.Writer, list []survey.PlaceResult) error {
	if len(list) == 0 {
		return nil
	}
	fmt.Fprintln(w)
	t := newTable("measured at", ">E [V/m]", ">U [dB]", "class", ">total ratio", "verdict", ">predicted ratio", "counted")
	for _, x := range list {
		t.add(x.Place, fieldText(x.FieldVPerM, x.BelowFloor), db(x.ExpandedDB), x.Class, ratio(x.ExposureRatio), string(x.Verdict), optional(x.PredictedRatio), strings.Join(x.Counted, " "))
	}
	return t.print(w)
}

func printAgreement(w io.Writer, a survey.Agreement) {
	if a.Compared == 0 {
		return
	}
	fmt.Fprintf(w, "%d comparisons: mean difference %s dB", a.Compared, db(a.BiasDB))
	if a.SpreadDB != nil {
		fmt.Fprintf(w, ", spread %s dB", db(a.SpreadDB))
	}
	fmt.Fprintf(w, "; %d within the combined expanded uncertainty\n", a.Explained)
}

// printRemarks says what stands behind each verdict that is no plain answer.
func printRemarks(w io.Writer, r *survey.Result) error {
	say := func(id string, j survey.Judgement, note, scaled string, remarks []string) {
		if j.Reason != "" {
			fmt.Fprintf(w, "%s: %s: %s\n", id, j.Verdict, j.Reason)
		}
		if scaled != "" {
			fmt.Fprintf(w, "%s: scaled to maximum, %s\n", id, scaled)
		}
		if note != "" {
			fmt.Fprintf(w, "%s: %s\n", id, note)
		}
		for _, text := range remarks {
			fmt.Fprintf(w, "%s: %s\n", id, text)
		}
	}
	for _, x := range r.Readings {
		say(x.ID, x.Judgement, x.Note, x.ScaleFormula, x.Remarks)
	}
	for _, x := range r.Groups {
		say(x.Group, x.Judgement, x.Note, "", x.Remarks)
	}
	for _, x := range r.Series {
		say(x.Series, x.Judgement, x.Note, x.ScaleFormula, x.Remarks)
	}
	for _, x := range r.Places {
		say(x.Place, x.Judgement, "", "", nil)
	}
	return nil
}

func placeText(id string, x, y float64) string {
	if id == "" {
		return position(x) + "," + position(y)
	}
	return id
}

func bandOf(lo, hi float64) string {
	if lo == hi {
		return megahertz(lo)
	}
	return megahertz(lo) + "-" + megahertz(hi)
}

func fieldText(v *float64, below bool) string {
	switch {
	case v == nil:
		return ""
	case below:
		return "<" + sig(*v)
	}
	return sig(*v)
}

func optional(v *float64) string {
	if v == nil {
		return ""
	}
	return ratio(exposure.Number(*v))
}

// db prints a difference or an uncertainty in dB.
func db(v *float64) string {
	if v == nil {
		return ""
	}
	if math.Abs(*v) < 0.05 {
		return "0.0"
	}
	return strconv.FormatFloat(*v, 'f', 1, 64)
}
