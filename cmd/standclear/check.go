package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
)

type checkOptions struct{ siteFlags }

func newCheck(std streams) *cobra.Command {
	var o checkOptions
	c := &cobra.Command{
		Use:   "check SITE",
		Short: "Read a whole site, compute nothing, and list every fault and every warning.",
		Example: `  standclear check mysite
  standclear check mysite --json`,
		Args: arguments(1, 1, "SITE"),
		RunE: func(_ *cobra.Command, args []string) error { return runCheck(std, o, args[0]) },
	}
	o.register(c)
	return c
}

// checkResult is what check answers where there is no fault.
type checkResult struct {
	Faults   sitefile.Faults      `json:"faults"`
	Warnings []exposure.Warning   `json:"warnings"`
	Antennas int                  `json:"antennas"`
	Surfaces int                  `json:"surfaces"`
	Places   int                  `json:"places"`
	Classes  []string             `json:"classes"`
	Inputs   []exposure.InputFile `json:"inputs"`
}

func runCheck(std streams, o checkOptions, path string) error {
	quiet := o
	quiet.quiet = true // the warnings are the result here, not a remark on it
	site, err := quiet.load(std, path)
	if err != nil {
		return err
	}
	r := checkResult{
		Faults: sitefile.Faults{}, Warnings: site.Inputs.Warnings,
		Antennas: len(site.Sources), Surfaces: len(site.Surfaces), Places: len(site.Places),
		Classes: classesOf(site), Inputs: site.Inputs.Files,
	}
	if r.Warnings == nil {
		r.Warnings = []exposure.Warning{}
	}
	if r.Classes == nil {
		r.Classes = []string{}
	}
	if o.json {
		return printJSON(std, r)
	}
	return printCheck(std, path, r)
}

func printCheck(std streams, path string, r checkResult) error {
	for _, w := range r.Warnings {
		fmt.Fprintln(std.out, "warning: "+warningLine(w))
	}
	_, err := fmt.Fprintf(std.out, "%s: no fault and %s in %s, %s, %s and %s\n", path,
		count(len(r.Warnings), "warning"), count(r.Antennas, "antenna row"), count(r.Surfaces, "surface"),
		count(r.Places, "place"), count(len(r.Classes), "limit class"))
	return err
}

// count prints "1 place" or "3 places".
func count(n int, what string) string {
	switch {
	case n == 1:
	case what[len(what)-1] == 's':
		what += "es"
	default:
		what += "s"
	}
	return fmt.Sprintf("%d %s", n, what)
}
