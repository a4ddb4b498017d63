// Package figure draws the figures of a report: plans and vertical sections
// with keep-out lines, exposure ratio against distance, limit levels, antenna
// patterns, and measured fields.
//
// A figure is laid out once, as a list of strokes, fills and texts in points,
// and then written as SVG or as PNG: both show the same drawing. The layout is
// plain data (Layout), so that a test can ask whether two labels overlap.
//
// Everything is drawn in black and grey. Classes are told apart by the dashes
// of their line and the slant of their hatching, never by colour, so that a
// photocopy says what the original said. Plans and sections have the same
// scale along both axes.
//
// A figure is a picture of results computed elsewhere. Lines of very many
// points are thinned to what a printer can show; the polygons that other
// outputs carry are never touched.
package figure
