package antenna

import (
	"bytes"
	"encoding/csv"
	"errors"
	"io"
	"math"
	"strconv"
	"strings"
)

// csvRow is one row of a plain CSV with its line.
type csvRow struct {
	line  int
	cells []string
}

// readCSV reads a plain CSV: the columns "cut", "angle [deg]" and "loss [dB]" or
// "gain [dBi]" for two cuts, or "azimuth [deg]", "elevation [deg]" and "gain
// [dBi]" or "loss [dB]" for a full sphere. Azimuths and horizontal angles count
// clockwise from boresight seen from above. Leading "#" lines may say
// "vertical cut: up" or "down", "frequency [MHz]: 790 862" and
// "electrical tilt [deg]: 4".
func readCSV(data []byte, o ReadOptions) (*File, error) {
	f := &File{}
	rows, comma, sense, err := f.csvRows(data)
	if err != nil {
		return nil, err
	}
	if len(rows) < 2 {
		return nil, faultAt(0, "", "no rows of figures; a pattern has the columns cut, angle [deg] and loss [dB] or gain [dBi]")
	}
	columns, err := csvHeader(rows[0])
	if err != nil {
		return nil, err
	}
	t := csvTable{f, rows[1:], columns, len(rows[0].cells), comma != ','}
	if err := f.admit(o); err != nil {
		return nil, err
	}
	if _, ok := columns["azimuth"]; ok {
		return f, t.sphere()
	}
	return f, t.cuts(sense, o)
}

// csvRows splits the text, taking the separator from the first row that is not
// a comment, and the leading comments as remarks.
func (f *File) csvRows(data []byte) (rows []csvRow, comma rune, sense VerticalSense, err error) {
	comma = ','
	line := 0
	for rest := data; len(rest) > 0; {
		var one []byte
		one, rest, _ = bytes.Cut(rest, []byte("\n"))
		line++
		text := strings.TrimSpace(string(one))
		if text == "" {
			continue
		}
		if text[0] != '#' {
			best := 0
			for _, c := range ",;\t" {
				if n := strings.Count(text, string(c)); n > best {
					best, comma = n, c
				}
			}
			break
		}
		if sense, err = f.csvRemark(line, text, sense); err != nil {
			return nil, 0, "", err
		}
	}
	r := csv.NewReader(bytes.NewReader(data))
	r.Comma, r.Comment = comma, '#'
	r.FieldsPerRecord = -1
	r.TrimLeadingSpace = comma != '\t'
	for {
		cells, err := r.Read()
		if err == io.EOF {
			return rows, comma, sense, nil
		}
		if err != nil {
			var pe *csv.ParseError
			if errors.As(err, &pe) {
				return nil, 0, "", faultAt(pe.Line, "", "%v", pe.Err)
			}
			return nil, 0, "", err
		}
		n, _ := r.FieldPos(0)
		blank := true
		for i := range cells {
			cells[i] = strings.TrimSpace(cells[i])
			blank = blank && cells[i] == ""
		}
		if !blank {
			rows = append(rows, csvRow{n, cells})
		}
	}
}

// csvRemark reads one leading comment; what it does not know is a remark.
func (f *File) csvRemark(line int, text string, sense VerticalSense) (VerticalSense, error) {
	key, value, ok := strings.Cut(strings.TrimLeft(text, "# "), ":")
	if !ok {
		return sense, nil
	}
	value = strings.TrimRight(strings.TrimSpace(value), ",;\t ")
	switch strings.ToLower(strings.TrimSpace(key)) {
	case "vertical cut":
		switch s := VerticalSense(strings.ToLower(value)); s {
		case SenseUp, SenseDown:
			return s, nil
		}
		return "", faultAt(line, value, "is not a sense of the vertical cut; write up or down")
	case "frequency [mhz]":
		v := strings.Fields(strings.NewReplacer(",", " ", ";", " ").Replace(value))
		if len(v) == 0 || len(v) > 2 {
			return "", faultAt(line, value, "is not a frequency; write one or two numbers in MHz, such as 790 862")
		}
		for i, s := range v {
			x, err := strconv.ParseFloat(s, 64)
			if err != nil || !(x > 0 && x < 1e7) {
				return "", faultAt(line, s, "is not a frequency in MHz")
			}
			if i == 0 {
				f.FrequencyHz.Lo = x * 1e6
			}
			f.FrequencyHz.Hi = x * 1e6
		}
		if f.FrequencyHz.Hi < f.FrequencyHz.Lo {
			return "", faultAt(line, value, "runs from high to low; write the lower frequency first")
		}
	case "electrical tilt [deg]":
		x, err := strconv.ParseFloat(value, 64)
		if err != nil || math.Abs(x) >= 90 || math.IsNaN(x) {
			return "", faultAt(line, value, "is not a tilt in deg")
		}
		f.StatedTiltRad, f.HasStatedTilt = radians(x), true
	}
	return sense, nil
}

// admit refuses a frequency outside the file's range.
func (f *File) admit(o ReadOptions) error {
	if o.FrequencyHz == 0 {
		return nil
	}
	if err := f.CheckFrequency(o.FrequencyHz); err != nil {
		return faultAt(0, "", "%v", err)
	}
	return nil
}

// csvHeader finds the columns of a pattern.
func csvHeader(row csvRow) (map[string]int, error) {
	columns := map[string]int{}
	units := map[string]string{"cut": "", "angle": "deg", "azimuth": "deg", "elevation": "deg", "loss": "db", "gain": "dbi"}
	for i, cell := range row.cells {
		name, unit := strings.ToLower(cell), ""
		if at := strings.IndexByte(name, '['); at >= 0 && strings.HasSuffix(name, "]") {
			unit = strings.TrimSpace(name[at+1 : len(name)-1])
			name = strings.TrimSpace(name[:at])
		}
		if name == "note" || strings.HasPrefix(name, "note ") || name == "" {
			continue
		}
		want, known := units[name]
		if !known {
			return nil, faultAt(row.line, cell, "is not a column of a pattern; known are cut, angle [deg], azimuth [deg], elevation [deg], loss [dB], gain [dBi], note")
		}
		if unit != want && !(name == "gain" && unit == "dbd") {
			return nil, faultAt(row.line, cell, "does not name its unit; write %s", map[string]string{
				"cut": "cut", "angle": "angle [deg]", "azimuth": "azimuth [deg]", "elevation": "elevation [deg]", "loss": "loss [dB]", "gain": "gain [dBi]"}[name])
		}
		if _, twice := columns[name]; twice {
			return nil, faultAt(row.line, cell, "is given twice")
		}
		columns[name] = i
		if unit == "dbd" {
			columns["dbd"] = i
		}
	}
	has := func(n string) bool { _, ok := columns[n]; return ok }
	switch {
	case has("loss") == has("gain"):
		return nil, faultAt(row.line, "", "one of the columns loss [dB] and gain [dBi] is needed, not both")
	case has("azimuth") && has("elevation") && !has("cut") && !has("angle"):
	case has("cut") && has("angle") && !has("azimuth") && !has("elevation"):
	default:
		return nil, faultAt(row.line, "", "the columns of a pattern are cut and angle [deg], or azimuth [deg] and elevation [deg]; with loss [dB] or gain [dBi]")
	}
	return columns, nil
}

type csvTable struct {
	f       *File
	rows    []csvRow
	columns map[string]int
	width   int
	decimal bool // a decimal comma may stand in a number
}

// number reads a column of a row.
func (t csvTable) number(r csvRow, name string) (float64, error) {
	i := t.columns[name]
	if i >= len(r.cells) || r.cells[i] == "" {
		return 0, faultAt(r.line, "", "the column %s is blank; every point needs a number", name)
	}
	text := r.cells[i]
	s := strings.ReplaceAll(text, "\u2212", "-")
	if s != text {
		t.f.forgiveOnce("typographic minus signs read as minus")
	}
	if t.decimal && strings.Count(s, ",") == 1 && !strings.Contains(s, ".") {
		s = strings.Replace(s, ",", ".", 1)
	}
	v, err := strconv.ParseFloat(s, 64)
	if err != nil || math.IsNaN(v) || math.IsInf(v, 0) || strings.ContainsAny(s, "xX_") {
		return 0, faultAt(r.line, text, "is not a number in the column %s; write digits only, such as -12.5", name)
	}
	return v, nil
}

func (f *File) forgiveOnce(text string) {
	for _, s := range f.Forgiven {
		if s == text {
			return
		}
	}
	f.Forgiven = append(f.Forgiven, text)
}

// value reads loss or gain of a row as a loss: a gain enters negated, in dBi.
func (t csvTable) value(r csvRow) (float64, error) {
	if _, ok := t.columns["loss"]; ok {
		return t.number(r, "loss")
	}
	v, err := t.number(r, "gain")
	if _, ok := t.columns["dbd"]; ok {
		v += DipoleGainDB
	}
	return -v, err
}

// setGain takes the peak gain of a column of gains.
func (t csvTable) setGain(leastLoss float64) {
	if _, ok := t.columns["gain"]; ok {
		t.f.PeakGain, t.f.HasGain = GainFromDBi(-leastLoss), true
	}
}

func (t csvTable) cuts(sense VerticalSense, o ReadOptions) error {
	var h, v []point
	least := [2]float64{math.Inf(1), math.Inf(1)}
	for _, r := range t.rows {
		if err := t.fits(r); err != nil {
			return err
		}
		name := ""
		if i := t.columns["cut"]; i < len(r.cells) {
			name = r.cells[i]
		}
		deg, err := t.number(r, "angle")
		if err != nil {
			return err
		}
		db, err := t.value(r)
		if err != nil {
			return err
		}
		p := point{deg, db, r.line}
		switch strings.ToLower(name) {
		case "horizontal", "h", "az", "azimuth":
			h = append(h, p)
			least[0] = min(least[0], db)
		case "vertical", "v", "el", "elevation":
			v = append(v, p)
			least[1] = min(least[1], db)
		default:
			return faultAt(r.line, name, "is not a cut; write horizontal or vertical")
		}
	}
	t.f.Format = "plain CSV, two cuts"
	hc, err := t.f.cutOf("horizontal", false, h)
	if err != nil {
		return err
	}
	vc, err := t.f.cutOf("vertical", true, v)
	if err != nil {
		return err
	}
	t.setGain(min(least[0], least[1]))
	if d := math.Abs(least[0] - least[1]); d > cutsDB {
		t.f.warn("the peaks of the two cuts lie %.1f dB apart; each is taken from its own peak", d)
	}
	return t.f.useCuts(hc, vc, sense, o.VerticalSense, v[0].line)
}

// fits refuses a row longer than the header, trailing blanks aside.
func (t csvTable) fits(r csvRow) error {
	for i := t.width; i < len(r.cells); i++ {
		if r.cells[i] != "" {
			return faultAt(r.line, r.cells[i], "stands beyond the last column of the header")
		}
	}
	return nil
}
