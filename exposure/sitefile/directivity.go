package sitefile

import (
	"fmt"
	"runtime"
	"strings"

	"golang.org/x/sync/errgroup"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
)

// directivityKey tells what has been integrated: a pattern file, or a
// two-beamwidth shape, which keeps its directivity (near enough) when it is tilted.
type directivityKey struct {
	file patternKey
	n    [3]float64
	gain antenna.Gain
}

// warnDirectivity integrates the sphere of each pattern once and warns where the
// stated gain is not the one that the pattern has. Envelopes and reference
// patterns hold no power balance and are left out.
func (l *loader) warnDirectivity(sources []exposure.Source) {
	type question struct {
		pattern       antenna.Pattern
		s             *exposure.Source
		place, column string
		err           error
	}
	var list []*question
	asked := map[directivityKey]bool{}
	for i := range sources {
		s := &sources[i]
		q := &question{pattern: s.Pattern, s: s, place: rowPlace(s.Row), column: "gain"}
		key := directivityKey{gain: s.Gain}
		switch s.PatternKind {
		case exposure.PatternFile:
			key.file = patternKey{s.PatternName, s.FrequencyHz, antenna.VerticalSense(strings.ToLower(s.Row.Cell("vertical cut")))}
			f := l.patterns[key.file]
			if f == nil || f.file == nil || f.file.Envelope {
				continue
			}
			key.file.hz = f.file.PatternFrequencyHz
			q.place, q.column = s.PatternName, ""
		case exposure.PatternBeamwidth:
			key.n = [3]float64{s.HorizontalBeamwidthRad, s.VerticalBeamwidthRad, s.FrontToBackDB}
		default:
			continue
		}
		if !asked[key] {
			asked[key] = true
			list = append(list, q)
		}
	}
	var g errgroup.Group
	g.SetLimit(runtime.GOMAXPROCS(0))
	for _, q := range list {
		g.Go(func() error {
			q.err = antenna.CheckDirectivity(q.pattern, q.s.Gain, 0)
			return nil
		})
	}
	_ = g.Wait() // each answer stays with its question, so that their order is fixed
	for _, q := range list {
		if q.err != nil {
			l.warnOnce(q.place, q.column, fmt.Sprintf("%s; first used by %q", q.err, q.s.ID))
		}
	}
}
