package main

import (
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure/units"
	"example.org/standclear/reports/figure"
)

type antennaOptions struct {
	gain, frequency, frontToBack, tilt string
	horizontal, vertical               string
	diameter, height, sense            string
	figure                             string
	polar, force, json                 bool
}

func newAntenna(std streams) *cobra.Command {
	return group("antenna", "Look at an antenna pattern, from a file or built in.",
		`  standclear antenna show mysite/panel-1800-65-t4.csv
  standclear antenna show "half-wave dipole"`,
		newAntennaShow(std))
}

func newAntennaShow(std streams) *cobra.Command {
	var o antennaOptions
	c := &cobra.Command{
		Use:   "show FILE or NAME",
		Short: "Show a pattern's cuts, beamwidths and side lobes, and its directivity by integration against the stated gain.",
		Example: `  standclear antenna show mysite/panel-1800-65-t4.csv
  standclear antenna show two-beamwidth --gain 17dBi --horizontal-beamwidth 65deg --vertical-beamwidth 7deg`,
		Args: arguments(1, 1, "FILE or NAME"),
		RunE: func(_ *cobra.Command, args []string) error { return runAntenna(std, o, args[0]) },
	}
	f := c.Flags()
	f.StringVar(&o.gain, "gain", "", "peak `GAIN`, such as 17dBi or 15dBd, where the file or name does not fix it")
	f.StringVar(&o.frequency, "frequency", "", "`FREQUENCY`, such as 900MHz: picks a pattern of a file; for dish and monopole")
	f.StringVar(&o.horizontal, "horizontal-beamwidth", "", "half-power `WIDTH`, such as 65deg")
	f.StringVar(&o.vertical, "vertical-beamwidth", "", "half-power `WIDTH`, such as 7deg")
	f.StringVar(&o.frontToBack, "front-to-back", "30dB", "`RATIO` of a two-beamwidth pattern")
	f.StringVar(&o.tilt, "electrical-tilt", "0deg", "`TILT` of the beam, down is positive")
	f.StringVar(&o.diameter, "diameter", "", "`DIAMETER` of a dish, such as 0.6m")
	f.StringVar(&o.height, "height", "", "`HEIGHT` of a monopole, such as 0.75m")
	f.StringVar(&o.sense, "vertical-cut", "", "`SENSE` up or down of positive angles in a file's vertical cut")
	f.StringVar(&o.figure, "figure", "", "draw the cuts into `FILE`, an .svg or .png")
	f.BoolVar(&o.polar, "polar", false, "with --figure: draw circles in place of two diagrams")
	f.BoolVar(&o.force, "force", false, "replace the figure if it is there")
	jsonFlag(c, &o.json)
	return c
}

// shownPattern is a pattern with its name and where it came from.
type shownPattern struct {
	name, format, description string
	frequencyHz               float64
	pattern                   antenna.Pattern
	summary                   antenna.Summary
}

func runAntenna(std streams, o antennaOptions, name string) error {
	if ext := strings.ToLower(filepath.Ext(o.figure)); o.figure != "" && ext != ".svg" && ext != ".png" {
		return usageError{"--figure", o.figure, "is no .svg and no .png; write a name that ends so, such as pattern.svg"}
	}
	if o.sense != "" && o.sense != string(antenna.SenseUp) && o.sense != string(antenna.SenseDown) {
		return usageError{"--vertical-cut", o.sense, "is not a sense; write up or down"}
	}
	p, err := o.read(name)
	if err != nil {
		return err
	}
	if o.figure != "" {
		if err := drawPattern(o, p); err != nil {
			return err
		}
	}
	if o.json {
		return printJSON(std, p.json())
	}
	return printAntenna(std, o, p)
}

// read finds the pattern: a built-in one by its name, else a file.
func (o *antennaOptions) read(name string) (shownPattern, error) {
	peak := antenna.Gain(0)
	if o.gain != "" {
		g, _, err := quantity("--gain", o.gain, "17dBi", units.Gain)
		if err != nil {
			return shownPattern{}, err
		}
		peak = antenna.GainFromDBi(g)
	}
	hz := 0.0
	if o.frequency != "" {
		var err error
		if hz, err = frequencyFlag(o.frequency); err != nil {
			return shownPattern{}, err
		}
	}
	if build, ok := builtins[strings.ToLower(name)]; ok {
		p, fixed, err := build(o, peak, hz)
		if err != nil {
			return shownPattern{}, patternError(name, err)
		}
		if peak > 0 && fixed > 0 && math.Abs(peak.DBi()-fixed.DBi()) > 0.05 {
			return shownPattern{}, usageError{"--gain", o.gain, fmt.Sprintf("contradicts the %.2f dBi of the pattern %s; leave the flag out", fixed.DBi(), name)}
		}
		s, err := antenna.Summarize(p, max(peak, fixed))
		if err != nil {
			return shownPattern{}, patternError(name, err)
		}
		return shownPattern{name: strings.ToLower(name), format: "built in", frequencyHz: hz, pattern: p, summary: s}, nil
	}
	in, err := os.Open(name)
	if errors.Is(err, os.ErrNotExist) {
		hint := "give a pattern file, or one of " + strings.Join(builtinNames, ", ")
		if near := units.NearName(name, builtinNames); near != "" {
			hint = fmt.Sprintf("did you mean %q?", near)
		}
		return shownPattern{}, usageError{"FILE or NAME", name, "is neither a file nor a built-in pattern; " + hint}
	}
	if err != nil {
		return shownPattern{}, inputError{name, err}
	}
	defer in.Close()
	f, err := antenna.Read(in, antenna.ReadOptions{FrequencyHz: hz, VerticalSense: antenna.VerticalSense(o.sense)})
	if err != nil {
		return shownPattern{}, patternError(name, err)
	}
	return shownPattern{name: name, format: f.Format, description: f.Description, frequencyHz: f.PatternFrequencyHz, pattern: f.Pattern, summary: f.Summarize(peak)}, nil
}

// drawPattern writes the figure, whole or not at all.
func drawPattern(o antennaOptions, p shownPattern) error {
	fig, err := figure.Pattern(figure.PatternData{
		Name: p.name, Note: p.description, GainDBi: p.gain().DBi(), Cuts: figure.Cuts(p.pattern), Polar: o.polar,
	})
	if err != nil {
		return err
	}
	draw := fig.SVG
	if strings.EqualFold(filepath.Ext(o.figure), ".png") {
		draw = fig.PNG
	}
	data, err := draw()
	if err != nil {
		return err
	}
	return writeWhole(o.figure, data, o.force)
}

// gain is the stated gain, or the directivity where none is stated.
func (p shownPattern) gain() antenna.Gain {
	if p.summary.Gain > 0 {
		return p.summary.Gain
	}
	return p.summary.Directivity
}
