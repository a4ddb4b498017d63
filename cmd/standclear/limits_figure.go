package main

import (
	"math"
	"path/filepath"
	"strings"

	"example.org/standclear/limits"
	"example.org/standclear/reports/figure"
)

// drawLimits draws every class and quantity of a limit table to a file.
func drawLimits(f limitsFile, path string, force bool) error {
	ext := strings.ToLower(filepath.Ext(path))
	if ext != ".svg" && ext != ".png" {
		return usageError{"--figure", path, "is not a figure's name; let it end in .svg or .png"}
	}
	t := f.table
	d := figure.LevelsData{Title: t.About.Title, Note: aboutNote(t), Lines: levelLines(t)}
	if d.Title == "" {
		d.Title = filepath.Base(f.path)
	}
	drawn, err := figure.Levels(d)
	if err != nil {
		return err
	}
	data, err := drawn.SVG()
	if ext == ".png" {
		data, err = drawn.PNG()
	}
	if err != nil {
		return err
	}
	return writeWhole(path, data, force)
}

// aboutNote says who issued the table and whether anybody confirmed it.
func aboutNote(t *limits.Table) string {
	var parts []string
	for _, p := range []string{t.About.IssuedBy, t.About.Edition} {
		if p != "" {
			parts = append(parts, p)
		}
	}
	if t.Confirmed() {
		return strings.Join(append(parts, "checked by "+t.About.CheckedBy), ", ")
	}
	return strings.Join(append(parts, "nobody has confirmed this transcription"), ", ")
}

// levelLines turns a table's curves into lines for a figure: a gap cuts a line.
func levelLines(t *limits.Table) []figure.LevelLine {
	var out []figure.LevelLine
	for _, c := range t.Curves(0) {
		l := figure.LevelLine{Label: c.Class + ": " + c.Group.String(), Quantity: c.Quantity, Unit: c.Quantity.Unit()}
		for i, line := range c.Lines {
			if i > 0 {
				l.Hz, l.Level = append(l.Hz, l.Hz[len(l.Hz)-1]), append(l.Level, math.NaN())
			}
			for _, p := range line {
				l.Hz, l.Level = append(l.Hz, p.FrequencyHz), append(l.Level, p.Level)
			}
		}
		out = append(out, l)
	}
	return out
}
