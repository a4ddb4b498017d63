package antenna

import (
	"errors"
	"fmt"
	"math"
)

// sphere is a pattern sampled on a regular grid over the whole sphere, linear in
// dB in both angles between its samples.
type sphere struct {
	nPhi, nTheta int // columns (one more than samples: the first is repeated) and rows
	phi0         float64
	perPhi       float64 // columns per rad
	perTheta     float64 // rows per rad
	loss         []float64
	blocks       []span // extremes of blockSide x blockSide samples
	nBlocks      int    // blocks in a row
	all          span
	horizontal   *Cut
	vertical     *Cut
}

const (
	blockSide = 8
	// mostVertices is the number of vertices up to which a range is worked out
	// vertex by vertex; beyond, it takes the samples about the box.
	mostVertices = 64
)

// FullSphere returns the pattern of losses in dB on a regular grid:
// lossDB[i][j] holds elevation -90 deg + i*180/(n-1) deg and azimuth first +
// j*360/m deg, clockwise from boresight. The least loss is taken off. Between
// the samples it is linear in dB in both angles. Source: [FULL-SPHERE].
func FullSphere(firstAzimuthRad float64, lossDB [][]float64) (Pattern, error) {
	p, err := newSphere(firstAzimuthRad, lossDB)
	if err != nil {
		return nil, err
	}
	return p, nil
}

func newSphere(first float64, loss [][]float64) (*sphere, error) {
	n := len(loss)
	if n < 3 || len(loss[0]) < 3 {
		return nil, errors.New("a sphere needs at least 3 azimuths and 3 elevations")
	}
	if !(first >= -2*math.Pi && first <= 2*math.Pi) {
		return nil, errors.New("the first azimuth is not within a turn")
	}
	m := len(loss[0])
	p := &sphere{nPhi: m + 1, nTheta: n, phi0: first, perPhi: float64(m) / (2 * math.Pi), perTheta: float64(n-1) / math.Pi}
	least := math.Inf(1)
	for i, row := range loss {
		if len(row) != m {
			return nil, fmt.Errorf("elevation row %d has %d azimuths, not %d", i+1, len(row), m)
		}
		for _, v := range row {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return nil, fmt.Errorf("elevation row %d holds a value that is not finite", i+1)
			}
			least = min(least, v)
		}
	}
	p.loss = make([]float64, 0, n*(m+1))
	for _, row := range loss {
		for _, v := range row {
			p.loss = append(p.loss, min(v-least, maxLossDB))
		}
		p.loss = append(p.loss, min(row[0]-least, maxLossDB))
	}
	p.index()
	return p, p.cuts()
}

func (p *sphere) index() {
	p.nBlocks = (p.nPhi + blockSide - 1) / blockSide
	rows := (p.nTheta + blockSide - 1) / blockSide
	p.blocks = make([]span, p.nBlocks*rows)
	for b := range p.blocks {
		s := span{math.Inf(1), math.Inf(-1)}
		j0, i0 := b/p.nBlocks*blockSide, b%p.nBlocks*blockSide
		for j := j0; j < min(j0+blockSide, p.nTheta); j++ {
			for i := i0; i < min(i0+blockSide, p.nPhi); i++ {
				v := p.loss[j*p.nPhi+i]
				s = span{min(s.lo, v), max(s.hi, v)}
			}
		}
		p.blocks[b] = s
	}
	p.all = span{math.Inf(1), math.Inf(-1)}
	for _, s := range p.blocks {
		p.all = span{min(p.all.lo, s.lo), max(p.all.hi, s.hi)}
	}
}

// cuts takes the horizontal cut at the elevation of the peak and the vertical
// cut at its azimuth.
func (p *sphere) cuts() error {
	peakRow, peakColumn := 0, 0
	best := math.Inf(1)
	for j := 0; j < p.nTheta; j++ {
		for i := 0; i < p.nPhi-1; i++ {
			if v := p.loss[j*p.nPhi+i]; v < best {
				best, peakRow, peakColumn = v, j, i
			}
		}
	}
	var h, v []Sample
	step := 2 * math.Pi / float64(p.nPhi-1)
	for i := 0; i < p.nPhi-1; i++ {
		a := math.Remainder(p.phi0+float64(i)*step, 2*math.Pi)
		h = append(h, Sample{a, p.loss[peakRow*p.nPhi+i]})
	}
	front := float64(peakColumn)
	back := math.Mod(front+float64(p.nPhi-1)/2, float64(p.nPhi-1))
	for j := 0; j < p.nTheta; j++ {
		e := -math.Pi/2 + float64(j)/p.perTheta
		v = append(v, Sample{e, p.at(front, float64(j))})
		if j > 0 && j < p.nTheta-1 {
			v = append(v, Sample{math.Remainder(math.Pi-e, 2*math.Pi), p.at(back, float64(j))})
		}
	}
	var err error
	if p.horizontal, err = NewCut(h, true); err == nil {
		p.vertical, err = NewCut(v, true)
	}
	return err
}

// at returns the loss at a column and a row, both with their fractions.
func (p *sphere) at(x, y float64) float64 {
	i, j := min(int(x), p.nPhi-2), min(int(y), p.nTheta-2)
	s, t := x-float64(i), y-float64(j)
	k := j*p.nPhi + i
	a := p.loss[k] + s*(p.loss[k+1]-p.loss[k])
	k += p.nPhi
	b := p.loss[k] + s*(p.loss[k+1]-p.loss[k])
	return a + t*(b-a)
}

// column and row return the place of a direction in the grid.
func (p *sphere) column(phi float64) float64 {
	x := (phi - p.phi0) * p.perPhi
	turn := float64(p.nPhi - 1)
	for x < 0 {
		x += turn
	}
	for x > turn {
		x -= turn
	}
	return x
}

func (p *sphere) row(theta float64) float64 {
	return max(0, min((theta+math.Pi/2)*p.perTheta, float64(p.nTheta-1)))
}

func (p *sphere) Relative(phi, theta float64) float64 {
	return ratioOfLoss(max(0, p.at(p.column(phi), p.row(theta))))
}

func (p *sphere) RelativeRange(phi, theta Interval) Interval {
	// gridSlack covers the rounding of a direction into the grid.
	const gridSlack, lossSlack = 1e-11, 1e-12
	turn := float64(p.nPhi - 1)
	y0, y1 := max(0, p.row(theta.Lo)-gridSlack), min(float64(p.nTheta-1), p.row(theta.Hi)+gridSlack)
	x0 := p.column(phi.Lo) - gridSlack
	x1 := x0 + (phi.Hi-phi.Lo)*p.perPhi + 3*gridSlack
	if x0 < 0 {
		x0 += turn
		x1 += turn
	}
	var s span
	switch {
	case x1-x0 >= turn:
		if y0 <= 0 && y1 >= float64(p.nTheta-1) {
			s = p.all
		} else {
			s = p.samples(0, p.nPhi-1, int(y0), int(math.Ceil(y1)))
		}
	case (x1-x0+3)*(y1-y0+3) <= mostVertices && x1 <= turn:
		s = p.vertices(x0, x1, y0, y1)
	case (x1-x0+3)*(y1-y0+3) <= mostVertices:
		s = p.vertices(x0, turn, y0, y1)
		r := p.vertices(0, x1-turn, y0, y1)
		s = span{min(s.lo, r.lo), max(s.hi, r.hi)}
	case x1 <= turn:
		s = p.samples(int(x0), int(math.Ceil(x1)), int(y0), int(math.Ceil(y1)))
	default:
		s = p.samples(int(x0), p.nPhi-1, int(y0), int(math.Ceil(y1)))
		r := p.samples(0, int(math.Ceil(x1-turn)), int(y0), int(math.Ceil(y1)))
		s = span{min(s.lo, r.lo), max(s.hi, r.hi)}
	}
	return rangeOfLoss(max(0, s.lo-lossSlack), s.hi+lossSlack)
}

// vertices returns the exact extremes over a box: a bilinear piece has them at
// its corners.
func (p *sphere) vertices(x0, x1, y0, y1 float64) span {
	s := span{math.Inf(1), math.Inf(-1)}
	for y := y0; ; {
		for x := x0; ; {
			v := p.at(x, y)
			s = span{min(s.lo, v), max(s.hi, v)}
			if x >= x1 {
				break
			}
			x = min(math.Floor(x)+1, x1)
		}
		if y >= y1 {
			return s
		}
		y = min(math.Floor(y)+1, y1)
	}
}

// samples returns the extremes over the samples of a rectangle, block by block
// where whole blocks lie inside.
func (p *sphere) samples(i0, i1, j0, j1 int) span {
	s := span{math.Inf(1), math.Inf(-1)}
	for j := j0; j <= j1; {
		tall := 1
		if j%blockSide == 0 && (j+blockSide-1 <= j1) {
			tall = blockSide
		}
		for i := i0; i <= i1; {
			if tall == blockSide && i%blockSide == 0 && (i+blockSide-1 <= i1) {
				b := p.blocks[j/blockSide*p.nBlocks+i/blockSide]
				s = span{min(s.lo, b.lo), max(s.hi, b.hi)}
				i += blockSide
				continue
			}
			for k := j; k < j+tall; k++ {
				v := p.loss[k*p.nPhi+i]
				s = span{min(s.lo, v), max(s.hi, v)}
			}
			i++
		}
		j += tall
	}
	return s
}

func (p *sphere) HorizontalCut(phi float64) float64 { return ratioOfLoss(p.horizontal.Loss(phi)) }

func (p *sphere) HorizontalCutRange(phi Interval) Interval {
	return rangeOfLoss(p.horizontal.LossRange(phi))
}
