// Package antenna is what radiates: far-field patterns, pattern files, gain and
// orientation.
//
// A pattern lives in the antenna's own frame: azimuth phi from boresight,
// clockwise seen from the antenna's top, and elevation theta above its own
// horizon. It answers two questions, each without side effects and without
// allocating: the power toward one direction relative to the peak (Relative),
// and an enclosure of that over a box of directions (RelativeRange), on which
// every bound of a boundary rests.
//
// # Why the ranges hold
//
// Every built-in pattern is a composition of monotone pieces: of |phi|, of |theta|
// from the beam, of the angle off axis, of the distance from a main lobe. Over a
// box each of these has exact extremes, and the composition is taken at their
// ends; where a formula is linear in two losses at once, at the four corners.
// Sampled cuts are linear in dB between samples: their extremes lie at the ends
// of the interval, worked out by the same interpolation, or at samples between,
// looked up in a table of extremes over runs of samples. A full sphere is
// bilinear, with its extremes at the corners of grid cells cut by the box; large
// boxes take the samples around them, block by block. What is left is rounding,
// accounted for in rangeSlack, rangeFloor and angleSlack.
//
// # Reading files
//
// Read tells a format by its content. It forgives what cannot change the
// pattern and lists it in File.Forgiven; it refuses, with the line, whatever a
// guess could turn into a hidden beam: a gap, an angle given twice with two
// values, an unknown unit or coordinate system, a vertical cut that is not
// symmetric and does not say which way is up.
//
// The methods, their sources and the tests that hold them are listed by Methods.
package antenna
