package limits

// MethodNote documents one rule for the `methods` command, the report's methods
// sheet and the test that holds every formula to a source. Its fields are those
// of antenna.MethodNote, to which it converts.
type MethodNote struct {
	ID      string `json:"id"`
	Name    string `json:"name"`
	Formula string `json:"formula"`
	Range   string `json:"range"`
	Errs    string `json:"errs"`
	Source  string `json:"source"`
	Check   string `json:"check"`
	Ours    bool   `json:"ours"`
}

// Methods lists the rules of this package.
func Methods() []MethodNote { return append([]MethodNote(nil), methodNotes...) }

var methodNotes = []MethodNote{
	{
		ID: "LIM-LEVEL", Name: "level at a frequency",
		Formula: "level = coefficient * (f/f_unit)^exponent",
		Range:   "inside the band of the row, edges included; where bands meet the lower level counts",
		Errs:    "never above the level of any row that holds",
		Source:  "the form of the frequency columns of ICNIRP 1998 (Health Physics 74:494-522), Tables 6 and 7, and of 47 CFR 1.1310, Table 1",
		Check:   "TestLevelsOfPublishedTables",
	},
	{
		ID: "LIM-AVERAGE", Name: "averaging time at a frequency",
		Formula: "T = t * (f/f_unit)^exponent, such as 68/f^1.05 min with f in GHz",
		Range:   "inside the band of the row",
		Errs:    "neither side; where bands meet the shorter time counts",
		Source:  "ICNIRP 1998 (Health Physics 74:494-522), notes to Tables 6 and 7; Safety Code 6 (2015), Tables 5 and 6, from memory",
		Check:   "TestAveragingTimesOfPublishedTables",
	},
	{
		ID: "LIM-BRIEF", Name: "incident energy of a brief exposure",
		Formula: "U = (a + b sqrt(t)) (f/f_unit)^exponent; for a level L averaged over 360 s, U = 0.36 L (0.05 + 0.95 sqrt(t/360)) kJ/m2",
		Range:   "durations from 0 to the averaging time",
		Errs:    "neither side",
		Source:  "ICNIRP 2020 (Health Physics 118:483-524), Table 7, from memory",
		Check:   "TestBriefEnergyOfAGuideline",
	},
	{
		ID: "LIM-PULSE", Name: "factors for pulses",
		Formula: "field factor 1.5 up to 100 kHz, 6.93 f^0.664 (f in MHz) to 10 MHz, 32 above; power factor 1000 above 10 MHz",
		Range:   "9 kHz to 300 GHz",
		Errs:    "32 squared is 1024: the power factor is the stricter",
		Source:  "26. BImSchV, Annex 3; Council Recommendation 1999/519/EC, Annex III",
		Check:   "TestPulseFactors",
	},
	{
		ID: "LIM-TIME", Name: "average over time",
		Formula: "r = sum(r_i t_i)/T",
		Range:   "exposures within one averaging time T; the rest of it without exposure",
		Errs:    "neither side",
		Source:  "FCC OET Bulletin 65 (Edition 97-01), eq. 2, from memory",
		Check:   "TestTwiceTheLimitForHalfTheTime",
	},
	{
		ID: "LIM-SUM", Name: "exposure ratio of one source",
		Formula: "heating: the largest of (E/E_L)^2, (H/H_L)^2, (B/B_L)^2, S/S_L; stimulation: the largest of E/E_L, H/H_L, B/B_L; or their sum where the table says so",
		Range:   "levels that hold at the source's frequency; ratios of sources add within a group of levels",
		Errs:    "on the high side: every level must be met, whichever quantity would suffice",
		Source:  "ICNIRP 1998 (Health Physics 74:494-522), eqs. 7 to 10, from memory; FCC OET Bulletin 65 (Edition 97-01), from memory",
		Check:   "TestSumOfRatios",
	},
}
