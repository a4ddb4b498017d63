package antenna

import "math"

// Gain is a power gain over the isotropic radiator as a plain ratio. Decibels
// enter and leave only through the constructors and methods that name their
// reference.
type Gain float64

// DipoleGainDB is the gain of a half-wave dipole by which dBd and ERP are
// defined in regulation: 2.15 dB (47 CFR 2.1, Radio Regulations no. 1.162; the
// exact thin dipole has 2.15088 dBi).
const DipoleGainDB = 2.15

// GainFromDBi returns the gain of a level in dB over isotropic.
func GainFromDBi(dBi float64) Gain { return Gain(math.Pow(10, dBi/10)) }

// GainFromDBd returns the gain of a level in dB over a half-wave dipole.
func GainFromDBd(dBd float64) Gain { return GainFromDBi(dBd + DipoleGainDB) }

// DBi returns the gain in dB over isotropic.
func (g Gain) DBi() float64 { return 10 * math.Log10(float64(g)) }

// DBd returns the gain in dB over a half-wave dipole.
func (g Gain) DBd() float64 { return g.DBi() - DipoleGainDB }
