package survey_test

import (
	"math"
	"slices"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"pgregory.net/rapid"

	"example.org/standclear/exposure/survey"
)

const second = int64(1e9)

// direct is the same question answered by summing each window anew, over whole
// seconds held in a table: another way, and slow.
func direct(times []int64, squares []float64, averagingS, stepS int64) (largest float64, end int64) {
	type stretch struct {
		from, to int64
		e2       float64
	}
	var record []stretch
	last := times[0] - stepS
	origin := last
	for i := 0; i < len(times); {
		j, sum := i, 0.0
		for ; j < len(times) && times[j] == times[i]; j++ {
			sum += squares[j]
		}
		from := last
		if times[i]-last > survey.GapSteps*stepS {
			from = times[i] - stepS
		}
		record = append(record, stretch{from, times[i], sum / float64(j-i)})
		last = times[i]
		i = j
	}
	largest = -1
	for _, r := range record {
		if r.to-averagingS < origin {
			continue
		}
		sum, covered := 0.0, int64(0)
		for _, s := range record {
			if d := min(s.to, r.to) - max(s.from, r.to-averagingS); d > 0 {
				sum += s.e2 * float64(d)
				covered += d
			}
		}
		if 2*covered >= averagingS && sum/float64(covered) > largest {
			largest, end = sum/float64(covered), r.to
		}
	}
	return largest, end
}

// The running mean is held against a sum formed anew for each window, on random
// logs with uneven steps, gaps and equal times. Relative tolerance 1e-11: the
// order of summation differs.
func TestRunningMeanAgainstDirectSum(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(2, 900).Draw(t, "samples")
		step := int64(rapid.IntRange(1, 10).Draw(t, "step"))
		averaging := int64(rapid.IntRange(1, 400).Draw(t, "averaging"))
		times := make([]int64, n)
		squares := make([]float64, n)
		at := int64(rapid.IntRange(0, 100000).Draw(t, "start"))
		for i := range times {
			times[i] = at
			squares[i] = rapid.Float64Range(0, 1e4).Draw(t, "e2")
			switch rapid.IntRange(0, 30).Draw(t, "kind") {
			case 0:
				at += step * int64(rapid.IntRange(2, 60).Draw(t, "gap"))
			case 1:
			case 2:
				at += step + 1
			default:
				at += step
			}
		}
		run := survey.NewRunning(float64(averaging), 0)
		for i := range times {
			require.True(t, run.Add(times[i]*second, squares[i]))
		}
		m := run.Mean()
		usual := int64(math.Round(m.StepS))
		want, end := direct(times, squares, averaging, usual)
		if want < 0 {
			return // no window is recorded well enough: told by Short or by the count of windows left out
		}
		assert.InEpsilon(t, math.Sqrt(want)+1, m.Largest+1, 1e-11)
		if m.LargestEndNS != end*second {
			// Two windows may tie within the rounding of their sums.
			assert.InEpsilon(t, math.Sqrt(want)+1, m.Largest+1, 1e-14)
		}
		assert.Equal(t, n, m.Samples)
	})
}

// On even steps without gaps the mean is that of the samples in (t - T, t], as a
// data-frame library forms it with a rolling window (relative tolerance 1e-12).
func TestRunningMeanOfEvenSteps(t *testing.T) {
	var squares []float64
	run := survey.NewRunning(360, 0)
	for i := range 5000 {
		e := 2 + math.Sin(float64(i)/700) + 0.3*math.Sin(float64(i)*1.7)
		squares = append(squares, e*e)
		run.Add(int64(i)*second, e*e)
	}
	best, at := 0.0, 0
	for i := 359; i < len(squares); i++ {
		sum := 0.0
		for _, e2 := range squares[i-359 : i+1] {
			sum += e2
		}
		if sum/360 > best {
			best, at = sum/360, i
		}
	}
	m := run.Mean()
	assert.InEpsilon(t, math.Sqrt(best), m.Largest, 1e-12)
	assert.Equal(t, int64(at)*second, m.LargestEndNS)
	assert.Equal(t, 1.0, m.StepS)
	assert.Equal(t, 5000.0, m.DurationS)
	assert.Equal(t, 1.0, m.Covered)
	assert.Zero(t, m.Gaps+m.Uneven+m.SameTime+m.Unrecorded)
	assert.False(t, m.Short)
	assert.InEpsilon(t, math.Sqrt(slices.Max(squares)), m.Peak, 1e-15)
}

// A step of field from 1 to 3 V/m: after T the mean is exactly 3 V/m; a constant
// field is its own mean (exact to rounding).
func TestRunningMeanOfKnownLogs(t *testing.T) {
	run := survey.NewRunning(60, 0)
	for i := range int64(300) {
		e2 := 1.0
		if i >= 100 {
			e2 = 9
		}
		run.Add(i*second, e2)
	}
	assert.InDelta(t, 3, run.Mean().Largest, 1e-12)

	never := survey.NewRunning(0, 0)
	never.Add(0, 4)
	never.Add(second, 25)
	never.Add(2*second, 1)
	m := never.Mean()
	assert.InDelta(t, 5, m.Largest, 1e-12, "a level that is never averaged takes the largest sample")
	assert.Equal(t, second, m.LargestEndNS)
}

func TestGapsAreSaid(t *testing.T) {
	run := survey.NewRunning(10, 0)
	at := int64(0)
	for i := range 100 {
		run.Add(at*second, 4)
		at++
		if i == 49 {
			at += 1000
		}
	}
	m := run.Mean()
	assert.Equal(t, 1, m.Gaps)
	assert.InDelta(t, 1000, m.GapS, 1e-9)
	assert.InDelta(t, 1000, m.LongestGapS, 1e-9)
	assert.Positive(t, m.Unrecorded, "windows that are mostly gap do not count")
	assert.InDelta(t, 2, m.Largest, 1e-12)
	assert.InDelta(t, 2, m.Mean, 1e-12, "nobody recorded the gap: it is no time without field")
}

func TestShortLogIsSaid(t *testing.T) {
	run := survey.NewRunning(360, 0)
	for i := range int64(60) {
		run.Add(i*second, 16)
	}
	m := run.Mean()
	assert.True(t, m.Short)
	assert.InDelta(t, 4, m.Largest, 1e-12)
	assert.False(t, run.Add(0, 1), "a time before the last")
	assert.Zero(t, survey.NewRunning(360, 0).Mean().Samples)
}

// Hours are those of the stated zone: 03:30 UTC is 09 o'clock at +05:30.
func TestDailyProfile(t *testing.T) {
	run := survey.NewRunning(60, 5*3600+1800)
	for i := range int64(24 * 60) {
		e2 := 1.0
		if hour := (i*60 + 5*3600 + 1800) / 3600 % 24; hour == 9 {
			e2 = 49
		}
		run.Add((i+1)*60*second, e2)
	}
	m := run.Mean()
	require.Len(t, m.Daily, 24)
	for _, h := range m.Daily {
		want := 1.0
		if h.Hour == 9 {
			want = 7
		}
		assert.InDelta(t, want, h.FieldVPerM, 1e-12, "hour %d", h.Hour)
		assert.InDelta(t, 3600, h.RecordedS, 1e-9)
	}
}

// The curve for a figure stays bounded and never loses the extremes.
func TestCurveKeepsExtremes(t *testing.T) {
	run := survey.NewRunning(100, 0)
	for i := range int64(100000) {
		e2 := 4.0
		if i == 77777 {
			e2 = 900
		}
		run.Add(i*second, e2)
	}
	m := run.Mean()
	assert.LessOrEqual(t, len(m.Curve), 2048)
	assert.Greater(t, len(m.Curve), 500)
	high, mean := 0.0, 0.0
	for _, c := range m.Curve {
		high = max(high, c[1].Value)
		if !math.IsNaN(c[2].Value) {
			mean = max(mean, c[2].Value)
		}
	}
	assert.Equal(t, 30.0, high)
	assert.InDelta(t, m.Largest, mean, 1e-12)
}

func BenchmarkRunning(b *testing.B) {
	run := survey.NewRunning(360, 0)
	for i := 0; b.Loop(); i++ {
		run.Add(int64(i)*second, float64(i&1023))
	}
}
