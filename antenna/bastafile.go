package antenna

import (
	"bytes"
	"encoding/json"
	"errors"
	"math"
	"strings"
)

// The field names of the pattern JSON are taken from open descriptions of it,
// second-hand; the schema itself was not at hand. What is not read here is
// passed over.

// bastaQuantity is a value with its unit.
type bastaQuantity struct {
	Value json.RawMessage `json:"value"`
	Unit  string          `json:"unit"`
}

// bastaBand is a range with its unit.
type bastaBand struct {
	Lower float64 `json:"lower"`
	Upper float64 `json:"upper"`
	Unit  string  `json:"unit"`
}

// bastaText is a file before it is judged.
type bastaText struct {
	f          *File
	data       []byte
	fields     map[string]json.RawMessage
	lines      map[string]int
	rows       [][]float64
	rowLines   []int
	hasDataSet bool
}

// readBASTA reads the NGMN BASTA pattern JSON of one full sphere.
func readBASTA(data []byte, o ReadOptions) (*File, error) {
	b := &bastaText{f: &File{Format: "NGMN BASTA pattern JSON"}, data: data, fields: map[string]json.RawMessage{}, lines: map[string]int{}}
	if err := b.scan(); err != nil {
		return nil, err
	}
	if err := b.header(o); err != nil {
		return nil, err
	}
	d, err := b.directions()
	if err != nil {
		return nil, err
	}
	if err := b.f.useSphere(d); err != nil {
		return nil, err
	}
	if o.VerticalSense != SenseUnknown {
		b.f.warn("the column \"vertical cut\" has no bearing on this file: its coordinate system says which way is up")
	}
	return b.f, nil
}

// lineAt returns the line of a byte offset.
func (b *bastaText) lineAt(offset int64) int {
	offset = max(0, min(offset, int64(len(b.data))))
	return 1 + bytes.Count(b.data[:offset], []byte("\n"))
}

// fault turns an error of the JSON decoder into one with a line.
func (b *bastaText) fault(d *json.Decoder, err error) error {
	var syntax *json.SyntaxError
	at := d.InputOffset()
	if errors.As(err, &syntax) {
		at = max(at, syntax.Offset)
	}
	return faultAt(b.lineAt(at), "", "not readable as JSON: %v", err)
}

// scan reads the outermost object, the data set row by row so that each keeps
// its line.
func (b *bastaText) scan() error {
	d := json.NewDecoder(bytes.NewReader(b.data))
	open, err := d.Token()
	if err != nil {
		return b.fault(d, err)
	}
	if open == json.Delim('[') {
		return faultAt(b.lineAt(d.InputOffset()), "", "the file holds a list of patterns; give one pattern to a file")
	}
	if open != json.Delim('{') {
		return faultAt(1, "", "the file is not a JSON object")
	}
	for d.More() {
		k, err := d.Token()
		if err != nil {
			return b.fault(d, err)
		}
		key, ok := k.(string)
		if !ok {
			return faultAt(b.lineAt(d.InputOffset()), "", "a field without a name")
		}
		line := b.lineAt(d.InputOffset())
		if _, twice := b.lines[key]; twice {
			return faultAt(line, key, "is given twice")
		}
		b.lines[key] = line
		if key == "Data_Set" {
			if err := b.scanRows(d); err != nil {
				return err
			}
			continue
		}
		var raw json.RawMessage
		if err := d.Decode(&raw); err != nil {
			return b.fault(d, err)
		}
		b.fields[key] = raw
	}
	if _, err := d.Token(); err != nil {
		return b.fault(d, err)
	}
	if !b.hasDataSet {
		return faultAt(0, "", "no Data_Set: the file holds no pattern")
	}
	return nil
}

func (b *bastaText) scanRows(d *json.Decoder) error {
	b.hasDataSet = true
	if t, err := d.Token(); err != nil {
		return b.fault(d, err)
	} else if t != json.Delim('[') {
		return faultAt(b.lineAt(d.InputOffset()), "", "Data_Set is not a list of rows")
	}
	line, from := b.lineAt(d.InputOffset()), d.InputOffset()
	for d.More() {
		var row []*float64
		err := d.Decode(&row)
		at := d.InputOffset()
		line += bytes.Count(b.data[from:at], []byte("\n"))
		from = at
		if err != nil {
			var kind *json.UnmarshalTypeError
			if errors.As(err, &kind) {
				return faultAt(line, "", "a row of Data_Set is not a list of numbers (%s found)", kind.Value)
			}
			return b.fault(d, err)
		}
		if len(b.rows) >= mostSamples+4096 {
			return faultAt(line, "", "Data_Set has more than %d rows", mostSamples+4096)
		}
		v := make([]float64, len(row))
		for i, x := range row {
			if x == nil {
				return faultAt(line, "null", "is not a number in Data_Set")
			}
			v[i] = *x
		}
		b.rows, b.rowLines = append(b.rows, v), append(b.rowLines, line)
	}
	_, err := d.Token()
	if err != nil {
		return b.fault(d, err)
	}
	return nil
}

// field decodes one field; absent fields leave v as it is.
func (b *bastaText) field(name string, v any) (bool, error) {
	raw, ok := b.fields[name]
	if !ok || string(bytes.TrimSpace(raw)) == "null" {
		return false, nil
	}
	if err := json.Unmarshal(raw, v); err != nil {
		return false, faultAt(b.lines[name], string(raw), "is not readable as %s", name)
	}
	return true, nil
}

var bastaHz = map[string]float64{"hz": 1, "khz": 1e3, "mhz": 1e6, "ghz": 1e9, "thz": 1e12}

func (b *bastaText) hz(name, unit string) (float64, error) {
	f, ok := bastaHz[strings.ToLower(strings.TrimSpace(unit))]
	if !ok {
		return 0, faultAt(b.lines[name], unit, "is not a unit of frequency; known are Hz, kHz, MHz, GHz and THz")
	}
	return f, nil
}

func (b *bastaText) header(o ReadOptions) error {
	f := b.f
	var words []string
	for _, name := range []string{"Supplier", "Antenna_Model", "Pattern_Name", "Beam_ID"} {
		var s string
		if ok, _ := b.field(name, &s); ok && s != "" {
			words = append(words, s)
		}
	}
	f.Description = strings.Join(words, " ")
	var s string
	if ok, _ := b.field("Nominal_Polarization", &s); ok {
		f.Polarization = s
	}
	s = ""
	if ok, _ := b.field("Pattern_Type", &s); ok && strings.Contains(strings.ToLower(s), "envelope") {
		f.Envelope = true
	}
	var q bastaQuantity
	if ok, err := b.field("Frequency", &q); err != nil {
		return err
	} else if ok {
		unit, err := b.hz("Frequency", q.Unit)
		if err != nil {
			return err
		}
		var v float64
		if json.Unmarshal(q.Value, &v) != nil || !(v > 0 && v*unit < 1e14) {
			return faultAt(b.lines["Frequency"], string(q.Value), "is not a frequency")
		}
		f.PatternFrequencyHz = v * unit
		f.FrequencyHz = Interval{v * unit, v * unit}
	}
	var band bastaBand
	if ok, err := b.field("Frequency_Range", &band); err != nil {
		return err
	} else if ok {
		unit, err := b.hz("Frequency_Range", band.Unit)
		if err != nil {
			return err
		}
		if !(band.Lower > 0 && band.Lower <= band.Upper && band.Upper*unit < 1e14) {
			return faultAt(b.lines["Frequency_Range"], "", "the frequency range does not run from low to high")
		}
		f.FrequencyHz = Interval{band.Lower * unit, band.Upper * unit}
	} else if f.FrequencyHz.Lo > 0 {
		f.forgive("no Frequency_Range: the file does not say for which frequencies its pattern holds")
		if o.FrequencyHz != 0 && math.Abs(o.FrequencyHz/f.PatternFrequencyHz-1) > 0.1 {
			f.warn("the pattern is that of %.6g MHz", f.PatternFrequencyHz/1e6)
		}
		f.FrequencyHz = Interval{}
	}
	if err := f.admit(o); err != nil {
		return err
	}
	q = bastaQuantity{}
	if ok, err := b.field("Gain", &q); err != nil {
		return err
	} else if ok {
		var v float64
		if json.Unmarshal(q.Value, &v) != nil || math.Abs(v) > 90 {
			return faultAt(b.lines["Gain"], string(q.Value), "is not a gain")
		}
		switch strings.ToLower(strings.TrimSpace(q.Unit)) {
		case "dbi":
			f.PeakGain = GainFromDBi(v)
		case "dbd":
			f.PeakGain = GainFromDBd(v)
		default:
			return faultAt(b.lines["Gain"], q.Unit, "is not a unit of gain; known are dBi and dBd")
		}
		f.HasGain = true
	}
	for _, name := range []string{"Theta_Electrical_Tilt", "Theta_Tilt"} {
		var v float64
		if ok, err := b.field(name, &v); err != nil {
			f.forgive("line %d: %s is not a number and is passed over", b.lines[name], name)
		} else if ok && math.Abs(v) < 90 {
			f.StatedTiltRad, f.HasStatedTilt = radians(v), true
		}
	}
	return nil
}

// turn returns the azimuth (clockwise) and the elevation (upward) in deg of a
// direction in one of the four coordinate systems.
func bastaTurn(system string) (func(theta, phi float64) (az, el float64), bool) {
	turns := map[string]func(theta, phi float64) (az, el float64){
		// From the zenith, counter-clockwise.
		"SPCS_Polar": func(theta, phi float64) (float64, float64) { return -phi, 90 - theta },
		// From the horizon downward, clockwise.
		"SPCS_CW": func(theta, phi float64) (float64, float64) { return phi, -theta },
		// From the horizon downward, counter-clockwise.
		"SPCS_CCW": func(theta, phi float64) (float64, float64) { return -phi, -theta },
		// From the nadir, clockwise.
		"SPCS_Geo": func(theta, phi float64) (float64, float64) { return phi, theta - 90 },
	}
	turn, ok := turns[system]
	return turn, ok
}

// directions lists the data set in this package's frame.
func (b *bastaText) directions() ([]direction, error) {
	var system string
	if ok, err := b.field("Coordinate_System", &system); err != nil {
		return nil, err
	} else if !ok {
		return nil, faultAt(0, "", "Coordinate_System is missing: which way is up cannot be guessed")
	}
	turn, ok := bastaTurn(system)
	if !ok {
		return nil, faultAt(b.lines["Coordinate_System"], system, "is not a coordinate system; known are SPCS_Polar, SPCS_CW, SPCS_CCW and SPCS_Geo")
	}
	column, width, err := b.columns()
	if err != nil {
		return nil, err
	}
	thetas, phis, sampled, err := b.sampling()
	if err != nil {
		return nil, err
	}
	if sampled {
		if n := len(thetas) * len(phis); n != len(b.rows) {
			return nil, faultAt(b.lines["Data_Set"], "", "the sampling announces %d x %d = %d rows, %d are given", len(thetas), len(phis), n, len(b.rows))
		}
	} else if _, ok := column["Theta"]; !ok {
		return nil, faultAt(0, "", "neither Theta_Sampling and Phi_Sampling nor columns Theta and Phi: the directions are missing")
	}
	d := make([]direction, len(b.rows))
	for i, row := range b.rows {
		if len(row) != width {
			return nil, faultAt(b.rowLines[i], "", "a row of Data_Set has %d values; the row structure has %d", len(row), width)
		}
		var theta, phi float64
		if sampled {
			theta, phi = thetas[i/len(phis)], phis[i%len(phis)]
		} else {
			theta, phi = row[column["Theta"]], row[column["Phi"]]
		}
		loss, err := b.loss(row, column, b.rowLines[i])
		if err != nil {
			return nil, err
		}
		az, el := turn(theta, phi)
		d[i] = direction{az, el, loss, b.rowLines[i]}
	}
	return d, nil
}

// columns reads the row structure.
func (b *bastaText) columns() (map[string]int, int, error) {
	var names []string
	if ok, err := b.field("Data_Set_Row_Structure", &names); err != nil {
		return nil, 0, err
	} else if !ok {
		return nil, 0, faultAt(0, "", "Data_Set_Row_Structure is missing: the columns of Data_Set cannot be guessed")
	}
	column := map[string]int{}
	for i, n := range names {
		if _, twice := column[n]; twice {
			return nil, 0, faultAt(b.lines["Data_Set_Row_Structure"], n, "is given twice")
		}
		column[n] = i
	}
	_, total := column["MagAttenuationTP"]
	_, co := column["MagAttenuationCo"]
	if !total && !co {
		return nil, 0, faultAt(b.lines["Data_Set_Row_Structure"], "", "neither MagAttenuationTP nor MagAttenuationCo is among the columns")
	}
	_, theta := column["Theta"]
	_, phi := column["Phi"]
	if theta != phi {
		return nil, 0, faultAt(b.lines["Data_Set_Row_Structure"], "", "Theta and Phi go together")
	}
	if _, cross := column["MagAttenuationCr"]; !total && !cross {
		b.f.warn("the file has the co-polar part only; the cross-polar part is not in the pattern")
	}
	return column, len(names), nil
}

// loss returns the loss of a row: total power, or the sum of co and cross.
func (b *bastaText) loss(row []float64, column map[string]int, line int) (float64, error) {
	get := func(name string) (float64, bool, error) {
		i, ok := column[name]
		if !ok {
			return 0, false, nil
		}
		if row[i] < -repeatDB {
			return 0, false, faultAt(line, "", "%s is %g dB; an attenuation below the stated gain is zero or more", name, row[i])
		}
		return row[i], true, nil
	}
	if tp, ok, err := get("MagAttenuationTP"); ok || err != nil {
		return tp, err
	}
	co, _, err := get("MagAttenuationCo")
	if err != nil {
		return 0, err
	}
	cr, ok, err := get("MagAttenuationCr")
	if err != nil || !ok {
		return co, err
	}
	return lossOfRatio(ratioOfLoss(min(co, maxLossDB)) + ratioOfLoss(min(cr, maxLossDB))), nil
}

// sampling expands the sampling triples, theta the outer loop.
func (b *bastaText) sampling() (thetas, phis []float64, ok bool, err error) {
	var t, p []float64
	hasT, err := b.field("Theta_Sampling", &t)
	if err != nil {
		return nil, nil, false, err
	}
	hasP, err := b.field("Phi_Sampling", &p)
	if err != nil || !hasT && !hasP {
		return nil, nil, false, err
	}
	if hasT != hasP {
		return nil, nil, false, faultAt(0, "", "Theta_Sampling and Phi_Sampling go together")
	}
	if thetas, err = b.expand("Theta_Sampling", t); err != nil {
		return nil, nil, false, err
	}
	phis, err = b.expand("Phi_Sampling", p)
	return thetas, phis, true, err
}

func (b *bastaText) expand(name string, t []float64) ([]float64, error) {
	if len(t) != 3 || !(t[1] > 0) || t[2] < t[0] || math.Abs(t[0]) > 360 || math.Abs(t[2]) > 360 {
		return nil, faultAt(b.lines[name], "", "%s is not [start, step, stop] with a rising step", name)
	}
	n := math.Round((t[2] - t[0]) / t[1])
	if n > 4096 || math.Abs(t[0]+n*t[1]-t[2]) > 1e-6*t[1]*(n+1) {
		return nil, faultAt(b.lines[name], "", "%s: the step does not lead from start to stop", name)
	}
	out := make([]float64, int(n)+1)
	for i := range out {
		out[i] = t[0] + float64(i)*t[1]
	}
	return out, nil
}
