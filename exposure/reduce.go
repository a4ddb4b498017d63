package exposure

import (
	"context"
	"fmt"
	"math"
	"sort"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/optimize/convex/lp"

	"example.org/standclear/limits"
)

// workProblem is the reduction of power at some places, as arithmetic: each row
// is one place, height and group of levels, with the parts that each
// transmitter's signals have in its ratio. The engine adds rows until it finds
// nothing above 1 itself.
type workProblem struct {
	m      *Model
	r      *rule
	q      *WorkQuery
	places []Place
	names  []string       // transmitters, in the order of the antenna table
	at     map[string]int // index of a transmitter
	power  []float64      // mean power of each, W
	rows   []workRow
	margin float64 // how far below 1 the optimizer aims
}

// workRow is one constraint: the sum of its signals' ratios is at most 1.
type workRow struct {
	signals []workSignal
	root    bool // stimulation: the ratio of a signal rises with the root of power
}

// workSignal is a signal's parts: for a thermal row their roots add before
// squaring, for a stimulation row they add as they are.
type workSignal struct {
	transmitter []int
	part        []float64 // own ratio of each member
}

func newWorkProblem(m *Model, r *rule, q *WorkQuery, places []Place) *workProblem {
	p := &workProblem{m: m, r: r, q: q, places: places, at: map[string]int{}, margin: workMargin}
	for i := range m.sources {
		s := &m.sources[i]
		t := s.src.transmitter()
		k, ok := p.at[t]
		if !ok {
			k = len(p.names)
			p.at[t] = k
			p.names = append(p.names, t)
			p.power = append(p.power, 0)
		}
		if !s.silent() {
			p.power[k] += s.power[meanPower]
		}
	}
	sets := map[float64]*fieldSet{}
	for i := range places {
		p.addPlace(&places[i], sets)
	}
	if q.Surface != "" {
		p.margin = surfaceMargin
		p.seed(sets)
	}
	return p
}

// Over a surface the optimizer aims lower than at places, by more than the
// summitGap to which the search for the largest ratio bounds it, so that the
// bound itself is within; it goes down to surfaceMarginMost where the search ends
// with a wider bound.
const (
	surfaceMargin     = 1.25 * summitGap
	surfaceMarginMost = 0.1
)

// A surface is sampled at seedSteps by seedSteps points before any plan is made,
// and the seedRows largest of them become rows: the rounds in which the engine
// adds what a plan had not seen are then few.
const (
	seedSteps = 48
	seedRows  = 60
)

// seed adds the rows of a surface's largest sampled ratios.
func (p *workProblem) seed(sets map[float64]*fieldSet) {
	s := p.m.surface(p.q.Surface)
	x0, y0, x1, y1 := math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)
	for _, v := range s.Outline[0] {
		x0, x1, y0, y1 = math.Min(x0, v[0]), math.Max(x1, v[0]), math.Min(y0, v[1]), math.Max(y1, v[1])
	}
	e := p.m.evaluator(p.r, nil, p.m.groundFactor(s.GroundFactor), siteFrame, 1)
	type spot struct {
		at    Point
		ratio float64
	}
	var spots []spot
	for i := 0; i < seedSteps; i++ {
		for j := 0; j < seedSteps; j++ {
			at := Point{X: x0 + (x1-x0)*(float64(i)+0.5)/seedSteps, Y: y0 + (y1-y0)*(float64(j)+0.5)/seedSteps}
			if !insidePolygon([2]float64{at.X, at.Y}, s.Outline) {
				continue
			}
			best := spot{}
			for _, h := range []float64{s.To, (s.From + s.To) / 2} {
				at.Z = s.Z + h
				if _, v := e.at(at); v > best.ratio {
					best = spot{at, v}
				}
			}
			if best.ratio > 0.5 {
				spots = append(spots, best)
			}
		}
	}
	sort.SliceStable(spots, func(i, j int) bool { return spots[i].ratio > spots[j].ratio })
	for _, t := range spots[:min(seedRows, len(spots))] {
		pl := Place{ID: s.ID, At: Point{X: t.at.X, Y: t.at.Y, Z: s.Z}, From: s.From, To: s.To, Class: p.r.class, WallLoss: 1, On: s.ID}
		p.addRow(&pl, p.m.fieldSet(&pl, sets), t.at.Z)
	}
}

// addPlace adds the rows of a place: at the height of its largest ratio and, for
// a body, at foot, middle and head.
func (p *workProblem) addPlace(pl *Place, sets map[float64]*fieldSet) {
	set := p.m.fieldSet(pl, sets)
	k := p.ruleIndex()
	foot, head := pl.At.Z+pl.From, pl.At.Z+pl.To
	_, at := set.all[k].body(pl.At.X, pl.At.Y, foot, head, set.rules[k].anyMean)
	heights := []float64{at}
	if head > foot {
		heights = append(heights, foot, (foot+head)/2, head)
	}
	for _, z := range heights {
		p.addRow(pl, set, z)
	}
}

func (p *workProblem) ruleIndex() int {
	for k, r := range p.m.rules {
		if r == p.r {
			return k
		}
	}
	return 0
}

// addRow adds one place and height, a row for each group of levels.
func (p *workProblem) addRow(pl *Place, set *fieldSet, z float64) {
	k := p.ruleIndex()
	alone := set.alone[k]
	e := evaluator{rule: p.r, ng: len(p.r.groups)}
	foot, head := pl.At.Z+pl.From, pl.At.Z+pl.To
	own := make([]groupRatios, len(p.m.sources))
	for i := range p.m.sources {
		if alone[i] != nil {
			own[i] = e.termNear(alone[i], pl.At.X, pl.At.Y, z, foot, head)
		}
	}
	for g := range p.r.groups {
		row := workRow{root: p.r.groups[g].Effect == limits.Stimulation}
		for _, members := range p.m.signalList {
			var s workSignal
			for _, i := range members {
				if own[i][g] > 0 {
					s.transmitter = append(s.transmitter, p.at[p.m.sources[i].src.transmitter()])
					s.part = append(s.part, own[i][g])
				}
			}
			if len(s.part) > 0 {
				row.signals = append(row.signals, s)
			}
		}
		if len(row.signals) > 0 {
			p.rows = append(p.rows, row)
		}
	}
}

// ratio is the row's exposure ratio with factors x on the transmitters' power.
func (w *workRow) ratio(x []float64) float64 {
	sum := 0.0
	for i := range w.signals {
		s := &w.signals[i]
		if w.root {
			for j, t := range s.transmitter {
				sum += s.part[j] * math.Sqrt(x[t])
			}
			continue
		}
		amp := 0.0
		for j, t := range s.transmitter {
			amp += math.Sqrt(s.part[j] * x[t])
		}
		sum += amp * amp
	}
	return sum
}

// largest is the largest ratio over the rows.
func (p *workProblem) largest(x []float64) float64 {
	worst := 0.0
	for i := range p.rows {
		worst = math.Max(worst, p.rows[i].ratio(x))
	}
	return worst
}

// linear bounds the row's ratio from above by c + a.x, touching it at x0: for a
// shared signal by the Cauchy-Schwarz inequality, for stimulation by the tangent
// of the root.
func (w *workRow) linear(x0 []float64) (a []float64, c float64) {
	a = make([]float64, len(x0))
	for i := range w.signals {
		s := &w.signals[i]
		if w.root {
			for j, t := range s.transmitter {
				r := math.Sqrt(math.Max(x0[t], 1e-6))
				a[t] += s.part[j] / (2 * r)
				c += s.part[j] * r / 2
			}
			continue
		}
		roots := 0.0
		for _, part := range s.part {
			roots += math.Sqrt(part)
		}
		for j, t := range s.transmitter {
			a[t] += math.Sqrt(s.part[j]) * roots
		}
	}
	return a, c
}

func ones(n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = 1
	}
	return x
}

// leastPower gives up the least power: maximize the power kept subject to every
// row, a linear program; where rows are not linear, on tangents that are moved
// until they settle.
func (p *workProblem) leastPower(ctx context.Context) (*Reduction, error) {
	return p.confirmed(ctx, PlanLeastPower, func() ([]float64, string, error) {
		x := ones(len(p.names))
		if p.largest(x) <= 1 {
			return x, "", nil
		}
		for round := 0; round < 25; round++ {
			next, err := p.program(x)
			if err != nil {
				return nil, "", err
			}
			moved := 0.0
			for i := range x {
				moved = math.Max(moved, math.Abs(next[i]-x[i]))
			}
			x = next
			if moved < 1e-9 || !p.curved() {
				break
			}
		}
		return x, "", nil
	})
}

func (p *workProblem) curved() bool {
	for i := range p.rows {
		if p.rows[i].root {
			return true
		}
	}
	return false
}

// program solves the linear program at a tangent point. Only transmitters with
// a part in some row are variables: the others keep their power.
func (p *workProblem) program(x0 []float64) ([]float64, error) {
	var used []int
	column := make([]int, len(p.names))
	for i := range column {
		column[i] = -1
	}
	type constraint struct {
		a []float64
		b float64
	}
	var cons []constraint
	for i := range p.rows {
		if p.rows[i].ratio(ones(len(p.names))) <= 1-p.margin {
			continue // within with everything on: it can never bind
		}
		a, c := p.rows[i].linear(x0)
		cons = append(cons, constraint{a, 1 - p.margin - c})
		for t, v := range a {
			if v > 0 && column[t] < 0 {
				column[t] = len(used)
				used = append(used, t)
			}
		}
	}
	n, k := len(used), len(cons)
	// minimize -P.x  subject to  a.x + s = b,  x + t = 1,  all >= 0
	cost := make([]float64, n+k+n)
	scale := 0.0
	for _, t := range used {
		scale = math.Max(scale, p.power[t])
	}
	for j, t := range used {
		// A hair of preference keeps the optimum unique where powers are equal.
		cost[j] = -(p.power[t]/math.Max(scale, 1e-300) + 1e-9*float64(j+1))
	}
	A := mat.NewDense(k+n, n+k+n, nil)
	b := make([]float64, k+n)
	for i, c := range cons {
		largest := 0.0
		for _, t := range used {
			largest = math.Max(largest, c.a[t])
		}
		if c.b < 0 {
			return make([]float64, len(p.names)), nil // even the tangent's foot is above: all off, then re-aim
		}
		for j, t := range used {
			A.Set(i, j, c.a[t]/largest)
		}
		A.Set(i, n+i, 1)
		b[i] = c.b / largest
	}
	for j := range used {
		A.Set(k+j, j, 1)
		A.Set(k+j, n+k+j, 1)
		b[k+j] = 1
	}
	// Start from everything off: x = 0 with all slacks in the basis.
	basis := make([]int, k+n)
	for i := range basis {
		basis[i] = n + i
	}
	_, y, err := lp.Simplex(cost, A, b, 1e-12, basis)
	if err != nil {
		return nil, fmt.Errorf("the linear program of the work plan has no answer: %w", err)
	}
	x := ones(len(p.names))
	for j, t := range used {
		x[t] = math.Min(1, math.Max(0, y[j]))
	}
	return x, nil
}

// equal puts the same factor on every transmitter that has a part in the places.
func (p *workProblem) equal(ctx context.Context) (*Reduction, error) {
	return p.confirmed(ctx, PlanEqual, func() ([]float64, string, error) {
		parts := p.contributing()
		set := func(f float64) []float64 {
			x := ones(len(p.names))
			for _, t := range parts {
				x[t] = f
			}
			return x
		}
		if p.largest(set(1)) <= 1 {
			return set(1), "", nil
		}
		lo, hi := 0.0, 1.0
		for i := 0; i < 60; i++ {
			mid := (lo + hi) / 2
			if p.largest(set(mid)) <= 1-p.margin {
				lo = mid
			} else {
				hi = mid
			}
		}
		return set(lo), "", nil
	})
}

// contributing lists the transmitters with a part in any row, largest part
// first, leaving out those below a thousandth in every row together.
func (p *workProblem) contributing() []int {
	part := make([]float64, len(p.names))
	for i := range p.rows {
		for _, s := range p.rows[i].signals {
			for j, t := range s.transmitter {
				part[t] = math.Max(part[t], s.part[j])
			}
		}
	}
	var out []int
	for t, v := range part {
		if v >= 1e-3 {
			out = append(out, t)
		}
	}
	sort.SliceStable(out, func(i, j int) bool { return part[out[i]] > part[out[j]] })
	return out
}

// exactContributors is the largest number of transmitters over which fewestOff
// tries every set.
const exactContributors = 20

// fewestOff switches off as few transmitters as bring every row within: every
// set of one, then of two and so on, and of equal sets the one that gives up
// the least power. Beyond exactContributors it switches off the largest first
// and says so.
func (p *workProblem) fewestOff(ctx context.Context) (*Reduction, error) {
	return p.confirmed(ctx, PlanFewestOff, func() ([]float64, string, error) {
		x := ones(len(p.names))
		if p.largest(x) <= 1 {
			return x, "", nil
		}
		parts := p.contributing()
		if len(parts) > exactContributors {
			for _, t := range parts {
				x[t] = 0
				if p.largest(x) <= 1 {
					break
				}
			}
			return x, fmt.Sprintf("more than %d transmitters contribute: the largest were switched off first, which may not be the fewest", exactContributors), nil
		}
		for size := 1; size <= len(parts); size++ {
			if best := p.bestSet(parts, size); best != nil {
				for _, t := range best {
					x[t] = 0
				}
				return x, "", nil
			}
		}
		for _, t := range parts {
			x[t] = 0
		}
		return x, "", nil
	})
}

// bestSet tries every set of a size and returns the one that gives up the least
// power among those that bring every row within, or nil.
func (p *workProblem) bestSet(parts []int, size int) []int {
	var best []int
	least := math.Inf(1)
	x := ones(len(p.names))
	var chosen []int
	var try func(from int, given float64)
	try = func(from int, given float64) {
		if given >= least {
			return
		}
		if len(chosen) == size {
			if p.largest(x) <= 1 {
				least = given
				best = append([]int(nil), chosen...)
			}
			return
		}
		for i := from; i <= len(parts)-(size-len(chosen)); i++ {
			t := parts[i]
			chosen = append(chosen, t)
			x[t] = 0
			try(i+1, given+p.power[t]+1e-12)
			x[t] = 1
			chosen = chosen[:len(chosen)-1]
		}
	}
	try(0, 0)
	return best
}

// confirmed asks the engine whether a plan holds, and adds what the plan had not
// seen until it does.
func (p *workProblem) confirmed(ctx context.Context, name string, solve func() ([]float64, string, error)) (*Reduction, error) {
	for round := 0; round < mostRounds; round++ {
		x, note, err := solve()
		if err != nil {
			return nil, err
		}
		reduced, err := p.m.withFactors(p.names, x)
		if err != nil {
			return nil, err
		}
		places := append([]Place(nil), p.places...)
		if p.q.Surface != "" {
			worst, err := reduced.worstOn(ctx, p.q.Surface, reduced.rule(p.r.class))
			if err != nil {
				return nil, err
			}
			if worst != nil {
				places = append(places, *worst)
			}
		}
		points, err := reduced.Field(ctx, places)
		if err != nil {
			return nil, err
		}
		largest, held := 0.0, true
		sets := map[float64]*fieldSet{}
		for i := range points {
			c := points[i].class(p.r.class)
			largest = math.Max(largest, float64(c.ExposureRatio))
			if c.Verdict == Above {
				held = false
				p.addRow(&places[i], p.m.fieldSet(&places[i], sets), points[i].ZM+points[i].HeightM)
			}
		}
		if held && p.q.Surface != "" {
			// The points found say so; the whole surface must as well.
			most, reason, err := reduced.mostOn(ctx, p.q.Surface, p.r.class)
			if err != nil {
				return nil, err
			}
			switch {
			case reason != "":
				note = joinReasons(append([]string{"not assessed on " + p.q.Surface + " with this plan: " + reason}, notEmpty(note)...))
			case most <= 1:
			case p.margin < surfaceMarginMost && most < 1+2*surfaceMarginMost && touched(x): // a little lower may do
				held = false
				p.margin *= 2
			default:
				note = joinReasons(append([]string{fmt.Sprintf("no point of %s was found above 1; the search bounds the ratio there by %.3g", p.q.Surface, most)}, notEmpty(note)...))
			}
		}
		if !held && round < mostRounds-1 {
			continue
		}
		if !held {
			return nil, fmt.Errorf("the plan %q does not settle: the engine still finds a ratio of %.4g", name, largest)
		}
		out := &Reduction{Plan: name, ExposureRatio: Number(largest), Note: note, Transmitters: []TransmitterFactor{}}
		for i, t := range p.names {
			if x[i] < 1 {
				out.Transmitters = append(out.Transmitters, TransmitterFactor{t, x[i], Number(-10 * math.Log10(x[i]))})
				out.GivenUpW += p.power[i] * (1 - x[i])
			}
		}
		for i := range points {
			if c := points[i].class(p.r.class); c.Verdict == NotAssessed {
				out.Note = joinReasons(append([]string{"not assessed at " + points[i].ID + " with this plan: " + c.Reason}, notEmpty(out.Note)...))
			}
		}
		return out, ctx.Err()
	}
	return nil, fmt.Errorf("the plan %q does not settle", name)
}

// mostOn bounds a class's ratio from above over a whole surface; the reason says
// why part of it is not assessed.
func (m *Model) mostOn(ctx context.Context, surface, class string) (most float64, reason string, err error) {
	r := m.rule(class)
	top, err := m.largestOn(ctx, surface, r, summitEffort)
	if err == nil && top.reach != reached {
		_, reason = zoneVerdict(&Zone{Share: 1}, r, top)
	}
	return top.upper, reason, err
}

// touched reports whether a plan does anything.
func touched(x []float64) bool {
	for _, f := range x {
		if f < 1 {
			return true
		}
	}
	return false
}

func notEmpty(s string) []string {
	if s == "" {
		return nil
	}
	return []string{s}
}

// withFactors is the model with factors on its transmitters' power; a factor of
// zero takes the transmitter's rows out.
func (m *Model) withFactors(names []string, x []float64) (*Model, error) {
	factor := make(map[string]float64, len(names))
	for i, t := range names {
		factor[t] = x[i]
	}
	c := *m
	c.options.Progress = nil
	c.sources = nil
	for i := range m.sources {
		s := m.sources[i]
		f, ok := factor[s.src.transmitter()]
		if !ok {
			f = 1
		}
		if f == 0 {
			continue
		}
		src := *s.src
		src.Power.TransmitterW *= f
		s.src = &src
		for k := range s.power {
			s.power[k] *= f
		}
		c.sources = append(c.sources, s)
	}
	c.signalList = c.signals()
	c.rules = nil
	for _, class := range c.classes {
		c.rules = append(c.rules, c.newRule(class))
	}
	return &c, nil
}
