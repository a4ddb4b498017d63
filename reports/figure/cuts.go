package figure

import (
	"errors"
	"fmt"
	"math"

	"example.org/standclear/antenna"
)

// Cut is a pattern along one great circle: loss in dB below the peak gain.
type Cut struct {
	Label            string
	AngleDeg, LossDB []float64
}

// PatternData is what a figure of an antenna's pattern shows.
type PatternData struct {
	Name    string
	Note    string // beneath the title
	GainDBi float64
	Cuts    []Cut // the horizontal and the vertical one
	// Polar draws circles in place of two rectangular diagrams.
	Polar bool
	// FloorDB is the loss at which the drawing ends, in dB; 0 = 40 dB.
	FloorDB float64
}

// Cuts samples a pattern's horizontal cut, at the elevation of its largest
// value straight ahead, and its vertical cut through boresight, every half
// degree.
func Cuts(p antenna.Pattern) []Cut {
	const n = 720
	loss := func(phi, theta float64) float64 {
		return -10 * math.Log10(p.Relative(phi, theta))
	}
	peak, least := 0.0, math.Inf(1)
	for i := -n / 4; i <= n/4; i++ {
		el := float64(i) * 2 * math.Pi / n
		// Of equal values the one nearest to the horizon is taken.
		if l := loss(0, el); l < least-1e-9 || l < least+1e-9 && math.Abs(el) < math.Abs(peak) {
			peak, least = el, l
		}
	}
	h := Cut{Label: fmt.Sprintf("horizontal cut, elevation %s°", length(peak*180/math.Pi))}
	v := Cut{Label: "vertical cut through boresight"}
	for i := -n / 2; i <= n/2; i++ {
		a := float64(i) * 2 * math.Pi / n
		deg := float64(i) * 360 / n
		h.AngleDeg, h.LossDB = append(h.AngleDeg, deg), append(h.LossDB, loss(a, peak))
		phi, theta := 0.0, a
		if a > math.Pi/2 {
			phi, theta = math.Pi, math.Pi-a
		} else if a < -math.Pi/2 {
			phi, theta = math.Pi, -math.Pi-a
		}
		v.AngleDeg, v.LossDB = append(v.AngleDeg, deg), append(v.LossDB, loss(phi, theta))
	}
	return []Cut{h, v}
}

// Pattern draws the cuts of an antenna in dB below the peak gain, side by side.
func Pattern(d PatternData) (f *Figure, err error) {
	defer caught(&err)
	if len(d.Cuts) == 0 {
		return nil, errors.New("figure: a pattern needs a cut")
	}
	if !(d.FloorDB > 0) {
		d.FloorDB = 40
	}
	title := "Antenna pattern: " + d.Name
	p := newPage()
	p.heading(title, fmt.Sprintf("Peak gain %s dBi; loss below it in dB.", length(d.GainDBi)), d.Note)
	if d.Polar {
		p.polar(d)
	} else {
		p.rectangular(d)
	}
	how := ""
	if d.Polar {
		how = "Horizontal cut seen from above, boresight upward, angles clockwise; vertical cut seen from the antenna's right, boresight to the right, angles upward."
	}
	return p.foot(title, how, fmt.Sprintf("Losses beyond %s dB are drawn at the floor.", length(d.FloorDB))), nil
}

// floored returns the losses cut off at the floor; a missing loss stays missing.
func floored(c Cut, floor float64) []float64 {
	out := make([]float64, min(len(c.LossDB), len(c.AngleDeg)))
	for i := range out {
		out[i] = c.LossDB[i]
		if out[i] > floor {
			out[i] = floor
		}
	}
	return out
}

func (p *page) rectangular(d PatternData) {
	for _, c := range d.Cuts {
		p.text(c.Label, pt{pageWidth/2 + axisRoom/2, p.y}, face{size: 8, bold: true}, upperMiddle)
		p.y -= 13
		b := p.diagram(165)
		a0, a1, ok := span(false, c.AngleDeg)
		if !ok || a0 == a1 {
			a0, a1 = -180, 180
		}
		a := newAxes(b, a0, a1, -d.FloorDB, 0)
		a.Y1 = d.FloorDB / 40
		p.panels = append(p.panels, a.Panel)
		var xt []tick
		for v := math.Ceil(a0/30) * 30; v <= a1; v += 30 {
			xt = append(xt, tick{v, length(v)})
		}
		a.draw(p.sheet, xt, linearTicks(-d.FloorDB, 0, 8), "angle from boresight [°]", "relative to the peak [dB]", true)
		y := floored(c, d.FloorDB)
		for i := range y {
			y[i] = -y[i]
		}
		a.trace(p.sheet, []curve{{x: c.AngleDeg, y: y, style: stroke{width: 1.1}}})
		a.frame(p.sheet)
		p.y = b.Y0 - axisBeneath - 8
	}
}

// polar draws each cut on a circle: the horizontal one as seen from above with
// boresight upward and angles clockwise, the vertical one as seen from the
// right with boresight to the right.
func (p *page) polar(d PatternData) {
	columns := min(len(d.Cuts), 2)
	room := (pageWidth - 2*pageMargin) / float64(columns)
	r := math.Min(room/2-26, 118)
	for i, c := range d.Cuts {
		if i > 0 && i%columns == 0 {
			p.y -= 2*r + 62
		}
		centre := pt{pageMargin + (float64(i%columns)+0.5)*room, p.y - r - 30}
		p.text(c.Label, pt{centre[0], p.y}, face{size: 8, bold: true}, upperMiddle)
		p.panels = append(p.panels, Panel{Box: Box{centre[0] - r, centre[1] - r, centre[0] + r, centre[1] + r},
			X0: -d.FloorDB, X1: d.FloorDB, Y0: -d.FloorDB, Y1: d.FloorDB})
		vertical := i%2 == 1
		// Angle to direction on the page.
		toward := func(deg float64) pt {
			sin, cos := math.Sincos(deg * math.Pi / 180)
			if vertical {
				return pt{cos, sin}
			}
			return pt{sin, cos}
		}
		at := func(deg, loss float64) pt {
			k := r * math.Max(0, 1-loss/d.FloorDB)
			u := toward(deg)
			return pt{centre[0] + k*u[0], centre[1] + k*u[1]}
		}
		for deg := -150.0; deg <= 180; deg += 30 {
			p.line([]pt{at(deg, d.FloorDB), at(deg, 0)}, gridStroke)
			u := toward(deg)
			p.text(length(deg)+"°", pt{centre[0] + (r+13)*u[0], centre[1] + (r+9)*u[1]}, tickFace, middle)
		}
		step := niceStep(d.FloorDB / 4)
		for loss := step; loss < d.FloorDB; loss += step {
			p.circle(centre, r*(1-loss/d.FloorDB), false, 0, gridStroke)
		}
		// Figures on a ray between two labelled ones, beneath the curve.
		for loss := step; loss < d.FloorDB; loss += step {
			q := at(-75, loss)
			if vertical {
				q = at(105, loss)
			}
			t := length(-loss)
			w := tickFace.width(t)/2 + 1
			p.fill([][]pt{Box{q[0] - w, q[1] - 4, q[0] + w, q[1] + 4}.ring()}, 255)
			p.text(t, q, tickFace, middle)
		}
		var l []pt
		for k, loss := range floored(c, d.FloorDB) {
			q := at(c.AngleDeg[k], loss)
			if !isFinite(loss) {
				q = pt{math.NaN(), math.NaN()}
			}
			l = append(l, q)
		}
		p.line(l, stroke{width: 1.1})
		p.circle(centre, r, false, 0, frameStroke)
	}
	p.y -= 2*r + 62
}
