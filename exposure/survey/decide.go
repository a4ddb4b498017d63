package survey

import (
	"math"
	"strings"

	"example.org/standclear/exposure"
)

// ProbabilityAbove returns the probability that the true value lies above a
// limit when the best estimate lies marginDB below it (negative: above) and its
// standard uncertainty, normal in dB, is standardDB:
//
//	p = 1 - Phi(margin/u) = erfc(margin/(u sqrt 2))/2
//
// standardDB is above 0; at 0 the estimate is exact and p is 0 or 1. Prior
// knowledge of the field is not used.
// Source: [RDG-RULE].
func ProbabilityAbove(marginDB, standardDB float64) float64 {
	if standardDB <= 0 {
		if marginDB < 0 {
			return 1
		}
		return 0
	}
	return math.Erfc(marginDB/(standardDB*math.Sqrt2)) / 2
}

// RuleWords says a decision rule in words, as it is printed with each verdict.
func RuleWords(rule exposure.DecisionRule) string {
	if rule == exposure.RuleGuarded {
		return "guarded: the best estimate plus its expanded uncertainty (k = 1.96) is compared with the limits supplied"
	}
	return "simple: the best estimate is compared with the limits supplied, its uncertainty stated beside it"
}

// Judgement is a verdict and what it rests on.
type Judgement struct {
	Class         string           `json:"class"`
	ExposureRatio exposure.Number  `json:"exposure_ratio"`
	GovernedBy    string           `json:"governed_by,omitempty"`
	Verdict       exposure.Verdict `json:"verdict"`
	Reason        string           `json:"reason"`
	Rule          string           `json:"decision_rule"`
	// UpperRatio is the ratio of the best estimate plus its expanded uncertainty.
	UpperRatio *float64 `json:"ratio_plus_uncertainty,omitempty"`
	// ProbabilityAbove is the probability that the true ratio exceeds 1.
	ProbabilityAbove *float64 `json:"probability_above,omitempty"`
}

// decide makes the verdict. ratio returns the exposure ratio of the best
// estimate times a field factor and what governs it; expandedDB is nil where no
// uncertainty is stated; reasons are what forbids "within".
func decide(rule exposure.DecisionRule, class string, ratio func(factor float64) (float64, string), expandedDB *float64, reasons []string) Judgement {
	best, governed := ratio(1)
	j := Judgement{Class: class, ExposureRatio: exposure.Number(best), GovernedBy: governed, Rule: string(rule), Verdict: exposure.Within}
	if j.Rule == "" {
		j.Rule = string(exposure.RuleSimple)
	}
	if expandedDB != nil {
		upper, _ := ratio(FieldFactor(*expandedDB))
		j.UpperRatio = &upper
		if best > 0 {
			p := ProbabilityAbove(marginDB(best, upper, *expandedDB), *expandedDB/CoverageFactor)
			j.ProbabilityAbove = &p
		}
	}
	reasons = append([]string(nil), reasons...)
	if rule == exposure.RuleGuarded && expandedDB == nil {
		reasons = append(reasons, "the guarded rule needs an uncertainty, and none is stated for the instrument")
	}
	switch {
	case best > 1:
		j.Verdict = exposure.Above
	case len(reasons) > 0:
		j.Verdict = exposure.NotAssessed
	case rule == exposure.RuleGuarded && *j.UpperRatio > 1:
		j.Verdict = exposure.WithinGuardBand
	}
	j.Reason = strings.Join(reasons, "; ")
	return j
}

// marginDB returns how far, in dB of field, the best estimate lies below the
// limit. Ratios grow as a power of the field, whose exponent (2 thermal, 1
// stimulation) the two known ratios tell.
func marginDB(best, upper, expandedDB float64) float64 {
	perDB := 0.1 // log10 of the ratio over dB of field, thermal
	if expandedDB > 0 && upper > best {
		perDB = math.Log10(upper/best) / expandedDB
	}
	return -math.Log10(best) / perDB
}
