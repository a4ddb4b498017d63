package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/limits"
)

type limitsCompareOptions struct {
	as   []string
	json bool
}

func newLimitsCompare(std streams) *cobra.Command {
	var o limitsCompareOptions
	c := &cobra.Command{
		Use:   "compare A B",
		Short: "Tell where two limit tables differ, band by band, and by how much.",
		Example: `  standclear limits compare mysite/limits.csv mysite/limits.csv
  standclear limits compare mysite/limits.csv mysite/limits.csv --as public=occupational`,
		Args: arguments(2, 2, "A B"),
		RunE: func(_ *cobra.Command, args []string) error { return runLimitsCompare(std, o, args[0], args[1]) },
	}
	c.Flags().StringArrayVar(&o.as, "as", nil, "compare `CLASS=CLASS`, of A and of B, where they are named differently (may be given more than once)")
	jsonFlag(c, &o.json)
	return c
}

// limitsDifference is a difference with its group of levels spelled out.
type limitsDifference struct {
	limits.Difference
	Group string `json:"group"`
}

func runLimitsCompare(std streams, o limitsCompareOptions, pathA, pathB string) error {
	a, err := readLimits(pathA)
	if err != nil {
		return err
	}
	b, err := readLimits(pathB)
	if err != nil {
		return err
	}
	var found []limits.Difference
	if len(o.as) == 0 {
		found = limits.Compare(a.table, b.table)
	} else {
		pairs, err := classPairs(o.as, a.table, b.table)
		if err != nil {
			return err
		}
		found = limits.CompareAs(a.table, b.table, pairs)
	}
	if o.json {
		out := []limitsDifference{}
		for _, d := range found {
			out = append(out, limitsDifference{d, d.Group.String()})
		}
		return printJSON(std, map[string]any{"a": about(a.table), "b": about(b.table), "differences": out})
	}
	return printDifferences(std, pathA, pathB, found)
}

func classPairs(texts []string, a, b *limits.Table) ([][2]string, error) {
	var pairs [][2]string
	for _, t := range texts {
		left, right, ok := strings.Cut(t, "=")
		if !ok {
			return nil, usageError{"--as", t, "is not a pair of classes; write CLASS=CLASS, such as --as \"public=general public\""}
		}
		if err := chosen("--as", "a class of A", []string{left}, a.Classes()); err != nil {
			return nil, err
		}
		if err := chosen("--as", "a class of B", []string{right}, b.Classes()); err != nil {
			return nil, err
		}
		pairs = append(pairs, [2]string{left, right})
	}
	return pairs, nil
}

func printDifferences(std streams, pathA, pathB string, found []limits.Difference) error {
	fmt.Fprintf(std.out, "A is %s, B is %s\n", pathA, pathB)
	if len(found) == 0 {
		_, err := fmt.Fprintln(std.out, "The tables do not differ in the classes compared.")
		return err
	}
	for _, d := range found {
		fmt.Fprintln(std.out, d.String())
	}
	_, err := fmt.Fprintf(std.out, "%s\n", count(len(found), "difference"))
	return err
}
