package main

import (
	"context"
	"fmt"
	"io"
	"math"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/units"
	"example.org/standclear/reports"
)

type workOptions struct {
	siteFlags
	at                     []string
	area, class, plan      string
	stay, elsewhere, share string
	from, to, out          string
	force, strict          bool
}

func newWork(std streams) *cobra.Command {
	var o workOptions
	c := &cobra.Command{
		Use:   "work SITE",
		Short: "Plan work: what to switch off or reduce and by how much, how long a stay may last, and the switching sheet for the operators.",
		Example: `  standclear work mysite --area "stair house roof" --stay 60min --from "Thursday 09:00" --to "Thursday 10:00"
  standclear work mysite --at "panel NB1" --at "facade cradle" -o switching.xlsx`,
		Args: arguments(1, 1, "SITE"),
		RunE: func(cmd *cobra.Command, args []string) error { return runWork(cmd.Context(), std, o, args[0]) },
	}
	o.register(c)
	f := c.Flags()
	f.StringArrayVar(&o.at, "at", nil, "`PLACE` of the places table, or X,Y,Z of a person's feet in site metres (may be given more than once)")
	f.StringVar(&o.area, "area", "", "`SURFACE` of which any point may be worked at")
	f.StringVar(&o.class, "class", "", "`CLASS` of the people who work there; that of the places and the surface where left out")
	f.StringVar(&o.stay, "stay", "", "`TIME` that the work takes, such as 60min")
	f.StringVar(&o.elsewhere, "elsewhere", "0", "exposure `RATIO` of the same people during the rest of the averaging time")
	f.StringVar(&o.share, "share", "5%", "`SHARE` of the limit from which an antenna is listed as a contributor")
	f.StringVar(&o.plan, "plan", exposure.PlanLeastPower, "`PLAN` that the switching sheet carries out: "+strings.Join(exposure.Plans(), ", "))
	f.StringVar(&o.from, "from", "", "`WHEN` the work begins, as the switching sheet is to bear it")
	f.StringVar(&o.to, "to", "", "`WHEN` the work ends, as the switching sheet is to bear it")
	f.StringVarP(&o.out, "output", "o", "", "workbook `FILE.xlsx` to write the switching sheet to")
	f.BoolVar(&o.force, "force", false, "replace a workbook that is already there")
	strictFlag(c, &o.strict)
	return c
}

// query reads the flags that need no site.
func (o *workOptions) query() (q exposure.WorkQuery, err error) {
	q.Surface, q.From, q.To, q.Plan = o.area, o.from, o.to, o.plan
	if len(o.at) == 0 && o.area == "" {
		return q, usageError{"work", "", "where is not said; give --at PLACE or --area SURFACE"}
	}
	if err = chosen("--plan", "a plan", []string{o.plan}, exposure.Plans()); err != nil {
		return q, err
	}
	if o.stay != "" {
		v, _, err := quantity("--stay", o.stay, "60min", units.Time)
		if err != nil {
			return q, err
		}
		if v <= 0 {
			return q, usageError{"--stay", o.stay, "is not above 0; write one such as 60min"}
		}
		q.StayS = v
	}
	if q.Elsewhere, err = units.ParseNumber(o.elsewhere, false); err != nil || q.Elsewhere < 0 {
		return q, usageError{"--elsewhere", o.elsewhere, "is not an exposure ratio; write a number from 0, such as 0.2"}
	}
	if q.Share, err = positive("--share", o.share, "0.05 or 5%", units.Share); err != nil {
		return q, err
	}
	if o.out != "" {
		if !strings.EqualFold(filepath.Ext(o.out), ".xlsx") {
			return q, usageError{"-o", o.out, "is not a workbook's name; let it end in .xlsx"}
		}
		if !o.force && exists(o.out) {
			return q, usageError{"-o", o.out, "exists and is not overwritten; add --force, or give another name"}
		}
	}
	return q, nil
}

// where finds the places of --at and the class of the people there.
func (o *workOptions) where(site *exposure.Site, q *exposure.WorkQuery) error {
	var names []string
	classes := map[string]bool{}
	for _, p := range site.Places {
		names = append(names, p.ID)
	}
	for _, text := range o.at {
		found := false
		for _, p := range site.Places {
			if p.ID == text {
				q.Places, found = append(q.Places, p), true
				classes[p.Class] = true
			}
		}
		if found {
			continue
		}
		at, err := point("--at", text)
		if err != nil {
			return chosen("--at", "a place of the site, nor a point X,Y,Z", []string{text}, names)
		}
		q.Places = append(q.Places, exposure.Place{ID: text, At: at, To: standing, WallLoss: 1})
	}
	if o.area != "" {
		if err := chosen("--area", "a surface of the site", []string{o.area}, surfacesOf(site)); err != nil {
			return err
		}
		for _, s := range site.Surfaces {
			if s.ID == o.area {
				classes[s.Class] = true
			}
		}
	}
	if o.class != "" {
		q.Class = o.class
		return chosen("--class", "a class of the limit table", []string{o.class}, classesOf(site))
	}
	if len(classes) != 1 {
		return usageError{"--class", "", "who works there is not clear; write one of: " + strings.Join(classesOf(site), ", ")}
	}
	for c := range classes {
		q.Class = c
	}
	return nil
}

// standing is the height in m of a person at a point of --at.
const standing = 2

func runWork(ctx context.Context, std streams, o workOptions, path string) error {
	q, err := o.query()
	if err != nil {
		return err
	}
	site, err := o.load(std, path)
	if err != nil {
		return err
	}
	if err := o.where(site, &q); err != nil {
		return err
	}
	model, err := compile(site, path, nil)
	if err != nil {
		return err
	}
	w, err := model.Work(ctx, q)
	if err != nil {
		return err
	}
	o.notice(std, model.Notices())
	if o.out != "" {
		book, err := reports.WorkBook(site, program, w)
		if err != nil {
			return err
		}
		if err := writeWhole(o.out, book, o.force); err != nil {
			return err
		}
	}
	if o.json {
		err = printJSON(std, w)
	} else {
		err = printWork(std.out, w, o.out)
	}
	if err == nil && o.strict && w.Verdict != exposure.Within {
		err = errFound
	}
	return err
}

func printWork(out io.Writer, w *exposure.Work, file string) error {
	where := strings.Join(w.Places, ", ")
	if w.Surface != "" {
		where = strings.TrimPrefix(where+", any point of "+w.Surface, ", ")
	}
	fmt.Fprintf(out, "Work by %s at: %s\n", w.Class, where)
	fmt.Fprintf(out, "As it stands: %s the limits supplied, exposure ratio %s (%s)\n", verdictText(w.Verdict), ratio(w.ExposureRatio), w.GovernedBy)
	if w.Reason != "" {
		fmt.Fprintln(out, "Not assessed: "+w.Reason)
	}
	fmt.Fprintln(out, "Stay as it stands: "+reports.StayWords(w))
	if err := printReductions(out, w); err != nil {
		return err
	}
	if len(w.Contributors) > 0 {
		fmt.Fprintln(out, "\nContributors, by operator, each by its own ratio where that is largest")
		t := newTable("operator", "antenna", "transmitter", ">f [MHz]", "place", ">ratio")
		for _, c := range w.Contributors {
			t.add(c.Operator, c.Antenna, c.Transmitter, megahertz(c.FrequencyHz), c.Place, ratio(c.Ratio))
		}
		if err := t.print(out); err != nil {
			return err
		}
	}
	if err := printSwitching(out, w); err != nil {
		return err
	}
	fmt.Fprintln(out)
	for _, c := range w.Cautions {
		fmt.Fprintln(out, c)
	}
	if file != "" {
		fmt.Fprintln(out, "The switching sheet is in "+file)
	}
	return nil
}

func verdictText(v exposure.Verdict) string {
	if v == exposure.NotAssessed {
		return "not assessed against"
	}
	return string(v)
}

// upDB prints a reduction, rounded up to a tenth of a decibel.
func upDB(db float64) string { return fmt.Sprintf("%.1f", math.Ceil(db*10-1e-9)/10) }

func printReductions(out io.Writer, w *exposure.Work) error {
	if len(w.Reductions) == 0 {
		return nil
	}
	fmt.Fprintln(out, "\nTo bring every point within the limits supplied for as long as the work takes, one of these plans")
	t := newTable("plan", "transmitter", "action", ">reduction [dB]", ">power left [%]", ">ratio with the plan", ">given up [W]")
	for _, r := range w.Reductions {
		name, total, given := r.Plan, ratio(r.ExposureRatio), sig(r.GivenUpW)
		if len(r.Transmitters) == 0 {
			t.add(name, "none", "nothing to do", "", "", total, given)
		}
		for _, f := range r.Transmitters {
			action, cut := "reduce", upDB(float64(f.ReductionDB))
			if f.Factor == 0 {
				action, cut = "switch off", ""
			}
			t.add(name, f.Transmitter, action, cut, sig(100*f.Factor), total, given)
			name, total, given = "", "", ""
		}
	}
	if err := t.print(out); err != nil {
		return err
	}
	for _, r := range w.Reductions {
		if r.Note != "" {
			fmt.Fprintln(out, r.Plan+": "+r.Note)
		}
	}
	return nil
}

func printSwitching(out io.Writer, w *exposure.Work) error {
	if len(w.Switching) == 0 {
		return nil
	}
	fmt.Fprintf(out, "\nSwitching sheet, plan %q\n", w.SwitchingPlan)
	t := newTable("operator", "contact", "notice", "reference", "transmitter", ">bearing [deg]", ">height [m]", ">band [MHz]", "action", ">target [W]", "from", "to")
	for _, s := range w.Switching {
		t.add(s.Operator, s.Contact, s.Notice, s.Reference, s.Transmitter, bearingText(s), position(s.HeightM), plain(s.BandMHz), s.Action, sig(s.TargetW), s.From, s.To)
	}
	return t.print(out)
}

func bearingText(s exposure.Switch) string { return fmt.Sprintf("%.0f", s.BearingDeg) }
