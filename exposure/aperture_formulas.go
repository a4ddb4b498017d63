package exposure

import (
	"math"

	"example.org/standclear/antenna"
)

// ApertureSurfaceDensity returns the largest power density in W/m2 at the
// surface of a circular aperture: S = 4 P/A with A = pi D2/4. P is the power at
// the antenna's input in W, D the diameter in m, above 0. It is an upper figure
// for any efficiency. Source: [OET65-11].
func ApertureSurfaceDensity(powerW, diameterM float64) float64 {
	return 4 * powerW / (math.Pi * diameterM * diameterM / 4)
}

// ApertureNearFieldDensity returns the largest power density in W/m2 on the
// axis in the near field of a circular aperture: S = 16 eta P/(pi D2). P is in
// W, D in m, above 0, eta the aperture efficiency in (0, 1]. It holds to
// DishNearFieldDistance. It is exact at the last maximum of a uniform aperture
// and can be exceeded by a strongly tapered one. Source: [OET65-13].
func ApertureNearFieldDensity(powerW, diameterM, efficiency float64) float64 {
	return 16 * efficiency * powerW / (math.Pi * diameterM * diameterM)
}

// ApertureTransitionDensity returns the power density in W/m2 on the axis
// between the near and the far field of a circular aperture: S = S_nf R_nf/R.
// S_nf is in W/m2, R_nf (DishNearFieldDistance) and R in m, R >= R_nf. It holds
// to DishFarFieldDistance, where it is 2.8 % below the far field. A uniform
// aperture exceeds it by up to 14 % (at 1.35 R_nf). Source: [OET65-17].
func ApertureTransitionDensity(nearFieldWPerM2, nearFieldM, rM float64) float64 {
	return nearFieldWPerM2 * nearFieldM / rM
}

// ApertureOffAxisDensity returns the power density in W/m2 that is taken at
// least one diameter off the axis of a circular aperture in its near field or
// transition region: S = S_axis/100. S_axis is in W/m2, that on the axis at the
// same distance. An engineering bound: spillover and edge diffraction can pass
// it. Source: [OET65-OFF].
func ApertureOffAxisDensity(onAxisWPerM2 float64) float64 { return onAxisWPerM2 / 100 }

// ApertureEfficiency returns the aperture efficiency of a circular aperture as
// a ratio: eta = G lambda2/(pi2 D2). G is the gain as a ratio, D and lambda are
// in m. A value above 1 means that gain, diameter and frequency do not belong
// together. Source: [OET65-14].
func ApertureEfficiency(gain antenna.Gain, diameterM, wavelengthM float64) float64 {
	q := wavelengthM / (math.Pi * diameterM)
	return float64(gain) * q * q
}

// ApertureGain returns the gain as a ratio of a circular aperture: G = eta (pi
// D/lambda)2. eta is the aperture efficiency in (0, 1], D and lambda are in m.
// Source: [OET65-14].
func ApertureGain(efficiency, diameterM, wavelengthM float64) float64 {
	q := math.Pi * diameterM / wavelengthM
	return efficiency * q * q
}
