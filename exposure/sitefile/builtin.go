package sitefile

import (
	"math"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
)

// builtKey tells built-in patterns apart, so that equal rows share one.
type builtKey struct {
	kind exposure.PatternKind
	n    [10]float64
}

// keep returns the pattern of a key, made on first use.
func (l *loader) keep(key builtKey, build func() (antenna.Pattern, error)) (antenna.Pattern, error) {
	if p, ok := l.built[key]; ok {
		return p, nil
	}
	p, err := build()
	if err == nil {
		l.built[key] = p
	}
	return p, err
}

// builtin makes the built-in pattern that s.PatternKind names, from the columns
// of its row.
func (l *loader) builtin(r *record, s *exposure.Source) {
	if !r.sound("frequency", "gain", "horizontal beamwidth", "vertical beamwidth", "front to back", "electrical tilt", "length", "width", "diameter",
		"efficiency", "elements", "elements across", "spacing", "spacing across", "scan range", "scan range down", "polarization") {
		return
	}
	before := len(l.faults)
	p, err := l.build(r, s)
	if err != nil {
		l.fault(r, "pattern", "%s: %s", s.PatternName, err)
	}
	if len(l.faults) == before {
		s.Pattern = p
	}
}

func (l *loader) build(r *record, s *exposure.Source) (antenna.Pattern, error) {
	lambda := exposure.Wavelength(s.FrequencyHz)
	switch s.PatternKind {
	case exposure.PatternIsotropic:
		return l.fixed(r, s)(antenna.Isotropic())
	case exposure.PatternDipole:
		return l.fixed(r, s)(antenna.HalfWaveDipoleAlong(wireAxis(s.Polarization)))
	case exposure.PatternShort:
		return l.fixed(r, s)(antenna.ShortDipoleAlong(wireAxis(s.Polarization)))
	case exposure.PatternLoop:
		return l.fixed(r, s)(antenna.SmallLoop(loopAxis(s.Polarization)))
	case exposure.PatternMonopole:
		height, ok := l.need(r, "length")
		if !ok {
			return nil, nil
		}
		p, g, err := antenna.Monopole(height, lambda)
		if err != nil {
			return nil, err
		}
		return l.fixed(r, s)(p, g)
	case exposure.PatternBeamwidth:
		l.settleGain(r, s, 0, "")
		h, ok1 := l.need(r, "horizontal beamwidth")
		v, ok2 := l.need(r, "vertical beamwidth")
		if !ok1 || !ok2 {
			return nil, nil
		}
		return l.keep(builtKey{s.PatternKind, [10]float64{h, v, s.FrontToBackDB, s.ElectricalTiltRad}}, func() (antenna.Pattern, error) {
			return antenna.TwoBeamwidth(h, v, s.FrontToBackDB, s.ElectricalTiltRad)
		})
	case exposure.PatternOmni:
		if l.settleGain(r, s, 0, ""); s.Gain == 0 {
			return nil, nil
		}
		l.warnReference(r, s)
		if s.VerticalBeamwidthRad == 0 {
			s.VerticalBeamwidthRad = antenna.OmniBeamwidth(s.Gain)
		}
		return l.keep(builtKey{s.PatternKind, [10]float64{float64(s.Gain), s.VerticalBeamwidthRad, s.ElectricalTiltRad}}, func() (antenna.Pattern, error) {
			return antenna.Omni(s.Gain, s.VerticalBeamwidthRad, s.ElectricalTiltRad)
		})
	case exposure.PatternSector:
		l.settleGain(r, s, 0, "")
		h, ok := l.need(r, "horizontal beamwidth")
		if !ok || s.Gain == 0 {
			return nil, nil
		}
		l.warnReference(r, s)
		stated := s.VerticalBeamwidthRad
		if s.VerticalBeamwidthRad == 0 {
			s.VerticalBeamwidthRad = antenna.SectorBeamwidth(s.Gain, h)
		}
		return l.keep(builtKey{s.PatternKind, [10]float64{float64(s.Gain), h, stated, s.ElectricalTiltRad}}, func() (antenna.Pattern, error) {
			return antenna.Sector(s.Gain, h, stated, s.ElectricalTiltRad)
		})
	case exposure.PatternDish:
		return l.dish(r, s, lambda)
	case exposure.PatternActive:
		return l.active(r, s, lambda)
	}
	panic("sitefile: no built-in pattern " + string(s.PatternKind))
}

// fixed takes a pattern whose gain is its own and which has no electrical tilt.
func (l *loader) fixed(r *record, s *exposure.Source) func(antenna.Pattern, antenna.Gain) (antenna.Pattern, error) {
	return func(p antenna.Pattern, g antenna.Gain) (antenna.Pattern, error) {
		l.settleGain(r, s, g, "the pattern "+string(s.PatternKind))
		l.noElectricalTilt(r, s)
		return p, nil
	}
}

func (l *loader) noElectricalTilt(r *record, s *exposure.Source) {
	if s.ElectricalTiltRad != 0 {
		l.fault(r, "electrical tilt", "the pattern %q has no electrical tilt; write 0, or the mechanical tilt under \"tilt\"", s.PatternName)
	}
}

// wireAxis is how a wire lies: along antenna-up, or to the right of boresight for
// horizontal polarization.
func wireAxis(p antenna.Polarization) antenna.Axis {
	if p == antenna.Horizontal {
		return antenna.AlongRight
	}
	return antenna.AlongUp
}

// loopAxis is what a loop is wound about: the vertical for horizontal
// polarization, else boresight.
func loopAxis(p antenna.Polarization) antenna.Axis {
	if p == antenna.Horizontal {
		return antenna.AlongUp
	}
	return antenna.AlongBoresight
}

// dish makes the reference pattern of a dish. Its gain may be left to the
// efficiency of its aperture.
func (l *loader) dish(r *record, s *exposure.Source, lambda float64) (antenna.Pattern, error) {
	d, ok := l.need(r, "diameter")
	if !ok {
		return nil, nil
	}
	if aperture := math.Pi * d / lambda; s.Efficiency > 0 && !r.has("gain") {
		s.Gain = antenna.Gain(s.Efficiency * aperture * aperture)
	} else if l.settleGain(r, s, 0, ""); s.Gain == 0 {
		return nil, nil
	}
	if err := antenna.CheckDish(s.Gain, d, lambda); err != nil {
		l.fault(r, "gain", "%s", err)
		return nil, nil
	}
	// 5 % is where a stated efficiency and the one that the gain implies part.
	if e := antenna.DishEfficiency(s.Gain, d, lambda); s.Efficiency > 0 && math.Abs(e/s.Efficiency-1) > 0.05 {
		l.warn(r.place(), r.header("efficiency"), "the gain of %.2f dBi implies an efficiency of %.3g, not %.3g; the near field uses the one stated", s.Gain.DBi(), e, s.Efficiency)
	}
	l.noElectricalTilt(r, s)
	return l.keep(builtKey{s.PatternKind, [10]float64{float64(s.Gain), d, lambda}}, func() (antenna.Pattern, error) {
		return antenna.Dish(s.Gain, d, lambda)
	})
}

// active makes the envelope over the beams of an active panel. The beamwidths
// are those of its element. Blank spacings follow from length and width, else
// they are half a wavelength.
func (l *loader) active(r *record, s *exposure.Source, lambda float64) (antenna.Pattern, error) {
	l.settleGain(r, s, 0, "")
	h, ok1 := l.need(r, "horizontal beamwidth")
	v, ok2 := l.need(r, "vertical beamwidth")
	_, ok3 := l.need(r, "elements")
	_, ok4 := l.need(r, "elements across")
	_, ok5 := l.need(r, "scan range")
	_, ok6 := l.need(r, "scan range down")
	if !ok1 || !ok2 || !ok3 || !ok4 || !ok5 || !ok6 {
		return nil, nil
	}
	spacing := func(stated, length float64, n int) float64 {
		switch {
		case stated > 0:
			return stated / lambda
		case length > 0:
			return length / float64(n) / lambda
		}
		return 0.5
	}
	scan, down := r.value("scan range"), r.value("scan range down")
	panel := antenna.ActivePanel{
		HorizontalBeamwidthRad: h, VerticalBeamwidthRad: v, FrontToBackDB: s.FrontToBackDB, SideLobeDB: s.FrontToBackDB,
		Rows: s.Elements, Columns: s.ElementsAcross,
		RowSpacing: spacing(s.SpacingM, s.LengthM, s.Elements), ColumnSpacing: spacing(s.SpacingAcrossM, s.WidthM, s.ElementsAcross),
		ScanRad: antenna.Interval{Lo: -scan, Hi: scan}, TiltRad: antenna.Interval{Lo: s.ElectricalTiltRad, Hi: s.ElectricalTiltRad + down},
	}
	key := builtKey{s.PatternKind, [10]float64{h, v, s.FrontToBackDB, float64(s.Elements), float64(s.ElementsAcross), panel.RowSpacing, panel.ColumnSpacing, scan, panel.TiltRad.Lo, panel.TiltRad.Hi}}
	return l.keep(key, func() (antenna.Pattern, error) { return antenna.Active(panel) })
}

// The frequencies that ITU-R F.1336 gives its reference patterns for.
const (
	referenceFromHz   = 400e6
	sectorToHz        = 6e9  // recommends 3.1
	omniReferenceToHz = 70e9 // the Recommendation as a whole
)

// warnReference warns where a reference pattern is used beyond its frequencies.
func (l *loader) warnReference(r *record, s *exposure.Source) {
	to := omniReferenceToHz
	if s.PatternKind == exposure.PatternSector {
		to = sectorToHz
	}
	if s.FrequencyHz < referenceFromHz || s.FrequencyHz > to {
		l.warn(r.place(), r.header("pattern"), "the pattern %q is a reference pattern from %g MHz to %g GHz; at %g MHz nobody has held it against antennas",
			s.PatternName, referenceFromHz/1e6, to/1e9, s.FrequencyHz/1e6)
	}
}
