package exposure

import (
	"context"
	"fmt"
	"math"
	"strconv"
	"sync"
	"sync/atomic"
)

// Field returns the field, each source's part of it and the exposure ratio of
// every class at each place, in the order of the places. Where a body stands at
// the place (To > 0) each class's ratio is the largest or the mean over the
// body, as its limit rows ask, and the fields are those at the height of the
// largest ratio.
//
// The point's E and H are root-sum-squares over signals and S is their sum; S
// of a signal is the larger of E^2/Z0 and Z0 H^2. Rows that share a signal add
// in amplitude first.
func (m *Model) Field(ctx context.Context, places []Place) ([]PointResult, error) {
	out := make([]PointResult, len(places))
	errs := make([]error, len(places))
	var next, done atomic.Int64
	var group sync.WaitGroup
	for w := 0; w < min(m.options.Workers, len(places)); w++ {
		group.Add(1)
		go func() {
			defer group.Done()
			sets := map[float64]*fieldSet{}
			for {
				i := int(next.Add(1)) - 1
				if i >= len(places) || ctx.Err() != nil {
					return
				}
				out[i], errs[i] = m.fieldAt(&places[i], sets)
				if n := done.Add(1); m.options.Progress != nil {
					m.options.Progress(float64(n) / float64(len(places)))
				}
			}
		}()
	}
	group.Wait()
	for _, err := range errs {
		if err != nil {
			return nil, err
		}
	}
	return out, ctx.Err()
}

// fieldSet is every class made ready for places that share one field factor of
// ground and wall: all sources together, and each alone.
type fieldSet struct {
	factor, ground float64
	rules          []*rule       // as they compare a body here
	all            []*evaluator  // by rule
	alone          [][]*evalTerm // by rule and source; nil where the source is silent
}

func (m *Model) fieldSet(pl *Place, sets map[float64]*fieldSet) *fieldSet {
	ground := m.placeFactor(pl)
	factor := ground * math.Sqrt(orOne(pl.WallLoss)) // of ground and wall together
	key := factor
	if m.largestCounts(pl) {
		key = -factor // field factors are positive: the other sign keeps them apart
	}
	if s := sets[key]; s != nil && s.ground == ground {
		return s
	}
	s := &fieldSet{factor: factor, ground: ground}
	for _, r := range m.rules {
		if key < 0 {
			r = r.asLargest()
		}
		s.rules = append(s.rules, r)
		e := m.evaluator(r, nil, factor, siteFrame, 1)
		alone := make([]*evalTerm, len(m.sources))
		for i := range e.terms {
			t := &e.terms[i]
			for j, source := range t.source {
				alone[source] = &evalTerm{em: t.em[j : j+1], pw: t.pw[j : j+1], w: t.w, one: true, rot: t.rot[j : j+1]}
			}
		}
		s.all = append(s.all, e)
		s.alone = append(s.alone, alone)
	}
	sets[key] = s
	return s
}

// fieldAt answers one place.
func (m *Model) fieldAt(pl *Place, sets map[float64]*fieldSet) (PointResult, error) {
	if pl.To < pl.From || pl.From < 0 {
		return PointResult{}, fmt.Errorf("place %s: a body from %v to %v m", pl.ID, pl.From, pl.To)
	}
	if low := m.lowFor(pl.At.Z + pl.From); low != "" {
		return PointResult{}, fmt.Errorf("place %s lies %s", pl.ID, low)
	}
	set := m.fieldSet(pl, sets)
	res := PointResult{ID: pl.ID, XM: pl.At.X, YM: pl.At.Y, ZM: pl.At.Z, Class: pl.Class, Place: pl}
	foot, head := pl.At.Z+pl.From, pl.At.Z+pl.To
	heights := make([]float64, len(m.rules))
	shown, best := foot, -1.0 // the height at which the fields are printed
	for i, r := range set.rules {
		by, at := set.all[i].body(pl.At.X, pl.At.Y, foot, head, r.anyMean)
		heights[i] = at
		c := m.judge(r, by, box{c: Point{X: pl.At.X, Y: pl.At.Y}}.heights(foot, head), set.ground)
		res.Ratios = append(res.Ratios, c)
		if rank := float64(c.ExposureRatio); rank > best && (!contains(m.classes, pl.Class) || pl.Class == r.class) {
			best, shown = rank, at
		}
	}
	res.HeightM = shown - pl.At.Z
	return res, m.parts(&res, pl, Point{X: pl.At.X, Y: pl.At.Y, Z: shown}, set, heights)
}

// largestCounts reports whether the place stands on a surface that compares the
// largest over the body, whatever the limit rows say.
func (m *Model) largestCounts(pl *Place) bool {
	s := m.surface(pl.On)
	return pl.On != "" && s != nil && s.Averaging == AveragePeak
}

// placeFactor is the ground's field factor at a place: that of the surface it
// stands on, else the site's.
func (m *Model) placeFactor(pl *Place) float64 {
	if s := m.surface(pl.On); pl.On != "" && s != nil {
		return m.groundFactor(s.GroundFactor)
	}
	return m.groundFactor(0)
}

// judge makes the verdict of a class from its ratios by group.
func (m *Model) judge(r *rule, by groupRatios, body box, k float64) ClassRatio {
	total, at := by.largest(len(r.groups))
	c := ClassRatio{Class: r.class, ExposureRatio: Number(total), Covered: len(r.uncovered) == 0, Verdict: Within}
	if len(r.groups) > 0 {
		c.GovernedBy = r.groups[at].String()
	}
	for i, g := range r.groups {
		c.Groups = append(c.Groups, GroupRatio{g.String(), Number(by[i])})
	}
	reason := append([]string(nil), r.uncovered...)
	reason = append(reason, m.reactiveAt(body)...)
	limit := 1.0
	if body.h.Z > boxSlack {
		limit -= bodyGap // the largest over the body is known to within this
	}
	switch {
	case total > limit:
		c.Verdict = Above
	case len(reason) > 0:
		c.Verdict = NotAssessed
	}
	c.Reason = joinReasons(reason)
	if c.Verdict == Within && m.site.Ground.Method == GroundNone && k == 1 {
		for _, factor := range []float64{GroundFactorEPA, GroundFactorFull} {
			for i, g := range r.groups {
				x := by[i] * factor * factor
				if g.Effect == "stimulation" {
					x = by[i] * factor
				}
				if x > 1 {
					c.GroundFlips = append(c.GroundFlips, factor)
					break
				}
			}
		}
	}
	return c
}

// joinReasons writes several reasons as one line.
func joinReasons(reasons []string) string {
	out := ""
	for i, r := range reasons {
		if i > 0 {
			out += "; "
		}
		out += r
	}
	return out
}

// reactiveAt names the sources inside whose reactive region some of the body
// stands.
func (m *Model) reactiveAt(body box) []string {
	var out []string
	for i := range m.sources {
		s := &m.sources[i]
		if s.reactive == 0 || s.silent() || !touches(s.em, body) {
			continue
		}
		out = append(out, fmt.Sprintf("inside the reactive region of %s (%s m from it), which the method %q does not reach: measure", s.src.ID, metres(s.reactive), s.method))
	}
	return out
}

// touches says whether any point of a vertical line is unreached, by halving
// the line down to a millimetre.
func touches(em emitter, b box) bool {
	switch em.reaches(b) {
	case reached:
		return false
	case unreached:
		return true
	}
	if b.h.Z < 0.0005 {
		return true
	}
	low, high := b, b
	low.h.Z, high.h.Z = b.h.Z/2, b.h.Z/2
	low.c.Z -= low.h.Z
	high.c.Z += high.h.Z
	return touches(em, low) || touches(em, high)
}

// metres writes a length for a message.
func metres(m float64) string { return strconv.FormatFloat(m, 'f', 3, 64) }

// parts fills in the fields and each source's contribution: fields at p, each
// class's ratios at that class's own governing height.
func (m *Model) parts(res *PointResult, pl *Place, p Point, set *fieldSet, heights []float64) error {
	var e2, h2, s float64
	res.Contributions = make([]Contribution, len(m.sources))
	for _, members := range m.signalList {
		var sumE, sumH float64
		for _, i := range members {
			c := &m.sources[i]
			d := c.em.at(p)
			if math.IsInf(d.E, 1) || math.IsInf(d.H, 1) {
				return fmt.Errorf("place %s lies at the centre of antenna %s: no field can be stated there", pl.ID, c.src.ID)
			}
			ground := set.ground
			if !c.takesGround {
				ground = 1
			}
			power := c.power[meanPower] * c.rot.at(c.em, p, meanPower)
			if c.silent() {
				power = 0
			}
			k2 := ground * ground * orOne(pl.WallLoss)
			e, h := d.E*power*k2, d.H*power*k2
			con := Contribution{
				Antenna: c.src.ID, FrequencyHz: c.src.FrequencyHz, Method: c.methodAt(p),
				EVPerM: Number(EFromS(e)), HAPerM: Number(HFromS(h)), SWPerM2: Number(math.Max(e, h)),
				PowerW: power, GroundFactor: ground, Unknown: c.src.Power.Unknown,
			}
			c.chain(p, &con)
			m.ownRatios(i, pl, set, heights, &con)
			if con.Unknown {
				con.EIRPAtLimitW = Number(m.eirpAtLimit(i, pl, set.factor))
			}
			res.Contributions[i] = con
			sumE += math.Sqrt(e)
			sumH += math.Sqrt(h)
		}
		e2 += sumE * sumE
		h2 += sumH * sumH
		s += math.Max(sumE*sumE, sumH*sumH)
	}
	res.EVPerM, res.HAPerM, res.SWPerM2 = Number(EFromS(e2)), Number(HFromS(h2)), Number(s)
	m.trim(res)
	return nil
}

// mostListed is how many sources a place lists whatever their part; with more,
// those whose own ratio is below leastListed for every class are only counted.
const (
	mostListed  = 200
	leastListed = 1e-3
)

// trim keeps the list of contributions of a very large site short, and says
// what it left out.
func (m *Model) trim(res *PointResult) {
	if len(res.Contributions) <= mostListed {
		return
	}
	var kept []Contribution
	for _, c := range res.Contributions {
		keep := c.Unknown
		for _, r := range c.Ratios {
			keep = keep || r.ExposureRatio >= leastListed || !r.Covered
		}
		if keep {
			kept = append(kept, c)
		}
	}
	res.Unlisted = len(res.Contributions) - len(kept)
	res.Contributions = kept
}

// orOne treats a wall loss that nobody set as no wall.
func orOne(x float64) float64 {
	if x == 0 {
		return 1
	}
	return x
}

// chain writes down the steps that lead to a contribution.
func (c *compiled) chain(p Point, con *Contribution) {
	d := p.Sub(c.src.Position)
	phi, theta := c.src.Pose.Axes().Direction(d)
	con.DistanceM = d.Norm()
	con.AzimuthDeg, con.ElevationDeg = phi*180/math.Pi, theta*180/math.Pi
	con.PatternLossDB = -10 * math.Log10(c.src.Pattern.Relative(phi, theta))
	if math.IsInf(con.PatternLossDB, 0) {
		con.PatternLossDB = 999
	}
}

// methodAt is the method that gave the figure at p.
func (c *compiled) methodAt(p Point) string {
	if w, ok := c.em.(interface{ methodAt(Point) string }); ok {
		return w.methodAt(p)
	}
	return c.method
}

// ownRatios gives a source's own ratio for every class, alone.
func (m *Model) ownRatios(i int, pl *Place, set *fieldSet, heights []float64, con *Contribution) {
	con.Ratios = make([]ContributionRatio, len(m.rules))
	for k, r := range m.rules {
		own := 0.0
		if t := set.alone[k][i]; t != nil {
			alone := evaluator{rule: r, ng: len(r.groups)}
			by := alone.termNear(t, pl.At.X, pl.At.Y, heights[k], pl.At.Z+pl.From, pl.At.Z+pl.To)
			own, _ = by.largest(len(r.groups))
		}
		con.Ratios[k] = ContributionRatio{r.class, Number(own), r.covers[i]}
	}
}

// eirpAtLimit returns the EIRP in W at which a source of unknown power reaches
// ratio 1 on its own at the place, for the class that is reached first.
func (m *Model) eirpAtLimit(i int, pl *Place, field float64) float64 {
	known := *m
	known.sources = append([]compiled(nil), m.sources...)
	c := known.sources[i]
	s := *c.src
	s.Power = Power{TransmitterW: 1, Loss: 1, Carriers: 1, Duty: 1, ReductionFactor: 1, PeakFactor: 1}
	c.src = &s
	for kind := range c.power {
		c.power[kind] = 1
	}
	known.sources[i] = c
	worst := 0.0
	for _, r := range m.rules {
		e := known.evaluator(r, func(j int) bool { return j == i }, field, siteFrame, 1)
		by, _ := e.body(pl.At.X, pl.At.Y, pl.At.Z+pl.From, pl.At.Z+pl.To, r.anyMean)
		for g := range r.groups {
			x := by[g]
			if r.groups[g].Effect == "stimulation" {
				x *= x // ratios of field strengths rise with the root of power
			}
			worst = math.Max(worst, x)
		}
	}
	return float64(s.Gain) / worst
}
