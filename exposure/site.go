package exposure

import (
	"example.org/standclear/antenna"
	"example.org/standclear/limits"
)

// Point is a place in the site's frame in m: x east (or along the site's own
// grid), y north, z up from the site's datum.
type Point = antenna.Vec

// Site is all that a prediction needs, validated and in SI units: nothing in it
// is optional and nothing is NaN. Package sitefile makes one from tables; New
// checks and compiles one made in code.
type Site struct {
	About     About
	Ground    Ground
	Sources   []Source
	Operators []Operator
	Surfaces  []Surface
	Places    []Place
	Limits    *limits.Table
	// OnlyOn drops the rows on standby; every result then says so.
	OnlyOn bool
	// Scenarios are the site with named changes.
	Scenarios []Scenario
	Inputs    Inputs
}

// About is what the site table says; a report prints it and computes nothing
// from it, but for the geographic position.
type About struct {
	Name, Reference, Datum    string
	PreparedFor, PreparedBy   string
	Assessor, Licence         string
	SurveyDate, ReportDate    string // ISO 8601
	DecisionRule              DecisionRule
	Note                      string
	HasPosition               bool
	LatitudeDeg, LongitudeDeg float64 // WGS 84 of x = y = 0
	GridBearingRad            float64 // true bearing of the y axis
	AzimuthReference          string  // as typed: true, grid or magnetic
	DeclinationRad            float64
}

// DecisionRule says how a measured value's uncertainty enters the verdict.
type DecisionRule string

const (
	RuleSimple  DecisionRule = "simple"
	RuleGuarded DecisionRule = "guarded"
)

// GroundMethod is how reflection from the ground is treated.
type GroundMethod string

const (
	GroundNone    GroundMethod = "none"
	GroundFactor  GroundMethod = "factor"
	GroundFresnel GroundMethod = "fresnel"
)

// Ground is the reflecting ground of the site.
type Ground struct {
	Method       GroundMethod
	Factor       float64 // field factor, >= 1 (method factor; 1 otherwise)
	Permittivity float64 // relative (method fresnel)
	Conductivity float64 // S/m (method fresnel)
	Z            float64 // height of the reflecting plane, m (method fresnel)
}

// State is whether a row radiates.
type State string

const (
	On      State = "on"
	Standby State = "standby"
)

// Method is how the field of a source is computed.
type Method string

const (
	MethodAuto        Method = "auto"
	MethodFarField    Method = "far field"
	MethodCylindrical Method = "cylindrical"
	MethodArray       Method = "array"
	MethodAperture    Method = "aperture"
	MethodWire        Method = "wire"
)

// Source is one antenna input at one frequency.
type Source struct {
	ID, Operator, OperatorReference, Service string
	Housing, Transmitter, Signal             string // Housing "" = none; Transmitter never ""
	State                                    State
	DataFrom, DataDate                       string

	Position          Point        // centre of radiation
	Pose              antenna.Pose // azimuth is relative to the site's y axis
	ElectricalTiltRad float64
	Polarization      antenna.Polarization

	Pattern     antenna.Pattern
	PatternName string // as typed
	PatternKind PatternKind
	Gain        antenna.Gain // peak gain

	HorizontalBeamwidthRad, VerticalBeamwidthRad float64 // 0 = not stated
	FrontToBackDB                                float64
	LengthM, WidthM, DiameterM                   float64 // 0 = not stated
	Efficiency                                   float64 // dish, 0 = from the gain
	Elements, ElementsAcross                     int     // 0 = default
	SpacingM, SpacingAcrossM                     float64 // 0 = default

	FrequencyHz float64
	Power       Power
	SweepRad    float64 // sector swept by a rotating antenna, 0 = it does not rotate
	Method      Method
	Uncertainty Uncertainty

	Row *InputRow // as typed; nil when made in code
}

// PatternKind is what a pattern is, as far as the choice of a method goes.
type PatternKind string

const (
	PatternIsotropic PatternKind = "isotropic"
	PatternDipole    PatternKind = "half-wave dipole"
	PatternBeamwidth PatternKind = "two-beamwidth"
	PatternOmni      PatternKind = "omni"
	PatternSector    PatternKind = "sector"
	PatternDish      PatternKind = "dish"
	PatternShort     PatternKind = "short dipole"
	PatternMonopole  PatternKind = "monopole"
	PatternLoop      PatternKind = "small loop"
	PatternActive    PatternKind = "active"
	PatternFile      PatternKind = "file"
)

// Power is the power of a source, all figures as ratios.
type Power struct {
	TransmitterW    float64 // one carrier's mean over its modulation while transmitting
	Loss            float64 // share lost before the antenna's input as a ratio: 10^(-dB/10), 1 = no loss
	Carriers        float64
	Duty            float64 // share of the time on air
	ReductionFactor float64 // actual-maximum share of the configured power
	PeakFactor      float64 // peak over mean while transmitting
	Unknown         bool    // the owner has not said; every verdict it reaches is "not assessed"
}

// OnAirW returns the power at the antenna's input while transmitting, in W.
func (p Power) OnAirW() float64 { return p.TransmitterW * p.Loss * p.Carriers }

// ThermalW returns the mean power that counts against thermal mean levels, in W.
func (p Power) ThermalW() float64 { return p.OnAirW() * p.Duty * p.ReductionFactor }

// PeakW returns the power that counts against peak levels, in W.
func (p Power) PeakW() float64 { return p.OnAirW() * p.PeakFactor }

// Uncertainty holds the standard uncertainties of a source's data.
type Uncertainty struct {
	PowerDB, GainDB     float64
	TiltRad, AzimuthRad float64
	PositionM           float64
}

// Operator is who to call before a transmitter is switched off.
type Operator struct {
	Name, Contact, Notice string
	Row                   *InputRow
}

// Averaging says how a surface compares a field that varies over the body.
type Averaging string

const (
	AverageAsLimit Averaging = "limit"
	AveragePeak    Averaging = "peak"
)

// Ring is a closed line in the plane, first point repeated at the end.
type Ring [][2]float64

// Surface is an area on which people walk.
type Surface struct {
	ID           string
	Outline      []Ring // outer ring first, then holes
	Z            float64
	Class        string  // who may be there
	From, To     float64 // heights above Z that a body fills, m
	Averaging    Averaging
	GroundFactor float64 // its own reflecting field factor; 0 = the site's ground
	Note         string
	Row          *InputRow
}

// Place is a single point of interest, or a body standing there.
type Place struct {
	ID       string
	At       Point   // z is the foot of the body where To > 0
	From, To float64 // heights above At.Z that a body fills, m
	Class    string
	WallLoss float64 // ratio 10^(-dB/10), 1 = none
	On       string  // the surface it stands on, "" = none
	Note     string
	Row      *InputRow
}

// Inputs carries the input tables as they were typed, so that a report can
// point back to each cell.
type Inputs struct {
	Files    []InputFile
	Tables   []*InputTable
	Warnings []Warning
}

// InputFile is one file that was read.
type InputFile struct {
	Name   string `json:"name"`
	SHA256 string `json:"sha256"`
	Bytes  int64  `json:"bytes"`
}

// InputTable is one table as typed.
type InputTable struct {
	Name    string        // antennas
	File    string        // antennas.csv or site.xlsx
	Sheet   string        // antennas in a workbook, "" in a CSV folder
	Columns []InputColumn // in the order of the file
	Rows    []*InputRow
}

// InputColumn is a header cell.
type InputColumn struct {
	Header string // as typed: "power [W]"
	Name   string // power
	Unit   string // W, "" where the column has none
}

// InputRow is one row as typed. Row is the line of a CSV file or the row of a
// sheet, counted from one.
type InputRow struct {
	Table *InputTable
	Row   int
	Cells []string // by column; "" = blank
}

// Cell returns the text typed under the named column, or "".
func (r *InputRow) Cell(column string) string {
	if r == nil {
		return ""
	}
	for i, c := range r.Table.Columns {
		if c.Name == column && i < len(r.Cells) {
			return r.Cells[i]
		}
	}
	return ""
}

// Warning is something an assessor must know, with the place where it stands.
type Warning struct {
	Place   string `json:"place"` // "antennas.csv:7" or "" for the site as a whole
	Column  string `json:"column"`
	Message string `json:"message"`
}
