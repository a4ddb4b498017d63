package reports

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"slices"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
	"example.org/standclear/reports/figure"
)

// readingsJSON writes what was measured as one JSON object.
func readingsJSON(w io.Writer, r *survey.Result) error {
	out := json.NewEncoder(w)
	out.SetEscapeHTML(false)
	out.SetIndent("", "  ")
	return out.Encode(r)
}

// readingsCaution is at the foot of a figure of readings.
const readingsCaution = "Readings under the conditions of the day, for a licensed assessor to check. No permit to enter."

// leastDay is how long in s a log lasts at least to be drawn by hour of the day.
const leastDay = 3 * 3600

// drawReadings makes the figures of a survey: measured against predicted field,
// and for each log its course and its mean by hour of the day.
func drawReadings(ctx context.Context, a *exposure.Assessment, r *survey.Result) ([]picture, error) {
	if r == nil {
		return nil, nil
	}
	var out []picture
	add := func(name string, f *figure.Figure, err error) error {
		if err == nil {
			err = ctx.Err()
		}
		if err != nil {
			return fmt.Errorf("figure %s: %w", name, err)
		}
		p, err := render(name, f)
		out = append(out, p)
		return err
	}
	if d, ok := scatter(a, r); ok {
		f, err := figure.Scatter(d)
		if err := add("readings", f, err); err != nil {
			return nil, err
		}
	}
	for i := range r.Series {
		s := &r.Series[i]
		if len(s.Curve) < 2 || s.FieldVPerM == nil {
			continue
		}
		f, err := figure.Series(logCurve(s))
		if err := add(fmt.Sprintf("log-%02d-%s", i+1, slug(s.Series)), f, err); err != nil {
			return nil, err
		}
		if s.DurationS >= leastDay {
			f, err := figure.Series(dailyCurve(s))
			if err := add(fmt.Sprintf("day-%02d-%s", i+1, slug(s.Series)), f, err); err != nil {
				return nil, err
			}
		}
	}
	return out, nil
}

// scatter gathers what was measured and predicted; a group stands for its
// readings.
func scatter(a *exposure.Assessment, r *survey.Result) (figure.ScatterData, bool) {
	d := figure.ScatterData{Title: "Readings and prediction", Note: oneLine(a.SiteName), Caution: readingsCaution}
	var widths []float64
	add := func(label string, c survey.Comparison, field, expanded *float64, below bool) {
		if field == nil || c.PredictedVPerM == nil || c.DifferenceDB == nil {
			return
		}
		p := figure.Comparison{Label: label, PredictedVPerM: *c.PredictedVPerM, MeasuredVPerM: *field, BelowFloor: below, AboveCombined: !c.Explained && !below}
		if expanded != nil {
			p.ExpandedUncertaintyDB = *expanded
		}
		widths = append(widths, c.CombinedDB)
		d.Points = append(d.Points, p)
	}
	for _, x := range r.Readings {
		if x.Group == "" {
			add(x.ID, x.Comparison, x.FieldVPerM, x.ExpandedDB, x.BelowFloor)
		}
	}
	for _, x := range r.Groups {
		add(x.Group, x.Comparison, x.FieldVPerM, x.ExpandedDB, x.BelowFloor)
	}
	for _, x := range r.Series {
		add(x.Series, x.Comparison, x.FieldVPerM, x.ExpandedDB, false)
	}
	if len(widths) > 0 {
		slices.Sort(widths)
		d.BandDB = widths[len(widths)/2] // the marks go by each reading's own
	}
	return d, len(d.Points) > 0
}

// logCurve is a log for a figure.
func logCurve(s *survey.SeriesResult) figure.SeriesData {
	d := figure.SeriesData{
		Title: "Log " + oneLine(s.Series) + " at " + oneLine(s.Place), Note: "from " + s.First + " to " + s.Last,
		AveragingS: s.AveragingS, LimitVPerM: s.LevelVPerM, LimitLabel: "lowest level of the limits supplied over the band",
		LargestTimeS: float64(s.LargestEndNS-s.FirstNS) / 1e9, LargestVPerM: s.Largest, Caution: readingsCaution,
	}
	at := func(ns int64) float64 { return float64(ns-s.FirstNS) / 1e9 }
	for _, c := range s.Curve {
		low, high, mean := c[0], c[1], c[2]
		if high.NS < low.NS {
			low, high = high, low
		}
		d.TimeS, d.FieldVPerM = append(d.TimeS, at(low.NS)), append(d.FieldVPerM, low.Value)
		if high.NS != low.NS {
			d.TimeS, d.FieldVPerM = append(d.TimeS, at(high.NS)), append(d.FieldVPerM, high.Value)
		}
		if s.AveragingS > 0 && !math.IsNaN(mean.Value) {
			d.MeanTimeS, d.MeanVPerM = append(d.MeanTimeS, at(mean.NS)), append(d.MeanVPerM, mean.Value)
		}
	}
	return d
}

// dailyCurve is the mean over each hour of the day, drawn as steps.
func dailyCurve(s *survey.SeriesResult) figure.SeriesData {
	d := figure.SeriesData{Title: "Log " + oneLine(s.Series) + " by hour of the day", Note: "root-mean-square over each hour, by the log's own clock; time from midnight", Caution: readingsCaution}
	for _, h := range s.Daily {
		d.TimeS = append(d.TimeS, float64(h.Hour)*3600, float64(h.Hour+1)*3600)
		d.FieldVPerM = append(d.FieldVPerM, h.FieldVPerM, h.FieldVPerM)
	}
	return d
}
