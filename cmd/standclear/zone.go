package main

import (
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/units"
	"example.org/standclear/reports"
)

type zoneOptions struct {
	siteFlags
	surfaces, classes                 []string
	section, resolution, share, level string
	out                               string
	strict, force                     bool
}

func newZone(std streams) *cobra.Command {
	var o zoneOptions
	c := &cobra.Command{
		Use:   "zone SITE",
		Short: "Draw the keep-out line of each class on each surface, or on a vertical section through the site.",
		Example: `  standclear zone mysite
  standclear zone mysite --section 12,-4.5,90 --resolution 0.2 -o mysection`,
		Args: arguments(1, 1, "SITE"),
		RunE: func(cmd *cobra.Command, args []string) error { return runZone(cmd.Context(), std, o, args[0]) },
	}
	o.register(c)
	c.Flags().StringArrayVar(&o.surfaces, "surface", nil, "surface `ID` (may be given more than once; all where left out)")
	classFlag(c, &o.classes)
	c.Flags().StringVar(&o.section, "section", "", "vertical plane through `X,Y,AZIMUTH` or from X1,Y1:X2,Y2, in place of surfaces")
	c.Flags().StringVar(&o.resolution, "resolution", "0.05", "width in `METRES` to which the line encloses the model's boundary")
	c.Flags().StringVar(&o.share, "share", "1", "`SHARE` of the limit to draw the line at, such as 0.05 or 5%")
	c.Flags().StringVar(&o.level, "level", "", "field `LEVEL` to draw the line at in place of the limits, such as 10V/m or 1W/m2")
	c.Flags().StringVarP(&o.out, "output", "o", "", "folder `DIR` to write the figures, map files and setting-out list to; nothing is written where left out")
	c.Flags().BoolVar(&o.force, "force", false, "replace files that an earlier zone wrote there")
	strictFlag(c, &o.strict)
	return c
}

// query reads the flags that need no site.
func (o *zoneOptions) query() (q exposure.ZoneQuery, err error) {
	q.Surfaces, q.Classes = o.surfaces, o.classes
	if q.ResolutionM, err = resolution(o.resolution); err != nil {
		return q, err
	}
	if q.Share, err = positive("--share", o.share, "0.05 or 5%", units.Share); err != nil {
		return q, err
	}
	if o.level != "" {
		v, u, err := quantity("--level", o.level, "10V/m or 1W/m2", units.EField, units.PowerDensity)
		if err != nil {
			return q, err
		}
		if v <= 0 {
			return q, usageError{"--level", o.level, "is not above 0; write one such as 10V/m or 1W/m2"}
		}
		if u.Dimension == units.EField {
			q.LevelEVPerM = v
		} else {
			q.LevelSWPerM2 = v
		}
	}
	if o.section != "" && len(o.surfaces) > 0 {
		return q, usageError{"--section", "", "goes in place of --surface; leave one of them out"}
	}
	return q, nil
}

// resolution reads --resolution.
func resolution(text string) (float64, error) {
	v, err := positive("--resolution", text, "0.05", units.Length)
	if err == nil && (v < 0.001 || v > 100) {
		err = usageError{"--resolution", text, "is not between 0.001 and 100 m; write one such as 0.05"}
	}
	return v, err
}

// section reads --section, either form.
func section(site *exposure.Site, flag, text string) (*exposure.Section, error) {
	const want = "a section; write X,Y,AZIMUTH such as 12,-4.5,90 or X1,Y1:X2,Y2 such as -5,0:30,12"
	if from, to, ok := strings.Cut(text, ":"); ok {
		a, err := numbers(flag, from, 2, "the start of "+want)
		if err != nil {
			return nil, err
		}
		b, err := numbers(flag, to, 2, "the end of "+want)
		if err != nil {
			return nil, err
		}
		if math.Hypot(b[0]-a[0], b[1]-a[1]) <= 0.1 {
			return nil, usageError{flag, text, "is not longer than 0.1 m; write two points farther apart, such as -5,0:30,12"}
		}
		return &exposure.Section{X1M: a[0], Y1M: a[1], X2M: b[0], Y2M: b[1]}, nil
	}
	v, err := numbers(flag, text, 3, want)
	if err != nil {
		return nil, err
	}
	s := exposure.SectionThrough(site, v[0], v[1], v[2]*math.Pi/180)
	return &s, nil
}

func runZone(ctx context.Context, std streams, o zoneOptions, path string) error {
	q, err := o.query()
	if err != nil {
		return err
	}
	if err := o.vacant(); err != nil {
		return err
	}
	site, err := o.load(std, path)
	if err != nil {
		return err
	}
	if err := chosen("--class", "a class of the limit table", o.classes, classesOf(site)); err != nil {
		return err
	}
	if err := chosen("--surface", "a surface of the site", o.surfaces, surfacesOf(site)); err != nil {
		return err
	}
	if o.section != "" {
		if q.Section, err = section(site, "--section", o.section); err != nil {
			return err
		}
	} else if len(site.Surfaces) == 0 {
		return usageError{"zone", "", "the site has no surfaces; list them in surfaces.csv, or give a vertical plane with --section X,Y,AZIMUTH"}
	}
	tell, end := progress(ctx, std, "boundaries", o.quiet)
	model, err := compile(site, path, tell)
	if err != nil {
		end()
		return err
	}
	zones, err := model.Zones(ctx, q)
	var grids []exposure.RatioGrid
	if err == nil && o.out != "" {
		grids, err = model.Grids(ctx, zones)
	}
	end()
	if err != nil {
		return err
	}
	if o.out != "" {
		a := &exposure.Assessment{Program: program, Site: site, SiteName: site.About.Name, Classes: model.Classes(), Zones: zones, Grids: grids}
		if _, err := reports.WriteZones(a, o.out, reports.Options{Force: o.force, Context: ctx}); err != nil {
			return err
		}
	}
	o.notice(std, model.Notices())
	if o.json {
		err = printJSON(std, answer("zones", zones, site, model))
	} else {
		err = printZones(std, zones, o.out)
	}
	if err == nil && o.strict && anyZoneFound(site, zones) {
		err = errFound
	}
	return err
}

// vacant refuses, before the work is done, what stands in the way of -o.
func (o *zoneOptions) vacant() error {
	if o.out == "" {
		if o.force {
			return usageError{"--force", "", "goes with -o DIR; leave it out, or name the folder to write to"}
		}
		return nil
	}
	info, err := os.Stat(o.out)
	switch {
	case err != nil:
		return nil // writing will make it, or say why it cannot
	case !info.IsDir():
		return usageError{"-o", o.out, "is a file; give a folder, such as -o lines"}
	case !o.force && exists(filepath.Join(o.out, "zone.geojson")):
		return usageError{"-o", o.out, "already holds boundaries; add --force to replace them, or give another folder"}
	}
	return nil
}

// anyZoneFound reports whether a zone is above or not assessed for the class
// that may be on its surface; on a section and at a field level every one counts.
func anyZoneFound(site *exposure.Site, zones []exposure.Zone) bool {
	own := make(map[string]string)
	for _, s := range site.Surfaces {
		own[s.ID] = s.Class
	}
	for _, z := range zones {
		if class := own[z.Surface]; z.Verdict != exposure.Within && (class == "" || class == z.Class || z.Level != "") {
			return true
		}
	}
	return false
}

func printZones(std streams, zones []exposure.Zone, out string) error {
	t := newTable("surface", "class", "line at", ">kept out [m2]", ">certainly above [m2]", ">of [m2]", ">largest ratio", "at x,y,z [m]", "verdict")
	for _, z := range zones {
		where := ""
		if z.MaxRatioLower > 0 {
			where = position(z.MaxAt[0]) + "," + position(z.MaxAt[1]) + "," + position(z.MaxAt[2])
		}
		t.add(zoneName(z), z.Class, lineAt(z), position(z.OuterAreaM2), position(z.InnerAreaM2), position(z.SurfaceAreaM2),
			between(z.MaxRatioLower, z.MaxRatioUpper), where, string(z.Verdict))
	}
	if err := t.print(std.out); err != nil {
		return err
	}
	if len(zones) > 0 {
		where := "The polygons are in --json; -o DIR draws them."
		if out != "" {
			where = "Figures, map files and the setting-out list are in " + quoted(out) + "."
		}
		fmt.Fprintf(std.out, "\nThe keep-out line %s. %s\n", exposure.LoosestLine(zones).Encloses(), where)
	}
	for _, z := range zones {
		if z.Reason != "" {
			fmt.Fprintf(std.out, "%s, %s: %s\n", zoneName(z), z.Class, z.Reason)
		}
	}
	return nil
}

func zoneName(z exposure.Zone) string {
	if s := z.Section; s != nil && z.Surface == "" {
		return fmt.Sprintf("section %s,%s to %s,%s", position(s.X1M), position(s.Y1M), position(s.X2M), position(s.Y2M))
	}
	return z.Surface
}

func lineAt(z exposure.Zone) string {
	switch {
	case z.Level != "":
		return z.Level
	case z.Share == 1 || z.Share == 0:
		return "the limit"
	}
	return plain(z.Share) + " of the limit"
}

// between prints the interval that certainly holds the largest ratio.
func between(lower, upper exposure.Number) string {
	a, b := ratio(lower), ratio(upper)
	if a == b {
		return a
	}
	return a + " to " + b
}
