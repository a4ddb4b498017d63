package survey

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"example.org/standclear/exposure"
)

// compared are the parts with a difference: readings outside groups, groups and
// logs.
func (s *session) compared() []*part {
	var out []*part
	add := func(p *part) {
		if p.kind != "member" && p.compare.DifferenceDB != nil {
			out = append(out, p)
		}
	}
	for i := range s.result.Readings {
		add(s.result.Readings[i].part)
	}
	for i := range s.result.Groups {
		add(s.result.Groups[i].part)
	}
	for i := range s.result.Series {
		add(s.result.Series[i].part)
	}
	return out
}

// findings sums the comparison up and names what the model cannot explain.
func (s *session) findings(ctx context.Context) {
	parts := s.compared()
	a := &s.result.Agreement
	var sum float64
	for _, p := range parts {
		d := *p.compare.DifferenceDB
		a.Compared++
		sum += d
		if math.Abs(d) <= p.compare.CombinedDB {
			a.Explained++
		}
		switch {
		case d > p.compare.CombinedDB && !p.below:
			s.result.Unexplained = append(s.result.Unexplained, s.finding(ctx, p, parts))
		case d < -p.compare.CombinedDB:
			a.BelowByMore = append(a.BelowByMore, p.id)
		}
	}
	if n := float64(len(parts)); n > 0 {
		bias, share := sum/n, float64(a.Explained)/n
		a.BiasDB, a.Share = &bias, &share
		if n > 1 {
			square := 0.0
			for _, p := range parts {
				d := *p.compare.DifferenceDB - bias
				square += d * d
			}
			spread := math.Sqrt(square / (n - 1))
			a.SpreadDB = &spread
		}
	}
	slices.SortStableFunc(s.result.Unexplained, func(x, y Finding) int { return cmp.Compare(y.DifferenceDB, x.DifferenceDB) })
}

// finding names the inventory rows that could be wrong about one part.
func (s *session) finding(ctx context.Context, p *part, all []*part) Finding {
	d := *p.compare.DifferenceDB
	f := Finding{What: p.kind, ID: p.id, Place: p.place.ID, DifferenceDB: d, CombinedDB: p.compare.CombinedDB, Factor: math.Pow(10, d/10), Suspects: []Suspect{}}
	f.Words = fmt.Sprintf("%s lies %.1f dB above its prediction, more than the combined expanded uncertainty of %.1f dB: the model or the inventory is wrong", p.id, d, p.compare.CombinedDB)
	shares := s.shares(ctx, p)
	for _, id := range p.compare.Of {
		x := s.source(id)
		share := shares[id]
		// A row of a thousandth of the power would have to be a thousand times
		// stronger: it is not worth a reader's time.
		const leastShare = 0.001
		if share < leastShare && len(p.compare.Of) > 1 {
			continue
		}
		f.Suspects = append(f.Suspects, s.suspect(x, p, all, share, f.Factor))
	}
	slices.SortStableFunc(f.Suspects, func(x, y Suspect) int {
		return cmp.Or(cmp.Compare(y.score, x.score), cmp.Compare(y.Share, x.Share))
	})
	const mostSuspects = 5
	f.Suspects = f.Suspects[:min(len(f.Suspects), mostSuspects)]
	return f
}

// shares returns each row's part of the power predicted at a part's points.
func (s *session) shares(ctx context.Context, p *part) map[string]float64 {
	out := map[string]float64{}
	m := s.models[strings.Join(p.compare.Of, "\x00")]
	points, err := m.Field(ctx, p.heights)
	if err != nil {
		return out
	}
	total := 0.0
	for _, pt := range points {
		for _, c := range pt.Contributions {
			w := float64(c.EVPerM) * float64(c.EVPerM)
			out[c.Antenna] += w
			total += w
		}
	}
	for id := range out {
		out[id] /= total
	}
	return out
}

// suspect says why a row could be wrong. The score only orders the list.
func (s *session) suspect(x *exposure.Source, p *part, all []*part, share, factor float64) Suspect {
	out := Suspect{Antenna: x.ID, Row: rowPlace(x.Row), Share: share, Factor: exposure.Number(math.Inf(1)), Why: []string{}, score: share}
	if share > 0 {
		out.Factor = exposure.Number(1 + (factor-1)/share)
	}
	why := func(score float64, format string, args ...any) {
		out.Why = append(out.Why, fmt.Sprintf(format, args...))
		out.score += score
	}
	if len(p.compare.Of) == 1 {
		why(1, "the reading is of this row alone")
	}
	same, housing := s.witnesses(x, p, all)
	if len(same) > 0 {
		why(1, "also above prediction and of this row: %s, which speaks for its power, carriers, loss or gain", strings.Join(same, ", "))
	}
	if len(housing) > 0 {
		why(0.5, "as predicted, from other rows in the housing %s: %s, which speaks against its place, azimuth or tilt", x.Housing, strings.Join(housing, ", "))
	}
	for _, text := range s.unlikeSiblings(x) {
		why(1.5, "%s", text)
	}
	if n := x.Power.Carriers * float64(out.Factor); x.Power.Carriers > 0 && n < 64 {
		if whole := math.Round(n); whole > x.Power.Carriers && math.Abs(10*math.Log10(n/whole)) <= max(1, p.compare.CombinedDB/2) {
			why(0.2, "%g carriers in place of %g would be %.1f dB more", whole, x.Power.Carriers, 10*math.Log10(whole/x.Power.Carriers))
		}
	}
	if x.Power.ReductionFactor < 1 || x.Power.Duty < 1 {
		full := 1 / (x.Power.ReductionFactor * x.Power.Duty)
		if float64(out.Factor) <= full*1.26 {
			why(0.3, "without its power reduction factor and duty it would be %.1f dB more", 10*math.Log10(full))
		}
	}
	if x.DataFrom == "" {
		why(0.5, "nobody is named under \"data from\"")
	}
	if x.Row != nil {
		if note := x.Row.Cell("note"); note != "" {
			why(0, "its note: %s", note)
		}
	}
	return out
}

// witnesses are other comparisons that tell where a fault lies: those of the
// same row that lie too high as well, and those of other rows in its housing
// that agree.
func (s *session) witnesses(x *exposure.Source, p *part, all []*part) (same, housing []string) {
	for _, q := range all {
		if q == p || len(q.compare.Of) != 1 {
			continue
		}
		other := s.source(q.compare.Of[0])
		d, u := *q.compare.DifferenceDB, q.compare.CombinedDB
		switch {
		case other.ID == x.ID && d > u:
			same = append(same, q.id)
		case other.ID != x.ID && x.Housing != "" && other.Housing == x.Housing && math.Abs(d) <= u:
			housing = append(housing, q.id)
		}
	}
	return same, housing
}

// unlikeSiblings says in which figure of power a row differs from every other
// row of the same operator, service and frequency.
func (s *session) unlikeSiblings(x *exposure.Source) []string {
	var siblings []*exposure.Source
	for i := range s.site.Sources {
		y := &s.site.Sources[i]
		if y.ID != x.ID && y.Operator == x.Operator && y.Service == x.Service && y.FrequencyHz == x.FrequencyHz {
			siblings = append(siblings, y)
		}
	}
	if len(siblings) == 0 {
		return nil
	}
	var ids []string
	for _, y := range siblings {
		ids = append(ids, y.ID)
	}
	var out []string
	for _, c := range []struct {
		name string
		of   func(*exposure.Source) float64
	}{
		{"carriers", func(y *exposure.Source) float64 { return y.Power.Carriers }},
		{"power in W", func(y *exposure.Source) float64 { return y.Power.TransmitterW }},
		{"gain as a ratio", func(y *exposure.Source) float64 { return float64(y.Gain) }},
		{"duty", func(y *exposure.Source) float64 { return y.Power.Duty }},
		{"power reduction factor", func(y *exposure.Source) float64 { return y.Power.ReductionFactor }},
		{"share left after loss", func(y *exposure.Source) float64 { return y.Power.Loss }},
	} {
		own, theirs := c.of(x), c.of(siblings[0])
		if own >= theirs || slices.ContainsFunc(siblings, func(y *exposure.Source) bool { return c.of(y) != theirs }) {
			continue
		}
		out = append(out, fmt.Sprintf("its %s: %.4g where %s of the same service %s %.4g: %.1f dB more with theirs", c.name, own, strings.Join(ids, ", "), haveWord(len(ids)), theirs, 10*math.Log10(theirs/own)))
	}
	return out
}

func haveWord(n int) string {
	if n == 1 {
		return "has"
	}
	return "have"
}

// rowPlace names an input row: antennas.csv:7.
func rowPlace(r *exposure.InputRow) string {
	if r == nil || r.Table == nil {
		return ""
	}
	if r.Table.Sheet != "" {
		return fmt.Sprintf("%s %s!A%d", r.Table.File, r.Table.Sheet, r.Row)
	}
	return fmt.Sprintf("%s:%d", r.Table.File, r.Row)
}
