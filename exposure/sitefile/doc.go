// Package sitefile reads what a user typed: a site as a folder of CSV files or
// as one workbook, a limit table of its own, a list of points. It turns every
// figure into SI units once and hands on a validated exposure.Site, in which
// nothing is optional and nothing is NaN.
//
// # From text to site
//
//	CSV file, sheet -> grid -> bound table -> exposure.Site
//	csv.go, workbook_read.go   bind.go        site.go, antennas.go, ...
//
// A carrier makes grids of text cells and knows nothing of tables. bind holds a
// grid against the schema, the one place where tables and columns are written
// down (schema.go and its neighbours), and checks header and cells: names,
// units, numbers, ranges, choices, dates. What remains is what one table says of
// another: housings, surfaces, classes, patterns.
//
// To add a column, write it in the schema; the reader, Init, the fill-in
// workbook and the reference in --help follow. Its use goes where its table is
// bound.
//
// # Faults and warnings
//
// Everything that is wrong in any table is collected before Load gives up: one
// fault a cell, in the order of the tables, each with file or sheet, row,
// column, the text as typed and what to write instead. Nothing is guessed: an
// unknown column, a unit of the wrong kind, a number with a thousands separator
// or a blank that has no default is a fault, since a lost figure could make
// a place look as if it were within the limits. What an assessor must know but
// what may be so goes into exposure.Inputs as a warning.
package sitefile
