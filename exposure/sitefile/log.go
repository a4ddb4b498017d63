package sitefile

import (
	"bufio"
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math"
	"strings"

	"golang.org/x/text/encoding"
	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
	"example.org/standclear/exposure/units"
)

// logFile is a log in a file of its own: an instrument's export, read line by
// line with memory for one line. It implements survey.Samples.
type logFile struct {
	fsys        fs.FS
	name        string
	mapped      map[string]mapping // of the readings table
	unitsRow    bool
	windows1252 bool

	files []exposure.InputFile
	blank int
}

// logHead is what the lines before the samples say.
type logHead struct {
	line     int // of the header row
	headers  []string
	comma    byte
	timeAt   []int // one column, or a date and a time of day
	valueAt  int
	unit     units.Unit
	quantity survey.Quantity
	zone     zone
	zoneS    int
	warnings []exposure.Warning
}

func (l *loader) log(name string, _ survey.Quantity) *logFile {
	return &logFile{fsys: l.fsys, name: name, mapped: l.mappings["readings"], unitsRow: l.options.UnitsRow, windows1252: l.options.Windows1252}
}

// Files returns the file that Each has read.
func (f *logFile) Files() []exposure.InputFile { return f.files }

// Remarks returns what Each has noticed.
func (f *logFile) Remarks() []string {
	if f.blank == 0 {
		return nil
	}
	return []string{fmt.Sprintf("%d rows of %s have no figure and were left out", f.blank, f.name)}
}

// lineBuffer is the size of the read buffer, and with it the longest line.
const lineBuffer = 1 << 18

// scanner reads lines of a log and counts them.
type scanner struct {
	in   *bufio.Reader
	line int
}

func (f *logFile) open(sum io.Writer) (*scanner, io.Closer, error) {
	file, err := f.fsys.Open(f.name)
	if err != nil {
		return nil, nil, err
	}
	var r io.Reader = file
	if sum != nil {
		r = io.TeeReader(file, sum)
	}
	in := bufio.NewReaderSize(r, lineBuffer)
	mark, _ := in.Peek(3)
	switch {
	case bytes.HasPrefix(mark, []byte("PK\x03")):
		file.Close()
		return nil, nil, Faults{{File: f.name, Message: "this is a workbook or another zip file, not a log as text; save it as CSV"}}
	case bytes.HasPrefix(mark, []byte("\xff\xfe")), bytes.HasPrefix(mark, []byte("\xfe\xff")):
		in = bufio.NewReaderSize(transform.NewReader(in, unicode.BOMOverride(encoding.Nop.NewDecoder())), lineBuffer)
	case bytes.HasPrefix(mark, []byte("\xef\xbb\xbf")):
		_, _ = in.Discard(3)
	case f.windows1252:
		in = bufio.NewReaderSize(charmap.Windows1252.NewDecoder().Reader(in), lineBuffer)
	}
	return &scanner{in: in}, file, nil
}

// next returns the next line without its end; it holds until the one after.
func (s *scanner) next(name string) ([]byte, error) {
	b, err := s.in.ReadSlice('\n')
	s.line++
	switch {
	case err == nil:
		b = b[:len(b)-1]
	case errors.Is(err, io.EOF) && len(b) > 0:
	case errors.Is(err, bufio.ErrBufferFull):
		return nil, Faults{{File: name, Row: s.line, Message: "the line is too long for a log; check that the file is text with line ends"}}
	default:
		return nil, err
	}
	if n := len(b); n > 0 && b[n-1] == '\r' {
		b = b[:n-1]
	}
	return b, nil
}

// header reads the header alone.
func (f *logFile) header() (*logHead, error) {
	s, file, err := f.open(nil)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	return f.head(s)
}

// leadLines is how many lines may stand before the header of an export.
const leadLines = 500

// head reads up to the header row, and the row of units where there is one.
func (f *logFile) head(s *scanner) (*logHead, error) {
	var skipped []int
	for s.line < leadLines {
		b, err := s.next(f.name)
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return nil, err
		}
		line := string(b)
		if strings.TrimSpace(line) == "" || strings.HasPrefix(strings.TrimSpace(line), "#") {
			continue
		}
		h, fault := f.understand(line, s.line)
		if h == nil && fault == "" {
			skipped = append(skipped, s.line)
			continue
		}
		if fault == "" && f.unitsRow {
			fault = f.unitsFrom(h, s)
		}
		if fault == "" && h.unit.Symbol == "" {
			fault = fmt.Sprintf("the column %q names no unit; write it in brackets, such as %s [%s], or in the columns table, or read the row below the header with --units-row", h.headers[h.valueAt], h.quantity, unitOf(h.quantity))
		}
		if fault != "" {
			return nil, Faults{{File: f.name, Row: s.line, Text: strings.TrimSpace(line), Message: fault}}
		}
		if n := len(skipped); n > 0 {
			h.warnings = append(h.warnings, exposure.Warning{Place: fmt.Sprintf("%s:%d", f.name, skipped[0]), Message: fmt.Sprintf("%s before the header in row %d and not read", linesStand(n), h.line)})
		}
		return h, nil
	}
	return nil, Faults{{File: f.name, Message: "no header row was found: it needs a column time and one of E, H, S, port level and share of limit, by these names or by the columns table"}}
}

func linesStand(n int) string {
	if n == 1 {
		return "one line stands"
	}
	return fmt.Sprintf("%d lines stand", n)
}

func unitOf(q survey.Quantity) string {
	c, _ := readingsTable.Column(string(q))
	return c.Unit
}

// understand takes a line as the header of a log; nil and no fault where it is
// none.
func (f *logFile) understand(line string, number int) (*logHead, string) {
	for _, comma := range []byte{'\t', ';', ','} {
		cells := strings.Split(line, string(comma))
		h := &logHead{line: number, comma: comma, valueAt: -1}
		var others []string
		for i, c := range cells {
			c = strings.TrimSpace(strings.Trim(strings.TrimSpace(c), `"`))
			h.headers = append(h.headers, c)
			name, unit, hasUnit := splitHeader(c)
			m, isMapped := f.mapped[strings.ToLower(c)]
			if isMapped {
				name, unit, hasUnit = m.to, m.unit, m.unit != ""
			}
			switch quantity := valueColumn(name); {
			case strings.EqualFold(name, "time"):
				h.timeAt = append(h.timeAt, i)
				if hasUnit {
					z, ok := parseZone(unit)
					if !ok {
						return nil, fmt.Sprintf("%q is not a zone of time; write its offset, such as +01:00 or UTC", unit)
					}
					h.zone = z
				}
			case quantity == "":
				if c != "" {
					others = append(others, c)
				}
			case h.valueAt >= 0:
				return nil, fmt.Sprintf("the log has the columns %q and %q; map the one that counts in the columns table, or take the other out", h.headers[h.valueAt], c)
			default:
				h.valueAt, h.quantity = i, quantity
				column, _ := readingsTable.Column(string(quantity))
				if hasUnit {
					u, problem := headerUnit(column, unit, true)
					if problem != "" {
						return nil, problem
					}
					h.unit = u
				}
			}
		}
		if len(h.timeAt) == 0 || h.valueAt < 0 {
			continue
		}
		if len(h.timeAt) > 2 {
			return nil, "more than two columns are mapped to time; a date and a time of day may be, in this order"
		}
		if len(others) > 0 {
			h.warnings = append(h.warnings, exposure.Warning{Place: fmt.Sprintf("%s:%d", f.name, number), Message: "columns of the log that are not read: " + strings.Join(others, ", ")})
		}
		return h, ""
	}
	return nil, ""
}

// valueColumn returns the quantity that a column of readings holds.
func valueColumn(name string) survey.Quantity {
	for _, v := range readingValues {
		if strings.EqualFold(v.column, name) {
			return v.quantity
		}
	}
	return ""
}

// unitsFrom takes the units from the row below the header.
func (f *logFile) unitsFrom(h *logHead, s *scanner) string {
	b, err := s.next(f.name)
	if err != nil {
		return "there is no row of units below the header"
	}
	cells := strings.Split(string(b), string(h.comma))
	if h.valueAt >= len(cells) {
		return "the row of units below the header is shorter than the header"
	}
	unit := strings.Trim(strings.TrimSpace(cells[h.valueAt]), `"[]() `)
	column, _ := readingsTable.Column(string(h.quantity))
	u, problem := headerUnit(column, unit, true)
	if problem != "" {
		return "row of units: " + problem
	}
	if h.unit.Symbol != "" && h.unit.Symbol != u.Symbol {
		return fmt.Sprintf("the header says [%s] and the row of units [%s]; one of them is wrong", h.unit.Symbol, u.Symbol)
	}
	h.unit = u
	if i := h.timeAt[len(h.timeAt)-1]; i < len(cells) && !h.zone.known {
		if z, ok := parseZone(strings.Trim(strings.TrimSpace(cells[i]), `"[]() `)); ok {
			h.zone = z
		}
	}
	return ""
}

// mostLogFaults is how many faults of a log are collected before it is given up.
const mostLogFaults = 20

// Each reads the log in one pass and calls f for each sample.
func (f *logFile) Each(ctx context.Context, yield func(ns int64, value float64) error) error {
	sum := sha256.New()
	s, file, err := f.open(sum)
	if err != nil {
		return err
	}
	defer file.Close()
	h, err := f.head(s)
	if err != nil {
		return err
	}
	var faults Faults
	fault := func(column int, text []byte, format string, args ...any) error {
		faults = append(faults, Fault{File: f.name, Row: s.line, Column: h.headers[column], Text: string(text), Message: fmt.Sprintf(format, args...)})
		if len(faults) == mostLogFaults {
			return faults
		}
		return nil
	}
	clock := clock{zone: h.zone}
	decimalComma := h.comma != ','
	level := h.unit.IsLog()
	scale := 1.0
	if !level {
		scale = h.unit.ToSI(1)
	}
	last := max(h.valueAt, h.timeAt[len(h.timeAt)-1])
	var cells [64][]byte
	if last >= len(cells) {
		return Faults{{File: f.name, Row: h.line, Message: "the columns of time and figure lie beyond the 64th; move them forward"}}
	}
	var joined []byte
	f.blank = 0
	for n := 0; ; n++ {
		if n&0xffff == 0 {
			if err := ctx.Err(); err != nil {
				return err
			}
		}
		b, err := s.next(f.name)
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return err
		}
		if len(b) == 0 || b[0] == '#' || len(bytes.TrimSpace(b)) == 0 {
			continue
		}
		rest := b
		for i := 0; i <= last; i++ {
			k := bytes.IndexByte(rest, h.comma)
			if k < 0 {
				cells[i], rest = rest, nil
				if i < last {
					for j := i + 1; j <= last; j++ {
						cells[j] = nil
					}
				}
				break
			}
			cells[i], rest = rest[:k], rest[k+1:]
		}
		stamp := bare(cells[h.timeAt[0]])
		if len(h.timeAt) == 2 {
			joined = append(append(append(joined[:0], stamp...), ' '), bare(cells[h.timeAt[1]])...)
			stamp = joined
		}
		text := bare(cells[h.valueAt])
		if len(text) == 0 {
			f.blank++
			continue
		}
		ns, problem := clock.parse(stamp)
		if problem != "" {
			if err := fault(h.timeAt[0], stamp, "%q %s", stamp, problem); err != nil {
				return err
			}
			continue
		}
		v, ok := fastNumber(text, decimalComma)
		if !ok {
			v, err = units.ParseNumber(string(text), decimalComma)
			if err != nil {
				if err := fault(h.valueAt, text, "%s", err); err != nil {
					return err
				}
				continue
			}
		}
		if level {
			v = h.unit.ToSI(v)
		} else {
			v *= scale
		}
		if !(v >= 0) || math.IsInf(v, 0) {
			if err := fault(h.valueAt, text, "%q cannot be the level of a field; write a number 0 or more, or a level in dB with its unit", text); err != nil {
				return err
			}
			continue
		}
		if len(faults) > 0 {
			continue // the log is refused: only further faults are looked for
		}
		if err := yield(ns, v); err != nil {
			return err
		}
	}
	if len(faults) > 0 {
		return faults
	}
	info, err := file.(fs.File).Stat()
	if err != nil {
		return err
	}
	f.files = []exposure.InputFile{{Name: f.name, SHA256: hex.EncodeToString(sum.Sum(nil)), Bytes: info.Size()}}
	return nil
}

// bare takes blanks and quotation marks off a cell.
func bare(b []byte) []byte {
	for len(b) > 0 && (b[0] == ' ' || b[0] == '\t' || b[0] == '"') {
		b = b[1:]
	}
	for len(b) > 0 && (b[len(b)-1] == ' ' || b[len(b)-1] == '\t' || b[len(b)-1] == '"') {
		b = b[:len(b)-1]
	}
	return b
}

// tens are powers of ten that a float64 holds exactly.
var tens = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15}

// fastNumber reads a plain decimal number of at most 15 digits, exactly as
// strconv would: the digits and the power of ten are exact, and one division is
// rounded once. Anything else is left to units.ParseNumber.
func fastNumber(b []byte, decimalComma bool) (float64, bool) {
	i, negative := 0, false
	if len(b) > 0 && b[0] == '-' {
		negative, i = true, 1
	}
	var m uint64
	digits, places, point := 0, 0, false
	for ; i < len(b); i++ {
		switch c := b[i]; {
		case c >= '0' && c <= '9':
			m = m*10 + uint64(c-'0')
			digits++
			if point {
				places++
			}
		case c == '.' && !point, c == ',' && decimalComma && !point:
			point = true
		default:
			return 0, false
		}
	}
	if digits == 0 || digits > 15 {
		return 0, false
	}
	v := float64(m) / tens[places]
	if negative {
		v = -v
	}
	return v, true
}
