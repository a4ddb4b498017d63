package exposure

// Options of a model, set once.
type Options struct {
	// Workers is the number of goroutines a long question may use; 0 = one for
	// each processor. Answers do not depend on it.
	Workers int
	// Progress, when not nil, is told the share of the work that is done; it may
	// be called from several goroutines.
	Progress func(done float64)
}

// DistanceQuery asks for keep-out distances.
type DistanceQuery struct {
	Classes []string // nil = every class of the limit table
	// Direction asks for the outermost crossing along one ray instead of the
	// six extents.
	Direction           *RayDirection
	Rows, Housings, All bool // which; all false = all true
	// Coverage, when not nil, adds to each distance the one that covers a share
	// of what the data's standard uncertainties make possible.
	Coverage *Coverage
}

// RayDirection is a direction in space: azimuth clockwise from true north,
// elevation above the horizon, in rad.
type RayDirection struct{ AzimuthRad, ElevationRad float64 }

// ZoneQuery asks for boundaries.
type ZoneQuery struct {
	Surfaces    []string // nil = every surface
	Classes     []string // nil = every class of the limit table
	ResolutionM float64  // 0 = 0.05
	Share       float64  // of the limit, 0 = 1
	// Level asks for a field level instead of the limits: V/m of E or W/m2 of S.
	LevelEVPerM, LevelSWPerM2 float64
	Section                   *Section // a vertical section instead of surfaces
}

// AssessOptions are the choices of an assessment.
type AssessOptions struct {
	Program     string  // name and version, printed in every output
	ResolutionM float64 // of the boundaries, 0 = 0.05
	// Coverage, when not nil, adds to each distance of a housing and of
	// everything together the one that covers a share of what the data's standard
	// uncertainties make possible.
	Coverage *Coverage
}
