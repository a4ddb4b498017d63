package units

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// NumberError is text that is not a number, with what to write instead.
type NumberError struct {
	Text   string // as typed
	Reason string // "is not a number"
	Hint   string // "write digits only, such as 200"
}

func (e *NumberError) Error() string { return fmt.Sprintf("%q %s; %s", e.Text, e.Reason, e.Hint) }

// ParseNumber returns the number that text holds. It is strict: digits, one
// decimal point, a sign and an exponent, nothing else. NaN, infinity, hexadecimal
// digits, underscores and thousands separators are errors, and so is a number
// too large for a float64. With decimalComma one comma may stand for the point.
func ParseNumber(text string, decimalComma bool) (float64, error) {
	t := strings.TrimSpace(text)
	n, comma := scanNumber(t, decimalComma)
	if n == 0 || n != len(t) {
		return 0, numberError(text, t, decimalComma)
	}
	if comma {
		t = strings.Replace(t, ",", ".", 1)
	}
	v, err := strconv.ParseFloat(t, 64)
	if err != nil || math.IsInf(v, 0) {
		return 0, &NumberError{text, "is too large a number", "write it in a larger unit"}
	}
	return v, nil
}

// scanNumber returns the length of the number at the start of t (0 = none) and
// whether a comma stands for its decimal point.
func scanNumber(t string, decimalComma bool) (n int, comma bool) {
	i := 0
	digits := func() int {
		start := i
		for i < len(t) && '0' <= t[i] && t[i] <= '9' {
			i++
		}
		return i - start
	}
	if i < len(t) && (t[i] == '+' || t[i] == '-') {
		i++
	}
	whole, part := digits(), 0
	if i < len(t) && (t[i] == '.' || decimalComma && t[i] == ',') {
		comma = t[i] == ','
		i++
		part = digits()
	}
	if whole+part == 0 {
		return 0, false
	}
	end := i
	if i < len(t) && (t[i] == 'e' || t[i] == 'E') {
		i++
		if i < len(t) && (t[i] == '+' || t[i] == '-') {
			i++
		}
		if digits() > 0 {
			end = i
		}
	}
	return end, comma
}

var misread = strings.NewReplacer("O", "0", "o", "0", "l", "1", "I", "1", "\u2212", "-", "\u2013", "-")

func numberError(text, t string, decimalComma bool) error {
	parses := func(s string) bool {
		n, _ := scanNumber(s, decimalComma)
		return n > 0 && n == len(s)
	}
	lower := strings.ToLower(strings.TrimLeft(t, "+-"))
	switch {
	case t == "":
		return &NumberError{text, "is blank", "write a number, such as 12.5"}
	case lower == "nan" || lower == "inf" || lower == "infinity" || lower == "\u221e":
		return &NumberError{text, "is not a number that can be used", "write a finite number, such as 12.5"}
	case strings.HasPrefix(lower, "0x"):
		return &NumberError{text, "is hexadecimal", "write a decimal number, such as 12.5"}
	case strings.Contains(t, "_"):
		return &NumberError{text, "has an underscore", "write digits only, such as " + strings.ReplaceAll(t, "_", "")}
	case parses(misread.Replace(t)):
		return &NumberError{text, "is not a number", "write digits only, such as " + misread.Replace(t)}
	case strings.Contains(t, ","):
		if hint := withoutCommas(t, parses); hint != "" {
			return &NumberError{text, "has thousands separators", "write digits only, such as " + hint}
		}
		if point := strings.Replace(t, ",", ".", 1); parses(point) {
			return &NumberError{text, "has a comma", "write " + strings.Replace(t, ",", "", 1) + " or " + point + ", whichever is meant"}
		}
	}
	plain := strings.NewReplacer(" ", "", "\u00a0", "", "\u202f", "", "'", "", "\u2019", "").Replace(t)
	if plain != t && parses(plain) {
		return &NumberError{text, "has thousands separators", "write digits only, such as " + plain}
	}
	if n, _ := scanNumber(t, decimalComma); n > 0 {
		if u, ok := Lookup(t[n:]); ok {
			return &NumberError{text, "has a unit in it", "write " + t[:n] + " here and [" + u.Symbol + "] in the header"}
		}
		return &NumberError{text, "is not a number", "write digits only, such as " + t[:n]}
	}
	return &NumberError{text, "is not a number", "write digits only, such as 12.5"}
}

// withoutCommas returns t with its thousands separators taken out, where it is
// plain that they are that: several commas, or commas and a point, of which
// the last is the decimal one. "" where it is not.
func withoutCommas(t string, parses func(string) bool) string {
	plain := ""
	switch point, comma := strings.LastIndex(t, "."), strings.LastIndex(t, ","); {
	case point > comma, point < 0 && strings.Count(t, ",") > 1:
		plain = strings.ReplaceAll(t, ",", "")
	case point >= 0:
		plain = strings.Replace(strings.ReplaceAll(t, ".", ""), ",", ".", 1)
	}
	if plain == "" || !parses(plain) {
		return ""
	}
	return plain
}

// Parse returns a quantity such as "61.4V/m" or "98 MHz" in the SI unit of its
// dimension, and the unit it was given in.
func Parse(text string) (si float64, u Unit, err error) {
	v, u, err := Split(text)
	if err != nil {
		return 0, Unit{}, err
	}
	si = u.ToSI(v)
	if math.IsInf(si, 0) || math.IsNaN(si) {
		return 0, Unit{}, &NumberError{text, "is too large a number", "check the figure and its unit"}
	}
	return si, u, nil
}

// Split returns the number of a quantity such as "61.4V/m" as it was typed, and
// its unit.
func Split(text string) (v float64, u Unit, err error) {
	t := strings.TrimSpace(text)
	n, _ := scanNumber(t, false)
	if n == 0 {
		return 0, Unit{}, &NumberError{text, "is not a number with a unit", "write one, such as 61.4V/m or 98MHz"}
	}
	symbol := strings.TrimSpace(t[n:])
	if symbol == "" {
		return 0, Unit{}, &NumberError{text, "has no unit", "write one behind it, such as 61.4V/m or 98MHz"}
	}
	if strings.HasPrefix(symbol, ",") || strings.HasPrefix(symbol, "_") {
		return 0, Unit{}, &NumberError{text, "has a separator in its number", "write digits and a decimal point only, such as 1234.5W"}
	}
	u, ok := Lookup(symbol)
	if !ok {
		hint := "write one such as V/m, A/m, W/m2, W, dBm, MHz or m"
		if near := Near(symbol); near != "" {
			hint = "did you mean " + near + "?"
		}
		return 0, Unit{}, &NumberError{text, fmt.Sprintf("has an unknown unit %q", symbol), hint}
	}
	v, err = strconv.ParseFloat(t[:n], 64)
	if err != nil {
		return 0, Unit{}, &NumberError{text, "is too large a number", "write it in a larger unit"}
	}
	return v, u, nil
}
