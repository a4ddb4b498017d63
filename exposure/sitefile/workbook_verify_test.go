package sitefile

import (
	"archive/zip"
	"bytes"
	"encoding/binary"
	"fmt"
	"io"
	"io/fs"
	"math/rand/v2"
	"strings"
	"testing"

	"example.org/standclear/exposure/sitefile/demo"
	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"github.com/xuri/excelize/v2"
)

// demoGrids reads the CSV tables of the demo site.
func demoGrids(t testing.TB) []*grid {
	t.Helper()
	var grids []*grid
	for _, s := range schema {
		data, err := fs.ReadFile(demo.FS, s.Name+".csv")
		if err != nil {
			continue
		}
		g, faults := readCSV(s.Name+".csv", s.Name, data, false)
		require.Empty(t, faults)
		grids = append(grids, g)
	}
	require.NotEmpty(t, grids)
	return grids
}

func demoWorkbook(t testing.TB) []byte {
	t.Helper()
	var b bytes.Buffer
	require.NoError(t, writeGrids(&b, demoGrids(t)))
	return b.Bytes()
}

// cellsOf writes grids as text that can be compared: every cell with its place.
func cellsOf(grids []*grid) string {
	var b strings.Builder
	for _, g := range grids {
		for _, r := range g.rows {
			fmt.Fprintf(&b, "%s %d %q\n", g.table, r.number, r.cells)
		}
		for _, r := range g.comments {
			fmt.Fprintf(&b, "%s %d %q\n", g.table, r.number, r.cells)
		}
	}
	return b.String()
}

// TestOneBitFlips: a workbook with one bit changed is refused or read with the
// same cells, never otherwise. The seed replays the flips.
func TestOneBitFlips(t *testing.T) {
	flips := 2000
	if testing.Short() {
		flips = 200
	}
	data := demoWorkbook(t)
	grids, faults, _ := readWorkbook("site.xlsx", data, tableNames())
	require.Empty(t, faults)
	want := cellsOf(grids)
	const seed = 20260331
	random := rand.New(rand.NewPCG(seed, 1))
	refused := 0
	for i := range flips {
		at, bit := random.IntN(len(data)), random.IntN(8)
		flipped := bytes.Clone(data)
		flipped[at] ^= 1 << bit
		got, faults, _ := readWorkbook("site.xlsx", flipped, tableNames())
		if len(faults) > 0 {
			refused++
			require.NotEmpty(t, faults[0].Message)
			continue
		}
		require.Equal(t, want, cellsOf(got), "seed %d, flip %d: bit %d of byte %d", seed, i, bit, at)
	}
	t.Logf("%d of %d flips refused", refused, flips)
	// Nearly every byte of the file stands under a checksum.
	assert.Greater(t, refused, flips*9/10)
}

// TestDirectoryFlips: the archive's directory and headers have no checksum, so
// every bit of them is flipped in turn.
func TestDirectoryFlips(t *testing.T) {
	data := demoWorkbook(t)
	grids, _, _ := readWorkbook("site.xlsx", data, tableNames())
	want := cellsOf(grids)
	entries, err := readDirectory(data)
	require.NoError(t, err)
	var bytesToFlip []int
	for _, e := range entries {
		for at := int(e.offset); at < int(e.offset)+30+len(e.name); at++ {
			bytesToFlip = append(bytesToFlip, at)
		}
	}
	end := bytes.LastIndex(data, []byte(endRecord))
	for at := int(binary.LittleEndian.Uint32(data[end+16:])); at < len(data); at++ {
		bytesToFlip = append(bytesToFlip, at)
	}
	step := 75 // of bits: odd, so that every kind of bit has its turn
	if testing.Short() {
		step = 601
	}
	for n := 0; n < 8*len(bytesToFlip); n += step {
		at, bit := bytesToFlip[n/8], n%8
		flipped := bytes.Clone(data)
		flipped[at] ^= 1 << bit
		if got, faults, _ := readWorkbook("site.xlsx", flipped, tableNames()); len(faults) == 0 {
			require.Equal(t, want, cellsOf(got), "bit %d of byte %d", bit, at)
		}
	}
}

func TestTruncatedWorkbooks(t *testing.T) {
	data := demoWorkbook(t)
	for i := range 60 {
		cut := data[:len(data)*i/60]
		_, faults, _ := readWorkbook("site.xlsx", cut, tableNames())
		require.Len(t, faults, 1, "%d bytes of %d", len(cut), len(data))
	}
	for short := 1; short <= 30; short++ {
		_, faults, _ := readWorkbook("site.xlsx", data[:len(data)-short], tableNames())
		require.Len(t, faults, 1, "%d bytes short", short)
	}
}

// zipOf packs parts, in the order given, as name, body, name, body.
func zipOf(t testing.TB, parts ...string) []byte {
	t.Helper()
	var b bytes.Buffer
	w := zip.NewWriter(&b)
	for i := 0; i < len(parts); i += 2 {
		f, err := w.Create(parts[i])
		require.NoError(t, err)
		_, err = f.Write([]byte(parts[i+1]))
		require.NoError(t, err)
	}
	require.NoError(t, w.Close())
	return b.Bytes()
}

// compound makes the head of a file of the older kind that names a stream.
func compound(stream string) []byte {
	return append(append(bytes.Clone(compoundFile), make([]byte, 504)...), utf16le(stream)...)
}

// TestFilesThatAreNoWorkbook: each kind is refused with its own message.
func TestFilesThatAreNoWorkbook(t *testing.T) {
	types := `<Types><Override ContentType="application/vnd.ms-excel.sheet.macroEnabled.main+xml" PartName="/xl/workbook.xml"/></Types>`
	for _, c := range []struct {
		name string
		data []byte
		want string
	}{
		{"empty", nil, "the file is empty"},
		{"text", []byte("id,power [W]\nA1,20\n"), "not an .xlsx workbook"},
		{"beginning of an archive", []byte("PK\x03\x04"), "ends too early"},
		{"empty archive", []byte("PK\x05\x06" + strings.Repeat("\x00", 18)), "holds nothing"},
		{"password", compound("EncryptedPackage"), "locked with a password"},
		{"old format", compound("Workbook"), "old .xls workbook; save it as .xlsx"},
		{"older format", compound("Book"), "old .xls workbook; save it as .xlsx"},
		{"compound file", compound("Contents"), "either locked with a password or an old .xls"},
		{"OpenDocument", zipOf(t, "mimetype", "application/vnd.oasis.opendocument.spreadsheet"), "OpenDocument file; save it as .xlsx"},
		{"packed folder", zipOf(t, "antennas.csv", "id\n"), "not a workbook; if it is a packed folder"},
		{"macros", zipOf(t, "[Content_Types].xml", "<Types/>", "xl/vbaProject.bin", "x"), "carries macros"},
		{"macro type", zipOf(t, "[Content_Types].xml", types), "carries macros"},
		{"binary", zipOf(t, "[Content_Types].xml", "<Types/>", "xl/workbook.bin", "x"), "binary workbook (.xlsb)"},
		{"text document", zipOf(t, "[Content_Types].xml", "<Types/>", "word/document.xml", "<document/>",
			"_rels/.rels", `<Relationships><Relationship Id="a" Type="x/officeDocument" Target="word/document.xml"/></Relationships>`), "not a workbook"},
		{"too large a file", make([]byte, workbookMaxFile+1), "more than the 64 MiB"},
	} {
		grids, faults, _ := readWorkbook("site.xlsx", c.data, tableNames())
		assert.Empty(t, grids, c.name)
		if assert.Len(t, faults, 1, c.name) {
			assert.Contains(t, faults[0].Error(), c.want, c.name)
			assert.Contains(t, faults[0].Error(), "site.xlsx: ", c.name)
		}
	}
}

// TestWorkbookThatUnpacksTooFar: a small file that holds a huge part.
func TestWorkbookThatUnpacksTooFar(t *testing.T) {
	var b bytes.Buffer
	w := zip.NewWriter(&b)
	f, err := w.Create("xl/worksheets/sheet1.xml")
	require.NoError(t, err)
	_, err = io.CopyN(f, zeros{}, workbookMaxUnpacked+1)
	require.NoError(t, err)
	require.NoError(t, w.Close())
	require.Less(t, b.Len(), 1<<20)
	_, faults, _ := readWorkbook("site.xlsx", b.Bytes(), tableNames())
	require.Len(t, faults, 1)
	assert.Contains(t, faults[0].Message, "unpacks to more than 128 MiB")
}

type zeros struct{}

func (zeros) Read(p []byte) (int, error) { clear(p); return len(p), nil }

// repack changes parts of a workbook inside an archive that is itself sound.
func repack(t testing.TB, data []byte, edit func(name, body string) (string, string, bool)) []byte {
	t.Helper()
	in, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	require.NoError(t, err)
	var parts []string
	for _, f := range in.File {
		r, err := f.Open()
		require.NoError(t, err)
		body, err := io.ReadAll(r)
		require.NoError(t, err)
		require.NoError(t, r.Close())
		if name, text, keep := edit(f.Name, string(body)); keep {
			parts = append(parts, name, text)
		}
	}
	return zipOf(t, parts...)
}

// replaceIn returns an edit that replaces text in one part, which must be there.
func replaceIn(t testing.TB, part, from, to string) func(name, body string) (string, string, bool) {
	return func(name, body string) (string, string, bool) {
		if name == part {
			require.Contains(t, body, from)
			body = strings.Replace(body, from, to, 1)
		}
		return name, body, true
	}
}

// TestDamageInsideASoundArchive: what checksums do not show.
func TestDamageInsideASoundArchive(t *testing.T) {
	data := demoWorkbook(t)
	const antennas = "xl/worksheets/sheet4.xml"
	cut := func(share float64) func(name, body string) (string, string, bool) {
		return func(name, body string) (string, string, bool) {
			if name == antennas {
				body = body[:int(float64(len(body))*share)]
			}
			return name, body, true
		}
	}
	drop := func(part string) func(name, body string) (string, string, bool) {
		return func(name, body string) (string, string, bool) { return name, body, name != part }
	}
	for _, c := range []struct {
		name string
		edit func(name, body string) (string, string, bool)
		want string
	}{
		{"sheet cut at 30 %", cut(0.3), "damaged"},
		{"sheet cut at 60 %", cut(0.6), "damaged"},
		{"sheet cut at 90 %", cut(0.9), "damaged"},
		{"sheet emptied", cut(0), antennas + " is empty"},
		{"sheet lost", drop(antennas), antennas + " is missing"},
		{"texts lost", drop("xl/sharedStrings.xml"), "sharedStrings.xml is missing"},
		{"sheet not listed", replaceIn(t, "xl/workbook.xml", `name="antennas"`, `name="site"`), `two sheets are named "site"`},
		{"sheet listed under another mark", replaceIn(t, "xl/_rels/workbook.xml.rels", `worksheets/sheet4.xml`, `worksheets/sheet5.xml`), "two sheets share part"},
		{"texts cut", replaceIn(t, "xl/sharedStrings.xml", "<si>", "<!--<si>"), "damaged"},
		{"text number out of range", replaceIn(t, antennas, `t="s"><v>`, `t="s"><v>99`), "refers to text"},
		{"number that is none", replaceIn(t, antennas, `<v>58.8</v>`, `<v>58,8</v>`), `"58,8" for a number`},
		{"row out of order", replaceIn(t, antennas, `<row r="5"`, `<row r="2"`), `row "2" after row 4`},
		{"cell out of order", replaceIn(t, antennas, `r="C4"`, `r="A4"`), `cell "A4" in row 4`},
		{"kind of cell", replaceIn(t, antennas, `t="s"`, `t="w"`), `kind "w"`},
		{"style out of range", replaceIn(t, antennas, `r="C4" s="`, `r="C4" s="9`), "style"},
		{"document type", replaceIn(t, antennas, "<worksheet", "<!DOCTYPE w><worksheet"), "document type"},
		{"second end", replaceIn(t, antennas, "</sheetData>", "</sheetData></worksheet>"), "damaged"},
	} {
		grids, faults, _ := readWorkbook("site.xlsx", repack(t, data, c.edit), tableNames())
		assert.Empty(t, grids, c.name)
		if assert.Len(t, faults, 1, c.name) {
			assert.Contains(t, faults[0].Message, c.want, c.name)
		}
	}
	// The same archive unchanged is read.
	same := repack(t, data, func(name, body string) (string, string, bool) { return name, body, true })
	_, faults, _ := readWorkbook("site.xlsx", same, tableNames())
	assert.Empty(t, faults)
}

// TestNamesInTheArchive: names that hide or double a part.
func TestNamesInTheArchive(t *testing.T) {
	data := demoWorkbook(t)
	twice := repack(t, data, func(name, body string) (string, string, bool) {
		return strings.Replace(name, "sheet4.xml", "Sheet3.xml", 1), body, true
	})
	_, faults, _ := readWorkbook("site.xlsx", twice, tableNames())
	require.Len(t, faults, 1)
	assert.Contains(t, faults[0].Message, "two parts are named")

	orphan := repack(t, data, func(name, body string) (string, string, bool) { return name, body, true })
	orphan = addPart(t, orphan, "xl/worksheets/sheet99.xml", "<worksheet><sheetData/></worksheet>")
	_, faults, _ = readWorkbook("site.xlsx", orphan, tableNames())
	require.Len(t, faults, 1)
	assert.Contains(t, faults[0].Message, "sheet99.xml belongs to no sheet")

	hidden := bytes.Clone(data)
	at := bytes.LastIndex(hidden, []byte("xl/worksheets/sheet4.xml"))
	copy(hidden[at:], "xl/worksheets/sheet_.xml")
	_, faults, _ = readWorkbook("site.xlsx", hidden, tableNames())
	require.Len(t, faults, 1)
	assert.Contains(t, faults[0].Message, "bears another name")

	for _, name := range []string{"../x.xml", `xl\x.xml`, "/x.xml"} {
		_, faults, _ = readWorkbook("site.xlsx", addPart(t, data, name, "<x/>"), tableNames())
		require.Len(t, faults, 1, name)
		assert.Contains(t, faults[0].Message, "damaged", name)
	}
}

func addPart(t testing.TB, data []byte, name, body string) []byte {
	t.Helper()
	in, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	require.NoError(t, err)
	var b bytes.Buffer
	w := zip.NewWriter(&b)
	for _, f := range in.File {
		require.NoError(t, w.Copy(f))
	}
	f, err := w.Create(name)
	require.NoError(t, err)
	_, err = f.Write([]byte(body))
	require.NoError(t, err)
	require.NoError(t, w.Close())
	return b.Bytes()
}

// TestSheetThatReachesTooFar: one cell far out, which would cost much to read.
func TestSheetThatReachesTooFar(t *testing.T) {
	for _, far := range []struct{ row, cell string }{{"1048576", "A1048576"}, {"900", "XFD900"}} {
		data := repack(t, demoWorkbook(t), replaceIn(t, "xl/worksheets/sheet4.xml", "</sheetData>",
			`<row r="`+far.row+`"><c r="`+far.cell+`"><v>1</v></c></row></sheetData>`))
		_, faults, _ := readWorkbook("site.xlsx", data, tableNames())
		require.Len(t, faults, 1, far.cell)
		assert.Contains(t, faults[0].Message, "the sheet reaches antennas!"+far.cell, far.cell)
	}
}

// FuzzSheet: no sheet, however broken, ends in a panic or in cells without place.
func FuzzSheet(f *testing.F) {
	data := typed(f, func(*excelize.File) {}) // small, so that many can be tried
	const part = "xl/worksheets/sheet1.xml"
	repack(f, data, func(name, body string) (string, string, bool) {
		if name == part {
			f.Add(body)
		}
		return name, body, true
	})
	f.Add(`<worksheet><sheetData><row r="1"><c r="A1" t="inlineStr"><is><t>id</t></is></c></row></sheetData></worksheet>`)
	f.Add(`<worksheet><cols><col min="1" hidden="1"/></cols><sheetData><row><c><f>1</f></c></row></sheetData><mergeCells><mergeCell ref="A1:B2"/></mergeCells></worksheet>`)
	f.Fuzz(func(t *testing.T, body string) {
		changed := repack(t, data, func(name, old string) (string, string, bool) {
			if name == part {
				return name, body, true
			}
			return name, old, true
		})
		grids, faults, _ := readWorkbook("site.xlsx", changed, tableNames())
		if len(grids) == 0 && len(faults) == 0 {
			t.Fatal("neither tables nor faults")
		}
		for _, g := range grids {
			for _, r := range g.rows {
				if r.number < 1 || r.number > workbookMaxRows || len(r.cells) > workbookMaxColumns {
					t.Fatalf("%s row %d with %d cells", g.sheet, r.number, len(r.cells))
				}
			}
		}
	})
}
