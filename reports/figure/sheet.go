package figure

import (
	"image"
	"image/color"
	"math"
	"strings"
	"unicode"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/vgimg"
)

// fonts holds Liberation Sans, which the drawing library brings along: no font
// of the machine is used.
var fonts = font.NewCache(liberation.Collection())

// face is a size and cut of Liberation Sans.
type face struct {
	size         float64 // points
	bold, italic bool
}

var (
	titleFace   = face{size: 11, bold: true}
	bodyFace    = face{size: 8}
	tickFace    = face{size: 7.5}
	labelFace   = face{size: 7}
	contourFace = face{size: 6.5, italic: true}
	footFace    = face{size: 7}
)

func (f face) style() text.Style {
	ft := font.Font{Typeface: "Liberation", Variant: "Sans", Size: vg.Length(f.size)}
	if f.bold {
		ft.Weight = xfont.WeightBold
	}
	if f.italic {
		ft.Style = xfont.StyleItalic
	}
	return text.Style{Color: color.Black, Font: ft, Handler: text.Plain{Fonts: fonts}}
}

// width returns the printed width of one line of text, in points.
func (f face) width(s string) float64 { return float64(f.style().Width(s)) }

// leading is the distance between lines of text, in points.
func (f face) leading() float64 { return 1.25 * f.size }

// stroke is how a line is drawn.
type stroke struct {
	width float64
	grey  uint8 // 0 = black
	dash  []float64
}

// TextBox is a piece of text and the box it fills on the page.
type TextBox struct {
	Text string
	Box  Box
}

// sheet collects what is drawn, in order, and remembers every text with its box.
type sheet struct {
	w, h  float64
	ops   []func(vg.Canvas)
	texts []TextBox
}

func vp(p pt) vg.Point { return vg.Point{X: vg.Length(p[0]), Y: vg.Length(p[1])} }

func grey(g uint8) color.Color { return color.Gray{Y: g} }

// runs cuts a line at its non-finite points.
func runs(line []pt) [][]pt {
	var out [][]pt
	start := 0
	for i := 0; i <= len(line); i++ {
		if i == len(line) || !finite(line[i]) {
			if i-start > 1 {
				out = append(out, line[start:i])
			}
			start = i + 1
		}
	}
	return out
}

func path(lines [][]pt, closed bool) vg.Path {
	var p vg.Path
	for _, l := range lines {
		for i, q := range l {
			if i == 0 {
				p.Move(vp(q))
			} else {
				p.Line(vp(q))
			}
		}
		if closed && len(l) > 0 {
			p.Close()
		}
	}
	return p
}

func (s *sheet) stroke(p vg.Path, st stroke) {
	if len(p) == 0 {
		return
	}
	dash := make([]vg.Length, len(st.dash))
	for i, d := range st.dash {
		dash[i] = vg.Length(d)
	}
	s.ops = append(s.ops, func(c vg.Canvas) {
		c.SetColor(grey(st.grey))
		c.SetLineWidth(vg.Length(st.width))
		c.SetLineDash(dash, 0)
		c.Stroke(p)
	})
}

// line draws an open line, leaving gaps at non-finite points.
func (s *sheet) line(l []pt, st stroke) { s.stroke(path(runs(l), false), st) }

// lines draws many lines as one path.
func (s *sheet) lines(ls [][]pt, st stroke) {
	var all [][]pt
	for _, l := range ls {
		all = append(all, runs(l)...)
	}
	s.stroke(path(all, false), st)
}

// closed draws the closed lines of rings.
func (s *sheet) closed(rings [][]pt, st stroke) { s.stroke(path(openRings(rings), true), st) }

// fill paints rings; holes must turn the other way than what surrounds them.
func (s *sheet) fill(rings [][]pt, g uint8) {
	p := path(openRings(rings), true)
	if len(p) == 0 {
		return
	}
	s.ops = append(s.ops, func(c vg.Canvas) {
		c.SetColor(grey(g))
		c.Fill(p)
	})
}

// openRings drops non-finite points and the repeated last point of each ring.
func openRings(rings [][]pt) [][]pt {
	var out [][]pt
	for _, r := range rings {
		var q []pt
		for _, p := range r {
			if finite(p) {
				q = append(q, p)
			}
		}
		if n := len(q); n > 1 && q[0] == q[n-1] {
			q = q[:n-1]
		}
		if len(q) > 2 {
			out = append(out, q)
		}
	}
	return out
}

// circle draws a circle, filled with grey g where fill is set, and its line.
func (s *sheet) circle(c pt, r float64, fill bool, g uint8, st stroke) {
	var p vg.Path
	p.Move(vp(pt{c[0] + r, c[1]}))
	p.Arc(vp(c), vg.Length(r), 0, 2*math.Pi)
	p.Close()
	if fill {
		s.ops = append(s.ops, func(v vg.Canvas) {
			v.SetColor(grey(g))
			v.Fill(p)
		})
	}
	if st.width > 0 {
		s.stroke(p, st)
	}
}

// image puts a picture into a box. On a raster page its pixels are copied to
// the nearest place, for the library's smooth scaling costs more than the rest
// of a plan.
func (s *sheet) image(b Box, img *image.Gray) {
	s.ops = append(s.ops, func(c vg.Canvas) {
		if v, ok := c.(*vgimg.Canvas); ok {
			copyPixels(v, b, img)
			return
		}
		c.DrawImage(vg.Rectangle{Min: vp(pt{b.X0, b.Y0}), Max: vp(pt{b.X1, b.Y1})}, img)
	})
}

// copyPixels fills the pixels of the page whose middle lies in the box; y = 0
// is the page's upper edge.
func copyPixels(c *vgimg.Canvas, b Box, img *image.Gray) {
	k := c.DPI() / 72
	dst, w, h := c.Image(), img.Bounds().Dx(), img.Bounds().Dy()
	rgba, direct := dst.(*image.RGBA)
	for y := max(0, int(math.Ceil(-b.Y1*k-0.5))); y < dst.Bounds().Dy() && float64(y)+0.5 < -b.Y0*k; y++ {
		row := min(h-1, int(((float64(y)+0.5)/k+b.Y1)/b.H()*float64(h)))
		for x := max(0, int(math.Ceil(b.X0*k-0.5))); x < dst.Bounds().Dx() && float64(x)+0.5 < b.X1*k; x++ {
			col := min(w-1, int(((float64(x)+0.5)/k-b.X0)/b.W()*float64(w)))
			g := img.Pix[row*img.Stride+col]
			if direct {
				i := rgba.PixOffset(x, y)
				rgba.Pix[i], rgba.Pix[i+1], rgba.Pix[i+2], rgba.Pix[i+3] = g, g, g, 255
			} else {
				dst.Set(x, y, color.Gray{Y: g})
			}
		}
	}
}

// align says which point of a text is put at a position: 0, 0 is the lower
// left of its box, 0.5, 0.5 the middle, 1, 1 the upper right.
type align struct{ x, y float64 }

var (
	upperLeft   = align{0, 1}
	upperMiddle = align{0.5, 1}
	lowerMiddle = align{0.5, 0}
	middle      = align{0.5, 0.5}
	middleLeft  = align{0, 0.5}
	middleRight = align{1, 0.5}
)

// text writes one line of text and returns its box.
func (s *sheet) text(str string, at pt, f face, a align) Box {
	str = printable(str)
	w, h := f.width(str), f.size
	b := Box{at[0] - a.x*w, at[1] - a.y*h, at[0] + (1-a.x)*w, at[1] + (1-a.y)*h}
	if str == "" {
		return b
	}
	sty := f.style()
	// The box is one font size tall; letters stand 0.22 of it above its foot.
	base := vp(pt{b.X0, b.Y0 + 0.22*f.size})
	ft := fonts.Lookup(sty.Font, sty.Font.Size)
	s.ops = append(s.ops, func(c vg.Canvas) {
		c.SetColor(color.Black)
		c.FillString(ft, base, str)
	})
	s.texts = append(s.texts, TextBox{str, b})
	return b
}

// textUp writes one line of text that reads upward, centred on a position.
func (s *sheet) textUp(str string, at pt, f face) Box {
	str = printable(str)
	w, h := f.width(str), f.size
	b := Box{at[0] - h/2, at[1] - w/2, at[0] + h/2, at[1] + w/2}
	sty := f.style()
	ft := fonts.Lookup(sty.Font, sty.Font.Size)
	s.ops = append(s.ops, func(c vg.Canvas) {
		c.Push()
		c.Translate(vp(at))
		c.Rotate(math.Pi / 2)
		c.SetColor(color.Black)
		c.FillString(ft, vp(pt{-w / 2, -h/2 + 0.22*f.size}), str)
		c.Pop()
	})
	s.texts = append(s.texts, TextBox{str, b})
	return b
}

// paragraph writes wrapped text downward from its upper left corner and returns
// the height used.
func (s *sheet) paragraph(str string, at pt, width float64, f face) float64 {
	ls := wrap(str, width, f)
	for i, l := range ls {
		s.text(l, pt{at[0], at[1] - float64(i)*f.leading()}, f, upperLeft)
	}
	return float64(len(ls)) * f.leading()
}

// wrap breaks text into lines no wider than width; a word that is wider by
// itself is cut.
func wrap(str string, width float64, f face) []string {
	var out []string
	line := ""
	for _, word := range strings.Fields(printable(str)) {
		for f.width(word) > width && len([]rune(word)) > 1 {
			if line != "" {
				out, line = append(out, line), ""
			}
			r := []rune(word)
			n := len(r) - 1
			for n > 1 && f.width(string(r[:n])) > width {
				n--
			}
			out, word = append(out, string(r[:n])), string(r[n:])
		}
		switch {
		case line == "":
			line = word
		case f.width(line+" "+word) <= width:
			line += " " + word
		default:
			out, line = append(out, line), word
		}
	}
	if line != "" {
		out = append(out, line)
	}
	return out
}

// printable returns text that an SVG file may hold: control characters, which
// XML forbids, become spaces, broken UTF-8 the replacement character, and a run
// of spaces, which XML takes for one, becomes one.
func printable(s string) string {
	s = strings.Map(func(r rune) rune {
		if unicode.IsControl(r) || r == '\uFFFE' || r == '\uFFFF' {
			return ' '
		}
		return r
	}, strings.ToValidUTF8(s, "\uFFFD"))
	return strings.Join(strings.Fields(s), " ")
}

// shorten cuts a text to n characters.
func shorten(s string, n int) string {
	if r := []rune(printable(s)); len(r) > n {
		return string(r[:n-1]) + "…"
	}
	return printable(s)
}
