package exposure

import (
	"context"
	"errors"
	"fmt"
	"math"
	"sort"
)

// WorkQuery asks what must be powered down so that people of a class can work
// at some places, or anywhere on a surface.
type WorkQuery struct {
	Places  []Place // where they work
	Surface string  // or anywhere on this surface
	Class   string
	StayS   float64 // how long they stay, s; 0 = without an end
	// Elsewhere is the exposure ratio during the rest of the averaging time.
	Elsewhere float64
	// Share is the own exposure ratio from which a source is listed as a
	// contributor, 0 = 0.05.
	Share float64
	// Plan is the plan that the switching sheet carries out, "" = least power.
	Plan string
	// From and To are the times of the work as the switching sheet bears them.
	From, To string
}

// The plans of a piece of work.
const (
	PlanLeastPower = "least power"
	PlanEqual      = "equal"
	PlanFewestOff  = "fewest off"
)

// Plans returns the names of the plans in their order.
func Plans() []string { return []string{PlanLeastPower, PlanEqual, PlanFewestOff} }

// Work is the plan for one piece of work.
type Work struct {
	Class         string        `json:"class"`
	Places        []string      `json:"places"`
	Surface       string        `json:"surface,omitempty"`
	ExposureRatio Number        `json:"exposure_ratio"` // largest before any reduction
	Verdict       Verdict       `json:"verdict"`
	Reason        string        `json:"reason,omitempty"`
	GovernedBy    string        `json:"governed_by"`
	Reductions    []Reduction   `json:"reductions"`
	StayMin       *float64      `json:"stay_min"` // null = no end by the levels supplied
	StayAllowed   bool          `json:"stay_allowed"`
	StayReason    string        `json:"stay_reason"`
	StayAskedMin  float64       `json:"stay_asked_min,omitempty"`
	Contributors  []Contributor `json:"contributors"`
	SwitchingPlan string        `json:"switching_plan"` // the plan that the switching sheet carries out
	Switching     []Switch      `json:"switching"`
	Cautions      []string      `json:"cautions"`
}

// Reduction is one way to bring every place within the limits supplied.
type Reduction struct {
	Plan          string              `json:"plan"` // least power, equal or fewest off
	Transmitters  []TransmitterFactor `json:"transmitters"`
	ExposureRatio Number              `json:"exposure_ratio"` // largest with the plan, asked of the engine again
	GivenUpW      float64             `json:"given_up_w"`     // mean power at the antenna inputs
	Note          string              `json:"note,omitempty"`
}

// TransmitterFactor is what happens to a transmitter: the factor on its power
// and the same in dB.
type TransmitterFactor struct {
	Transmitter string  `json:"transmitter"`
	Factor      float64 `json:"factor"`
	ReductionDB Number  `json:"reduction_db"` // null = off
}

// Contributor is a source whose own ratio reaches the share asked somewhere.
type Contributor struct {
	Operator    string  `json:"operator"`
	Antenna     string  `json:"antenna"`
	Transmitter string  `json:"transmitter"`
	Place       string  `json:"place"` // where its part is largest
	Ratio       Number  `json:"exposure_ratio"`
	FrequencyHz float64 `json:"frequency_hz"`
}

// Switch is a line of the switching sheet. Confirmed and Restored are filled in
// by hand, From and To as well where no time was given.
type Switch struct {
	Operator    string   `json:"operator"`
	Contact     string   `json:"contact"`
	Notice      string   `json:"notice"`
	Reference   string   `json:"operator_reference"`
	Transmitter string   `json:"transmitter"`
	Antennas    []string `json:"antennas"`
	BearingDeg  float64  `json:"bearing_deg"`
	HeightM     float64  `json:"height_m"`
	BandMHz     float64  `json:"band_mhz"`
	Action      string   `json:"action"`
	TargetW     float64  `json:"target_power_w"` // one carrier's mean at the transmitter's output
	From        string   `json:"from"`
	To          string   `json:"to"`
	Confirmed   string   `json:"confirmed_by"`
	Restored    string   `json:"restored"`
}

// workCautions are printed with every plan.
var workCautions = []string{
	"A plan is arithmetic on the data supplied. That a transmitter is off or reduced is shown by the operator's own lock-out and by measurement at the place, not by this sheet.",
	"Local rules and the licensed practice of whoever directs the work decide; where they ask for more, they hold.",
	"No stay is proposed where anything is not assessed.",
}

// WorkCautions returns the sentences that go with every plan.
func WorkCautions() []string { return append([]string(nil), workCautions...) }

// workMargin is how far below 1 the optimizer aims, so that the engine's own
// verdict, which allows for bodyGap, is not "above".
const workMargin = 2 * bodyGap

// mostRounds bounds the rounds in which the engine adds places or heights that
// the optimizer had not seen.
const mostRounds = 40

// ErrWorkUnassessed is returned where no plan can be made because a ratio that
// it rests on is not assessed.
var ErrWorkUnassessed = errors.New("no plan can be made where the exposure is not assessed")

// Work returns the reductions that bring every place within the limits
// supplied: the least power given up (a linear program), the same factor for
// every contributing transmitter, and the fewest switched off (exact for up to
// 20 contributors). Whether a plan does what it says is asked of the engine
// again with the powers of the plan.
func (m *Model) Work(ctx context.Context, q WorkQuery) (*Work, error) {
	r := m.rule(q.Class)
	if r == nil {
		return nil, fmt.Errorf("no class %q in the limit table; it has %s", q.Class, listText(m.classes))
	}
	if q.Share == 0 {
		q.Share = 0.05
	}
	if q.Plan == "" {
		q.Plan = PlanLeastPower
	}
	if !contains(Plans(), q.Plan) {
		return nil, fmt.Errorf("no plan %q; there are %s", q.Plan, listText(Plans()))
	}
	if !(q.Elsewhere >= 0) || !(q.Share >= 0) || !(q.StayS >= 0) {
		return nil, fmt.Errorf("stay %v s, ratio elsewhere %v, share %v: none may be negative", q.StayS, q.Elsewhere, q.Share)
	}
	w := &Work{Class: q.Class, Places: []string{}, SwitchingPlan: q.Plan, Surface: q.Surface, Cautions: workCautions, StayAskedMin: q.StayS / 60, Reductions: []Reduction{}, Contributors: []Contributor{}, Switching: []Switch{}}
	places := append([]Place(nil), q.Places...)
	for i := range places {
		w.Places = append(w.Places, places[i].ID)
		places[i].Class = q.Class // who works there now
	}
	if q.Surface != "" {
		if m.surface(q.Surface) == nil {
			return nil, fmt.Errorf("no surface %q in the site", q.Surface)
		}
		for _, rule := range []*rule{r, r.neverAveraged()} {
			p, err := m.worstOn(ctx, q.Surface, rule)
			if err != nil {
				return nil, err
			}
			if p != nil {
				places = append(places, *p)
			}
		}
	}
	if len(places) == 0 && q.Surface == "" {
		return nil, errors.New("name at least one place or a surface to work at")
	}
	points, err := m.Field(ctx, places)
	if err != nil {
		return nil, err
	}
	w.Verdict = Within
	for _, p := range points {
		c := p.class(q.Class)
		if w.GovernedBy == "" || c.ExposureRatio > w.ExposureRatio {
			w.ExposureRatio, w.GovernedBy = c.ExposureRatio, c.GovernedBy
		}
		if c.Verdict == Above || c.Verdict == NotAssessed && w.Verdict == Within {
			w.Verdict = c.Verdict
		}
		if c.Reason != "" && w.Reason == "" {
			w.Reason = c.Reason
		}
	}
	if q.Surface != "" {
		top, err := m.largestOn(ctx, q.Surface, r, summitDecided)
		if err != nil {
			return nil, err
		}
		if top.reach != reached {
			w.Reason = "part of " + q.Surface + " lies in the reactive region of an antenna: measure there"
			if w.Verdict == Within {
				w.Verdict = NotAssessed
			}
		}
	}
	w.Contributors = m.contributors(points, q.Class, q.Share)
	if len(r.uncovered) > 0 {
		w.Reason = joinReasons(r.uncovered)
		w.StayReason = "no stay is proposed where anything is not assessed: " + w.Reason
		zero := 0.0
		w.StayMin = &zero
		return w, nil
	}
	problem := newWorkProblem(m, r, &q, places)
	for i, make := range []func(context.Context) (*Reduction, error){problem.leastPower, problem.equal, problem.fewestOff} {
		if i > 0 && len(w.Reductions[0].Transmitters) == 0 {
			same := w.Reductions[0] // nothing to do is the same for every plan
			same.Plan = Plans()[i]
			w.Reductions = append(w.Reductions, same)
			continue
		}
		plan, err := make(ctx)
		if err != nil {
			return nil, err
		}
		w.Reductions = append(w.Reductions, *plan)
	}
	m.stay(w, r, points, &q)
	for _, p := range w.Reductions {
		if p.Plan == q.Plan {
			w.Switching = m.switching(p.Transmitters, &q)
		}
	}
	return w, ctx.Err()
}

// class finds a point's ratio for a class.
func (p *PointResult) class(name string) ClassRatio {
	for _, c := range p.Ratios {
		if c.Class == name {
			return c
		}
	}
	return ClassRatio{}
}

// largestOn finds the largest ratio on a surface, with an effort of most bounds.
func (m *Model) largestOn(ctx context.Context, surface string, r *rule, most int) (summit, error) {
	regions, err := m.regions(&ZoneQuery{Surfaces: []string{surface}})
	if err != nil {
		return summit{}, err
	}
	g := regions[0]
	e := m.evaluator(r, nil, g.factor, g.frame, 1)
	p := newPlane(g.rings, DefaultResolutionM, g.from, g.to, r.anyMean && !g.peak && g.to > g.from)
	return e.largestOver(ctx, p, most), ctx.Err()
}

// worstOn is the place of the largest ratio on a surface, with the body that the
// surface states; nil where nothing radiates.
func (m *Model) worstOn(ctx context.Context, surface string, r *rule) (*Place, error) {
	if len(r.groups) == 0 {
		return nil, nil
	}
	top, err := m.largestOn(ctx, surface, r, summitDecided)
	if err != nil || top.lower == 0 {
		return nil, err
	}
	s := m.surface(surface)
	return &Place{ID: fmt.Sprintf("%s (%.2f, %.2f)", surface, top.at.X, top.at.Y), At: Point{X: top.at.X, Y: top.at.Y, Z: s.Z}, From: s.From, To: s.To, Class: r.class, WallLoss: 1, On: surface}, nil
}

// contributors lists the sources whose own ratio reaches the share at a place
// that is above the limits in total, by operator.
func (m *Model) contributors(points []PointResult, class string, share float64) []Contributor {
	best := map[string]*Contributor{}
	var ids []string
	for i := range points {
		p := &points[i]
		if c := p.class(class); c.Verdict != Above {
			continue
		}
		for _, con := range p.Contributions {
			for _, r := range con.Ratios {
				if r.Class != class || float64(r.ExposureRatio) < share {
					continue
				}
				b := best[con.Antenna]
				if b == nil {
					b = &Contributor{Antenna: con.Antenna, FrequencyHz: con.FrequencyHz}
					best[con.Antenna] = b
					ids = append(ids, con.Antenna)
				}
				if r.ExposureRatio > b.Ratio {
					b.Ratio, b.Place = r.ExposureRatio, p.ID
				}
			}
		}
	}
	out := []Contributor{}
	for _, id := range ids {
		c := best[id]
		for i := range m.sources {
			if s := m.sources[i].src; s.ID == id {
				c.Operator, c.Transmitter = s.Operator, s.transmitter()
			}
		}
		out = append(out, *c)
	}
	sort.SliceStable(out, func(i, j int) bool {
		if out[i].Operator != out[j].Operator {
			return out[i].Operator < out[j].Operator
		}
		return out[i].Ratio > out[j].Ratio
	})
	return out
}

// transmitter is what the row can be switched with.
func (s *Source) transmitter() string {
	switch {
	case s.Transmitter != "":
		return s.Transmitter
	case s.Signal != "":
		return s.Signal
	}
	return s.ID
}

// switching writes the switching sheet for a plan.
func (m *Model) switching(factors []TransmitterFactor, q *WorkQuery) []Switch {
	out := []Switch{}
	for _, f := range factors {
		if f.Factor >= 1 {
			continue
		}
		s := Switch{Transmitter: f.Transmitter, Action: "switch off", From: q.From, To: q.To}
		reduce := math.Ceil(float64(f.ReductionDB)*10-1e-9) / 10 // to the next tenth of a decibel
		for i := range m.sources {
			src := m.sources[i].src
			if src.transmitter() != f.Transmitter {
				continue
			}
			if len(s.Antennas) == 0 {
				s.Operator, s.Reference = src.Operator, src.OperatorReference
				s.BearingDeg = bearing(src.Pose.AzimuthRad + m.site.About.GridBearingRad)
				s.HeightM, s.BandMHz = src.Position.Z, src.FrequencyHz/1e6
				s.TargetW = src.Power.TransmitterW * math.Pow(10, -reduce/10)
			}
			s.Antennas = append(s.Antennas, src.ID)
		}
		if f.Factor > 0 {
			s.Action = fmt.Sprintf("reduce by %.1f dB", reduce)
		}
		for _, o := range m.site.Operators {
			if o.Name == s.Operator {
				s.Contact, s.Notice = o.Contact, o.Notice
			}
		}
		out = append(out, s)
	}
	return out
}
