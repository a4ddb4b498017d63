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
}
