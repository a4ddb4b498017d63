package sitefile

import (
	"encoding/xml"
	"fmt"
	"math"
	"strconv"
	"strings"
	"time"

	"github.com/xuri/excelize/v2"
)

// numberFormat is what a cell style makes of a stored number.
type numberFormat struct {
	kind     formatKind
	decimals int // shown after the point, where the style fixes them
}

type formatKind int

const (
	plainNumber  formatKind = iota
	fixedNumber             // with a fixed number of decimals
	dateNumber              // days since the workbook's epoch
	timeNumber              // share of a day
	percentShown            // shown a hundred times what is stored
)

// styles returns the number format of each cell style of the workbook.
func (p packageParts) styles(name string) ([]numberFormat, error) {
	if name == "" {
		return nil, nil
	}
	var doc struct {
		Formats []struct {
			ID   int    `xml:"numFmtId,attr"`
			Code string `xml:"formatCode,attr"`
		} `xml:"numFmts>numFmt"`
		Cells []struct {
			Format int `xml:"numFmtId,attr"`
		} `xml:"cellXfs>xf"`
	}
	if err := xml.Unmarshal(p.byName[strings.ToLower(name)].data, &doc); err != nil {
		return nil, damaged("part %s: %v", name, err)
	}
	codes := map[int]string{}
	for _, f := range doc.Formats {
		codes[f.ID] = f.Code
	}
	var out []numberFormat
	for _, c := range doc.Cells {
		if code, ok := codes[c.Format]; ok {
			out = append(out, formatOf(code))
		} else {
			out = append(out, builtInFormat(c.Format))
		}
	}
	return out, nil
}

// builtInFormat returns what a number format without a code of its own shows.
// Source: ECMA-376 Part 1, 18.8.30 (from memory); 27 to 36 and 50 to 58 are dates
// in East Asian programs.
func builtInFormat(id int) numberFormat {
	switch {
	case id == 1 || id == 3:
		return numberFormat{kind: fixedNumber}
	case id == 2 || id == 4:
		return numberFormat{fixedNumber, 2}
	case id == 9 || id == 10:
		return numberFormat{kind: percentShown}
	case id >= 14 && id <= 17, id == 22, id >= 27 && id <= 31, id == 36, id >= 50 && id <= 54, id == 57, id == 58:
		return numberFormat{kind: dateNumber}
	case id >= 18 && id <= 21, id >= 32 && id <= 35, id >= 45 && id <= 47, id == 55, id == 56:
		return numberFormat{kind: timeNumber}
	}
	return numberFormat{}
}

// formatOf reads a number format code: the letters y, m, d, h, s outside quotes,
// escapes and brackets make a date, a percent sign a percentage.
func formatOf(code string) numberFormat {
	var letters strings.Builder
	runes := []rune(strings.ToLower(code))
	for i := 0; i < len(runes); i++ {
		switch c := runes[i]; c {
		case '\\', '_', '*':
			i++
		case '"', '[':
			until := '"'
			if c == '[' {
				until = ']'
			}
			from := i + 1
			for i++; i < len(runes) && runes[i] != until; i++ {
			}
			if in := string(runes[from:min(i, len(runes))]); c == '[' && in != "" && strings.Trim(in, "hms") == "" {
				letters.WriteString(in) // elapsed time
			}
		case ';':
			i = len(runes) // what shows a negative number says nothing more
		default:
			letters.WriteRune(c)
		}
	}
	s := letters.String()
	if whole, decimals, _ := strings.Cut(s, "."); strings.TrimLeft(whole, "#,") == "0" && strings.Trim(decimals, "0") == "" {
		return numberFormat{fixedNumber, len(decimals)}
	}
	switch {
	case strings.Contains(s, "general"):
		return numberFormat{}
	case strings.ContainsAny(s, "yd"), strings.Contains(s, "m") && !strings.ContainsAny(s, "hs"):
		return numberFormat{kind: dateNumber}
	case strings.ContainsAny(s, "hms"):
		return numberFormat{kind: timeNumber}
	case strings.Contains(s, "%"):
		return numberFormat{kind: percentShown}
	}
	return numberFormat{}
}

// numberText writes a stored number as one would type it: the shortest digits
// that give the same value, so that 0.10000000000000001 reads as 0.1.
func numberText(v float64) string {
	if a := math.Abs(v); a != 0 && (a < 1e-6 || a >= 1e15) {
		return strconv.FormatFloat(v, 'e', -1, 64)
	}
	return strconv.FormatFloat(v, 'f', -1, 64)
}

// shown writes a stored number with the decimals that the style fixes, where
// they say the same: 0.3 under the style 0.00 was typed, and is seen, as 0.30.
func (f numberFormat) shown(v float64) string {
	if f.kind == fixedNumber {
		text := strconv.FormatFloat(v, 'f', f.decimals, 64)
		if w, err := strconv.ParseFloat(text, 64); err == nil && w == v {
			return text
		}
	}
	return numberText(v)
}

// dateText writes a day number as an ISO 8601 date, with the time where it has one.
func dateText(v float64, kind formatKind, date1904 bool) (string, error) {
	t, err := excelize.ExcelDateToTime(v, date1904)
	if err != nil {
		return "", fmt.Errorf("a date of day number %s", numberText(v))
	}
	t = t.Round(time.Second)
	switch clock := t.Format("15:04:05"); {
	case kind == timeNumber && v >= 0 && v < 1:
		return clock, nil
	case clock == "00:00:00":
		return t.Format(time.DateOnly), nil
	default:
		return t.Format("2006-01-02T15:04:05"), nil
	}
}
