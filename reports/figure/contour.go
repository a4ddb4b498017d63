package figure

import (
	"math"

	"example.org/standclear/exposure"
)

// The logarithms of the ratios between which a field is drawn: a sample beyond
// them, or infinite, counts as the bound.
const lowestLog, highestLog = -9.0, 9.0

// field is a sampled exposure ratio in log10; NaN = no sample.
type field struct {
	x0, y0, step float64
	nx, ny       int
	v            []float64
}

// newField returns nil where the grid is unusable.
func newField(g *exposure.RatioGrid) *field {
	if g == nil || g.NX < 2 || g.NY < 2 || len(g.Values) != g.NX*g.NY || !(g.Step > 0) || !finite(pt{g.X0, g.Y0}) {
		return nil
	}
	f := &field{g.X0, g.Y0, g.Step, g.NX, g.NY, make([]float64, len(g.Values))}
	for i, n := range g.Values {
		switch r := float64(n); {
		case math.IsNaN(r) || r < 0:
			f.v[i] = math.NaN()
		default:
			f.v[i] = math.Min(math.Max(math.Log10(r), lowestLog), highestLog)
		}
	}
	return f
}

// contour traces the lines on which the field is equal to the level, by
// marching squares: each cell of four samples holds none, one or two straight
// pieces, whose ends lie on the cell's edges where the level is met between two
// samples. In a cell whose diagonals disagree, the mean of the four decides.
// Cells with a missing sample hold none. Lines come in the order in which the
// rows meet them; a closed line repeats its first point.
func (f *field) contour(ratio float64) [][]pt {
	level := math.Log10(ratio)
	nx, ny := f.nx, f.ny
	// An edge is known by the sample at its lower or left end: even numbers run
	// along x, odd ones along y. It has at most two neighbours, one in each cell.
	next := make([][2]int32, 2*nx*ny)
	for i := range next {
		next[i] = [2]int32{-1, -1}
	}
	link := func(a, b int32) {
		for _, e := range [2][2]int32{{a, b}, {b, a}} {
			if next[e[0]][0] < 0 {
				next[e[0]][0] = e[1]
			} else {
				next[e[0]][1] = e[1]
			}
		}
	}
	for j := 0; j+1 < ny; j++ {
		for i := 0; i+1 < nx; i++ {
			k := j*nx + i
			a, b, c, d := f.v[k], f.v[k+1], f.v[k+nx+1], f.v[k+nx]
			if math.IsNaN(a + b + c + d) {
				continue
			}
			bits := 0
			for n, v := range [4]float64{a, b, c, d} {
				if v >= level {
					bits |= 1 << n
				}
			}
			south, east, north, west := int32(2*k), int32(2*(k+1)+1), int32(2*(k+nx)), int32(2*k+1)
			switch bits {
			case 1, 14:
				link(west, south)
			case 2, 13:
				link(south, east)
			case 3, 12:
				link(west, east)
			case 4, 11:
				link(east, north)
			case 6, 9:
				link(south, north)
			case 7, 8:
				link(north, west)
			case 5, 10:
				if ((a+b+c+d)/4 >= level) == (bits == 5) {
					link(south, east)
					link(north, west)
				} else {
					link(west, south)
					link(east, north)
				}
			}
		}
	}
	at := func(e int32) pt {
		k := int(e / 2)
		i, j := k%nx, k/nx
		if e%2 == 0 {
			return pt{f.x0 + f.step*(float64(i)+share(f.v[k], f.v[k+1], level)), f.y0 + f.step*float64(j)}
		}
		return pt{f.x0 + f.step*float64(i), f.y0 + f.step*(float64(j)+share(f.v[k], f.v[k+nx], level))}
	}
	done := make([]bool, len(next))
	walk := func(e int32) []pt {
		first, prev := e, int32(-1)
		var line []pt
		for {
			done[e] = true
			line = append(line, at(e))
			n := next[e][0]
			if n == prev || n < 0 {
				n = next[e][1]
			}
			if n < 0 || n == prev {
				return line
			}
			if n == first {
				return append(line, line[0])
			}
			prev, e = e, n
		}
	}
	var out [][]pt
	for _, open := range []bool{true, false} {
		for e := range next {
			if !done[e] && next[e][0] >= 0 && (next[e][1] < 0) == open {
				out = append(out, walk(int32(e)))
			}
		}
	}
	return out
}

func share(a, b, level float64) float64 {
	if a == b {
		return 0.5
	}
	return math.Min(math.Max((level-a)/(b-a), 0), 1)
}

// at returns the field at a place of the data, between samples in proportion;
// NaN beyond the samples.
func (f *field) at(p pt) float64 {
	x, y := (p[0]-f.x0)/f.step, (p[1]-f.y0)/f.step
	if !(x >= 0 && y >= 0 && x <= float64(f.nx-1) && y <= float64(f.ny-1)) {
		return math.NaN()
	}
	i, j := min(int(x), f.nx-2), min(int(y), f.ny-2)
	u, v := x-float64(i), y-float64(j)
	k := j*f.nx + i
	return (f.v[k]*(1-u)+f.v[k+1]*u)*(1-v) + (f.v[k+f.nx]*(1-u)+f.v[k+f.nx+1]*u)*v
}
