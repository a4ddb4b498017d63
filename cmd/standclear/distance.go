package main

import (
	"context"
	"fmt"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/units"
)

type distanceOptions struct {
	siteFlags
	direction string
	classes   []string
	of        []string
	coverage  string
	seed      uint64
}

func newDistance(std streams) *cobra.Command {
	var o distanceOptions
	c := &cobra.Command{
		Use:   "distance SITE",
		Short: "Tell how far each class must keep from each antenna row, from each housing, and from everything together.",
		Example: `  standclear distance mysite
  standclear distance mysite --direction 120,-5`,
		Args: arguments(1, 1, "SITE"),
		RunE: func(cmd *cobra.Command, args []string) error { return runDistance(cmd.Context(), std, o, args[0]) },
	}
	o.register(c)
	c.Flags().StringVar(&o.direction, "direction", "", "outermost crossing along `AZIMUTH,ELEVATION` in degrees (azimuth clockwise from true north) in place of the six extents")
	c.Flags().StringSliceVar(&o.of, "of", nil, "`WHICH` of rows, housings, all; everything where left out")
	c.Flags().StringVar(&o.coverage, "coverage", "", "tell too the distance that covers this `SHARE` of what the data's standard uncertainties allow, such as 95%")
	c.Flags().Uint64Var(&o.seed, "seed", exposure.DefaultSeed, "`SEED` of the draws of --coverage")
	classFlag(c, &o.classes)
	return c
}

func runDistance(ctx context.Context, std streams, o distanceOptions, path string) error {
	q := exposure.DistanceQuery{Classes: o.classes}
	if o.direction != "" {
		d, err := direction("--direction", o.direction)
		if err != nil {
			return err
		}
		q.Direction = d
	}
	coverage, err := coverageOf(o.coverage, o.seed)
	if err != nil {
		return err
	}
	q.Coverage = coverage
	if err := chosen("--of", "a choice", o.of, []string{"rows", "housings", "all"}); err != nil {
		return err
	}
	for _, w := range o.of {
		q.Rows = q.Rows || w == "rows"
		q.Housings = q.Housings || w == "housings"
		q.All = q.All || w == "all"
	}
	site, err := o.load(std, path)
	if err != nil {
		return err
	}
	if err := chosen("--class", "a class of the limit table", o.classes, classesOf(site)); err != nil {
		return err
	}
	tell, end := progress(ctx, std, "distances", o.quiet)
	model, err := compile(site, path, tell)
	if err != nil {
		end()
		return err
	}
	distances, err := model.Distances(ctx, q)
	end()
	if err != nil {
		return err
	}
	o.notice(std, model.Notices())
	if o.json {
		return printJSON(std, answer("distances", distances, site, model))
	}
	return printDistances(std, distances, q.Direction != nil)
}

// coverageOf reads --coverage; nil where it is left out.
func coverageOf(text string, seed uint64) (*exposure.Coverage, error) {
	if text == "" {
		return nil, nil
	}
	p, err := positive("--coverage", text, "95%", units.Share)
	if err != nil {
		return nil, err
	}
	if p <= 0.5 || p >= 1 {
		return nil, usageError{"--coverage", text, "is not between 50% and 100%; write one such as 95%"}
	}
	return &exposure.Coverage{Probability: p, Seed: seed}, nil
}

func printDistances(std streams, distances []exposure.Distance, ray bool) error {
	show := printExtents
	if ray {
		show = printRays
	}
	if err := show(std, distances); err != nil {
		return err
	}
	if err := printCovered(std, distances); err != nil {
		return err
	}
	return printDistanceNotes(std, distances)
}

// printCovered prints the quantiles of --coverage, and nothing without it.
func printCovered(std streams, distances []exposure.Distance) error {
	t := newTable("of", "class", "direction", ">distance [m]", ">covering [m]", ">95 % interval [m]", ">trials", "mostly from")
	share := 0.0
	for _, d := range distances {
		c := d.Covered
		if c == nil {
			continue
		}
		share = c.Probability
		most := ""
		if len(c.Inputs) > 0 {
			most = fmt.Sprintf("%s (%s m)", c.Inputs[0].Input, sig(c.Inputs[0].DeviationM))
		}
		t.add(subject(d), d.Class, d.Direction, reach(d), metres(c.DistanceM), position(c.LowM)+" to "+position(c.HighM), fmt.Sprint(c.Trials), most)
	}
	if len(t.rows) == 0 {
		return nil
	}
	fmt.Fprintf(std.out, "\nDistances that cover %s %% of what the data's standard uncertainties allow (the part of one input alone in brackets, as a standard deviation)\n", plain(share*100))
	return t.print(std.out)
}

func subject(d exposure.Distance) string {
	switch {
	case d.All:
		return "everything together"
	case d.Housing != "":
		return "housing " + d.Housing
	}
	return "row " + d.Antenna
}

func printRays(std streams, distances []exposure.Distance) error {
	t := newTable("of", "class", ">azimuth [deg]", ">elevation [deg]", ">distance [m]", "verdict", "governed by")
	for _, d := range distances {
		t.add(subject(d), d.Class, sig(d.AzimuthDeg), sig(d.ElevationDeg), reach(d), beyond(d), d.GovernedBy)
	}
	return t.print(std.out)
}

// printExtents prints one line for each subject and class with its six extents.
func printExtents(std streams, distances []exposure.Distance) error {
	own := newTable("of", "class", ">front [m]", ">back [m]", ">left [m]", ">right [m]", ">up [m]", ">down [m]", "governed by")
	compass := newTable("of", "class", ">north [m]", ">east [m]", ">south [m]", ">west [m]", ">up [m]", ">down [m]", "governed by")
	for i := 0; i < len(distances); {
		first := distances[i]
		cells := map[string]string{}
		governed := ""
		for ; i < len(distances) && subject(distances[i]) == subject(first) && distances[i].Class == first.Class; i++ {
			d := distances[i]
			cells[d.Direction] = reach(d)
			if governed == "" {
				governed = d.GovernedBy
			}
		}
		_, isCompass := cells["north"]
		t, names := own, []string{"front", "back", "left", "right", "up", "down"}
		if isCompass {
			t, names = compass, []string{"north", "east", "south", "west", "up", "down"}
		}
		row := []string{subject(first), first.Class}
		for _, n := range names {
			row = append(row, cells[n])
		}
		t.add(append(row, governed)...)
	}
	for i, t := range []*table{own, compass} {
		if len(t.rows) == 0 {
			continue
		}
		if i > 0 && len(own.rows) > 0 {
			fmt.Fprintln(std.out)
		}
		if err := t.print(std.out); err != nil {
			return err
		}
	}
	return nil
}

// reach is a distance as people keep it, or the word that stands for it.
func reach(d exposure.Distance) string {
	switch d.Verdict {
	case exposure.NotAssessed:
		return string(exposure.NotAssessed)
	case exposure.Within:
		return "none"
	}
	return metres(d.DistanceM)
}

func beyond(d exposure.Distance) string {
	if d.Verdict == exposure.Above {
		return "within beyond that"
	}
	return string(d.Verdict)
}

func printDistanceNotes(std streams, distances []exposure.Distance) error {
	fmt.Fprintln(std.out, "\nDistances are rounded up to 0.01 m and hold for the limits supplied. A row or a housing is taken alone: on the")
	fmt.Fprintln(std.out, "site the others add to it, so for people on the site use \"everything together\" and the keep-out lines (zone).")
	seen := map[string]bool{}
	for _, d := range distances {
		line := subject(d) + ", " + d.Class + ": " + d.Reason
		if d.Reason != "" && !seen[line] {
			seen[line] = true
			fmt.Fprintln(std.out, line)
		}
	}
	return nil
}
