package antenna

import (
	"math"
	"strconv"
	"strings"
)

// nsmaTags are the records of NSMA WG16.99.050 / TIA-804-B.
var nsmaTags = wordSet(`REVNUM REVDAT COMNT1 COMNT2 ANTMAN MODNUM PATNUM FILNUM FEDORN DESCR1 DESCR2 DESCR3 DESCR4 DESCR5
	DTDATA LOWFRQ HGHFRQ GUNITS LWGAIN MDGAIN HGGAIN AZWIDT ELWIDT CONTYP ATVSWR FRTOBA ELTILT RADCTR POTOPO MAXPOW ANTLEN ANTWID ANTDEP
	ANTWGT FIELD1 FIELD2 FIELD3 FIELD4 FIELD5 PATTYP NOFREQ PATFRE NUMCUT PATCUT POLARI NUPOIN FSTLST XORIEN YORIEN ZORIEN ENDFIL`)

func wordSet(words string) map[string]bool {
	set := map[string]bool{}
	for _, w := range strings.Fields(words) {
		set[w] = true
	}
	return set
}

// nsmaPattern is what one file says at one frequency.
type nsmaPattern struct {
	hz   float64
	line int
	cuts []nsmaCut
	told int // NUMCUT; 0 = not said
}

// nsmaCut is one cut as the file has it.
type nsmaCut struct {
	name, polarization string
	line               int
	told               int // NUPOIN; 0 = not said
	points             []point
}

// nsmaText is a whole file, before it is judged.
type nsmaText struct {
	f        *File
	tags     map[string]string
	lines    map[string]int
	patterns []nsmaPattern
	ended    bool
}

// looksLikeNSMA tells the format by a tag at the start of one of the first lines.
func looksLikeNSMA(data []byte) bool {
	head := string(data[:min(len(data), 2000)])
	for i, l := range strings.Split(head, "\n") {
		if tag, _, ok := nsmaRecord(l); ok && nsmaTags[tag] {
			return true
		}
		if i > 20 {
			break
		}
	}
	return false
}

// nsmaRecord splits "TAG:,value".
func nsmaRecord(line string) (tag, value string, ok bool) {
	tag, value, ok = strings.Cut(line, ":")
	if !ok {
		return "", "", false
	}
	tag = strings.ToUpper(strings.TrimSpace(tag))
	if len(tag) != 6 {
		return "", "", false
	}
	value = strings.TrimSpace(value)
	value = strings.TrimSpace(strings.TrimPrefix(value, ","))
	return tag, strings.TrimRight(value, ", \t"), true
}

// readNSMA reads NSMA WG16.99.050 / TIA-804-B text.
func readNSMA(data []byte, o ReadOptions) (*File, error) {
	t := &nsmaText{f: &File{Format: "TIA-804-B / NSMA WG16.99.050"}, tags: map[string]string{}, lines: map[string]int{}}
	if err := t.scan(string(data)); err != nil {
		return nil, err
	}
	if err := t.header(); err != nil {
		return nil, err
	}
	p, err := t.choose(o)
	if err != nil {
		return nil, err
	}
	return t.f, t.use(p, o)
}

func (t *nsmaText) scan(text string) error {
	if !strings.Contains(text, "\r\n") {
		t.f.forgive("lines end without a carriage return")
	}
	for i, raw := range strings.Split(text, "\n") {
		n := i + 1
		line := strings.TrimSpace(raw)
		if at := strings.IndexByte(line, '!'); at >= 0 {
			t.f.forgiveOnce("comments after \"!\" passed over")
			line = strings.TrimSpace(line[:at])
		}
		if line == "" {
			continue
		}
		if t.ended {
			t.f.forgiveOnce("text after ENDFIL passed over")
			break
		}
		tag, value, ok := nsmaRecord(line)
		if !ok {
			if err := t.point(n, line); err != nil {
				return err
			}
			continue
		}
		if !nsmaTags[tag] {
			t.f.forgive("line %d: the record %s is not in the standard and is passed over", n, clipped(tag))
			continue
		}
		if err := t.record(n, tag, value); err != nil {
			return err
		}
	}
	if !t.ended {
		t.f.forgive("the file does not end with ENDFIL")
	}
	return nil
}

// record takes one record: those of a pattern go to the last pattern or cut.
func (t *nsmaText) record(n int, tag, value string) error {
	last := len(t.patterns) - 1
	switch tag {
	case "ENDFIL":
		t.ended = true
		return nil
	case "PATFRE":
		mhz, err := nsmaNumber(n, tag, value)
		if err != nil {
			return err
		}
		if !(mhz > 0 && mhz < 1e7) {
			return faultAt(n, value, "is not a frequency in MHz")
		}
		t.patterns = append(t.patterns, nsmaPattern{hz: mhz * 1e6, line: n})
		return nil
	case "NUMCUT", "PATCUT", "POLARI", "NUPOIN", "FSTLST", "XORIEN", "YORIEN", "ZORIEN":
		if last < 0 {
			return faultAt(n, tag, "stands before the first PATFRE; the frequency of a cut must come first")
		}
	default:
		if _, twice := t.tags[tag]; twice {
			if t.tags[tag] == value {
				t.f.forgive("line %d: %s is given again with the same value", n, tag)
				return nil
			}
			return faultAt(n, value, "is a second, different %s (see line %d)", tag, t.lines[tag])
		}
		t.tags[tag], t.lines[tag] = value, n
		return nil
	}
	p := &t.patterns[last]
	if tag == "PATCUT" {
		p.cuts = append(p.cuts, nsmaCut{name: strings.ToUpper(value), line: n})
		return nil
	}
	if tag == "NUMCUT" {
		v, err := nsmaNumber(n, tag, value)
		p.told = int(v)
		return err
	}
	if len(p.cuts) == 0 {
		return faultAt(n, tag, "stands before the first PATCUT")
	}
	c := &p.cuts[len(p.cuts)-1]
	switch tag {
	case "POLARI":
		c.polarization = strings.ToUpper(strings.ReplaceAll(value, " ", ""))
	case "NUPOIN":
		v, err := nsmaNumber(n, tag, value)
		c.told = int(v)
		return err
	}
	return nil
}

// nsmaNumber reads the first number of a record, which may carry a tolerance.
func nsmaNumber(n int, tag, value string) (float64, error) {
	first := value
	if i := strings.IndexAny(value, ",;/ \t"); i >= 0 {
		first = value[:i]
	}
	return plainNumber(n, tag, strings.ReplaceAll(first, "\u2212", "-"))
}

// plainNumber reads a number and nothing beside it.
func plainNumber(n int, tag, text string) (float64, error) {
	v, err := strconv.ParseFloat(text, 64)
	if err != nil || math.IsNaN(v) || math.Abs(v) > 1e9 || strings.ContainsAny(text, "xX_") {
		return 0, faultAt(n, text, "is not a number for %s", tag)
	}
	return v, nil
}

// point takes one line "angle,magnitude,phase,".
func (t *nsmaText) point(n int, line string) error {
	last := len(t.patterns) - 1
	if last < 0 || len(t.patterns[last].cuts) == 0 {
		return faultAt(n, line, "is neither a record TAG:,value nor a point of a cut")
	}
	s := strings.ReplaceAll(line, "\u2212", "-")
	if s != line {
		t.f.forgiveOnce("typographic minus signs read as minus")
	}
	if !strings.HasSuffix(s, ",") {
		t.f.forgiveOnce("points without their last comma")
	}
	parts := strings.Split(strings.TrimSuffix(s, ","), ",")
	if len(parts) < 2 || len(parts) > 3 {
		return faultAt(n, line, "is not a point; write angle,magnitude,phase,")
	}
	deg, err := plainNumber(n, "the angle", strings.TrimSpace(parts[0]))
	if err != nil {
		return err
	}
	db, err := plainNumber(n, "the magnitude", strings.TrimSpace(parts[1]))
	if err != nil {
		return err
	}
	c := &t.patterns[last].cuts[len(t.patterns[last].cuts)-1]
	c.points = append(c.points, point{deg, db, n})
	return nil
}

// header reads the records that hold for the whole file.
func (t *nsmaText) header() error {
	f := t.f
	var words []string
	for _, tag := range []string{"ANTMAN", "MODNUM", "PATNUM"} {
		if v := t.tags[tag]; v != "" {
			words = append(words, v)
		}
	}
	f.Description = strings.Join(words, " ")
	if len(t.patterns) == 0 {
		return faultAt(0, "", "no PATFRE record: the file holds no pattern")
	}
	f.FrequencyHz = Interval{math.Inf(1), math.Inf(-1)}
	for _, p := range t.patterns {
		f.FrequencyHz = f.FrequencyHz.Hull(Interval{p.hz, p.hz})
	}
	for _, tag := range []string{"LOWFRQ", "HGHFRQ"} {
		value, ok := t.tags[tag]
		if !ok {
			f.forgive("%s is missing; the frequencies of the patterns bound the file", tag)
			continue
		}
		mhz, err := nsmaNumber(t.lines[tag], tag, value)
		if err != nil {
			return err
		}
		if !(mhz > 0 && mhz < 1e7) {
			return faultAt(t.lines[tag], value, "is not a frequency in MHz")
		}
		f.FrequencyHz = f.FrequencyHz.Hull(Interval{mhz * 1e6, mhz * 1e6})
	}
	if value, ok := t.tags["ELTILT"]; ok {
		deg, err := nsmaNumber(t.lines["ELTILT"], "ELTILT", value)
		if err != nil {
			return err
		}
		if math.Abs(deg) >= 90 {
			return faultAt(t.lines["ELTILT"], value, "is not a tilt in deg")
		}
		f.StatedTiltRad, f.HasStatedTilt = radians(deg), true
		if !strings.ContainsAny(value, ",;/ ") {
			f.forgive("line %d: ELTILT without a tolerance", t.lines["ELTILT"])
		}
	}
	switch v := t.tags["PATTYP"]; strings.ToLower(v) {
	case "envelope":
		f.Envelope = true
	case "typical":
	case "":
		f.forgive("PATTYP is missing; the pattern counts as typical")
	default:
		f.forgive("line %d: PATTYP %q is neither typical nor envelope; the pattern counts as typical", t.lines["PATTYP"], clipped(v))
	}
	if v, ok := t.tags["NOFREQ"]; ok {
		n, err := nsmaNumber(t.lines["NOFREQ"], "NOFREQ", v)
		if err != nil {
			return err
		}
		if int(n) > len(t.patterns) {
			return faultAt(t.lines["NOFREQ"], v, "frequencies are announced but %d are given; the file is cut short", len(t.patterns))
		}
		if int(n) < len(t.patterns) {
			f.forgive("line %d: NOFREQ says %d, %d frequencies are given", t.lines["NOFREQ"], int(n), len(t.patterns))
		}
	}
	return nil
}

// choose takes the pattern whose frequency is nearest as a ratio.
func (t *nsmaText) choose(o ReadOptions) (*nsmaPattern, error) {
	if o.FrequencyHz == 0 {
		if len(t.patterns) > 1 {
			var all []string
			for _, p := range t.patterns {
				all = append(all, strconv.FormatFloat(p.hz/1e6, 'g', 8, 64))
			}
			return nil, faultAt(t.patterns[1].line, "", "the file holds patterns at %s MHz; name the frequency", strings.Join(all, ", "))
		}
		return &t.patterns[0], nil
	}
	if err := t.f.admit(o); err != nil {
		return nil, err
	}
	best := &t.patterns[0]
	for i := range t.patterns {
		p := &t.patterns[i]
		if p != best && p.hz == best.hz {
			return nil, faultAt(p.line, "", "the frequency of line %d is given again", best.line)
		}
		if math.Abs(math.Log(p.hz/o.FrequencyHz)) < math.Abs(math.Log(best.hz/o.FrequencyHz)) {
			best = p
		}
	}
	return best, nil
}

// units reads GUNITS: the unit of the gain, and that of the points.
func (t *nsmaText) units() (gainOffset float64, relative bool, pointOffset float64, err error) {
	line := t.lines["GUNITS"]
	value, ok := t.tags["GUNITS"]
	if !ok {
		return 0, false, 0, faultAt(0, "", "GUNITS is missing: whether gains are dBi or dBd cannot be guessed; add GUNITS:,DBI/DBR")
	}
	parts := strings.FieldsFunc(strings.ToUpper(value), func(r rune) bool { return r == '/' || r == ',' || r == ' ' })
	if len(parts) == 2 {
		offset, known := map[string]float64{"DBI": 0, "DBD": DipoleGainDB}[parts[0]]
		points, absolute := map[string]float64{"DBI": 0, "DBD": DipoleGainDB}[parts[1]]
		if known && (absolute || parts[1] == "DBR") {
			return offset, !absolute, points, nil
		}
	}
	return 0, false, 0, faultAt(line, value, "is not known as GUNITS; known are DBI/DBR, DBD/DBR, DBI/DBI and DBD/DBD")
}

// use makes the file's pattern of one frequency's cuts.
func (t *nsmaText) use(p *nsmaPattern, o ReadOptions) error {
	f := t.f
	f.PatternFrequencyHz = p.hz
	if o.FrequencyHz != 0 && math.Abs(p.hz/o.FrequencyHz-1) > 0.1 {
		f.warn("the nearest pattern in the file is at %.6g MHz", p.hz/1e6)
	}
	gainOffset, relative, pointOffset, err := t.units()
	if err != nil {
		return err
	}
	if p.told > len(p.cuts) {
		return faultAt(p.line, "", "%d cuts are announced at %.6g MHz but %d are given; the file is cut short", p.told, p.hz/1e6, len(p.cuts))
	}
	if p.told != 0 && p.told < len(p.cuts) {
		f.forgive("NUMCUT says %d, %d cuts are given", p.told, len(p.cuts))
	}
	groups := map[string][]*nsmaCut{}
	for i := range p.cuts {
		c := &p.cuts[i]
		switch c.name {
		case "AZ", "EL", "H", "V":
			groups[c.name] = append(groups[c.name], c)
		default:
			return faultAt(c.line, c.name, "is not a cut that can be read; known are AZ, EL, H and V")
		}
		if c.told != 0 && c.told != len(c.points) {
			f.forgive("line %d: %d points are announced, %d are given", c.line, c.told, len(c.points))
		}
	}
	h, err := t.pick(groups, "AZ", "H")
	if err != nil {
		return err
	}
	v, err := t.pick(groups, "EL", "V")
	if err != nil {
		return err
	}
	hc, err := t.joined(h, false, relative)
	if err != nil {
		return err
	}
	vc, err := t.joined(v, true, relative)
	if err != nil {
		return err
	}
	f.Polarization = h[0].polarization
	if err := t.gains(gainOffset, relative, pointOffset, h, v); err != nil {
		return err
	}
	sense := SenseUnknown
	if v[0].name == "EL" {
		sense = SenseUp
	}
	if err := f.useCuts(hc, vc, sense, o.VerticalSense, v[0].line); err != nil {
		return err
	}
	t.checkWidths()
	return nil
}

// pick returns the cuts of one plane, which a file may name in either geometry.
func (t *nsmaText) pick(groups map[string][]*nsmaCut, a, b string) ([]*nsmaCut, error) {
	switch {
	case len(groups[a]) == 0 && len(groups[b]) == 0:
		return nil, faultAt(0, "", "no %s or %s cut at this frequency; both planes are needed", a, b)
	case len(groups[a]) > 0 && len(groups[b]) > 0:
		return nil, faultAt(groups[b][0].line, "", "both a %s and a %s cut are given; which of them is meant cannot be guessed: leave one", a, b)
	case len(groups[a]) > 0:
		return groups[a], nil
	}
	return groups[b], nil
}

// gains takes the peak gain: MDGAIN, or the largest point where they are
// absolute.
func (t *nsmaText) gains(offset float64, relative bool, pointOffset float64, h, v []*nsmaCut) error {
	f := t.f
	if !relative {
		most := math.Inf(-1)
		for _, c := range append(append([]*nsmaCut(nil), h...), v...) {
			for _, p := range c.points {
				most = max(most, p.db)
			}
		}
		f.PeakGain, f.HasGain = GainFromDBi(most+pointOffset), true
	}
	value, ok := t.tags["MDGAIN"]
	if !ok {
		f.forgive("MDGAIN is missing: the file states no gain")
		return nil
	}
	mid, err := nsmaNumber(t.lines["MDGAIN"], "MDGAIN", value)
	if err != nil {
		return err
	}
	if !(math.Abs(mid) <= 90) {
		return faultAt(t.lines["MDGAIN"], value, "is not a gain in dB")
	}
	if relative {
		f.PeakGain, f.HasGain = GainFromDBi(mid+offset), true
	} else if d := f.PeakGain.DBi() - mid - offset; math.Abs(d) > 0.5 {
		f.warn("the points peak %.1f dB from MDGAIN; the points stand", d)
	}
	for _, tag := range []string{"LWGAIN", "HGGAIN"} {
		if value, ok := t.tags[tag]; ok {
			g, err := nsmaNumber(t.lines[tag], tag, value)
			if err != nil {
				return err
			}
			if g > mid+0.05 {
				f.warn("%s states %.2f dB, more than the %.2f dB of MDGAIN that is used", tag, g, mid)
			}
		}
	}
	return nil
}

// checkWidths holds the stated beamwidths against the cuts.
func (t *nsmaText) checkWidths() {
	for _, c := range []struct {
		tag string
		cut *Cut
	}{{"AZWIDT", t.f.Horizontal}, {"ELWIDT", t.f.Vertical}} {
		value, ok := t.tags[c.tag]
		if !ok {
			continue
		}
		told, err := nsmaNumber(t.lines[c.tag], c.tag, value)
		w, found := c.cut.Beamwidth(3)
		if err != nil || !found || told <= 0 {
			continue
		}
		if d := math.Abs(degrees(w) - told); d > 1 && d > told/4 {
			t.f.warn("%s states a beam of %.3g deg, the cut has one of %.3g deg", c.tag, told, degrees(w))
		}
	}
}
