package sitefile

import (
	"strings"

	"github.com/xuri/excelize/v2"
)

// styles defines the looks of what the program writes for the user to read.
func (b *workbookBuilder) styles() {
	border := []excelize.Border{{Type: "bottom", Color: "8C8C8C", Style: 1}, {Type: "right", Color: "C8C8C8", Style: 1}}
	head := func(bold bool, fill, horizontal string) *excelize.Style {
		return &excelize.Style{Font: &excelize.Font{Bold: bold, Family: "Arial", Size: 10}, Border: border,
			Fill:       excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{fill}},
			Alignment:  &excelize.Alignment{WrapText: true, Vertical: "top", Horizontal: horizontal, Indent: 1},
			Protection: &excelize.Protection{Locked: true}}
	}
	title := &excelize.Style{Font: &excelize.Font{Family: "Arial", Size: 14, Bold: true}, Protection: &excelize.Protection{Locked: true}}
	prose := &excelize.Style{Font: &excelize.Font{Family: "Arial", Size: 10}, Protection: &excelize.Protection{Locked: true},
		Alignment: &excelize.Alignment{WrapText: true, Vertical: "top"}}
	term := &excelize.Style{Font: &excelize.Font{Family: "Arial", Size: 10, Bold: true}, Protection: &excelize.Protection{Locked: true},
		Alignment: &excelize.Alignment{Vertical: "top"}}
	// In a fixed order: the numbers of the styles stand in the file.
	for _, one := range []struct {
		name  string
		style *excelize.Style
	}{
		{"required", head(true, "D2D2D2", "left")}, {"optional", head(false, "EFEFEF", "left")},
		{"required number", head(true, "D2D2D2", "right")}, {"optional number", head(false, "EFEFEF", "right")},
		{"title", title}, {"prose", prose}, {"term", term},
	} {
		id, err := b.book.NewStyle(one.style)
		b.do(err)
		b.style[one.name] = id
	}
}

// role is what a cell below a header is for.
type role struct {
	kind     cellKind
	grey     bool // an example or a remark
	wide     bool // the one wide column of the site table: all to the left, in lines
	decimals int  // of a number typed with trailing zeros, -1 = as it comes
}

// look returns the style of a role; styles are numbered as they come up.
func (b *workbookBuilder) look(as role) int {
	if as.kind != numberCell || as.grey {
		as.decimals = -1
	}
	if id, ok := b.looks[as]; ok {
		return id
	}
	s := &excelize.Style{Font: &excelize.Font{Family: "Arial", Size: 10}, Protection: &excelize.Protection{Locked: false},
		Alignment: &excelize.Alignment{Vertical: "top", Horizontal: "left", Indent: 1}}
	format := ""
	switch as.kind {
	case textCell:
		format = "@"
		s.Alignment.WrapText = as.wide
	case dateCell:
		format = "yyyy-mm-dd"
	case numberCell:
		if !as.wide {
			s.Alignment.Horizontal = "right"
		}
		if as.decimals > 0 {
			format = "0." + strings.Repeat("0", as.decimals)
		}
	}
	if as.grey {
		s.Font.Color, s.Font.Italic = "7A7A7A", true
		format = ""
	}
	if format != "" {
		s.CustomNumFmt = &format
	}
	id, err := b.book.NewStyle(s)
	b.do(err)
	b.looks[as] = id
	return id
}
