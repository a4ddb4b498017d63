package main

import (
	"errors"
	"fmt"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/exposure/units"
)

// builtinNames are the built-in patterns that stand by themselves; an active
// panel's envelope needs the row of its antenna.
var builtinNames = []string{"isotropic", "half-wave dipole", "two-beamwidth", "omni", "sector", "dish", "short dipole", "monopole", "small loop"}

// builtins makes each built-in pattern from the flags. The gain is 0 where the
// pattern does not fix it.
var builtins = map[string]func(o *antennaOptions, peak antenna.Gain, hz float64) (antenna.Pattern, antenna.Gain, error){
	"isotropic":        fixedPattern(antenna.Isotropic),
	"half-wave dipole": fixedPattern(antenna.HalfWaveDipole),
	"short dipole":     fixedPattern(antenna.ShortDipole),
	"small loop":       fixedPattern(func() (antenna.Pattern, antenna.Gain) { return antenna.SmallLoop(antenna.AlongUp) }),
	"two-beamwidth": func(o *antennaOptions, _ antenna.Gain, _ float64) (antenna.Pattern, antenna.Gain, error) {
		h, v, tilt, err := o.beam(true)
		if err != nil {
			return nil, 0, err
		}
		ftb, _, err := quantity("--front-to-back", o.frontToBack, "30dB", units.Decibel)
		if err != nil {
			return nil, 0, err
		}
		p, err := antenna.TwoBeamwidth(h, v, ftb, tilt)
		return p, 0, err
	},
	"omni": func(o *antennaOptions, peak antenna.Gain, _ float64) (antenna.Pattern, antenna.Gain, error) {
		if err := needed("--gain", o.gain, "10dBi"); err != nil {
			return nil, 0, err
		}
		_, v, tilt, err := o.beam(false)
		if err != nil {
			return nil, 0, err
		}
		if v == 0 {
			v = antenna.OmniBeamwidth(peak)
		}
		p, err := antenna.Omni(peak, v, tilt)
		return p, 0, err
	},
	"sector": func(o *antennaOptions, peak antenna.Gain, _ float64) (antenna.Pattern, antenna.Gain, error) {
		if err := needed("--gain", o.gain, "17dBi"); err != nil {
			return nil, 0, err
		}
		if err := needed("--horizontal-beamwidth", o.horizontal, "65deg"); err != nil {
			return nil, 0, err
		}
		h, v, tilt, err := o.beam(false)
		if err != nil {
			return nil, 0, err
		}
		if v == 0 {
			v = antenna.SectorBeamwidth(peak, h)
		}
		p, err := antenna.Sector(peak, h, v, tilt)
		return p, 0, err
	},
	"dish": func(o *antennaOptions, peak antenna.Gain, hz float64) (antenna.Pattern, antenna.Gain, error) {
		for _, f := range [][3]string{{"--gain", o.gain, "40dBi"}, {"--diameter", o.diameter, "0.6m"}, {"--frequency", o.frequency, "23GHz"}} {
			if err := needed(f[0], f[1], f[2]); err != nil {
				return nil, 0, err
			}
		}
		d, _, err := quantity("--diameter", o.diameter, "0.6m", units.Length)
		if err != nil {
			return nil, 0, err
		}
		p, err := antenna.Dish(peak, d, exposure.Wavelength(hz))
		return p, 0, err
	},
	"monopole": func(o *antennaOptions, _ antenna.Gain, hz float64) (antenna.Pattern, antenna.Gain, error) {
		for _, f := range [][3]string{{"--height", o.height, "0.75m"}, {"--frequency", o.frequency, "98MHz"}} {
			if err := needed(f[0], f[1], f[2]); err != nil {
				return nil, 0, err
			}
		}
		h, _, err := quantity("--height", o.height, "0.75m", units.Length)
		if err != nil {
			return nil, 0, err
		}
		return antenna.Monopole(h, exposure.Wavelength(hz))
	},
}

func fixedPattern(f func() (antenna.Pattern, antenna.Gain)) func(*antennaOptions, antenna.Gain, float64) (antenna.Pattern, antenna.Gain, error) {
	return func(*antennaOptions, antenna.Gain, float64) (antenna.Pattern, antenna.Gain, error) {
		p, g := f()
		return p, g, nil
	}
}

// beam reads the beamwidths and the tilt; a width left out is 0 unless both are
// needed.
func (o *antennaOptions) beam(both bool) (h, v, tilt float64, err error) {
	for _, f := range []struct {
		flag, text string
		to         *float64
	}{{"--horizontal-beamwidth", o.horizontal, &h}, {"--vertical-beamwidth", o.vertical, &v}} {
		if f.text == "" && !both {
			continue
		}
		if err := needed(f.flag, f.text, "65deg"); err != nil {
			return 0, 0, 0, err
		}
		if *f.to, _, err = quantity(f.flag, f.text, "65deg", units.Angle); err != nil {
			return 0, 0, 0, err
		}
	}
	tilt, _, err = quantity("--electrical-tilt", o.tilt, "4deg", units.Angle)
	return h, v, tilt, err
}

func needed(flag, text, example string) error {
	if text == "" {
		return usageError{flag, "", "is missing; this pattern needs it, such as " + flag + " " + example}
	}
	return nil
}

// patternError turns what is wrong with a pattern into a fault with its place.
func patternError(name string, err error) error {
	if errors.As(err, new(usageError)) {
		return err
	}
	var re *antenna.ReadError
	if errors.As(err, &re) && re.Line > 0 {
		f := sitefile.Fault{File: name, Row: re.Line, Text: re.Text, Message: re.Message}
		if re.Text != "" {
			f.Message = fmt.Sprintf("%q %s", re.Text, re.Message)
		}
		return sitefile.Faults{f}
	}
	return sitefile.Faults{{File: name, Message: err.Error()}}
}
