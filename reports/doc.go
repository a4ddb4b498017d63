// Package reports prints an exposure.Assessment: the report workbook, the map
// files, the setting-out list, the figures, the JSON and the lines on the
// screen. Everything comes from that one value, so that no two of them can
// disagree; the package reads no file and computes no field.
//
// The workbook carries live formulas where a reviewer wants to follow a figure.
// A formula is written only where it gives the engine's own number, which is
// stored beside it: a program that does not recalculate shows that number, and
// one that does finds the same.
//
// The same assessment gives the same bytes: the only date is the report date
// that the site states.
package reports
