package figure

import "math"

// lineStyles tell classes apart, in the order in which they are listed: by the
// pattern of their dashes, in points.
var lineStyles = []stroke{
	{width: 1.5},
	{width: 1.5, dash: []float64{7, 3}},
	{width: 1.5, dash: []float64{8, 2.5, 1.5, 2.5}},
	{width: 1.7, dash: []float64{1.7, 2.3}},
	{width: 1.5, dash: []float64{14, 4}},
	{width: 1.5, dash: []float64{8, 2.5, 1.5, 2.5, 1.5, 2.5}},
	{width: 0.9, dash: []float64{3, 1.5}},
	{width: 0.9, dash: []float64{12, 2, 3, 2}},
}

// hatches tell the areas of classes apart: by slant, spacing and dashes.
var hatches = []struct {
	angle, spacing float64
	stroke         stroke
}{
	{math.Pi / 4, 5.5, stroke{width: 0.45, grey: 40}},
	{-math.Pi / 4, 5.5, stroke{width: 0.45, grey: 40}},
	{0, 4.5, stroke{width: 0.45, grey: 40}},
	{math.Pi / 2, 4.5, stroke{width: 0.45, grey: 40}},
	{math.Pi / 4, 4, stroke{width: 0.6, grey: 40, dash: []float64{2, 2}}},
	{-math.Pi / 4, 4, stroke{width: 0.6, grey: 40, dash: []float64{2, 2}}},
	{math.Pi / 8, 6.5, stroke{width: 0.45, grey: 40}},
	{-math.Pi / 8, 6.5, stroke{width: 0.45, grey: 40}},
}

// classLine returns the line of the i-th class; past the last style the lines
// repeat, half as wide.
func classLine(i int) stroke {
	s := lineStyles[i%len(lineStyles)]
	if i >= len(lineStyles) {
		s.width /= 2
	}
	return s
}

// tints are the greys between contour lines, from the lowest line upward.
var tints = []uint8{243, 229, 210, 188, 165}

// contourLevels are the exposure ratios at which contour lines are drawn.
var contourLevels = []float64{0.05, 0.2, 1, 5}

var (
	contourStroke = stroke{width: 0.55, grey: 70}
	frameStroke   = stroke{width: 0.8}
	gridStroke    = stroke{width: 0.4, grey: 222}
	edgeStroke    = stroke{width: 1, grey: 110}
	otherStroke   = stroke{width: 0.5, grey: 165}
	leaderStroke  = stroke{width: 0.4, grey: 60}
)

// Caution stands at the foot of every figure of predicted exposure.
const Caution = "Computed from the data supplied; the model is not the site. What the limits supplied do not cover is not assessed. " +
	"To be reviewed by the assessor who signs the report before anyone relies on it."
