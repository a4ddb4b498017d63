package exposure

import (
	"context"
	"fmt"
	"math"
)

// Scenario is the site with named changes of its tables: an operating state, or
// a plan to be weighed against what stands.
type Scenario struct {
	Name    string
	Changes []string // each change as typed: "antennas A1 power [W]: 40 in place of 20"
	Site    *Site
}

// StateResult is what one operating state comes to.
type StateResult struct {
	State     string         `json:"state"`
	Changes   []string       `json:"changes,omitempty"`
	Places    []StateRatio   `json:"places"`
	Surfaces  []StateRatio   `json:"surfaces"`
	Distances []Distance     `json:"distances"` // everything together, farthest of each class
	Worst     []WorstOfState `json:"worst_at,omitempty"`
}

// StateRatio is the ratio at a place, or the largest on a surface, for the class
// that may be there.
type StateRatio struct {
	Where         string  `json:"where"`
	Class         string  `json:"class"`
	ExposureRatio Number  `json:"exposure_ratio"`
	Verdict       Verdict `json:"verdict"`
	Reason        string  `json:"reason,omitempty"`
}

// WorstOfState names what a state is the worst of all states for.
type WorstOfState struct {
	Where string `json:"where"`
	Class string `json:"class"`
}

// The states that need no naming.
const (
	StateAll = "every row, standby included"
	StateOn  = "rows that are on"
)

// States assesses every operating state: all rows together; the rows that are on
// alone, where some are on standby; and each scenario of the site. Each place and
// surface is answered for the class that may be there, and the state in which
// its ratio is largest is named; of equal states the first is.
func (m *Model) States(ctx context.Context) ([]StateResult, error) {
	var out []StateResult
	add := func(name string, changes []string, site *Site) error {
		v, err := New(site, Options{Workers: m.options.Workers})
		if err != nil {
			return fmt.Errorf("scenario %s: %w", name, err)
		}
		s, err := v.state(ctx)
		s.State, s.Changes = name, changes
		out = append(out, s)
		return err
	}
	standby := false
	for i := range m.site.Sources {
		standby = standby || m.site.Sources[i].State == Standby
	}
	name := StateAll
	if m.site.OnlyOn {
		name = StateOn
	}
	base, err := m.state(ctx)
	if err != nil {
		return nil, err
	}
	base.State = name
	out = append(out, base)
	if standby && !m.site.OnlyOn {
		site := *m.site
		site.OnlyOn = true
		if err := add(StateOn, nil, &site); err != nil {
			return nil, err
		}
	}
	for _, s := range m.site.Scenarios {
		if err := add(s.Name, s.Changes, s.Site); err != nil {
			return nil, err
		}
	}
	nameWorst(out)
	return out, ctx.Err()
}

// nameWorst tells each state what it is the worst of.
func nameWorst(states []StateResult) {
	if len(states) < 2 {
		return
	}
	type key struct{ where, class string }
	best := map[key]int{}
	ratio := map[key]float64{}
	var order []key
	for i := range states {
		for _, list := range [][]StateRatio{states[i].Places, states[i].Surfaces} {
			for _, r := range list {
				k := key{r.Where, r.Class}
				rank := float64(r.ExposureRatio)
				if r.Verdict == NotAssessed {
					// What is not assessed may be anything: it is worse than any
					// ratio within, and no worse than one above.
					rank = math.Max(rank, 1)
				}
				old, seen := ratio[k]
				if !seen {
					order = append(order, k)
				}
				if !seen || rank > old*(1+1e-9) {
					best[k], ratio[k] = i, rank
				}
			}
		}
	}
	for _, k := range order {
		s := &states[best[k]]
		s.Worst = append(s.Worst, WorstOfState{k.where, k.class})
	}
}

// state answers the places, surfaces and distances of one state.
func (m *Model) state(ctx context.Context) (StateResult, error) {
	s := StateResult{Places: []StateRatio{}, Surfaces: []StateRatio{}, Distances: []Distance{}}
	for i := range m.site.Places {
		p := &m.site.Places[i]
		for _, class := range m.classesAt(p.Class) {
			c := m.classAt(p, class)
			s.Places = append(s.Places, StateRatio{p.ID, class, c.ExposureRatio, c.Verdict, c.Reason})
		}
	}
	for i := range m.site.Surfaces {
		f := &m.site.Surfaces[i]
		r := m.rule(f.Class)
		if r == nil {
			continue
		}
		top, err := m.largestOn(ctx, f.ID, r, summitDecided)
		if err != nil {
			return s, err
		}
		z := Zone{Share: 1}
		v := StateRatio{Where: f.ID, Class: f.Class, ExposureRatio: Number(top.lower)}
		v.Verdict, v.Reason = zoneVerdict(&z, r, top)
		s.Surfaces = append(s.Surfaces, v)
	}
	all, err := m.Distances(ctx, DistanceQuery{All: true})
	if err != nil {
		return s, err
	}
	for _, class := range m.classes {
		var far *Distance
		for i := range all {
			if d := &all[i]; d.Class == class && (far == nil || d.DistanceM > far.DistanceM) {
				far = d
			}
		}
		if far != nil {
			s.Distances = append(s.Distances, *far)
		}
	}
	return s, ctx.Err()
}
