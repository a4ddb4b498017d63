package reports

import (
	"fmt"
	"strconv"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
	"github.com/xuri/excelize/v2"
)

// The sheets, in a reader's order.
const (
	sheetCautions      = "Cautions"
	sheetResult        = "Result"
	sheetSite          = "Site"
	sheetAntennas      = "Antennas"
	sheetPower         = "Power"
	sheetLimits        = "Limits"
	sheetLevels        = "Levels"
	sheetDistances     = "Distances"
	sheetByAntenna     = "Distances by antenna"
	sheetBoundaries    = "Boundaries"
	sheetSections      = "Vertical sections"
	sheetChecks        = "Boundary points"
	sheetFigures       = "Figures"
	sheetPlaces        = "Places"
	sheetContributions = "Contributions"
	sheetProfiles      = "Along the beams"
	sheetMethods       = "Methods"
	sheetColumns       = "Methods by column"
	sheetInputs        = "Inputs"
	sheetSignOff       = "Sign-off"
)

// workbook writes the report workbook. The figures are those of the folder.
func workbook(a *exposure.Assessment, pictures []picture) ([]byte, error) {
	return surveyWorkbook(a, pictures, nil)
}

// surveyWorkbook is workbook with what was measured; measured may be nil.
func surveyWorkbook(a *exposure.Assessment, pictures []picture, measured *survey.Result) ([]byte, error) {
	f := excelize.NewFile()
	b := &book{f: f, a: a, measured: measured, styles: map[look]int{}}
	b.keep(f.SetDefaultFont(fontName))
	r := newReport(b, pictures)
	for i, name := range r.order {
		if i == 0 {
			b.keep(f.SetSheetName("Sheet1", name))
			continue
		}
		_, err := f.NewSheet(name)
		b.keep(err)
	}
	b.keep(f.SetDefinedName(&excelize.DefinedName{Name: "wave_impedance", RefersTo: quoteSheet(sheetLevels) + "!$B$5"}))
	for _, write := range r.writers {
		write()
	}
	r.columnMethods()
	b.keep(f.SetCalcProps(&excelize.CalcPropsOptions{FullCalcOnLoad: ptr(true)}))
	b.properties()
	return b.bytes()
}

// properties are the document's own, and hold nothing that the site does not
// state: no user name, no clock.
func (b *book) properties() {
	stamp := "2000-01-01T00:00:00Z" // the format wants a date: a fixed one where the site states none
	if d := reportDate(b.a); len(d) == len("2006-01-02") {
		stamp = d + "T00:00:00Z"
	}
	b.keep(b.f.SetDocProps(&excelize.DocProperties{
		Creator: "standclear", LastModifiedBy: "standclear", Created: stamp, Modified: stamp,
		Title: "Exposure assessment", Subject: oneLine(b.a.SiteName), Language: "en-GB", Version: "1.0",
	}))
	b.keep(b.f.SetAppProps(&excelize.AppProperties{Application: "standclear", Company: "", AppVersion: "1.0000"}))
}

// report holds what several sheets share: where rows stand, so that formulas
// can point at them.
type report struct {
	*book
	found    *findings
	pictures []picture
	order    []string
	writers  []func()
	inputs   []inputSheet
	power    map[string]int // antenna id to its row on the power sheet
	levels   []levelRow
	levelAt  map[levelKey]int
	plan     contributionPlan
}

func newReport(b *book, pictures []picture) *report {
	r := &report{book: b, found: gather(b.a), pictures: pictures}
	r.power = map[string]int{}
	for i, s := range b.a.Sources {
		r.power[s.Antenna] = firstRow + 1 + i
	}
	r.levels, r.levelAt = levelRows(b.a)
	r.plan = planContributions(b.a)
	r.inputs = inputSheets(b.a)
	add := func(name string, write func()) {
		r.order = append(r.order, name)
		r.writers = append(r.writers, write)
	}
	add(sheetCautions, r.cautions)
	add(sheetResult, r.result)
	add(sheetSite, r.site)
	add(sheetAntennas, r.antennas)
	add(sheetPower, r.powers)
	add(sheetLimits, r.limitTable)
	add(sheetLevels, r.levelTable)
	add(sheetDistances, r.distances)
	add(sheetByAntenna, r.distancesByAntenna)
	if covers(b.a) {
		add(sheetCoverage, r.coverage)
	}
	add(sheetBoundaries, r.boundaries)
	if len(cuts(b.a)) > 0 {
		add(sheetSections, r.sections)
	}
	if len(b.a.BoundaryPoints) > 0 {
		add(sheetChecks, r.boundaryPoints)
	}
	if len(pictures) > 0 {
		add(sheetFigures, r.figures)
	}
	add(sheetPlaces, r.places)
	add(sheetContributions, r.contributions)
	if len(b.a.Profiles) > 0 {
		add(sheetProfiles, r.profiles)
	}
	add(sheetPlan, r.workPlans)
	add(sheetSwitching, r.switching)
	add(sheetBarriers, r.barriers)
	add(sheetMeasure, r.measureFirst)
	add(sheetAssumptions, r.assumptions)
	add(sheetStates, r.states)
	if b.measured != nil {
		add(sheetReadings, r.readings)
		add(sheetMeasured, r.measuredPlaces)
		add(sheetUnexplained, r.unexplained)
		if len(b.measured.Budgets) > 0 {
			add(sheetUncertainty, r.budgets)
		}
	}
	add(sheetMethods, r.methods)
	r.order = append(r.order, sheetColumns) // written last: it explains the columns of all others
	add(sheetInputs, r.inputFiles)
	for _, in := range r.inputs {
		add(in.name, func() { r.inputTable(in) })
	}
	add(sheetSignOff, r.signOff)
	return r
}

// ref names a cell on another sheet.
func ref(sheet string, col, row int) string {
	return quoteSheet(sheet) + "!" + cellName(col, row)
}

// agree reports whether a formula's value, worked out here, is the engine's own
// to nine digits: only then is the formula written, so that the workbook can
// never show two answers.
func agree(formula, engine float64) bool {
	const nineDigits = 1e-9
	d := formula - engine
	if d < 0 {
		d = -d
	}
	e := engine
	if e < 0 {
		e = -e
	}
	return d <= nineDigits*e
}

// traced returns a number with its formula where the formula gives it, else the
// number alone.
func traced(engine, byFormula float64, format string, args ...any) any {
	if agree(byFormula, engine) {
		return calc{fmt.Sprintf(format, args...), engine}
	}
	return engine
}

// linkTo makes a cell a link to the row of the input table it rests on.
func (r *report) linkTo(sheet, cell string, row *exposure.InputRow) error {
	for _, in := range r.inputs {
		if row == nil || in.table != row.Table {
			continue
		}
		line, ok := in.lineOf[row]
		if !ok {
			return nil
		}
		return r.f.SetCellHyperLink(sheet, cell, quoteSheet(in.name)+"!A"+strconv.Itoa(line), "Location")
	}
	return nil
}
