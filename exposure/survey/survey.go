package survey

import (
	"context"

	"example.org/standclear/exposure"
)

// Survey is what was measured, validated and in SI units. Package sitefile makes
// one from the tables readings, instruments and uncertainty.
type Survey struct {
	Instruments []Instrument
	Readings    []Reading // one value each
	Series      []Series  // logs over time
}

// Empty reports whether nothing was measured.
func (s *Survey) Empty() bool { return s == nil || len(s.Readings)+len(s.Series) == 0 }

// Kind is what an instrument tells apart.
type Kind string

// The kinds of instruments.
const (
	Broadband Kind = "broadband" // one figure for all frequencies of its range
	Selective Kind = "selective" // a figure for each frequency
)

// Instrument is what was measured with.
type Instrument struct {
	ID               string
	Kind             Kind
	FromHz, ToHz     float64
	Calibration      Calibration
	HasAntennaFactor bool
	AntennaFactorDB  float64 // dB over 1/m
	CableLossDB      float64
	FloorVPerM       float64 // 0 = not stated
	OverloadVPerM    float64 // 0 = not stated
	CalibratedOn     string  // ISO 8601, "" = not stated
	CalibrationDue   string  // ISO 8601, "" = not stated
	Components       []Component
	Note             string
	Row              *exposure.InputRow
}

// Quantity is what a reading is a figure of.
type Quantity string

// The quantities of readings, with the SI unit of their values.
const (
	ElectricField Quantity = "E"              // V/m
	MagneticField Quantity = "H"              // A/m
	PowerDensity  Quantity = "S"              // W/m2
	PortLevel     Quantity = "port level"     // W at the receiver's input
	ShareOfLimit  Quantity = "share of limit" // share of the level of S, 1 = the level
)

// Detector is how the instrument forms its figure.
type Detector string

// The detectors.
const (
	RMS  Detector = "rms"
	Peak Detector = "peak"
)

// Reading is one figure of one instrument at one point.
type Reading struct {
	ID string
	// At is the point: the probe's own height is in At.At.Z, and To is 0. Its ID
	// is the place's, "" where the reading states coordinates.
	At         exposure.Place
	HeightM    float64 // of the probe above the place
	Time       string  // RFC 3339 as typed, "" = not stated
	Instrument string
	Axis       string // x, y, z, "" = isotropic
	Quantity   Quantity
	Value      float64 // in the SI unit of Quantity
	ShareOf    string  // class of a shaped reading
	Ports      int     // antenna ports that the reading covers, at least 1
	// The frequency, or the band from FromHz to ToHz; all 0 = the instrument's
	// range.
	FrequencyHz  float64
	FromHz, ToHz float64
	Detector     Detector
	Group        string
	Scale        *Scale   // to maximum traffic; nil = as measured
	Antennas     []string // ids the reading is of; nil = whatever lies in its band
	Note         string
	Row          *exposure.InputRow
}

// Series is a log: one reading that was taken many times.
type Series struct {
	Name string
	// Reading holds what all samples share; its ID is that of the first row, its
	// Value and Time are not used.
	Reading Reading
	Samples Samples
	// ZoneS is the offset from UTC in s of the clock by which a daily profile is
	// told.
	ZoneS int
}

// Samples hands out a log in one pass, in order of time.
type Samples interface {
	// Each calls f for each sample: the time in ns since 1970 UTC and the value in
	// the SI unit of the reading's quantity. It stops where f or ctx says so.
	Each(ctx context.Context, f func(ns int64, value float64) error) error
	// Files returns the files that Each has read, once it has.
	Files() []exposure.InputFile
}

// Sample is one value of a log in memory.
type Sample struct {
	NS    int64
	Value float64
}

// Memory is a log that is held in memory.
type Memory []Sample

// Each hands out the samples.
func (m Memory) Each(ctx context.Context, f func(int64, float64) error) error {
	for _, s := range m {
		if err := f(s.NS, s.Value); err != nil {
			return err
		}
	}
	return ctx.Err()
}

// Files returns none.
func (m Memory) Files() []exposure.InputFile { return nil }
