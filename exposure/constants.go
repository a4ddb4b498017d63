package exposure

import "math"

// Constants of the vacuum, CODATA 2022 recommended values (NIST). Air differs
// from vacuum by less than 0.04 % in speed and is taken as vacuum.
const (
	// Mu0 is the vacuum magnetic permeability in N/A2 (= H/m), standard
	// uncertainty 0.000 000 000 20e-6.
	Mu0 = 1.25663706127e-6
	// Eps0 is the vacuum electric permittivity in F/m, standard uncertainty
	// 0.000 000 0014e-12.
	Eps0 = 8.8541878188e-12
)

// Constants that follow from Mu0 and Eps0; they are computed, not typed in, so
// that E, H and S of a plane wave agree to rounding.
var (
	// C is the speed of light in m/s: 1/sqrt(mu0 eps0).
	C = 1 / math.Sqrt(Mu0*Eps0)
	// Z0 is the wave impedance of free space in ohm: sqrt(mu0/eps0), about
	// 376.73. The round figures 377 and 120 pi of older documents are 0.07 %
	// higher and are not used.
	Z0 = math.Sqrt(Mu0 / Eps0)
)

// Field factors of a reflecting ground; power density grows with their square.
const (
	// GroundFactorEPA is the field factor 1.6 (power 2.56) that OET Bulletin 65
	// takes from Gailey and Tell, EPA 520/6-85-011 (1985): a typical worst case
	// over real ground.
	GroundFactorEPA = 1.6
	// GroundFactorFull is the field factor 2 (power 4) of a perfect reflector.
	GroundFactorFull = 2.0
)
