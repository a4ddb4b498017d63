package figure

import (
	"math"
	"sort"
)

// Label is a text placed within a panel.
type Label struct {
	Text   string
	Box    Box
	Anchor [2]float64 // what it names
	Leader bool       // a line leads from the anchor to the label
	face   face
}

// tag is a label that is to be placed.
type tag struct {
	text   string
	anchor pt
	face   face
	gap    float64 // room kept free about the anchor, in points
	toward float64 // direction preferred, in rad anticlockwise from the x axis
	seats  []pt    // where given, the only positions of the middle; no leader
}

// maxTags is the number of labels that are placed one against the other; a
// panel with more has no room for them.
const maxTags = 300

// clutter counts, on a raster of the page, what a label should not hide.
type clutter struct {
	area   Box
	nx, ny int
	sum    []float64 // summed from the lower left: a box costs four look-ups
	busy   []float64
}

// clutterCell is the width of a raster cell in points.
const clutterCell = 2.0

func newClutter(area Box) *clutter {
	nx, ny := int(area.W()/clutterCell)+2, int(area.H()/clutterCell)+2
	return &clutter{area: area, nx: nx, ny: ny, busy: make([]float64, nx*ny)}
}

func (c *clutter) mark(p pt, weight float64) {
	i, j := int((p[0]-c.area.X0)/clutterCell), int((p[1]-c.area.Y0)/clutterCell)
	if c.area.contains(p) {
		c.busy[j*c.nx+i] = math.Max(c.busy[j*c.nx+i], weight)
	}
}

func (c *clutter) lines(ls [][]pt, weight float64, closed bool) {
	for _, l := range ls {
		for i := range l {
			if i == 0 && !closed {
				continue
			}
			a, b := l[(i+len(l)-1)%len(l)], l[i]
			n := int(math.Min(dist(a, b)/clutterCell, 1e4)) + 1
			for k := 0; k <= n; k++ {
				c.mark(between(a, b, float64(k)/float64(n)), weight)
			}
		}
	}
}

func (c *clutter) box(b Box, weight float64) {
	for y := b.Y0; y <= b.Y1; y += clutterCell {
		for x := b.X0; x <= b.X1; x += clutterCell {
			c.mark(pt{x, y}, weight)
		}
	}
}

func (c *clutter) total() {
	c.sum = make([]float64, (c.nx+1)*(c.ny+1))
	for j := 0; j < c.ny; j++ {
		row := 0.0
		for i := 0; i < c.nx; i++ {
			row += c.busy[j*c.nx+i]
			c.sum[(j+1)*(c.nx+1)+i+1] = c.sum[j*(c.nx+1)+i+1] + row
		}
	}
}

func (c *clutter) under(b Box) float64 {
	ix := func(x float64) int { return min(max(int((x-c.area.X0)/clutterCell), 0), c.nx) }
	iy := func(y float64) int { return min(max(int((y-c.area.Y0)/clutterCell), 0), c.ny) }
	i0, i1, j0, j1 := ix(b.X0), min(ix(b.X1)+1, c.nx), iy(b.Y0), min(iy(b.Y1)+1, c.ny)
	w := c.nx + 1
	return c.sum[j1*w+i1] - c.sum[j0*w+i1] - c.sum[j1*w+i0] + c.sum[j0*w+i0]
}

// seat is a position that a label may take.
type seat struct {
	box    Box
	anchor pt
	end    pt // of the leader line, on the box
	leader bool
	cost   float64
}

func (t tag) size() (w, h float64) { return t.face.width(t.text) + 3, t.face.size + 2 }

// seatsOf lists where a label may stand within the area, the best first, before
// other labels are asked.
func (t tag) seatsOf(area Box, c *clutter) []seat {
	w, h := t.size()
	var out []seat
	add := func(m, anchor pt, leader bool, cost float64) {
		b := Box{m[0] - w/2, m[1] - h/2, m[0] + w/2, m[1] + h/2}
		if b.Inside(area) {
			out = append(out, seat{b, anchor, b.nearest(anchor), leader, cost + c.under(b)})
		}
	}
	for i, m := range t.seats {
		add(m, m, false, 0.01*float64(i))
	}
	if t.seats == nil {
		for _, r := range []float64{0, 5, 11, 18, 27, 38, 52, 70, 95, 130, 175} {
			n := 12
			if r > 30 {
				n = 24
			}
			for k := 0; k < n; k++ {
				turn := 2 * math.Pi * float64(k) / float64(n)
				sin, cos := math.Sincos(t.toward + turn)
				d := t.gap + r
				m := pt{t.anchor[0] + cos*(d+w/2), t.anchor[1] + sin*(d+h/2)}
				add(m, t.anchor, r > 0, 0.35*r+0.8*(1-math.Cos(turn)))
			}
		}
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].cost < out[j].cost })
	return out
}

// place gives each label a seat within the area such that no two overlap. Those
// who find none are returned by name. The seats are chosen one label after the
// other and then once more against all others, always in the same order.
func place(area Box, tags []tag, c *clutter) (placed []Label, without []string) {
	c.total()
	for i := maxTags; i < len(tags); i++ {
		without = append(without, tags[i].text)
	}
	tags = tags[:min(len(tags), maxTags)]
	seats := make([][]seat, len(tags))
	for i, t := range tags {
		seats[i] = t.seatsOf(area, c)
	}
	// Those with few seats go first.
	order := make([]int, len(tags))
	for i := range order {
		order[i] = i
	}
	sort.SliceStable(order, func(a, b int) bool { return len(seats[order[a]]) < len(seats[order[b]]) })
	chosen := make([]*seat, len(tags))
	for round := 0; round < 3; round++ {
		for _, i := range order {
			chosen[i] = nil
			chosen[i] = pick(i, seats[i], chosen)
		}
	}
	for i, t := range tags {
		if s := chosen[i]; s != nil {
			placed = append(placed, Label{t.text, s.box, s.anchor, s.leader, t.face})
		} else {
			without = append(without, t.text)
		}
	}
	return placed, without
}

// What it costs a label, in the unit of seat.cost, to be crossed by a leader
// line, to cross another's leader line, and to cover another's anchor.
const (
	costStruck  = 25
	costCrossed = 15
	costCover   = 20
)

// pick returns the cheapest seat that overlaps no label already seated.
func pick(self int, seats []seat, chosen []*seat) *seat {
	var best *seat
	bestCost := math.Inf(1)
next:
	for k := range seats {
		s := &seats[k]
		if s.cost >= bestCost {
			break // seats come in the order of their cost
		}
		for i, o := range chosen {
			if i != self && o != nil && s.box.Overlaps(o.box) {
				continue next
			}
		}
		cost := s.cost
		for i, o := range chosen {
			if i == self || o == nil {
				continue
			}
			if s.leader && strikes(s.anchor, s.end, o.box) {
				cost += costStruck
			}
			if o.leader && strikes(o.anchor, o.end, s.box) {
				cost += costStruck
			}
			if s.leader && o.leader && s.anchor != o.anchor {
				if _, cross := crossing(s.anchor, s.end, o.anchor, o.end); cross {
					cost += costCrossed
				}
			}
			if s.box.contains(o.anchor) {
				cost += costCover
			}
			if cost >= bestCost {
				continue next
			}
		}
		best, bestCost = s, cost
	}
	return best
}

// strikes reports whether the segment from a to b passes through the box.
func strikes(a, b pt, box Box) bool {
	if math.Max(a[0], b[0]) < box.X0 || math.Min(a[0], b[0]) > box.X1 ||
		math.Max(a[1], b[1]) < box.Y0 || math.Min(a[1], b[1]) > box.Y1 {
		return false
	}
	// The segment's bounds meet the box: it passes by only if all four corners
	// lie on one side of its line.
	side := func(x, y float64) bool { return (b[0]-a[0])*(y-a[1])-(b[1]-a[1])*(x-a[0]) > 0 }
	first := side(box.X0, box.Y0)
	return side(box.X1, box.Y0) != first || side(box.X1, box.Y1) != first || side(box.X0, box.Y1) != first
}

// labels draws placed labels on white, with their leader lines.
func (s *sheet) labels(ls []Label) {
	for _, l := range ls {
		if l.Leader {
			s.line([]pt{l.Anchor, l.Box.nearest(l.Anchor)}, leaderStroke)
		}
	}
	for _, l := range ls {
		s.fill([][]pt{l.Box.grow(-0.4).ring()}, 255)
		s.text(l.Text, l.Box.centre(), l.face, middle)
	}
}
