package figure

import (
	"image"
	"math"
)

// tintPerPoint is the number of pixels of the tint per point of the page.
const tintPerPoint = 2

// tint paints grey bands between the contour levels inside rings on the page;
// no rings = the whole panel.
func (s *sheet) tint(a axes, f *field, rings [][]pt) {
	if len(rings) == 0 {
		rings = openRings([][]pt{a.Box.ring()})
	}
	w, h := int(math.Ceil(a.Box.W()*tintPerPoint)), int(math.Ceil(a.Box.H()*tintPerPoint))
	img := image.NewGray(image.Rect(0, 0, w, h))
	for i := range img.Pix {
		img.Pix[i] = 255
	}
	levels := make([]float64, len(contourLevels))
	for i, l := range contourLevels {
		levels[i] = math.Log10(l)
	}
	px := 1.0 / tintPerPoint
	for _, sp := range scan(rings, 0, px, a.Box.Y0+px/2) {
		y := sp[0][1]
		row := h - 1 - int((y-a.Box.Y0)/px)
		if row < 0 || row >= h {
			continue
		}
		i0 := max(0, int(math.Ceil((sp[0][0]-a.Box.X0)/px-0.5)))
		i1 := min(w-1, int(math.Floor((sp[1][0]-a.Box.X0)/px-0.5)))
		dy := a.Y0 + (y-a.Box.Y0)/a.Box.H()*(a.Y1-a.Y0)
		for i := i0; i <= i1; i++ {
			x := a.X0 + (float64(i)+0.5)*px/a.Box.W()*(a.X1-a.X0)
			v := f.at(pt{x, dy})
			for k := len(levels) - 1; k >= 0; k-- {
				if v >= levels[k] {
					img.Pix[row*img.Stride+i] = tints[k]
					break
				}
			}
		}
	}
	// The picture is a whole number of pixels: its last row and column may pass
	// the panel by less than one and are covered by its frame.
	s.image(Box{a.Box.X0, a.Box.Y0, a.Box.X0 + float64(w)*px, a.Box.Y0 + float64(h)*px}, img)
}
