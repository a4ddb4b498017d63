package sitefile

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
	"example.org/standclear/exposure/units"
)

// warnSite adds what an assessor must know about a site without faults.
func (l *loader) warnSite(s *exposure.Site) {
	l.warnUnconfirmed("data from", "nobody is named who gave the figures of", func(s *exposure.Source) bool { return s.DataFrom == "" }, s.Sources)
	l.warnUnconfirmed("data date", "no date is given for the figures of", func(s *exposure.Source) bool { return s.DataDate == "" }, s.Sources)
	names := make([]string, len(s.Operators))
	for i, o := range s.Operators {
		names[i] = o.Name
	}
	told := map[string]bool{}
	for i := range s.Sources {
		src := &s.Sources[i]
		if len(names) > 0 && src.Operator != "" && !slices.Contains(names, src.Operator) && !told[src.Operator] {
			told[src.Operator] = true
			hint := "add a row for whom to call"
			if near := units.NearName(src.Operator, names); near != "" {
				hint = fmt.Sprintf("did you mean %q?", near)
			}
			l.warn(rowPlace(src.Row), "operator", "the operators table has no %q; %s", src.Operator, hint)
		}
		if !src.Power.Unknown && src.Power.ThermalW() == 0 {
			l.warn(rowPlace(src.Row), "power", "the row %q radiates no power and counts for nothing; write unknown where the power is not known", src.ID)
		}
		l.warnPanel(src)
		l.warnLength(src)
		l.warnBelow(src)
	}
	l.warnDirectivity(s.Sources)
}

// warnUnconfirmed lists the rows whose data nobody stands behind.
func (l *loader) warnUnconfirmed(column, what string, lacks func(*exposure.Source) bool, sources []exposure.Source) {
	var ids []string
	for i := range sources {
		if lacks(&sources[i]) {
			ids = append(ids, sources[i].ID)
		}
	}
	if len(ids) == 0 {
		return
	}
	list := strings.Join(ids, ", ")
	if len(ids) == len(sources) {
		list = fmt.Sprintf("any of the %d antennas", len(ids))
	} else if len(ids) > 20 {
		list = fmt.Sprintf("%s and %d more", strings.Join(ids[:20], ", "), len(ids)-20)
	}
	l.warn(l.tables["antennas"].grid.place(0), column, "%s %s", what, list)
}

// warnPanel warns where the figures of a panel do not fit each other.
func (l *loader) warnPanel(s *exposure.Source) {
	switch s.PatternKind {
	case exposure.PatternBeamwidth, exposure.PatternSector, exposure.PatternFile, exposure.PatternActive:
	default:
		return
	}
	if s.LengthM > 0 {
		if err := antenna.CheckPanel(s.LengthM, exposure.Wavelength(s.FrequencyHz), s.Elements, s.SpacingM); err != nil {
			l.warn(rowPlace(s.Row), "length", "%s", err)
		}
	}
	if s.PatternKind == exposure.PatternSector {
		// The others are integrated.
		if err := antenna.CheckGain(s.Gain, s.HorizontalBeamwidthRad, s.VerticalBeamwidthRad); err != nil {
			l.warn(rowPlace(s.Row), "gain", "%s; check both", err)
		}
	}
}

// warnLength names the length that a panel's vertical beamwidth implies where the
// row states none.
func (l *loader) warnLength(s *exposure.Source) {
	switch s.PatternKind {
	case exposure.PatternBeamwidth, exposure.PatternOmni, exposure.PatternSector, exposure.PatternFile:
	default:
		return
	}
	if s.LengthM > 0 || s.DiameterM > 0 {
		return
	}
	if s.VerticalBeamwidthRad == 0 {
		l.warn(rowPlace(s.Row), "length", "no length is given, so the near field of %q is not reckoned with; write the length of the array", s.ID)
		return
	}
	lambda := exposure.Wavelength(s.FrequencyHz)
	length := antenna.PanelLength(s.VerticalBeamwidthRad, lambda)
	l.warn(rowPlace(s.Row), "length", "no length is given, so the near field of %q is not reckoned with; its vertical beamwidth of %.3g deg implies about %.2f m, whose far field begins at %.3g m: write the length of the array",
		s.ID, s.VerticalBeamwidthRad*180/math.Pi, length, exposure.FarFieldDistance(length, lambda))
}
