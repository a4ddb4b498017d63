package survey

import (
	"fmt"
	"math"
)

// CoverageFactor is k of the expanded uncertainty: a two-sided coverage of 95 %
// of a normal distribution.
const CoverageFactor = 1.96

// Distribution is that of an uncertainty component.
type Distribution string

// The distributions.
const (
	Normal      Distribution = "normal"
	Rectangular Distribution = "rectangular"
	Triangular  Distribution = "triangular"
	UShaped     Distribution = "u-shaped"
)

// Component is one line of an uncertainty budget.
type Component struct {
	Name         string
	Value        float64
	Percent      bool // Value is in % of the field, else in dB
	Distribution Distribution
	// Divisor makes Value a standard uncertainty; 0 = by the distribution. The k
	// of a stated expanded uncertainty is such a divisor.
	Divisor     float64
	Sensitivity float64
	Row         string // where it stands, "" = made in code
}

// DivisorOf returns what the half-width of a distribution is divided by to give
// its standard uncertainty: sqrt 3 for a rectangular, sqrt 6 for a triangular,
// sqrt 2 for a u-shaped one (arc sine: mismatch), 1 for a normal one.
//
// Source: [RDG-GUM].
func DivisorOf(d Distribution) float64 {
	switch d {
	case Rectangular:
		return math.Sqrt(3)
	case Triangular:
		return math.Sqrt(6)
	case UShaped:
		return math.Sqrt2
	}
	return 1
}

// DBFromPercent returns a standard uncertainty in dB from one in % of the field:
// 20 log10(1 + p/100). percent is at least 0. It errs on the low side of the
// lower half of the interval, 20 log10(1 - p/100), by p % of itself.
// Source: [RDG-GUM].
func DBFromPercent(percent float64) float64 { return 20 * math.Log10(1+percent/100) }

// FieldFactor returns the field ratio of a difference in dB: 10^(dB/20).
// Source: [RDG-GUM].
func FieldFactor(db float64) float64 { return math.Pow(10, db/20) }

// StandardDB returns the component's contribution to the combined standard
// uncertainty in dB: sensitivity times value over divisor.
func (c Component) StandardDB() float64 {
	divisor := c.Divisor
	if divisor == 0 {
		divisor = DivisorOf(c.Distribution)
	}
	sensitivity := c.Sensitivity
	if sensitivity == 0 {
		sensitivity = 1
	}
	u := c.Value / divisor
	if c.Percent {
		u = DBFromPercent(u)
	}
	return u * sensitivity
}

// CombinedDB returns the combined standard uncertainty in dB of independent
// components in dB: the root of the sum of their squares.
// Source: [RDG-GUM].
func CombinedDB(standardDB []float64) float64 {
	sum := 0.0
	for _, u := range standardDB {
		sum += u * u
	}
	return math.Sqrt(sum)
}

// Budget is the uncertainty budget of an instrument.
type Budget struct {
	Instrument     string       `json:"instrument"`
	Components     []BudgetLine `json:"components"`
	CombinedDB     float64      `json:"combined_standard_uncertainty_db"`
	CoverageFactor float64      `json:"coverage_factor"`
	ExpandedDB     float64      `json:"expanded_uncertainty_db"`
	UpperFactor    float64      `json:"field_factor_up"`
	LowerFactor    float64      `json:"field_factor_down"`
}

// BudgetLine is one component worked out.
type BudgetLine struct {
	Component    string       `json:"component"`
	Value        float64      `json:"value"`
	Unit         string       `json:"unit"` // dB or %
	Distribution Distribution `json:"distribution"`
	Divisor      float64      `json:"divisor"`
	Sensitivity  float64      `json:"sensitivity"`
	StandardDB   float64      `json:"standard_uncertainty_db"`
	Row          string       `json:"row,omitempty"`
}

// BudgetOf works out the budget of an instrument; ok is false where the
// instrument has no component.
func BudgetOf(in *Instrument) (b Budget, ok bool) {
	b = Budget{Instrument: in.ID, CoverageFactor: CoverageFactor, Components: []BudgetLine{}}
	var parts []float64
	for _, c := range in.Components {
		line := BudgetLine{Component: c.Name, Value: c.Value, Unit: "dB", Distribution: c.Distribution, Divisor: c.Divisor, Sensitivity: c.Sensitivity, StandardDB: c.StandardDB(), Row: c.Row}
		if c.Percent {
			line.Unit = "%"
		}
		if line.Divisor == 0 {
			line.Divisor = DivisorOf(c.Distribution)
		}
		if line.Sensitivity == 0 {
			line.Sensitivity = 1
		}
		b.Components = append(b.Components, line)
		parts = append(parts, line.StandardDB)
	}
	b.CombinedDB = CombinedDB(parts)
	b.ExpandedDB = CoverageFactor * b.CombinedDB
	b.UpperFactor, b.LowerFactor = FieldFactor(b.ExpandedDB), FieldFactor(-b.ExpandedDB)
	return b, len(parts) > 0
}

// String writes the budget's result: "1.16 dB combined, 2.27 dB expanded (k = 1.96)".
func (b Budget) String() string {
	return fmt.Sprintf("%.2f dB combined, %.2f dB expanded (k = %g)", b.CombinedDB, b.ExpandedDB, b.CoverageFactor)
}
