package units

import (
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"
)

// Relations between units that others print. Exact relations are held to 4
// ulps (relative 1e-15), rounded ones to half a unit of their last digit.
func TestPublishedRelations(t *testing.T) {
	for _, c := range []struct {
		text, in  string
		want, tol float64
		source    string
	}{
		{"1 mW/cm2", "W/m2", 10, 1e-14, "SI prefixes: 1e-3 W / 1e-4 m2"},
		{"1 uW/cm2", "W/m2", 0.01, 1e-17, "SI prefixes"},
		{"1 W/m2", "mW/cm2", 0.1, 1e-16, "SI prefixes"},
		{"0 dBm", "W", 1e-3, 1e-18, "ITU-R V.574, dBm: reference 1 mW"},
		{"30 dBm", "W", 1, 1e-14, "ITU-R V.574"},
		{"30 dBm", "dBW", 0, 1e-13, "ITU-R V.574"},
		{"43 dBm", "W", 20, 0.05, "common practice, no source: 43 dBm is 20 W, to the dB's rounding"},
		{"120 dBuV/m", "V/m", 1, 1e-14, "ITU-R V.574: dB(uV/m)"},
		{"60 dBuV/m", "mV/m", 1, 1e-14, "ITU-R V.574"},
		{"120 dBuA/m", "A/m", 1, 1e-14, "ITU-R V.574"},
		{"0 dBm/m2", "mW/m2", 1, 1e-15, "ITU-R V.574"},
		{"0 dBW/m2", "W/m2", 1, 1e-15, "ITU-R V.574"},
		{"0 dBd", "dBi", 2.15, 0, "47 CFR 2.1: ERP is relative to a half-wave dipole, 2.15 dB"},
		{"17.15 dBi", "dBd", 15, 1e-14, "47 CFR 2.1"},
		{"1 ft", "m", 0.3048, 0, "NIST SP 811, B.6: 1 ft = 0.3048 m exactly"},
		{"1 in", "mm", 25.4, 1e-14, "NIST SP 811, B.6: 25.4 mm exactly"},
		{"1 G", "uT", 100, 1e-13, "NIST SP 811, B.8: 1 G = 1e-4 T"},
		{"1 mG", "nT", 100, 1e-13, "NIST SP 811, B.8"},
		{"180 deg", "rad", math.Pi, 0, "SI Brochure 9, table 8"},
		{"1 h", "min", 60, 0, "SI Brochure 9, table 8"},
		{"20 cm2", "m2", 0.002, 1e-18, "SI prefixes"},
		{"50 %", "1", 0.5, 0, "definition"},
		{"98.1 MHz", "Hz", 98.1e6, 0, "SI prefixes"},
		{"61.4 mV/m", "V/m", 0.0614, 1e-17, "SI prefixes, to one ulp"},
	} {
		si, u, err := Parse(c.text)
		require.NoError(t, err, c.text)
		to, ok := Lookup(c.in)
		require.True(t, ok, c.in)
		require.Equal(t, u.Dimension, to.Dimension, c.text)
		assert.InDelta(t, c.want, to.FromSI(si), c.tol, "%s in %s; source: %s", c.text, c.in, c.source)
	}
}

func TestSpellings(t *testing.T) {
	for _, c := range [][2]string{
		{"\u00b5T", "uT"}, {"\u03bcT", "uT"}, {"W/m\u00b2", "W/m2"}, {"W/m^2", "W/m2"}, {"mW/cm\u00b2", "mW/cm2"},
		{"dB\u00b5V/m", "dBuV/m"}, {"dB(\u03bcV/m)", "dBuV/m"}, {"cm\u00b2", "cm2"}, {"°", "deg"}, {"percent", "%"},
	} {
		u, ok := Lookup(c[0])
		require.True(t, ok, c[0])
		assert.Equal(t, c[1], u.Symbol)
	}
	for _, bad := range []string{"", "mhz", "DBM", "Mw", "V", "dBu", "w"} {
		_, ok := Lookup(bad)
		assert.False(t, ok, bad)
	}
}

// A value turned into SI and back is itself: within 1e-12 of its size, some
// ulps for a linear unit and the rounding of one power and one logarithm for a
// level.
func TestRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := table[rapid.IntRange(0, len(table)-1).Draw(t, "unit")]
		v := rapid.Float64Range(-200, 200).Draw(t, "value")
		got := u.FromSI(u.ToSI(v))
		if math.Abs(got-v) > 1e-12*math.Max(1, math.Abs(v)) {
			t.Fatalf("%v %s comes back as %v", v, u.Symbol, got)
		}
	})
}

func TestTableIsSound(t *testing.T) {
	seen := map[string]bool{}
	for _, u := range table {
		assert.False(t, seen[u.Symbol], "%s stands twice", u.Symbol)
		seen[u.Symbol] = true
		assert.NotZero(t, u.num, u.Symbol)
		assert.NotZero(t, u.den, u.Symbol)
		assert.NotEmpty(t, u.Dimension, u.Symbol)
	}
	for alias, symbol := range aliases {
		assert.True(t, seen[symbol], "%s stands for the unknown %s", alias, symbol)
		assert.False(t, seen[alias], "%s is both a symbol and an alias", alias)
	}
	assert.Equal(t, "m", Of(Length)[0].Symbol)
	assert.Equal(t, []string{"1", "%"}, Symbols(Share))
}

func TestParseNumber(t *testing.T) {
	for _, c := range []struct {
		text  string
		comma bool
		want  float64
	}{
		{"200", false, 200}, {" 12.5 ", false, 12.5}, {"-3", false, -3}, {"+3", false, 3}, {".5", false, .5}, {"5.", false, 5},
		{"1e3", false, 1000}, {"1E-3", false, 0.001}, {"1,5", true, 1.5}, {"1.5", true, 1.5}, {"-0,25", true, -0.25}, {"1,5e2", true, 150},
	} {
		got, err := ParseNumber(c.text, c.comma)
		require.NoError(t, err, c.text)
		assert.Equal(t, c.want, got, c.text) // exact: the nearest float64 to the text
	}
	for _, c := range []struct {
		text  string
		comma bool
		want  string
	}{
		{"20O", false, `"20O" is not a number; write digits only, such as 200`},
		{"l2", false, `"l2" is not a number; write digits only, such as 12`},
		{"", false, `"" is blank; write a number, such as 12.5`},
		{"NaN", false, `"NaN" is not a number that can be used; write a finite number, such as 12.5`},
		{"-Inf", false, `"-Inf" is not a number that can be used; write a finite number, such as 12.5`},
		{"0x1p4", false, `"0x1p4" is hexadecimal; write a decimal number, such as 12.5`},
		{"1_000", false, `"1_000" has an underscore; write digits only, such as 1000`},
		{"1,800", false, `"1,800" has a comma; write 1800 or 1.800, whichever is meant`},
		{"1,234,567.8", false, `"1,234,567.8" has thousands separators; write digits only, such as 1234567.8`},
		{"1.234,5", true, `"1.234,5" has thousands separators; write digits only, such as 1234.5`},
		{"1,234.5", true, `"1,234.5" has thousands separators; write digits only, such as 1234.5`},
		{"1 800", false, `"1 800" has thousands separators; write digits only, such as 1800`},
		{"20 W", false, `"20 W" has a unit in it; write 20 here and [W] in the header`},
		{"20 or so", false, `"20 or so" is not a number; write digits only, such as 20`},
		{"about", false, `"about" is not a number; write digits only, such as 12.5`},
		{"1e999", false, `"1e999" is too large a number; write it in a larger unit`},
		{"1e", false, `"1e" is not a number; write digits only, such as 1`},
		{"\u22123", false, "\"\u22123\" is not a number; write digits only, such as -3"},
	} {
		_, err := ParseNumber(c.text, c.comma)
		require.Error(t, err, c.text)
		assert.Equal(t, c.want, err.Error())
		var ne *NumberError
		assert.True(t, errors.As(err, &ne))
	}
}

func TestParse(t *testing.T) {
	for text, want := range map[string]string{
		"61.4":      `"61.4" has no unit; write one behind it, such as 61.4V/m or 98MHz`,
		"V/m":       `"V/m" is not a number with a unit; write one, such as 61.4V/m or 98MHz`,
		"98mhz":     `"98mhz" has an unknown unit "mhz"; did you mean MHz?`,
		"98 parrot": `"98 parrot" has an unknown unit "parrot"; write one such as V/m, A/m, W/m2, W, dBm, MHz or m`,
		"1,000 W":   `"1,000 W" has a separator in its number; write digits and a decimal point only, such as 1234.5W`,
		"NaN W":     `"NaN W" is not a number with a unit; write one, such as 61.4V/m or 98MHz`,
		"9999dBm":   `"9999dBm" is too large a number; check the figure and its unit`,
		"1e999W":    `"1e999W" is too large a number; write it in a larger unit`,
	} {
		_, _, err := Parse(text)
		require.Error(t, err, text)
		assert.Equal(t, want, err.Error())
	}
	si, u, err := Parse("1e3V/m")
	require.NoError(t, err)
	assert.Equal(t, 1000.0, si)
	assert.Equal(t, "V/m", u.Symbol)
}

func TestNear(t *testing.T) {
	for word, want := range map[string]string{
		"mhz": "MHz", "MHZ": "MHz", "DBI": "dBi", "w": "W", "dBuVm": "dBuV/m", "parsec": "", "q": "",
		"\u00b5v/m": "uV/m",
	} {
		assert.Equal(t, want, Near(word), word)
	}
	names := []string{"azimuth", "tilt", "electrical tilt", "frequency"}
	assert.Equal(t, "azimuth", NearName("azimtuh", names))
	assert.Equal(t, "electrical tilt", NearName("Electric tilt", names))
	assert.Equal(t, "", NearName("gain", names))
	assert.Equal(t, "", NearName("", names))
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{"61.4V/m", "98 MHz", "-55dBm", "1e", "1e3dBm", "\u00b5", "0x1p4W", "9%"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		si, u, err := Parse(s)
		if err == nil && (math.IsNaN(si) || math.IsInf(si, 0) || u.Symbol == "") {
			t.Fatalf("%q is taken as %v %q", s, si, u.Symbol)
		}
		if v, err := ParseNumber(s, true); err == nil && (math.IsNaN(v) || strings.ContainsAny(s, "_xX")) {
			t.Fatalf("%q is taken as %v", s, v)
		}
	})
}
