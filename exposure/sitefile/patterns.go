package sitefile

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path"
	"path/filepath"
	"strings"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
	"example.org/standclear/exposure/units"
)

// gainTolerance is how far a stated gain may lie from the one that pattern or
// file fixes, in dB.
const gainTolerance = 0.05

// pattern sets a source's pattern and peak gain.
func (l *loader) pattern(r *record, s *exposure.Source) {
	name := r.text("pattern")
	s.PatternName = name
	if name == "" {
		return
	}
	for _, builtin := range builtinPatterns {
		if strings.EqualFold(builtin, name) {
			s.PatternKind = exposure.PatternKind(builtin)
			l.builtin(r, s)
			return
		}
	}
	s.PatternKind = exposure.PatternFile
	l.filePattern(r, s)
}

// need returns the value of a column that the row's pattern cannot do without.
func (l *loader) need(r *record, column string) (float64, bool) {
	v, ok := r.number(column)
	if !ok && r.sound(column) {
		c, _ := antennasTable.Column(column)
		l.fault(r, column, "the cell is blank, and the pattern %q needs it; write %s", r.text("pattern"), numberWanted(&c))
	}
	return v, ok
}

// settleGain takes the peak gain from the row, or from what fixes it (0 = nothing
// does), and holds the two against each other.
func (l *loader) settleGain(r *record, s *exposure.Source, fixed antenna.Gain, by string) {
	v, ok := r.number("gain")
	switch {
	case !r.sound("gain"):
	case ok && fixed > 0 && math.Abs(v-fixed.DBi()) > gainTolerance:
		u := r.t.units[r.t.index["gain"]]
		l.fault(r, "gain", "%q contradicts the %.2f %s of %s; correct it, or leave it blank", r.in.Cell("gain"), u.FromSI(fixed.DBi()), u.Symbol, by)
	case fixed > 0:
		s.Gain = fixed
	case ok:
		s.Gain = antenna.GainFromDBi(v)
	default:
		l.fault(r, "gain", "the cell is blank, and the pattern %q does not fix it; write the peak gain", s.PatternName)
	}
}

// patternKey tells readings of one file apart: it may hold several frequencies.
type patternKey struct {
	file  string
	hz    float64
	sense antenna.VerticalSense
}

// patternFile is a pattern file as read, or why it cannot be.
type patternFile struct {
	file  *antenna.File
	fault string // of the row that asks for it, "" where the file itself has the fault
	bad   bool
}

// filePattern reads the pattern file that a row names.
func (l *loader) filePattern(r *record, s *exposure.Source) {
	if !r.sound("frequency", "vertical cut") {
		return
	}
	key := patternKey{s.PatternName, s.FrequencyHz, antenna.VerticalSense(r.text("vertical cut"))}
	f, ok := l.patterns[key]
	if !ok {
		f = l.readPattern(key)
		l.patterns[key] = f
	}
	switch {
	case f.fault != "":
		l.fault(r, "pattern", "%s", f.fault)
		return
	case f.bad:
		return
	}
	fixed := antenna.Gain(0)
	if f.file.HasGain {
		fixed = f.file.PeakGain
	}
	l.settleGain(r, s, fixed, s.PatternName)
	if r.has("electrical tilt") && r.sound("electrical tilt") {
		if err := f.file.CheckElectricalTilt(s.ElectricalTiltRad); err != nil {
			l.fault(r, "electrical tilt", "%s", err)
			return
		}
	}
	// The file's own tilt stands; the near-field methods need to know it.
	if s.Pattern = f.file.Pattern; r.cell("electrical tilt").state == assumed {
		s.ElectricalTiltRad = f.file.PeakTiltRad
	}
	if s.HorizontalBeamwidthRad == 0 && f.file.Horizontal != nil {
		s.HorizontalBeamwidthRad, _ = f.file.Horizontal.Beamwidth(3)
	}
	if s.VerticalBeamwidthRad == 0 && f.file.Vertical != nil {
		s.VerticalBeamwidthRad, _ = f.file.Vertical.Beamwidth(3)
	}
}

// readPattern finds and reads a pattern file.
func (l *loader) readPattern(key patternKey) *patternFile {
	data, err := l.findPattern(key.file)
	if err != nil {
		return &patternFile{fault: err.Error()}
	}
	l.record(key.file, data)
	f, err := antenna.Read(bytes.NewReader(data), antenna.ReadOptions{FrequencyHz: key.hz, VerticalSense: key.sense})
	var re *antenna.ReadError
	switch {
	case errors.As(err, &re) && re.Line > 0:
		at := Fault{File: key.file, Row: re.Line, Text: re.Text, Message: re.Message}
		if re.Text != "" {
			at.Message = fmt.Sprintf("%q %s", re.Text, re.Message)
		}
		for _, other := range l.faults {
			if other == at {
				return &patternFile{bad: true}
			}
		}
		l.faults = append(l.faults, at)
		return &patternFile{bad: true}
	case err != nil:
		return &patternFile{fault: key.file + ": " + err.Error()}
	}
	for _, w := range f.Warnings {
		l.warnOnce(key.file, "", w)
	}
	for _, w := range f.Forgiven {
		l.warnOnce(key.file, "", w)
	}
	return &patternFile{file: f}
}

func (l *loader) warnOnce(place, column, message string) {
	w := exposure.Warning{Place: place, Column: column, Message: message}
	for _, other := range l.warnings {
		if other == w {
			return
		}
	}
	l.warnings = append(l.warnings, w)
}

// findPattern reads a pattern file from the site folder or the patterns folder.
func (l *loader) findPattern(name string) ([]byte, error) {
	clean := path.Clean(strings.ReplaceAll(name, "\\", "/"))
	if !fs.ValidPath(clean) || clean == "." {
		return nil, fmt.Errorf("%q is not a file of the site folder; put the file there and write its name", name)
	}
	data, err := fs.ReadFile(l.fsys, clean)
	if err != nil && l.options.PatternsDir != "" {
		data, err = os.ReadFile(filepath.Join(l.options.PatternsDir, filepath.FromSlash(clean)))
	}
	if err == nil {
		return data, nil
	}
	if !errors.Is(err, fs.ErrNotExist) {
		return nil, fmt.Errorf("%q cannot be read: %w", name, err)
	}
	known := append([]string(nil), builtinPatterns...)
	for _, dir := range []fs.FS{l.fsys, os.DirFS(l.options.PatternsDir)} {
		if entries, err := fs.ReadDir(dir, "."); err == nil {
			for _, e := range entries {
				if !e.IsDir() {
					known = append(known, e.Name())
				}
			}
		}
	}
	if near := units.NearName(name, known); near != "" {
		return nil, fmt.Errorf("%q is neither a built-in pattern nor a file in the site folder; did you mean %q?", name, near)
	}
	return nil, fmt.Errorf("%q is neither a built-in pattern nor a file in the site folder; the names are %s", name, strings.Join(builtinPatterns, ", "))
}
