package exposure

import "math"

// atanSteps is the number of table steps over [0, 1].
const atanSteps = 256

// atanTable holds atan(k/atanSteps).
var atanTable = func() (t [atanSteps + 1]float64) {
	for k := range t {
		t[k] = math.Atan(float64(k) / atanSteps)
	}
	return
}()

// fastAtan2 is math.Atan2 to within 4e-16 rad, for finite arguments that are
// not both zero (it returns 0 for those). The nearest table entry t_k leaves a
// remainder d = (t - t_k)/(1 + t t_k) of at most 1/512, for which four terms of
// atan's series suffice: the fifth is below 1e-25.
func fastAtan2(y, x float64) float64 {
	ax, ay := math.Abs(x), math.Abs(y)
	lo, hi := ay, ax
	if ay > ax {
		lo, hi = ax, ay
	}
	if hi == 0 {
		return 0
	}
	k := int(lo/hi*atanSteps + 0.5)
	tk := float64(k) / atanSteps
	// (t - tk)/(1 + t tk) with t = lo/hi, cleared of its inner fraction
	d := (lo - tk*hi) / (hi + tk*lo)
	d2 := d * d
	a := atanTable[k] + d*(1-d2*(1.0/3-d2*(1.0/5-d2/7)))
	if ay > ax {
		a = math.Pi/2 - a
	}
	if x < 0 {
		a = math.Pi - a
	}
	if y < 0 {
		a = -a
	}
	return a
}
