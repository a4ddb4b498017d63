package exposure

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"

	"example.org/standclear/antenna"
)

func TestApertureAgainstEarthStationExhibits(t *testing.T) {
	againstPublished(t, "fcc-exhibits/aperture.csv", func(r publishedRow) float64 {
		d := r.num("diameter_m")
		switch r.cells["quantity"] {
		case "far field distance":
			return DishFarFieldDistance(d, r.num("wavelength_m"))
		case "near field distance":
			return DishNearFieldDistance(d, r.num("wavelength_m"))
		case "far field density":
			return dishFarField(r)
		case "far field off axis":
			return ApertureOffAxisDensity(dishFarField(r))
		case "near field density":
			return ApertureNearFieldDensity(r.num("power_w"), d, r.num("efficiency"))
		case "near field off axis":
			return ApertureOffAxisDensity(ApertureNearFieldDensity(r.num("power_w"), d, r.num("efficiency")))
		case "surface density": // 4 P/A
			return ApertureSurfaceDensity(r.num("power_w"), d)
		case "half surface density": // 2 P/A, as filings take it within the main reflector
			return ApertureSurfaceDensity(r.num("power_w"), d) / 2
		case "quarter surface density": // P/A, as filings take it to the ground
			return ApertureSurfaceDensity(r.num("power_w"), d) / 4
		case "efficiency":
			return ApertureEfficiency(antenna.Gain(r.num("gain")), d, r.num("wavelength_m"))
		}
		r.t.Fatalf("no quantity %q", r.cells["quantity"])
		return 0
	})
}

func dishFarField(r publishedRow) float64 {
	return PowerDensity(r.num("power_w"), antenna.Gain(r.num("gain")),
		DishFarFieldDistance(r.num("diameter_m"), r.num("wavelength_m")))
}

// FCC exhibit SES-LIC-20150612-00353 writes the wavelength of 14.250 GHz as
// 0.21038067 m, ten times too long, and so prints a far-field start of 6.417 m
// for a 1.5 m dish and a density there a hundredfold too high. The printed
// figures follow from the slip and only from the slip.
func TestApertureAgainstExhibitWithSlip(t *testing.T) {
	const slip, d, p = 0.21038067, 1.5, 522.58
	g := antenna.GainFromDBi(45)
	lambda := Wavelength(14.25e9)
	// Half a last printed digit each; S to the 45.00 dBi's 0.12 %.
	assert.InDelta(t, 6.417, DishFarFieldDistance(d, slip), 0.0005)
	assert.InDelta(t, 2.674, DishNearFieldDistance(d, slip), 0.0005)
	assert.InEpsilon(t, 31936.37, PowerDensity(p, g, DishFarFieldDistance(d, slip)), 0.0012)
	// Ten times: the exhibit's digits are right, its decimal point is not.
	assert.InEpsilon(t, 10.0, slip/lambda, 1e-5)
	assert.InEpsilon(t, 10.0, DishFarFieldDistance(d, lambda)/6.417, 1e-4)
	// What gives it away: gain, diameter and that wavelength make an efficiency
	// far above 1.
	assert.InDelta(t, 0.63, ApertureEfficiency(g, d, lambda), 0.03)
	assert.Greater(t, ApertureEfficiency(g, d, slip), 60.0)
}

// FCC exhibit SES-MOD-20091124-01493 prints 41.04 m with c = 3e8 m/s; the true
// wavelength makes 0.07 % more. FCC exhibit 0640-EX-ST-2004 prints a near-field
// extent of 21.70 m, which is 1/pi of what its own equation 12 gives.
func TestApertureTrapsInPrintedExhibits(t *testing.T) {
	assert.InEpsilon(t, C/3e8, 41.04/DishFarFieldDistance(1.2, Wavelength(14.25e9)), 2e-4) // 41.04 is printed to 1.2e-4
	extent := DishNearFieldDistance(2.4, Wavelength(14.2e9))
	assert.Greater(t, extent, 3*21.70)
	assert.InEpsilon(t, 21.70, extent/math.Pi, 0.002) // c = 3e8 there: 0.07 %, and two rounded inputs
	// 43.5 dBi is printed as 22387.2114: half a last digit.
	assert.InDelta(t, 22387.2114, float64(antenna.GainFromDBi(43.5)), 5e-5)
}

// A page for radio amateurs prints the power that keeps the near field of a
// dish of efficiency 0.55 within 10 and 50 W/m2. Equation 13 allows more power
// than that at every size, so a strongly tapered dish can exceed it: the page's
// figures correspond to a peak of about 7.5 P/A on the axis.
func TestApertureNearFieldIsNotTheStrictestPublished(t *testing.T) {
	for _, row := range readPublished(t, "radio-amateur/dish-power-table.csv") {
		r := publishedRow{t, row}
		d := r.num("diameter_ft") * footM
		for column, limit := range map[string]float64{"public_w": 10, "controlled_w": 50} {
			printed := r.num(column)
			ours := limit / ApertureNearFieldDensity(1, d, 0.55)
			assert.Less(t, printed, ours, "%s ft %s", row["diameter_ft"], column)
			// The page's peak over P/A: 7.5, and its powers are printed to
			// between 1 and 50 %.
			peak := limit * math.Pi * d * d / 4 / printed
			half := 0.05
			if printed >= 10 {
				half = 0.5
			}
			assert.InDelta(t, 7.5, peak, 7.5*(half/printed+0.02), "%s ft %s", row["diameter_ft"], column)
		}
	}
}

func TestApertureTransitionMeetsBothEnds(t *testing.T) {
	const p, d, eta, lambda = 1, 1.2, 0.6, 0.013
	near, far := DishNearFieldDistance(d, lambda), DishFarFieldDistance(d, lambda)
	snf := ApertureNearFieldDensity(p, d, eta)
	// At the near end it is the near-field density.
	assert.InEpsilon(t, snf, ApertureTransitionDensity(snf, near, near), rounding)
	// At the far end equation 18 with equation 15 gives eta pi2/(4 pi 0.36 D2/
	// lambda2 ...): their ratio is pi2/9.6 = 1.0281 for every dish.
	ff := PowerDensity(p, antenna.Gain(ApertureGain(eta, d, lambda)), far)
	assert.InEpsilon(t, math.Pi*math.Pi/9.6, ff/ApertureTransitionDensity(snf, near, far), rounding)
	// Gain and efficiency are one formula turned round.
	assert.InEpsilon(t, eta, ApertureEfficiency(antenna.Gain(ApertureGain(eta, d, lambda)), d, lambda), rounding)
}

// On the axis of a uniform circular aperture the exact scalar field has a closed
// form: S/S0 = 4 sin2(pi a2/(2 lambda z)) in the Fresnel region (textbook, from
// memory). Its last maximum of 4 lies at D2/(4 lambda), which is what equations
// 12 and 13 say with efficiency 1.
func TestApertureAgainstUniformClosedForm(t *testing.T) {
	const p, d, lambda = 1.0, 2.0, 0.01
	s0 := p / (math.Pi * d * d / 4)
	exact := func(z float64) float64 {
		s := math.Sin(math.Pi * d * d / 4 / (2 * lambda * z))
		return 4 * s * s * s0
	}
	near, far := DishNearFieldDistance(d, lambda), DishFarFieldDistance(d, lambda)
	snf := ApertureNearFieldDensity(p, d, 1)
	assert.InEpsilon(t, exact(near), snf, rounding)
	// Between the two the engineering formula is not an upper bound: with u = pi
	// near/(2 z) the exact field over it is (pi/2) sin2(u)/u, largest where tan u =
	// 2 u (u = 1.165561), 13.8 %, at 1.348 near. From 2 near it is above.
	largest, at := 0.0, 0.0
	for z := near; z <= far; z += near / 1000 {
		if q := exact(z) / ApertureTransitionDensity(snf, near, z); q > largest {
			largest, at = q, z/near
		}
		if z > 2*near*(1+rounding) {
			assert.Greater(t, ApertureTransitionDensity(snf, near, z), exact(z), "z = %v", z)
		}
	}
	u := 1.165561
	assert.InDelta(t, math.Pi/2*math.Sin(u)*math.Sin(u)/u, largest, 1e-6) // the step is 0.001 near, at a flat top
	assert.InDelta(t, math.Pi/2/u, at, 0.001)                             // one step
	// At 0.6 D2/lambda the far field overstates by 16 %: pi2/5.76 = 1.713473
	// against 1.482362.
	ff := PowerDensity(p, antenna.Gain(ApertureGain(1, d, lambda)), far)
	assert.InEpsilon(t, 1.713473/1.482362, ff/exact(far), 1e-6) // seven printed digits
}

func TestRegionDistances(t *testing.T) {
	// kr = 1 at the reactive distance, by definition.
	lambda := Wavelength(900e6)
	assert.InEpsilon(t, 1.0, Wavenumber(900e6)*ReactiveDistance(lambda), rounding)
	// At 2 D2/lambda the path to the aperture's edge is lambda/16 longer (22.5
	// degrees) in the parabolic approximation, which is 1e-3 off for D = 20
	// lambda.
	d := 20 * lambda
	r := FarFieldDistance(d, lambda)
	extra := math.Hypot(r, d/2) - r
	assert.InEpsilon(t, lambda/16, extra, 1e-3)
	// The dish's far field starts at 0.3 of the antenna's and its near field ends
	// at 1/8 of it.
	assert.InEpsilon(t, 0.3, DishFarFieldDistance(d, lambda)/r, rounding)
	assert.InEpsilon(t, 0.125, DishNearFieldDistance(d, lambda)/r, rounding)
}

func TestRotationFactors(t *testing.T) {
	deg := math.Pi / 180
	// A beam of 1.5 degrees on a full turn: 1/240.
	assert.InEpsilon(t, 1.0/240, RotationFactorFar(1.5*deg, 2*math.Pi), rounding)
	assert.InEpsilon(t, 1.0/240, RotationFactorFar(1.5*deg, -2*math.Pi), rounding)
	// It never raises a mean.
	assert.Equal(t, 1.0, RotationFactorFar(2*math.Pi, 1))
	assert.Equal(t, 1.0, RotationFactorNear(3, 0.5, 1))
	// A 3 m antenna seen at 10 m on a full turn: 3/(20 pi).
	assert.InEpsilon(t, 3/(20*math.Pi), RotationFactorNear(3, 10, 2*math.Pi), rounding)
}
