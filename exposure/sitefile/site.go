package sitefile

import (
	"math"

	"example.org/standclear/exposure"
)

// siteTable binds the site table: what the site is, how its axes lie, and its
// ground.
func (l *loader) siteTable() (exposure.About, exposure.Ground) {
	about := exposure.About{DecisionRule: exposure.RuleSimple, AzimuthReference: "true"}
	rows := l.rows("site")
	if len(rows) == 0 {
		return about, l.ground(nil)
	}
	r := &rows[0]
	about = exposure.About{
		Name: r.text("name"), Reference: r.text("reference"), Datum: r.text("datum"),
		PreparedFor: r.text("prepared for"), PreparedBy: r.text("prepared by"), Assessor: r.text("assessor"), Licence: r.text("licence"),
		SurveyDate: r.text("survey date"), ReportDate: r.text("report date"),
		DecisionRule: exposure.DecisionRule(r.text("decision rule")), Note: r.text("note"),
		GridBearingRad: r.value("grid bearing"), AzimuthReference: r.text("azimuth reference"), DeclinationRad: r.value("declination"),
	}
	lat, hasLat := r.number("latitude")
	lon, hasLon := r.number("longitude")
	if r.sound("latitude", "longitude") {
		switch {
		case hasLat && hasLon:
			about.HasPosition, about.LatitudeDeg, about.LongitudeDeg = true, lat*180/math.Pi, lon*180/math.Pi
		case hasLat:
			l.fault(r, "longitude", "latitude is given without longitude; give both or neither")
		case hasLon:
			l.fault(r, "latitude", "longitude is given without latitude; give both or neither")
		}
	}
	switch _, given := r.number("declination"); {
	case about.AzimuthReference == "magnetic" && !given && r.sound("declination"):
		l.fault(r, "declination", "azimuths are magnetic, so the declination is needed; write it in degrees, east positive")
	case about.AzimuthReference != "magnetic" && given:
		l.warn(r.place(), r.header("declination"), "the declination is not used, since azimuths are not magnetic")
	}
	return about, l.ground(r)
}

// ground settles the ground method: the option's where there is one, with the
// figures it leaves zero taken from the site table.
func (l *loader) ground(r *record) exposure.Ground {
	g := exposure.Ground{Method: exposure.GroundNone}
	if r != nil {
		g = exposure.Ground{Method: exposure.GroundMethod(r.text("ground")), Factor: r.value("ground factor"),
			Permittivity: r.value("ground permittivity"), Conductivity: r.value("ground conductivity"), Z: r.value("ground z")}
	}
	if o := l.options.Ground; o != nil {
		g.Method = o.Method
		for _, f := range []struct{ to, from *float64 }{{&g.Factor, &o.Factor}, {&g.Permittivity, &o.Permittivity}, {&g.Conductivity, &o.Conductivity}, {&g.Z, &o.Z}} {
			if *f.from != 0 {
				*f.to = *f.from
			}
		}
	}
	if r != nil {
		need := func(column, hint string) {
			if c := r.cell(column); c.state == absent {
				l.fault(r, column, "the ground is %q, so this is needed; write %s", string(g.Method), hint)
			}
		}
		switch {
		case g.Method == exposure.GroundFactor && g.Factor == 0:
			need("ground factor", "the field factor, 1.6 or 2")
		case g.Method == exposure.GroundFresnel:
			if g.Permittivity == 0 {
				need("ground permittivity", "the relative permittivity, such as 15 for average ground")
			}
			if l.options.Ground == nil || l.options.Ground.Conductivity == 0 {
				need("ground conductivity", "the conductivity, such as 0.005 for average ground")
			}
			if l.options.Ground == nil || l.options.Ground.Z == 0 {
				need("ground z", "the height of the reflecting plane above the datum")
			}
		}
	}
	if g.Method != exposure.GroundFactor {
		g.Factor = 1
	}
	return g
}

// operators binds the operators table.
func (l *loader) operators() []exposure.Operator {
	var out []exposure.Operator
	unique := l.unique("operator")
	for i := range l.rows("operators") {
		r := &l.rows("operators")[i]
		unique(r)
		out = append(out, exposure.Operator{Name: r.text("operator"), Contact: r.text("contact"), Notice: r.text("notice"), Row: r.in})
	}
	return out
}

// unique returns a check that no two rows of a table share an id.
func (l *loader) unique(column string) func(r *record) {
	seen := map[string]int{}
	return func(r *record) {
		id := r.text(column)
		if id == "" {
			return
		}
		if first, twice := seen[id]; twice {
			l.fault(r, column, "%q is used in row %d already; give each row its own", id, first)
			return
		}
		seen[id] = r.row.number
	}
}
