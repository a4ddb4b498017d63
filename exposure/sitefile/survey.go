package sitefile

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
	"example.org/standclear/exposure/units"
)

// LoadSurvey reads a site and what was measured on it: the tables readings,
// instruments and uncertainty, and the logs that readings name. Logs are read
// when the survey is worked out, in one pass. The survey is empty where the site
// has no readings.
func LoadSurvey(name string, o Options) (*exposure.Site, *survey.Survey, error) {
	l, err := open(name, o)
	if err != nil {
		return nil, nil, err
	}
	site, err := l.site()
	if err != nil {
		return nil, nil, err
	}
	return site, &l.survey, nil
}

// LoadSurveyFS is LoadSurvey for a site folder of any file system, such as the
// embedded demo.
func LoadSurveyFS(fsys fs.FS, o Options) (*exposure.Site, *survey.Survey, error) {
	l := newLoader(fsys, o)
	l.folder()
	site, err := l.site()
	if err != nil {
		return nil, nil, err
	}
	return site, &l.survey, nil
}

// open reads the tables of a site folder or workbook.
func open(name string, o Options) (*loader, error) {
	info, err := os.Stat(name)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, Faults{{File: name, Message: "there is no such file or folder; give the site folder or the workbook"}}
	}
	if err != nil {
		return nil, err
	}
	if info.IsDir() {
		l := newLoader(os.DirFS(name), o)
		l.folder()
		return l, nil
	}
	if strings.EqualFold(filepath.Ext(name), ".csv") {
		return nil, Faults{{File: name, Message: "this is one table of a site; give the folder that it lies in"}}
	}
	l := newLoader(os.DirFS(filepath.Dir(name)), o)
	l.workbook(filepath.Base(name), nil)
	return l, nil
}

// surveyTables binds what was measured.
func (l *loader) surveyTables(s *exposure.Site) {
	l.survey = survey.Survey{}
	l.instruments()
	l.components()
	l.readings(s)
	l.warnSurvey(s)
}

func (l *loader) instrument(id string) *survey.Instrument {
	for i := range l.survey.Instruments {
		if l.survey.Instruments[i].ID == id {
			return &l.survey.Instruments[i]
		}
	}
	return nil
}

// instruments binds the instruments.
func (l *loader) instruments() {
	unique := l.unique("id")
	for i := range l.rows("instruments") {
		r := &l.rows("instruments")[i]
		unique(r)
		in := survey.Instrument{
			ID: r.text("id"), Kind: survey.Kind(r.text("kind")), FromHz: r.value("from"), ToHz: r.value("to"),
			CableLossDB: r.value("cable loss"), FloorVPerM: r.value("floor"), OverloadVPerM: r.value("overload"),
			CalibratedOn: r.text("calibrated on"), CalibrationDue: r.text("calibration due"), Note: r.text("note"), Row: r.in,
		}
		in.AntennaFactorDB, in.HasAntennaFactor = r.number("antenna factor")
		if in.Kind == "" {
			in.Kind = survey.Broadband
			if in.HasAntennaFactor {
				in.Kind = survey.Selective
			}
		}
		if r.sound("from", "to") && in.FromHz >= in.ToHz {
			l.fault(r, "to", "the range ends where it begins or before; write from below to above")
		}
		if f, o := in.FloorVPerM, in.OverloadVPerM; r.sound("floor", "overload") && f > 0 && o > 0 && f >= o {
			l.fault(r, "overload", "the overload is not above the floor; check both")
		}
		in.Calibration = l.calibration(r)
		l.survey.Instruments = append(l.survey.Instruments, in)
	}
}

// calibration reads a factor, or the file of factors that the cell names.
func (l *loader) calibration(r *record) survey.Calibration {
	text := r.text("calibration factor")
	if !r.has("calibration factor") {
		return survey.Constant(1)
	}
	v, err := units.ParseNumber(text, r.t.grid.decimalComma)
	if err == nil {
		if !(v > 0) {
			l.fault(r, "calibration factor", "%q is not above 0; write what the reading is multiplied by, such as 1.05", text)
			return survey.Constant(1)
		}
		return survey.Constant(v)
	}
	if !fs.ValidPath(text) {
		l.fault(r, "calibration factor", "%q is neither a number nor a file in the site folder; write one, such as 1.05 or probe.csv", text)
		return survey.Constant(1)
	}
	data, readErr := fs.ReadFile(l.fsys, text)
	if readErr != nil {
		l.fault(r, "calibration factor", "%q is neither a number nor a file in the site folder; write one, such as 1.05 or probe.csv", text)
		return survey.Constant(1)
	}
	l.record(text, data)
	c, faults := readCalibration(text, data, l.options.Windows1252)
	l.faults = append(l.faults, faults...)
	return c
}

// components binds the uncertainty budgets.
func (l *loader) components() {
	for i := range l.rows("uncertainty") {
		r := &l.rows("uncertainty")[i]
		c := survey.Component{
			Name: r.text("component"), Value: r.value("value"), Percent: r.text("unit") == "%", Distribution: survey.Distribution(r.text("distribution")),
			Divisor: r.value("divisor"), Sensitivity: r.value("sensitivity"), Row: rowPlace(r.in),
		}
		if k, ok := r.number("coverage factor"); ok {
			if r.has("divisor") {
				l.fault(r, "coverage factor", "divisor and coverage factor are both given; keep one")
			}
			if c.Distribution != survey.Normal && r.sound("distribution") {
				l.fault(r, "coverage factor", "a coverage factor belongs to a normal distribution, and this is %s; leave one of the two blank", c.Distribution)
			}
			c.Divisor = k
		}
		if r.has("sensitivity") && r.sound("sensitivity") && c.Sensitivity == 0 {
			l.fault(r, "sensitivity", "a sensitivity of 0 takes the component out; leave the row out, or write its sensitivity")
		}
		in := l.instrument(r.text("instrument"))
		if in == nil {
			if r.has("instrument") && r.sound("instrument") {
				l.fault(r, "instrument", "the instruments table has no %q%s", r.text("instrument"), didYouMean(r.text("instrument"), l.instrumentIDs()))
			}
			continue
		}
		in.Components = append(in.Components, c)
	}
}

func (l *loader) instrumentIDs() []string {
	var ids []string
	for _, in := range l.survey.Instruments {
		ids = append(ids, in.ID)
	}
	return ids
}

// values are the columns of which a reading fills one.
var readingValues = []struct {
	column   string
	quantity survey.Quantity
}{
	{"E", survey.ElectricField}, {"H", survey.MagneticField}, {"S", survey.PowerDensity},
	{"port level", survey.PortLevel}, {"share of limit", survey.ShareOfLimit},
}

// readings binds the readings and gathers those of one series.
func (l *loader) readings(s *exposure.Site) {
	unique := l.unique("id")
	at := map[string]int{} // series to its number
	var lead []*record     // its first row
	var samples []survey.Memory
	groups := map[string]*record{}
	axes := map[string]map[string]*record{}
	for i := range l.rows("readings") {
		r := &l.rows("readings")[i]
		unique(r)
		before := len(l.faults)
		m := l.reading(r, s)
		log := l.logFile(r)
		if log == "" && noFigure(r) {
			l.warn(r.place(), "", "the row %q has no figure and is left out", r.text("id"))
			continue
		}
		l.value(r, &m, log != "")
		l.groupOf(r, groups, axes)
		if r.text("series") == "" {
			l.survey.Readings = append(l.survey.Readings, m)
			continue
		}
		name := r.text("series")
		n, known := at[name]
		if !known {
			n = len(l.survey.Series)
			at[name] = n
			l.survey.Series = append(l.survey.Series, survey.Series{Name: name, Reading: m})
			lead, samples = append(lead, r), append(samples, nil)
			if log != "" {
				l.survey.Series[n].Samples = l.log(log, m.Quantity)
				if m.Quantity == "" && len(l.faults) == before {
					l.openLog(r, &l.survey.Series[n], log)
				}
			}
		}
		if log != "" {
			if known {
				l.fault(r, "series", "the log %q is named in row %d already; keep one row", name, lead[n].row.number)
			}
			continue
		}
		if column := unlike(lead[n], r); column != "" {
			l.fault(r, column, "the series %q has another %s in row %d; one series is one instrument at one point", name, column, lead[n].row.number)
		}
		when, err := time.Parse(time.RFC3339, r.text("time"))
		if err != nil {
			if r.sound("time") {
				l.fault(r, "time", "the cell is blank, and the series %q needs it; write it as 2026-03-31T10:05:00Z, with its zone", name)
			}
			continue
		}
		if !known {
			_, l.survey.Series[n].ZoneS = when.Zone()
		}
		samples[n] = append(samples[n], survey.Sample{NS: when.UnixNano(), Value: m.Value})
	}
	for n := range l.survey.Series {
		if l.survey.Series[n].Samples == nil {
			// A table is sorted by whoever filled it in; a log is not touched.
			slices.SortStableFunc(samples[n], func(a, b survey.Sample) int {
				switch {
				case a.NS < b.NS:
					return -1
				case a.NS > b.NS:
					return 1
				}
				return 0
			})
			l.survey.Series[n].Samples = samples[n]
		}
	}
	l.axesOf(axes)
}

// noFigure reports whether no value was written in a row: it was not read yet.
func noFigure(r *record) bool {
	return !slices.ContainsFunc(readingValues[:], func(v struct {
		column   string
		quantity survey.Quantity
	}) bool {
		return r.has(v.column)
	})
}

// unlike names the first column in which two rows of a series differ and may not.
func unlike(a, b *record) string {
	for _, column := range []string{"place", "x", "y", "z", "height", "instrument", "frequency", "from", "to", "axis", "detector", "share of", "antennas", "scale to maximum", "ports"} {
		if a.cell(column).text != b.cell(column).text && a.in.Cell(column) != b.in.Cell(column) {
			return column
		}
	}
	for _, v := range readingValues {
		if a.has(v.column) != b.has(v.column) {
			return v.column
		}
	}
	return ""
}

// reading binds what a row says besides its value.
func (l *loader) reading(r *record, s *exposure.Site) survey.Reading {
	m := survey.Reading{
		ID: r.text("id"), HeightM: r.value("height"), Time: r.text("time"), Instrument: r.text("instrument"), Axis: r.text("axis"),
		ShareOf: r.text("share of"), Ports: int(r.value("ports")), FrequencyHz: r.value("frequency"), FromHz: r.value("from"), ToHz: r.value("to"),
		Detector: survey.Detector(r.text("detector")), Group: r.text("group"), Note: r.text("note"), Row: r.in,
	}
	if m.Detector == "" {
		m.Detector = survey.RMS
	}
	m.At = l.point(r, s)
	in := l.instrument(m.Instrument)
	if in == nil && r.has("instrument") && r.sound("instrument") {
		hint := didYouMean(m.Instrument, l.instrumentIDs())
		if len(l.survey.Instruments) == 0 {
			hint = "; write the instruments table"
		}
		l.fault(r, "instrument", "the instruments table has no %q%s", m.Instrument, hint)
	}
	switch hasF := r.has("frequency"); {
	case hasF && (r.has("from") || r.has("to")):
		l.fault(r, "frequency", "both a frequency and a band are given; keep one")
	case r.has("from") != r.has("to"):
		column := "to"
		if r.has("to") {
			column = "from"
		}
		l.fault(r, column, "the cell is blank, though the other end of the band is given; write both")
	case r.has("to") && r.sound("from", "to") && m.FromHz > m.ToHz:
		l.fault(r, "to", "the band ends before it begins; write from below to above")
	case !hasF && !r.has("to") && in != nil && in.Kind == survey.Selective && r.sound("frequency"):
		l.fault(r, "frequency", "the cell is blank, and a reading of the selective instrument %q needs it; write the frequency, or the band under \"from\" and \"to\"", in.ID)
	}
	if text := r.text("scale to maximum"); text != "" {
		scale, err := survey.ParseScale(text)
		if err != nil {
			l.fault(r, "scale to maximum", "%s", err)
		}
		m.Scale = scale
	}
	for _, id := range strings.FieldsFunc(r.text("antennas"), func(c rune) bool { return c == ',' || c == ';' }) {
		id = strings.TrimSpace(id)
		if id == "" {
			continue
		}
		var ids []string
		for k := range s.Sources {
			ids = append(ids, s.Sources[k].ID)
		}
		if !slices.Contains(ids, id) && len(ids) > 0 {
			hint := didYouMean(id, ids)
			if len(ids) > 16 && !strings.Contains(hint, "did you mean") {
				hint = "; write ids of the antennas table, parted by commas"
			}
			l.fault(r, "antennas", "the antennas table has no %q%s", id, hint)
			continue
		}
		m.Antennas = append(m.Antennas, id)
	}
	return m
}

// point is where a reading was taken: a place and the height above it, or a
// position of its own.
func (l *loader) point(r *record, s *exposure.Site) exposure.Place {
	own := r.has("x") || r.has("y") || r.has("latitude") || r.has("longitude")
	if id := r.text("place"); id != "" {
		if own || r.has("z") {
			l.fault(r, "place", "both a place and a position are given; keep one")
			return exposure.Place{}
		}
		for _, p := range s.Places {
			if p.ID == id {
				p.At.Z += r.value("height")
				p.From, p.To = 0, 0
				return p
			}
		}
		var ids []string
		for _, p := range s.Places {
			ids = append(ids, p.ID)
		}
		hint := didYouMean(id, ids)
		if len(ids) == 0 {
			hint = "; write the places table"
		}
		l.fault(r, "place", "the places table has no %q%s", id, hint)
		return exposure.Place{}
	}
	before := len(l.faults)
	xy := l.statedXY(r)
	switch {
	case len(l.faults) > before || !r.sound("place", "x", "y", "z", "latitude", "longitude"):
	case !xy.ok && !r.has("z"):
		l.fault(r, "place", "the cell is blank; write a place, or x, y and z")
	case !xy.ok:
		l.fault(r, "x", "the cell is blank; write x and y, latitude and longitude, or a place")
	case !r.has("z"):
		l.fault(r, "z", "the cell is blank; write the height above the datum, or a place")
	}
	return exposure.Place{At: exposure.Point{X: xy.v[0], Y: xy.v[1], Z: r.value("z") + r.value("height")}, WallLoss: 1}
}

// value takes the one value of a row; a row that names a log file has none.
func (l *loader) value(r *record, m *survey.Reading, log bool) {
	filled := ""
	for _, v := range readingValues {
		if !r.has(v.column) {
			continue
		}
		if filled != "" {
			l.fault(r, v.column, "%s and %s are both given; one reading is one figure: write two rows", filled, v.column)
			return
		}
		filled = v.column
		m.Quantity = v.quantity
		m.Value = r.value(v.column)
		if log {
			l.fault(r, v.column, "the row names a log file, whose samples count; leave the cell blank")
			return
		}
	}
	in := l.instrument(m.Instrument)
	switch {
	case m.Quantity == survey.PortLevel && in != nil && !in.HasAntennaFactor:
		l.fault(r, "port level", "the instrument %q has no antenna factor, without which a port level is no field; write it in the instruments table", in.ID)
	case m.Quantity == survey.ShareOfLimit && m.ShareOf == "":
		l.fault(r, "share of", "the cell is blank, and a share of the limit is of one class; write it")
	}
	if m.ShareOf != "" && len(l.classes) > 0 && !slices.Contains(l.classes, m.ShareOf) {
		l.fault(r, "share of", "the limit table has no class %q%s", m.ShareOf, didYouMean(m.ShareOf, l.classes))
	}
}

// groupOf checks that the rows of a group are of one spot and collects axes.
func (l *loader) groupOf(r *record, groups map[string]*record, axes map[string]map[string]*record) {
	g, axis := r.text("group"), r.text("axis")
	if axis != "" && g == "" {
		if r.sound("group", "axis") {
			l.fault(r, "group", "the cell is blank, and a reading of one axis needs the group whose three axes add up; write it")
		}
		return
	}
	if g == "" {
		return
	}
	if first := groups[g]; first == nil {
		groups[g] = r
	} else if first.text("place") != r.text("place") && r.sound("place") && first.sound("place") {
		l.fault(r, "place", "the group %q is at %q in row %d; a group is one spot", g, first.text("place"), first.row.number)
	}
	if axis == "" {
		return
	}
	key := fmt.Sprint(g, r.value("height"), r.value("z"), r.text("instrument"), r.value("frequency"), r.value("from"), r.value("to"))
	if axes[key] == nil {
		axes[key] = map[string]*record{}
	}
	if first := axes[key][axis]; first != nil {
		l.fault(r, "axis", "the axis %s of this spot is in row %d already; correct one, or give the other its own group or height", axis, first.row.number)
		return
	}
	axes[key][axis] = r
}

// axesOf finds spots of which an axis was not read.
func (l *loader) axesOf(axes map[string]map[string]*record) {
	for _, spot := range axes {
		if len(spot) == 3 {
			continue
		}
		var first *record
		missing := ""
		for _, a := range []string{"x", "y", "z"} {
			if r := spot[a]; r == nil {
				missing += " " + a
			} else if first == nil {
				first = r
			}
		}
		l.fault(first, "axis", "of the three axes of this spot these are missing:%s; write their rows, or leave the axis blank for an isotropic reading", missing)
	}
}

// warnSurvey adds what an assessor must know of instruments and readings.
func (l *loader) warnSurvey(s *exposure.Site) {
	if l.survey.Empty() {
		return
	}
	used := map[string]string{} // instrument to the latest time of use
	note := func(m *survey.Reading) {
		if in := l.instrument(m.Instrument); in != nil {
			day := m.Time
			if day == "" {
				day = s.About.SurveyDate
			}
			used[m.Instrument] = max(used[m.Instrument], day)
		}
	}
	for i := range l.survey.Readings {
		note(&l.survey.Readings[i])
	}
	for i := range l.survey.Series {
		note(&l.survey.Series[i].Reading)
	}
	for i := range l.survey.Instruments {
		in := &l.survey.Instruments[i]
		day, ok := used[in.ID]
		if !ok {
			continue
		}
		place := rowPlace(in.Row)
		switch {
		case in.CalibrationDue == "" && in.CalibratedOn == "":
			l.warn(place, "calibration due", "no date of calibration is given for %q", in.ID)
		case in.CalibrationDue != "" && day == "":
			l.warn(place, "calibration due", "whether %q was within its calibration cannot be told: write times in the readings, or the survey date in the site table", in.ID)
		case in.CalibrationDue != "" && survey.Overdue(in.CalibrationDue, day):
			l.warn(place, "calibration due", "the calibration of %q was due on %s, before its readings; they are not assessed as within", in.ID, in.CalibrationDue)
		}
		if len(in.Components) == 0 {
			l.warn(place, "", "the uncertainty table has no component of %q: its readings are given without uncertainty", in.ID)
		}
	}
	for i := range l.survey.Readings {
		m := &l.survey.Readings[i]
		in := l.instrument(m.Instrument)
		if in == nil {
			continue
		}
		lo, hi := m.FrequencyHz, m.FrequencyHz
		if m.ToHz > 0 {
			lo, hi = m.FromHz, m.ToHz
		}
		if hi > 0 && (lo < in.FromHz*(1-1e-9) || hi > in.ToHz*(1+1e-9)) {
			l.warn(rowPlace(m.Row), "frequency", "the reading %q lies outside the range of %q; it is not assessed as within", m.ID, in.ID)
		}
	}
}

// logFile returns the file that a row's series names, "" where it is only a name
// for rows of this table.
func (l *loader) logFile(r *record) string {
	name := r.text("series")
	switch strings.ToLower(path.Ext(name)) {
	case ".csv", ".txt", ".tsv", ".log", ".dat":
	default:
		return ""
	}
	if info, err := fs.Stat(l.fsys, name); !fs.ValidPath(name) || err != nil || info.IsDir() {
		l.fault(r, "series", "there is no file %q in the site folder; put the log there, or give the series a name without an ending", name)
		return name
	}
	return name
}

// openLog looks into a log's header: which quantity it holds.
func (l *loader) openLog(r *record, series *survey.Series, name string) {
	log := series.Samples.(*logFile)
	head, err := log.header()
	var faults Faults
	switch {
	case errors.As(err, &faults):
		l.faults = append(l.faults, faults...)
		return
	case err != nil:
		l.fault(r, "series", "the log %q cannot be read: %s", name, err)
		return
	}
	series.Reading.Quantity = head.quantity
	series.ZoneS = head.zoneS
	l.warnings = append(l.warnings, head.warnings...)
	in := l.instrument(series.Reading.Instrument)
	if head.quantity == survey.PortLevel && in != nil && !in.HasAntennaFactor {
		l.fault(r, "instrument", "the log holds port levels and the instrument %q has no antenna factor; write it in the instruments table", in.ID)
	}
	if head.quantity == survey.ShareOfLimit && series.Reading.ShareOf == "" {
		l.fault(r, "share of", "the cell is blank, and the log holds shares of the limit of one class; write it")
	}
}

// readCalibration reads factors by frequency: the columns frequency and factor.
func readCalibration(name string, data []byte, windows1252 bool) (survey.Calibration, Faults) {
	c := survey.Calibration{Name: name}
	g, faults := readCSV(name, "calibration", data, windows1252)
	if len(faults) > 0 {
		return c, faults
	}
	fault := func(row gridRow, i int, header, format string, args ...any) {
		faults = append(faults, g.fault(row, i, header, format, args...))
	}
	if len(g.rows) < 3 {
		return c, Faults{{File: name, Message: "a calibration by frequency has the header frequency [MHz],factor and two rows or more; a single factor goes into the instruments table"}}
	}
	header := g.rows[0]
	fAt, kAt := -1, -1
	var unit units.Unit
	for i, h := range header.cells {
		n, symbol, hasUnit := splitHeader(h)
		switch strings.ToLower(n) {
		case "frequency":
			u, ok := units.Lookup(symbol)
			if !hasUnit || !ok || u.Dimension != units.Frequency {
				fault(header, i, h, "the header names no unit of frequency; write frequency [MHz]")
				return c, faults
			}
			fAt, unit = i, u
		case "factor", "calibration factor":
			kAt = i
		}
	}
	if fAt < 0 || kAt < 0 {
		fault(header, -1, "", "the columns are not frequency [MHz] and factor; name them so")
		return c, faults
	}
	last := 0.0
	for _, row := range g.rows[1:] {
		f, err := units.ParseNumber(row.cell(fAt), g.decimalComma)
		if err != nil {
			fault(row, fAt, header.cells[fAt], "%s", err)
			continue
		}
		k, err := units.ParseNumber(row.cell(kAt), g.decimalComma)
		switch hz := unit.ToSI(f); {
		case err != nil:
			fault(row, kAt, header.cells[kAt], "%s", err)
		case !(k > 0):
			fault(row, kAt, header.cells[kAt], "%q is not above 0; write what the reading is multiplied by", row.cell(kAt))
		case !(hz > last):
			fault(row, fAt, header.cells[fAt], "the frequencies do not rise; sort the rows and keep one for each")
		default:
			c.Points = append(c.Points, survey.CalibrationPoint{FrequencyHz: hz, Factor: k})
			last = hz
		}
	}
	return c, faults
}
