package survey

import (
	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
)

// Methods lists every method that a result can rest on: those of a prediction,
// then those of readings.
func Methods() []antenna.MethodNote { return append(exposure.Methods(), methodNotes...) }

var methodNotes = []antenna.MethodNote{
	{
		ID: "RDG-PORT", Name: "field from a port level",
		Formula: "E = sqrt(P R) 10^((AF + a)/20), R = 50 ohm: E[dBuV/m] = P[dBm] + 106.99 + AF + a",
		Range:   "receivers matched to 50 ohm",
		Errs:    "neither side; mismatch belongs in the uncertainty budget",
		Source:  "definition of the antenna factor (CISPR 16-1-6, from memory); 107 dB is 10 log10(50) + 90, rounded, as measurement handbooks print it",
		Check:   "TestPortLevel",
	},
	{
		ID: "RDG-AF", Name: "antenna factor from gain",
		Formula: "AF = 10 log10(4 pi Z0/(R lambda^2)) - G = 20 log10(f/MHz) - 29.77 - G",
		Range:   "far field, matched polarization, 50 ohm",
		Errs:    "neither side",
		Source:  "textbook relation between effective area and antenna factor, printed as 20 log f - G - 29.79 with 377 ohm and c = 3e8 m/s, from memory",
		Check:   "TestAntennaFactorFromGain",
	},
	{
		ID: "RDG-CAL", Name: "calibration factor",
		Formula: "E = factor * reading; between two lines of a certificate linear in log f; over a band the largest",
		Range:   "the range of the certificate: outside it nothing is assessed",
		Errs:    "over a band on the high side",
		Source:  "common practice, no source; the largest over a band is a choice of this project",
		Check:   "TestCalibrationByFrequency",
		Ours:    true,
	},
	{
		ID: "RDG-AXES", Name: "three axes",
		Formula: "E^2 = Ex^2 + Ey^2 + Ez^2, before anything is averaged",
		Range:   "three readings of one spot with one axis each",
		Errs:    "high where an axis below the floor counts as the floor",
		Source:  "definition of the magnitude of a vector",
		Check:   "TestAxesAddBeforeAveraging",
	},
	{
		ID: "RDG-MEAN", Name: "mean over heights",
		Formula: "E = sqrt(mean of E^2)",
		Range:   "readings of one spot in one band; 1, 3 (1.1, 1.5, 1.7 m), 6 or 20 heights are usual",
		Errs:    "neither side for the heights measured; the largest is printed beside it",
		Source:  "ECC Recommendation (02)04 (revised 2003 and 2007) and EN 50492, from memory",
		Check:   "TestMeanOverHeights",
	},
	{
		ID: "RDG-TIME", Name: "largest running mean",
		Formula: "E(t) = sqrt(sum E_i^2 d_i / sum d_i) over (t - T, t], d_i the time since the sample before; the largest over t",
		Range:   "logs in order of time; steps above three usual steps are gaps, of which one step counts; windows of which less than half was recorded are left out and counted",
		Errs:    "neither side without gaps; with gaps the mean is over what was recorded",
		Source:  "averaging over any interval as ICNIRP 2020 (Health Physics 118:483-524) asks it; treatment of gaps is a choice of this project",
		Check:   "TestRunningMeanAgainstDirectSum",
		Ours:    true,
	},
	{
		ID: "RDG-GSM", Name: "GSM broadcast carrier to maximum",
		Formula: "E_max = E_BCCH sqrt(n)",
		Range:   "n carriers of equal power",
		Errs:    "high: traffic carriers transmit with power control and pauses",
		Source:  "ECC Recommendation (02)04 and EN 50492, form from memory",
		Check:   "TestScaleFactors",
	},
	{
		ID: "RDG-UMTS", Name: "UMTS pilot to maximum",
		Formula: "E_max = E_CPICH sqrt(P_max/P_CPICH)",
		Range:   "a code-selective reading of the pilot",
		Errs:    "neither side for the share stated",
		Source:  "EN 50492, form from memory",
		Check:   "TestScaleFactors",
	},
	{
		ID: "RDG-LTE", Name: "LTE reference signal to maximum",
		Formula: "E_max = E_RS sqrt(12 N_RB/BF), E_RS of one resource element, powers summed over antenna ports",
		Range:   "12 N_RB = 72, 180, 300, 600, 900, 1200 subcarriers for 1.4, 3, 5, 10, 15, 20 MHz",
		Errs:    "neither side at full load",
		Source:  "IEC 62232, form from memory; resource blocks of 3GPP TS 36.101 table 5.6-1, from memory",
		Check:   "TestScaleFactors",
	},
	{
		ID: "RDG-NR", Name: "NR synchronization block to maximum",
		Formula: "E_max = E_SSB sqrt(12 N_RB F_beam F_TDD F_PR), E_SSB of one resource element",
		Range:   "F_beam the gain of the traffic beam over that of the block's beam toward the point",
		Errs:    "as the factors stated",
		Source:  "IEC 62232:2022, form from memory",
		Check:   "TestScaleFactors",
	},
	{
		ID: "RDG-SHARE", Name: "power share to maximum",
		Formula: "E_max = E sqrt(1/share)",
		Range:   "a known share of the full power on air during the reading",
		Errs:    "neither side for the share stated",
		Source:  "power proportion, elementary",
		Check:   "TestScaleFactors",
	},
	{
		ID: "RDG-GUM", Name: "uncertainty of a reading",
		Formula: "u = c a/d, d = k, sqrt 3, sqrt 6 or sqrt 2; u_c = sqrt(sum u^2); U = 1.96 u_c, in dB; % of the field by 20 log10(1 + p/100)",
		Range:   "independent components; those of one instrument do not shrink by averaging its readings",
		Errs:    "% components on the low side of the lower half of the interval",
		Source:  "JCGM 100:2008 (GUM), 4.3 and 5.1.2; sqrt 2 for mismatch after 4.3 (arc sine), from memory",
		Check:   "TestBudget",
	},
	{
		ID: "RDG-RULE", Name: "decision rule",
		Formula: "simple: ratio <= 1; guarded: ratio of E plus U <= 1; p = erfc(margin/(u sqrt 2))/2",
		Range:   "normal distribution in dB, no prior knowledge",
		Errs:    "guarded on the side of caution",
		Source:  "JCGM 106:2012, 8.2 and 8.3.2, from memory",
		Check:   "TestGuardBandProbabilities",
	},
	{
		ID: "RDG-DIFF", Name: "prediction beside measurement",
		Formula: "difference = 20 log10(E_measured/E_predicted); unexplained above U = 1.96 sqrt(u_m^2 + u_p^2); u_p by first-order propagation of the standard uncertainties of the antenna rows, those of one housing fully correlated",
		Range:   "readings with a predicted field",
		Errs:    "u_p covers the inventory's figures, not reflections that are not modelled",
		Source:  "JCGM 100:2008 (GUM), 5.1.2, E_n-like comparison; frequency filter of 1 % is a choice of this project",
		Check:   "TestDemoReasonIsFound",
		Ours:    true,
	},
	{
		ID: "RDG-SUM", Name: "sum over bands at a place",
		Formula: "E = sqrt(sum E^2), ratio = sum of ratios over bands; of a wide reading only the rest that narrow ones in its band leave, sqrt(E_wide^2 - sum E_narrow^2), against the lowest level of the band",
		Range:   "readings of one place and class",
		Errs:    "the rest errs high by its lowest level, and either way by the uncertainty of a difference",
		Source:  "ICNIRP 2020 (Health Physics 118:483-524), sum over frequencies; overlap is a choice of this project",
		Check:   "TestPlacesAddOverBands",
		Ours:    true,
	},
}
