package main

import (
	"fmt"

	"github.com/spf13/cobra"
)

// program is the program's name and version, as every report bears them.
const program = "standclear 0.1.0"

func newVersion(std streams) *cobra.Command {
	var asJSON bool
	c := &cobra.Command{
		Use:   "version",
		Short: "Print the program's name and version, as every report bears them.",
		Example: `  standclear version
  standclear version --json`,
		Args: arguments(0, 0, "no argument"),
		RunE: func(*cobra.Command, []string) error {
			if asJSON {
				return printJSON(std, map[string]string{"program": program})
			}
			_, err := fmt.Fprintln(std.out, program)
			return err
		},
	}
	jsonFlag(c, &asJSON)
	return c
}
