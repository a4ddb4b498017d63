// Package limits holds a user's own limit table: bands with power-law levels,
// by class of person, quantity, effect, region of the body and kind of field;
// who stands behind the table; and what holds at a frequency or over a band.
//
// The program carries no limits of its own. A table is what its user typed and
// has checked; New refuses one that contradicts itself and warns about one
// that nobody has confirmed.
//
// # Where the rules come from
//
//	rule                                  function                 source
//	level = coefficient * f^exponent      LevelAt                  ICNIRP 1998 Tables 6 and 7
//	averaging time, 68/f^1.05 min         AveragingTime            ICNIRP 1998, notes to Tables 6 and 7
//	incident energy of a brief exposure   BriefEnergy              ICNIRP 2020 Table 7
//	field factor of a pulse               PulseFieldFactor         26. BImSchV Annex 3
//	heating adds as squares               Thermal, At.Ratio        ICNIRP 1998 eqs. 9 and 10, OET 65
//	stimulation adds as fields            Stimulation, At.Ratio    ICNIRP 1998 eqs. 7 and 8
//	sum of S times t over averaging time  TimeAveragedRatio        OET 65 eq. 2
//
// # Edges
//
// A band holds from its lower to its upper edge, both included. Where two bands
// meet, both hold and the lower level counts; the shorter averaging time, the
// stricter comparison over the body and the stricter way of combining count
// with it. Published tables step at their edges, and some print overlapping
// edges while others leave one side open: the lower level is never too high.
// An edge is met within a relative 1e-12, so that 0.4 GHz and 400 MHz are one
// edge whatever their last bits.
//
// All exported methods of a Table are safe for concurrent use and cost a
// binary search; a Table must not be changed after New.
package limits
