package exposure

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"sort"

	"gonum.org/v1/gonum/stat/distuv"
)

// Coverage asks for a one-sided quantile of each distance by Monte Carlo.
type Coverage struct {
	Probability float64 // of the quantile, such as 0.95
	Trials      int     // to begin with; 0 = 10000
	Seed        uint64  // 0 = DefaultSeed
	// IntervalM is how wide the quantile's own 95 % confidence interval may be;
	// trials are doubled until it is, at most to mostTrials. 0 = 0.05.
	IntervalM float64
}

// DefaultSeed is the seed of every Monte Carlo run that is not given another.
const DefaultSeed = 20260101

const mostTrials = 160_000

// lineSamples is the number of points at which a line's response is tabled.
const lineSamples = 97

// The inputs that vary, in the order in which they are reported.
var coverageInputs = [...]string{"power and gain", "tilt", "azimuth", "position"}

// response is one member's log ratio along the line and how it answers to its
// pose: second-order in tilt, azimuth and the three coordinates, by central
// differences of one standard uncertainty.
type response struct {
	sigmaDB float64 // power and gain together
	housing int     // rows of one housing share their pose draws
	own     int     // number of the row's own power draw
	at      []sample
	varies  [5]bool
	inputs  []int // the pose inputs that vary
}

// sample is a member's response at one point of the line: the natural logarithm
// of its ratio, and its first and second differences by standard unit of tilt,
// azimuth, x, y and z.
type sample struct {
	value         float64
	first, second [5]float64
}

// coverLine is a straight line on which the crossing of the boundary is
// followed while inputs vary.
type coverLine struct {
	at    []float64    // coordinate along the line, ascending
	terms [][]response // by term of the evaluator and member
}

// cover adds the quantile to a distance: the boundary's crossing of the line
// through its farthest point, along the direction of the distance, is followed
// while the inputs vary (a choice of this project: to first order the extreme
// moves as the boundary does at its farthest point). Power and gain vary in dB,
// tilt, azimuth and position by their standard uncertainties, all normal (JCGM
// 101:2008, 6.4.7); rows of one housing share tilt, azimuth and position.
func (m *Model) cover(ctx context.Context, d *Distance, e *evaluator, f frame, b bracket, c *Coverage) error {
	q := *c
	if !(q.Probability > 0.5 && q.Probability < 1) {
		return fmt.Errorf("coverage %v is not between 0.5 and 1", q.Probability)
	}
	if q.Trials == 0 {
		q.Trials = 10_000
	}
	if q.Seed == 0 {
		q.Seed = DefaultSeed
	}
	if q.IntervalM == 0 {
		q.IntervalM = DefaultResolutionM
	}
	line := m.coverLine(e, f, b)
	var all []float64
	rng := rand.New(rand.NewPCG(q.Seed, 0))
	for {
		if err := ctx.Err(); err != nil {
			return err
		}
		all = append(all, line.trials(rng, q.Trials-len(all), [4]bool{true, true, true, true})...)
		sorted := append([]float64(nil), all...)
		sort.Float64s(sorted)
		lo, hi := quantileInterval(len(sorted), q.Probability)
		at := int(math.Ceil(q.Probability*float64(len(sorted)))) - 1
		cd := CoveredDistance{Probability: q.Probability, DistanceM: sorted[at], LowM: sorted[lo], HighM: sorted[hi], Trials: len(sorted), Seed: q.Seed}
		if cd.HighM-cd.LowM <= q.IntervalM || q.Trials >= mostTrials {
			// What was bracketed from above stays above: the quantile is never
			// nearer than the distance itself.
			cd.DistanceM = math.Max(cd.DistanceM, d.DistanceM)
			cd.HighM = math.Max(cd.HighM, cd.DistanceM)
			for k := range coverageInputs {
				var only [4]bool
				only[k] = true
				sample := line.trials(rand.New(rand.NewPCG(q.Seed, uint64(k)+1)), 1000, only)
				cd.Inputs = append(cd.Inputs, InputPart{coverageInputs[k], deviation(sample)})
			}
			sort.SliceStable(cd.Inputs, func(i, j int) bool { return cd.Inputs[i].DeviationM > cd.Inputs[j].DeviationM })
			d.Covered = &cd
			return nil
		}
		q.Trials *= 2
	}
}

// quantileInterval returns the order statistics (from zero) that hold the
// quantile with 95 % confidence: binomial, in its normal approximation with
// continuity (JCGM 101:2008, 7.9 asks for such an interval).
func quantileInterval(n int, p float64) (lo, hi int) {
	z := distuv.UnitNormal.Quantile(0.975)
	mid, half := float64(n)*p, z*math.Sqrt(float64(n)*p*(1-p))
	lo = max(0, int(math.Floor(mid-half))-1)
	hi = min(n-1, int(math.Ceil(mid+half)))
	return lo, hi
}

func deviation(x []float64) float64 {
	mean, sum := 0.0, 0.0
	for _, v := range x {
		mean += v
	}
	mean /= float64(len(x))
	for _, v := range x {
		sum += (v - mean) * (v - mean)
	}
	return math.Sqrt(sum / float64(len(x)-1))
}

// coverLine tables every member's ratio along the line and how it answers to
// its inputs.
func (m *Model) coverLine(e *evaluator, f frame, b bracket) *coverLine {
	// In equal steps of the logarithm of distance.
	at := make([]float64, lineSamples)
	points := make([]Point, lineSamples)
	for i := range at {
		at[i] = b.outer * math.Pow(lineReach, 2*float64(i)/(lineSamples-1)-1)
		points[i] = Point{X: at[i], Y: b.at.Y, Z: b.at.Z}
	}
	l := m.responses(e, f, points)
	l.at = at
	return l
}

// responses tables every member's ratio at up to lineSamples points of the frame,
// and how it answers to its inputs there.
func (m *Model) responses(e *evaluator, f frame, points []Point) *coverLine {
	l := &coverLine{}
	housings := map[string]int{}
	rows := 0
	for ti := range e.terms {
		t := &e.terms[ti]
		var members []response
		for j := range t.em {
			src := m.sources[t.source[j]].src
			key := src.Housing
			if key == "" {
				key = "\x00" + src.ID
			}
			if _, ok := housings[key]; !ok {
				housings[key] = len(housings)
			}
			u := src.Uncertainty
			r := response{sigmaDB: math.Hypot(u.PowerDB, u.GainDB), housing: housings[key], own: rows, at: make([]sample, len(points))}
			rows++
			steps := [5]float64{u.TiltRad, u.AzimuthRad, u.PositionM, u.PositionM, u.PositionM}
			for k, s := range steps {
				if s != 0 {
					r.varies[k] = true
					r.inputs = append(r.inputs, k)
				}
			}
			for i, p := range points {
				v := &r.at[i]
				v.value = logRatio(e, t, j, p)
				for _, k := range r.inputs {
					up := logRatio(e, t, j, f.moved(src, p, k, steps[k]))
					down := logRatio(e, t, j, f.moved(src, p, k, -steps[k]))
					v.first[k] = (up - down) / 2
					v.second[k] = (up - 2*v.value + down) / 2
				}
			}
			members = append(members, r)
		}
		l.terms = append(l.terms, members)
	}
	return l
}

// logRatio is the natural logarithm of one member's own ratio in the class's
// governing group at p.
func logRatio(e *evaluator, t *evalTerm, j int, p Point) float64 {
	one := evalTerm{em: t.em[j : j+1], pw: t.pw[j : j+1], w: t.w, one: true, rot: t.rot[j : j+1]}
	var by groupRatios
	one.at(p, e.rule, &by)
	v, _ := by.largest(e.ng)
	if !(v <= 1e30) {
		v = 1e30 // on the wire itself
	}
	return math.Log(math.Max(v, 1e-30))
}

// moved is the point at which the nominal source shows what it would show at p
// if it were turned or moved by one step: the inverse motion applied to p.
func (f frame) moved(s *Source, p Point, input int, step float64) Point {
	q := f.back(p)
	switch input {
	case 0, 1:
		// The axes about which a positive turn by the right hand raises the
		// azimuth (clockwise seen from above) and tilts the boresight down.
		axis := Point{Z: -1}
		if input == 0 {
			axis = s.Pose.Axes().Right.Scale(-1)
		}
		q = s.Position.Add(turned(q.Sub(s.Position), axis, -step))
	default:
		shift := [3]Point{{X: step}, {Y: step}, {Z: step}}[input-2]
		q = q.Sub(shift)
	}
	return f.point(q)
}

// turned rotates v about the unit axis by an angle (Rodrigues' formula).
func turned(v, axis Point, angle float64) Point {
	s, c := math.Sincos(angle)
	return v.Scale(c).Add(axis.Cross(v).Scale(s)).Add(axis.Scale(axis.Dot(v) * (1 - c)))
}

// counts returns the numbers of housings and of rows that draw for themselves.
func (l *coverLine) counts() (housings, rows int) {
	for _, t := range l.terms {
		for i := range t {
			housings, rows = max(housings, t[i].housing+1), max(rows, t[i].own+1)
		}
	}
	return housings, rows
}

// trials draws the crossing of the line n times.
func (l *coverLine) trials(rng *rand.Rand, n int, vary [4]bool) []float64 {
	out := make([]float64, 0, n)
	housings, rows := l.counts()
	pose := make([][5]float64, housings)
	power := make([]float64, rows)
	shift := make([][]memberDraw, len(l.terms))
	for k := range l.terms {
		shift[k] = make([]memberDraw, len(l.terms[k]))
	}
	for trial := 0; trial < n; trial++ {
		// Every number is drawn whether it is used or not, so that a run with
		// one input alone and another with all see the same stream.
		for i := range pose {
			for k := range pose[i] {
				pose[i][k] = rng.NormFloat64()
			}
		}
		for i := range power {
			power[i] = rng.NormFloat64()
		}
		for k, t := range l.terms {
			for j := range t {
				r := &t[j]
				d := &shift[k][j]
				d.db = 0
				if vary[0] {
					d.db = power[r.own] * r.sigmaDB * math.Ln10 / 10
				}
				for a := range d.pose {
					on := vary[1] && a == 0 || vary[2] && a == 1 || vary[3] && a > 1
					d.pose[a] = 0
					if on && r.varies[a] {
						d.pose[a] = pose[r.housing][a]
					}
				}
			}
		}
		out = append(out, l.crossing(shift))
	}
	return out
}

// memberDraw is what one trial does to one member.
type memberDraw struct {
	db   float64 // natural logarithm of the factor on its power
	pose [5]float64
}

// ratio is the trial's total at the i-th sample: members of a term add in
// amplitude, terms as they are.
func (l *coverLine) ratio(i int, draw [][]memberDraw) float64 {
	sum := 0.0
	for k, t := range l.terms {
		amp := 0.0
		for j := range t {
			r, d := &t[j], &draw[k][j]
			v := &r.at[i]
			x := v.value + d.db
			for _, a := range r.inputs {
				z := d.pose[a]
				x += z * (v.first[a] + z*v.second[a])
			}
			x = math.Min(x, mostLogRatio)
			if len(t) == 1 {
				sum += math.Exp(x)
				break
			}
			amp += math.Exp(x / 2)
		}
		sum += amp * amp
	}
	return sum
}

// lineReach is how many times farther and nearer than the distance the line is
// tabled: the boundary is never expected to leave that.
const lineReach = 3

// mostLogRatio bounds the logarithm of a member's ratio: beside a null of its
// pattern the second differences are those of the floor under the logarithm, and
// far draws would otherwise overflow.
const mostLogRatio = 60

// crossing finds where the trial's ratio falls to 1 beside the nominal
// boundary. A first step goes to where a ratio that falls with the square of
// distance would cross; from there the walk goes outward while the ratio is
// above 1, else inward, and ends between two samples by interpolation in
// logarithms.
func (l *coverLine) crossing(draw [][]memberDraw) float64 {
	const middle, fall = (lineSamples - 1) / 2, 2
	logStep := math.Log(lineReach) / middle
	v := l.ratio(middle, draw)
	jump := math.Log(math.Min(math.Max(v, 1e-30), 1e30)) / (fall * logStep)
	i := middle + int(math.Max(-middle, math.Min(middle, jump)))
	if i != middle {
		v = l.ratio(i, draw)
	}
	for v > 1 && i < lineSamples-1 {
		next := l.ratio(i+1, draw)
		if next <= 1 {
			return between(l.at[i], l.at[i+1], v, next)
		}
		i, v = i+1, next
	}
	if v > 1 {
		return l.at[lineSamples-1]
	}
	for i > 0 {
		next := l.ratio(i-1, draw)
		if next > 1 {
			return between(l.at[i-1], l.at[i], next, v)
		}
		i, v = i-1, next
	}
	return l.at[0]
}

func between(a, b, va, vb float64) float64 {
	la, lb := math.Log(va), math.Log(math.Max(vb, 1e-300))
	return a * math.Pow(b/a, la/(la-lb))
}
