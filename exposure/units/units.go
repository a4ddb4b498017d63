// Package units holds the unit symbols that a table header or a quantity on the
// command line may carry, and turns figures into SI and back. It knows no
// physics: what a level in dB refers to is the caller's business, and a unit
// belongs to exactly one dimension.
//
// A symbol means what it says, letter case included (mW is not MW): a symbol
// that is not in the table is an error, never a guess. Both micro signs
// (U+00B5 and U+03BC) are read as u, and m^2 and m² as m2.
package units

import (
	"math"
	"strings"
)

// Dimension is what a unit measures.
type Dimension string

// The dimensions, each with the SI unit in which ToSI answers. The two that
// are levels by nature stay in decibels: a gain in dB over isotropic (dBi), a
// ratio in dB.
const (
	None          Dimension = ""
	Length        Dimension = "length"         // m
	Angle         Dimension = "angle"          // rad
	Frequency     Dimension = "frequency"      // Hz
	Power         Dimension = "power"          // W
	Gain          Dimension = "gain"           // dB over isotropic
	Decibel       Dimension = "ratio in dB"    // dB
	EField        Dimension = "electric field" // V/m
	HField        Dimension = "magnetic field" // A/m
	FluxDensity   Dimension = "flux density"   // T
	PowerDensity  Dimension = "power density"  // W/m2
	Time          Dimension = "time"           // s
	Area          Dimension = "area"           // m2
	Conductivity  Dimension = "conductivity"   // S/m
	Share         Dimension = "share"          // 1; % is 0.01
	AntennaFactor Dimension = "antenna factor" // dB over 1/m
	EnergyDensity Dimension = "energy density" // J/m2
)

// dipoleGainDB is the gain of a half-wave dipole by which dBd is defined in
// regulation: 2.15 dB (47 CFR 2.1; the exact thin dipole has 2.15088 dBi).
const dipoleGainDB = 2.15

// Unit is one unit of one dimension. A linear unit is num/den SI units plus
// offset; a level in decibels is num/den SI units times 10^(value/log).
type Unit struct {
	Symbol    string // as it is printed, in ASCII
	Dimension Dimension

	num, den float64 // the two parts of the factor, so that no factor such as 1e-3 is itself rounded
	log      float64 // 10 for a level of power, 20 for a level of field, 0 linear
	offset   float64 // added to a value in decibels that stays one (dBd)
}

// IsLog reports whether the unit is a level in decibels over a reference.
func (u Unit) IsLog() bool { return u.log != 0 }

// ToSI returns v, in this unit, in the SI unit of the dimension.
func (u Unit) ToSI(v float64) float64 {
	if u.log != 0 {
		return u.num * math.Pow(10, v/u.log) / u.den
	}
	return v*u.num/u.den + u.offset
}

// FromSI returns v, in the SI unit of the dimension, in this unit. A level in
// decibels of zero is minus infinity, of a negative value NaN.
func (u Unit) FromSI(v float64) float64 {
	if u.log != 0 {
		return u.log * math.Log10(v*u.den/u.num)
	}
	return (v - u.offset) * u.den / u.num
}

// table lists every unit; the first of a dimension is its SI unit (or the
// decibel that stays one).
var table = []Unit{
	linear("m", Length, 1, 1), linear("km", Length, 1000, 1), linear("cm", Length, 1, 100), linear("mm", Length, 1, 1000),
	// The international foot and inch of 1959: 0.3048 m and 25.4 mm exactly.
	linear("ft", Length, 3048, 10000), linear("in", Length, 254, 10000),

	linear("rad", Angle, 1, 1), linear("deg", Angle, math.Pi, 180),

	linear("Hz", Frequency, 1, 1), linear("kHz", Frequency, 1e3, 1), linear("MHz", Frequency, 1e6, 1), linear("GHz", Frequency, 1e9, 1),

	linear("W", Power, 1, 1), linear("mW", Power, 1, 1e3), linear("uW", Power, 1, 1e6), linear("kW", Power, 1e3, 1), linear("MW", Power, 1e6, 1),
	level("dBW", Power, 10, 1, 1), level("dBm", Power, 10, 1, 1e3),

	linear("dBi", Gain, 1, 1), {Symbol: "dBd", Dimension: Gain, num: 1, den: 1, offset: dipoleGainDB},
	linear("dB", Decibel, 1, 1),
	linear("dB/m", AntennaFactor, 1, 1),

	linear("V/m", EField, 1, 1), linear("mV/m", EField, 1, 1e3), linear("uV/m", EField, 1, 1e6), linear("kV/m", EField, 1e3, 1),
	level("dBuV/m", EField, 20, 1, 1e6), level("dBV/m", EField, 20, 1, 1),

	linear("A/m", HField, 1, 1), linear("mA/m", HField, 1, 1e3), linear("uA/m", HField, 1, 1e6), linear("kA/m", HField, 1e3, 1),
	level("dBuA/m", HField, 20, 1, 1e6),

	linear("T", FluxDensity, 1, 1), linear("mT", FluxDensity, 1, 1e3), linear("uT", FluxDensity, 1, 1e6), linear("nT", FluxDensity, 1, 1e9),
	linear("G", FluxDensity, 1, 1e4), linear("mG", FluxDensity, 1, 1e7),

	linear("W/m2", PowerDensity, 1, 1), linear("mW/m2", PowerDensity, 1, 1e3), linear("uW/m2", PowerDensity, 1, 1e6), linear("kW/m2", PowerDensity, 1e3, 1),
	linear("W/cm2", PowerDensity, 1e4, 1), linear("mW/cm2", PowerDensity, 10, 1), linear("uW/cm2", PowerDensity, 1, 100),
	level("dBW/m2", PowerDensity, 10, 1, 1), level("dBm/m2", PowerDensity, 10, 1, 1e3),

	linear("s", Time, 1, 1), linear("ms", Time, 1, 1e3), linear("us", Time, 1, 1e6), linear("min", Time, 60, 1), linear("h", Time, 3600, 1),

	linear("m2", Area, 1, 1), linear("cm2", Area, 1, 1e4), linear("mm2", Area, 1, 1e6),

	linear("S/m", Conductivity, 1, 1), linear("mS/m", Conductivity, 1, 1e3),

	linear("1", Share, 1, 1), linear("%", Share, 1, 100),

	linear("J/m2", EnergyDensity, 1, 1), linear("kJ/m2", EnergyDensity, 1e3, 1),
}

// aliases are other spellings of the same symbol, after normalize.
var aliases = map[string]string{
	"°": "deg", "degrees": "deg", "degree": "deg",
	"metres": "m", "meters": "m", "feet": "ft", "'": "ft", "inch": "in",
	"seconds": "s", "sec": "s", "minutes": "min", "hours": "h", "hr": "h",
	"percent": "%", "pct": "%",
	"dB(uV/m)": "dBuV/m", "dB(V/m)": "dBV/m", "dB(uA/m)": "dBuA/m", "dB(W/m2)": "dBW/m2", "dB(mW/m2)": "dBm/m2", "dB(W)": "dBW", "dB(mW)": "dBm",
	"dB(1/m)": "dB/m", "dB1/m": "dB/m",
	"Gauss": "G", "gauss": "G", "watt": "W", "watts": "W",
}

var bySymbol = func() map[string]Unit {
	m := make(map[string]Unit, len(table)+len(aliases))
	for _, u := range table {
		m[u.Symbol] = u
	}
	for alias, symbol := range aliases {
		m[alias] = m[symbol]
	}
	return m
}()

func linear(symbol string, d Dimension, num, den float64) Unit {
	return Unit{Symbol: symbol, Dimension: d, num: num, den: den}
}

func level(symbol string, d Dimension, log, num, den float64) Unit {
	return Unit{Symbol: symbol, Dimension: d, num: num, den: den, log: log}
}

var spelling = strings.NewReplacer("\u00b5", "u", "\u03bc", "u", "\u00b2", "2", "^2", "2", "\u00a0", "", " ", "")

// Lookup returns the unit of a symbol; the spelling may use either micro sign,
// and m2, m^2 or m².
func Lookup(symbol string) (Unit, bool) {
	if u, ok := bySymbol[symbol]; ok { // the common case, without building a string
		return u, true
	}
	u, ok := bySymbol[spelling.Replace(symbol)]
	return u, ok
}

// Of returns the units of a dimension, the SI unit first.
func Of(d Dimension) []Unit {
	var out []Unit
	for _, u := range table {
		if u.Dimension == d {
			out = append(out, u)
		}
	}
	return out
}

// Symbols returns the symbols of a dimension, for a message or a drop-down.
func Symbols(d Dimension) []string {
	var out []string
	for _, u := range Of(d) {
		out = append(out, u.Symbol)
	}
	return out
}
