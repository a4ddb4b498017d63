package exposure

import (
	"context"
	"fmt"
	"math"
	"reflect"
	"sync"
	"sync/atomic"

	"example.org/standclear/antenna"
)

// target is what a distance is measured from: a row, a housing or all.
type target struct {
	antenna, housing string
	all              bool
	members          []int
	centre           Point
	axes             [6]axis
}

// axis is one direction in which a distance is measured.
type axis struct {
	name string
	dir  Point
}

// Distances returns keep-out distances for every row, every housing and
// everything together, by class. Without a direction each target has six: the
// extents of the smallest box that holds the boundary volume. With one, the
// outermost crossing of the boundary along the ray. A row or a housing is taken
// alone. Distances are measured from the row's centre of radiation, for a
// housing and for all from the mean of their centres, and never fall short of
// the boundary by construction; BracketM says by how much they may exceed it.
func (m *Model) Distances(ctx context.Context, q DistanceQuery) ([]Distance, error) {
	rules, err := m.rulesFor(q.Classes)
	if err != nil {
		return nil, err
	}
	targets := m.targets(q)
	type job struct {
		t *target
		r *rule
	}
	var jobs []job
	for i := range targets {
		for _, r := range rules {
			jobs = append(jobs, job{&targets[i], r})
		}
	}
	// Targets that are alike but for where they stand and which way they face
	// have the same extents: the first of them is searched, the others copy it.
	first := make([]int, len(jobs))
	var unique []int
	for i, j := range jobs {
		first[i] = i
		for _, k := range unique {
			if q.Direction == nil && jobs[k].r == j.r && m.alike(jobs[k].t, j.t, q.Coverage != nil) {
				first[i] = k
				break
			}
		}
		if first[i] == i {
			unique = append(unique, i)
		}
	}
	results := make([][]Distance, len(jobs))
	errs := make([]error, len(jobs))
	var next, done atomic.Int64
	var group sync.WaitGroup
	for w := 0; w < min(m.options.Workers, len(unique)); w++ {
		group.Add(1)
		go func() {
			defer group.Done()
			for {
				// From the last to the first: everything together takes longest.
				i := len(unique) - int(next.Add(1))
				if i < 0 || ctx.Err() != nil {
					return
				}
				k := unique[i]
				results[k], errs[k] = m.distances(ctx, jobs[k].t, jobs[k].r, q.Direction, q.Coverage)
				if n := done.Add(1); m.options.Progress != nil {
					m.options.Progress(float64(n) / float64(len(unique)))
				}
			}
		}()
	}
	group.Wait()
	for i := range jobs {
		if k := first[i]; k != i && errs[k] == nil && ctx.Err() == nil {
			results[i] = m.copied(results[k], jobs[i].t, jobs[i].r)
		}
	}
	var out []Distance
	for i := range results {
		if errs[i] != nil {
			return nil, errs[i]
		}
		out = append(out, results[i]...)
	}
	return out, ctx.Err()
}

// targets lists what was asked for, rows first.
func (m *Model) targets(q DistanceQuery) []target {
	each := !q.Rows && !q.Housings && !q.All
	var out []target
	if each || q.Rows {
		for i := range m.sources {
			s := m.sources[i].src
			out = append(out, target{antenna: s.ID, members: []int{i}, centre: s.Position, axes: antennaAxes(s.Pose.Axes())})
		}
	}
	if each || q.Housings {
		at := map[string]int{}
		from := len(out)
		for i := range m.sources {
			h := m.sources[i].src.Housing
			if h == "" {
				continue
			}
			if _, ok := at[h]; !ok {
				at[h] = len(out)
				out = append(out, target{housing: h})
			}
			t := &out[at[h]]
			t.members = append(t.members, i)
		}
		for i := from; i < len(out); i++ {
			m.settle(&out[i])
		}
	}
	if (each || q.All) && len(m.sources) > 0 {
		t := target{all: true}
		for i := range m.sources {
			t.members = append(t.members, i)
		}
		m.settle(&t)
		t.axes = m.compass()
		out = append(out, t)
	}
	return out
}

// settle gives a group of rows its centre and its directions: those of the
// antenna where all point the same way, else the compass.
func (m *Model) settle(t *target) {
	first := m.sources[t.members[0]].src.Pose
	same := true
	for _, i := range t.members {
		s := m.sources[i].src
		t.centre = t.centre.Add(s.Position)
		same = same && s.Pose.AzimuthRad == first.AzimuthRad
	}
	t.centre = t.centre.Scale(1 / float64(len(t.members)))
	if same {
		for _, i := range t.members {
			if m.sources[i].src.Pose != first {
				first.TiltRad, first.RollRad = 0, 0
			}
		}
		t.axes = antennaAxes(first.Axes())
		return
	}
	t.axes = m.compass()
}

func antennaAxes(a antenna.Axes) [6]axis {
	return [6]axis{
		{"front", a.Boresight}, {"back", a.Boresight.Scale(-1)},
		{"left", a.Right.Scale(-1)}, {"right", a.Right},
		{"up", a.Up}, {"down", a.Up.Scale(-1)},
	}
}

// compass is true north, east and up in the site's frame.
func (m *Model) compass() [6]axis {
	s, c := math.Sincos(m.site.About.GridBearingRad)
	north, east := Point{X: -s, Y: c}, Point{X: c, Y: s}
	return [6]axis{
		{"north", north}, {"east", east}, {"south", north.Scale(-1)}, {"west", east.Scale(-1)},
		{"up", Point{Z: 1}}, {"down", Point{Z: -1}},
	}
}

// alike reports whether two targets have the same extents: the same rows but for
// their names, places and bearings, arranged the same way in frames that are
// turned the same way. Ground rays tie a source to its place.
func (m *Model) alike(a, b *target, uncertainties bool) bool {
	if a.all || b.all || len(a.members) != len(b.members) || len(a.members) > 32 || m.site.Ground.Method == GroundFresnel {
		return false
	}
	fa, fb := a.frame(), b.frame()
	for i := range a.members {
		x, y := &m.sources[a.members[i]], &m.sources[b.members[i]]
		s, t := *x.src, *y.src
		if s.Signal != "" || t.Signal != "" || a.axes[0].name != b.axes[0].name {
			return false
		}
		const near = 1e-9
		if fa.point(s.Position).Sub(fb.point(t.Position)).Norm() > near {
			return false
		}
		p, q := s.Pose.Axes(), t.Pose.Axes()
		if fa.vector(p.Boresight).Sub(fb.vector(q.Boresight)).Norm() > near || fa.vector(p.Up).Sub(fb.vector(q.Up)).Norm() > near {
			return false
		}
		s.ID, s.Operator, s.OperatorReference, s.Service, s.Housing, s.Transmitter = t.ID, t.Operator, t.OperatorReference, t.Service, t.Housing, t.Transmitter
		s.State, s.DataFrom, s.DataDate, s.Row, s.Position, s.Pose = t.State, t.DataFrom, t.DataDate, t.Row, t.Position, t.Pose
		if !uncertainties {
			s.Uncertainty = t.Uncertainty
		}
		if !reflect.DeepEqual(s, t) {
			return false
		}
	}
	return true
}

// frame is the target's centre with its first, right-hand and up directions.
func (t *target) frame() frame {
	return frame{t.centre, t.axes[0].dir, t.axes[3].dir, t.axes[4].dir}
}

// copied gives a target the distances of one that is alike.
func (m *Model) copied(from []Distance, t *target, r *rule) []Distance {
	out := append([]Distance(nil), from...)
	for i := range out {
		d := &out[i]
		d.Antenna, d.Housing, d.Reason = t.antenna, t.housing, m.unsure(r, t.members)
		d.AzimuthDeg, d.ElevationDeg = m.bearings(t.axes[i].dir)
	}
	return out
}

// bearings returns the true azimuth and the elevation of a direction in deg.
func (m *Model) bearings(dir Point) (azimuth, elevation float64) {
	if math.Hypot(dir.X, dir.Y) > 1e-9 {
		azimuth = bearing(math.Atan2(dir.X, dir.Y) + m.site.About.GridBearingRad)
	}
	return azimuth, degrees(math.Asin(math.Max(-1, math.Min(1, dir.Z))))
}

// distances answers one target and class.
func (m *Model) distances(ctx context.Context, t *target, r *rule, ray *RayDirection, coverage *Coverage) ([]Distance, error) {
	member := map[int]bool{}
	for _, i := range t.members {
		member[i] = true
	}
	include := func(i int) bool { return member[i] }
	axes := t.axes[:]
	kind := "extent"
	if ray != nil {
		// The ray's azimuth counts from true north, the frame's from the y axis.
		sa, ca := math.Sincos(ray.AzimuthRad - m.site.About.GridBearingRad)
		se, ce := math.Sincos(ray.ElevationRad)
		axes = []axis{{"", Point{X: sa * ce, Y: ca * ce, Z: se}}}
		kind = "ray"
	}
	reason := m.unsure(r, t.members)
	var out []Distance
	for i := range axes {
		a := &axes[i]
		d := Distance{
			Antenna: t.antenna, Housing: t.housing, All: t.all, Alone: !t.all, Class: r.class, Kind: kind, Direction: a.name,
			Verdict: Above, Reason: reason,
		}
		d.AzimuthDeg, d.ElevationDeg = m.bearings(a.dir)
		if ray != nil {
			d.Direction = fmt.Sprintf("azimuth %.4g deg, elevation %.4g deg", d.AzimuthDeg, d.ElevationDeg)
		}
		f := facing(t.centre, a.dir)
		e := m.evaluator(r, include, m.groundFactor(0), f, 1)
		radius := e.radius(f, m, t.members)
		if math.IsInf(radius, 1) {
			return nil, fmt.Errorf("%s: no distance is known beyond which the ratio stays below the limit", t.name())
		}
		var b bracket
		if ray != nil {
			b = e.outermost(ctx, radius)
		} else {
			b = e.reachAlong(ctx, radius)
			e.aim(ctx, &b, f, m, t.members, radius)
		}
		d.DistanceM, d.BracketM = b.outer, b.outer-b.inner
		if b.none {
			d.Verdict = Within
		}
		if reason != "" && b.none {
			d.Verdict = NotAssessed
		}
		d.GovernedBy = e.governs(Point{X: math.Max(b.outer, 1e-3)})
		if !b.none {
			tip := b.at
			if ray != nil {
				tip = Point{X: b.outer}
			}
			d.end = &farEnd{centre: t.centre, dir: a.dir, tip: tip, members: t.members, housed: t.antenna != "" && m.sources[t.members[0]].src.Housing != ""}
		}
		if coverage != nil && !b.none && b.outer > 2*boxSlack { // a boundary ahead of the centre
			if err := m.cover(ctx, &d, e, f, b, coverage); err != nil {
				return nil, err
			}
		}
		out = append(out, d)
	}
	return out, ctx.Err()
}

func (t *target) name() string {
	switch {
	case t.antenna != "":
		return "antenna " + t.antenna
	case t.housing != "":
		return "housing " + t.housing
	}
	return "all antennas"
}

// unsure says why a distance for these rows may be too short.
func (m *Model) unsure(r *rule, members []int) string {
	var why []string
	for _, i := range members {
		s := &m.sources[i]
		if s.src.Power.Unknown {
			why = append(why, "power of "+s.src.ID+" unknown")
		} else if !r.covers[i] && !s.silent() {
			why = append(why, "no limit in some group at "+frequencyText(s.src.FrequencyHz)+" ("+s.src.ID+")")
		}
	}
	return joinReasons(why)
}

func degrees(rad float64) float64 { return nano(rad*180/math.Pi) + 0 } // + 0: never -0

// bearing brings an angle in rad into [0, 360) deg.
func bearing(rad float64) float64 {
	d := degrees(rad)
	d -= 360 * math.Floor(d/360)
	if d >= 360 {
		d = 0
	}
	return d
}

// facing is a frame at origin whose x axis is dir.
func facing(origin, dir Point) frame {
	side := Point{Z: 1}
	if math.Abs(dir.Z) > 0.9 {
		side = Point{X: 1}
	}
	y := side.Cross(dir)
	y = y.Scale(1 / y.Norm())
	return frame{origin, dir, y, dir.Cross(y)}
}

// governs names the group with the largest ratio at p.
func (e *evaluator) governs(p Point) string {
	if e.ng == 0 {
		return ""
	}
	by, _ := e.at(p)
	_, g := by.largest(e.ng)
	return e.rule.groups[g].String()
}

// radius is a distance from the frame's origin beyond which the ratio is below
// the share and every reactive region ends; zero when nothing radiates.
func (e *evaluator) radius(f frame, m *Model, members []int) float64 {
	if len(e.terms) == 0 {
		return 0
	}
	centres := make([][]float64, len(e.terms))
	least := 0.0
	for i := range e.terms {
		for j, source := range e.terms[i].source {
			d := f.point(m.sources[source].src.Position).Norm()
			centres[i] = append(centres[i], d)
			p := e.terms[i].em[j].(placed).where()
			least = math.Max(least, d+math.Hypot(p.halfLength, p.halfWidth)+p.reactive+0.01)
		}
	}
	r := math.Max(least, 0.1)
	for e.farBound(r, centres) > e.share {
		r *= 1.3
		if r > 1e8 {
			return math.Inf(1)
		}
	}
	return r
}

// bracket encloses the coordinate of the outermost point of the boundary.
type bracket struct {
	inner, outer float64
	none         bool  // the ratio is at or below the share everywhere looked at
	at           Point // the point found above the share that reaches farthest, in the frame
}

// decide says what is known of a box: +1 all of it above the share, -1 none of
// it, 0 open; inside a reactive region it counts as above for the outer side only.
func (e *evaluator) decide(b box) (verdict int, reactive bool) {
	b.h = b.h.Add(Point{X: boxSlack, Y: boxSlack, Z: boxSlack})
	switch e.reaches(b) {
	case unreached:
		return 0, true
	case partReach:
		return 0, false
	}
	lo, hi := e.over(b)
	switch {
	case hi <= e.share:
		return -1, false
	case lo > e.share:
		return 1, false
	}
	return 0, false
}

// outermost finds the last crossing along the frame's x axis within radius, by
// halving from the far end inward; the part that reactive regions cover counts.
func (e *evaluator) outermost(ctx context.Context, radius float64) bracket {
	gap := math.Max(1e-9, radius*1e-9)
	type part struct{ lo, hi float64 }
	work := []part{{0, radius}}
	for len(work) > 0 && ctx.Err() == nil {
		p := work[len(work)-1]
		work = work[:len(work)-1]
		b := box{c: Point{X: (p.lo + p.hi) / 2}, h: Point{X: (p.hi - p.lo) / 2}}
		v, reactive := e.decide(b)
		if v < 0 {
			continue
		}
		if v > 0 || reactive {
			return bracket{inner: p.hi, outer: p.hi + boxSlack}
		}
		if p.hi-p.lo <= gap {
			return bracket{inner: p.lo, outer: p.hi + boxSlack}
		}
		mid := (p.lo + p.hi) / 2
		work = append(work, part{p.lo, mid}, part{mid, p.hi})
	}
	return bracket{none: true}
}
