package antenna

import (
	"gonum.org/v1/gonum/integrate/quad"
)

// integrate returns the integral of f from a to b by Gauss-Legendre rules of ten
// points on n equal pieces.
func integrate(a, b float64, n int, f func(float64) float64) float64 {
	const points = 10
	var x, w [points]float64
	quad.Legendre{}.FixedLocations(x[:], w[:], -1, 1)
	h := (b - a) / (2 * float64(n))
	sum := 0.0
	for i := 0; i < n; i++ {
		mid := a + h*float64(2*i+1)
		for k := range x {
			sum += w[k] * f(mid+h*x[k])
		}
	}
	return sum * h
}
