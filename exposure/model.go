package exposure

import (
	"errors"
	"fmt"
	"math"
	"runtime"
	"strconv"

	"example.org/standclear/antenna"
)

// Model is a site compiled for questions. It has no mutable state: every
// method may be called from many goroutines at once.
type Model struct {
	site       *Site
	options    Options
	sources    []compiled
	signalList [][]int // rows that share a signal and frequency, together
	rules      []*rule
	classes    []string
}

// compiled is a source with its method chosen and its powers worked out.
type compiled struct {
	src         *Source
	em          emitter
	method, why string
	power       [powerKinds]float64
	reactive    float64 // depth of the region its method does not reach, m
	takesGround bool    // the ground's field factor applies
	rot         *rotation
	caveats     []string     // of the method chosen
	plane       *groundPlane // the ground whose two rays the method follows, or nil
	info        SourceInfo
}

// silent reports whether the source takes no part in any sum: it radiates
// nothing, or nobody knows how much.
func (c *compiled) silent() bool { return c.src.Power.Unknown || c.src.Power.OnAirW() == 0 }

// ErrNoLimits is returned by New for a site without a limit table.
var ErrNoLimits = errors.New("the site has no limit table")

// New checks the site and compiles it. The error names the source and what is
// wrong with it.
func New(site *Site, o Options) (*Model, error) {
	if site.Limits == nil || len(site.Limits.Rows) == 0 {
		return nil, ErrNoLimits
	}
	if o.Workers <= 0 {
		o.Workers = runtime.GOMAXPROCS(0)
	}
	if site.Ground.Method == "" {
		s := *site
		s.Ground.Method = GroundNone
		site = &s
	}
	if site.Ground.Method == GroundFactor && !(site.Ground.Factor >= 1) {
		return nil, fmt.Errorf("ground factor %v: a field factor is 1 or more, such as 1.6 or 2", site.Ground.Factor)
	}
	m := &Model{site: site, options: o, classes: site.Limits.Classes()}
	for i := range site.Sources {
		s := &site.Sources[i]
		if site.OnlyOn && s.State == Standby {
			continue
		}
		c, err := compile(s, site.Ground)
		if err != nil {
			return nil, fmt.Errorf("antenna %s: %w", s.ID, err)
		}
		m.sources = append(m.sources, c)
	}
	m.signalList = m.signals()
	for _, class := range m.classes {
		r := m.newRule(class)
		if len(r.groups) > maxGroups {
			return nil, fmt.Errorf("class %s: %d groups of levels, at most %d can be", class, len(r.groups), maxGroups)
		}
		m.rules = append(m.rules, r)
	}
	return m, nil
}

// Site returns the site the model was made from.
func (m *Model) Site() *Site { return m.site }

// Classes returns the classes of the limit table, in its order.
func (m *Model) Classes() []string { return append([]string(nil), m.classes...) }

// rulesFor picks the rules of the named classes (nil = all).
func (m *Model) rulesFor(classes []string) ([]*rule, error) {
	if classes == nil {
		return m.rules, nil
	}
	var out []*rule
	for _, c := range classes {
		r := m.rule(c)
		if r == nil {
			return nil, fmt.Errorf("no class %q in the limit table; it has %s", c, listText(m.classes))
		}
		out = append(out, r)
	}
	return out, nil
}

func (m *Model) rule(class string) *rule {
	for _, r := range m.rules {
		if r.class == class {
			return r
		}
	}
	return nil
}

// groundFactor is the field factor of the site's ground where a surface states
// none of its own.
func (m *Model) groundFactor(own float64) float64 {
	if own >= 1 {
		return own
	}
	if m.site.Ground.Method == GroundFactor {
		return m.site.Ground.Factor
	}
	return 1
}

// compile chooses the method of a source and works out its powers.
func compile(s *Source, ground Ground) (compiled, error) {
	c := compiled{src: s, takesGround: true}
	switch {
	case s.Pattern == nil:
		return c, errors.New("no pattern")
	case !(s.FrequencyHz > 0) || math.IsInf(s.FrequencyHz, 0):
		return c, fmt.Errorf("frequency %v Hz is not a positive number", s.FrequencyHz)
	case !(s.Gain > 0) || math.IsInf(float64(s.Gain), 0):
		return c, fmt.Errorf("gain %v (as a ratio) is not a positive number", float64(s.Gain))
	case !s.Power.Unknown && !(s.Power.OnAirW() >= 0 && s.Power.ThermalW() >= 0 && s.Power.PeakW() >= 0 && s.Power.PeakW() < math.Inf(1)):
		return c, fmt.Errorf("power %+v has a negative or missing figure", s.Power)
	}
	for _, v := range []float64{s.Position.X, s.Position.Y, s.Position.Z, s.Pose.AzimuthRad, s.Pose.TiltRad, s.Pose.RollRad} {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return c, errors.New("position or orientation is not a number")
		}
	}
	if s.SweepRad > 0 {
		width := math.Max(s.WidthM, s.DiameterM)
		beam := s.HorizontalBeamwidthRad
		if beam == 0 && s.DiameterM > 0 {
			// a dish states no beamwidth: 70 deg lambda/D, common practice
			beam = 70 * math.Pi / 180 * Wavelength(s.FrequencyHz) / s.DiameterM
		}
		if beam == 0 {
			return c, errors.New("a rotating antenna needs a horizontal beamwidth or a diameter")
		}
		c.rot = &rotation{beamwidth: beam, width: width, sweep: s.SweepRad}
		turned := *s
		turned.Pattern = swept{s.Pattern, s.SweepRad / 2}
		s = &turned
	}
	if err := c.choose(s, ground); err != nil {
		return c, err
	}
	c.src.fillInfo(&c)
	c.power = [powerKinds]float64{meanPower: c.src.Power.ThermalW(), peakPower: c.src.Power.PeakW(), onAirPower: c.src.Power.OnAirW()}
	return c, nil
}

// place is the source's placement in the site's frame.
func (s *Source) place() placement {
	lambda := Wavelength(s.FrequencyHz)
	return placement{
		pos: s.Position, axes: s.Pose.Axes(), vert: Point{Z: 1},
		halfLength: math.Max(s.LengthM, s.DiameterM) / 2,
		halfWidth:  math.Max(s.WidthM, s.DiameterM) / 2,
		reactive:   ReactiveDistance(lambda),
	}
}

// largest is the largest dimension of the radiating body, m.
func (s *Source) largest() float64 {
	return math.Max(math.Hypot(s.LengthM, s.WidthM), s.DiameterM)
}

func (s *Source) fillInfo(c *compiled) {
	lambda := Wavelength(s.FrequencyHz)
	c.info = SourceInfo{
		Antenna: s.ID, Method: c.method, Why: c.why, FrequencyHz: s.FrequencyHz, WavelengthM: lambda,
		GainDBi: s.Gain.DBi(), OnAirW: s.Power.OnAirW(), MeanW: s.Power.ThermalW(), PeakW: s.Power.PeakW(),
		EIRPW: EIRP(s.Power.ThermalW(), s.Gain), PowerUnknown: s.Power.Unknown,
		ReactiveM: ReactiveDistance(lambda), FarFieldM: FarFieldDistance(s.largest(), lambda), Source: s,
	}
	if s.DiameterM > 0 {
		c.info.FresnelM = DishNearFieldDistance(s.DiameterM, lambda)
		c.info.DishFarFieldM = DishFarFieldDistance(s.DiameterM, lambda)
	}
	if k, ok := s.Pattern.(antenna.Coverage); ok {
		c.info.Caveats = append(c.info.Caveats, k.Caveats()...)
	}
	c.info.Caveats = append(c.info.Caveats, c.caveats...)
}

// Sources returns what the model makes of each source, in the site's order.
func (m *Model) Sources() []SourceInfo {
	out := make([]SourceInfo, len(m.sources))
	for i := range m.sources {
		out[i] = m.sources[i].info
	}
	return out
}

// frequencyText writes a frequency the way a surveyor says it.
func frequencyText(hz float64) string {
	switch {
	case hz >= 1e9:
		return strconv.FormatFloat(hz/1e9, 'g', 6, 64) + " GHz"
	case hz >= 1e6:
		return strconv.FormatFloat(hz/1e6, 'g', 6, 64) + " MHz"
	}
	return strconv.FormatFloat(hz/1e3, 'g', 6, 64) + " kHz"
}

// listText writes a list as a sentence has it: "a, b and c".
func listText(s []string) string {
	switch len(s) {
	case 0:
		return "none"
	case 1:
		return s[0]
	}
	out := s[0]
	for _, x := range s[1 : len(s)-1] {
		out += ", " + x
	}
	return out + " and " + s[len(s)-1]
}
