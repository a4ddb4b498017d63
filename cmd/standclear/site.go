package main

import (
	"errors"
	"fmt"
	"os"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/exposure/units"
)

// siteFlags are the flags of every command that reads a site.
type siteFlags struct {
	limits, patterns, state, ground string
	json, quiet, windows1252        bool
	unitsRow                        bool
}

func (f *siteFlags) register(c *cobra.Command) {
	jsonFlag(c, &f.json)
	c.Flags().BoolVar(&f.quiet, "quiet", false, "no progress and no warnings on standard error")
	c.Flags().StringVar(&f.limits, "limits", "", "limit table `FILE` in place of the site's own")
	c.Flags().StringVar(&f.patterns, "patterns", "", "folder `DIR` to look for pattern files in, beside the site's own")
	c.Flags().StringVar(&f.state, "state", "", "`on` leaves out the rows on standby")
	c.Flags().StringVar(&f.ground, "ground", "", "`METHOD` none, factor=1.6 or fresnel in place of the site's own")
	c.Flags().BoolVar(&f.unitsRow, "units-row", false, "the row below the header of readings and logs holds their units")
	c.Flags().BoolVar(&f.windows1252, "windows-1252", false, "read CSV files that are not Unicode as Windows-1252")
}

func jsonFlag(c *cobra.Command, to *bool) {
	c.Flags().BoolVar(to, "json", false, "print one JSON object in place of the table")
}

func (f *siteFlags) options() (sitefile.Options, error) {
	o := sitefile.Options{LimitsFile: f.limits, PatternsDir: f.patterns, Windows1252: f.windows1252, UnitsRow: f.unitsRow}
	switch f.state {
	case "":
	case "on":
		o.OnlyOn = true
	default:
		return o, usageError{"--state", f.state, "is not a choice; write on, or leave the flag out to count standby rows too"}
	}
	g, err := ground("--ground", f.ground)
	o.Ground = g
	return o, err
}

// load reads the site and tells its warnings.
func (f *siteFlags) load(std streams, path string) (*exposure.Site, error) {
	o, err := f.options()
	if err != nil {
		return nil, err
	}
	site, err := sitefile.Load(path, o)
	if err != nil {
		return nil, readError(path, err)
	}
	f.warn(std, site.Inputs.Warnings)
	return site, nil
}

func (f *siteFlags) warn(std streams, warnings []exposure.Warning) {
	if f.quiet || f.json {
		return
	}
	for _, w := range warnings {
		fmt.Fprintln(std.err, "warning: "+warningLine(w))
	}
}

// notice tells what an assessor must know that belongs to no cell.
func (f *siteFlags) notice(std streams, notices []string) {
	if f.quiet || f.json {
		return
	}
	for _, n := range notices {
		fmt.Fprintln(std.err, "note: "+n)
	}
}

// answer is a JSON answer with the warnings and notices that go with it.
func answer(key string, value any, site *exposure.Site, model *exposure.Model) map[string]any {
	return map[string]any{key: value, "warnings": orEmpty(site.Inputs.Warnings), "notices": append([]string{}, model.Notices()...)}
}

func warningLine(w exposure.Warning) string {
	var at []string
	for _, s := range []string{w.Place, w.Column} {
		if s != "" {
			at = append(at, s)
		}
	}
	return strings.Join(append(at, w.Message), ": ")
}

// compile makes the model of a site. What it refuses is wrong with the site's
// figures taken together, so the input is at fault.
func compile(site *exposure.Site, path string, tell func(float64)) (*exposure.Model, error) {
	model, err := exposure.New(site, exposure.Options{Progress: tell})
	if err != nil {
		return nil, sitefile.Faults{{File: path, Message: err.Error()}}
	}
	return model, nil
}

// readError marks what went wrong with reading as the input's fault.
func readError(path string, err error) error {
	if errors.As(err, new(sitefile.Faults)) || errors.As(err, new(sitefile.Fault)) {
		return err
	}
	return inputError{path, err}
}

// chosen checks a flag's names against those there are.
func chosen(flag, what string, names, there []string) error {
	for _, n := range names {
		if slices.Contains(there, n) {
			continue
		}
		hint := "it is one of: " + strings.Join(there, ", ")
		if near := units.NearName(n, there); near != "" {
			hint = fmt.Sprintf("did you mean %q?", near)
		}
		return usageError{flag, n, "is not " + what + "; " + hint}
	}
	return nil
}

func classesOf(site *exposure.Site) []string {
	if site.Limits == nil {
		return nil
	}
	return site.Limits.Classes()
}

func surfacesOf(site *exposure.Site) []string {
	names := make([]string, len(site.Surfaces))
	for i, s := range site.Surfaces {
		names[i] = s.ID
	}
	return names
}

// exists reports whether a path is there at all.
func exists(path string) bool {
	_, err := os.Lstat(path)
	return err == nil
}
