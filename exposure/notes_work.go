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
		Range: "every plan", Errs: "aims 2e-4 below the limit", Ours: true,
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
}
