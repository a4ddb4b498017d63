package sitefile

var readingsTable = TableSchema{
	Name: "readings",
	Help: "what was measured",
	Columns: []ColumnSchema{
		text("id", "name of the reading", required, example("R1")),
		text("place", "where: a place of the places table", example("roof door")),
		quantity("x", "m", "east of the site's origin", unless("place")),
		quantity("y", "m", "north of the site's origin", unless("place")),
		quantity("z", "m", "height above the site datum", unless("place")),
		quantity("latitude", "deg", "WGS 84 latitude, in place of y", between(-90, 90), rare),
		quantity("longitude", "deg", "WGS 84 longitude, in place of x", between(-180, 180), rare),
		quantity("height", "m", "of the probe above that place", blank("0"), atLeast(0), example("1.5")),
		column("time", Moment, "when, RFC 3339", []option{example("2026-03-31T10:05:00Z")}),
		text("instrument", "of the instruments table", required, example("M1")),
		choice("axis", "x|y|z", "of a single-axis reading; three of a spot join by group"),
		quantity("E", "V/m", "electric field", atLeast(0), example("2.1")),
		quantity("H", "A/m", "magnetic field", atLeast(0)),
		quantity("S", "W/m2", "power density", atLeast(0)),
		quantity("port level", "dBm", "at the receiver's input"),
		quantity("share of limit", "%", "reading of a shaped probe", atLeast(0)),
		text("share of", "class that the shaped probe is for"),
		number("ports", "antenna ports that the reading covers", blank("1"), whole(1, 1000)),
		quantity("frequency", "MHz", "of the reading", moreThan(0)),
		quantity("from", "MHz", "lower edge of the band read", atLeast(0)),
		quantity("to", "MHz", "upper edge of the band read", moreThan(0)),
		choice("detector", "rms|peak", "of the instrument"),
		text("group", "readings averaged together: the heights of one spot"),
		text("series", "name of a time log: of rows of this table, or of a file in the site folder"),
		text("scale to maximum", "a named method and its figures, such as LTE reference signal: bandwidth 20 MHz, boost 3 dB, ports 2"),
		text("antennas", "ids the reading is of"),
		text("note", "kept and printed, never interpreted"),
	},
}

var instrumentsTable = TableSchema{
	Name: "instruments",
	Help: "what it was measured with",
	Columns: []ColumnSchema{
		text("id", "name of the instrument", required, example("M1")),
		choice("kind", "broadband|selective", "of instrument", example("broadband")),
		quantity("from", "MHz", "lower end of its range", required, atLeast(0), example("0.1")),
		quantity("to", "MHz", "upper end of its range", required, moreThan(0), example("6000")),
		text("calibration factor", "multiplies the field: a number, or a file by frequency", blank("1")),
		quantity("antenna factor", "dB/m", "of the receiving antenna"),
		quantity("cable loss", "dB", "between antenna and receiver"),
		quantity("floor", "V/m", "lowest field it can read", atLeast(0), example("0.2")),
		quantity("overload", "V/m", "highest field it can read", moreThan(0), example("300")),
		date("calibrated on", "day of calibration", example("2026-01-15")),
		date("calibration due", "day until which it holds", example("2028-01-15")),
		text("note", "kept and printed, never interpreted"),
	},
}

var uncertaintyTable = TableSchema{
	Name: "uncertainty",
	Help: "uncertainty components of each instrument",
	Columns: []ColumnSchema{
		text("instrument", "of the instruments table", required, example("M1")),
		text("component", "what it is", required, example("calibration")),
		number("value", "of the component", required, atLeast(0), example("1.0")),
		choice("unit", "dB|%", "of the value", required, example("dB")),
		choice("distribution", "normal|rectangular|triangular|u-shaped", "of the component", blank("normal"), example("normal")),
		number("divisor", "that makes it a standard uncertainty; blank = by distribution", moreThan(0)),
		number("coverage factor", "k of a stated expanded uncertainty", moreThan(0), example("2")),
		number("sensitivity", "sensitivity coefficient", blank("1")),
		text("note", "kept and printed, never interpreted"),
	},
}

var columnsTable = TableSchema{
	Name: "columns",
	Help: "reads an instrument's export as it is: its headers and ours",
	Columns: []ColumnSchema{
		text("table", "which table", required, example("readings")),
		text("from", "header as the export has it", required, example("Level")),
		text("to", "our column", required, example("E")),
		text("unit", "of the export's figures; of times their zone, such as +01:00", example("V/m")),
	},
}

var scenariosTable = TableSchema{
	Name: "scenarios",
	Help: "named changes to compare with the base",
	Columns: []ColumnSchema{
		text("scenario", "name of the scenario", required, example("half power")),
		text("table", "which table", required, example("antennas")),
		text("id", "of the row", required, example("A1")),
		text("column", "that changes", required, example("power")),
		text("value", "in its place, in the column's unit", required, example("20")),
	},
}
