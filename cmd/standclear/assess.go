package main

import (
	"context"
	"fmt"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/exposure/sitefile/demo"
	"example.org/standclear/exposure/survey"
	"example.org/standclear/reports"
)

type assessOptions struct {
	siteFlags
	out                 string
	resolution          string
	coverage            string
	demo, force, strict bool
}

func newAssess(std streams) *cobra.Command {
	var o assessOptions
	c := &cobra.Command{
		Use:   "assess SITE -o DIR",
		Short: "Do the whole job: fields, verdicts, distances and keep-out lines in one report workbook with figures, map files and results.json.",
		Example: `  standclear assess --demo -o demo-report
  standclear assess mysite -o myreport`,
		Args: func(cmd *cobra.Command, args []string) error {
			if o.demo {
				return arguments(0, 0, "no SITE beside --demo")(cmd, args)
			}
			return arguments(1, 1, "SITE")(cmd, args)
		},
		RunE: func(cmd *cobra.Command, args []string) error {
			return runAssess(cmd.Context(), std, o, args)
		},
	}
	o.register(c)
	c.Flags().StringVarP(&o.out, "output", "o", "", "folder `DIR` to write the report to")
	c.Flags().BoolVar(&o.demo, "demo", false, "the invented demo site that the program carries, in place of SITE")
	c.Flags().BoolVar(&o.force, "force", false, "replace a report that is already there")
	c.Flags().StringVar(&o.resolution, "resolution", "0.05", "width in `METRES` to which the keep-out lines enclose the model's boundary")
	c.Flags().StringVar(&o.coverage, "coverage", "", "tell too the distances that cover this `SHARE` of what the data's standard uncertainties allow, such as 95%")
	strictFlag(c, &o.strict)
	return c
}

func runAssess(ctx context.Context, std streams, o assessOptions, args []string) error {
	if o.out == "" {
		return usageError{"-o", "", "the folder to write the report to is missing; write -o DIR, such as -o report"}
	}
	width, err := resolution(o.resolution)
	if err != nil {
		return err
	}
	coverage, err := coverageOf(o.coverage, exposure.DefaultSeed)
	if err != nil {
		return err
	}
	if err := vacant(o.out, o.force); err != nil {
		return err
	}
	name := "demo"
	if !o.demo {
		name = args[0]
	}
	site, measured, err := o.loadSurvey(std, name)
	if err != nil {
		return err
	}
	tell, end := progress(ctx, std, "assessing", o.quiet)
	model, err := compile(site, name, tell)
	if err != nil {
		end()
		return err
	}
	a, err := model.Assess(ctx, exposure.AssessOptions{Program: program, ResolutionM: width, Coverage: coverage})
	end()
	if err != nil {
		return err
	}
	var readings *survey.Result
	if !measured.Empty() {
		if readings, err = survey.Evaluate(ctx, model, measured); err != nil {
			return err
		}
	}
	if _, err := reports.Write(a, o.out, reports.Options{Survey: readings, Force: o.force, Context: ctx}); err != nil {
		return err
	}
	if o.json {
		err = printJSON(std, a)
	} else {
		err = printAssess(std, o, a, args)
	}
	if err == nil && o.strict && (anyPointFound(a.Points, false) || anyZoneFound(site, a.Zones)) {
		err = errFound
	}
	return err
}

// loadSurvey reads the site and what was measured there, and tells its warnings.
func (o *assessOptions) loadSurvey(std streams, name string) (*exposure.Site, *survey.Survey, error) {
	so, err := o.options()
	if err != nil {
		return nil, nil, err
	}
	var site *exposure.Site
	var measured *survey.Survey
	if o.demo {
		site, measured, err = sitefile.LoadSurveyFS(demo.FS, so)
	} else {
		site, measured, err = sitefile.LoadSurvey(name, so)
	}
	if err != nil {
		return nil, nil, readError(name, err)
	}
	o.warn(std, site.Inputs.Warnings)
	return site, measured, nil
}

// vacant refuses, before the work is done, a folder that already holds a report.
func vacant(dir string, force bool) error {
	info, err := os.Stat(dir)
	switch {
	case err != nil:
		return nil // writing will make it, or say why it cannot
	case !info.IsDir():
		return usageError{"-o", dir, "is a file; give a folder, such as -o report"}
	case force:
		return nil
	}
	for _, name := range []string{"report.xlsx", "results.json"} {
		if exists(filepath.Join(dir, name)) {
			return usageError{"-o", dir, "already holds a report; add --force to replace it, or give another folder"}
		}
	}
	return nil
}

func printAssess(std streams, o assessOptions, a *exposure.Assessment, args []string) error {
	again := "To get this site as files, change them and run it again: standclear init --demo mysite, then: standclear assess mysite -o myreport"
	if !o.demo {
		again = fmt.Sprintf("After a change, run it again: standclear assess %s -o %s --force", quoted(args[0]), quoted(o.out))
	}
	if err := reports.Screen(std.out, a); err != nil {
		return err
	}
	_, err := fmt.Fprintln(std.out, again)
	return err
}
