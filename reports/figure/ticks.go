package figure

import (
	"math"
	"strconv"
	"strings"
)

// tick is a mark on an axis; a mark without label is a small one.
type tick struct {
	at    float64
	label string
}

// niceStep returns the smallest of 1, 2, 5 times a power of ten that is at
// least v.
func niceStep(v float64) float64 {
	p := math.Pow(10, math.Floor(math.Log10(v)))
	for _, m := range []float64{1, 2, 5} {
		if m*p >= v*(1-1e-9) {
			return m * p
		}
	}
	return 10 * p
}

// niceBelow returns the largest of 1, 2, 5 times a power of ten that is at most
// v.
func niceBelow(v float64) float64 {
	p := math.Pow(10, math.Floor(math.Log10(v)))
	for _, m := range []float64{5, 2} {
		if m*p <= v*(1+1e-9) {
			return m * p
		}
	}
	return p
}

// linearTicks returns at most n labelled marks from lo to hi.
func linearTicks(lo, hi float64, n int) []tick {
	step := niceStep((hi - lo) / float64(max(n, 1)))
	decimals := max(0, int(math.Ceil(-math.Log10(step)-1e-9)))
	var out []tick
	for k := math.Ceil(lo/step - 1e-9); k*step <= hi+1e-9*step; k++ {
		v := k * step
		if v == 0 {
			v = 0 // no minus zero
		}
		out = append(out, tick{v, minus(strconv.FormatFloat(v, 'f', decimals, 64))})
	}
	return out
}

// logTicks marks decades from lo to hi, and the digits between where there is
// room; label writes a value.
func logTicks(lo, hi float64, n int, label func(float64) string) []tick {
	d0, d1 := int(math.Floor(math.Log10(lo)+1e-9)), int(math.Ceil(math.Log10(hi)-1e-9))
	first, last := int(math.Ceil(math.Log10(lo)-1e-9)), int(math.Floor(math.Log10(hi)+1e-9))
	every := max(1, int(math.Ceil(float64(last-first+1)/float64(max(n, 2)))))
	few := math.Log10(hi/lo)*2.5 < float64(n)
	var out []tick
	for d := d0; d <= d1; d++ {
		for m := 1; m <= 9; m++ {
			v, err := strconv.ParseFloat(strconv.Itoa(m)+"e"+strconv.Itoa(d), 64)
			if err != nil || v < lo*(1-1e-9) || v > hi*(1+1e-9) {
				continue
			}
			switch {
			case m == 1 && (d-first)%every == 0, few && (m == 2 || m == 5):
				out = append(out, tick{v, label(v)})
			case d1-d0 <= 8 || m == 1:
				out = append(out, tick{v, ""})
			}
		}
	}
	return out
}

// plainOrPower writes 0.001 to 100000 as they are and other values with an
// exponent: the font has no raised figures.
func plainOrPower(v float64) string {
	if v >= 0.00099 && v <= 100001 {
		return strconv.FormatFloat(v, 'f', -1, 64)
	}
	m, e, _ := strings.Cut(strconv.FormatFloat(v, 'e', 0, 64), "e")
	n, err := strconv.Atoi(e)
	if err != nil {
		return minus(strconv.FormatFloat(v, 'g', 3, 64))
	}
	return m + "e" + minus(strconv.Itoa(n))
}

// frequency writes a frequency in Hz with the unit that suits it.
func frequency(hz float64) string {
	for _, u := range []struct {
		f float64
		s string
	}{{1e9, " GHz"}, {1e6, " MHz"}, {1e3, " kHz"}} {
		if hz >= u.f*(1-1e-9) {
			return strconv.FormatFloat(roundTo(hz/u.f, 6), 'f', -1, 64) + u.s
		}
	}
	return strconv.FormatFloat(roundTo(hz, 6), 'f', -1, 64) + " Hz"
}

// shortHz writes a number of hertz with the letter of its multiple: 100M.
func shortHz(hz float64) string {
	return strings.NewReplacer(" ", "", "Hz", "").Replace(frequency(hz))
}

// roundTo rounds to a number of significant digits.
func roundTo(v float64, digits int) float64 {
	r, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', digits, 64), 64)
	if err != nil {
		return v
	}
	return r
}

// digits writes a value with n significant digits and no exponent.
func digits(v float64, n int) string {
	if math.IsInf(v, 1) {
		return "∞"
	}
	r := roundTo(v, n)
	if r == 0 {
		return "0"
	}
	dec := max(0, n-1-int(math.Floor(math.Log10(math.Abs(r))+1e-12)))
	return minus(strconv.FormatFloat(r, 'f', min(dec, 12), 64))
}

// ratioText writes an exposure ratio with two digits; one that would round to
// 1.0 from either side keeps as many digits as tell it from 1.
func ratioText(v float64) string {
	switch {
	case math.IsNaN(v):
		return "not assessed"
	case math.IsInf(v, 1):
		return "no bound"
	case v < 0.001:
		return "< 0.001"
	}
	for n := 2; n <= 15; n++ {
		s := digits(v, n)
		if f, err := strconv.ParseFloat(s, 64); err == nil && (f > 1) == (v > 1) && (f < 1) == (v < 1) {
			return s
		}
	}
	return digits(v, 16)
}

// minus writes the sign as a minus and not as a hyphen.
func minus(s string) string {
	if strings.HasPrefix(s, "-") {
		return "−" + s[1:]
	}
	return s
}
