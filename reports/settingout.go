package reports

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"math"
	"strconv"
	"strings"

	"example.org/standclear/exposure"
)

var settingOutHeader = []string{
	"surface", "class", "line", "vertex", "x [m]", "y [m]", "z [m]", "from corner",
	"east of corner [m]", "north of corner [m]", "distance [m]", "true bearing [deg]",
}

// SettingOut returns the corners of every keep-out line as CSV, measured from a
// named corner of the surface's outline, so that a line can be marked on the
// roof with a tape and a compass. Those of a vertical section are measured from
// the start of its line. A hole in a line is a line of its own.
func SettingOut(a *exposure.Assessment) ([]byte, error) {
	var out bytes.Buffer
	w := csv.NewWriter(&out)
	if err := w.Write(settingOutHeader); err != nil {
		return nil, err
	}
	for _, z := range a.Zones {
		s := surfaceOf(a, z)
		if s == nil || len(s.Outline) == 0 || len(s.Outline[0]) == 0 {
			continue
		}
		place := func(v [2]float64) (x, y, height float64) { return v[0], v[1], s.Z }
		if err := setOut(w, a, z, s.ID, cornerName(s), s.Outline[0][0], place); err != nil {
			return nil, err
		}
	}
	for _, c := range cuts(a) {
		start := fmt.Sprintf("start of the section, at x = %s, y = %s", millimetres(c.section.X1M), millimetres(c.section.Y1M))
		place := func(v [2]float64) (x, y, height float64) {
			x, y = onLine(c.section, v[0])
			return x, y, v[1]
		}
		for _, z := range c.zones {
			if err := setOut(w, a, z, cutName(z), start, [2]float64{c.section.X1M, c.section.Y1M}, place); err != nil {
				return nil, err
			}
		}
	}
	w.Flush()
	return out.Bytes(), w.Error()
}

// setOut writes the corners of one boundary's keep-out lines.
func setOut(w *csv.Writer, a *exposure.Assessment, z exposure.Zone, of, cornerName string, corner [2]float64, place func([2]float64) (x, y, height float64)) error {
	sg, cg := math.Sincos(a.Site.About.GridBearingRad)
	line := 0
	for _, rings := range z.Outer {
		for i, ring := range rings {
			line++
			kind := "keep-out line " + strconv.Itoa(line)
			if i > 0 {
				kind = "opening in it " + strconv.Itoa(line)
			}
			for k, v := range ring {
				if k == len(ring)-1 && len(ring) > 1 && v == ring[0] {
					break // a ring is closed by going back to vertex 1
				}
				x, y, height := place(v)
				dx, dy := x-corner[0], y-corner[1]
				east, north := dx*cg+dy*sg, -dx*sg+dy*cg
				bearing := math.Mod(math.Atan2(east, north)/degree+360, 360)
				row := []string{
					cellGuard(of), cellGuard(z.Class), kind, strconv.Itoa(k + 1),
					millimetres(x), millimetres(y), millimetres(height), cellGuard(cornerName),
					millimetres(east), millimetres(north), millimetres(math.Hypot(dx, dy)), strconv.FormatFloat(bearing, 'f', 2, 64),
				}
				if err := w.Write(row); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

// millimetres prints a length to the millimetre; minus zero is zero.
func millimetres(v float64) string {
	s := strconv.FormatFloat(v, 'f', 3, 64)
	if s == "-0.000" {
		return "0.000"
	}
	return s
}

// cornerName names the first corner of a surface by where it lies on it.
func cornerName(s *exposure.Surface) string {
	ring := s.Outline[0]
	x0, x1, y0, y1 := math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
	for _, v := range ring {
		x0, x1, y0, y1 = math.Min(x0, v[0]), math.Max(x1, v[0]), math.Min(y0, v[1]), math.Max(y1, v[1])
	}
	ns, ew := "+y", "+x"
	if ring[0][1] < (y0+y1)/2 {
		ns = "-y"
	}
	if ring[0][0] < (x0+x1)/2 {
		ew = "-x"
	}
	return fmt.Sprintf("corner 1 of %s, toward %s %s, at x = %s, y = %s", s.ID, ew, ns, millimetres(ring[0][0]), millimetres(ring[0][1]))
}

// cellGuard keeps a spreadsheet program from taking a cell of a CSV file for a
// formula: text that begins like one gets an apostrophe before it, and no cell
// holds a line break.
func cellGuard(text string) string {
	text = oneLine(text)
	if text != "" && strings.ContainsRune("=+-@|%", rune(text[0])) {
		return "'" + text
	}
	return text
}
