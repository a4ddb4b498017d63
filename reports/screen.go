package reports

import (
	"fmt"
	"io"
	"slices"
	"strings"

	"example.org/standclear/exposure"
)

// Screen writes ten lines: what a surveyor would tell the client first. They
// rest on the same findings as the report's result page.
func Screen(w io.Writer, a *exposure.Assessment) error {
	f := gather(a)
	lines := []string{
		siteLine(a),
		limitsLine(a),
		inventoryLine(a),
		aboveLine(f),
		notAssessedLine(f),
		withinLine(f),
		boundaryLine(a),
		distanceLine(a),
		groundLine(a, f),
		unconfirmedLine(a, f),
	}
	for _, l := range lines {
		if _, err := fmt.Fprintln(w, oneLine(l)); err != nil {
			return err
		}
	}
	return nil
}

func siteLine(a *exposure.Assessment) string {
	s := a.SiteName
	if a.Site != nil && a.Site.About.Reference != "" {
		s += " (" + a.Site.About.Reference + ")"
	}
	if d := reportDate(a); d != "" {
		s += ", " + d
	}
	return s + ", by " + a.Program + ": a prediction for a licensed assessor to check"
}

func limitsLine(a *exposure.Assessment) string {
	if a.Site == nil || a.Site.Limits == nil {
		return "Limits: none given"
	}
	t := a.Site.Limits
	s := "Limits: " + limitTitle(a) + "; classes " + strings.Join(a.Classes, ", ")
	if !t.Confirmed() {
		return s + "; nobody has confirmed this transcription"
	}
	return s + "; checked by " + t.About.CheckedBy
}

func limitTitle(a *exposure.Assessment) string {
	about := a.Site.Limits.About
	parts := slices.DeleteFunc([]string{about.Title, about.Edition}, func(s string) bool { return s == "" })
	if len(parts) == 0 {
		return "a table without a title"
	}
	return strings.Join(parts, ", ")
}

func inventoryLine(a *exposure.Assessment) string {
	var surfaces int
	if a.Site != nil {
		surfaces = len(a.Site.Surfaces)
	}
	s := fmt.Sprintf("Counted: %s, %s, %s; ground reflection: %s", count(len(a.Sources), "antenna row"),
		count(surfaces, "surface"), count(len(a.Points), "place"), a.Ground)
	if a.StateOn {
		s += "; rows on standby are left out"
	}
	return s
}

func aboveLine(f *findings) string {
	if len(f.above) == 0 {
		return fmt.Sprintf("Above the limits supplied: none of %s", count(f.places, "place"))
	}
	var names []string
	for _, v := range byRatio(f.above) {
		names = append(names, fmt.Sprintf("%s (%s, ratio %s)", v.place, v.class, ratioText(v.result.ExposureRatio)))
	}
	return fmt.Sprintf("Above the limits supplied: %d of %s: %s", len(f.above), count(f.places, "place"), list(names, 4))
}

// byRatio returns the findings from the largest ratio down.
func byRatio(v []finding) []finding {
	v = slices.Clone(v)
	slices.SortStableFunc(v, func(a, b finding) int {
		switch x, y := a.result.ExposureRatio, b.result.ExposureRatio; {
		case x > y:
			return -1
		case x < y:
			return 1
		}
		return 0
	})
	return v
}

func notAssessedLine(f *findings) string {
	if len(f.reasons) == 0 {
		return "Not assessed: nothing that was asked"
	}
	var parts []string
	for _, r := range f.reasons {
		parts = append(parts, fmt.Sprintf("%s (%s)", r.text, list(r.what, 2)))
	}
	return "Not assessed: " + list(parts, 3)
}

func withinLine(f *findings) string {
	if len(f.within) == 0 {
		return fmt.Sprintf("Within the limits supplied: none of %s", count(f.places, "place"))
	}
	v := byRatio(f.within)[0]
	return fmt.Sprintf("Within the limits supplied: %d of %s; nearest to them: %s (%s, ratio %s)",
		len(f.within), count(f.places, "place"), v.place, v.class, ratioText(v.result.ExposureRatio))
}

func boundaryLine(a *exposure.Assessment) string {
	var parts []string
	for _, z := range a.Zones {
		if !mayBeThere(a, z) {
			continue
		}
		part := fmt.Sprintf("%s (%s): ", zoneName(z), z.Class)
		if z.OuterAreaM2 > 0 {
			part += fmt.Sprintf("%s of %s m2", significant(z.OuterAreaM2, 3), significant(z.SurfaceAreaM2, 3))
		} else {
			part += "no line"
		}
		if !z.Covered || z.Verdict == exposure.NotAssessed {
			part += ", not assessed as a whole"
		}
		parts = append(parts, part)
	}
	if len(parts) == 0 {
		return "Keep-out lines: no surface is listed"
	}
	return "Keep-out lines: " + strings.Join(parts, "; ")
}

func distanceLine(a *exposure.Assessment) string {
	var parts []string
	for _, class := range a.Classes {
		var far reach
		var most float64
		for _, r := range reaches(a) {
			if m, _ := r.horizontal(); r.class == class && r.antenna == "" && r.subject != everything && m > most {
				far, most = r, m
			}
		}
		if most == 0 {
			for _, r := range reaches(a) {
				if m, _ := r.horizontal(); r.class == class && r.antenna != "" && m > most {
					far, most = r, m
				}
			}
		}
		if most > 0 {
			_, direction := far.horizontal()
			parts = append(parts, fmt.Sprintf("%s %s, to the %s of %s alone", class, metres(most), direction, far.subject))
		}
	}
	if len(parts) == 0 {
		return "Farthest keep-out distance: none found"
	}
	return "Farthest keep-out distance: " + strings.Join(parts, "; ")
}

func groundLine(a *exposure.Assessment, f *findings) string {
	if a.Site != nil && a.Site.Ground.Method != exposure.GroundNone && a.Site.Ground.Method != "" {
		return "Ground reflection is counted (" + a.Ground + ")"
	}
	if len(f.flips) == 0 {
		return "Ground reflection is not counted; no place's verdict changes at field factors 1.6 and 2"
	}
	var parts []string
	for _, v := range f.flips {
		parts = append(parts, fmt.Sprintf("%s (%s)", v.place, v.class))
	}
	return "Ground reflection is not counted; with it these verdicts change: " + list(parts, 5)
}

func unconfirmedLine(a *exposure.Assessment, f *findings) string {
	n := len(a.Warnings) + len(a.Notices)
	s := "Nobody has confirmed: "
	if len(f.unconfirmed) == 0 {
		s = "Sources of the data are stated"
	} else {
		short := make([]string, len(f.unconfirmed))
		for i, u := range f.unconfirmed {
			short[i], _, _ = strings.Cut(u, ": nobody")
		}
		s += strings.Join(short, "; ")
	}
	if n > 0 {
		s += "; " + count(n, "warning") + " in the report"
	}
	return s
}
