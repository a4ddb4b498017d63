package sitefile

import (
	"fmt"
	"strings"
	"testing"
	"unicode/utf16"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// plain is a table in its simplest form; each carrier variant must read as it.
const plain = "id,x [m],y [m],z [m],class,note\nroof door,2.5,3,0,public,\"by the stair,\nsouth\"\nyard,-1,0.25,4,public,\n"

func rowsOfText(t *testing.T, text string) [][]string {
	t.Helper()
	g, faults := readCSV("places.csv", "places", []byte(text), false)
	require.Empty(t, faults)
	var out [][]string
	for _, r := range g.rows {
		out = append(out, r.cells)
	}
	return out
}

func utf16Text(s string, big bool) string {
	var b strings.Builder
	for _, u := range utf16.Encode([]rune("\ufeff" + s)) {
		if big {
			b.WriteByte(byte(u >> 8))
			b.WriteByte(byte(u))
		} else {
			b.WriteByte(byte(u))
			b.WriteByte(byte(u >> 8))
		}
	}
	return b.String()
}

func TestCarrierVariants(t *testing.T) {
	want := rowsOfText(t, plain)
	require.Len(t, want, 3)
	semicolons := "id;x [m];y [m];z [m];class;note\nroof door;2.5;3;0;public;\"by the stair,\nsouth\"\nyard;-1;0.25;4;public;\n"
	for name, text := range map[string]string{
		"UTF-8 mark":                   "\xef\xbb\xbf" + plain,
		"UTF-16 little endian":         utf16Text(plain, false),
		"UTF-16 big endian":            utf16Text(plain, true),
		"CR LF":                        strings.ReplaceAll(plain, "\n", "\r\n"),
		"lone CR":                      strings.ReplaceAll(plain, "\n", "\r"),
		"no end of line at the end":    strings.TrimSuffix(plain, "\n"),
		"blank lines":                  "\n\n" + strings.Replace(plain, "yard", "\n   \nyard", 1) + "\n\n",
		"rows of separators":           ",,,,,\n" + strings.Replace(plain, "yard", ",,,,,\nyard", 1) + " , ,,,,\n",
		"semicolons":                   semicolons,
		"semicolons and commas in #":   "# a, b, c, d, e, f, g\n" + semicolons,
		"tabs":                         strings.ReplaceAll(semicolons, ";", "\t"),
		"separator named":              "sep=;\n" + semicolons,
		"comments":                     "# one: 1\n#two\n" + strings.Replace(plain, "yard", "# between\nyard", 1) + "#last",
		"comments a spreadsheet saved": "# one: 1,,,,,\n\"# two, three\",,,,,\n" + plain + "#last,,,,,\n",
		"quotes in a comment":          "# the \"big\" roof, 5\" high\n" + plain,
		"blanks around cells":          strings.ReplaceAll(plain, ",p", " , p"),
		"blanks before quotes":         strings.ReplaceAll(plain, ",\"", ", \""),
		"everything quoted":            "\"id\",\"x [m]\",\"y [m]\",\"z [m]\",\"class\",\"note\"\n\"roof door\",\"2.5\",\"3\",\"0\",\"public\",\"by the stair,\nsouth\"\n\"yard\",\"-1\",\"0.25\",\"4\",\"public\",\"\"\n",
		"short rows":                   strings.Replace(plain, "public,\n", "public\n", 1),
	} {
		t.Run(name, func(t *testing.T) { assert.Equal(t, want, rowsOfText(t, text)) })
	}
}

func TestCarrierFaults(t *testing.T) {
	for name, c := range map[string]struct{ text, want string }{
		"empty":                   {" \n", `places.csv: the file is empty; write its header row, or delete it`},
		"workbook":                {"PK\x03\x04....", `places.csv: this is a workbook or another zip file, not CSV; save it as CSV, or give it the ending .xlsx`},
		"UTF-16 without a mark":   {utf16Text(plain, false)[2:], `places.csv: the file looks like UTF-16 without a byte order mark; save it as UTF-8`},
		"UTF-16 cut":              {utf16Text(plain, false) + "\x00", `places.csv: the UTF-16 text is damaged; save the file as UTF-8`},
		"NUL":                     {plain + strings.Repeat("# filler\n", 9) + "\x00", `places.csv: line 14 has a NUL byte, so the file is damaged or not text; save it as UTF-8`},
		"Windows-1252":            {plain + "d\xe9p\xf4t,1,2,3,public,", `places.csv: line 5 is not UTF-8 text; save the file as CSV UTF-8`},
		"separators tie":          {"id;x [m],y [m]\n", `places.csv:1: the header has as many of one separator as of another, so that the cells cannot be told apart; use only commas, only semicolons or only tabs`},
		"quote in a cell":         {"id,class\na 5\" pipe,public\n", `places.csv:2: a quotation mark stands inside a cell that is not quoted; put the whole cell in quotation marks and double those inside`},
		"text behind a quote":     {"id,class\n\"a\"b,public\n", `places.csv:2: a quotation mark is not closed, or text follows it; close it, and double those inside a quoted cell`},
		"quote never closed":      {"id,class\n\"a,public\nb,public\n", `places.csv:2: a quotation mark is opened here and not closed properly up to line 3; close it, and double those inside a quoted cell`},
		"quote open in a comment": {"# see, \"note\nid,class\na\",public\n", `places.csv:1: a quotation mark is opened in this comment and closed on another line; close it on this one`},
	} {
		t.Run(name, func(t *testing.T) {
			_, faults := readCSV("places.csv", "places", []byte(c.text), false)
			require.Len(t, faults, 1)
			assert.Equal(t, c.want, faults[0].Error())
		})
	}
}

func TestWindows1252OnRequest(t *testing.T) {
	g, faults := readCSV("places.csv", "places", []byte("id,class\nd\xe9p\xf4t,public\n"), true)
	require.Empty(t, faults)
	assert.Equal(t, "dépôt", g.rows[1].cell(0))
	g, faults = readCSV("places.csv", "places", []byte("id,class\ndépôt,public\n"), true)
	require.Empty(t, faults)
	assert.Equal(t, "dépôt", g.rows[1].cell(0), "a file that is UTF-8 stays it")
}

func TestRowsThatEndEarly(t *testing.T) {
	g, faults := readCSV("places.csv", "places", []byte("id,x [m],y [m],class\n# remark\na,1,2,public\nb,1,public\nc,1\n"), false)
	require.Empty(t, faults)
	require.Len(t, g.warnings, 1)
	assert.Equal(t, "places.csv:4", g.warnings[0].Place)
	assert.Equal(t, "this row and 1 more end before the header does: the cells that are not there count as blank; check that none is missing further in front", g.warnings[0].Message)
}

func TestRowsKeepTheirLines(t *testing.T) {
	g, faults := readCSV("places.csv", "places", []byte("sep=,\n# remark\n\nid,note\r\na,\"two\r\nlines\"\r\n\r\nb,\r\n"), false)
	require.Empty(t, faults)
	var lines []int
	for _, r := range g.rows {
		lines = append(lines, r.number)
	}
	assert.Equal(t, []int{4, 5, 8}, lines)
	require.Len(t, g.comments, 1)
	assert.Equal(t, 2, g.comments[0].number)
}

func TestRowsThatAQuoteMaySwallow(t *testing.T) {
	g, faults := readCSV("antennas.csv", "antennas", []byte("id,note,x [m],y [m],z [m]\nA1,\"north,1,2,3\nA2,south,1,2,3\nA3,west\",1,2,3\n"), false)
	require.Empty(t, faults)
	require.Len(t, g.warnings, 1)
	assert.Equal(t, "a quoted cell runs over 3 lines that look like rows; check its quotation marks", g.warnings[0].Message)
	assert.Equal(t, "antennas.csv:2", g.warnings[0].Place)
}

func TestDecimalComma(t *testing.T) {
	s := mustLoad(t, with("places.csv", "id;x [m];y [m];z [m];to [m];class\ndoor;2,5;-0,25;1e1;2;public\n"))
	// Exact: both marks are read by the same conversion.
	assert.Equal(t, 2.5, s.Places[0].At.X)
	assert.Equal(t, -0.25, s.Places[0].At.Y)
	assert.Equal(t, 10.0, s.Places[0].At.Z)

	s = mustLoad(t, with("places.csv", "id;x [m];y [m];z [m];to [m];class\ndoor;2.500;3;0;2;public\n"))
	assert.Equal(t, 2.5, s.Places[0].At.X, "points alone are decimal points")

	s = mustLoad(t, with("places.csv", "id;x [m];y [m];z [m];to [m];class\ndoor;1,800;3;0;2;public\n"))
	assert.Equal(t, 1.8, s.Places[0].At.X)
	assert.Contains(t, warningLines(s), `places.csv:2: x [m]: "1,800" is read as 1.800: the comma counts as the decimal mark in a file with semicolons or tabs`)

	assert.Equal(t, []string{
		`places.csv:2: x [m]: "1.800" may be 1800 or 1.800, since the file has both decimal points and decimal commas; write the one that is meant, with one kind of mark throughout`,
	}, faultLines(t, with("places.csv", "id;x [m];y [m];z [m];to [m];class\ndoor;1.800;3,5;0;2;public\n")))
	assert.Equal(t, []string{
		`places.csv:2: x [m]: "1.234,5" has thousands separators; write digits only, such as 1234.5`,
	}, faultLines(t, with("places.csv", "id;x [m];y [m];z [m];to [m];class\ndoor;1.234,5;3,5;0;2;public\n")))
}

// Any input is read without a panic, and whatever is wrong has a place.
func FuzzLoad(f *testing.F) {
	for _, seed := range []string{plain, utf16Text(plain, false), "sep=;\nid;x [m]\n1;2", "# a,\"\nid,class\n", "id,\"\n", "item,value\nname,x", small()["antennas.csv"], small()["limits.csv"],
		"# spot: public, S, 900 MHz, 10 W/m2\n# checked by: me\nclass;quantity\na;S", "id;outline;z [m];class\nr;POLYGON((0 0, 1 0, 1 1, 0 0));1,5;public\n", "\x00\x01", "table,from,to,unit\nreadings,a,b,V/m\n"} {
		for i := range fuzzTables {
			f.Add(seed, i)
		}
	}
	f.Fuzz(func(t *testing.T, text string, table int) {
		if table < 0 || table >= len(fuzzTables) {
			return
		}
		name := fuzzTables[table] + ".csv"
		files := with(name, text)
		s, err := loadFiles(files, Options{})
		if err == nil {
			if s == nil || s.Limits == nil {
				t.Fatal("neither a site nor a fault")
			}
			return
		}
		faults, ok := err.(Faults)
		if !ok || len(faults) == 0 {
			t.Fatalf("an error without faults: %v", err)
		}
		for _, fault := range faults {
			if fault.File == "" || fault.Message == "" || fault.Row < 0 || strings.Contains(fault.Message, "%!") {
				t.Fatalf("a fault without a place or words: %+v", fault)
			}
		}
	})
}

var fuzzTables = []string{"site", "antennas", "operators", "surfaces", "places", "limits", "readings", "columns"}

// A table of 2,000 antennas and 5,000 places reads in a fraction of a second.
func BenchmarkLoad(b *testing.B) {
	files := small()
	var antennas, places strings.Builder
	antennas.WriteString("id,x [m],y [m],z [m],azimuth [deg],pattern,gain [dBi],horizontal beamwidth [deg],vertical beamwidth [deg],length [m],frequency [MHz],power [W],loss [dB]\n")
	for i := range 2000 {
		fmt.Fprintf(&antennas, "A%d,%d,%d,6,%d,two-beamwidth,17,65,7,2,%d,40,1\n", i, i%50, i/50, i%360, 700+i)
	}
	places.WriteString("id,x [m],y [m],z [m],to [m],class\n")
	for i := range 5000 {
		fmt.Fprintf(&places, "P%d,%d,%d,0,2,public\n", i, i%70, i/70)
	}
	files["antennas.csv"], files["places.csv"] = antennas.String(), places.String()
	b.ReportAllocs()
	for b.Loop() {
		if _, err := loadFiles(files, Options{}); err != nil {
			b.Fatal(err)
		}
	}
}
