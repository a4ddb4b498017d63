// Package survey turns what was measured into answers: the corrected field of
// each reading with its uncertainty, means over heights and over time, the
// value at full traffic, the exposure ratio and the verdict by a stated
// decision rule, and the prediction of the model beside it.
//
// The steps, and where their formulas stand:
//
//	port level to field, calibration   correct.go     RDG-PORT, RDG-CAL
//	three axes, heights                mean.go        RDG-AXES, RDG-MEAN
//	running mean over time             running.go     RDG-TIME
//	maximum traffic                    scale.go       RDG-GSM, RDG-UMTS, RDG-LTE, RDG-NR, RDG-SHARE
//	uncertainty budget                 budget.go      RDG-GUM
//	decision                           decide.go      RDG-RULE
//	prediction beside measurement      compare.go     RDG-DIFF
//
// The package reads no files and computes nothing twice: Evaluate returns one
// Result, and screen, JSON, workbook and figures print it. Silence is never
// compliance: what keeps a reading from being believed (a calibration past due,
// a frequency that its instrument does not reach, a field beyond overload)
// turns "within" into "not assessed", never the other way round.
package survey
