package reports

import (
	"fmt"
	"slices"
	"strings"

	"example.org/standclear/exposure"
)

// cautions writes what a reader must know before any figure.
func (r *report) cautions() {
	r.write(page{
		name: sheetCautions, title: "Cautions and limits of validity",
		intro:  "Read these before the results. " + r.a.Program + " computed this report; it was not signed by anyone.",
		widths: []float64{5, 90},
	}, func(s *sheet) {
		item := func(mark, text string) {
			s.put([]any{r.plain(mark, false), r.plain(text, false)}, textHeight(text, 90, bodyLine)+5)
		}
		for i, text := range Cautions {
			item(fmt.Sprint(i+1), text)
		}
		if r.a.StateOn {
			item(fmt.Sprint(len(Cautions)+1), "Rows on standby were left out at the user's request.")
		}
		if len(r.a.Notices) > 0 {
			s.section("What the assessor must know about this site")
			for i, n := range r.a.Notices {
				item(fmt.Sprint(i+1), n)
			}
		}
		if caveats := caveats(r.a); len(caveats) > 0 {
			s.section("What the methods used here do not cover")
			for i, c := range caveats {
				item(fmt.Sprint(i+1), c)
			}
		}
		if len(r.a.Warnings) > 0 {
			s.section("Warnings from reading the tables")
			for i, w := range r.a.Warnings {
				item(fmt.Sprint(i+1), warningText(w))
			}
		}
	})
}

func warningText(w exposure.Warning) string {
	var parts []string
	if w.Place != "" {
		parts = append(parts, w.Place)
	}
	if w.Column != "" {
		parts = append(parts, w.Column)
	}
	return strings.Join(append(parts, w.Message), ": ")
}

// caveats joins the sources' caveats: each sentence once, with its antennas.
func caveats(a *exposure.Assessment) []string {
	at := map[string]int{}
	var out []reason
	for _, s := range a.Sources {
		for _, c := range s.Caveats {
			i, ok := at[c]
			if !ok {
				i = len(out)
				at[c] = i
				out = append(out, reason{text: c})
			}
			out[i].what = append(out[i].what, s.Antenna)
		}
	}
	texts := make([]string, len(out))
	for i, c := range out {
		texts[i] = c.text + " (" + list(c.what, 12) + ")"
	}
	return texts
}

// The result page is one page: long lists are cut, and say so.
const mostOnResult = 10

// result writes what a client asks first, on one page.
func (r *report) result() {
	a, f := r.a, r.found
	r.write(page{
		name: sheetResult, title: "Result: " + oneLine(a.SiteName), intro: r.resultIntro(),
		widths: []float64{20, 14, 10, 9, 9, 9, 13, 23}, onePage: true,
	}, func(s *sheet) {
		s.section(fmt.Sprintf("What is above: %d of %s above the limits supplied, for the class that may be there", len(f.above), count(f.places, "place")))
		if len(f.above) > 0 {
			s.table([]column{
				{head: "place"}, {head: "class"},
				{head: "exposure ratio", unit: "1", digits: figures, what: "total exposure ratio of the place for the class: the sum of all sources' shares of the limit", method: "RATIO-1"},
				{head: "x", unit: "m", digits: cents, what: whatX}, {head: "y", unit: "m", digits: cents, what: whatY}, {head: "z", unit: "m", digits: cents, what: whatZ},
				{head: "row"}, {head: "governed by"},
			})
			for i, v := range byRatio(f.above) {
				if i == mostOnResult {
					s.line(fmt.Sprintf("and %d more: see sheet %s", len(f.above)-i, sheetPlaces))
					break
				}
				s.line(v.place, v.class, v.result.ExposureRatio, v.point.XM, v.point.YM, v.point.ZM, placeRow(v.point), v.result.GovernedBy)
			}
		}
		r.resultAreas(s)
		r.resultReaches(s)
		s.section("Not assessed, and why")
		if len(f.reasons) == 0 {
			s.merged("Nothing that was asked.", look{role: bodyPlain}, 0)
		}
		for i, n := range f.reasons {
			if i == mostOnResult {
				s.merged(fmt.Sprintf("and %d more reasons: see sheets %s and %s", len(f.reasons)-i, sheetPlaces, sheetBoundaries), look{role: bodyPlain}, 0)
				break
			}
			s.merged(n.text+": "+list(n.what, 8), look{role: bodyPlain}, 0)
		}
		s.section("Verdicts that change with ground reflection")
		s.merged(groundText(a, f), look{role: bodyPlain}, 0)
		s.section("What nobody has confirmed")
		if len(f.unconfirmed) == 0 {
			s.merged("Sources and dates of the antenna data are stated, and the limit table was checked by "+a.Site.Limits.About.CheckedBy+".", look{role: bodyPlain}, 0)
		}
		for _, u := range f.unconfirmed {
			s.merged(u, look{role: bodyPlain}, 0)
		}
		if len(a.Warnings) > 0 {
			s.merged(count(len(a.Warnings), "warning")+" from reading the tables: see sheet "+sheetCautions, look{role: bodyPlain}, 0)
		}
	})
}

func (r *report) resultIntro() string {
	a := r.a
	parts := []string{fmt.Sprintf("%s, %s.", count(len(a.Sources), "antenna row"), count(len(a.Points), "place"))}
	if a.Site != nil && a.Site.Limits != nil {
		parts = append(parts, "Limits supplied: "+limitTitle(a)+".")
	}
	parts = append(parts, "Ground reflection: "+a.Ground+".")
	if d := reportDate(a); d != "" {
		parts = append(parts, "Report date "+d+".")
	}
	if a.StateOn {
		parts = append(parts, "Rows on standby are left out.")
	}
	return strings.Join(parts, " ")
}

func (r *report) resultAreas(s *sheet) {
	if len(r.a.Zones) == 0 {
		return
	}
	s.section("Where to keep out: areas inside the keep-out lines")
	s.table([]column{
		{head: "surface"}, {head: "class"},
		{head: "keep-out area", unit: "m2", digits: figures, what: "area inside the keep-out line of the class on the surface", method: "BOUND-1"},
		{head: "of surface", unit: "m2", digits: figures, what: "area of the surface's outline"},
		{head: "ratio at least", unit: "1", digits: figures, what: "largest exposure ratio found on the surface: the lower bound", method: "BOUND-1"},
		{head: "ratio at most", unit: "1", digits: figures, what: "largest exposure ratio on the surface: the upper bound", method: "BOUND-1"},
		{head: "may be there"}, {head: "verdict"},
	})
	for i, z := range r.a.Zones {
		if i == 2*mostOnResult {
			s.line(fmt.Sprintf("and %d more: see sheet %s", len(r.a.Zones)-i, sheetBoundaries))
			return
		}
		there := "no"
		if mayBeThere(r.a, z) {
			there = "yes"
		}
		s.line(zoneName(z), z.Class, z.OuterAreaM2, z.SurfaceAreaM2, z.MaxRatioLower, z.MaxRatioUpper, there, verdictFull(zoneVerdict(z), z.Reason))
	}
}

// zoneVerdict is a boundary's verdict; a class that is not covered is not
// assessed as a whole unless the covered sources alone are above.
func zoneVerdict(z exposure.Zone) exposure.Verdict {
	if !z.Covered && z.Verdict != exposure.Above {
		return exposure.NotAssessed
	}
	return z.Verdict
}

func (r *report) resultReaches(s *sheet) {
	all := reaches(r.a)
	kept := all[:0:0]
	for _, x := range all {
		if x.antenna == "" {
			kept = append(kept, x)
		}
	}
	if len(kept) == 0 {
		kept = all
	}
	slices.SortStableFunc(kept, func(a, b reach) int { return order(a) - order(b) })
	if len(kept) == 0 {
		return
	}
	s.section("How far to stay away: extents of the boundary, each housing alone")
	s.table([]column{
		{head: "what"}, {head: "class"},
		{head: "level, farthest", unit: "m", digits: cents, what: "largest of the boundary's level extents", method: "DIST-1"},
		{head: "direction"},
		{head: "up", unit: "m", digits: cents, what: "extent of the boundary upward", method: "DIST-1"},
		{head: "down", unit: "m", digits: cents, what: "extent of the boundary downward", method: "DIST-1"},
		{head: "bracket", unit: "m", digits: cents, what: "the boundary lies at most this much nearer than the distance", method: "DIST-1"},
		{head: "inside these extents"},
	})
	for i, x := range kept {
		if i == 2*mostOnResult {
			s.line(fmt.Sprintf("and %d more: see sheet %s", len(kept)-i, sheetDistances))
			return
		}
		m, direction := x.horizontal()
		up, _ := x.along("up")
		down, _ := x.along("down")
		if x.verdict == exposure.Within {
			s.line(x.subject, x.class, "none", nil, "none", "none", nil, reachWords(x))
			continue
		}
		s.line(x.subject, x.class, m, direction, up, down, x.bracket, reachWords(x))
	}
}

// order puts everything together before the parts.
func order(x reach) int {
	if x.subject == everything {
		return 0
	}
	return 1
}

// reachWords says what an extent's verdict means: "above" is true nearby, of
// every transmitting antenna.
func reachWords(x reach) string {
	if x.verdict == exposure.Within {
		return verdictWords(x.verdict) + " everywhere"
	}
	return verdictFull(x.verdict, x.reason)
}

func groundText(a *exposure.Assessment, f *findings) string {
	if a.Site != nil && a.Site.Ground.Method != exposure.GroundNone && a.Site.Ground.Method != "" {
		return "Reflection is counted: " + a.Ground + "."
	}
	if len(f.flips) == 0 {
		return "Reflection is not counted. One reflection can raise the power density fourfold. No place's verdict changes at field factors 1.6 and 2."
	}
	var parts []string
	for _, v := range f.flips {
		var factors []string
		for _, k := range v.result.GroundFlips {
			factors = append(factors, significant(k, 2))
		}
		parts = append(parts, fmt.Sprintf("%s for %s (at %s)", v.place, v.class, strings.Join(factors, " and ")))
	}
	return "Reflection is not counted. One reflection can raise the power density fourfold. At the field factors named these verdicts change: " + list(parts, 20) + "."
}

func placeRow(p *exposure.PointResult) string {
	if p.Place == nil {
		return ""
	}
	return rowName(p.Place.Row)
}

// signOff writes the block that people fill in by hand.
func (r *report) signOff() {
	r.write(page{
		name: sheetSignOff, title: "Sign-off",
		intro:  "To be filled in by the people named. The program fills in nothing here.",
		widths: []float64{30, 12, 48},
	}, func(s *sheet) {
		blank := func(label string, height float64) {
			s.put([]any{r.plain(label, true), styled(r, field), styled(r, field)}, height)
			s.keepMerged(2, 3)
		}
		for _, who := range []string{"Prepared by", "Licensed assessor", "For the site's owner"} {
			s.section(who)
			for _, what := range []string{"name", "licence number", "date", "signature"} {
				blank(what, map[bool]float64{true: 36, false: 20}[what == "signature"])
			}
		}
		s.section("Assessor's remarks")
		s.table([]column{{head: "sheet"}, {head: "checked"}, {head: "assessor's remark"}})
		for _, name := range r.order {
			if name == sheetSignOff {
				continue
			}
			s.put([]any{r.plain(name, false), styled(r, field), styled(r, field)}, 22)
		}
	})
}
