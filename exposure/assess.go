package exposure

import (
	"context"
	"fmt"
	"math"
	"sort"
	"strings"

	"golang.org/x/sync/errgroup"
)

// Assess answers every question about the site at once: the field at each
// place, the distances of each row, housing and of all, and the boundary of
// each class on each surface. Everything that is printed comes from the value
// it returns.
func (m *Model) Assess(ctx context.Context, o AssessOptions) (*Assessment, error) {
	a := &Assessment{
		Program: o.Program, Site: m.site, SiteName: m.site.About.Name, Ground: m.groundText(),
		StateOn: m.site.OnlyOn, Classes: m.Classes(), Sources: m.Sources(),
		Warnings: append([]Warning{}, m.site.Inputs.Warnings...), Notices: m.Notices(),
		Inputs: m.site.Inputs.Files, Coverage: o.Coverage,
	}
	// Each step fills its own fields, so that the steps of a stage can run side by
	// side: what they come to does not depend on the order.
	err := together(ctx,
		func(ctx context.Context) (err error) {
			a.Points, err = m.Field(ctx, m.site.Places)
			return err
		},
		func(ctx context.Context) (err error) {
			a.Distances, err = m.Distances(ctx, DistanceQuery{Coverage: o.Coverage})
			return err
		},
		func(ctx context.Context) (err error) {
			a.Zones, err = m.Zones(ctx, ZoneQuery{ResolutionM: o.ResolutionM})
			return err
		},
	)
	if err != nil {
		return nil, err
	}
	if left := len(m.housings()) - mostSections; left > 0 {
		a.Notices = append(a.Notices, fmt.Sprintf("Vertical sections are drawn through the %d housings whose boundary reaches farthest; %d other housings have none.", mostSections, left))
	}
	err = together(ctx, append(m.planned(a),
		func(ctx context.Context) (err error) {
			if a.Sections, err = m.housingSections(ctx, a.Distances, o.ResolutionM); err != nil {
				return err
			}
			if a.BoundaryPoints, err = m.BoundaryPoints(ctx, a.Zones, a.Sections); err != nil {
				return err
			}
			a.Grids, err = m.Grids(ctx, a.Zones, a.Sections)
			return err
		},
		func(context.Context) error {
			a.Profiles = m.Profiles(a.Distances)
			return nil
		},
	)...)
	if err != nil {
		return nil, err
	}
	return a, ctx.Err()
}

// together runs the steps side by side and returns the first error.
func together(ctx context.Context, steps ...func(context.Context) error) error {
	g, ctx := errgroup.WithContext(ctx)
	for _, step := range steps {
		g.Go(func() error { return step(ctx) })
	}
	return g.Wait()
}

func (m *Model) groundText() string {
	g := m.site.Ground
	switch g.Method {
	case GroundFactor:
		return fmt.Sprintf("factor %g on E and H", g.Factor)
	case GroundFresnel:
		return fmt.Sprintf("two rays over ground at %g m, permittivity %g, conductivity %g S/m", g.Z, g.Permittivity, g.Conductivity)
	}
	return "none"
}

// Notices says what an assessor must know that belongs to no cell: what the
// model leaves out, and what was left out of it.
func (m *Model) Notices() []string {
	var out []string
	if m.site.Ground.Method == GroundNone {
		out = append(out, "No reflection is counted. One reflection from ground, roof or wall can raise S up to fourfold; the verdicts that would change at field factors 1.6 and 2 are named.")
	}
	if m.site.OnlyOn {
		var left []string
		for i := range m.site.Sources {
			if m.site.Sources[i].State == Standby {
				left = append(left, m.site.Sources[i].ID)
			}
		}
		if len(left) > 0 {
			out = append(out, "Only rows that are on are counted; left out on standby: "+listText(left)+".")
		}
	}
	for i := range m.sources {
		if s := m.sources[i].src; s.Power.Unknown {
			out = append(out, "The power of "+s.ID+" is unknown: every verdict it reaches is \"not assessed\" unless the other antennas alone are above.")
		}
	}
	if !m.site.Limits.Confirmed() {
		out = append(out, "Nobody has confirmed this transcription of the limits against its source.")
	}
	out = append(out, m.sharedFrequencies()...)
	return out
}

// sharedFrequencies lists rows at one frequency without a common signal: they
// add as powers, which understates them if they carry the same signal.
func (m *Model) sharedFrequencies() []string {
	by := map[float64][]string{}
	var order []float64
	seen := map[string]bool{}
	for i := range m.sources {
		s := m.sources[i].src
		if s.Signal != "" {
			if seen[s.Signal] {
				continue
			}
			seen[s.Signal] = true
		}
		if len(by[s.FrequencyHz]) == 0 {
			order = append(order, s.FrequencyHz)
		}
		by[s.FrequencyHz] = append(by[s.FrequencyHz], s.ID)
	}
	sort.Float64s(order)
	var groups []string
	for _, f := range order {
		if ids := by[f]; len(ids) > 1 {
			groups = append(groups, frequencyText(f)+": "+listText(ids))
		}
	}
	if len(groups) == 0 {
		return nil
	}
	return []string{"Rows at one frequency without a common signal add as powers. If they carry one signal, give them one name in the column signal. " + strings.Join(groups, "; ") + "."}
}

// profilePoints is the number of distances of a profile, spaced evenly in their
// logarithm.
const profilePoints = 121

// Profiles samples the exposure ratio along each row's main beam, each row
// alone, from a tenth of a metre to three times its keep-out distance.
func (m *Model) Profiles(distances []Distance) []Profile {
	var out []Profile
	for i := range m.sources {
		c := &m.sources[i]
		if c.silent() {
			continue
		}
		beam := c.mainBeam()
		for _, r := range m.rules {
			reach := 0.0
			for _, d := range distances {
				if d.Antenna == c.src.ID && d.Class == r.class {
					reach = math.Max(reach, d.DistanceM)
				}
			}
			far := math.Max(3*reach, 10)
			e := m.evaluator(r, func(j int) bool { return j == i }, m.groundFactor(0), siteFrame, 1)
			p := Profile{
				Antenna: c.src.ID, Class: r.class,
				AzimuthDeg:   bearing(math.Atan2(beam.X, beam.Y) + m.site.About.GridBearingRad),
				ElevationDeg: degrees(math.Asin(beam.Z)),
			}
			for k := 0; k < profilePoints; k++ {
				d := 0.1 * math.Pow(far/0.1, float64(k)/(profilePoints-1))
				at := c.src.Position.Add(beam.Scale(d))
				_, v := e.at(at)
				p.DistanceM = append(p.DistanceM, d)
				p.Ratio = append(p.Ratio, Number(v))
				p.Method = append(p.Method, c.methodAt(at))
			}
			out = append(out, p)
		}
	}
	return out
}

// mainBeam is the direction of a source's largest radiation straight ahead:
// the elevation of the largest gain at zero azimuth.
func (c *compiled) mainBeam() Point {
	best, at := -1.0, 0.0
	for k := -900; k <= 900; k++ {
		theta := float64(k) / 10 * math.Pi / 180
		// Of equal directions the one nearest the horizon.
		if g := c.src.Pattern.Relative(0, theta); g > best+1e-12 || g > best-1e-12 && math.Abs(theta) < math.Abs(at) {
			best, at = g, theta
		}
	}
	a := c.src.Pose.Axes()
	s, k := math.Sincos(at)
	return a.Boresight.Scale(k).Add(a.Up.Scale(s))
}
