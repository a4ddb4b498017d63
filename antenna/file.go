package antenna

import (
	"bytes"
	"fmt"
	"io"
	"math"

	"golang.org/x/text/encoding/unicode"
	"golang.org/x/text/transform"
)

// VerticalSense says which way the positive angles of a vertical cut point.
type VerticalSense string

// The senses a vertical cut may have.
const (
	SenseUnknown VerticalSense = ""
	SenseUp      VerticalSense = "up"
	SenseDown    VerticalSense = "down"
)

// ReadOptions are what a reader cannot learn from the pattern file itself.
type ReadOptions struct {
	// FrequencyHz chooses among the patterns of a file that holds several, and
	// is held against the file's range. 0 = not known: then a file of one
	// pattern is taken as it is, and one of several is refused.
	FrequencyHz float64
	// VerticalSense is what the user says of the file's vertical cut. It stands
	// over what the file says.
	VerticalSense VerticalSense
}

// File is a pattern as read from a file.
type File struct {
	Pattern     Pattern
	Format      string // "plain CSV, two cuts"
	Description string // maker, model and pattern as the file has them

	PeakGain Gain // where HasGain
	HasGain  bool

	// FrequencyHz is the range the file says it holds for, and
	// PatternFrequencyHz the frequency of the pattern chosen; 0 = not said.
	FrequencyHz        Interval
	PatternFrequencyHz float64

	Polarization string // as the file has it
	// Envelope marks a file that says it is an envelope, whose integral is no
	// test of its gain.
	Envelope bool

	// StatedTiltRad is the electrical tilt the file states, down positive.
	StatedTiltRad  float64
	HasStatedTilt  bool
	PeakTiltRad    float64 // of the vertical cut's peak, down positive
	PeakAzimuthRad float64 // of the horizontal cut's peak

	// Horizontal and Vertical are the cuts for drawing and for widths; a full
	// sphere gives its cuts through the peak.
	Horizontal, Vertical *Cut

	Forgiven []string // where the file breaks its format's rules without harm
	Warnings []string
}

// ReadError is a fault in a pattern file.
type ReadError struct {
	Line    int    // counted from one; 0 = the file as a whole
	Text    string // the offending text, "" if it is what is not there
	Message string // what is wrong, and what to do
}

func (e *ReadError) Error() string {
	s := e.Message
	if e.Text != "" {
		s = fmt.Sprintf("%q %s", clipped(e.Text), s)
	}
	if e.Line > 0 {
		s = fmt.Sprintf("line %d: %s", e.Line, s)
	}
	return s
}

// clipped keeps a message on one line of the screen.
func clipped(s string) string {
	const most = 60
	r := []rune(s)
	if len(r) > most {
		return string(r[:most]) + "..."
	}
	return s
}

func faultAt(line int, text, format string, a ...any) error {
	return &ReadError{line, text, fmt.Sprintf(format, a...)}
}

// mostBytes bounds the size of a pattern file: a sphere at 0.5 deg with three
// columns stays well below.
const mostBytes = 64 << 20

// Read reads a pattern file, telling its format by its content: TIA-804-B / NSMA
// WG16.99.050 text, NGMN BASTA pattern JSON, or a plain CSV of two cuts or of a
// full sphere. Every error is a *ReadError or comes from the reader.
func Read(r io.Reader, o ReadOptions) (*File, error) {
	data, err := io.ReadAll(io.LimitReader(r, mostBytes+1))
	if err != nil {
		return nil, err
	}
	if len(data) > mostBytes {
		return nil, faultAt(0, "", "the file is larger than %d MB; no pattern needs that", mostBytes>>20)
	}
	data, _, err = transform.Bytes(unicode.BOMOverride(unicode.UTF8.NewDecoder()), data)
	if err != nil {
		return nil, faultAt(0, "", "the text cannot be decoded: %v", err)
	}
	f, err := parse(data, o)
	if err != nil {
		return nil, err
	}
	if f.HasGain && !f.Envelope {
		if err := CheckDirectivity(f.Pattern, f.PeakGain, 0); err != nil {
			f.warn("%v", err)
		}
	}
	return f, nil
}

// parse reads a decoded file in the format that its content shows.
func parse(data []byte, o ReadOptions) (*File, error) {
	start := bytes.TrimSpace(data)
	switch {
	case len(start) == 0:
		return nil, faultAt(0, "", "the file is empty")
	case start[0] == '{' || start[0] == '[':
		return readBASTA(data, o)
	case looksLikeNSMA(start):
		return readNSMA(data, o)
	}
	return readCSV(data, o)
}

// tiltTolerance is how far a stated electrical tilt may lie from the peak of
// the vertical cut.
const tiltTolerance = 1 * math.Pi / 180

// CheckElectricalTilt holds the electrical tilt of a row, in rad, down positive,
// against the file: the file's own tilt stands, the row's only describes it, and
// more than 1 deg between the two is a fault (a choice of this project).
func (f *File) CheckElectricalTilt(rad float64) error {
	if math.Abs(rad-f.PeakTiltRad) <= tiltTolerance+1e-9 {
		return nil
	}
	return fmt.Errorf("the pattern file's vertical cut peaks at %.1f deg of tilt, not %.1f; the file's own tilt stands and is not turned: use the file for this tilt",
		degrees(f.PeakTiltRad), degrees(rad))
}

// CheckFrequency holds a frequency in Hz against the range the file says it
// holds for.
func (f *File) CheckFrequency(hz float64) error {
	if f.FrequencyHz.Lo == 0 || f.FrequencyHz.Contains(hz) {
		return nil
	}
	return fmt.Errorf("%.6g MHz is outside the pattern file's %.6g to %.6g MHz", hz/1e6, f.FrequencyHz.Lo/1e6, f.FrequencyHz.Hi/1e6)
}

func (f *File) forgive(format string, a ...any) {
	f.Forgiven = append(f.Forgiven, fmt.Sprintf(format, a...))
}

func (f *File) warn(format string, a ...any) {
	f.Warnings = append(f.Warnings, fmt.Sprintf(format, a...))
}
