package exposure

import (
	"context"
	"math"

	"example.org/standclear/antenna"
)

// AssumptionSet is what each assumption is worth at one place, or at the end of
// one distance.
type AssumptionSet struct {
	Place     string  `json:"place,omitempty"`
	Antenna   string  `json:"antenna,omitempty"`
	Housing   string  `json:"housing,omitempty"`
	All       bool    `json:"all,omitempty"`
	Direction string  `json:"direction,omitempty"`
	Class     string  `json:"class"`
	Ratio     Number  `json:"exposure_ratio"`       // as assessed
	DistanceM float64 `json:"distance_m,omitempty"` // as assessed
	// Conservative and BestEstimate are the figures with every assumption at its
	// cautious and at its likely choice.
	Conservative Assumed          `json:"conservative"`
	BestEstimate Assumed          `json:"best_estimate"`
	Parts        []AssumptionPart `json:"parts"`
}

// Assumed is a figure under other assumptions: the ratio at a place, or the
// distance to the boundary along the same line.
type Assumed struct {
	Ratio     Number  `json:"exposure_ratio"`
	DistanceM float64 `json:"distance_m,omitempty"`
}

// AssumptionPart is one assumption switched to another choice, alone.
type AssumptionPart struct {
	Assumption string `json:"assumption"`
	Choice     string `json:"choice"`
	Ratio      Number `json:"exposure_ratio"` // with the other choice
	WorthDB    Number `json:"worth_db"`       // 10 log10 of that ratio over the ratio as assessed
}

// assumption is one choice in place of the model's own.
type assumption struct {
	name, choice string
	model        *Model
}

// Names of the assumptions.
const (
	assumeGround  = "ground"
	assumeFloor   = "side-lobe floor"
	assumePower   = "power reduction factor and duty"
	assumeNear    = "near-field rule"
	assumePattern = "sum of two cuts"
)

// sourceChange is a way to alter a source; it says whether it did.
type sourceChange func(s *Source) bool

func fullPower(s *Source) bool {
	p := &s.Power
	if p.Duty == 1 && p.ReductionFactor == 1 {
		return false
	}
	p.Duty, p.ReductionFactor = 1, 1
	return true
}

// floorOffDB stands for no front to back ratio.
const floorOffDB = 200

func noFloor(s *Source) bool {
	p, ok := antenna.WithoutFloor(s.Pattern)
	if !ok {
		return false
	}
	s.Pattern, s.FrontToBackDB = p, floorOffDB
	return true
}

func onlyFarField(s *Source) bool {
	if s.Method == MethodFarField {
		return false
	}
	s.Method = MethodFarField
	return true
}

func plainSum(s *Source) bool {
	p, ok := antenna.PlainSum(s.Pattern)
	if ok {
		s.Pattern = p
	}
	return ok
}

func largerCut(s *Source) bool {
	p, ok := antenna.LargerOfCuts(s.Pattern)
	if ok {
		s.Pattern = p
	}
	return ok
}

// onGround is the model on another ground: every surface takes its factor.
func onGround(factor float64) func(site *Site) {
	return func(site *Site) {
		site.Ground = Ground{Method: GroundNone, Factor: 1}
		if factor > 1 {
			site.Ground = Ground{Method: GroundFactor, Factor: factor}
		}
		site.Surfaces = append([]Surface(nil), site.Surfaces...)
		for i := range site.Surfaces {
			if site.Surfaces[i].GroundFactor > 0 {
				site.Surfaces[i].GroundFactor = factor
			}
		}
	}
}

// altered is the model of the same site with sources changed, and its site too
// where alter is not nil. Sources that no change touches keep what was worked
// out for them.
func (m *Model) altered(alter func(site *Site), changes ...sourceChange) (*Model, error) {
	site := *m.site
	rebuilt := m.site.Ground.Method == GroundFresnel && alter != nil
	if alter != nil {
		alter(&site)
	}
	c := *m
	c.site = &site
	c.options.Progress = nil
	c.sources = append([]compiled(nil), m.sources...)
	for i := range c.sources {
		src := *c.sources[i].src
		touched := rebuilt
		for _, f := range changes {
			touched = f(&src) || touched
		}
		if !touched {
			continue
		}
		s, err := compile(&src, site.Ground)
		if err != nil {
			// The choice does not exist for this source: it stays as it is.
			continue
		}
		c.sources[i] = s
	}
	return &c, nil
}

// assumptions lists every choice in place of the model's own, one at a time, and
// the two sets that turn them all.
func (m *Model) assumptions() (each []assumption, conservative, best *Model, err error) {
	add := func(name, choice string, alter func(*Site), f ...sourceChange) {
		if err != nil {
			return
		}
		var v *Model
		if v, err = m.altered(alter, f...); err == nil {
			each = append(each, assumption{name, choice, v})
		}
	}
	add(assumeGround, "no reflection", onGround(1))
	add(assumeGround, "field factor 1.6", onGround(GroundFactorEPA))
	add(assumeGround, "field factor 2", onGround(GroundFactorFull))
	add(assumeFloor, "off: no front to back ratio bounds a two-beamwidth pattern", nil, noFloor)
	add(assumePower, "both 1: full power all the time", nil, fullPower)
	add(assumeNear, "far field at every distance", nil, onlyFarField)
	add(assumePattern, "plain sum of both losses", nil, plainSum)
	add(assumePattern, "larger of both losses", nil, largerCut)
	if err != nil {
		return nil, nil, nil, err
	}
	if conservative, err = m.altered(onGround(GroundFactorFull), fullPower, largerCut); err != nil {
		return nil, nil, nil, err
	}
	best, err = m.altered(onGround(1), noFloor)
	return each, conservative, best, err
}

// Assumptions tells what each assumption is worth at places and at the ends of
// distances (of those, the farthest of each subject and class): each is switched
// to its other choices by the engine, alone, and the ratio compared. At a
// distance's end the ratio is taken at the farthest point of the boundary.
//
// The conservative figure takes a field factor of 2, full power all the time and
// the larger loss of two cuts, with the model's own near-field rule and floors;
// the best estimate takes the direct ray alone, power as stated and no
// side-lobe floor (both sets are a choice of this project). Distances under
// other assumptions are the outermost crossing of the line through the farthest
// point.
func (m *Model) Assumptions(ctx context.Context, places []Place, distances []Distance) ([]AssumptionSet, error) {
	each, conservative, best, err := m.assumptions()
	if err != nil {
		return nil, err
	}
	out := []AssumptionSet{}
	for i := range places {
		for _, class := range m.classesAt(places[i].Class) {
			at := func(v *Model) Number { return v.classAt(&places[i], class).ExposureRatio }
			s := AssumptionSet{Place: places[i].ID, Class: class, Ratio: at(m), Conservative: Assumed{Ratio: at(conservative)}, BestEstimate: Assumed{Ratio: at(best)}}
			for k := range each {
				s.add(each[k], at(each[k].model))
			}
			out = append(out, s)
		}
		if err := ctx.Err(); err != nil {
			return nil, err
		}
	}
	for _, d := range farthest(distances) {
		s := AssumptionSet{Antenna: d.Antenna, Housing: d.Housing, All: d.All, Direction: d.Direction, Class: d.Class, DistanceM: d.DistanceM}
		s.Ratio = Number(m.ratioAtEnd(&d))
		for k := range each {
			s.add(each[k], Number(each[k].model.ratioAtEnd(&d)))
		}
		s.Conservative = conservative.endUnder(ctx, &d)
		s.BestEstimate = best.endUnder(ctx, &d)
		out = append(out, s)
	}
	return out, ctx.Err()
}

func (s *AssumptionSet) add(a assumption, ratio Number) {
	p := AssumptionPart{Assumption: a.name, Choice: a.choice, Ratio: ratio}
	if s.Ratio > 0 && ratio > 0 {
		p.WorthDB = Number(10 * math.Log10(float64(ratio/s.Ratio)))
	}
	s.Parts = append(s.Parts, p)
}

// classAt is one class's ratio and verdict at a place, without the parts of the
// sources.
func (m *Model) classAt(pl *Place, class string) ClassRatio {
	r := m.rule(class)
	if m.largestCounts(pl) {
		r = r.asLargest()
	}
	ground := m.placeFactor(pl)
	e := m.evaluator(r, nil, ground*math.Sqrt(orOne(pl.WallLoss)), siteFrame, 1)
	foot, head := pl.At.Z+pl.From, pl.At.Z+pl.To
	by, _ := e.body(pl.At.X, pl.At.Y, foot, head, r.anyMean)
	return m.judge(r, by, box{c: Point{X: pl.At.X, Y: pl.At.Y}}.heights(foot, head), ground)
}

// classesAt is the class that may be at a place, every class where none is named.
func (m *Model) classesAt(class string) []string {
	if contains(m.classes, class) {
		return []string{class}
	}
	return m.classes
}

// farthest picks the farthest distance of everything together, of each housing
// and of each row without one, for each class.
func farthest(distances []Distance) []Distance {
	type key struct{ antenna, housing, class string }
	at := map[key]int{}
	var out []Distance
	for _, d := range distances {
		if d.end == nil || d.Verdict != Above {
			continue
		}
		k := key{d.Antenna, d.Housing, d.Class}
		if i, ok := at[k]; !ok {
			at[k] = len(out)
			out = append(out, d)
		} else if d.DistanceM > out[i].DistanceM {
			out[i] = d
		}
	}
	var kept []Distance
	for _, d := range out {
		if d.Antenna == "" || !d.end.housed {
			kept = append(kept, d)
		}
	}
	return kept
}

// farEnd is where the boundary of a distance reaches farthest.
type farEnd struct {
	centre, dir Point
	tip         Point // in the frame that faces along dir from the centre
	members     []int
	housed      bool // an antenna row that belongs to a housing
}

// line is the frame whose x axis is the line through the farthest point.
func (e *farEnd) line() frame {
	f := facing(e.centre, e.dir)
	return frame{f.back(Point{Y: e.tip.Y, Z: e.tip.Z}), f.x, f.y, f.z}
}

// alone is the evaluator of a distance's sources in a frame.
func (m *Model) alone(d *Distance, f frame) *evaluator {
	member := map[int]bool{}
	for _, i := range d.end.members {
		member[i] = true
	}
	return m.evaluator(m.rule(d.Class), func(i int) bool { return member[i] }, m.groundFactor(0), f, 1)
}

// ratioAtEnd is the largest ratio of a distance's sources at its farthest point.
func (m *Model) ratioAtEnd(d *Distance) float64 {
	_, v := m.alone(d, d.end.line()).at(Point{X: d.end.tip.X})
	return v
}

// endUnder is the distance along the line through the farthest point, and the
// ratio there, under this model's assumptions.
func (m *Model) endUnder(ctx context.Context, d *Distance) Assumed {
	f := d.end.line()
	e := m.alone(d, f)
	a := Assumed{Ratio: Number(m.ratioAtEnd(d))}
	radius := e.radius(f, m, d.end.members)
	if math.IsInf(radius, 1) {
		a.DistanceM = radius
		return a
	}
	if b := e.outermost(ctx, radius); !b.none {
		a.DistanceM = b.outer
	}
	return a
}
