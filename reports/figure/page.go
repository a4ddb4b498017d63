package figure

import "math"

const (
	pageWidth  = 540.0 // 7.5 inches: the width of a page of text
	pageMargin = 12.0
)

// page is a sheet that is filled downward from y = 0; when its height is known
// the origin is moved to its lower left corner.
type page struct {
	*sheet
	y      float64 // the upper edge of what is still empty
	panels []Panel
	labels []Label
	lost   []string
}

func newPage() *page {
	return &page{sheet: &sheet{w: pageWidth}, y: -pageMargin}
}

// heading writes the title and the lines beneath it.
func (p *page) heading(title string, lines ...string) {
	width := pageWidth - 2*pageMargin
	p.y -= p.paragraph(title, pt{pageMargin, p.y}, width, titleFace) + 1
	for _, l := range lines {
		if l != "" {
			p.y -= p.paragraph(l, pt{pageMargin, p.y}, width, bodyFace)
		}
	}
	p.y -= 7
}

// foot writes notes and the caution, cuts the page to its height and closes the
// figure.
func (p *page) foot(title string, notes ...string) *Figure {
	ruled := false
	for _, n := range notes {
		if n == "" {
			continue
		}
		if !ruled {
			p.line([]pt{{pageMargin, p.y}, {pageWidth - pageMargin, p.y}}, stroke{width: 0.4, grey: 120})
			p.y -= 3
			ruled = true
		}
		p.y -= p.paragraph(n, pt{pageMargin, p.y}, pageWidth-2*pageMargin, footFace)
	}
	h := math.Ceil(pageMargin/2 - p.y)
	p.h = h
	up := func(b Box) Box { return Box{b.X0, b.Y0 + h, b.X1, b.Y1 + h} }
	for i := range p.texts {
		p.texts[i].Box = up(p.texts[i].Box)
	}
	for i := range p.panels {
		p.panels[i].Box = up(p.panels[i].Box)
	}
	for i, l := range p.labels {
		p.labels[i].Box, p.labels[i].Anchor[1] = up(l.Box), l.Anchor[1]+h
	}
	return &Figure{
		Title: printable(title),
		layout: Layout{
			Width: p.w, Height: p.h, Panels: p.panels, Labels: p.labels, Texts: p.texts, Unlabelled: p.lost,
		},
		sheet: p.sheet,
	}
}
