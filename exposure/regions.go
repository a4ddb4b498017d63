package exposure

import "math"

// ReactiveDistance returns the distance in m from the radiating body within
// which the reactive near field matters: lambda/(2 pi). lambda is in m. It is
// the radius at which the near and far terms of an elementary dipole are equal,
// not an edge: an electrically large antenna's reactive field can reach
// further. Source: [REGION-1].
func ReactiveDistance(wavelengthM float64) float64 { return wavelengthM / (2 * math.Pi) }

// FarFieldDistance returns the distance in m from which the far field holds
// with a phase error of 22.5 degrees across the aperture: 2 D2/lambda. D is the
// largest dimension in m, lambda in m. Source: [REGION-2].
func FarFieldDistance(largestM, wavelengthM float64) float64 {
	return 2 * largestM * largestM / wavelengthM
}

// DishNearFieldDistance returns the extent in m of the near field in front of a
// circular aperture: D2/(4 lambda). D is the diameter in m, lambda in m.
// Source: [OET65-12].
func DishNearFieldDistance(diameterM, wavelengthM float64) float64 {
	return diameterM * diameterM / (4 * wavelengthM)
}

// DishFarFieldDistance returns the distance in m from which the far-field
// density is used in front of a circular aperture: 0.6 D2/lambda. D is the
// diameter in m, lambda in m. At that distance the far-field formula overstates
// a uniform aperture by 16 % (closed form on the axis). Source: [OET65-16].
func DishFarFieldDistance(diameterM, wavelengthM float64) float64 {
	return 0.6 * diameterM * diameterM / wavelengthM
}

// RotationFactorFar returns the share of time that the beam of a rotating or
// scanning antenna spends on a point in its far field: beamwidth/scan angle, at
// most 1. The beamwidth is that at 3 dB, both in rad. It applies to mean levels
// only, never to peak levels. Energy outside the 3 dB beam is left out, so it
// understates for a pattern with a broad skirt. Source: [OET65-ROT].
func RotationFactorFar(beamwidthRad, scanRad float64) float64 {
	return math.Min(1, math.Abs(beamwidthRad/scanRad))
}

// RotationFactorNear returns the share of time that a rotating antenna's
// near-field beam spends on a point: the antenna's dimension in the plane of
// rotation over the arc that it sweeps at that distance, D/(R scan), at most 1.
// D and R are in m, the scan angle in rad. It applies to mean levels only.
// Source: [OET65-ROT].
func RotationFactorNear(dimensionM, rM, scanRad float64) float64 {
	return math.Min(1, math.Abs(dimensionM/(rM*scanRad)))
}
