package exposure

import (
	"encoding/json"
	"math"
)

// Verdict is the answer for one class at one place.
type Verdict string

// The verdicts. "within" and "above" are always meant within or above the
// limits supplied.
const (
	Within          Verdict = "within"
	WithinGuardBand Verdict = "within, inside the guard band"
	Above           Verdict = "above"
	NotAssessed     Verdict = "not assessed"
)

// Number is a float64 that may be infinite; JSON has no infinity, so it is
// written as null there.
type Number float64

// MarshalJSON writes the number, or null where it is infinite.
func (n Number) MarshalJSON() ([]byte, error) {
	f := float64(n)
	if math.IsInf(f, 0) || math.IsNaN(f) {
		return []byte("null"), nil
	}
	return json.Marshal(f)
}

// UnmarshalJSON reads null as +Inf.
func (n *Number) UnmarshalJSON(b []byte) error {
	if string(b) == "null" {
		*n = Number(math.Inf(1))
		return nil
	}
	return json.Unmarshal(b, (*float64)(n))
}

// PointResult is the field at one place.
type PointResult struct {
	ID            string         `json:"id"`
	XM            float64        `json:"x_m"`
	YM            float64        `json:"y_m"`
	ZM            float64        `json:"z_m"`
	HeightM       float64        `json:"height_m"`        // height above z at which E, H and S hold: that of the largest ratio over the body
	Class         string         `json:"class,omitempty"` // who may be there
	EVPerM        Number         `json:"e_v_per_m"`       // root-sum-square over sources
	HAPerM        Number         `json:"h_a_per_m"`       // root-sum-square over sources
	SWPerM2       Number         `json:"s_w_per_m2"`      // sum over sources of the larger of E2/Z0 and Z0 H2
	Ratios        []ClassRatio   `json:"ratios"`
	Contributions []Contribution `json:"contributions"`
	// Unlisted counts the contributions left out of the list of a very large
	// site, each below 0.001 for every class; they are in every sum.
	Unlisted int    `json:"contributions_not_listed,omitempty"`
	Place    *Place `json:"-"`
}

// ClassRatio is the exposure ratio of one class at one place.
type ClassRatio struct {
	Class         string       `json:"class"`
	ExposureRatio Number       `json:"exposure_ratio"` // of the covered sources
	Covered       bool         `json:"covered"`
	Verdict       Verdict      `json:"verdict"`
	Reason        string       `json:"reason"`
	GovernedBy    string       `json:"governed_by"` // the group of levels that is largest
	Groups        []GroupRatio `json:"groups,omitempty"`
	// GroundFlips lists the field factors (1.6, 2) at which the verdict would
	// change; filled where the site's ground is "none".
	GroundFlips []float64 `json:"changes_at_ground_factors,omitempty"`
}

// GroupRatio is the exposure ratio of one group of levels.
type GroupRatio struct {
	Group         string `json:"group"`
	ExposureRatio Number `json:"exposure_ratio"`
}

// Contribution is one source's part of the field at a place, at the height of
// the point result.
type Contribution struct {
	Antenna     string              `json:"antenna"`
	FrequencyHz float64             `json:"frequency_hz"`
	Method      string              `json:"method"`
	EVPerM      Number              `json:"e_v_per_m"`
	HAPerM      Number              `json:"h_a_per_m"`
	SWPerM2     Number              `json:"s_w_per_m2"`
	Ratios      []ContributionRatio `json:"ratios"`
	// EIRPAtLimitW is, for a source of unknown power, the EIRP at which its own
	// ratio reaches 1 for the class that is reached first.
	EIRPAtLimitW Number `json:"eirp_at_limit_w,omitempty"`
	Unknown      bool   `json:"power_unknown,omitempty"`
	// Chain of the calculation, for a reviewer: distance and angles from the
	// source's centre, the pattern's loss there and the power used.
	DistanceM     float64 `json:"distance_m"`
	AzimuthDeg    float64 `json:"azimuth_from_boresight_deg"`
	ElevationDeg  float64 `json:"elevation_from_horizon_deg"` // in the antenna's frame
	PatternLossDB float64 `json:"pattern_loss_db"`
	PowerW        float64 `json:"power_w"` // mean power used, W
	GroundFactor  float64 `json:"ground_field_factor"`
}

// ContributionRatio is a source's own exposure ratio for one class; its terms
// sum to the class's ratio where no signal is shared.
type ContributionRatio struct {
	Class         string `json:"class"`
	ExposureRatio Number `json:"exposure_ratio"`
	Covered       bool   `json:"covered"`
}

// Distance is a keep-out distance.
type Distance struct {
	Antenna      string  `json:"antenna,omitempty"`
	Housing      string  `json:"housing,omitempty"`
	All          bool    `json:"all,omitempty"`
	Class        string  `json:"class"`
	Kind         string  `json:"kind"` // ray or extent
	Direction    string  `json:"direction"`
	AzimuthDeg   float64 `json:"azimuth_deg"`
	ElevationDeg float64 `json:"elevation_deg"`
	DistanceM    float64 `json:"distance_m"`
	BracketM     float64 `json:"bracket_m"` // the boundary lies at most this much nearer
	GovernedBy   string  `json:"governed_by"`
	Alone        bool    `json:"alone"`   // the row or housing is taken alone
	Verdict      Verdict `json:"verdict"` // "above": a boundary exists; "within": nowhere; "not assessed"
	Reason       string  `json:"reason,omitempty"`
	// Covered is the distance with the coverage asked; nil where none was.
	Covered *CoveredDistance `json:"coverage,omitempty"`

	end *farEnd // where the boundary reaches farthest, nil where there is none
}

// CoveredDistance is a one-sided quantile of a distance over the standard
// uncertainties of the antenna table.
type CoveredDistance struct {
	Probability float64     `json:"probability"`
	DistanceM   float64     `json:"distance_m"`
	LowM        float64     `json:"interval_low_m"` // 95 % confidence interval of the quantile
	HighM       float64     `json:"interval_high_m"`
	Trials      int         `json:"trials"`
	Seed        uint64      `json:"seed"`
	Inputs      []InputPart `json:"inputs"` // what each input alone contributes, largest first
}

// InputPart is the standard deviation of a distance when one input alone varies.
type InputPart struct {
	Input      string  `json:"input"` // power and gain, tilt, azimuth or position
	DeviationM float64 `json:"deviation_m"`
}

// Zone is the boundary of one class on one surface or section. Polygons are in
// site metres (on a section: along it, and height).
type Zone struct {
	Surface       string       `json:"surface"`
	Section       *Section     `json:"section,omitempty"`
	Through       string       `json:"through,omitempty"` // the housing a section was laid through
	Class         string       `json:"class"`
	Share         float64      `json:"share"`
	Level         string       `json:"level,omitempty"` // "10 V/m" where a field level was asked in place of a share
	OuterAreaM2   float64      `json:"outer_area_m2"`
	InnerAreaM2   float64      `json:"inner_area_m2"`
	SurfaceAreaM2 float64      `json:"surface_area_m2"`
	ResolutionM   float64      `json:"resolution_m"`
	MaxRatioLower Number       `json:"max_ratio_lower"`
	MaxRatioUpper Number       `json:"max_ratio_upper"`
	MaxAt         [3]float64   `json:"max_at_m"` // where max_ratio_lower is reached
	Covered       bool         `json:"covered"`
	Verdict       Verdict      `json:"verdict"`
	Reason        string       `json:"reason,omitempty"`
	Outer         MultiPolygon `json:"outer"`
	Inner         MultiPolygon `json:"inner"`
	// SimplifiedM2 is the area that straightening the lines added to the outer
	// and took from the inner polygon; both are part of the areas above.
	OuterAddedM2   float64 `json:"outer_added_m2"`
	BandM          float64 `json:"band_m"` // mean width between the outer and the inner line
	InnerRemovedM2 float64 `json:"inner_removed_m2"`
	// LowestM and HighestM bound the heights, above the datum, at which the
	// ratio may exceed the share over the surface.
	Averaging string  `json:"averaging"` // peak or mean: how the body was compared
	FromM     float64 `json:"from_m"`
	ToM       float64 `json:"to_m"`
	Cells     int     `json:"cells"` // boxes that were bounded: the effort spent
}

// Section is a vertical plane through the site.
type Section struct {
	X1M    float64 `json:"x1_m"`
	Y1M    float64 `json:"y1_m"`
	X2M    float64 `json:"x2_m"`
	Y2M    float64 `json:"y2_m"`
	FromZM float64 `json:"from_z_m"`
	ToZM   float64 `json:"to_z_m"`
}

// MultiPolygon is a set of polygons, each an outer ring (counter-clockwise) and
// its holes (clockwise), every ring closed. It is written as GeoJSON.
type MultiPolygon [][]Ring

// MarshalJSON writes a GeoJSON MultiPolygon (RFC 7946, section 3.1.7).
func (p MultiPolygon) MarshalJSON() ([]byte, error) {
	c := [][]Ring(p)
	if c == nil {
		c = [][]Ring{}
	}
	return json.Marshal(struct {
		Type        string   `json:"type"`
		Coordinates [][]Ring `json:"coordinates"`
	}{"MultiPolygon", c})
}

// UnmarshalJSON reads a GeoJSON MultiPolygon.
func (p *MultiPolygon) UnmarshalJSON(b []byte) error {
	var g struct {
		Coordinates [][]Ring `json:"coordinates"`
	}
	err := json.Unmarshal(b, &g)
	*p = g.Coordinates
	return err
}

// SourceInfo is what the model makes of a source: the figures that a reviewer
// checks first.
type SourceInfo struct {
	Antenna       string   `json:"antenna"`
	Method        string   `json:"method"`
	Why           string   `json:"why"` // why this method
	FrequencyHz   float64  `json:"frequency_hz"`
	WavelengthM   float64  `json:"wavelength_m"`
	GainDBi       float64  `json:"gain_dbi"`
	OnAirW        float64  `json:"on_air_w"`
	MeanW         float64  `json:"mean_w"`
	PeakW         float64  `json:"peak_w"`
	EIRPW         float64  `json:"eirp_w"` // of the mean power
	PowerUnknown  bool     `json:"power_unknown"`
	ReactiveM     float64  `json:"reactive_m"`                 // lambda/(2 pi), from the body's nearest point
	FarFieldM     float64  `json:"far_field_m"`                // 2 D2/lambda
	FresnelM      float64  `json:"fresnel_m,omitempty"`        // dish: D2/(4 lambda)
	DishFarFieldM float64  `json:"dish_far_field_m,omitempty"` // dish: 0.6 D2/lambda
	Caveats       []string `json:"caveats,omitempty"`
	Source        *Source  `json:"-"`
}

// Assessment is the whole answer for a site. Screen, JSON, workbook, figures
// and maps are printers of this one value.
type Assessment struct {
	Program   string        `json:"program"` // "standclear 0.1.0"
	Site      *Site         `json:"-"`
	SiteName  string        `json:"site"`
	Ground    string        `json:"ground"`
	StateOn   bool          `json:"only_rows_that_are_on"`
	Classes   []string      `json:"classes"`
	Sources   []SourceInfo  `json:"antennas"`
	Points    []PointResult `json:"points"`
	Distances []Distance    `json:"distances"`
	Zones     []Zone        `json:"zones"`
	Warnings  []Warning     `json:"warnings"`
	Notices   []string      `json:"notices"` // what the assessor must know that belongs to no cell
	Inputs    []InputFile   `json:"inputs"`
	// Sections are the boundaries on a vertical plane through each housing, along
	// its first row's azimuth.
	Sections []Zone `json:"sections,omitempty"`
	// Grids are sampled ratios for contour lines: one for each zone, and for each
	// section that of the class whose ratio is largest there.
	Grids []RatioGrid `json:"-"`
	// BoundaryPoints are points of each boundary with their calculation written
	// out, for an assessor to check by hand.
	BoundaryPoints []BoundaryPoint `json:"boundary_points,omitempty"`
	// Profiles are ratio against distance along each row's main beam.
	Profiles []Profile `json:"profiles,omitempty"`
	// Work is a plan for each place and each surface that is above the limits
	// supplied for the class that may be there.
	Work []Work `json:"work,omitempty"`
	// Boundaries is the schedule of barriers and signs.
	Boundaries []Barrier `json:"barriers,omitempty"`
	// MeasureFirst lists places by what a measurement there is worth.
	MeasureFirst []MeasureHere `json:"measure_first,omitempty"`
	// Assumptions are what each assumption is worth.
	Assumptions []AssumptionSet `json:"assumptions,omitempty"`
	// States are the operating states: everything, without standby, and each
	// named scenario.
	States []StateResult `json:"states,omitempty"`
	// Coverage is what distances were asked to cover, nil for none.
	Coverage *Coverage `json:"-"`
}

// Profile is the exposure ratio along a ray, for a figure. Each is a row alone.
type Profile struct {
	Antenna      string    `json:"antenna"`
	Class        string    `json:"class"`
	AzimuthDeg   float64   `json:"azimuth_deg"`
	ElevationDeg float64   `json:"elevation_deg"`
	DistanceM    []float64 `json:"distance_m"`
	Ratio        []Number  `json:"exposure_ratio"`
	Method       []string  `json:"method"`
}
