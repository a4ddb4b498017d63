package exposure

import (
	"context"
	"encoding/json"
	"math"
	"os"
	"strconv"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// The proposition of the package doc, held against dense sampling on random
// sites: nothing outside a keep-out line exceeds the share, nothing inside the
// inner line is below it. The share of the points that are looked at closest
// lies about the lines.

// madeSites is how many random sites a normal run looks at; pointsPerSite makes
// 100,000 points of them. STANDCLEAR_POINTS=1000000 looks at that many points of
// each site instead.
const (
	madeSites     = 40
	nearSites     = 12
	pointsPerSite = 2500
)

func points(t *testing.T) int {
	text := os.Getenv("STANDCLEAR_POINTS")
	if text == "" || testing.Short() {
		return pointsPerSite
	}
	n, err := strconv.Atoi(text)
	require.NoError(t, err, "STANDCLEAR_POINTS")
	return n
}

// lines answers the made question without the search for the largest ratio.
func (s *madeSite) lines(t *testing.T, m *Model) *Zone {
	regions, err := m.regions(&s.query)
	require.NoError(t, err, "%v", s)
	z, _, _, err := m.lines(context.Background(), regions[0], m.rules[0], &s.query)
	require.NoError(t, err, "%v", s)
	return &z
}

// probe is the modelled ratio of one class over one surface, by sampling.
type probe struct {
	e        *evaluator
	from, to float64
	mean     bool
}

func (s *madeSite) probe(m *Model, f *Surface) *probe {
	r := m.rules[0]
	return &probe{
		e:    m.evaluator(r, nil, m.groundFactor(f.GroundFactor), siteFrame, s.query.Share),
		from: f.Z + f.From, to: f.Z + f.To,
		mean: r.anyMean && f.Averaging != AveragePeak && f.To > f.From,
	}
}

// means returns the part of each group's ratio that is a mean over the body.
func (p *probe) means(x, y float64) (by groupRatios) {
	if !p.mean {
		return by
	}
	for i := range p.e.terms {
		t := &p.e.terms[i]
		for g := 0; g < p.e.ng; g++ {
			if t.w[g].mean {
				by[g] += t.meanOver(p.e.rule, g, x, y, p.from, p.to)
			}
		}
	}
	return by
}

// exact returns the means by the midpoint rule on steps of a tenth of a
// millimetre, which errs by less than 1e-7 here: the quick quadrature of means may
// step over a kink of a pattern.
func (p *probe) exact(x, y float64) (by groupRatios) {
	const parts = 20_000
	if !p.mean {
		return by
	}
	var one groupRatios
	for i := range p.e.terms {
		t := &p.e.terms[i]
		for k := 0; k < parts; k++ {
			t.at(Point{X: x, Y: y, Z: p.from + (p.to-p.from)*(float64(k)+0.5)/parts}, p.e.rule, &one)
			for g := 0; g < p.e.ng; g++ {
				if t.w[g].mean {
					by[g] += one[g] / parts
				}
			}
		}
	}
	return by
}

// at returns the ratio with the height-dependent part taken at z.
func (p *probe) at(means groupRatios, x, y, z float64) float64 {
	by := p.e.peaksAt(Point{X: x, Y: y, Z: z}, p.mean)
	for g := range by {
		by[g] += means[g]
	}
	v, _ := by.largest(p.e.ng)
	return v
}

// dense returns the largest ratio over count heights, and where it is.
func (p *probe) dense(x, y float64, count int) (best, at float64) {
	return p.denseWith(p.means(x, y), x, y, count)
}

func (p *probe) denseWith(means groupRatios, x, y float64, count int) (best, at float64) {
	if p.to == p.from {
		count = 1
	}
	for k := 0; k < count; k++ {
		z := p.from
		if count > 1 {
			z += (p.to - p.from) * float64(k) / float64(count-1)
		}
		if v := p.at(means, x, y, z); v > best || k == 0 {
			best, at = v, z
		}
	}
	return best, at
}

// summit climbs from the best of many heights to the largest ratio near it.
func (p *probe) summit(x, y float64) float64 {
	const heights = 400
	means := p.exact(x, y)
	best, at := p.denseWith(means, x, y, heights)
	step := (p.to - p.from) / (heights - 1)
	lo, hi := math.Max(p.from, at-step), math.Min(p.to, at+step)
	for hi-lo > 1e-9 {
		a, b := lo+(hi-lo)/3, hi-(hi-lo)/3
		va, vb := p.at(means, x, y, a), p.at(means, x, y, b)
		best = math.Max(best, math.Max(va, vb))
		if va < vb {
			lo = a
		} else {
			hi = b
		}
	}
	return best
}

// covered says whether every method reaches every one of count heights.
func (p *probe) covered(x, y float64, count int) bool {
	for k := 0; k < count; k++ {
		z := p.from + (p.to-p.from)*float64(k)/float64(max(1, count-1))
		if p.e.reaches(box{c: Point{X: x, Y: y, Z: z}}) == unreached {
			return false
		}
	}
	return true
}

// draw picks a point of the surface: half of them about the lines of the zone,
// some under the antennas, the rest anywhere.
func (s *madeSite) draw(f *Surface, z *Zone) (x, y float64) {
	whole := MultiPolygon{f.Outline}
	var rings []Ring
	for _, m := range []MultiPolygon{z.Outer, z.Inner} {
		for _, poly := range m {
			rings = append(rings, poly...)
		}
	}
	lox, hix, loy, hiy := math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
	for _, v := range f.Outline[0] {
		lox, hix, loy, hiy = math.Min(lox, v[0]), math.Max(hix, v[0]), math.Min(loy, v[1]), math.Max(hiy, v[1])
	}
	for {
		switch kind := s.r.Float64(); {
		case kind < 0.55 && len(rings) > 0:
			ring := rings[s.r.IntN(len(rings))]
			i, u := s.r.IntN(len(ring)-1), s.r.Float64()
			spread := s.query.ResolutionM * math.Pow(10, -s.between(0, 3))
			x = ring[i][0]*(1-u) + ring[i+1][0]*u + spread*s.r.NormFloat64()
			y = ring[i][1]*(1-u) + ring[i+1][1]*u + spread*s.r.NormFloat64()
		case kind < 0.65:
			at := s.site.Sources[s.r.IntN(len(s.site.Sources))].Position
			spread := math.Pow(10, -s.between(0, 4))
			x, y = at.X+spread*s.r.NormFloat64(), at.Y+spread*s.r.NormFloat64()
		default:
			x, y = s.between(lox, hix), s.between(loy, hiy)
		}
		if whole.Contains(x, y) {
			return x, y
		}
	}
}

func TestNothingAboveOutsideNothingBelowInside(t *testing.T) {
	n, sites := points(t), madeSites
	if testing.Short() {
		n, sites = n/5, 8
	}
	var all tally
	for seed := 1; seed <= sites; seed++ {
		all.look(t, newMadeSite(uint64(seed)), n)
	}
	t.Logf("%d sites, %d points each: %d above the share, %d inside the inner line", sites, n, all.above, all.inside)
	assert.Greater(t, all.above, n*sites/20, "too few points above to mean anything")
	assert.Greater(t, all.inside, n*sites/20, "too few points inside to mean anything")
}

// The same with the near-field methods among the sources.
func TestNothingAboveOutsideNearField(t *testing.T) {
	if testing.Short() {
		t.Skip("dense sampling")
	}
	n := points(t) / 5
	var all tally
	for seed := uint64(nearSeeds); seed < nearSeeds+nearSites; seed++ {
		all.look(t, newMadeSite(seed), n)
	}
	t.Logf("%d sites, %d points each: %d above the share, %d inside the inner line", nearSites, n, all.above, all.inside)
	assert.Greater(t, all.above, n*nearSites/20, "too few points above to mean anything")
	assert.Greater(t, all.inside, n*nearSites/20, "too few points inside to mean anything")
}

// tally counts the points that meant something.
type tally struct{ above, inside int }

// look holds the lines of a site against n points.
func (c *tally) look(t *testing.T, s *madeSite, n int) {
	m := s.model(t, 2)
	f, z := &s.site.Surfaces[0], s.lines(t, m)
	p := s.probe(m, f)
	outer, inner := newBands(z.Outer), newBands(z.Inner)
	share := s.query.Share
	// Values at a height are held to the last bit, means to the accuracy of
	// the midpoint rule.
	slack := 0.0
	if p.mean {
		slack = 1e-7
	}
	if p.mean && s.site.Ground.Method == GroundFresnel {
		n /= 10 // two rays make fringes of centimetres, and means over them dear
	}
	faults := 0
	for k := 0; k < n && faults < 3; k++ {
		x, y := s.draw(f, z)
		ratio, height := p.dense(x, y, 17)
		isOuter := outer.contains(x, y) || z.Outer.Contains(x, y)
		ok := true
		if ratio > share && !isOuter && p.mean {
			ratio, height = p.denseWith(p.exact(x, y), x, y, 17)
		}
		if ratio > share*(1+slack) {
			c.above++
			ok = assert.True(t, isOuter, "%v: ratio %v at (%v, %v, %v) exceeds %v outside the outer line", s, ratio, x, y, height, share)
		}
		if !isOuter {
			ok = assert.True(t, p.covered(x, y, 17), "%v: (%v, %v) is in a reactive region, yet outside the outer line", s, x, y) && ok
		}
		if inner.contains(x, y) {
			c.inside++
			if ratio <= share {
				ratio = p.summit(x, y) // stops a nanometre from the top
			}
			ok = assert.Greater(t, ratio, share*(1-1e-6), "%v: (%v, %v) is below, yet inside the inner line", s, x, y) && ok
			ok = assert.True(t, isOuter, "%v: (%v, %v) is inside the inner line, yet outside the outer one", s, x, y) && ok
		}
		if !ok {
			faults++
		}
	}
}

// What the rings of a zone must be: closed, turned the right way, simple, apart,
// holes inside; and on the surface.
func TestZonePolygonsAreValid(t *testing.T) {
	if testing.Short() {
		t.Skip("dense sampling")
	}
	corners := 0
	for seed := uint64(1); seed <= madeSites+8; seed++ {
		s := newMadeSite(seed)
		if seed > madeSites {
			s.query.ResolutionM = 0.07 // other steps meet the outline elsewhere
		}
		z := s.lines(t, s.model(t, 2))
		assert.Empty(t, ringFault(z.Outer), "%v: outer", s)
		assert.Empty(t, ringFault(z.Inner), "%v: inner", s)
		whole := MultiPolygon{s.site.Surfaces[0].Outline}
		for _, poly := range z.Outer {
			for _, r := range poly {
				corners += len(r)
				for i := range r {
					// Corners on the outline are rounded to 4 nm, then to 1 nm.
					on := whole.Contains(r[i][0], r[i][1]) || nearRings(s.site.Surfaces[0].Outline, r[i], 5e-9)
					if !assert.True(t, on, "%v: corner %v is off the surface", s, r[i]) {
						break
					}
				}
			}
		}
		assert.LessOrEqual(t, z.OuterAreaM2, z.SurfaceAreaM2+5e-9*whole.length(), "%v", s)
		assert.LessOrEqual(t, z.InnerAreaM2, z.OuterAreaM2, "%v", s)
	}
	assert.Greater(t, corners, 1000)
}

// nearRings reports whether v lies within reach of a line of the rings.
func nearRings(rings []Ring, v [2]float64, reach float64) bool {
	for _, r := range rings {
		for i := 0; i+1 < len(r); i++ {
			dx, dy := r[i+1][0]-r[i][0], r[i+1][1]-r[i][1]
			u := ((v[0]-r[i][0])*dx + (v[1]-r[i][1])*dy) / (dx*dx + dy*dy)
			u = math.Max(0, math.Min(1, u))
			if math.Hypot(v[0]-r[i][0]-u*dx, v[1]-r[i][1]-u*dy) <= reach {
				return true
			}
		}
	}
	return false
}

// The same bytes whatever the number of workers.
func TestSameBytesWithAnyNumberOfWorkers(t *testing.T) {
	step := uint64(3)
	if testing.Short() {
		step = 12
	}
	for seed := uint64(1); seed <= madeSites; seed += step {
		s := newMadeSite(seed)
		s.site.Places = []Place{{ID: "P", At: s.site.Sources[0].Position.Add(Point{X: 2, Y: 1}), To: 2, Class: "anyone"}}
		var want []byte
		for _, workers := range []int{1, 2, 8} {
			m := s.model(t, workers)
			zones, err := m.Zones(context.Background(), s.query)
			require.NoError(t, err)
			distances, err := m.Distances(context.Background(), DistanceQuery{All: true})
			require.NoError(t, err)
			fields, err := m.Field(context.Background(), s.site.Places)
			require.NoError(t, err)
			got, err := json.Marshal([]any{zones, distances, fields})
			require.NoError(t, err)
			if want == nil {
				want = got
			}
			assert.Equal(t, string(want), string(got), "%v with %d workers", s, workers)
		}
	}
}

// The gap between the lines shrinks with the resolution. Where antennas hang in
// the body volume the gap keeps the reactive regions, which are not assessed
// however fine the cells.
func TestGapIsInProportionToTheResolution(t *testing.T) {
	if testing.Short() {
		t.Skip("dense sampling")
	}
	coarse, fine := 0.0, 0.0
	for seed := uint64(1); seed <= madeSites; seed++ {
		s := newMadeSite(seed)
		m := s.model(t, 2)
		var gaps [2]float64
		for i, resolution := range []float64{0.2, 0.1} {
			s.query.ResolutionM = resolution
			z := s.lines(t, m)
			gaps[i] = z.OuterAreaM2 - z.InnerAreaM2
			allowed := 4*resolution*z.Outer.length() + s.reactiveArea(resolution)
			assert.LessOrEqual(t, gaps[i], allowed, "%v at %v m: outer %v m2, inner %v m2, line %v m", s, resolution, z.OuterAreaM2, z.InnerAreaM2, z.Outer.length())
		}
		coarse, fine = coarse+gaps[0], fine+gaps[1]
	}
	t.Logf("gap over all sites %.2f m2 at 0.2 m, %.2f m2 at 0.1 m", coarse, fine)
	// Half, were it not for the ends of the lines on the outline and what is near
	// the reactive regions.
	assert.Less(t, fine, 0.65*coarse)
}

// reactiveArea bounds the plan of the regions that the methods do not reach.
func (s *madeSite) reactiveArea(resolution float64) float64 {
	sum := 0.0
	for i := range s.site.Sources {
		p := s.site.Sources[i].place()
		r := p.reactive + math.Hypot(p.halfLength, p.halfWidth) + 2*resolution
		sum += math.Pi * r * r
	}
	return sum
}
