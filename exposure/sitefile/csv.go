package sitefile

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"

	"example.org/standclear/exposure"
)

// readCSV makes a grid of a CSV file. It accepts commas, semicolons or tabs
// (told from the first row that does not start with #), UTF-8 with or without
// a mark and UTF-16 with one, and any line ends.
func readCSV(file, table string, data []byte, windows1252 bool) (*grid, Faults) {
	g := &grid{table: table, file: file}
	text, fault := decode(data, windows1252)
	if fault != "" {
		return g, Faults{{File: file, Message: fault}}
	}
	text = strings.ReplaceAll(text, "\r\n", "\n")
	text = strings.ReplaceAll(text, "\r", "\n")
	comma, skip, f := delimiter(text)
	if f != nil {
		f.File = file
		return g, Faults{*f}
	}
	g.decimalComma = comma != ','
	faults := g.records(text[skip:], strings.Count(text[:skip], "\n"), comma)
	return g, faults
}

// decode returns the text of a file, or why it cannot be read.
func decode(data []byte, windows1252 bool) (text, fault string) {
	switch {
	case len(bytes.TrimSpace(data)) == 0:
		return "", "the file is empty; write its header row, or delete it"
	case bytes.HasPrefix(data, []byte("PK\x03\x04")):
		return "", "this is a workbook or another zip file, not CSV; save it as CSV, or give it the ending .xlsx"
	case bytes.HasPrefix(data, []byte("\xff\xfe")), bytes.HasPrefix(data, []byte("\xfe\xff")):
		out, _, err := transform.String(unicode.BOMOverride(encoding.Nop.NewDecoder()), string(data))
		if err != nil || strings.ContainsRune(out, utf8.RuneError) {
			return "", "the UTF-16 text is damaged; save the file as UTF-8"
		}
		return out, ""
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	if i := bytes.IndexByte(data, 0); i >= 0 {
		if i < 100 {
			return "", "the file looks like UTF-16 without a byte order mark; save it as UTF-8"
		}
		return "", fmt.Sprintf("line %d has a NUL byte, so the file is damaged or not text; save it as UTF-8", 1+bytes.Count(data[:i], []byte("\n")))
	}
	if windows1252 && !utf8.Valid(data) {
		out, err := charmap.Windows1252.NewDecoder().Bytes(data)
		if err != nil {
			return "", "the file is not Windows-1252 text; save it as UTF-8"
		}
		return string(out), ""
	}
	if !utf8.Valid(data) {
		line, rest := 1, data
		for {
			r, n := utf8.DecodeRune(rest)
			if r == utf8.RuneError && n <= 1 {
				break
			}
			if r == '\n' {
				line++
			}
			rest = rest[n:]
		}
		return "", fmt.Sprintf("line %d is not UTF-8 text; save the file as CSV UTF-8", line)
	}
	return string(data), ""
}

var delimiters = []rune{',', ';', '\t'}

// delimiter tells what separates the cells from the first row that has text and
// does not start with #. skip is the length of a leading "sep=;" line, by which
// some spreadsheets say so.
func delimiter(text string) (comma rune, skip int, f *Fault) {
	for _, d := range delimiters {
		if lead := "sep=" + string(d); strings.HasPrefix(text, lead) {
			if rest := text[len(lead):]; rest == "" || rest[0] == '\n' {
				return d, min(len(text), len(lead)+1), nil
			}
		}
	}
	number := 0
	for line := range strings.Lines(text) {
		number++
		if bare := strings.Trim(line, " \u00a0,;\t\"\n"); bare == "" || bare[0] == '#' {
			continue
		}
		var n [3]int
		quoted := false
		for _, c := range line {
			if c == '"' {
				quoted = !quoted
			}
			for i, d := range delimiters {
				if c == d && !quoted {
					n[i]++
				}
			}
		}
		best, tie := 0, false
		for i := 1; i < len(n); i++ {
			if n[i] > n[best] {
				best, tie = i, false
			} else if n[i] == n[best] && n[i] > 0 {
				tie = true
			}
		}
		if tie {
			return 0, 0, &Fault{Row: number, Text: strings.TrimSpace(line), Message: "the header has as many of one separator as of another, so that the cells cannot be told apart; use only commas, only semicolons or only tabs"}
		}
		return delimiters[best], 0, nil
	}
	return ',', 0, nil
}

// records splits the text into rows. before is the number of lines that were
// taken off its start.
func (g *grid) records(text string, before int, comma rune) (faults Faults) {
	lines := strings.Split(text, "\n")
	width := 0 // cells of the header row, trailing blank ones included
	var short []int
	r := csv.NewReader(strings.NewReader(text))
	r.Comma = comma
	r.FieldsPerRecord = -1
	// "a", "b" is quoted for the reader, blank in front or not; tabs are blanks.
	r.TrimLeadingSpace = comma != '\t'
	for {
		cells, err := r.Read()
		if errors.Is(err, io.EOF) {
			if len(short) > 0 {
				g.warnings = append(g.warnings, exposure.Warning{Place: g.place(short[0]), Message: fmt.Sprintf(
					"%s before the header does: the cells that are not there count as blank; check that none is missing further in front", rowsEnd(short))})
			}
			return faults
		}
		var pe *csv.ParseError
		switch {
		case errors.As(err, &pe) && pe.Line == pe.StartLine && strings.HasPrefix(strings.TrimSpace(lines[pe.StartLine-1]), "#"):
			// A comment may hold quotes that belong to no cell.
			g.add(gridRow{number: before + pe.StartLine, cells: []string{strings.TrimSpace(lines[pe.StartLine-1])}})
			continue
		case errors.As(err, &pe):
			f := Fault{File: g.file, Row: before + pe.StartLine, Text: strings.TrimSpace(lines[pe.StartLine-1])}
			switch {
			case errors.Is(err, csv.ErrBareQuote):
				f.Message = "a quotation mark stands inside a cell that is not quoted; put the whole cell in quotation marks and double those inside"
			case pe.Line > pe.StartLine:
				f.Message = fmt.Sprintf("a quotation mark is opened here and not closed properly up to line %d; close it, and double those inside a quoted cell", before+pe.Line)
			default:
				f.Message = "a quotation mark is not closed, or text follows it; close it, and double those inside a quoted cell"
			}
			faults = append(faults, f)
			continue
		case err != nil:
			return append(faults, Fault{File: g.file, Message: err.Error()})
		}
		line, _ := r.FieldPos(0)
		row := gridRow{number: before + line, cells: cells}
		for i, c := range cells {
			if strings.Contains(c, "\n") {
				if strings.HasPrefix(strings.TrimSpace(lines[line-1]), "#") {
					faults = append(faults, Fault{File: g.file, Row: row.number, Text: strings.TrimSpace(lines[line-1]),
						Message: "a quotation mark is opened in this comment and closed on another line; close it on this one"})
				} else if swallowed(c, comma) {
					g.warnings = append(g.warnings, exposure.Warning{Place: g.place(row.number), Message: fmt.Sprintf(
						"a quoted cell runs over %d lines that look like rows; check its quotation marks", 1+strings.Count(c, "\n"))})
				}
			}
			cells[i] = strings.TrimSpace(c)
		}
		before := len(g.rows)
		if g.add(row); len(g.rows) == before {
			continue
		}
		if before == 0 {
			width = len(cells)
		} else if len(cells) < width {
			short = append(short, row.number)
		}
	}
}

// rowsEnd is the start of a sentence about rows.
func rowsEnd(rows []int) string {
	if len(rows) == 1 {
		return "the row ends"
	}
	return fmt.Sprintf("this row and %d more end", len(rows)-1)
}

// swallowed reports whether a quoted cell with line breaks looks as if it held
// rows of the table: a line of it with three separators or more.
func swallowed(cell string, comma rune) bool {
	for line := range strings.Lines(cell) {
		if strings.Count(line, string(comma)) >= 3 && !strings.Contains(strings.ToUpper(cell), "POLYGON") {
			return true
		}
	}
	return false
}
