package figure

import "math"

// entry is a row of a legend: a sample and what it means.
type entry struct {
	sample func(s *sheet, b Box)
	text   string
}

const (
	sampleWidth  = 26.0
	sampleHeight = 10.0
)

// legend draws entries in columns, each `width` wide, downward from the upper
// left corner, within a box, and returns the height used. With title "" there
// is none.
func (s *sheet) legend(title string, entries []entry, at pt, width float64, columns int) float64 {
	const pad = 6
	colW := (width - 2*pad) / float64(columns)
	textW := colW - sampleWidth - 12
	heights := make([]float64, len(entries))
	total := 0.0
	for i, e := range entries {
		n := len(wrap(e.text, textW, bodyFace))
		heights[i] = math.Max(sampleHeight, float64(n)*bodyFace.leading()) + 4
		total += heights[i]
	}
	head := 0.0
	if title != "" {
		head = bodyFace.leading() + 3
	}
	// Columns are filled to an equal height.
	col, used, deepest := 0, 0.0, 0.0
	cols, tops := make([]int, len(entries)), make([]float64, len(entries))
	for i := range entries {
		if used > 0 && col+1 < columns && used+heights[i]/2 > total/float64(columns) {
			col, used = col+1, 0
		}
		cols[i], tops[i] = col, used
		used += heights[i]
		deepest = math.Max(deepest, used)
	}
	h := deepest + head + 2*pad - 2
	s.closed([][]pt{Box{at[0], at[1] - h, at[0] + width, at[1]}.ring()}, stroke{width: 0.5, grey: 90})
	if title != "" {
		s.text(title, pt{at[0] + pad, at[1] - pad}, face{size: bodyFace.size, bold: true}, upperLeft)
	}
	for i, e := range entries {
		x, y := at[0]+pad+float64(cols[i])*colW, at[1]-pad-head-tops[i]
		ls := wrap(e.text, textW, bodyFace)
		e.sample(s, Box{x, y - sampleHeight, x + sampleWidth, y})
		for k, l := range ls {
			s.text(l, pt{x + sampleWidth + 6, y - 1 - float64(k)*bodyFace.leading()}, bodyFace, upperLeft)
		}
	}
	return h
}

// lineSample is the sample of a line.
func lineSample(st stroke) func(*sheet, Box) {
	return func(s *sheet, b Box) {
		y := (b.Y0 + b.Y1) / 2
		s.line([]pt{{b.X0, y}, {b.X1, y}}, st)
	}
}

func markSample(m func(s *sheet, p pt)) func(*sheet, Box) {
	return func(s *sheet, b Box) { m(s, b.centre()) }
}

// hatchSample is the sample of the i-th class's hatching.
func hatchSample(i int) func(*sheet, Box) {
	return func(s *sheet, b Box) {
		s.hatch([][]pt{b.ring()}, i)
		s.closed([][]pt{b.ring()}, stroke{width: 0.4, grey: 90})
	}
}

// tintSample shows the greys between the contour levels.
func tintSample(s *sheet, b Box) {
	w := b.W() / float64(len(contourLevels))
	for i := range contourLevels {
		x := b.X0 + float64(i)*w
		s.fill([][]pt{Box{x, b.Y0, x + w, b.Y1}.ring()}, tints[i])
		s.line([]pt{{x, b.Y0}, {x, b.Y1}}, contourStroke)
	}
	s.closed([][]pt{b.ring()}, stroke{width: 0.4, grey: 90})
}
