package exposure

import (
	"math"

	"example.org/standclear/antenna"
)

// Wavelength returns the free-space wavelength in m: lambda = c/f. f is in Hz,
// above 0. It errs on neither side. Source: [WAVE-1].
func Wavelength(frequencyHz float64) float64 { return C / frequencyHz }

// Wavenumber returns the free-space wavenumber in rad/m: k = 2 pi f/c. f is in
// Hz, above 0. It errs on neither side. Source: [WAVE-1].
func Wavenumber(frequencyHz float64) float64 { return 2 * math.Pi * frequencyHz / C }

// SFromE returns the power density in W/m2 of a plane wave: S = E2/Z0. E is in
// V/m RMS. In a near field it may lie above or below the true density.
// Source: [WAVE-2].
func SFromE(eVPerM float64) float64 { return eVPerM * eVPerM / Z0 }

// SFromH returns the power density in W/m2 of a plane wave: S = Z0 H2. H is in
// A/m RMS. In a near field it may lie above or below the true density.
// Source: [WAVE-2].
func SFromH(hAPerM float64) float64 { return Z0 * hAPerM * hAPerM }

// EFromS returns the electric field in V/m RMS of a plane wave: E = sqrt(S Z0).
// S is in W/m2, at least 0. Plane waves only. Source: [WAVE-2].
func EFromS(sWPerM2 float64) float64 { return math.Sqrt(sWPerM2 * Z0) }

// HFromS returns the magnetic field in A/m RMS of a plane wave: H = sqrt(S/Z0).
// S is in W/m2, at least 0. Plane waves only. Source: [WAVE-2].
func HFromS(sWPerM2 float64) float64 { return math.Sqrt(sWPerM2 / Z0) }

// EFromH returns the electric field in V/m RMS of a plane wave: E = Z0 H. H is
// in A/m RMS. Plane waves only. Source: [WAVE-2].
func EFromH(hAPerM float64) float64 { return Z0 * hAPerM }

// HFromE returns the magnetic field in A/m RMS of a plane wave: H = E/Z0. E is
// in V/m RMS. Plane waves only. Source: [WAVE-2].
func HFromE(eVPerM float64) float64 { return eVPerM / Z0 }

// BFromH returns the magnetic flux density in T: B = mu0 H. H is in A/m. It
// holds in air, in any field. Source: [WAVE-2].
func BFromH(hAPerM float64) float64 { return Mu0 * hAPerM }

// HFromB returns the magnetic field in A/m: H = B/mu0. B is in T. It holds in
// air, in any field. Source: [WAVE-2].
func HFromB(bT float64) float64 { return bT / Mu0 }

// EIRP returns the equivalent isotropically radiated power in W: P G. P is the
// power at the antenna's input in W, G the gain as a ratio over isotropic.
// Source: [EIRP-1].
func EIRP(powerW float64, gain antenna.Gain) float64 { return powerW * float64(gain) }

// dipoleRatio is the gain of the reference half-wave dipole as a ratio: the
// regulatory 2.15 dB, 1.6406.
var dipoleRatio = math.Pow(10, antenna.DipoleGainDB/10)

// EIRPFromERP returns the EIRP in W of an effective radiated power over a
// half-wave dipole: EIRP = ERP * 10^(2.15/10). ERP is in W. The exact thin
// dipole (2.15088 dBi) would give 0.02 % more. Source: [EIRP-1].
func EIRPFromERP(erpW float64) float64 { return erpW * dipoleRatio }

// ERPFromEIRP returns the effective radiated power over a half-wave dipole in
// W: ERP = EIRP / 10^(2.15/10). EIRP is in W. Source: [EIRP-1].
func ERPFromEIRP(eirpW float64) float64 { return eirpW / dipoleRatio }

// PowerDensity returns the far-field power density in W/m2 without reflection:
// S = P G/(4 pi R2). P is in W, G the gain toward the point as a ratio, R in m,
// above 0 (at 0 the result is +Inf). Far field only: nearer it overstates in
// front of a large antenna and can understate beside one and within
// lambda/(2 pi). Source: [OET65-3].
func PowerDensity(powerW float64, gain antenna.Gain, rM float64) float64 {
	return powerW * float64(gain) / (4 * math.Pi * rM * rM)
}

// FieldFromEIRP returns the far-field electric field in V/m RMS without
// reflection: E = sqrt(Z0 EIRP/(4 pi))/R. EIRP is in W, R in m, above 0. Valid
// and erring as PowerDensity. Source: [P525-1].
func FieldFromEIRP(eirpW, rM float64) float64 {
	return math.Sqrt(Z0*eirpW/(4*math.Pi)) / rM
}

// DistanceForPowerDensity returns the distance in m at which the far-field
// power density without reflection has fallen to S: R = sqrt(EIRP/(4 pi S)).
// EIRP is in W, S in W/m2, above 0. Valid and erring as PowerDensity.
// Source: [OET65-4].
func DistanceForPowerDensity(eirpW, sWPerM2 float64) float64 {
	return math.Sqrt(eirpW / (4 * math.Pi * sWPerM2))
}

// PowerDensityOverGround returns the far-field power density in W/m2 above a
// reflecting ground: S = k2 EIRP/(4 pi R2). EIRP is in W, k is the field factor
// (1 none, 1.6 EPA, 2 full reflection), R in m, above 0. With k = 2 it cannot
// be exceeded by one reflection of a far field. Source: [OET65-5].
func PowerDensityOverGround(eirpW, fieldFactor, rM float64) float64 {
	return fieldFactor * fieldFactor * eirpW / (4 * math.Pi * rM * rM)
}

// DistanceOverGround returns the distance in m at which the far-field power
// density above a reflecting ground has fallen to S: R = k sqrt(EIRP/(4 pi S)).
// EIRP is in W, k the field factor, S in W/m2, above 0. Source: [OET65-5].
func DistanceOverGround(eirpW, fieldFactor, sWPerM2 float64) float64 {
	return fieldFactor * DistanceForPowerDensity(eirpW, sWPerM2)
}
