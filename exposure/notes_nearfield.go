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
}
