package sitefile

import "example.org/standclear/exposure/units"

var limitsTable = TableSchema{
	Name: "limits",
	Help: "your own limit table: level = coefficient * f^exponent, band by band; also a file of its own",
	Columns: []ColumnSchema{
		text("class", "who the level is for", required, example("public")),
		choice("quantity", "E|H|B|S", "what is limited", required, example("S")),
		quantity("from", "MHz", "lower edge of the band", required, atLeast(0), example("400")),
		quantity("to", "MHz", "upper edge of the band", required, moreThan(0), example("2000")),
		number("coefficient", "of the level; blank only where level is none", unless("level none"), example("0.005")),
		number("exponent", "of the frequency", blank("0"), example("1")),
		symbol("unit", units.None, "of the level, any unit of the quantity", unless("level none"), example("W/m2")),
		symbol("f unit", units.Frequency, "of the frequency in the formula", blank("MHz"), example("MHz")),
		choice("level", "formula|none", "none = a deliberate gap: no level is set here", blank("formula")),
		quantity("average", "min", "averaging time; 0 = never averaged", unless("level none"), atLeast(0), example("30")),
		number("average exponent", "of the frequency in the averaging time", blank("0"), rare),
		symbol("average f unit", units.Frequency, "of the frequency in the averaging time", blank("MHz"), rare),
		choice("time averaging", "no|yes", "whether a stay may be averaged", blank("no")),
		choice("over body", "largest|mean", "how a field that varies over the body is compared", blank("largest")),
		quantity("area", "cm2", "averaging area; point values are compared, which is never lower", moreThan(0), rare),
		number("brief a", "incident energy a + b*sqrt(t) in J/m2 for stays shorter than the averaging time", rare),
		number("brief b", "the b of it", rare),
		number("brief exponent", "of the frequency, in f unit, that this energy is multiplied by", blank("0"), rare),
		choice("region", "whole body|local", "what part of the body the level is for", blank("whole body")),
		choice("effect", "thermal|stimulation", "thermal levels add as powers, stimulation levels as fields", blank("thermal")),
		choice("kind", "mean|peak", "of the field", blank("mean")),
		choice("combine", "largest|add", "how E, H and S of one source join", blank("largest")),
		text("source", "document, edition, table", required, example("regulator's document, edition, table")),
		text("note", "kept and printed, never interpreted"),
	},
}

// limitsAboutTable is the sheet of a workbook; in a CSV file the same items are
// leading rows: # key: value.
var limitsAboutTable = TableSchema{
	Name: "limits about", Vertical: true,
	Help: "who stands behind the limit table; in limits.csv the leading rows # key: value",
	Columns: []ColumnSchema{
		text("title", "title of the document", example("title of the regulation")),
		text("issued by", "who issued it"),
		text("edition", "edition or year"),
		text("transcribed by", "who typed it in"),
		text("checked by", "who checked the transcription; counts only with spot values"),
		date("checked on", "when"),
		text("note", "kept and printed, never interpreted"),
	},
}

// limitsSpotsTable is the sheet of a workbook; in a CSV file the same values are
// rows: # spot: CLASS, QUANTITY, FREQUENCY, LEVEL.
var limitsSpotsTable = TableSchema{
	Name: "limits spots",
	Help: "levels as printed in the source, one or more a band; in limits.csv rows # spot: CLASS, QUANTITY, FREQUENCY, LEVEL",
	Columns: []ColumnSchema{
		text("class", "class of the level", required, example("public")),
		choice("quantity", "E|H|B|S", "what is limited", required, example("S")),
		text("frequency", "with its unit", required, example("900 MHz")),
		text("level", "as printed, with its unit", required, example("4.5 W/m2")),
	},
}
