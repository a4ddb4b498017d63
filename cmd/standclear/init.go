package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure/sitefile"
)

type initOptions struct{ workbook, demo, json bool }

func newInit(std streams) *cobra.Command {
	var o initOptions
	c := &cobra.Command{
		Use:   "init DIR",
		Short: "Write a new site folder to fill in: every table with its header, units and one example row.",
		Example: `  standclear init newsite
  standclear init --demo mysite`,
		Args: arguments(1, 1, "DIR"),
		RunE: func(_ *cobra.Command, args []string) error { return runInit(std, o, args[0]) },
	}
	c.Flags().BoolVar(&o.workbook, "workbook", false, "one .xlsx with drop-downs, notes and number checks in place of CSV files")
	c.Flags().BoolVar(&o.demo, "demo", false, "the complete invented demo site")
	jsonFlag(c, &o.json)
	return c
}

func runInit(std streams, o initOptions, dir string) error {
	files, err := sitefile.Init(dir, sitefile.InitOptions{Workbook: o.workbook, Demo: o.demo})
	if err != nil {
		return err
	}
	if o.json {
		return printJSON(std, map[string][]string{"files": files})
	}
	return printInit(std, o, dir, files)
}

func printInit(std streams, o initOptions, dir string, files []string) error {
	for _, f := range files {
		fmt.Fprintln(std.out, f)
	}
	site := dir
	if o.workbook && len(files) == 1 {
		site = files[0]
	}
	_, err := fmt.Fprintf(std.out, "Fill in or change these, then: standclear check %s\n", quoted(site))
	return err
}
