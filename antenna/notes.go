package antenna

// MethodNote documents one method for the `methods` command, the report's
// methods sheet and the test that holds every exported formula to a source. A
// formula's doc comment ends with "Source: [ID]."
type MethodNote struct {
	ID      string `json:"id"`      // OET65-3
	Name    string `json:"name"`    // far field
	Formula string `json:"formula"` // S = P G/(4 pi r^2), in plain text
	Range   string `json:"range"`   // where it holds
	Errs    string `json:"errs"`    // on which side it errs, and by how much
	Source  string `json:"source"`  // document, edition, equation or table; "from memory" where it is
	Check   string `json:"check"`   // the Go test that holds it, TestName
	Ours    bool   `json:"ours"`    // a choice of this project, not a published one
}

// Methods lists the methods of this package.
func Methods() []MethodNote { return append([]MethodNote(nil), methodNotes...) }

var methodNotes = []MethodNote{
	{
		ID: "ANT-DIPOLE", Name: "half-wave dipole",
		Formula: "F = cos(pi/2 sin theta)/cos theta; G = 2.15 dBi",
		Range:   "thin straight wire of half a wavelength, sinusoidal current",
		Errs:    "exact for the thin wire; the gain is the regulatory 2.15 dBi, 0.0009 dB below the exact 2.15088 dBi",
		Source:  "standard antenna theory (e.g. Balanis, Antenna Theory, half-wave dipole), from memory; 2.15 dB: 47 CFR 2.1 and Radio Regulations no. 1.162, from memory",
		Check:   "TestHalfWaveDipoleDirectivity",
	},
	{
		ID: "ANT-SHORT", Name: "short dipole",
		Formula: "F = cos theta; G = 1.5",
		Range:   "wire much shorter than a wavelength",
		Errs:    "exact in the limit; a dipole of a tenth of a wavelength differs by less than 0.05 dB",
		Source:  "standard antenna theory (Hertzian dipole, e.g. Balanis, Antenna Theory), from memory",
		Check:   "TestSphereIntegrals",
	},
	{
		ID: "ANT-LOOP", Name: "small loop",
		Formula: "F = sin of the angle from the loop's axis; G = 1.5",
		Range:   "loop with a circumference much smaller than a wavelength",
		Errs:    "exact in the limit",
		Source:  "standard antenna theory (magnetic dipole, e.g. Balanis, Antenna Theory), from memory",
		Check:   "TestSphereIntegrals",
	},
	{
		ID: "ANT-MONOPOLE", Name: "monopole",
		Formula: "F = (cos(kh sin theta) - cos kh)/cos theta above the ground plane; G by integration over the upper half of space",
		Range:   "thin vertical wire of 0.001 to 10 wavelengths on perfect, unbounded ground, sinusoidal current",
		Errs:    "real ground lowers the field near the horizon; below the ground plane it gives nothing",
		Source:  "standard antenna theory (image of a dipole, e.g. Balanis, Antenna Theory), from memory",
		Check:   "TestMonopoleGain",
	},
	{
		ID: "3GPP-ELEMENT", Name: "two-beamwidth",
		Formula: "Ah = min(12 (phi/phi3)^2, Am); Av = min(12 ((theta+tilt)/theta3)^2, Am); A = min(Ah+Av, Am)",
		Range:   "main lobe of a sector antenna; Am is the front-to-back ratio",
		Errs:    "no side lobes of its own: outside the main lobe it may stand below the antenna",
		Source:  "3GPP TR 36.814 table A.2.1.1-2 and TR 38.901 table 7.3-1, from memory; same form in ITU-R M.2101 table 3; the tilt added to the elevation angle",
		Check:   "TestElementValues",
	},
	{
		ID: "F1336-OMNI", Name: "omni",
		Formula: "loss 12 (t/theta3)^2 to theta4, 12 - 10 log(k+1) to theta3, then 12 - 10 log((t/theta3)^-1.5 + k); k = 0.7; theta3 = 107.6 deg 10^(-G0/10)",
		Range:   "antennas round in azimuth",
		Errs:    "reference pattern for peak side lobes; single side lobes may pass it; the beamwidth from the gain differs by up to 6 % from the annex relation",
		Source:  "Recommendation ITU-R F.1336, recommends 2.1 (peak side-lobe pattern) and its rule for electrical tilt, from memory",
		Check:   "TestOmniValues",
	},
	{
		ID: "F1336-SECTOR", Name: "sector",
		Formula: "G = G0 + Gh(phi/phi3) + R Gv(theta/theta3), R = (Gh - Gh(180 deg))/(Gh(0) - Gh(180 deg)); ka = kp = kh = 0.7, kv = 0.3; theta3 = 31000 10^(-G0/10)/phi3",
		Range:   "sector antennas, 400 MHz to 6 GHz; beamwidth from the gain below 120 deg only",
		Errs:    "reference pattern for peak side lobes; single side lobes may pass it, those of antennas without side-lobe control more so; up to 0.13 dB above the published curve just before its step at the first side lobe",
		Source:  "Recommendation ITU-R F.1336, recommends 3.1.1, formulas and values as tested in an open implementation of the Recommendation; rule for electrical tilt from memory",
		Check:   "TestSectorValues",
	},
	{
		ID: "F699", Name: "dish",
		Formula: "G - 2.5e-3 (D phi/lambda)^2; 2 + 15 log(D/lambda); 32 - 25 log phi (D/lambda > 100) or 52 - 10 log(D/lambda) - 25 log phi; -10 or 10 - 10 log(D/lambda) beyond 48 deg",
		Range:   "dishes of 2.1 wavelengths and more",
		Errs:    "reference pattern for peak side lobes; single side lobes may pass it; within 0.03 dB of the published curve at 48 deg, where that steps",
		Source:  "Recommendation ITU-R F.699, recommends 2, from memory",
		Check:   "TestDishValues",
	},
	{
		ID: "M2101", Name: "active",
		Formula: "A = A_E + 10 log |sum w v|^2 for each beam; over all beams each array factor by its largest value at that distance from a main lobe or beyond",
		Range:   "flat panels of equal elements in equal steps, beams within the scan ranges",
		Errs:    "above every single beam: nulls are filled to the next side lobe, and tilt and scan are taken as independent (up to the cosine of the largest tilt in the width of the scan)",
		Source:  "Recommendation ITU-R M.2101-0, annex 1, tables 3 and 4, values as tested in an open implementation of the Recommendation; the envelope is a choice of this project",
		Check:   "TestActiveBoundsEveryBeam",
	},
	{
		ID: "TWO-CUT", Name: "sum of two cuts",
		Formula: "A = Ah(phi) + (1-w) Av(theta) + w (Av(180 deg - theta) - Av(180 deg)), w = |phi|/180 deg, within 0 and the largest loss of either cut",
		Range:   "patterns known by a horizontal and a vertical cut",
		Errs:    "exact on both cuts (their own least loss taken off); off them an approximation that may stand below or above the antenna",
		Source:  "common practice, no source; the weight is a choice of this project",
		Check:   "TestTwoCutsOnTheirCuts",
		Ours:    true,
	},
	{
		ID: "FULL-SPHERE", Name: "full sphere",
		Formula: "linear in dB in azimuth and in elevation between samples",
		Range:   "regular grids from pole to pole",
		Errs:    "follows the samples; a lobe narrower than the step may be missed",
		Source:  "common practice, no source",
		Check:   "TestSphereFollowsSamples",
		Ours:    true,
	},
	{
		ID: "FILE-CSV", Name: "plain CSV pattern",
		Formula: "cut, angle [deg], loss [dB] or gain [dBi]; or azimuth [deg], elevation [deg], gain [dBi]; azimuth clockwise from above",
		Range:   "two cuts or a full sphere",
		Errs:    "a vertical cut that is not symmetric is refused until its sense is said",
		Source:  "this program's own format",
		Check:   "TestCSVSenses",
		Ours:    true,
	},
	{
		ID: "FILE-NSMA", Name: "TIA-804-B / NSMA text",
		Formula: "TAG:,value records; points angle,magnitude,phase; gain = MDGAIN + magnitude",
		Range:   "AZ or H with EL or V cuts; the pattern nearest in frequency inside LOWFRQ to HGHFRQ",
		Errs:    "EL positive above the horizon, AZ and H clockwise from above; the sense of a V cut is refused until it is said",
		Source:  "NSMA recommendation WG16.99.050 (20 May 1999; same content as TIA-804-B), field table and annex C value second-hand, angle senses from memory",
		Check:   "TestNSMAAnnexC",
	},
	{
		ID: "FILE-BASTA", Name: "NGMN BASTA pattern JSON",
		Formula: "attenuations below the stated gain by theta and phi; SPCS_Polar, SPCS_CW, SPCS_CCW and SPCS_Geo",
		Range:   "one full sphere to a file",
		Errs:    "field names and coordinate systems are second-hand: the published schema was not at hand; an unknown coordinate system is refused",
		Source:  "NGMN Recommendation on Base Station Antenna Standards (BASTA) and its active-antenna white paper, field names second-hand",
		Check:   "TestBASTASenses",
	},
	{
		ID: "DIRECTIVITY", Name: "integrated directivity",
		Formula: "D = 4 pi / integral of the relative power over the sphere",
		Range:   "any pattern; called out where it lies more than 0.5 dB from the stated gain plus losses (envelopes and reference patterns excepted)",
		Errs:    "within 0.1 %",
		Source:  "definition of directivity (IEEE Std 145, from memory)",
		Check:   "TestSphereIntegrals",
	},
	{
		ID: "DISH-GAIN", Name: "aperture efficiency",
		Formula: "eta = G lambda^2/(pi D)^2",
		Range:   "round apertures; above 1 is refused",
		Errs:    "exact by definition",
		Source:  "FCC OET Bulletin 65, edition 97-01, equation 14, number as in FCC exhibit 0640-EX-ST-2004",
		Check:   "TestDishEfficiency",
	},
	{
		ID: "PANEL-LENGTH", Name: "length a beamwidth implies",
		Formula: "L = 0.886 lambda/theta3, theta3 in rad",
		Range:   "evenly fed panels of several wavelengths",
		Errs:    "short for tapered panels",
		Source:  "common practice, no source (half-power width of an evenly fed line)",
		Check:   "TestPanelLength",
	},
}
