package survey

import (
	"math"
	"slices"
)

// Running finds the largest running mean of a log in one pass, with memory for
// one window of it only. Each sample stands for the time since the one before
// it; a step of more than GapSteps usual steps is a gap, of which one usual step
// counts and the rest is time that nobody recorded. The mean over a window is
// taken over what of it was recorded.
//
// Source: [RDG-TIME].
type Running struct {
	averagingNS int64
	step        int64 // the usual step, the median of the first steps
	early       []Sample
	started     bool

	window   []segment // a ring
	head, n  int
	sum      float64 // of squares times ns over the window
	covered  int64   // ns
	since    int     // segments since the sum was last formed anew
	origin   int64   // where the record begins
	last     int64   // time of the sample held back
	heldSum  float64
	heldN    int
	finished bool

	out   RunningMean
	total float64 // of squares times ns
	time  int64
	peak2 float64
	curve curve
	hours [24]struct {
		sum float64
		ns  int64
	}
	zone int64
	best float64
}

// GapSteps is how many usual steps may lie between two samples before the time
// between them counts as a gap.
const GapSteps = 3

// leastCovered is the share of a window that has to be recorded for its mean to
// count among the largest.
const leastCovered = 0.5

// earlySteps is the number of steps from which the usual step is told.
const earlySteps = 255

// segment is a stretch of time (end-length, end] of one square.
type segment struct {
	end, length int64
	e2          float64
}

// RunningMean is what a log comes to.
type RunningMean struct {
	Samples      int     `json:"samples"`
	FirstNS      int64   `json:"-"`
	LastNS       int64   `json:"-"`
	DurationS    float64 `json:"duration_s"`
	StepS        float64 `json:"usual_step_s"`
	AveragingS   float64 `json:"averaging_s"`
	Largest      float64 `json:"largest_running_rms_v_per_m"`
	LargestEndNS int64   `json:"-"`
	Covered      float64 `json:"largest_window_recorded_share"`
	Mean         float64 `json:"mean_v_per_m"` // root-mean-square over the whole log
	Peak         float64 `json:"largest_sample_v_per_m"`
	PeakNS       int64   `json:"-"`
	Gaps         int     `json:"gaps"`
	GapS         float64 `json:"gaps_s"`
	LongestGapS  float64 `json:"longest_gap_s"`
	Uneven       int     `json:"uneven_steps"`
	SameTime     int     `json:"samples_of_equal_time"`
	Unrecorded   int     `json:"windows_left_out"` // less than half recorded
	// Short says that the log is shorter than the averaging time: Largest is then
	// the mean over all of it.
	Short bool      `json:"shorter_than_averaging_time"`
	Daily []Hour    `json:"daily_profile"`
	Curve [][3]Spot `json:"-"`
}

// Hour is the mean over one hour of the day.
type Hour struct {
	Hour       int     `json:"hour"`
	FieldVPerM float64 `json:"field_v_per_m"`
	RecordedS  float64 `json:"recorded_s"`
}

// Spot is a point of a curve.
type Spot struct {
	NS    int64
	Value float64
}

// NewRunning starts a log. averagingS is the averaging time in s, 0 = the level
// is never averaged; zoneS the offset of the clock by which the hours of the day
// are told.
func NewRunning(averagingS float64, zoneS int) *Running {
	return &Running{averagingNS: int64(math.Round(averagingS * 1e9)), zone: int64(zoneS) * 1e9,
		early: make([]Sample, 0, earlySteps+1), out: RunningMean{AveragingS: averagingS}}
}

// Add takes the next sample: its time in ns since 1970 and the square of its
// field in V2/m2. It reports false for a time before the sample ahead of it,
// which is not taken.
func (r *Running) Add(ns int64, e2 float64) bool {
	if r.out.Samples > 0 {
		if ns < r.last {
			return false
		}
		if ns == r.last {
			r.heldSum += e2
			r.heldN++
			r.out.Samples++
			r.out.SameTime++
			r.peak(ns, e2)
			return true
		}
		r.release()
	} else {
		r.out.FirstNS = ns
	}
	r.out.Samples++
	r.last, r.heldSum, r.heldN = ns, e2, 1
	r.peak(ns, e2)
	return true
}

func (r *Running) peak(ns int64, e2 float64) {
	if e2 > r.peak2 || r.out.PeakNS == 0 {
		r.peak2, r.out.PeakNS = e2, ns
	}
}

// release passes the held sample on: samples of equal time have become one.
func (r *Running) release() {
	s := Sample{r.last, r.heldSum}
	if r.heldN > 1 {
		s.Value /= float64(r.heldN)
	}
	if r.started {
		r.take(s)
		return
	}
	r.early = append(r.early, s)
	if len(r.early) > earlySteps {
		r.start()
	}
}

// start tells the usual step from the first samples and takes them.
func (r *Running) start() {
	r.started = true
	steps := make([]int64, 0, len(r.early))
	for i := 1; i < len(r.early); i++ {
		steps = append(steps, r.early[i].NS-r.early[i-1].NS)
	}
	slices.Sort(steps)
	r.step = int64(1e9)
	if len(steps) > 0 {
		r.step = steps[(len(steps)-1)/2]
	}
	r.origin = r.early[0].NS - r.step
	r.out.LastNS = r.origin
	for _, s := range r.early {
		r.take(s)
	}
	r.early = nil
}

// take puts one sample into the window.
func (r *Running) take(s Sample) {
	length := s.NS - r.out.LastNS
	r.out.LastNS = s.NS
	if length > GapSteps*r.step {
		gap := float64(length-r.step) / 1e9
		r.out.Gaps++
		r.out.GapS += gap
		r.out.LongestGapS = max(r.out.LongestGapS, gap)
		length = r.step
	} else if d := length - r.step; d > r.step/100 || -d > r.step/100 {
		r.out.Uneven++
	}
	e2t := s.Value * float64(length)
	r.total += e2t
	r.time += length
	h := &r.hours[((s.NS-1+r.zone)/3600e9%24+24)%24]
	h.sum += e2t
	h.ns += length

	mean, share, full := s.Value, 1.0, true
	if r.averagingNS > 0 {
		mean, share, full = r.slide(segment{s.NS, length, s.Value})
	}
	shown := math.NaN()
	switch {
	case !full:
	case share < leastCovered:
		r.out.Unrecorded++
	default:
		shown = mean
		if mean > r.best || r.out.LargestEndNS == 0 {
			r.best, r.out.LargestEndNS, r.out.Covered = mean, s.NS, share
		}
	}
	r.curve.add(s.NS, s.Value, shown)
}

// slide moves the window to the segment's end and returns its mean square, the
// share of it that was recorded, and whether the log is as old as the window.
func (r *Running) slide(s segment) (mean, share float64, full bool) {
	r.push(s)
	r.sum += s.e2 * float64(s.length)
	r.covered += s.length
	from := s.end - r.averagingNS
	for {
		f := &r.window[r.head]
		if f.end > from {
			break
		}
		r.sum -= f.e2 * float64(f.length)
		r.covered -= f.length
		r.head++
		if r.head == len(r.window) {
			r.head = 0
		}
		r.n--
	}
	// Adding and taking away leaves rounding behind; the sum is formed anew once
	// for each window's worth of samples, at a cost of one addition a sample.
	if r.since++; r.since >= max(r.n, 64) {
		r.resum()
	}
	sum, covered := r.sum, r.covered
	f := &r.window[r.head]
	if out := from - (f.end - f.length); out > 0 {
		sum -= f.e2 * float64(out)
		covered -= out
	}
	return max(sum, 0) / float64(covered), float64(covered) / float64(r.averagingNS), from >= r.origin
}

func (r *Running) push(s segment) {
	if r.n == len(r.window) {
		bigger := make([]segment, max(64, 2*len(r.window)))
		for i := range r.n {
			bigger[i] = r.window[(r.head+i)%len(r.window)]
		}
		r.window, r.head = bigger, 0
	}
	i := r.head + r.n
	if i >= len(r.window) {
		i -= len(r.window)
	}
	r.window[i] = s
	r.n++
}

func (r *Running) resum() {
	r.since, r.sum = 0, 0
	for i := range r.n {
		f := &r.window[(r.head+i)%len(r.window)]
		r.sum += f.e2 * float64(f.length)
	}
}

// Mean ends the log and returns what it comes to.
func (r *Running) Mean() RunningMean {
	if r.finished || r.out.Samples == 0 {
		return r.out
	}
	r.finished = true
	r.release()
	if !r.started {
		r.start()
	}
	o := &r.out
	o.StepS = float64(r.step) / 1e9
	o.DurationS = float64(o.LastNS-r.origin) / 1e9
	o.Mean = math.Sqrt(r.total / float64(r.time))
	o.Peak = math.Sqrt(r.peak2)
	if o.LargestEndNS == 0 {
		o.Short = o.LastNS-r.origin < r.averagingNS
		o.LargestEndNS, r.best = o.LastNS, r.total/float64(r.time)
		o.Covered = min(1, float64(r.time)/float64(max(r.averagingNS, 1)))
	}
	o.Largest = math.Sqrt(r.best)
	for h, v := range r.hours {
		if v.ns > 0 {
			o.Daily = append(o.Daily, Hour{h, math.Sqrt(v.sum / float64(v.ns)), float64(v.ns) / 1e9})
		}
	}
	o.Curve = r.curve.spots()
	return *o
}

// curve keeps a log of any length as at most 2*curveCells stretches for a figure:
// of each its lowest and highest sample and its highest running mean.
type curve struct {
	cells  []cell
	stride int // samples in a full cell
	fill   int // samples in the last cell
}

const curveCells = 1024

type cell struct {
	low, high, mean Spot // mean.Value NaN = no window ends in the cell
}

func (c *curve) add(ns int64, e2, mean float64) {
	if c.stride == 0 {
		c.stride, c.fill = 1, 1
	}
	if c.fill == c.stride || len(c.cells) == 0 {
		if len(c.cells) == 2*curveCells {
			for i := range curveCells {
				c.cells[i] = join(c.cells[2*i], c.cells[2*i+1])
			}
			c.cells = c.cells[:curveCells]
			c.stride *= 2
		}
		c.cells = append(c.cells, cell{Spot{ns, e2}, Spot{ns, e2}, Spot{ns, mean}})
		c.fill = 1
		return
	}
	c.fill++
	last := &c.cells[len(c.cells)-1]
	if e2 < last.low.Value {
		last.low = Spot{ns, e2}
	}
	if e2 > last.high.Value {
		last.high = Spot{ns, e2}
	}
	if mean > last.mean.Value || last.mean.Value != last.mean.Value {
		last.mean = Spot{ns, mean}
	}
}

func join(a, b cell) cell {
	if b.low.Value < a.low.Value {
		a.low = b.low
	}
	if b.high.Value > a.high.Value {
		a.high = b.high
	}
	if b.mean.Value > a.mean.Value || math.IsNaN(a.mean.Value) {
		a.mean = b.mean
	}
	return a
}

// spots returns low, high and mean of each stretch, as fields.
func (c *curve) spots() [][3]Spot {
	out := make([][3]Spot, len(c.cells))
	for i, x := range c.cells {
		out[i] = [3]Spot{x.low, x.high, x.mean}
		for k := range out[i] {
			out[i][k].Value = math.Sqrt(out[i][k].Value)
		}
	}
	return out
}
