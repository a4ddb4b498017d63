package exposure

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"strings"
)

// overGround puts an emitter over the two-ray ground.
func (b *builder) overGround(em emitter) (emitter, error) {
	g := b.ground
	if !(g.Permittivity >= 1) || !(g.Conductivity >= 0) || math.IsInf(g.Permittivity, 0) || math.IsInf(g.Conductivity, 0) {
		return nil, errors.New("ground fresnel needs a permittivity of 1 or more and a conductivity of 0 or more")
	}
	plane := newGroundPlane(g, b.s.FrequencyHz)
	least := plane.height(b.p.pos)
	if least <= 0 {
		return nil, fmt.Errorf("the antenna lies %.4g m below the ground at z = %.4g m; check ground z, or choose ground factor", -least, g.Z)
	}
	if a, ok := em.(*array); ok {
		least -= a.half * math.Abs(a.axes.Up.Dot(plane.up))
	}
	if p, ok := em.(*panel); ok {
		least -= p.array.half * math.Abs(p.axes.Up.Dot(plane.up))
	}
	mirrored := plane.mirror(b.p)
	flip := func(r rod) rod { return rod{mirrored.pos, plane.flip(r.dir)} }
	var image emitter
	switch e := em.(type) {
	case *wire:
		i := *e
		i.placement, i.rod = mirrored, flip(e.rod)
		image = &i
	case *elementary:
		i := *e
		i.placement, i.rod = mirrored, flip(e.rod)
		image = &i
	case *aperture:
		i := *e
		i.placement = mirrored
		image = &i
	case *cylindrical:
		i := *e
		i.placement, i.line = mirrored, flip(e.line)
		image = &i
	}
	if image != nil {
		b.warn("method %s does not follow the two rays of ground fresnel: the amplitudes of source and image add, the most that any ground reflects (a choice of this project)", b.method)
		return &amplitudes{em, image}, nil
	}
	if least < plane.clearance {
		return nil, fmt.Errorf("the antenna reaches down to %.4g m above the ground at z = %.4g m, less than a wavelength (%.4g m): two rays do not describe that; choose ground factor", least, g.Z, plane.clearance)
	}
	b.plane = &plane
	switch e := em.(type) {
	case *farField:
		return newTwoRay(e, plane, b.k, b.s.Polarization), nil
	case *array:
		b.warn("ground fresnel: boundaries take the reflected waves of an array by the sum of their amplitudes")
		return newGroundArray(e, plane), nil
	case *panel:
		b.warn("ground fresnel: boundaries take the reflected waves of an array by the sum of their amplitudes")
		return newGroundPanel(e, plane, newTwoRay(&e.farField, plane, b.k, b.s.Polarization)), nil
	}
	return nil, fmt.Errorf("method %s is not known to ground fresnel; choose ground factor", b.method)
}

// lowFor names the sources for whose two rays a height is too low, "" where none
// is.
func (m *Model) lowFor(z float64) string {
	var ids []string
	for i := range m.sources {
		c := &m.sources[i]
		if c.plane != nil && c.plane.height(Point{Z: z}) < c.plane.clearance && !c.silent() {
			ids = append(ids, c.src.ID)
		}
	}
	if len(ids) == 0 {
		return ""
	}
	return "lower than a wavelength of " + strings.Join(ids, ", ") + " above ground z, where two rays do not hold: choose ground factor"
}

// amplitudes is an emitter over a reflecting ground by the sum of the amplitudes
// of the two rays: the most that any ground can reflect, for methods whose waves
// the two-ray ground does not follow (a choice of this project).
type amplitudes struct {
	emitter
	image emitter
}

func addAmplitudes(d, i float64) float64 {
	s := math.Sqrt(d) + math.Sqrt(i)
	return s * s
}

func (e *amplitudes) at(q Point) density {
	d, i := e.emitter.at(q), e.image.at(q)
	return density{addAmplitudes(d.E, i.E), addAmplitudes(d.H, i.H)}
}

func (e *amplitudes) over(b box) densityRange {
	d, i := e.emitter.over(b), e.image.over(b)
	return densityRange{
		density{addAmplitudes(d.Lo.E, i.Lo.E), addAmplitudes(d.Lo.H, i.Lo.H)},
		density{addAmplitudes(d.Hi.E, i.Hi.E), addAmplitudes(d.Hi.H, i.Hi.H)},
	}
}

func (e *amplitudes) in(f frame) emitter { return &amplitudes{e.emitter.in(f), e.image.in(f)} }

func (e *amplitudes) where() *placement { return e.emitter.(placed).where() }

func (e *amplitudes) falloff() (g, offset float64) {
	g, offset = e.emitter.falloff()
	apart := e.where().pos.Sub(e.image.(placed).where().pos).Norm()
	return 4 * g, offset + apart
}

func (e *amplitudes) methodAt(q Point) string {
	if m, ok := e.emitter.(interface{ methodAt(Point) string }); ok {
		return m.methodAt(q)
	}
	return ""
}

// groundArray is an array over a reflecting ground: the vector sums over the
// direct and the reflected waves of every element. Its bounds take the reflected
// waves by the sum of their amplitudes, so that they stay apart by up to four times
// the product of both amplitudes however small the box. Source: [FRESNEL-1].
type groundArray struct {
	array
	image array // where the ground shows it
	g     groundPlane
	share [2]float64
}

func newGroundArray(a *array, g groundPlane) *groundArray {
	e := &groundArray{array: *a, image: *a, g: g, share: [2]float64{a.inE, a.inH}}
	e.image.placement = g.mirror(a.placement)
	e.image.line = rod{e.image.pos, e.image.axes.Up}
	return e
}

func (e *groundArray) at(q Point) density {
	rho, z := e.line.polar(q)
	_, phi, _ := e.towards(q)
	h := e.toward(rho, z, phi)
	mrho, mz := e.image.line.polar(q)
	_, mphi, _ := e.image.towards(q)
	mh := e.image.toward(mrho, mz, mphi)
	if e.g.height(q) < e.g.clearance {
		u2, v2 := e.sums(rho, z)
		d, m := e.mix(h*u2, h*v2), mh*e.image.sumOfAmplitudes(mrho, mz)
		return density{addAmplitudes(d.E, m), addAmplitudes(d.H, m)}
	}
	h, mh = math.Sqrt(h), math.Sqrt(mh)
	r0 := q.Sub(e.pos).Norm()
	var se, sh [2]phasor
	// Both rays of every element lie in one plane each: directions come from the
	// plane, so that they agree between elements even beside the line.
	out0, out1 := e.line.outward(q), e.g.flip(e.image.line.outward(q))
	up := e.axes.Up
	across0, across1 := up.Cross(out0), up.Cross(out1)
	for n, zn := range e.z {
		dz := z - zn
		r := math.Hypot(rho, dz)
		if r == 0 {
			return density{math.Inf(1), math.Inf(1)}
		}
		sine, cosine := dz/r, rho/r
		a := cmplx.Rect(e.amplitude*h*element(dz/(r+rho))/r, e.phase[n]-e.k*(r-r0))
		u := out0.Scale(cosine).Add(up.Scale(sine))
		for p, x := range [2]Point{up.Scale(cosine).Sub(out0.Scale(sine)), across0} {
			if e.share[p] > 0 {
				se[p].add(x, a)
				sh[p].add(u.Cross(x), a)
			}
		}
		dz = mz - zn
		r = math.Hypot(mrho, dz)
		sine, cosine = dz/r, mrho/r
		a = cmplx.Rect(e.amplitude*mh*element(dz/(r+mrho))/r, e.phase[n]-e.k*(r-r0))
		u = out1.Scale(cosine).Add(up.Scale(sine))
		for p, x := range [2]Point{up.Scale(cosine).Sub(out1.Scale(sine)), across1} {
			if e.share[p] > 0 {
				e.g.reflected(&se[p], &sh[p], u, x, a)
			}
		}
	}
	var out density
	for p, share := range e.share {
		out.E += share * se[p].norm2()
		out.H += share * sh[p].norm2()
	}
	return out
}

// sumOfAmplitudes is the square of the sum of the waves' amplitudes at h = 1.
func (e *array) sumOfAmplitudes(rho, z float64) float64 {
	sum := 0.0
	for _, zn := range e.z {
		dz := z - zn
		r := math.Sqrt(rho*rho + dz*dz)
		sum += element(dz/(r+rho)) / r
	}
	sum *= e.amplitude
	return sum * sum
}

// amplitudesOver is the most that the sum of amplitudes reaches in a ring.
func (e *array) amplitudesOver(g *ring) float64 {
	near, _ := g.fromSegment(e.half)
	if near <= 0 {
		return math.Inf(1)
	}
	sum := 0.0
	for _, zn := range e.z {
		dz := g.z - zn
		r := math.Sqrt(g.rho*g.rho + dz*dz)
		low := math.Max(r-g.radius, near)
		sum += math.Min(1, element(dz/(r+g.rho))+elementSlope*g.radius/low+tableError) / low
	}
	sum *= e.amplitude
	return sum * sum
}

func (e *groundArray) over(b box) densityRange {
	d := e.array.over(b)
	ring := e.image.line.ring(b)
	m := math.Sqrt(e.image.towardRange(&ring, e.image.look(b).phi).Hi * e.image.amplitudesOver(&ring))
	span := func(lo, hi float64) (float64, float64) {
		lo, hi = math.Max(0, math.Sqrt(lo)-m), math.Sqrt(hi)+m
		return lo * lo, hi * hi
	}
	var out densityRange
	out.Lo.E, out.Hi.E = span(d.Lo.E, d.Hi.E)
	out.Lo.H, out.Hi.H = span(d.Lo.H, d.Hi.H)
	return out
}

func (e *groundArray) in(f frame) emitter {
	c := *e
	c.array, c.image, c.g = *e.array.in(f).(*array), *e.image.in(f).(*array), e.g.in(f)
	return &c
}

func (e *groundArray) falloff() (g, offset float64) {
	g, offset = e.array.falloff()
	return 4 * g, offset + 2*math.Abs(e.g.height(e.pos))
}

// groundPanel is a panel over a reflecting ground, put together as a panel is: of
// the array over ground, the pattern's two rays and the cylindrical model with its
// image. Beyond 2 L^2/lambda the array's own waves stand for its far field.
type groundPanel struct {
	panel
	far   *twoRay
	array *groundArray
	cyl   [2]cylindrical // the model and its image, for geometry and density
}

func newGroundPanel(p *panel, g groundPlane, far *twoRay) *groundPanel {
	e := &groundPanel{panel: *p, far: far, array: newGroundArray(p.array, g)}
	for i, place := range []placement{p.placement, g.mirror(p.placement)} {
		e.cyl[i] = cylindrical{farField{placement: place}, p.cylinder, rod{place.pos, place.axes.Up}}
	}
	return e
}

// model is the cylindrical density with its image's, by amplitude.
func (e *groundPanel) model(q Point) float64 {
	var s [2]float64
	for i := range e.cyl {
		c := &e.cyl[i]
		rho, _ := c.line.polar(q)
		_, phi, _ := c.towards(q)
		s[i] = c.cut.HorizontalCut(phi) * c.along(rho)
	}
	return addAmplitudes(s[0], s[1])
}

func (e *groundPanel) at(q Point) density {
	d, _ := e.best(q)
	return d
}

func (e *groundPanel) best(q Point) (density, string) {
	s, how := e.far.at(q), string(MethodFarField)
	rho, z := e.cyl[0].line.polar(q)
	inside := math.Hypot(rho, math.Max(0, math.Abs(z)-e.half)) <= e.edge
	if inside && rho > 0 && e.cylinder.holds(rho, z) {
		if c := e.model(q); c < math.Max(s.E, s.H) {
			s, how = density{math.Min(s.E, c), math.Min(s.H, c)}, string(MethodCylindrical)
		}
	}
	if inside || e.builtIn {
		a := e.array.at(q)
		if math.Max(a.E, a.H) > math.Max(s.E, s.H) {
			how = string(MethodArray)
		}
		s = density{math.Max(a.E, s.E), math.Max(a.H, s.H)}
	}
	return s, how
}

func (e *groundPanel) over(b box) densityRange {
	s := e.far.over(b)
	ring := e.cyl[0].line.ring(b)
	near, far := ring.fromSegment(e.half)
	const slack = 1e-9 // m: a switch must not fall between a point and its box
	inside, outside := near-slack <= e.edge, far+slack > e.edge
	if everywhere, anywhere := e.cylinder.holdsOver(&ring); anywhere && inside {
		mirrored := e.cyl[1].line.ring(b)
		c, m := e.cylinder.over(&ring, e.cyl[0].look(b).phi), e.cylinder.over(&mirrored, e.cyl[1].look(b).phi)
		lo, hi := addAmplitudes(c.Lo, m.Lo), addAmplitudes(c.Hi, m.Hi)
		s.Lo = density{math.Min(s.Lo.E, lo), math.Min(s.Lo.H, lo)}
		if everywhere && !outside {
			s.Hi = density{math.Min(s.Hi.E, hi), math.Min(s.Hi.H, hi)}
		}
	}
	if !inside && !e.builtIn {
		return s
	}
	a := e.array.over(b)
	if !outside || e.builtIn {
		s.Lo = density{math.Max(s.Lo.E, a.Lo.E), math.Max(s.Lo.H, a.Lo.H)}
	}
	s.Hi = density{math.Max(s.Hi.E, a.Hi.E), math.Max(s.Hi.H, a.Hi.H)}
	return s
}

func (e *groundPanel) in(f frame) emitter {
	c := *e
	c.panel = *e.panel.in(f).(*panel)
	c.far, c.array = e.far.in(f).(*twoRay), e.array.in(f).(*groundArray)
	for i := range e.cyl {
		c.cyl[i].placement, c.cyl[i].line = e.cyl[i].placement.in(f), e.cyl[i].line.in(f)
	}
	return &c
}

func (e *groundPanel) falloff() (g, offset float64) {
	g, offset = e.array.falloff()
	return math.Max(g, 4*e.gain), offset
}

func (e *groundPanel) methodAt(q Point) string {
	_, how := e.best(q)
	return "panel: " + how + " over ground"
}
