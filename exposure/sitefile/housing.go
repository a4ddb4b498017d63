package sitefile

import (
	"fmt"
	"math"

	"example.org/standclear/exposure"
)

// fitting is what rows of one housing share: who runs it, where it stands, how
// it is turned.
type fitting struct {
	operator, reference string
	at                  exposure.Point
	azimuth, tilt, roll float64
	hasAzimuth          bool
	severalAzimuths     bool // the row is blank and its housing has no single azimuth
}

// sameM is the distance in m within which two positions are one: typed in
// different units or as latitude and longitude they differ in their last digits.
const sameM = 0.001

// stated is a value that a row states, in SI, with the column where it stands.
type stated struct {
	v      [2]float64
	ok     bool
	broken bool // the row tries to state it, at fault
	column string
}

// shared is a group of cells that rows of one housing share: how a row states
// it, and what two rows may not differ in.
type shared struct {
	name   string
	column string // where a row that lacks it is told
	state  func(l *loader, r *record) stated
	one    bool // two values in one housing are a fault
	needed string
}

var sharedCells = []shared{
	{"x and y", "x", (*loader).statedXY, true, "the cell is blank; write x and y, or latitude and longitude"},
	{"z", "z", (*loader).statedZ, false, "the cell is blank; write the height of the centre of radiation, or a surface under \"on\" and the height above it"},
	{"azimuth", "azimuth", statedNumber("azimuth"), false, ""},
	{"tilt", "tilt", statedNumber("tilt"), false, ""},
	{"roll", "roll", statedNumber("roll"), false, ""},
}

// fittings works out position, orientation and operator of every row: what it
// states itself, else what its housing does.
func (l *loader) fittings(records []record) []fitting {
	out := make([]fitting, len(records))
	own := make([][]stated, len(records))
	housings := map[string][]int{}
	for i := range records {
		own[i] = make([]stated, len(sharedCells))
		for k, sc := range sharedCells {
			own[i][k] = sc.state(l, &records[i])
		}
		if h := records[i].text("housing"); h != "" {
			housings[h] = append(housings[h], i)
		}
	}
	for i := range records {
		r, mates := &records[i], housings[records[i].text("housing")]
		out[i].operator = l.housingText(records, mates, i, "operator")
		out[i].reference = r.text("operator reference")
		if out[i].reference == "" {
			out[i].reference = l.housingText(records, mates, i, "operator reference")
		}
		for k, sc := range sharedCells {
			s := own[i][k]
			first, several, broken := housingValue(own, mates, k)
			switch {
			case s.broken:
				continue
			case s.ok && sc.one && first >= 0 && first != i && !same(own[first][k].v, s.v):
				l.fault(r, s.column, "the %s of row %d, in the same housing %q, differ; rows in one housing are one physical antenna: correct one, or name another housing",
					sc.name, records[first].row.number, r.text("housing"))
			case !s.ok && several && sc.name == "azimuth":
				out[i].severalAzimuths = true
			case !s.ok && several:
				l.fault(r, sc.column, "the cell is blank, and the rows of housing %q differ in %s; write the one of this row", r.text("housing"), sc.name)
			case !s.ok && first >= 0:
				s = own[first][k]
			case !s.ok && sc.needed != "" && !broken:
				l.fault(r, sc.column, "%s", sc.needed)
			}
			switch sc.name {
			case "x and y":
				out[i].at.X, out[i].at.Y = s.v[0], s.v[1]
			case "z":
				out[i].at.Z = s.v[0]
			case "azimuth":
				out[i].azimuth, out[i].hasAzimuth = s.v[0], s.ok
			case "tilt":
				out[i].tilt = s.v[0]
			case "roll":
				out[i].roll = s.v[0]
			}
		}
	}
	return out
}

// housingValue returns the first row of a housing that states a value, whether
// others state another, and whether one does so at fault.
func housingValue(own [][]stated, mates []int, k int) (first int, several, broken bool) {
	first = -1
	for _, j := range mates {
		switch s := own[j][k]; {
		case s.broken:
			broken = true
		case s.ok && first < 0:
			first = j
		case s.ok && !same(own[first][k].v, s.v):
			several = true
		}
	}
	return first, several, broken
}

func same(a, b [2]float64) bool { return math.Hypot(a[0]-b[0], a[1]-b[1]) <= sameM }

// housingText returns a text that rows of one housing share; two texts are a
// fault at the later row.
func (l *loader) housingText(records []record, mates []int, i int, column string) string {
	own := records[i].text(column)
	for _, j := range mates {
		other := records[j].text(column)
		if other == "" {
			continue
		}
		if own == "" {
			return other
		}
		if own != other && column == "operator" {
			l.fault(&records[i], column, "%q is not the %q of row %d, in the same housing %q; rows in one housing are one physical antenna: correct one, or name another housing",
				own, other, records[j].row.number, records[i].text("housing"))
		}
		return own
	}
	return own
}

func statedNumber(column string) func(*loader, *record) stated {
	return func(_ *loader, r *record) stated {
		c := r.cell(column)
		return stated{v: [2]float64{c.v}, ok: c.state == given, broken: c.state == bad, column: column}
	}
}

// statedXY returns the position in plan that a row states, by x and y or by
// latitude and longitude.
func (l *loader) statedXY(r *record) stated {
	pairs := [2][2]string{{"x", "y"}, {"latitude", "longitude"}}
	var has [2]bool
	for n, p := range pairs {
		has[n] = r.has(p[0]) || r.has(p[1])
		for m, column := range p {
			if !r.sound(column) {
				return stated{broken: true}
			}
			if other := p[1-m]; r.has(other) && !r.has(column) {
				l.fault(r, column, "the cell is blank, though %s is given; write both", other)
				return stated{broken: true}
			}
		}
	}
	switch {
	case has[0] && has[1]:
		l.fault(r, "latitude", "both x, y and latitude, longitude are given; keep one pair")
		return stated{broken: true}
	case has[0]:
		return stated{v: [2]float64{r.value("x"), r.value("y")}, ok: true, column: "x"}
	case !has[1]:
		return stated{}
	case !l.about.HasPosition:
		l.fault(r, "latitude", "the site has no position of its own; write its latitude and longitude in the site table, or x and y here")
		return stated{broken: true}
	}
	p := exposure.GeodeticToSite(l.about, r.value("latitude")*180/math.Pi, r.value("longitude")*180/math.Pi, 0)
	if d := p.Norm(); d > farFromSiteM {
		l.fault(r, "latitude", "the position lies %.0f km from the site; check latitude and longitude", d/1000)
		return stated{broken: true}
	}
	return stated{v: [2]float64{p.X, p.Y}, ok: true, column: "latitude"}
}

// farFromSiteM is the distance in m beyond which a position by latitude and
// longitude is a slip: the site's frame is a plane, and no antenna of a site
// stands there.
const farFromSiteM = 50e3

// statedZ returns the height that a row states, by z or by a surface and the
// height above it.
func (l *loader) statedZ(r *record) stated {
	if !r.sound("z", "on", "height") {
		return stated{broken: true}
	}
	fail := func(column, format string, args ...any) stated {
		l.fault(r, column, "%s", fmt.Sprintf(format, args...))
		return stated{broken: true}
	}
	switch {
	case r.has("z") && (r.has("on") || r.has("height")):
		return fail("z", "z is given, and on or height as well; keep one way")
	case r.has("z"):
		return stated{v: [2]float64{r.value("z")}, ok: true, column: "z"}
	case r.has("on") && !r.has("height"):
		return fail("height", "the cell is blank; write the height of the centre of radiation above the surface %q", r.text("on"))
	case r.has("height") && !r.has("on"):
		return fail("on", "the cell is blank; write the surface that the height is above, or z in place of both")
	case !r.has("on"):
		return stated{}
	}
	s := l.on(r)
	if s == nil {
		return stated{broken: true}
	}
	return stated{v: [2]float64{s.Z + r.value("height")}, ok: true, column: "height"}
}
