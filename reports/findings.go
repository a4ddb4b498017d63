package reports

import (
	"fmt"
	"slices"
	"strings"

	"example.org/standclear/exposure"
)

// finding is the verdict on one place for one class.
type finding struct {
	place  string
	class  string
	own    bool // the class that may be there
	point  *exposure.PointResult
	result *exposure.ClassRatio
}

// findings is what the screen and the first pages say, gathered once so that
// they say the same.
type findings struct {
	all         []finding // every place and class, in the order of the result
	above       []finding // own class only, from here on
	within      []finding
	notAssessed []finding
	flips       []finding // every class: the verdict changes with the ground
	places      int
	reasons     []reason // why places, distances or boundaries are not assessed
	unconfirmed []string
}

// reason is one ground for "not assessed" with what it stands for.
type reason struct {
	text string
	what []string
}

// gather sorts an assessment's verdicts.
func gather(a *exposure.Assessment) *findings {
	f := &findings{places: len(a.Points)}
	why := map[string]int{}
	because := func(text, what string) {
		if text == "" {
			text = "no reason recorded"
		}
		i, ok := why[text]
		if !ok {
			i = len(f.reasons)
			why[text] = i
			f.reasons = append(f.reasons, reason{text: text})
		}
		if !slices.Contains(f.reasons[i].what, what) {
			f.reasons[i].what = append(f.reasons[i].what, what)
		}
	}
	for i := range a.Points {
		p := &a.Points[i]
		found := false
		for j := range p.Ratios {
			r := &p.Ratios[j]
			v := finding{place: p.ID, class: r.Class, own: r.Class == p.Class || p.Class == "", point: p, result: r}
			f.all = append(f.all, v)
			if len(r.GroundFlips) > 0 {
				f.flips = append(f.flips, v)
			}
			if !v.own {
				continue
			}
			found = true
			switch r.Verdict {
			case exposure.Above:
				f.above = append(f.above, v)
			case exposure.Within, exposure.WithinGuardBand:
				f.within = append(f.within, v)
			default:
				f.notAssessed = append(f.notAssessed, v)
				because(r.Reason, "place "+p.ID+" ("+r.Class+")")
			}
		}
		if !found {
			// A class that no result answers for must not pass in silence.
			r := &exposure.ClassRatio{Class: p.Class, Verdict: exposure.NotAssessed, Reason: "the limit table has no class " + p.Class}
			v := finding{place: p.ID, class: p.Class, own: true, point: p, result: r}
			f.all = append(f.all, v)
			f.notAssessed = append(f.notAssessed, v)
			because(r.Reason, "place "+p.ID)
		}
	}
	for _, z := range a.Zones {
		if z.Verdict == exposure.NotAssessed || !z.Covered {
			because(z.Reason, fmt.Sprintf("boundary on %s (%s)", zoneName(z), z.Class))
		}
	}
	for _, d := range a.Distances {
		if d.Verdict == exposure.NotAssessed {
			because(d.Reason, fmt.Sprintf("distance of %s (%s)", subject(d), d.Class))
		}
	}
	f.unconfirmed = unconfirmed(a)
	return f
}

// unconfirmed lists what nobody has confirmed.
func unconfirmed(a *exposure.Assessment) []string {
	var out []string
	if a.Site == nil {
		return nil
	}
	if a.Site.Limits == nil || !a.Site.Limits.Confirmed() {
		out = append(out, "the transcription of the limit table: nobody is named who checked it against its source, or no spot level bears that out")
	}
	var from, date, unknown []string
	for _, s := range a.Site.Sources {
		if s.DataFrom == "" {
			from = append(from, s.ID)
		}
		if s.DataDate == "" {
			date = append(date, s.ID)
		}
		if s.Power.Unknown {
			unknown = append(unknown, s.ID)
		}
	}
	const most = 12
	if len(unknown) > 0 {
		out = append(out, "the power of "+list(unknown, most))
	}
	if len(from) > 0 {
		out = append(out, "who supplied the data of "+list(from, most))
	}
	if len(date) > 0 {
		out = append(out, "the date of the data of "+list(date, most))
	}
	return out
}

// everything is what a distance of all sources at once belongs to.
const everything = "everything together"

// subject names what a distance belongs to.
func subject(d exposure.Distance) string {
	switch {
	case d.All:
		return everything
	case d.Housing != "":
		return "housing " + d.Housing
	}
	return "antenna " + d.Antenna
}

// zoneName names the surface or section of a boundary.
func zoneName(z exposure.Zone) string {
	if s := z.Section; s != nil {
		return fmt.Sprintf("section (%.2f, %.2f) to (%.2f, %.2f)", s.X1M, s.Y1M, s.X2M, s.Y2M)
	}
	return z.Surface
}

// surfaceOf returns the surface of a boundary, or nil.
func surfaceOf(a *exposure.Assessment, z exposure.Zone) *exposure.Surface {
	if a.Site == nil || z.Section != nil {
		return nil
	}
	for i := range a.Site.Surfaces {
		if a.Site.Surfaces[i].ID == z.Surface {
			return &a.Site.Surfaces[i]
		}
	}
	return nil
}

// mayBeThere reports whether a boundary's class is the one that may be on its
// surface.
func mayBeThere(a *exposure.Assessment, z exposure.Zone) bool {
	s := surfaceOf(a, z)
	return s != nil && s.Class == z.Class
}

// reach is how far one subject's boundary extends for one class.
type reach struct {
	subject   string
	antenna   string
	class     string
	direction []string
	distance  []exposure.Distance
	bracket   float64
	governed  string
	verdict   exposure.Verdict
	reason    string
}

// horizontal returns the farthest level extent, and its direction.
func (r reach) horizontal() (m float64, direction string) {
	for i, d := range r.direction {
		if d != "up" && d != "down" && r.distance[i].DistanceM >= m {
			m, direction = r.distance[i].DistanceM, d
		}
	}
	return m, direction
}

// along returns the extent in one direction.
func (r reach) along(direction string) (float64, bool) {
	for i, d := range r.direction {
		if d == direction {
			return r.distance[i].DistanceM, true
		}
	}
	return 0, false
}

// reaches gathers the extents of each subject and class into one line.
func reaches(a *exposure.Assessment) []reach {
	type key struct{ subject, class string }
	at := map[key]int{}
	var out []reach
	for _, d := range a.Distances {
		if d.Kind != "extent" {
			continue
		}
		k := key{subject(d), d.Class}
		i, ok := at[k]
		if !ok {
			i = len(out)
			at[k] = i
			out = append(out, reach{subject: k.subject, antenna: d.Antenna, class: d.Class, verdict: d.Verdict, reason: d.Reason, governed: d.GovernedBy})
		}
		r := &out[i]
		r.direction = append(r.direction, d.Direction)
		r.distance = append(r.distance, d)
		r.bracket = max(r.bracket, d.BracketM)
		r.verdict, r.reason = worse(r.verdict, r.reason, d.Verdict, d.Reason)
	}
	return out
}

// worse keeps the verdict that needs more attention: above, then not assessed.
func worse(v exposure.Verdict, reason string, w exposure.Verdict, why string) (exposure.Verdict, string) {
	rank := func(v exposure.Verdict) int {
		switch v {
		case exposure.Above:
			return 3
		case exposure.Within:
			return 0
		case exposure.WithinGuardBand:
			return 1
		}
		return 2
	}
	if rank(w) > rank(v) {
		v = w
	}
	if why != "" && !strings.Contains(reason, why) {
		if reason != "" {
			reason += "; "
		}
		reason += why
	}
	return v, reason
}
