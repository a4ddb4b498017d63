package antenna

import (
	"sort"
	"testing"
)

// The time of one direction, and of one box a degree wide and high.
func BenchmarkPatterns(b *testing.B) {
	all := built(b)
	var names []string
	for n := range all {
		names = append(names, n)
	}
	sort.Strings(names)
	sink := 0.0
	for _, n := range names {
		p := all[n]
		b.Run(n+"/value", func(b *testing.B) {
			b.ReportAllocs()
			for i := 0; i < b.N; i++ {
				x := float64(i%1000) * 1e-3
				sink += p.Relative(3*x, x-0.6)
			}
		})
		b.Run(n+"/range", func(b *testing.B) {
			b.ReportAllocs()
			for i := 0; i < b.N; i++ {
				x := float64(i%1000) * 1e-3
				sink += p.RelativeRange(Interval{3 * x, 3*x + 0.0175}, Interval{x - 0.6, x - 0.5825}).Hi
			}
		})
	}
	_ = sink
}
