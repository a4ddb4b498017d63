package sitefile

import (
	"math"
	"slices"
	"strings"

	"example.org/standclear/exposure"
)

// surfaceTable binds the surfaces.
func (l *loader) surfaceTable() []exposure.Surface {
	unique := l.unique("id")
	for i := range l.rows("surfaces") {
		r := &l.rows("surfaces")[i]
		unique(r)
		s := exposure.Surface{
			ID: r.text("id"), Z: r.value("z"), Class: r.text("class"), From: r.value("from"), To: r.value("to"),
			Averaging: exposure.Averaging(r.text("averaging")), GroundFactor: r.value("ground factor"), Note: r.text("note"), Row: r.in,
		}
		if r.has("outline") && r.sound("outline") {
			o, err := parseOutline(r.text("outline"))
			if err != nil {
				l.fault(r, "outline", "%s", err)
			} else {
				s.Outline = o.rings()
				l.outlines[s.ID] = o
			}
		}
		l.body(r)
		l.class(r)
		l.surfaces = append(l.surfaces, s)
	}
	return l.surfaces
}

// body checks that a body's lower end is below its upper.
func (l *loader) body(r *record) {
	from, ok1 := r.number("from")
	to, ok2 := r.number("to")
	if ok1 && ok2 && from > to {
		column := "from"
		if !r.has("from") {
			column = "to"
		}
		l.fault(r, column, "the body runs from %g to %g m above the surface; write from below to", from, to)
	}
}

// class checks that the limit table has the class of a row.
func (l *loader) class(r *record) {
	class := r.text("class")
	if class == "" || len(l.classes) == 0 || slices.Contains(l.classes, class) {
		return
	}
	l.fault(r, "class", "the limit table has no class %q%s", class, didYouMean(class, l.classes))
}

func (l *loader) surface(id string) *exposure.Surface {
	for i := range l.surfaces {
		if l.surfaces[i].ID == id {
			return &l.surfaces[i]
		}
	}
	return nil
}

func (l *loader) surfaceIDs() []string {
	ids := make([]string, len(l.surfaces))
	for i, s := range l.surfaces {
		ids[i] = s.ID
	}
	return ids
}

// on returns the surface that a row stands on; a name that no surface has is a
// fault.
func (l *loader) on(r *record) *exposure.Surface {
	id := r.text("on")
	if id == "" {
		return nil
	}
	s := l.surface(id)
	if s == nil {
		hint := didYouMean(id, l.surfaceIDs())
		if len(l.surfaces) == 0 {
			hint = "; write the surfaces table"
		}
		l.fault(r, "on", "there is no surface %q%s", id, hint)
	}
	return s
}

// places binds the places.
func (l *loader) places() []exposure.Place {
	var out []exposure.Place
	unique := l.unique("id")
	for i := range l.rows("places") {
		r := &l.rows("places")[i]
		unique(r)
		p := exposure.Place{
			ID: r.text("id"), At: exposure.Point{X: r.value("x"), Y: r.value("y"), Z: r.value("z")},
			From: r.value("from"), To: r.value("to"), Class: r.text("class"), WallLoss: math.Pow(10, -r.value("wall loss")/10),
			On: r.text("on"), Note: r.text("note"), Row: r.in,
		}
		switch s := l.on(r); {
		case r.has("on") && r.has("z"):
			l.fault(r, "z", "both z and on are given; keep one")
		case s != nil:
			p.At.Z = s.Z
		case !r.has("on") && !r.has("z"):
			l.fault(r, "z", "the cell is blank; write the height above the datum, or the surface it stands on under \"on\"")
		}
		l.body(r)
		l.class(r)
		if p.To == 0 && r.sound("x", "y", "z", "on", "to") {
			for _, s := range l.surfaces {
				if math.Abs(p.At.Z-s.Z) <= 0.1 && l.outlineOf(s).contains(p.At.X, p.At.Y) {
					l.warn(r.place(), r.header("to"), "the place %q is a point on the surface %q itself; for a person who stands there write 2 under \"to [m]\"", p.ID, s.ID)
					break
				}
			}
		}
		out = append(out, p)
	}
	return out
}

// outlineOf returns the checked outline of a surface, also of one that was
// bound elsewhere.
func (l *loader) outlineOf(s exposure.Surface) outline {
	if o, ok := l.outlines[s.ID]; ok {
		return o
	}
	var o outline
	for _, ring := range s.Outline {
		points := make([]([2]float64), len(ring))
		copy(points, ring)
		o = append(o, nil)
		for _, p := range points {
			o[len(o)-1] = append(o[len(o)-1], p)
		}
	}
	l.outlines[s.ID] = o
	return o
}

// warnBelow warns of antennas under a surface that people walk on.
func (l *loader) warnBelow(s *exposure.Source) {
	for _, surface := range l.surfaces {
		if s.Position.Z < surface.Z && l.outlineOf(surface).contains(s.Position.X, s.Position.Y) && s.Row != nil {
			l.warn(rowPlace(s.Row), "", "the antenna %q lies %.3g m below the surface %q; check its z", s.ID, surface.Z-s.Position.Z, surface.ID)
		}
	}
}

// rowPlace names an input row.
func rowPlace(r *exposure.InputRow) string {
	return strings.TrimSuffix(placeOf(r.Table.File, r.Table.Sheet, "", r.Row), "!")
}
