package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure/survey"
)

func newMethods(std streams) *cobra.Command {
	var asJSON bool
	c := &cobra.Command{
		Use:   "methods",
		Short: "List every method: its formula, its range, on which side it errs, its source and the check that holds it.",
		Example: `  standclear methods
  standclear methods --json`,
		Args: arguments(0, 0, "no argument"),
		RunE: func(*cobra.Command, []string) error {
			notes := survey.Methods()
			if asJSON {
				return printJSON(std, map[string][]antenna.MethodNote{"methods": notes})
			}
			return printMethods(std, notes)
		},
	}
	jsonFlag(c, &asJSON)
	return c
}

func printMethods(std streams, notes []antenna.MethodNote) error {
	for i, n := range notes {
		if i > 0 {
			fmt.Fprintln(std.out)
		}
		ours := ""
		if n.Ours {
			ours = " (a choice of this program, not a published rule)"
		}
		fmt.Fprintf(std.out, "%s  %s%s\n", n.ID, n.Name, ours)
		for _, line := range [][2]string{
			{"formula", n.Formula}, {"holds", n.Range}, {"errs", n.Errs}, {"source", n.Source}, {"check", n.Check},
		} {
			if line[1] != "" {
				fmt.Fprintf(std.out, "  %-8s %s\n", line[0], line[1])
			}
		}
	}
	return nil
}
