package reports

import (
	"math"

	"github.com/xuri/excelize/v2"
)

// digits says how the numbers of a column are printed. Cells always hold the
// full value; the format shows no more digits than the data deserve.
type digits int

const (
	asText   digits = iota
	figures         // three significant figures or so, whatever the size
	whole           // 0
	tenths          // 0.0
	cents           // 0.00: metres to the centimetre
	millis          // 0.000
	shortest        // General: a figure as it was typed, such as a frequency
)

// numberFormat returns the number format that shows v in the manner asked.
func (d digits) numberFormat(v float64) string {
	switch d {
	case whole:
		return "0"
	case tenths:
		return "0.0"
	case cents:
		return "0.00"
	case millis:
		return "0.000"
	case shortest:
		return "General"
	}
	switch a := math.Abs(v); {
	case a == 0:
		return "0"
	case a < 0.001 || a >= 1e6:
		return "0.0E+00"
	case a >= 0.9995 && a < 1:
		return "0.000000" // not 1: the verdict turns there
	case a < 1:
		return "0.000"
	case a > 1 && a < 1.01:
		return "0.0000" // above, and must look so
	case a < 10:
		return "0.00"
	case a < 100:
		return "0.0"
	}
	return "0"
}

// look is all that tells two cell styles apart. The report is black on white
// with grey rules and one grey fill, so that a photocopy loses nothing.
type look struct {
	role   role
	strong bool
	indent bool   // set off from the numbers to its left
	right  bool   // a word in a column of numbers
	format string // number format, "" = text
}

type role int

const (
	body role = iota
	bodyPlain
	head
	headNumber
	title
	intro
	section
	caution
	field // to be filled in by hand
	link
)

const (
	fontName = "Arial"
	grey     = "EDEDED"
	rule     = "BFBFBF"
	ink      = "000000"
)

// style returns the identifier of a look, made on first use.
func (b *book) style(l look) int {
	if id, ok := b.styles[l]; ok {
		return id
	}
	s := &excelize.Style{
		Font:      &excelize.Font{Family: fontName, Size: 9, Color: ink, Bold: l.strong},
		Alignment: &excelize.Alignment{Vertical: "top", WrapText: true},
	}
	under := func(color string, weight int) {
		s.Border = append(s.Border, excelize.Border{Type: "bottom", Color: color, Style: weight})
	}
	const thin, medium, hair = 1, 2, 7
	switch l.role {
	case body:
		under(rule, hair)
	case link:
		under(rule, hair)
		s.Font.Underline = "single"
	case head, headNumber:
		s.Font.Bold = true
		s.Fill = excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{grey}}
		s.Alignment.Vertical = "bottom"
		if l.role == headNumber {
			s.Alignment.Horizontal = "right"
		}
		under(ink, thin)
	case title:
		s.Font.Size, s.Font.Bold = 15, true
		s.Alignment.Vertical = "center"
	case intro:
		s.Font.Color = "404040"
	case section:
		s.Font.Size, s.Font.Bold = 11, true
		s.Alignment.Vertical = "bottom"
	case caution:
		s.Font.Size = 10
	case field:
		for _, side := range []string{"left", "right", "top", "bottom"} {
			s.Border = append(s.Border, excelize.Border{Type: side, Color: "7F7F7F", Style: thin})
		}
	}
	if l.indent {
		s.Alignment.Indent = 1
		s.Alignment.Horizontal = "left"
	}
	if l.right {
		s.Alignment.Horizontal = "right"
	}
	if l.format != "" {
		if l.format != "General" {
			s.CustomNumFmt = &l.format
		}
		s.Alignment.Horizontal = "right"
		s.Alignment.WrapText = false
	}
	id, err := b.f.NewStyle(s)
	b.keep(err)
	b.styles[l] = id
	return id
}
