package limits

import "math"

// Quantity is what a level limits.
type Quantity string

// The quantities of a limit table, with the SI unit of their levels.
const (
	E Quantity = "E" // electric field strength, V/m RMS
	H Quantity = "H" // magnetic field strength, A/m RMS
	B Quantity = "B" // magnetic flux density, T RMS
	S Quantity = "S" // power density, W/m2
)

// Effect is the harm a level guards against; it decides how fields add.
type Effect string

// Thermal levels add as powers, stimulation levels as field strengths.
const (
	Thermal     Effect = "thermal"
	Stimulation Effect = "stimulation"
)

// Region is the part of the body a level is for.
type Region string

const (
	WholeBody Region = "whole body"
	Local     Region = "local"
)

// Kind says whether a level is for the mean or for the peak of the field.
type Kind string

const (
	Mean Kind = "mean"
	Peak Kind = "peak"
)

// Over says how a field that varies over the body is compared.
type Over string

const (
	Largest  Over = "largest"
	BodyMean Over = "mean"
)

// Combine says how E, H and S of one source join where several have a level.
type Combine string

const (
	CombineLargest Combine = "largest"
	CombineAdd     Combine = "add"
)

// Row is one band of a limit table. Level = Coefficient * (f/FUnitHz)^Exponent
// in the SI unit of the quantity.
type Row struct {
	Class          string
	Quantity       Quantity
	FromHz, ToHz   float64
	Coefficient    float64 // in the SI unit of Quantity
	Exponent       float64
	FUnitHz        float64 // the frequency unit of the formula: 1e6 where f is in MHz
	None           bool    // a deliberate gap: the regulator sets no level here
	AverageS       float64 // averaging time in s; 0 = never averaged
	AverageExp     float64 // averaging time = AverageS * (f/AverageFUnitHz)^AverageExp
	AverageFUnitHz float64
	TimeAveraging  bool // a stay may be averaged
	OverBody       Over
	AreaM2         float64 // averaging area, 0 = none stated
	HasBrief       bool
	BriefA, BriefB float64 // incident energy BriefA + BriefB*sqrt(t) in J/m2, t in s
	BriefExp       float64 // that energy times (f/FUnitHz)^BriefExp; 0 = the same over the band
	Region         Region
	Effect         Effect
	Kind           Kind
	Combine        Combine
	Source         string
	Line           int // where the row stood in its table, for messages; 0 = built in code
}

// Group is a set of levels whose exposure ratios add over sources: one effect
// in one region for one kind of field. Groups are compared, never added.
type Group struct {
	Effect Effect
	Region Region
	Kind   Kind
}

// String names the group as it is printed: "thermal, whole body, mean".
func (g Group) String() string {
	return string(g.Effect) + ", " + string(g.Region) + ", " + string(g.Kind)
}

// MarshalText writes the group by its name.
func (g Group) MarshalText() ([]byte, error) { return []byte(g.String()), nil }

// About is the provenance of a table.
type About struct {
	Title, IssuedBy, Edition            string
	TranscribedBy, CheckedBy, CheckedOn string
}

// Spot is a level as printed in the source, typed in by whoever checked the
// transcription.
type Spot struct {
	Class       string
	Quantity    Quantity
	FrequencyHz float64
	Level       float64 // SI unit of Quantity
	HalfDigit   float64 // half a unit of the last printed digit, same unit
	Text        string  // as typed
	Line        int
}

// At is what holds for one class, one group and one frequency. Zero means that
// the table sets no level for that quantity there.
type At struct {
	Group Group
	// E in V/m, H in A/m (the lower of an H level and a B level over mu0 is not
	// formed here: B stays apart in T), B in T, S in W/m2.
	E, H, B, S    float64
	None          bool    // a row says on purpose that there is no level
	Combine       Combine // add where any row that holds says so
	OverBody      Over    // mean only where every row that holds says so
	AverageS      float64 // the shortest averaging time of the rows that hold, at this frequency
	TimeAveraging bool    // only where every row that holds allows it
	Rows          []int   // indices into Table.Rows of the rows that hold
}

// Level returns the row's level at fHz in the SI unit of its quantity, or +Inf
// where the row sets none. It does not ask whether the row holds there.
func (r Row) Level(fHz float64) float64 {
	if r.None {
		return math.Inf(1)
	}
	return LevelAt(r.Coefficient, r.Exponent, r.FUnitHz, fHz)
}

// AveragingTime returns the row's averaging time at fHz in s, 0 where the level
// is never averaged.
func (r Row) AveragingTime(fHz float64) float64 {
	return AveragingTime(r.AverageS, r.AverageExp, r.AverageFUnitHz, fHz)
}

// BriefEnergy returns the incident energy density in J/m2 that the row allows
// an exposure of tS seconds, and whether it says so at all: it does for
// durations from 0 to the averaging time, on rows with brief terms.
func (r Row) BriefEnergy(fHz, tS float64) (jPerM2 float64, ok bool) {
	if !r.HasBrief || !(tS >= 0) || tS > r.AveragingTime(fHz) {
		return 0, false
	}
	return BriefEnergy(r.BriefA, r.BriefB, r.BriefExp, r.FUnitHz, fHz, tS), true
}

// Holds reports whether the row's band holds fHz, edges included.
func (r Row) Holds(fHz float64) bool {
	return fHz >= r.FromHz*(1-edgeSlack) && fHz <= r.ToHz*(1+edgeSlack)
}

// Group returns the group the row belongs to.
func (r Row) Group() Group { return Group{r.Effect, r.Region, r.Kind} }

// edgeSlack is the relative distance within which a frequency meets a band edge:
// frequencies typed in different units may differ in their last bits.
const edgeSlack = 1e-12

// Covered reports whether the table speaks at this frequency: with a level, or
// with a deliberate gap.
func (a At) Covered() bool { return a.None || a.E > 0 || a.H > 0 || a.B > 0 || a.S > 0 }

// Problem is a fault or a warning about a table, with its place.
type Problem struct {
	Line    int    // Row.Line or Spot.Line; 0 = the table as a whole
	Column  string // header of the column, "" = the row as a whole
	Message string
}
