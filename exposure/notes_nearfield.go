package exposure

import "example.org/standclear/antenna"

// nearFieldNotes describes the near-field methods and the two-ray ground.
var nearFieldNotes = []antenna.MethodNote{
	{
		ID: "ELEMENTARY-1", Name: "short dipole and small loop, all terms",
		Formula: "Z0 H^2 = 3 P sin^2 w (1 + 1/x^2)/(8 pi r^2), E^2/Z0 = 3 P (sin^2 w (1 - 1/x^2 + 1/x^4) + 4 cos^2 w (1/x^2 + 1/x^4))/(8 pi r^2), x = k r; a loop has E and H changed over",
		Range:   "sources much smaller than a wavelength, at any distance beyond their own size",
		Errs:    "exact for a point source; within its own size of a real one it is not the field",
		Source:  "textbook: Balanis, Antenna Theory, 3rd edition (2005), sections 4.2 and 5.2, from memory",
		Check:   "TestElementaryImpedances",
	},
	{
		ID: "WIRE-1", Name: "thin wire",
		Formula: "closed form of E_z, E_rho and H_phi for sinusoidal current; the current from the radiated power by integrating the far field over the sphere",
		Range:   "centre-fed wires of 0.001 to 100 wavelengths; a monopole is half of one, over perfect ground",
		Errs:    "exact for the sinusoidal current; at the feed and tips of thick wires the current differs",
		Source:  "textbook: Balanis, Antenna Theory, 3rd edition (2005), sections 4.5 and 8.2, from memory",
		Check:   "TestHalfWaveDipoleFields",
	},
	{
		ID: "APERTURE-1", Name: "aperture",
		Formula: "in front within a diameter of the axis 16 eta P/(pi D^2), as 1/R from D^2/(4 lambda), P G/(4 pi R^2) from 0.6 D^2/lambda; elsewhere the larger of 1/100 of that and the far field by pattern; at most 4 P/A",
		Range:   "dishes larger than a wavelength; R along the axis in front, the slant distance elsewhere; behind the dish the rule off the axis is a choice of this project",
		Errs:    "an evenly lit aperture stands up to 14 % above it between D^2/(4 lambda) and twice that, below it elsewhere (by 16 % at 0.6 D^2/lambda); a strongly tapered one can reach 6 P/A on the axis",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equations 11 to 18; printed results in FCC exhibits SES-LIC-INTR2009-07567 and 0640-EX-ST-2004",
		Check:   "TestApertureMethodAgainstExhibit",
	},
	{
		ID: "CYLINDER-PEAK", Name: "cylindrical, peak",
		Formula: "S = 2 P h/(Phi R L c2 sqrt(1 + (2R/R0)^2)), R0 = Phi G L c2/(4 pi), c2 = cos^2(electrical tilt), Phi the integral of the horizontal cut h",
		Range:   "|height along the array| <= L/2 + R tan(10 deg + tilt), as the larger of itself and the pattern; elsewhere the pattern",
		Errs:    "the published form has a Gaussian cut and 12 in place of 4 pi: up to 0.2 dB higher; the measured cut and 4 pi are a choice of this project",
		Source:  "Cicchetti and Faraone, IEEE Trans. EMC 46(2):275-290 (2004), formulas from memory",
		Check:   "TestCylindricalPeakAgainstPublished",
	},
	{
		ID: "CYLINDER-MEAN", Name: "cylindrical, mean over the height",
		Formula: "S = P h/(Phi R L c2 sqrt(1 + (R/R0)^2))",
		Range:   "the mean over the array's height",
		Errs:    "single heights are up to twice as high",
		Source:  "Faraone, Tay, Joyner and Balzano, IEEE Trans. VT 49(3):984-996 (2000); FCC OET Bulletin 65, edition 97-01 (1997), equations 19 to 21; formulas from memory",
		Check:   "TestCylindricalMeanAgainstArray",
	},
	{
		ID: "ARRAY-1", Name: "array",
		Formula: "vector sums of E and of H over N elements, each exp(-jkR)/R with a loss of min(Ah(phi), front to back) + min(12 (theta/65 deg)^2, 30) dB, phased for the electrical tilt; scaled to P G/(4 pi r^2) toward the beam",
		Range:   "beyond lambda/(2 pi) from the panel; equal amplitudes",
		Errs:    "a real feed's taper and coupling make other side lobes; the waves may carry more or less power than P (stated; method auto scales up where it is less)",
		Source:  "textbook: Balanis, Antenna Theory, 3rd edition (2005), section 6.3, from memory; element after 3GPP TR 38.901, table 7.3-1, from memory",
		Check:   "TestArrayFarOutIsItsPattern",
	},
	{
		ID: "PANEL-1", Name: "panel", Ours: true,
		Formula: "within 2 L^2/lambda the larger of array and (the smaller of pattern and cylindrical model where it holds, else pattern); beyond, the larger of pattern and, for built-in patterns, the array's own far field",
		Range:   "panels with a length",
		Errs:    "upward: of several models the larger counts",
		Source:  "a choice of this project",
		Check:   "TestPanelIsTheLargerOfItsParts",
	},
	{
		ID: "FRESNEL-1", Name: "ground: fresnel",
		Formula: "direct and reflected ray, E_s' = R_h E_s, H_s' = R_v H_s, E' = E_s' s - Z0 k_r x (H_s' s), vector sums of E and of H; R_h = (sin psi - q)/(sin psi + q), R_v = (eps sin psi - q)/(eps sin psi + q), q = sqrt(eps - cos^2 psi)",
		Range:   "far field and each element of an array, both ends a wavelength or more above flat ground; for the other methods the amplitudes of source and image add",
		Errs:    "no surface wave; flat, smooth, even ground reflects more than real ground; boundaries of arrays take the sum of the reflected amplitudes",
		Source:  "textbook: Fresnel coefficients as in Recommendation ITU-R P.527 and Balanis, Advanced Engineering Electromagnetics (1989), section 5.3, from memory",
		Check:   "TestFresnelCoefficients",
	},
}
