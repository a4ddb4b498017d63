package survey

import (
	"context"
	"fmt"
	"math"
	"slices"
	"time"

	"example.org/standclear/exposure"
)

// session is one evaluation.
type session struct {
	survey      *Survey
	site        *exposure.Site
	model       *exposure.Model
	rule        exposure.DecisionRule
	instruments map[string]*Instrument
	budgets     map[string]*float64 // expanded, nil = none stated
	models      map[string]*exposure.Model
	result      *Result
}

// Evaluate works a survey out against a model of its site. It returns an error
// where a log cannot be read or a prediction cannot be made; what is wrong with
// a single reading stands beside that reading.
func Evaluate(ctx context.Context, model *exposure.Model, survey *Survey) (*Result, error) {
	site := model.Site()
	s := &session{
		survey: survey, site: site, model: model, rule: site.About.DecisionRule,
		instruments: map[string]*Instrument{}, budgets: map[string]*float64{}, models: map[string]*exposure.Model{},
		result: &Result{Unexplained: []Finding{}, Readings: []ReadingResult{}, Groups: []GroupResult{}, Series: []SeriesResult{}, Places: []PlaceResult{}, Budgets: []Budget{}, Survey: survey},
	}
	if s.rule == "" {
		s.rule = exposure.RuleSimple
	}
	s.result.DecisionRule, s.result.RuleWords = s.rule, RuleWords(s.rule)
	s.result.Agreement.BelowByMore = []string{}
	for i := range survey.Instruments {
		in := &survey.Instruments[i]
		s.instruments[in.ID] = in
		b, ok := BudgetOf(in)
		if ok {
			s.budgets[in.ID] = &b.ExpandedDB
			s.result.Budgets = append(s.result.Budgets, b)
		}
	}
	if err := s.readings(ctx); err != nil {
		return nil, err
	}
	if err := s.series(ctx); err != nil {
		return nil, err
	}
	s.places()
	if err := s.placePredictions(ctx); err != nil {
		return nil, err
	}
	s.findings(ctx)
	return s.result, nil
}

// spot is what joins into one isotropic value: one reading, or its three axes.
type spot struct {
	members []*Reading
	c       *corrected
}

// readings corrects every reading, joins axes and heights, and judges.
func (s *session) readings(ctx context.Context) error {
	spots := s.join()
	var heights []*part
	parts := make([]*part, len(spots))
	for i, sp := range spots {
		r := sp.members[0]
		p := s.part(sp)
		parts[i] = p
		res := ReadingResult{
			ID: p.id, Place: r.At.ID, XM: r.At.At.X, YM: r.At.At.Y, ZM: r.At.At.Z, BelowFloor: p.below, ExpandedDB: p.expanded,
			FromHz: p.lo, ToHz: p.hi, Instrument: r.Instrument, Time: r.Time, Group: r.Group, CalibrationFactor: sp.c.factor,
			ScaleFactor: p.scale, ScaleFormula: r.Scale.Formula(r.Ports), Remarks: sp.c.remarks, Reading: r, part: p,
		}
		if len(sp.members) == 1 {
			res.Axis = r.Axis
		}
		if r.Quantity != ShareOfLimit {
			e, m := p.e, p.e/p.scale
			res.FieldVPerM, res.MeasuredVPerM = &e, &m
		}
		s.result.Readings = append(s.result.Readings, res)
	}
	for i := range s.result.Readings {
		res := &s.result.Readings[i]
		var remarks []string
		res.Judgement, remarks = s.judge(parts[i])
		res.Remarks = append(slices.Clone(res.Remarks), remarks...)
		parts[i].result, parts[i].compare = &res.Judgement, &res.Comparison
	}
	if err := s.predict(ctx, parts); err != nil {
		return err
	}
	heights = s.groups(parts)
	return s.predict(ctx, heights)
}

// join makes spots of the readings: three axes of one spot become one.
func (s *session) join() []*spot {
	var out []*spot
	type key struct {
		group, place, instrument string
		height, f, from, to      float64
	}
	at := map[key]*spot{}
	for i := range s.survey.Readings {
		r := &s.survey.Readings[i]
		if r.Axis == "" {
			out = append(out, &spot{members: []*Reading{r}})
			continue
		}
		k := key{r.Group, r.At.ID, r.Instrument, r.At.At.Z, r.FrequencyHz, r.FromHz, r.ToHz}
		sp := at[k]
		if sp == nil || slices.ContainsFunc(sp.members, func(m *Reading) bool { return m.Axis == r.Axis }) {
			sp = &spot{}
			at[k] = sp
			out = append(out, sp)
		}
		sp.members = append(sp.members, r)
	}
	return out
}

// part corrects a spot.
func (s *session) part(sp *spot) *part {
	r := sp.members[0]
	p := &part{id: r.ID, kind: "reading", place: r.At, quantity: r.Quantity, detector: r.Detector, shareOf: r.ShareOf,
		antennas: r.Antennas, expanded: s.budgets[r.Instrument], scale: r.Scale.Factor(r.Ports), heights: []exposure.Place{r.At}}
	e2 := 0.0
	for i, m := range sp.members {
		c := prepare(m, s.instruments[m.Instrument], s.site.About.SurveyDate)
		c.correct(m.Value)
		e2 += c.eVPerM * c.eVPerM
		p.share += c.share
		p.below = p.below || c.belowFloor
		for _, reason := range c.reasons {
			if !slices.Contains(p.reasons, reason) {
				p.reasons = append(p.reasons, reason)
			}
		}
		if i == 0 {
			sp.c, p.lo, p.hi = c, c.lo, c.hi
		} else {
			p.id += "+" + m.ID
		}
	}
	if r.Axis != "" && len(sp.members) != 3 {
		p.reasons = append(p.reasons, fmt.Sprintf("%d of 3 axes were read", len(sp.members)))
	}
	p.e = math.Sqrt(e2) * p.scale
	p.share *= p.scale * p.scale
	p.largestE, p.largestS = p.e, p.share
	return p
}

// groups joins the heights of each spot, one group for each band.
func (s *session) groups(parts []*part) []*part {
	type key struct {
		group    string
		lo, hi   float64
		shaped   bool
		antennas string
	}
	at := map[key]int{}
	var members [][]*part
	var names []string
	for i, res := range s.result.Readings {
		if res.Group == "" {
			continue
		}
		p := parts[i]
		k := key{res.Group, p.lo, p.hi, p.quantity == ShareOfLimit, fmt.Sprint(p.antennas)}
		n, ok := at[k]
		if !ok {
			n = len(members)
			at[k] = n
			members, names = append(members, nil), append(names, res.Group)
		}
		members[n] = append(members[n], p)
	}
	var out []*part
	for n, list := range members {
		out = append(out, s.group(names[n], list))
	}
	for n, p := range out {
		g := GroupResult{Group: names[n], Place: p.place.ID, FromHz: p.lo, ToHz: p.hi, BelowFloor: p.below, ExpandedDB: p.expanded, part: p}
		for _, m := range members[n] {
			g.Members = append(g.Members, m.id)
			g.Heights = append(g.Heights, m.heights[0].At.Z)
			m.kind = "member"
		}
		if base := s.placeHeight(p.place.ID); base != nil {
			for i := range g.Heights {
				g.Heights[i] = math.Round((g.Heights[i]-*base)*1e6) / 1e6
			}
		}
		if p.quantity != ShareOfLimit {
			e, largest := p.e, p.largestE
			g.FieldVPerM, g.LargestVPerM = &e, &largest
		}
		g.Judgement, g.Remarks = s.judge(p)
		for _, m := range members[n] {
			g.LargestRatio = max(g.LargestRatio, float64(m.result.ExposureRatio))
		}
		switch len(members[n]) {
		case 1, 3, 6, 20:
		default:
			g.Remarks = append(g.Remarks, fmt.Sprintf("%d heights: 1, 3, 6 or 20 are usual", len(members[n])))
		}
		s.result.Groups = append(s.result.Groups, g)
	}
	for n := range s.result.Groups {
		g := &s.result.Groups[n]
		out[n].result, out[n].compare = &g.Judgement, &g.Comparison
	}
	return out
}

// group is the mean over the members: power averages, never field averages.
func (s *session) group(name string, members []*part) *part {
	first := members[0]
	g := *first
	g.id, g.kind, g.reasons, g.heights, g.share, g.largestE, g.largestS = name, "group", nil, nil, 0, 0, 0
	e2 := 0.0
	for _, m := range members {
		e2 += m.e * m.e / float64(len(members))
		g.share += m.share / float64(len(members))
		g.largestE, g.largestS = max(g.largestE, m.e), max(g.largestS, m.share)
		g.below = g.below || m.below
		g.heights = append(g.heights, m.heights...)
		// The components of one instrument do not average out over its readings.
		if m.expanded == nil || g.expanded != nil && *m.expanded > *g.expanded {
			g.expanded = m.expanded
		}
		for _, reason := range m.reasons {
			if !slices.Contains(g.reasons, reason) {
				g.reasons = append(g.reasons, reason)
			}
		}
	}
	g.e = math.Sqrt(e2)
	return &g
}

func (s *session) placeHeight(id string) *float64 {
	for i := range s.site.Places {
		if s.site.Places[i].ID == id && id != "" {
			return &s.site.Places[i].At.Z
		}
	}
	return nil
}

// series reads every log once.
func (s *session) series(ctx context.Context) error {
	var parts []*part
	for i := range s.survey.Series {
		log := &s.survey.Series[i]
		res, p, err := s.log(ctx, log)
		if err != nil {
			return err
		}
		s.result.Series = append(s.result.Series, res)
		s.result.Files = append(s.result.Files, log.Samples.Files()...)
		parts = append(parts, p)
	}
	for i := range s.result.Series {
		parts[i].result, parts[i].compare = &s.result.Series[i].Judgement, &s.result.Series[i].Comparison
	}
	return s.predict(ctx, parts)
}

// log works one log out.
func (s *session) log(ctx context.Context, log *Series) (SeriesResult, *part, error) {
	r := log.Reading
	in := s.instruments[r.Instrument]
	c := prepare(&r, in, s.site.About.SurveyDate)
	p := &part{id: log.Name, kind: "series", place: r.At, lo: c.lo, hi: c.hi, quantity: r.Quantity, detector: r.Detector, shareOf: r.ShareOf,
		antennas: r.Antennas, expanded: s.budgets[r.Instrument], scale: r.Scale.Factor(r.Ports), heights: []exposure.Place{r.At}}
	res := SeriesResult{Series: log.Name, Place: r.At.ID, FromHz: c.lo, ToHz: c.hi, ExpandedDB: p.expanded, ScaleFactor: p.scale,
		ScaleFormula: r.Scale.Formula(r.Ports), Remarks: slices.Clone(c.remarks)}
	times := s.averagings(p)
	runs := make([]*Running, len(times))
	for i, t := range times {
		runs[i] = NewRunning(t, log.ZoneS)
	}
	gain := c.field(1)
	floor, overload := in.FloorVPerM, math.Inf(1)
	if in.OverloadVPerM > 0 {
		overload = in.OverloadVPerM
	}
	// Squares are formed by one multiplication where the quantity is a field.
	square := gain * gain
	floor2, overload2 := floor*floor*max(1, c.factor*c.factor), overload*overload*min(1, c.factor*c.factor)
	power := r.Quantity == PowerDensity || r.Quantity == PortLevel
	shaped := r.Quantity == ShareOfLimit
	backward := 0
	err := log.Samples.Each(ctx, func(ns int64, value float64) error {
		var e2 float64
		switch {
		case shaped:
			e2 = value * c.factor * c.factor
		case power:
			e2 = square * value
		default:
			e2 = square * value * value
		}
		if !shaped {
			if e2 < floor2 {
				e2 = max(e2, floor*floor)
				res.BelowFloor++
			}
			if e2 > overload2 {
				res.Overloaded++
			}
		}
		for i, run := range runs {
			if !run.Add(ns, e2) && i == 0 {
				backward++
			}
		}
		return nil
	})
	if err != nil {
		return res, p, err
	}
	means := make([]RunningMean, len(runs))
	for i, run := range runs {
		means[i] = run.Mean()
	}
	governing := s.governing(p, times, means)
	res.RunningMean = means[governing]
	res.LevelVPerM = s.levelOver(p, times[governing])
	m := &res.RunningMean
	if m.Samples == 0 {
		p.reasons = append(p.reasons, "the log has no sample")
	}
	p.reasons = append(p.reasons, c.reasons...)
	if backward > 0 {
		p.reasons = append(p.reasons, fmt.Sprintf("%d samples stand after later ones and were left out: the log is not in order of time", backward))
	}
	if res.Overloaded > 0 {
		p.reasons = append(p.reasons, fmt.Sprintf("%d samples lie beyond what %s can read: the field may be higher", res.Overloaded, in.ID))
	}
	for i, mean := range means {
		if mean.Short {
			p.reasons = append(p.reasons, fmt.Sprintf("the log lasts %.4g min, less than the averaging time of %.4g min", mean.DurationS/60, times[i]/60))
		}
	}
	for i, mean := range means {
		if i != governing && mean.Samples > 0 && !shaped {
			res.Remarks = append(res.Remarks, fmt.Sprintf("%.4g V/m is the largest mean over %.4g min", mean.Largest*p.scale, times[i]/60))
		}
	}
	res.Remarks = append(res.Remarks, m.remarks()...)
	if said, ok := log.Samples.(interface{ Remarks() []string }); ok {
		res.Remarks = append(res.Remarks, said.Remarks()...)
	}
	p.below = res.BelowFloor == m.Samples && m.Samples > 0
	if shaped {
		p.share = m.Largest * m.Largest * p.scale * p.scale
		p.largestS = p.share
	} else {
		p.e = m.Largest * p.scale
		p.largestE = p.e
		e := p.e
		res.FieldVPerM = &e
	}
	zone := time.FixedZone("", log.ZoneS)
	stamp := func(ns int64) string { return time.Unix(0, ns).In(zone).Format(time.RFC3339Nano) }
	if m.Samples > 0 {
		res.First, res.Last, res.LargestEnd = stamp(m.FirstNS), stamp(m.LastNS), stamp(m.LargestEndNS)
	}
	var remarks []string
	res.Judgement, remarks = s.judge(p)
	res.Remarks = append(res.Remarks, remarks...)
	res.part = p
	return res, p, nil
}

// remarks says what of a log is out of the ordinary.
func (m *RunningMean) remarks() []string {
	var out []string
	say := func(n int, format string, args ...any) {
		if n > 0 {
			out = append(out, fmt.Sprintf(format, args...))
		}
	}
	say(m.Gaps, "%d gaps, %.4g s in all, the longest %.4g s: means are over what was recorded", m.Gaps, m.GapS, m.LongestGapS)
	say(m.Uneven, "%d steps differ from the usual %.4g s: each sample counts for the time since the one before", m.Uneven, m.StepS)
	say(m.SameTime, "%d samples share their time with another and were joined by their mean square", m.SameTime)
	say(m.Unrecorded, "%d windows were recorded by less than half and left out", m.Unrecorded)
	return out
}

// classesOf returns the classes that a part is held against.
func (s *session) classesOf(p *part) []string {
	switch {
	case p.quantity == ShareOfLimit:
		return []string{p.shareOf}
	case p.place.Class == "":
		return s.site.Limits.Classes()
	}
	return []string{p.place.Class}
}

// averagings returns the averaging times in s of the levels that a log is held
// against, shortest first; 0 alone where there is none.
func (s *session) averagings(p *part) []float64 {
	var times []float64
	for _, class := range s.classesOf(p) {
		for _, a := range s.levelsFor(p, class).at {
			if !slices.Contains(times, a.AverageS) && (a.E > 0 || a.H > 0 || a.B > 0 || a.S > 0) {
				times = append(times, a.AverageS)
			}
		}
	}
	if len(times) == 0 {
		return []float64{0}
	}
	slices.Sort(times)
	return times
}

// governing sets the field of each averaging time, each level being compared
// with the mean over its own, and returns which of them governs. A shaped
// reading names no levels: the shortest time holds, whose mean is the largest.
func (s *session) governing(p *part, times []float64, means []RunningMean) int {
	if p.quantity == ShareOfLimit {
		return 0
	}
	p.byAverage = map[float64]float64{}
	for i, t := range times {
		p.byAverage[t] = means[i].Largest * p.scale
	}
	best, most := 0, -1.0
	for _, class := range s.classesOf(p) {
		for _, a := range s.levelsFor(p, class).at {
			i := slices.Index(times, a.AverageS)
			if i < 0 {
				continue
			}
			if r := a.Ratio(p.fieldOf(p.byAverage[a.AverageS])); r > most {
				best, most = i, r
			}
		}
	}
	return best
}

// levelOver returns the lowest level of E, or of S as E of a plane wave, that is
// averaged over a time; 0 = none.
func (s *session) levelOver(p *part, averagingS float64) (level float64) {
	for _, class := range s.classesOf(p) {
		for _, a := range s.levelsFor(p, class).at {
			for _, e := range []float64{a.E, exposure.EFromS(a.S)} {
				if a.AverageS == averagingS && e > 0 && (level == 0 || e < level) {
					level = e
				}
			}
		}
	}
	return level
}
