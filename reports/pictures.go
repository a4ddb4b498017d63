package reports

import (
	"bytes"
	"cmp"
	"context"
	"fmt"
	"image/png"
	"runtime"
	"slices"
	"strings"

	"example.org/standclear/exposure"
	"example.org/standclear/reports/figure"
	"golang.org/x/sync/errgroup"
)

// picture is a finished figure: as a file of its own, and for the workbook.
type picture struct {
	name          string // of the files, without extension
	title         string
	width, height float64 // in points
	pixels        int     // width of the PNG
	svg, png      []byte
}

// mostProfiles bounds the figures of ratio against distance; the workbook's
// table has every profile.
const mostProfiles = 12

// drawing is a figure to be drawn.
type drawing struct {
	name string
	draw func() (*figure.Figure, error)
}

// draw makes the figures of an assessment: a plan of each surface, one more
// with contour lines of the ratio where these were computed, each vertical
// section, and the ratio against distance along the main beams.
func draw(ctx context.Context, a *exposure.Assessment) ([]picture, error) {
	var jobs []drawing
	if a.Site != nil {
		for i, s := range a.Site.Surfaces {
			if !slices.ContainsFunc(a.Zones, func(z exposure.Zone) bool { return z.Section == nil && z.Surface == s.ID }) {
				continue // not asked for
			}
			data := figure.PlanData{Site: a.Site, Surface: s.ID, Classes: a.Classes, Zones: a.Zones, Points: a.Points}
			name := fmt.Sprintf("plan-%02d-%s", i+1, slug(s.ID))
			jobs = append(jobs, drawing{name, func() (*figure.Figure, error) { return figure.Plan(data) }})
			for k := range a.Grids {
				g := &a.Grids[k]
				if g.Section != nil || g.Surface != s.ID || !reachesContour(a, g) {
					continue
				}
				data := data
				data.Grid, data.Zones = g, nil
				for _, z := range a.Zones {
					if z.Class == g.Class {
						data.Zones = append(data.Zones, z)
					}
				}
				name := fmt.Sprintf("ratio-%02d-%s-%s", i+1, slug(s.ID), slug(g.Class))
				jobs = append(jobs, drawing{name, func() (*figure.Figure, error) { return figure.Plan(data) }})
			}
		}
	}
	if a.Site != nil {
		for i, c := range cuts(a) {
			jobs = append(jobs, c.drawing(a, i+1))
		}
	}
	for i, lines := range beams(a) {
		data := figure.ProfileData{SiteName: a.SiteName, Lines: lines, Classes: a.Classes, Marks: a.Distances}
		for k := range a.Sources {
			if a.Sources[k].Antenna == lines[0].Antenna {
				data.Source = &a.Sources[k]
			}
		}
		jobs = append(jobs, drawing{fmt.Sprintf("beam-%02d-%s", i+1, slug(lines[0].Antenna)), func() (*figure.Figure, error) { return figure.Profile(data) }})
	}

	out := make([]picture, len(jobs))
	group, ctx := errgroup.WithContext(ctx)
	group.SetLimit(runtime.GOMAXPROCS(0))
	for i, j := range jobs {
		group.Go(func() error {
			if err := ctx.Err(); err != nil {
				return err
			}
			f, err := j.draw()
			if err != nil {
				return fmt.Errorf("figure %s: %w", j.name, err)
			}
			out[i], err = render(j.name, f)
			return err
		})
	}
	return out, group.Wait()
}

// lowestContour is the ratio of the lowest contour line.
const lowestContour = 0.05

// reachesContour reports whether the ratio on a surface reaches the lowest
// contour line anywhere: below it a figure of contours is blank.
func reachesContour(a *exposure.Assessment, g *exposure.RatioGrid) bool {
	for _, z := range a.Zones {
		if z.Surface == g.Surface && z.Class == g.Class && z.Section == nil {
			return z.MaxRatioUpper >= lowestContour
		}
	}
	return true
}

func render(name string, f *figure.Figure) (picture, error) {
	p := picture{name: name, title: oneLine(f.Title)}
	p.width, p.height = f.Size()
	var err error
	if p.svg, err = f.SVG(); err != nil {
		return p, fmt.Errorf("figure %s: %w", name, err)
	}
	if p.png, err = f.PNG(); err != nil {
		return p, fmt.Errorf("figure %s: %w", name, err)
	}
	size, err := png.DecodeConfig(bytes.NewReader(p.png))
	p.pixels = size.Width
	return p, err
}

// beams picks the profiles to draw: of each housing the row whose boundary
// reaches farthest, one line a class. Rows of one housing look the same way, and
// a figure for each would bury the one that matters.
func beams(a *exposure.Assessment) [][]exposure.Profile {
	reach := map[string]float64{}
	for _, d := range a.Distances {
		if d.Antenna != "" {
			reach[d.Antenna] = max(reach[d.Antenna], d.DistanceM)
		}
	}
	housing := map[string]string{}
	if a.Site != nil {
		for _, s := range a.Site.Sources {
			housing[s.ID] = s.Housing
		}
	}
	type beam struct {
		antenna string
		lines   []exposure.Profile
	}
	at := map[string]int{}
	var out []beam
	for _, p := range a.Profiles {
		if !drawable(p) {
			continue
		}
		key := "housing " + housing[p.Antenna]
		if housing[p.Antenna] == "" {
			key = "row " + p.Antenna
		}
		i, ok := at[key]
		switch {
		case !ok:
			at[key] = len(out)
			out = append(out, beam{p.Antenna, []exposure.Profile{p}})
		case out[i].antenna == p.Antenna:
			out[i].lines = append(out[i].lines, p)
		case reach[p.Antenna] > reach[out[i].antenna]:
			out[i] = beam{p.Antenna, []exposure.Profile{p}}
		}
	}
	if len(out) > mostProfiles {
		slices.SortStableFunc(out, func(x, y beam) int { return cmp.Compare(reach[y.antenna], reach[x.antenna]) })
		out = out[:mostProfiles]
	}
	lines := make([][]exposure.Profile, len(out))
	for i := range out {
		lines[i] = out[i].lines
	}
	return lines
}

// drawable reports whether a profile has anything for a logarithmic axis.
func drawable(p exposure.Profile) bool {
	for i, r := range p.Ratio {
		if r > 0 && p.DistanceM[i] > 0 {
			return true
		}
	}
	return false
}

// slug makes a harmless file name part of any text: a name the user typed never
// becomes a path.
func slug(text string) string {
	const most = 32
	var b strings.Builder
	for _, r := range strings.ToLower(text) {
		switch {
		case r >= 'a' && r <= 'z' || r >= '0' && r <= '9':
			b.WriteRune(r)
		case b.Len() > 0 && !strings.HasSuffix(b.String(), "-"):
			b.WriteByte('-')
		}
		if b.Len() >= most {
			break
		}
	}
	if s := strings.Trim(b.String(), "-"); s != "" {
		return s
	}
	return "unnamed"
}
