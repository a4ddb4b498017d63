package main

import (
	"context"
	"fmt"
	"io"
	"slices"
	"sort"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
)

type fieldOptions struct {
	siteFlags
	at      []string
	points  string
	classes []string
	strict  bool
	assumed bool
}

func newField(std streams) *cobra.Command {
	var o fieldOptions
	c := &cobra.Command{
		Use:   "field SITE",
		Short: "Tell E, H and S at points, each antenna's part in them, and the exposure ratio of each class.",
		Example: `  standclear field mysite
  standclear field mysite --at 12,-4.5,13.5`,
		Args: arguments(1, 1, "SITE"),
		RunE: func(cmd *cobra.Command, args []string) error { return runField(cmd.Context(), std, o, args[0]) },
	}
	o.register(c)
	c.Flags().StringArrayVar(&o.at, "at", nil, "point `X,Y,Z` in site metres (may be given more than once)")
	c.Flags().StringVar(&o.points, "points", "", "table `FILE` of points, with the columns of places")
	classFlag(c, &o.classes)
	c.Flags().BoolVar(&o.assumed, "assumptions", false, "tell what each assumption is worth in dB, beside a conservative and a best-estimate figure")
	strictFlag(c, &o.strict)
	return c
}

func classFlag(c *cobra.Command, to *[]string) {
	c.Flags().StringArrayVar(to, "class", nil, "`CLASS` of the limit table (may be given more than once; all where left out)")
}

func strictFlag(c *cobra.Command, to *bool) {
	c.Flags().BoolVar(to, "strict", false, "exit status 3 where something is above a limit or not assessed")
}

func runField(ctx context.Context, std streams, o fieldOptions, path string) error {
	places, err := placesAt(o.at)
	if err != nil {
		return err
	}
	site, err := o.load(std, path)
	if err != nil {
		return err
	}
	if err := chosen("--class", "a class of the limit table", o.classes, classesOf(site)); err != nil {
		return err
	}
	if o.points != "" {
		options, err := o.options()
		if err != nil {
			return err
		}
		more, err := sitefile.LoadPlaces(o.points, site, options)
		if err != nil {
			return readError(o.points, err)
		}
		places = append(places, more...)
	}
	if len(places) == 0 {
		places = site.Places
	}
	if len(places) == 0 {
		return usageError{"field", "", "the site has no places; give a point with --at X,Y,Z or a table with --points FILE"}
	}
	model, err := compile(site, path, nil)
	if err != nil {
		return err
	}
	points, err := model.Field(ctx, places)
	if err != nil {
		return err
	}
	o.notice(std, model.Notices())
	points = onlyClasses(points, o.classes)
	var sets []exposure.AssumptionSet
	if o.assumed {
		all, err := model.Assumptions(ctx, places, nil)
		if err != nil {
			return err
		}
		for _, s := range all {
			if len(o.classes) == 0 || slices.Contains(o.classes, s.Class) {
				sets = append(sets, s)
			}
		}
	}
	if o.json {
		a := answer("points", points, site, model)
		if o.assumed {
			a["assumptions"] = sets
		}
		err = printJSON(std, a)
	} else if err = printField(std, points); err == nil && o.assumed {
		err = printAssumptions(std.out, sets)
	}
	if err == nil && o.strict && anyPointFound(points, len(o.classes) > 0) {
		err = errFound
	}
	return err
}

// placesAt makes places of the points of --at.
func placesAt(texts []string) ([]exposure.Place, error) {
	var places []exposure.Place
	for _, t := range texts {
		p, err := point("--at", t)
		if err != nil {
			return nil, err
		}
		places = append(places, exposure.Place{ID: t, At: p, WallLoss: 1})
	}
	return places, nil
}

func onlyClasses(points []exposure.PointResult, classes []string) []exposure.PointResult {
	if len(classes) == 0 {
		return points
	}
	wanted := make(map[string]bool)
	for _, c := range classes {
		wanted[c] = true
	}
	out := append([]exposure.PointResult(nil), points...)
	for i := range out {
		var keep []exposure.ClassRatio
		for _, r := range out[i].Ratios {
			if wanted[r.Class] {
				keep = append(keep, r)
			}
		}
		out[i].Ratios = keep
		parts := append([]exposure.Contribution(nil), out[i].Contributions...)
		for j := range parts {
			var own []exposure.ContributionRatio
			for _, r := range parts[j].Ratios {
				if wanted[r.Class] {
					own = append(own, r)
				}
			}
			parts[j].Ratios = own
		}
		out[i].Contributions = parts
	}
	return out
}

func orEmpty(w []exposure.Warning) []exposure.Warning {
	if w == nil {
		return []exposure.Warning{}
	}
	return w
}

// anyPointFound reports whether a point is above a limit or not assessed for
// the class that may be there; for any class where none is named, or where the
// classes that count were chosen.
func anyPointFound(points []exposure.PointResult, chosen bool) bool {
	for _, p := range points {
		for _, r := range p.Ratios {
			if (chosen || p.Class == "" || p.Class == r.Class) && r.Verdict != exposure.Within {
				return true
			}
		}
	}
	return false
}

// shownParts is how many antennas' parts are shown of each of several points;
// a single point shows all.
const shownParts = 5

func printField(std streams, points []exposure.PointResult) error {
	t := newTable("point", ">x [m]", ">y [m]", ">z [m]", ">E [V/m]", ">H [A/m]", ">S [W/m2]", "class", ">ratio", "verdict", "governed by")
	for _, p := range points {
		head := []string{p.ID, position(p.XM), position(p.YM), position(p.ZM + p.HeightM), sig(float64(p.EVPerM)), sig(float64(p.HAPerM)), sig(float64(p.SWPerM2))}
		if len(p.Ratios) == 0 {
			t.add(append(head, "", "", string(exposure.NotAssessed), "")...)
		}
		for i, r := range p.Ratios {
			if i > 0 {
				head = make([]string, len(head))
			}
			t.add(append(head, r.Class+mine(p.Class, r.Class), ratio(r.ExposureRatio), string(r.Verdict), r.GovernedBy)...)
		}
	}
	if err := t.print(std.out); err != nil {
		return err
	}
	fmt.Fprintln(std.out, "\nThe verdicts are of the limits supplied; * marks the class that may be there. Ratios are total exposure ratios.")
	for _, p := range points {
		for _, r := range p.Ratios {
			if r.Reason != "" {
				fmt.Fprintf(std.out, "%s, %s: %s\n", p.ID, r.Class, r.Reason)
			}
		}
	}
	for _, p := range points {
		if err := printParts(std.out, p, len(points) == 1); err != nil {
			return err
		}
	}
	return nil
}

func mine(own, class string) string {
	if own != "" && own == class {
		return " *"
	}
	return ""
}

// printParts prints the antennas' parts at one point, the largest first.
func printParts(w io.Writer, p exposure.PointResult, all bool) error {
	parts := append([]exposure.Contribution(nil), p.Contributions...)
	sort.SliceStable(parts, func(i, j int) bool { return largest(parts[i]) > largest(parts[j]) })
	shown := parts
	if !all && len(shown) > shownParts {
		shown = shown[:shownParts]
	}
	if len(shown) == 0 {
		return nil
	}
	header := []string{"antenna", ">f [MHz]", ">distance [m]", ">E [V/m]", ">H [A/m]", ">S [W/m2]"}
	for _, r := range p.Ratios {
		header = append(header, ">ratio "+r.Class)
	}
	t := newTable(append(header, "method")...)
	for _, c := range shown {
		row := []string{c.Antenna, megahertz(c.FrequencyHz), position(c.DistanceM), sig(float64(c.EVPerM)), sig(float64(c.HAPerM)), sig(float64(c.SWPerM2))}
		for _, r := range p.Ratios {
			row = append(row, partRatio(c, r.Class))
		}
		t.add(append(row, c.Method)...)
	}
	fmt.Fprintf(w, "\n%s: %s\n", p.ID, partsTitle(len(shown), len(parts)))
	return t.print(w)
}

func partsTitle(shown, all int) string {
	if shown < all {
		return fmt.Sprintf("the %d largest of %d parts (--json has all)", shown, all)
	}
	return "each antenna's part"
}

func largest(c exposure.Contribution) exposure.Number {
	most := exposure.Number(-1)
	for _, r := range c.Ratios {
		most = max(most, r.ExposureRatio)
	}
	return most
}

func partRatio(c exposure.Contribution, class string) string {
	switch {
	case c.Unknown && c.EIRPAtLimitW > 0:
		return "1 at EIRP " + sig(float64(c.EIRPAtLimitW)) + " W"
	case c.Unknown:
		return "power unknown"
	}
	for _, r := range c.Ratios {
		if r.Class == class && r.Covered {
			return ratio(r.ExposureRatio)
		}
	}
	return string(exposure.NotAssessed)
}

// printAssumptions prints what each assumption is worth at each point.
func printAssumptions(w io.Writer, sets []exposure.AssumptionSet) error {
	if len(sets) == 0 {
		return nil
	}
	fmt.Fprintln(w, "\nWhat each assumption is worth: the change in dB of the ratio where it alone is switched to another choice")
	header := []string{"point", "class", ">ratio", ">conservative", ">best estimate"}
	for i := range sets[0].Parts {
		header = append(header, fmt.Sprintf(">(%d)", i+1))
	}
	t := newTable(header...)
	for _, s := range sets {
		row := []string{s.Place, s.Class, ratio(s.Ratio), ratio(s.Conservative.Ratio), ratio(s.BestEstimate.Ratio)}
		for _, p := range s.Parts {
			row = append(row, change(float64(p.WorthDB)))
		}
		t.add(row...)
	}
	if err := t.print(w); err != nil {
		return err
	}
	for i, p := range sets[0].Parts {
		fmt.Fprintf(w, "(%d) %s: %s\n", i+1, p.Assumption, p.Choice)
	}
	_, err := fmt.Fprintln(w, "Conservative: field factor 2, full power all the time, larger loss of two cuts. Best estimate: direct ray alone, no side-lobe floor, power as stated.")
	return err
}

// change prints a change to a tenth of a decibel, none as 0.0.
func change(db float64) string {
	if text := fmt.Sprintf("%+.1f", db); text != "-0.0" && text != "+0.0" {
		return text
	}
	return "0.0"
}
