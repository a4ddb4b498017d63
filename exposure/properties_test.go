package exposure

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/limits"
)

// Identities that any site must obey, on random ones. Tolerances are sumRounding
// unless a line says otherwise.

// asked returns the answer at one place.
func asked(t require.TestingT, site *Site, pl Place) PointResult {
	m, err := New(site, Options{Workers: 1})
	require.NoError(t, err)
	got, err := m.Field(context.Background(), []Place{pl})
	require.NoError(t, err)
	return got[0]
}

// madeFor draws a made site for a property.
func madeFor(t *rapid.T) *madeSite {
	return newMadeSite(rapid.Uint64Range(1, 900).Draw(t, "site"))
}

// somewhere draws a point some metres from a site's first antenna.
func (s *madeSite) somewhere() Point {
	return s.site.Sources[0].Position.Add(direction(s.r).Scale(s.between(2, 12)))
}

// In free space the density along any ray from an antenna falls as 1/r2.
func TestDensityFallsWithDistance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := madeFor(t)
		source := s.site.Sources[0]
		source.SweepRad = 0 // the time share of a rotating beam varies with distance
		site := &Site{Sources: []Source{source}, Limits: s.site.Limits}
		dir := direction(s.r)
		near := s.between(0.5, 20)
		factor := s.between(1.01, 30)
		a := asked(t, site, Place{ID: "a", At: source.Position.Add(dir.Scale(near))})
		b := asked(t, site, Place{ID: "b", At: source.Position.Add(dir.Scale(near * factor))})
		if float64(a.SWPerM2) < 1e-9 {
			return // a null, of rounding alone
		}
		assert.Less(t, float64(b.SWPerM2), float64(a.SWPerM2))
		// The direction is rounded: a steep pattern turns 1e-15 rad, at sites 10 km
		// off 1e-12, into as much of a decibel.
		assert.InEpsilon(t, float64(a.SWPerM2), float64(b.SWPerM2)*factor*factor, 1e-8)
	})
}

// What several sources do together is the sum of what each does: densities of
// strangers, squares of fields, and ratios of heating.
func TestSuperposition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := madeFor(t)
		for i := range s.site.Sources {
			s.site.Sources[i].Signal = ""
		}
		s.site.Limits = tableOf(t, level(limits.S, s.between(0.1, 100)))
		pl := Place{ID: "p", At: s.somewhere()}
		whole := asked(t, s.site, pl)
		var sum, e2, h2, ratio float64
		for i, source := range s.site.Sources {
			alone := *s.site
			alone.Sources = []Source{source}
			one := asked(t, &alone, pl)
			sum += float64(one.SWPerM2)
			e2 += math.Pow(float64(one.EVPerM), 2)
			h2 += math.Pow(float64(one.HAPerM), 2)
			ratio += float64(one.Ratios[0].ExposureRatio)
			assert.InDelta(t, float64(one.SWPerM2), float64(whole.Contributions[i].SWPerM2), sumRounding*float64(whole.SWPerM2))
		}
		assert.InDelta(t, sum, float64(whole.SWPerM2), sumRounding*sum)
		assert.InDelta(t, math.Sqrt(e2), float64(whole.EVPerM), sumRounding*math.Sqrt(e2))
		assert.InDelta(t, math.Sqrt(h2), float64(whole.HAPerM), sumRounding*math.Sqrt(h2))
		assert.InDelta(t, ratio, float64(whole.Ratios[0].ExposureRatio), sumRounding*ratio)
	})
}

// In the far field E and H are those of a plane wave: E H = S, E/H = Z0.
func TestFarFieldIsAPlaneWave(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := madeFor(t)
		for _, c := range asked(t, s.site, Place{ID: "p", At: s.somewhere()}).Contributions {
			e, h, w := float64(c.EVPerM), float64(c.HAPerM), float64(c.SWPerM2)
			assert.InDelta(t, w, e*h, sumRounding*w, c.Antenna)
			assert.InDelta(t, e, Z0*h, sumRounding*e, c.Antenna)
		}
	})
}

// A ground's field factor k multiplies densities by k2, wall loss divides them,
// and both leave the ratio of fields as it was: heating goes with the square.
func TestGroundAndWallScaleFields(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := madeFor(t)
		s.site.Ground = Ground{}
		s.site.Limits = tableOf(t, level(limits.S, 3), level(limits.E, 40, func(r *limits.Row) { r.Effect = limits.Stimulation }))
		s.site.Surfaces[0].GroundFactor = 0
		pl := Place{ID: "p", At: s.somewhere()}
		plain := asked(t, s.site, pl)
		k, wall := s.between(1, 2), s.between(0.01, 1)
		check := func(got PointResult, power float64) {
			t.Helper()
			assert.InEpsilon(t, power*float64(plain.SWPerM2), float64(got.SWPerM2), sumRounding)
			assert.InEpsilon(t, math.Sqrt(power)*float64(plain.EVPerM), float64(got.EVPerM), sumRounding)
			assert.InEpsilon(t, math.Sqrt(power)*float64(plain.HAPerM), float64(got.HAPerM), sumRounding)
			heat, nerve := got.Ratios[0].Groups[0], got.Ratios[0].Groups[1]
			assert.InEpsilon(t, power*float64(plain.Ratios[0].Groups[0].ExposureRatio), float64(heat.ExposureRatio), sumRounding, heat.Group)
			assert.InEpsilon(t, math.Sqrt(power)*float64(plain.Ratios[0].Groups[1].ExposureRatio), float64(nerve.ExposureRatio), sumRounding, nerve.Group)
		}
		if float64(plain.SWPerM2) < 1e-9 {
			return // a null, or rows with nothing on air
		}
		pl.WallLoss = wall
		check(asked(t, s.site, pl), wall)
		pl.WallLoss = 1
		// The ground of the site, or of the surface that the place is on.
		s.site.Ground = Ground{Method: GroundFactor, Factor: k}
		check(asked(t, s.site, pl), k*k)
		s.site.Ground = Ground{}
		s.site.Surfaces[0].GroundFactor, pl.On = k, "roof"
		check(asked(t, s.site, pl), k*k)
	})
}

// Which power counts: mean levels take the share of time on air and the power
// reduction, peak levels the peak factor, stimulation levels the power on air.
func TestWhichPowerCounts(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		u := rapid.Float64Range(0.05, 1)
		source := radiator("a", Point{X: 7})
		p := &source.Power
		p.Duty, p.ReductionFactor, p.Loss = u.Draw(t, "duty"), u.Draw(t, "reduction"), u.Draw(t, "loss")
		p.PeakFactor, p.Carriers = 1/u.Draw(t, "1/peak"), float64(rapid.IntRange(1, 5).Draw(t, "carriers"))
		air := PowerDensity(1000*p.Loss*p.Carriers, 1, 7)
		peak := level(limits.S, 5, func(r *limits.Row) { r.Kind = limits.Peak })
		nerve := level(limits.E, 30, func(r *limits.Row) { r.Effect = limits.Stimulation })
		assert.InEpsilon(t, air*p.Duty*p.ReductionFactor/5, ratioAt(t, Place{ID: "p"}, []Source{source}, level(limits.S, 5)), sumRounding)
		assert.InEpsilon(t, air*p.PeakFactor/5, ratioAt(t, Place{ID: "p"}, []Source{source}, peak), sumRounding)
		assert.InEpsilon(t, EFromS(air)/30, ratioAt(t, Place{ID: "p"}, []Source{source}, nerve), sumRounding)
		// Groups are compared, never added.
		most := math.Max(air*p.Duty*p.ReductionFactor/5, math.Max(air*p.PeakFactor/5, EFromS(air)/30))
		assert.InEpsilon(t, most, ratioAt(t, Place{ID: "p"}, []Source{source}, level(limits.S, 5), peak, nerve), sumRounding)
	})
}

// Silence is never "within": a frequency the table does not speak at, or a power
// nobody has told, makes a verdict "not assessed", unless what is known is above.
func TestWhatIsNotKnownIsNotAssessed(t *testing.T) {
	low := func(r *limits.Row) { r.ToHz = 1e9 }
	far := Place{ID: "far", At: Point{X: 500}, Class: "anyone"}
	near := Place{ID: "near", At: Point{X: 1}, Class: "anyone"}
	known, other := radiator("known", Point{}), radiator("other", Point{Y: 3})
	for _, change := range []func(){
		func() { other.FrequencyHz = 2e9 },
		func() { other.FrequencyHz, other.Power.Unknown = 100e6, true },
	} {
		change()
		site := &Site{Sources: []Source{known, other}, Limits: tableOf(t, level(limits.S, 2, low))}
		r := asked(t, site, far).Ratios[0]
		assert.Equal(t, NotAssessed, r.Verdict)
		assert.Contains(t, r.Reason, "other")
		assert.False(t, r.Covered)
		assert.Equal(t, Above, asked(t, site, near).Ratios[0].Verdict)
		// The ratio is that of the covered sources alone.
		assert.InEpsilon(t, PowerDensity(1000, 1, 500)/2, float64(r.ExposureRatio), sumRounding)
	}
	// A deliberate gap is an answer.
	other.Power.Unknown, other.FrequencyHz = false, 2e9
	gap := level(limits.S, 0, func(r *limits.Row) { r.None, r.FromHz, r.ToHz = true, 1.1e9, 3e9 })
	site := &Site{Sources: []Source{known, other}, Limits: tableOf(t, level(limits.S, 2, low), gap)}
	r := asked(t, site, far).Ratios[0]
	assert.Equal(t, Within, r.Verdict)
	assert.True(t, r.Covered)
	// Inside a reactive region the far field's figure is no verdict.
	site = &Site{Sources: []Source{known}, Limits: tableOf(t, level(limits.S, 1e9))}
	r = asked(t, site, Place{ID: "touching", At: Point{X: 0.3}}).Ratios[0] // lambda/(2 pi) is 0.48 m
	assert.Equal(t, NotAssessed, r.Verdict)
	assert.Contains(t, r.Reason, "measure")
	assert.Equal(t, Within, asked(t, site, Place{ID: "clear", At: Point{X: 0.5}}).Ratios[0].Verdict)
}

// What a body stands in: the largest over its height, or where a row asks so the
// mean, each against plain dense sampling; and the two within one group, where
// the parts that vary with height must be taken at one height.
func TestBodyAgainstDenseSampling(t *testing.T) {
	const samples = 20001
	bodySlack := math.Max(bodyGap, 3e-4)
	for seed := uint64(1); seed <= 30; seed++ {
		s := newMadeSite(seed)
		m := s.model(t, 1)
		f := &s.site.Surfaces[0]
		at := Point{X: s.site.Sources[0].Position.X + s.between(0.5, 6), Y: s.site.Sources[0].Position.Y + s.between(0.5, 6), Z: f.Z}
		pl := Place{ID: "body", At: at, To: 1.8}
		got := asked(t, s.site, pl).Ratios[0]
		r := m.rules[0]
		e := m.evaluator(r, nil, m.groundFactor(0), siteFrame, 1)
		var mean, largest groupRatios
		varying := make([]groupRatios, samples)
		for k := range varying {
			z := at.Z + 1.8*float64(k)/(samples-1)
			weight := 1.0 / (samples - 1) // of the trapezoidal rule
			if k == 0 || k == samples-1 {
				weight /= 2
			}
			for i := range e.terms {
				var x groupRatios
				e.terms[i].at(Point{X: at.X, Y: at.Y, Z: z}, r, &x)
				for g := range r.groups {
					if e.terms[i].w[g].mean {
						mean[g] += weight * x[g]
					} else {
						varying[k][g] += x[g]
					}
				}
			}
		}
		want := 0.0
		for g := range r.groups {
			for k := range varying {
				largest[g] = math.Max(largest[g], varying[k][g])
			}
			want = math.Max(want, mean[g]+largest[g])
			// The search over the height stops at bodyGap and a kink of a pattern costs
			// the quadrature up to 3e-4, which a verdict's bodyGap must cover; the
			// trapezoidal rule errs by 1e-7 or so on steps of a tenth of a millimetre.
			assert.InDelta(t, mean[g]+largest[g], float64(got.Groups[g].ExposureRatio), bodySlack*want+1e-12, "%v: %s", s, got.Groups[g].Group)
		}
		assert.InEpsilon(t, want, float64(got.ExposureRatio), bodySlack, "%v", s)
	}
}
