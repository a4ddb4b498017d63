package survey

import "example.org/standclear/exposure"

// Result is all that a survey comes to. Its lists are never nil.
type Result struct {
	DecisionRule exposure.DecisionRule `json:"decision_rule"`
	RuleWords    string                `json:"decision_rule_in_words"`
	// Unexplained are the readings that the model cannot explain, the largest
	// excess first.
	Unexplained []Finding            `json:"unexplained"`
	Readings    []ReadingResult      `json:"readings"`
	Groups      []GroupResult        `json:"groups"`
	Series      []SeriesResult       `json:"series"`
	Places      []PlaceResult        `json:"places"`
	Budgets     []Budget             `json:"budgets"`
	Agreement   Agreement            `json:"agreement"`
	Files       []exposure.InputFile `json:"files,omitempty"`
	Survey      *Survey              `json:"-"`
}

// Comparison is the prediction beside a measurement.
type Comparison struct {
	PredictedVPerM *float64 `json:"predicted_v_per_m"`
	PredictedRatio *float64 `json:"predicted_ratio"`
	// DifferenceDB is measured over predicted, in dB of field.
	DifferenceDB *float64 `json:"difference_db"`
	// PredictionDB is the expanded uncertainty of the prediction, CombinedDB that
	// of the difference.
	PredictionDB float64  `json:"prediction_expanded_uncertainty_db"`
	CombinedDB   float64  `json:"combined_expanded_uncertainty_db"`
	Explained    bool     `json:"explained"`
	Of           []string `json:"predicted_from"` // antennas
	// ComparisonNote says why there is no prediction, or how it was chosen.
	Note string `json:"prediction_note,omitempty"`
}

// ReadingResult is one reading after correction.
type ReadingResult struct {
	ID    string  `json:"id"`
	Place string  `json:"place"`
	XM    float64 `json:"x_m"`
	YM    float64 `json:"y_m"`
	ZM    float64 `json:"z_m"`
	// FieldVPerM is the corrected field, scaled to maximum traffic where the
	// reading says so; nil for a shaped reading, which has none.
	FieldVPerM        *float64 `json:"field_v_per_m"`
	MeasuredVPerM     *float64 `json:"measured_v_per_m"` // before scaling
	BelowFloor        bool     `json:"below_floor"`      // the floor counts: "<"
	ExpandedDB        *float64 `json:"expanded_uncertainty_db"`
	FromHz            float64  `json:"from_hz"`
	ToHz              float64  `json:"to_hz"`
	Instrument        string   `json:"instrument"`
	Time              string   `json:"time,omitempty"`
	Axis              string   `json:"axis,omitempty"`
	Group             string   `json:"group,omitempty"`
	CalibrationFactor float64  `json:"calibration_factor"`
	ScaleFactor       float64  `json:"scale_factor"`
	ScaleFormula      string   `json:"scaled_to_maximum,omitempty"`
	Remarks           []string `json:"remarks,omitempty"`
	Judgement
	Comparison

	Reading *Reading `json:"-"`
	part    *part
}

// GroupResult is the mean over the heights of one spot, in one band.
type GroupResult struct {
	Group      string    `json:"group"`
	Place      string    `json:"place"`
	Members    []string  `json:"readings"`
	Heights    []float64 `json:"heights_m"`
	FromHz     float64   `json:"from_hz"`
	ToHz       float64   `json:"to_hz"`
	FieldVPerM *float64  `json:"field_v_per_m"` // mean
	// LargestVPerM is the largest of the heights.
	LargestVPerM *float64 `json:"largest_v_per_m"`
	LargestRatio float64  `json:"largest_ratio"`
	BelowFloor   bool     `json:"below_floor"`
	ExpandedDB   *float64 `json:"expanded_uncertainty_db"`
	Remarks      []string `json:"remarks,omitempty"`
	Judgement
	Comparison

	part *part
}

// SeriesResult is a log.
type SeriesResult struct {
	Series       string   `json:"series"`
	Place        string   `json:"place"`
	FromHz       float64  `json:"from_hz"`
	ToHz         float64  `json:"to_hz"`
	FieldVPerM   *float64 `json:"field_v_per_m"` // the largest running mean, scaled where the row says so
	LargestEnd   string   `json:"largest_window_ends"`
	First        string   `json:"first"`
	Last         string   `json:"last"`
	ExpandedDB   *float64 `json:"expanded_uncertainty_db"`
	ScaleFactor  float64  `json:"scale_factor"`
	ScaleFormula string   `json:"scaled_to_maximum,omitempty"`
	BelowFloor   int      `json:"samples_below_floor"`
	Overloaded   int      `json:"samples_beyond_overload"`
	Remarks      []string `json:"remarks,omitempty"`
	RunningMean
	Judgement
	Comparison

	// LevelVPerM is the lowest level of E that the log is held against, for a
	// figure; 0 = none.
	LevelVPerM float64 `json:"-"`
	part       *part
}

// PlaceResult is what all readings of one place come to.
type PlaceResult struct {
	Place string `json:"place"`
	// FieldVPerM is the root-sum-square over the bands measured; nil where only a
	// shaped reading was taken.
	FieldVPerM     *float64 `json:"field_v_per_m"`
	ExpandedDB     *float64 `json:"expanded_uncertainty_db"`
	BelowFloor     bool     `json:"below_floor"`
	Counted        []string `json:"counted"` // readings, groups and series that add up
	NotCounted     []string `json:"not_counted,omitempty"`
	PredictedVPerM *float64 `json:"predicted_v_per_m"`
	PredictedRatio *float64 `json:"predicted_ratio"`
	Judgement
}

// Finding is a reading that the model cannot explain.
type Finding struct {
	What         string  `json:"what"` // reading, group or series
	ID           string  `json:"id"`
	Place        string  `json:"place"`
	DifferenceDB float64 `json:"difference_db"`
	CombinedDB   float64 `json:"combined_expanded_uncertainty_db"`
	// Factor is the power ratio that would explain it, all in the antennas named.
	Factor   float64   `json:"power_factor"`
	Words    string    `json:"words"`
	Suspects []Suspect `json:"inventory_rows"`
}

// Suspect is an inventory row that could be wrong.
type Suspect struct {
	Antenna string `json:"antenna"`
	Row     string `json:"row"`
	// Share is the row's part of the predicted power at the reading.
	Share float64 `json:"share_of_prediction"`
	// Factor is the power ratio that would explain the reading if this row alone
	// were wrong.
	Factor exposure.Number `json:"power_factor"`
	Why    []string        `json:"why"`
	score  float64
}

// Agreement is the comparison over all readings with a prediction.
type Agreement struct {
	Compared    int      `json:"compared"`
	BiasDB      *float64 `json:"bias_db"`   // mean of the differences
	SpreadDB    *float64 `json:"spread_db"` // their standard deviation; two or more
	Explained   int      `json:"explained"` // differences within their combined expanded uncertainty
	Share       *float64 `json:"explained_share"`
	BelowByMore []string `json:"below_prediction_by_more"`
}
