package exposure

import (
	"context"
	"fmt"
	"math"
	"sort"
)

// Barrier is one closed line of the schedule of barriers and signs: the keep-out
// line of one class around one area of one surface.
type Barrier struct {
	Surface    string  `json:"surface"`
	Class      string  `json:"class"` // whom it keeps out
	MayBeThere bool    `json:"class_may_be_there"`
	Number     int     `json:"number"` // of the area on that surface for that class, from one
	AreaM2     float64 `json:"area_m2"`
	LengthM    float64 `json:"length_m"` // of the line over the surface: where a barrier can stand
	EdgeM      float64 `json:"edge_m"`   // along the surface's own edge, where there is nothing to walk on beyond
	FromXM     float64 `json:"from_x_m"`
	ToXM       float64 `json:"to_x_m"`
	FromYM     float64 `json:"from_y_m"`
	ToYM       float64 `json:"to_y_m"`
	// Corner is the surface's nearest corner, by compass direction and
	// coordinates, and CornerM how far the area lies from it.
	Corner     string   `json:"nearest_corner"`
	CornerM    float64  `json:"nearest_corner_m"`
	Place      string   `json:"nearest_place,omitempty"`
	PlaceM     float64  `json:"nearest_place_m,omitempty"`
	Antennas   []string `json:"antennas"`       // whose own ratio is at least a twentieth of the limit at the largest ratio found inside
	LargestIn  Number   `json:"exposure_ratio"` // the largest found inside
	Resolution float64  `json:"resolution_m"`
}

// barrierShare is the own ratio from which an antenna is named with a barrier.
const barrierShare = 0.05

// Schedule lists the barriers and signs that the keep-out lines of zones ask
// for: every separate area of every class on every surface, in their order. The
// words on a sign are the local rule's.
func (m *Model) Schedule(ctx context.Context, zones []Zone) ([]Barrier, error) {
	out := []Barrier{}
	for i := range zones {
		z := &zones[i]
		s := m.surface(z.Surface)
		if z.Section != nil || s == nil {
			continue
		}
		for n, poly := range z.Outer {
			if len(poly) == 0 {
				continue
			}
			b := Barrier{Surface: z.Surface, Class: z.Class, MayBeThere: s.Class == z.Class, Number: n + 1, Resolution: z.ResolutionM, Antennas: []string{}}
			b.AreaM2 = MultiPolygon{poly}.Area()
			b.measure(poly, s, z.ResolutionM)
			m.corner(&b, poly, s)
			m.nearestPlace(&b, poly, s)
			if err := m.inside(ctx, &b, poly, s, z); err != nil {
				return nil, err
			}
			out = append(out, b)
		}
	}
	return out, ctx.Err()
}

// measure finds the line's length, over the surface and along its edge, and its
// extent.
func (b *Barrier) measure(poly []Ring, s *Surface, resolution float64) {
	b.FromXM, b.FromYM, b.ToXM, b.ToYM = math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)
	onEdge := func(p [2]float64) bool { return besideOutline(p, s.Outline, 1.5*resolution) }
	for _, r := range poly {
		for i := 0; i+1 < len(r); i++ {
			p, q := r[i], r[i+1]
			b.FromXM, b.ToXM = math.Min(b.FromXM, p[0]), math.Max(b.ToXM, p[0])
			b.FromYM, b.ToYM = math.Min(b.FromYM, p[1]), math.Max(b.ToYM, p[1])
			length := math.Hypot(q[0]-p[0], q[1]-p[1])
			if onEdge(p) && onEdge(q) && onEdge([2]float64{(p[0] + q[0]) / 2, (p[1] + q[1]) / 2}) {
				b.EdgeM += length
			} else {
				b.LengthM += length
			}
		}
	}
}

// besideOutline reports whether p lies within a distance in m of the outline.
func besideOutline(p [2]float64, outline []Ring, within float64) bool {
	for _, r := range outline {
		for i := 0; i+1 < len(r); i++ {
			if toSegment(p, r[i], r[i+1]) <= within {
				return true
			}
		}
	}
	return false
}

// toSegment is the distance in m of p from the segment a to c.
func toSegment(p, a, c [2]float64) float64 {
	dx, dy := c[0]-a[0], c[1]-a[1]
	t := 0.0
	if l := dx*dx + dy*dy; l > 0 {
		t = math.Max(0, math.Min(1, ((p[0]-a[0])*dx+(p[1]-a[1])*dy)/l))
	}
	return math.Hypot(p[0]-a[0]-t*dx, p[1]-a[1]-t*dy)
}

// toPolygon is the distance in m of p from a polygon, 0 inside it.
func toPolygon(p [2]float64, poly []Ring) float64 {
	if insidePolygon(p, poly) {
		return 0
	}
	d := math.Inf(1)
	for _, r := range poly {
		for i := 0; i+1 < len(r); i++ {
			d = math.Min(d, toSegment(p, r[i], r[i+1]))
		}
	}
	return d
}

// insidePolygon counts crossings (even-odd rule) over the outer ring and its
// holes.
func insidePolygon(p [2]float64, poly []Ring) bool {
	in := false
	for _, r := range poly {
		for i := 0; i+1 < len(r); i++ {
			a, c := r[i], r[i+1]
			if (a[1] > p[1]) != (c[1] > p[1]) && p[0] < a[0]+(p[1]-a[1])/(c[1]-a[1])*(c[0]-a[0]) {
				in = !in
			}
		}
	}
	return in
}

// corner names the surface's corner that lies nearest to the area, by its
// compass direction from the middle of the outline.
func (m *Model) corner(b *Barrier, poly []Ring, s *Surface) {
	r := s.Outline[0]
	x0, y0, x1, y1 := math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)
	for _, v := range r {
		x0, x1, y0, y1 = math.Min(x0, v[0]), math.Max(x1, v[0]), math.Min(y0, v[1]), math.Max(y1, v[1])
	}
	b.CornerM = math.Inf(1)
	for i := 0; i+1 < len(r); i++ {
		if d := toPolygon(r[i], poly); d < b.CornerM {
			b.CornerM = d
			dx, dy := (r[i][0]-(x0+x1)/2)/math.Max(x1-x0, 1e-9), (r[i][1]-(y0+y1)/2)/math.Max(y1-y0, 1e-9)
			name := compassPoint(bearing(math.Atan2(dx, dy) + m.site.About.GridBearingRad))
			b.Corner = fmt.Sprintf("%s corner (%.2f, %.2f)", name, r[i][0], r[i][1])
		}
	}
}

// compassPoint names the nearest of eight directions.
func compassPoint(deg float64) string {
	names := [...]string{"north", "north-east", "east", "south-east", "south", "south-west", "west", "north-west"}
	return names[int(math.Floor(deg/45+0.5))%len(names)]
}

// nearestPlace finds the named place nearest to the area at the surface's level.
func (m *Model) nearestPlace(b *Barrier, poly []Ring, s *Surface) {
	const sameLevel = 2.5 // m: a storey lower or higher is somewhere else
	b.PlaceM = math.Inf(1)
	for i := range m.site.Places {
		p := &m.site.Places[i]
		if math.Abs(p.At.Z-s.Z) > sameLevel {
			continue
		}
		if d := toPolygon([2]float64{p.At.X, p.At.Y}, poly); d < b.PlaceM {
			b.PlaceM, b.Place = d, p.ID
		}
	}
	if b.Place == "" {
		b.PlaceM = 0
	}
}

// inside finds the antennas that an area keeps people from: those with a part of
// their own at the largest ratio among points inside.
func (m *Model) inside(ctx context.Context, b *Barrier, poly []Ring, s *Surface, z *Zone) error {
	r := m.rule(z.Class)
	e := m.evaluator(r, nil, m.groundFactor(s.GroundFactor), siteFrame, 1)
	const steps = 12
	best, at := -1.0, [2]float64{}
	try := func(p [2]float64) {
		for k := 0; k <= 4; k++ {
			height := s.Z + s.From + (s.To-s.From)*float64(k)/4
			if _, v := e.at(Point{X: p[0], Y: p[1], Z: height}); v > best {
				best, at = v, p
			}
		}
	}
	if p := [2]float64{z.MaxAt[0], z.MaxAt[1]}; insidePolygon(p, poly) {
		try(p)
	}
	for _, v := range poly[0] {
		try(v)
	}
	for i := 0; i <= steps; i++ {
		for j := 0; j <= steps; j++ {
			p := [2]float64{b.FromXM + (b.ToXM-b.FromXM)*float64(i)/steps, b.FromYM + (b.ToYM-b.FromYM)*float64(j)/steps}
			if insidePolygon(p, poly) {
				try(p)
			}
		}
	}
	points, err := m.Field(ctx, []Place{{ID: "inside", At: Point{X: at[0], Y: at[1], Z: s.Z}, From: s.From, To: s.To, Class: z.Class, WallLoss: 1, On: s.ID}})
	if err != nil {
		return err
	}
	b.LargestIn = points[0].class(z.Class).ExposureRatio
	type part struct {
		id    string
		ratio Number
	}
	var parts []part
	for _, c := range points[0].Contributions {
		for _, own := range c.Ratios {
			if own.Class == z.Class && own.ExposureRatio >= barrierShare {
				parts = append(parts, part{c.Antenna, own.ExposureRatio})
			}
		}
	}
	sort.SliceStable(parts, func(i, j int) bool { return parts[i].ratio > parts[j].ratio })
	for _, p := range parts {
		b.Antennas = append(b.Antennas, p.id)
	}
	return nil
}
