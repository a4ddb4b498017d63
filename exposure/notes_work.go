package exposure

import "example.org/standclear/antenna"

// workNotes documents the methods of the work plan.
var workNotes = []antenna.MethodNote{
	{
		ID: "STAY", Name: "length of a stay", Formula: "t = T (1 - r0)/(r - r0)",
		Range:  "constant ratios r > 1 during the stay and r0 < 1 for the rest of the averaging time T; only where the limit rows allow averaging",
		Errs:   "exact for constant ratios",
		Source: "FCC OET Bulletin 65 (97-01), equation 2: the sum of exposure times density over the averaging time, from memory",
		Check:  "TestStayTimeTwiceTheLimitForHalfTheTime",
	},
	{
		ID: "PLAN-LEAST", Name: "least power given up", Formula: "maximize the sum of P_i x_i with the sum of r_i x_i at most 1 at every place, 0 <= x_i <= 1",
		Range:  "thermal ratios are linear in power; shared signals and stimulation are bounded from above by linear functions",
		Errs:   "gives up more than need be where signals are shared; the engine's own answer with the plan decides",
		Source: "linear programming, Dantzig 1963; the fractional knapsack, Dantzig 1957",
		Check:  "TestLeastPowerIsTheFractionalKnapsack",
	},
	{
		ID: "PLAN-CHECK", Name: "plans are asked of the engine again", Formula: "total exposure ratio with the reduced powers at most 1",
		Range: "every plan", Errs: "aims 0.2 % below the limit", Ours: true,
		Source: "this project",
		Check:  "TestPlansHoldForSharedSignalsAndStimulation",
	},
	{
		ID: "COVERAGE", Name: "distance with coverage", Formula: "one-sided quantile of the boundary's crossing over random inputs",
		Range:  "power and gain normal in dB; tilt, azimuth and position normal; rows of one housing share the last three; small turns and shifts (second order)",
		Errs:   "follows the line through the farthest point: exact to first order in the inputs; never nearer than the distance itself",
		Source: "JCGM 101:2008, propagation of distributions, clauses 6.4.7 and 7.9; the line is this project's choice",
		Check:  "TestCoverageOfOneSourceIsLognormal", Ours: true,
	},
	{
		ID: "STAY-BRIEF", Name: "length of a stay under brief levels", Formula: "the longest t with (r - r0) max(t/T, S_L t/U(t)) at most 1 - r0",
		Range:  "rows with incident energy U(t) = a + b sqrt(t) for stays shorter than the averaging time",
		Errs:   "shorter than need be: the strictest brief row of any source counts for the whole ratio",
		Source: "ICNIRP 2020, Health Physics 118(5):483-524, table 7, for U(t); the bound is this project's choice",
		Check:  "TestStayIsCutDownByBriefLevels", Ours: true,
	},
	{
		ID: "BARRIER", Name: "schedule of barriers", Formula: "length of each area's keep-out line, apart where it runs along the surface's edge",
		Range:  "every class and surface; along the edge: within one and a half times the resolution of the outline",
		Errs:   "the line encloses the model's boundary, so lengths and areas are on the large side",
		Source: "this project", Check: "TestScheduleOfARoundArea", Ours: true,
	},
	{
		ID: "MEASURE-1", Name: "where to measure first", Formula: "u^2 = sum over inputs of ((L(+1) - L(-1))/2)^2, L the ratio in dB one standard uncertainty up and down",
		Range:  "small uncertainties; rows of one housing move together; the instrument reads from a tenth of the lowest level to twice the larger of level and prediction",
		Errs:   "first order in the inputs",
		Source: "JCGM 100:2008, 5.1.2 and 5.1.3 note 2; the instrument's range is this project's choice",
		Check:  "TestRatioUncertaintyOfOneSource",
	},
	{
		ID: "ASSUME-1", Name: "worth of an assumption", Formula: "10 log10 of the ratio with the other choice over the ratio as assessed",
		Range:  "one assumption at a time; conservative: field factor 2, full power all the time, larger loss of two cuts; best estimate: direct ray, no side-lobe floor, power as stated",
		Errs:   "neither set bounds the truth: patterns and positions are taken as stated in both",
		Source: "this project", Check: "TestWorthOfGroundAndDuty", Ours: true,
	},
}
