package exposure

import (
	"fmt"
	"math"

	"example.org/standclear/antenna"
)

// choose sets the emitter of a source by its method column, and says why.
func (c *compiled) choose(s *Source, ground Ground) error {
	b := builder{compiled: c, s: s, ground: ground, p: s.place(), lambda: Wavelength(s.FrequencyHz), k: Wavenumber(s.FrequencyHz)}
	b.why = "as the method column asks"
	switch s.Method {
	case MethodAuto, "":
		return b.auto()
	case MethodFarField:
		return b.far()
	case MethodWire:
		return b.thinWire()
	case MethodAperture:
		return b.dish()
	case MethodCylindrical:
		return b.cylinder()
	case MethodArray:
		return b.elements()
	}
	return fmt.Errorf("method %q is not one of auto, far field, cylindrical, array, aperture, wire", s.Method)
}

// builder makes the emitter of one source.
type builder struct {
	*compiled
	s         *Source
	ground    Ground
	p         placement
	lambda, k float64
}

// auto chooses by the kind of pattern.
func (b *builder) auto() error {
	switch b.s.PatternKind {
	case PatternDipole:
		if !b.linear() {
			b.why = "one wire cannot radiate " + string(b.s.Polarization) + " polarization"
			return b.far()
		}
		b.why = "a half-wave dipole is a wire"
		return b.thinWire()
	case PatternMonopole:
		b.why = "the wire's own fields over perfect ground"
		return b.thinWire()
	case PatternShort, PatternLoop:
		if !b.linear() {
			b.why = "one small source cannot radiate " + string(b.s.Polarization) + " polarization"
			return b.far()
		}
		b.why = "a small source with all its fields"
		return b.small()
	case PatternDish:
		b.why = "a dish has an aperture"
		return b.dish()
	case PatternSector, PatternOmni, PatternBeamwidth, PatternFile:
		if b.s.LengthM > 0 {
			return b.panel()
		}
	}
	b.why = "no near-field method fits the pattern " + string(b.s.PatternKind)
	switch b.s.PatternKind {
	case PatternActive:
		b.why = "the envelope of many beams has a far field only"
	case PatternSector, PatternOmni, PatternBeamwidth, PatternFile:
		b.why = "no length is stated that a near-field method could use"
	}
	return b.far()
}

// set finishes the choice. reactive says whether the method stops at lambda/(2
// pi).
func (b *builder) set(em emitter, method string, reactive bool) error {
	b.em, b.method = em, method
	b.reactive = 0
	if reactive {
		b.reactive = b.p.reactive
	}
	if b.ground.Method != GroundFresnel || !b.takesGround {
		return nil
	}
	var err error
	b.em, err = b.overGround(em)
	return err
}

func (b *builder) far() error {
	return b.set(newFarField(b.p, b.s.Pattern, float64(b.s.Gain)), string(MethodFarField), true)
}

// linear reports whether the polarization is one that a single wire can have.
func (b *builder) linear() bool {
	return b.s.Polarization == "" || b.s.Polarization == antenna.Vertical || b.s.Polarization == antenna.Horizontal
}

// along is the line of a wire: antenna-up turned by roll for vertical
// polarization, the right hand for horizontal.
func (b *builder) along() rod {
	if b.s.Polarization == antenna.Horizontal {
		return rod{b.p.pos, b.p.axes.Right}
	}
	return rod{b.p.pos, b.p.axes.Up}
}

// thinWire is method wire for the patterns that are wires.
func (b *builder) thinWire() error {
	var w *wire
	var err error
	switch b.s.PatternKind {
	case PatternMonopole:
		if b.s.LengthM <= 0 {
			return fmt.Errorf("a monopole needs its height; fill in length")
		}
		b.takesGround = false
		w, err = newMonopole(b.p, b.k, b.s.LengthM)
	case PatternShort, PatternDipole:
		if !b.linear() {
			return fmt.Errorf("a wire is vertical or horizontal, not %s; turn it with roll, or choose method far field", b.s.Polarization)
		}
		length := b.s.LengthM
		if length == 0 && b.s.PatternKind == PatternShort {
			return b.small()
		}
		if length == 0 {
			length = b.lambda / 2
			b.p.halfLength = length / 2
		}
		w, err = newWire(b.p, b.along(), b.k, length)
	default:
		return fmt.Errorf("method wire is for the patterns %s, %s and %s, not for %q", PatternDipole, PatternShort, PatternMonopole, b.s.PatternName)
	}
	if err != nil {
		return err
	}
	return b.set(w, string(MethodWire), false)
}

// small is a short dipole or a small loop.
func (b *builder) small() error {
	line := b.along()
	loop := b.s.PatternKind == PatternLoop
	if loop {
		// The other way round: a loop's axis is vertical where its field is
		// horizontal, else it faces forward.
		line.dir = b.p.axes.Boresight
		if b.s.Polarization == antenna.Horizontal {
			line.dir = b.p.axes.Up
		}
	}
	return b.set(newElementary(b.p, line, b.k, float64(b.s.Gain), loop), string(b.s.PatternKind), false)
}

// dish is method aperture.
func (b *builder) dish() error {
	d := b.s.DiameterM
	if d <= 0 {
		return fmt.Errorf("method aperture needs the diameter of the dish")
	}
	fromGain := ApertureEfficiency(b.s.Gain, d, b.lambda)
	if fromGain > 1+1e-9 {
		return fmt.Errorf("a gain of %.2f dBi from a dish of %.4g m at %s is an efficiency of %.3g, above 1; check gain, diameter and frequency", b.s.Gain.DBi(), d, frequencyText(b.s.FrequencyHz), fromGain)
	}
	eta := fromGain
	if b.s.Efficiency > 0 {
		eta = b.s.Efficiency
		if eta > 1 {
			return fmt.Errorf("an efficiency of %.3g is above 1", eta)
		}
		if r := eta / fromGain; r > 1.05 || r < 1/1.05 {
			b.warn("the efficiency stated, %.3g, and that of the gain, %.3g, differ by more than 5 %%", eta, fromGain)
		}
	}
	b.warn("a strongly tapered dish can exceed the near-field formula on its axis, up to 6 P/A = %.4g W/m2 at its mean power (a choice of this project)", 1.5*ApertureSurfaceDensity(b.s.Power.ThermalW(), d))
	return b.set(newAperture(b.p, b.s.Pattern, float64(b.s.Gain), d, eta, b.lambda, b.s.SweepRad), string(MethodAperture), false)
}

// warn adds to what the source's figures do not cover.
func (b *builder) warn(format string, args ...any) {
	b.caveats = append(b.caveats, fmt.Sprintf(format, args...))
}

// cylinder is method cylindrical.
func (b *builder) cylinder() error {
	if err := b.noEnvelope(); err != nil {
		return err
	}
	if b.s.LengthM <= 0 {
		return fmt.Errorf("method cylindrical needs the length of the array")
	}
	b.short(b.s.LengthM)
	return b.set(newCylindrical(b.p, b.s.Pattern, b.s.Gain, b.s.LengthM, b.s.ElectricalTiltRad), string(MethodCylindrical), true)
}

// noEnvelope refuses the envelope of many beams where one beam is computed.
func (b *builder) noEnvelope() error {
	if b.s.PatternKind == PatternActive {
		return fmt.Errorf("method %s is for one beam, and the pattern %q is the envelope of many; choose far field or auto", b.s.Method, PatternActive)
	}
	return nil
}

// column is the row's column of elements; what is odd about it is said.
func (b *builder) column() column {
	c := column{
		length: b.s.LengthM, spacing: b.s.SpacingM, elements: b.s.Elements, tilt: b.s.ElectricalTiltRad,
		frontToBackDB: b.s.FrontToBackDB, polarization: b.s.Polarization,
	}
	if c.complete(b.lambda) == nil {
		b.short(c.length)
		if err := antenna.CheckPanel(math.Max(c.length, b.lambda), b.lambda, c.elements, c.spacing); err != nil {
			b.warn("%s", err)
		}
	}
	return c
}

// short says that a panel is shorter than half a wavelength.
func (b *builder) short(length float64) {
	if length < b.lambda/2 {
		b.warn("a panel of %.4g m is shorter than half a wavelength (%.4g m); check length and frequency", length, b.lambda/2)
	}
}

// elements is method array.
func (b *builder) elements() error {
	if err := b.noEnvelope(); err != nil {
		return err
	}
	a, err := newArray(b.p, b.s.Pattern, float64(b.s.Gain), b.lambda, b.column())
	if err != nil {
		return err
	}
	b.warn("the array's waves carry %.3g of its power, by integration over the sphere; method array is not scaled up", a.integral)
	return b.set(a, string(MethodArray), true)
}

// panel is what auto takes for a panel.
func (b *builder) panel() error {
	c := b.column()
	a, err := newArray(b.p, b.s.Pattern, float64(b.s.Gain), b.lambda, c)
	if err != nil {
		return err
	}
	scaled := "its waves carry all of its power"
	if f := 1 / a.integral; f > 1 {
		a.boost(f)
		scaled = fmt.Sprintf("scaled up %.3g times in power, since its waves would carry %.3g of it", f, a.integral)
	}
	length := b.s.LengthM
	b.why = fmt.Sprintf("a panel with a length: %d elements %.4g m apart, %s; with the cylindrical model and the pattern to %.4g m", len(a.z), a.spacing, scaled, FarFieldDistance(length, b.lambda))
	return b.set(&panel{
		farField: *newFarField(b.p, b.s.Pattern, float64(b.s.Gain)), array: a,
		cylinder: newCylinder(b.s.Pattern, b.s.Gain, length, b.s.ElectricalTiltRad),
		edge:     FarFieldDistance(length, b.lambda), half: length / 2, builtIn: b.s.PatternKind != PatternFile,
	}, "panel", true)
}
