package main

import (
	"bytes"
	"context"
	"fmt"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/exposure/survey"
)

type sheetOptions struct {
	siteFlags
	out   string
	force bool
}

func newReadingsSheet(std streams) *cobra.Command {
	var o sheetOptions
	c := &cobra.Command{
		Use:   "sheet SITE -o FILE.xlsx",
		Short: "Write the workbook to fill in on site: places, heights, expected levels and empty cells, which readings then reads back as it is.",
		Example: `  standclear readings sheet mysite -o sheet.xlsx
  standclear readings sheet mysite -o sheet.xlsx --force`,
		Args: arguments(1, 1, "SITE"),
		RunE: func(cmd *cobra.Command, args []string) error { return runReadingsSheet(cmd.Context(), std, o, args[0]) },
	}
	o.register(c)
	c.Flags().StringVarP(&o.out, "output", "o", "", "workbook `FILE` to write")
	c.Flags().BoolVar(&o.force, "force", false, "replace a workbook that is already there")
	return c
}

func runReadingsSheet(ctx context.Context, std streams, o sheetOptions, path string) error {
	if o.out == "" {
		return usageError{"-o", "", "the workbook to write is missing; write -o FILE.xlsx, such as -o sheet.xlsx"}
	}
	if exists(o.out) && !o.force {
		return usageError{"file", o.out, "exists and is not overwritten; add --force, or give another name"}
	}
	options, err := o.options()
	if err != nil {
		return err
	}
	site, measured, err := sitefile.LoadSurvey(path, options)
	if err != nil {
		return readError(path, err)
	}
	o.warn(std, site.Inputs.Warnings)
	model, err := compile(site, path, nil)
	if err != nil {
		return err
	}
	planned, err := survey.Plan(ctx, model, measured)
	if err != nil {
		return err
	}
	var book bytes.Buffer
	if err := sitefile.WriteSheet(&book, path, options, planned); err != nil {
		return readError(path, err)
	}
	if err := writeWhole(o.out, book.Bytes(), o.force); err != nil {
		return err
	}
	if o.json {
		return printJSON(std, map[string]any{"file": o.out, "planned": planned})
	}
	again := "standclear readings " + quoted(o.out)
	if folder := siteFolder(path); filepath.Clean(folder) != filepath.Dir(o.out) {
		again += " --patterns " + quoted(folder)
	}
	_, err = fmt.Fprintf(std.out, "%s\n%d rows to fill in on its sheet readings; then: %s\n", o.out, len(planned), again)
	return err
}

// siteFolder is where a site's pattern files lie.
func siteFolder(path string) string {
	if info, err := os.Stat(path); err == nil && info.IsDir() {
		return path
	}
	return filepath.Dir(path)
}
