package exposure

import (
	"context"
	"errors"
	"fmt"
	"math"
	"sort"

	"example.org/standclear/limits"
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
}

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

// Switch is a line of the switching sheet, for the plan of least power. The
// last four figures are filled in by hand.
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
	w := &Work{Class: q.Class, Surface: q.Surface, Cautions: workCautions, StayAskedMin: q.StayS / 60, Reductions: []Reduction{}, Contributors: []Contributor{}, Switching: []Switch{}}
	places := append([]Place(nil), q.Places...)
	for _, p := range places {
		w.Places = append(w.Places, p.ID)
	}
	if q.Surface != "" {
		if m.surface(q.Surface) == nil {
			return nil, fmt.Errorf("no surface %q in the site", q.Surface)
		}
		p, err := m.worstOn(ctx, q.Surface, r)
		if err != nil {
			return nil, err
		}
		if p != nil {
			places = append(places, *p)
		}
	}
	if len(places) == 0 {
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
	w.Contributors = m.contributors(points, q.Class, q.Share)
	if len(r.uncovered) > 0 {
		w.Reason = joinReasons(r.uncovered)
		w.StayReason = "no stay is proposed: " + w.Reason
		zero := 0.0
		w.StayMin = &zero
		return w, nil
	}
	problem := newWorkProblem(m, r, &q, places)
	for _, make := range []func(context.Context) (*Reduction, error){problem.leastPower, problem.equal, problem.fewestOff} {
		plan, err := make(ctx)
		if err != nil {
			return nil, err
		}
		w.Reductions = append(w.Reductions, *plan)
	}
	m.stay(w, r, points, &q)
	w.Switching = m.switching(w.Reductions[0].Transmitters)
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

// worstOn is the place of the largest ratio on a surface, with the body that the
// surface states; nil where nothing radiates.
func (m *Model) worstOn(ctx context.Context, surface string, r *rule) (*Place, error) {
	s := m.surface(surface)
	regions, err := m.regions(&ZoneQuery{Surfaces: []string{surface}})
	if err != nil {
		return nil, err
	}
	g := regions[0]
	e := m.evaluator(r, nil, g.factor, g.frame, 1)
	p := newPlane(g.rings, DefaultResolutionM, g.from, g.to, r.anyMean && !g.peak && g.to > g.from)
	top := e.largestOver(ctx, p)
	if top.lower == 0 {
		return nil, nil
	}
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

// stay says how long a stay may last by the averaging rule.
func (m *Model) stay(w *Work, r *rule, points []PointResult, q *WorkQuery) {
	none := func(why string) {
		zero := 0.0
		w.StayMin, w.StayReason = &zero, why
	}
	if w.Verdict == NotAssessed || w.Reason != "" {
		none("no stay is proposed: " + w.Reason)
		return
	}
	if float64(w.ExposureRatio) <= 1 {
		w.StayAllowed = true
		w.StayReason = "the exposure ratio is not above 1: the levels supplied set no end to a stay"
		return
	}
	averaging, whole, short := math.Inf(1), true, false
	for i := range m.sources {
		s := &m.sources[i]
		if s.silent() {
			continue
		}
		for _, at := range m.site.Limits.At(r.class, s.src.FrequencyHz) {
			if at.Group.Effect == limits.Stimulation || at.Group.Kind == limits.Peak {
				continue
			}
			if at.Group.Region == limits.Local {
				short = true
			}
			whole = whole && (at.None || at.TimeAveraging)
			if at.AverageS > 0 {
				averaging = math.Min(averaging, at.AverageS)
			}
			for _, k := range at.Rows {
				short = short || m.site.Limits.Rows[k].HasBrief
			}
		}
	}
	ratio := 0.0
	for _, p := range points {
		for i, g := range p.class(r.class).Groups {
			x := float64(g.ExposureRatio)
			if (r.groups[i].Effect == limits.Stimulation || r.groups[i].Kind == limits.Peak) && x > 1 {
				none("no stay: the " + r.groups[i].String() + " levels are exceeded, and they are never averaged")
				return
			}
			ratio = math.Max(ratio, x)
		}
	}
	switch {
	case !whole:
		none("no stay: the limit rows of this class do not all say that a stay may be averaged (time averaging = yes)")
	case !short:
		none("no stay: the table has no local or brief levels for this class, which a short stay must be held against")
	case math.IsInf(averaging, 1):
		none("no stay: the limit rows state no averaging time")
	case q.Elsewhere >= 1:
		none("no stay: the ratio elsewhere already takes up the limit")
	default:
		t := StayTime(averaging, ratio, q.Elsewhere) / 60
		w.StayMin, w.StayAllowed = &t, true
		w.StayReason = fmt.Sprintf("at a ratio of %.3g for the stay and %.3g for the rest of any %.4g min", ratio, q.Elsewhere, averaging/60)
		if q.StayS > 0 && q.StayS/60 > t {
			w.StayAllowed = false
			w.StayReason += fmt.Sprintf("; the %.4g min asked are longer than that", q.StayS/60)
		}
	}
}

// StayTime returns how long, in s, a stay at exposure ratio r may last within
// the averaging time T (s) when the ratio is r0 for the rest of it: t = T (1 -
// r0)/(r - r0), for r > 1 and 0 <= r0 < 1. It is exact for constant ratios.
// Source: [STAY].
func StayTime(averagingS, r, r0 float64) float64 { return averagingS * (1 - r0) / (r - r0) }

// switching writes the switching sheet for a plan.
func (m *Model) switching(factors []TransmitterFactor) []Switch {
	out := []Switch{}
	for _, f := range factors {
		if f.Factor >= 1 {
			continue
		}
		s := Switch{Transmitter: f.Transmitter, Action: "switch off"}
		for i := range m.sources {
			src := m.sources[i].src
			if src.transmitter() != f.Transmitter {
				continue
			}
			if len(s.Antennas) == 0 {
				s.Operator, s.Reference = src.Operator, src.OperatorReference
				s.BearingDeg = bearing(src.Pose.AzimuthRad + m.site.About.GridBearingRad)
				s.HeightM, s.BandMHz = src.Position.Z, src.FrequencyHz/1e6
				s.TargetW = src.Power.TransmitterW * f.Factor
			}
			s.Antennas = append(s.Antennas, src.ID)
		}
		if f.Factor > 0 {
			s.Action = fmt.Sprintf("reduce by %.1f dB", math.Ceil(float64(f.ReductionDB)*10)/10)
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
