// Package exposure predicts where the fields of an antenna site exceed a user's
// limits: the field and the exposure ratio at a place, keep-out distances, and
// boundaries on the surfaces where people walk. One value goes in, a Site; a Model
// made from it answers Field, Distances, Zones and Assess; what comes out is
// printed by others.
//
// # Conventions
//
// SI units, float64. E and H are RMS magnitudes of the field vector, S of a source
// is the larger of E2/Z0 and Z0 H2. Site axes are x east, y north, z up, in m above
// the site's datum. Azimuth runs clockwise from the y axis, tilt is down positive,
// roll turns about boresight. A pattern sees the azimuth phi and the elevation theta
// in its antenna's own frame; package antenna says how.
//
// The exposure ratio of a class is formed for each group of its levels (effect,
// region of the body, mean or peak): per source the largest over the quantities
// that have a level, or their sum where the rows say so; then the sum over
// sources. Groups are compared, never added. Sources that share a signal and a
// frequency add in amplitude first. A class is above where its covered sources
// alone exceed 1; else not assessed where a source has no level or an unknown power,
// or where the point lies in a reactive region that its method does not reach; else
// within.
//
// The same site gives the same bytes: sums run in a fixed order whatever the number
// of workers, and nothing reads a clock.
//
// # What is proven
//
// Let f be a surface, c a class and s > 0 a share of the limit. The column over a
// point (x, y) of f is the set of points (x, y, z) with z from f.Z+f.From to
// f.Z+f.To. Let R(p) be the modelled exposure ratio of c at p: the largest over
// groups of the sum over signals. Where a level is compared with the mean over the
// body, its part of R(p) is that mean over the column of p. For the Zone that Zones
// returns:
//
// Proposition. Every point of f whose column holds a p with R(p) > s lies in Outer,
// and so does every point whose column lies, as far as the search could tell, partly
// in a reactive region that a method does not reach. Every point of Inner has such a
// p in its column. Inner is a subset of Outer. Both hold for every real point, not
// for samples, at every resolution, in floating-point arithmetic as it is, but for
// points within 5 nm of a slanting edge of the surface's own outline.
//
// The resolution decides only how far apart Outer and Inner are: outside reactive
// regions their difference shrinks in proportion to it. The same proposition holds
// on a vertical section with points for columns. MaxRatioLower <= max R <=
// MaxRatioUpper over what every method reaches. A distance that
// Distances returns as an extent is at least that of every p with R(p) > 1 in its
// direction, and along a ray at least that of the last such p.
//
// This is a statement about the model. It says nothing about a reflection, a side
// lobe or a power that the site's tables leave out.
//
// # Why it holds
//
// Every square of the surface, with a slab of heights over it, is a box. For a box
// the engine computes numbers low and high with low <= R(p) <= high for every p in
// it. high <= s discards, low > s accepts, else the box is split in plan or in
// height; at the finest cell what is still open goes to Outer. What follows accounts
// for each error term between that sentence and the polygons.
//
// Distance. Boxes are parallel to the axes of the question's frame, so that the
// nearest and farthest distance from a centre are those of its faces and corners
// (placement.look). Where a box may hold the centre itself, high is infinite, and a
// power of zero is taken out before it meets the infinity (evalTerm.over).
//
// Direction. Around the centre of the box, in the plane across the antenna's axis,
// the box lies in a rectangle of half sides a (radial) and l (lateral); azimuth
// strays by at most atan(l/(rho-a)), for which a polynomial that is never below
// stands, and by all of the circle where rho <= a. Elevation is monotone in height
// and in rho, so that its extremes lie at the ends of their intervals. angleSlack
// covers fastAtan2, which errs by less than 4e-16 rad, and the arithmetic about it.
//
// Pattern. RelativeRange encloses Relative, rounding included: that is the contract
// of antenna.Pattern, and package antenna says why its own patterns keep it.
//
// Poles. Within one degree of a pattern's poles the largest value over all azimuths
// holds; a box that meets that cap takes every azimuth (antenna.TowardRange). A box
// on the rim takes the hull of both sides.
//
// Near field. Wires and elementary sources are bounded by their distances from the
// wire's points, arrays by their sums at the box's centre and how far these can
// drift, to second order; a box on the edge of a method's range, of a panel's
// switch or of an aperture's zones takes the hull of both sides, with 1 nm of slack
// so that a switch cannot fall between a point and its box. Rounding of a phase is
// covered by phaseSlack, 8 2^-53 k r times the sum of amplitudes. Two rays over
// ground are bounded together; where that is too dear, for arrays, by the sum of
// their amplitudes, which is never less.
//
// Reactive regions. reaches compares the nearest and the farthest point of the box
// with the region's depth about the body. A box that is inside as a whole is Outer
// and never Inner, one that may touch the region is not decided.
//
// Rotation. The beam's value is the largest over the sweep. Its upper bound is
// taken over the box's azimuths and the sweep together, the lower one at one azimuth
// that the sweep brings to every direction of the box (swept). The time factor falls
// with distance (rotation.over).
//
// Signals and levels. Amplitudes are not negative, and squares, roots, sums and
// maxima of them rise with each: bounds go through evalTerm.over and weights.ratio
// as values do.
//
// Sums. A sum of a few hundred ratios, each good to a few ulps, is widened by
// sumSlack on either side, relative. So the order in which a search adds terms does
// not matter. A term whose gap has become negligible is carried on with the low and
// high of a box around the present one, which hold for every part of it.
//
// Heights. The largest over a column is at least the largest of the slabs' lows and
// at most the largest of their highs. A height at which low > s over the whole
// square is enough for all of its columns. A mean lies between the means of the
// slabs' lows and of their highs; the levels of a group that are compared by their
// largest value are added slab by slab (search.columnBounds).
//
// Coordinates. A box is computed from whole numbers of finest cells; boxSlack grows
// it by 4 nm on every side, which covers the rounding of coordinates up to 10 km and
// the rounding of the polygons' corners to 1 nm: a sliver that rounding moves from
// one square to its neighbour has been bounded with that neighbour.
//
// Lines. Squares that are kept are joined by adding up their sides along each line
// of the lattice, where inner sides cancel exactly: their coordinates are whole
// numbers. Squares on the outline are cut by it; cuts are computed from the whole
// edge, so that neighbours agree, and rounded to a grain of 2 to 4 nm, so that no two
// corners meet once they are written to 1 nm (trace). That grain is the exception the
// proposition makes.
//
// Straightening. A run of corners gives way to one edge only where every corner of
// the run lies on that side of it which adds to Outer, or takes from Inner, and the
// pocket between holds no other corner, so that rings stay simple and apart
// (straightenRings). Its predicates err by 1e-12 of a cell, inside boxSlack.
// OuterAddedM2 and InnerRemovedM2 say what it cost.
//
// Distances. Beyond evaluator.radius the sum of falloff bounds, which fall with
// distance, is below the share, and every reactive region has ended. Inside it boxes
// are taken farthest first; the outer end is the far side of the farthest box that
// could not be discarded, plus boxSlack, whenever the search stops.
//
// The ratio at a single place is a value, not a bound: a body's largest is found to
// within bodyGap and its mean by quadrature, and the verdict allows for bodyGap.
// Boundaries rest on neither.
//
// The tests hold all of this against dense sampling on random sites, box by box and
// line by line, and have been seen to fail with a bound weakened.
package exposure
