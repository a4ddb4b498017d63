package exposure

import (
	"example.org/standclear/antenna"
	"example.org/standclear/limits"
)

// Methods lists every method that a prediction can rest on: those of package
// antenna, of package limits, then those of this package.
func Methods() []antenna.MethodNote {
	list := antenna.Methods()
	for _, m := range limits.Methods() {
		list = append(list, antenna.MethodNote(m))
	}
	list = append(list, methodNotes...)
	list = append(list, nearFieldNotes...)
	list = append(list, workNotes...)
	return append(list, geodeticNotes...)
}

var methodNotes = []antenna.MethodNote{
	{
		ID: "CODATA-2022", Name: "vacuum constants",
		Formula: "c = 1/sqrt(mu0 eps0), Z0 = sqrt(mu0/eps0)",
		Range:   "vacuum; air is taken as vacuum",
		Errs:    "neither side; relative uncertainty 1.6e-10",
		Source:  "CODATA recommended values 2022 (NIST): mu0 and eps0",
		Check:   "TestConstantsAgainstCODATA",
	},
	{
		ID: "WAVE-1", Name: "wavelength",
		Formula: "lambda = c/f, k = 2 pi/lambda",
		Range:   "any frequency above 0",
		Errs:    "neither side",
		Source:  "SI Brochure, 9th edition (2019), exact c; textbook definition",
		Check:   "TestWavelength",
	},
	{
		ID: "WAVE-2", Name: "plane wave",
		Formula: "S = E H = E^2/Z0 = Z0 H^2, B = mu0 H",
		Range:   "plane waves, that is the far field; B = mu0 H everywhere in air",
		Errs:    "in a near field E^2/Z0 and Z0 H^2 part; the larger is used",
		Source:  "textbook; the pairs of 47 CFR 1.1310 table 1 agree within their printed digits",
		Check:   "TestPlaneWaveAgainstPrintedPairs",
	},
	{
		ID: "EIRP-1", Name: "EIRP and ERP",
		Formula: "EIRP = P G, ERP = EIRP/10^(2.15/10), dBd = dBi - 2.15",
		Range:   "any antenna",
		Errs:    "the exact half-wave dipole has 2.15088 dBi: 0.02 %",
		Source:  "47 CFR 2.1 and Radio Regulations no. 1.161 and 1.162, from memory",
		Check:   "TestEIRPAndERP",
	},
	{
		ID: "OET65-3", Name: "far field",
		Formula: "S = P G(direction)/(4 pi R^2)",
		Range:   "beyond 2 D^2/lambda from the antenna and outside lambda/(2 pi)",
		Errs:    "nearer than that: too high in front of a large antenna, possibly too low beside it",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equation 3, from memory",
		Check:   "TestFarFieldAgainstAmateurDistances",
	},
	{
		ID: "OET65-4", Name: "far field from EIRP",
		Formula: "S = EIRP/(4 pi R^2), R = sqrt(EIRP/(4 pi S))",
		Range:   "as the far field",
		Errs:    "as the far field",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equation 4, from memory",
		Check:   "TestFarFieldAgainstAmateurDistances",
	},
	{
		ID: "P525-1", Name: "free-space field strength",
		Formula: "E = sqrt(Z0 EIRP/(4 pi))/R",
		Range:   "as the far field",
		Errs:    "the recommendation prints sqrt(30 EIRP)/R, 0.035 % higher",
		Source:  "Recommendation ITU-R P.525, from memory",
		Check:   "TestFreeSpaceFieldAgainstP525",
	},
	{
		ID: "OET65-5", Name: "ground: field factor",
		Formula: "E' = k E, H' = k H, S' = k^2 S; k = 1.6 (EPA) or 2 (full reflection)",
		Range:   "one reflection from flat ground or a roof",
		Errs:    "k = 2 is the most that one flat reflector can do; k = 1.6 can be passed over a metal roof",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equations 5 to 10; Gailey and Tell, EPA 520/6-85-011 (1985)",
		Check:   "TestGroundFactorAgainstPrintedResults",
	},
	{
		ID: "GROUND-NONE", Name: "ground: none",
		Formula: "S' = S",
		Range:   "no reflecting surface near",
		Errs:    "too low where anything reflects: one reflection can raise S fourfold",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equation 5, for the fourfold rise, from memory",
		Check:   "TestGroundFactorAgainstPrintedResults",
	},
	{
		ID: "REGION-1", Name: "reactive near field",
		Formula: "lambda/(2 pi) from the nearest point of the radiating body",
		Range:   "electrically small antennas; a customary figure for others",
		Errs:    "the reactive field of a large antenna can reach further",
		Source:  "textbook: Balanis, Antenna Theory, 3rd edition (2005), chapters 2 and 4, from memory",
		Check:   "TestRegionDistances",
	},
	{
		ID: "REGION-2", Name: "far-field distance",
		Formula: "2 D^2/lambda",
		Range:   "antennas larger than a wavelength",
		Errs:    "phase error of 22.5 deg across the aperture at that distance",
		Source:  "textbook: Balanis, Antenna Theory, 3rd edition (2005), section 2.2.4, from memory",
		Check:   "TestRegionDistances",
	},
	{
		ID: "OET65-11", Name: "dish: surface of the aperture",
		Formula: "S = 4 P/A",
		Range:   "at the reflector's rim plane",
		Errs:    "an upper figure; earth-station filings use 2 P/A within the main reflector and P/A to the ground",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equation 11; printed result in FCC exhibit 0640-EX-ST-2004",
		Check:   "TestApertureAgainstEarthStationExhibits",
	},
	{
		ID: "OET65-12", Name: "dish: extent of the near field",
		Formula: "D^2/(4 lambda)",
		Range:   "circular apertures larger than a wavelength",
		Errs:    "where the last axial maximum of a uniform aperture lies",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equation 12; printed results in FCC exhibit SES-LIC-INTR2009-07567",
		Check:   "TestApertureAgainstEarthStationExhibits",
	},
	{
		ID: "OET65-13", Name: "dish: near field on the axis",
		Formula: "S = 16 eta P/(pi D^2)",
		Range:   "on the axis to D^2/(4 lambda)",
		Errs:    "exact for the last maximum of a uniform aperture (eta = 1); a strongly tapered one can exceed it: a page for radio amateurs takes 7.5 P/A",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equation 13; printed results in FCC exhibit SES-LIC-INTR2009-07567",
		Check:   "TestApertureAgainstEarthStationExhibits",
	},
	{
		ID: "OET65-14", Name: "dish: gain and aperture efficiency",
		Formula: "eta = G lambda^2/(pi^2 D^2)",
		Range:   "circular apertures",
		Errs:    "neither side",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equations 14 and 15; printed result in FCC exhibit 0640-EX-ST-2004",
		Check:   "TestApertureAgainstEarthStationExhibits",
	},
	{
		ID: "OET65-16", Name: "dish: start of the far field",
		Formula: "0.6 D^2/lambda",
		Range:   "circular apertures larger than a wavelength",
		Errs:    "the far-field formula overstates a uniform aperture there by 16 %",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equation 16; printed results in FCC exhibits SES-LIC-INTR2009-07567 and SES-MOD-20091124-01493",
		Check:   "TestApertureAgainstEarthStationExhibits",
	},
	{
		ID: "OET65-17", Name: "dish: transition region on the axis",
		Formula: "S = S_nf R_nf/R",
		Range:   "on the axis between D^2/(4 lambda) and 0.6 D^2/lambda",
		Errs:    "up to 14 % below the closed form of a uniform aperture (at 1.35 times the near-field extent), above it from twice that extent; meets the far field only to 2.8 %",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), equation 17, from memory",
		Check:   "TestApertureAgainstUniformClosedForm",
	},
	{
		ID: "OET65-OFF", Name: "dish: off the axis",
		Formula: "S = S_axis/100 at least one diameter off the axis",
		Range:   "near field and transition region",
		Errs:    "an engineering bound, not a proof: spillover and edge diffraction can pass it",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), text below equation 18; used in FCC exhibit SES-LIC-INTR2009-07567",
		Check:   "TestApertureAgainstEarthStationExhibits",
	},
	{
		ID: "OET65-ROT", Name: "rotating antenna",
		Formula: "mean S times beamwidth/scan angle (far), times D/(R scan angle) (near)",
		Range:   "mean levels only",
		Errs:    "leaves out what lies outside the 3 dB beam",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), section on rotating antennas (equations 22 and 23), from memory",
		Check:   "TestRotationFactors",
	},
	{
		ID: "RATIO-1", Name: "exposure ratio, heating",
		Formula: "r = sum over sources of the largest of (E/E_L)^2, (H/H_L)^2, S/S_L (their sum where the limit row says add)",
		Range:   "limits against heating; each group of effect, region and kind alone",
		Errs:    "powers add: fields of one frequency that happen to be in phase can be higher, unless the rows share a signal",
		Source:  "ICNIRP 1998, Health Physics 74(4):494-522, equations 9 and 10; FCC OET Bulletin 65, edition 97-01 (1997), multiple sources; both from memory",
		Check:   "TestRatioSumsOverSources",
	},
	{
		ID: "RATIO-2", Name: "exposure ratio, stimulation",
		Formula: "r = sum over sources of the largest of E/E_L, H/H_L, B/B_L",
		Range:   "limits against nerve stimulation, up to 10 MHz",
		Errs:    "phases are ignored: an upper figure",
		Source:  "ICNIRP 1998, Health Physics 74(4):494-522, equations 7 and 8, from memory",
		Check:   "TestRatioSumsOverSources",
	},
	{
		ID: "SIGNAL-1", Name: "rows that share a signal", Ours: true,
		Formula: "E = sum |E_i|, H = sum |H_i| over the rows of one signal and frequency",
		Range:   "bays of one broadcast antenna, simulcast, split feeds",
		Errs:    "upper: the fields are taken as in phase everywhere",
		Source:  "a choice of this project: the triangle inequality",
		Check:   "TestSharedSignalAddsInAmplitude",
	},
	{
		ID: "BODY-1", Name: "body mean",
		Formula: "the integral of each source's ratio over the body's height over that height",
		Range:   "only where every limit row that holds says over body = mean",
		Errs:    "neither side; the largest over the body is never lower",
		Source:  "FCC OET Bulletin 65, edition 97-01 (1997), spatial averaging over the body, from memory",
		Check:   "TestBodyMeanNeverAboveLargest",
	},
	{
		ID: "BOUND-1", Name: "keep-out line", Ours: true,
		Formula: "recursive division of the body volume over a surface with lower and upper bounds of the ratio in each cell",
		Range:   "every pattern and method with bounds",
		Errs:    "outer line: at most the resolution too far out; never inside the model's own boundary",
		Source:  "a choice of this project: branch and bound with interval arithmetic (Moore, Interval Analysis, 1966, for the arithmetic)",
		Check:   "TestNothingAboveOutsideNothingBelowInside",
	},
	{
		ID: "DIST-1", Name: "keep-out distance", Ours: true,
		Formula: "the outermost crossing of ratio 1 along a ray, or the six extents of the smallest box that holds the boundary",
		Range:   "as the keep-out line",
		Errs:    "outward, by at most the bracket that is printed with it",
		Source:  "a choice of this project: the same division in one or three dimensions",
		Check:   "TestDistanceIsOutermostCrossing",
	},
}
