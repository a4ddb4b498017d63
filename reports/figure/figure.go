package figure

import (
	"bytes"
	"fmt"
	"image"
	"image/draw"
	"image/png"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// PNGScale is the number of pixels of a PNG per pixel of 1/96 inch: a PNG is to
// be shown at half its size in pixels.
const PNGScale = 2

// Figure is a finished drawing.
type Figure struct {
	// Title says in one line what is shown; it serves as alternative text.
	Title  string
	layout Layout
	sheet  *sheet
}

// Layout is where things stand on the page, in points from its lower left
// corner.
type Layout struct {
	Width, Height float64
	// Panels are the rectangles in which data is drawn.
	Panels []Panel
	// Labels are the names and figures that were placed within the panels.
	Labels []Label
	// Texts are all texts of the page, labels included.
	Texts []TextBox
	// Unlabelled lists the labels for which there was no room; the figure says
	// so at its foot.
	Unlabelled []string
}

// Panel is a rectangle of the page with the range of values it shows. Along a
// logarithmic axis the values go up by equal ratios.
type Panel struct {
	Box        Box
	X0, X1     float64
	Y0, Y1     float64
	LogX, LogY bool
}

// Layout returns where things stand on the page.
func (f *Figure) Layout() Layout { return f.layout }

// Size returns the width and height of the figure in points.
func (f *Figure) Size() (width, height float64) { return f.layout.Width, f.layout.Height }

// SVG returns the figure as an SVG document. Text stays text: the viewer's
// Liberation Sans or a font of the same widths is used.
func (f *Figure) SVG() (b []byte, err error) {
	defer caught(&err)
	c := vgsvg.New(vg.Length(f.sheet.w), vg.Length(f.sheet.h))
	f.sheet.replay(c)
	var buf bytes.Buffer
	if _, err = c.WriteTo(&buf); err != nil {
		return nil, err
	}
	out := buf.Bytes()
	// The library calls the PNG it embeds a JPEG, and strict viewers then drop it.
	out = bytes.ReplaceAll(out, []byte("data:image/jpg;"), []byte("data:image/png;"))
	out = bytes.ReplaceAll(out, []byte("font-family:Liberation Sans;"),
		[]byte("font-family:'Liberation Sans',Arial,Helvetica,sans-serif;"))
	return out, nil
}

// PNG returns the figure as a grey PNG of PNGScale times the size.
func (f *Figure) PNG() (b []byte, err error) {
	defer caught(&err)
	c := vgimg.NewWith(vgimg.UseWH(vg.Length(f.sheet.w), vg.Length(f.sheet.h)), vgimg.UseDPI(96*PNGScale))
	f.sheet.replay(c)
	g := image.NewGray(c.Image().Bounds())
	if src, ok := c.Image().(*image.RGBA); ok {
		for i := range g.Pix {
			g.Pix[i] = src.Pix[4*i] // only greys are drawn: the channels are equal
		}
	} else {
		draw.Draw(g, g.Bounds(), c.Image(), image.Point{}, draw.Src)
	}
	var buf bytes.Buffer
	if err = png.Encode(&buf, g); err != nil {
		return nil, err
	}
	return buf.Bytes(), nil
}

func (s *sheet) replay(c vg.Canvas) {
	c.SetColor(grey(255))
	c.Fill(path([][]pt{Box{0, 0, s.w, s.h}.ring()}, true))
	c.Push()
	c.Translate(vp(pt{0, s.h})) // the drawing hangs down from y = 0
	for _, op := range s.ops {
		op(c)
	}
	c.Pop()
}

// caught turns a panic of the drawing library into an error.
func caught(err *error) {
	if r := recover(); r != nil {
		*err = fmt.Errorf("figure: cannot draw: %v", r)
	}
}
