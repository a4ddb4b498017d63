package exposure

// RatioGrid is the total exposure ratio of one class sampled on a regular grid
// of a surface or of a vertical section, for drawing contour lines. It is a
// picture of the field and proves nothing: boundaries come from Zone.
type RatioGrid struct {
	Surface string   `json:"surface,omitempty"`
	Section *Section `json:"section,omitempty"`
	Class   string   `json:"class"`
	X0      float64  `json:"x0_m"` // of the first sample: site x, or the distance along the section
	Y0      float64  `json:"y0_m"` // site y, or the height above the datum
	Step    float64  `json:"step_m"`
	NX      int      `json:"nx"`
	NY      int      `json:"ny"`
	// Values holds NX*NY ratios, row by row from Y0 upward. NaN means that the
	// sample was not computed; +Inf that its ratio has no bound.
	Values []Number `json:"values"`
}

// At returns the sample of column i and row j.
func (g *RatioGrid) At(i, j int) float64 { return float64(g.Values[j*g.NX+i]) }
