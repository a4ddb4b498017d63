package reports

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"github.com/xuri/excelize/v2"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
)

func ref64(v float64) *float64 { return &v }

// measured is a small survey worked out by hand: two readings of which one the
// model does not explain, a log and a budget of 3 dB and 4 dB.
func measured() *survey.Result {
	in := survey.Instrument{ID: "M1", Components: []survey.Component{
		{Name: "calibration", Value: 3, Distribution: survey.Normal},
		{Name: "response", Value: 4, Distribution: survey.Normal},
	}}
	budget, _ := survey.BudgetOf(&in)
	run := survey.NewRunning(60, 0)
	for i := range int64(5 * 3600) {
		run.Add(i*1e9, float64(4+i%7))
	}
	judged := func(v exposure.Verdict, reason string) survey.Judgement {
		return survey.Judgement{Class: "public", ExposureRatio: 0.25, Verdict: v, Reason: reason, Rule: "simple"}
	}
	against := func(d float64, explained bool) survey.Comparison {
		return survey.Comparison{PredictedVPerM: ref64(5), PredictedRatio: ref64(0.1), DifferenceDB: ref64(d), CombinedDB: 2.5, Explained: explained}
	}
	mean := run.Mean()
	return &survey.Result{
		DecisionRule: exposure.RuleSimple, RuleWords: survey.RuleWords(exposure.RuleSimple),
		Readings: []survey.ReadingResult{
			{ID: "=R1", Place: "door", FieldVPerM: ref64(10), ExpandedDB: ref64(2), FromHz: 9e8, ToHz: 9e8, Judgement: judged(exposure.Within, ""), Comparison: against(6, false)},
			{ID: "R2", Place: "door", BelowFloor: true, FieldVPerM: ref64(0.5), FromHz: 1e8, ToHz: 6e9, Judgement: judged(exposure.NotAssessed, "calibration was due"), Comparison: survey.Comparison{Note: "the inventory has no antenna there"}},
		},
		Series:      []survey.SeriesResult{{Series: "day/log", Place: "door", FieldVPerM: ref64(mean.Largest), RunningMean: mean, First: "2026-05-01T00:00:00Z", Judgement: judged(exposure.Within, ""), Comparison: against(1, true)}},
		Places:      []survey.PlaceResult{{Place: "door", FieldVPerM: ref64(10), Counted: []string{"=R1"}, Judgement: judged(exposure.Within, "")}},
		Unexplained: []survey.Finding{{ID: "=R1", Place: "door", DifferenceDB: 6, CombinedDB: 2.5, Suspects: []survey.Suspect{{Antenna: "A1", Row: "antennas.csv:2", Factor: 4, Why: []string{"its carriers"}}}}},
		Agreement:   survey.Agreement{Compared: 2, Explained: 1, BiasDB: ref64(3.5), SpreadDB: ref64(3.5)},
		Budgets:     []survey.Budget{budget},
	}
}

// TestReportWithReadings: a survey adds its sheets, figures and file, and
// without one there is none of them.
func TestReportWithReadings(t *testing.T) {
	a := sample(4, 2)
	dir := t.TempDir()
	files, err := Write(a, filepath.Join(dir, "with"), Options{Survey: measured()})
	require.NoError(t, err)
	for _, name := range []string{"readings.json", "readings.svg", "readings.png", "log-01-day-log.svg", "day-01-day-log.svg"} {
		assert.Contains(t, files, name)
	}
	plain, err := Write(a, filepath.Join(dir, "without"), Options{})
	require.NoError(t, err)
	for _, name := range plain {
		assert.False(t, strings.HasPrefix(name, "readings") || strings.HasPrefix(name, "log-"), name)
	}

	raw, err := os.ReadFile(filepath.Join(dir, "with", "report.xlsx"))
	require.NoError(t, err)
	f, err := excelize.OpenReader(bytes.NewReader(raw))
	require.NoError(t, err)
	defer f.Close()
	for _, sheet := range []string{sheetReadings, sheetMeasured, sheetUnexplained, sheetUncertainty} {
		assert.Contains(t, f.GetSheetList(), sheet)
	}
	get := func(sheet, cell string) string {
		v, err := f.GetCellValue(sheet, cell)
		require.NoError(t, err)
		return v
	}
	assert.Equal(t, "=R1", get(sheetReadings, "B5"), "a user's text is never a formula")
	formula, err := f.GetCellFormula(sheetReadings, "B5")
	require.NoError(t, err)
	assert.Empty(t, formula)
	assert.Equal(t, "<", get(sheetReadings, "F6"))
	assert.Equal(t, "not assessed: calibration was due", get(sheetReadings, "K6"))
	assert.Contains(t, get(sheetReadings, "O6"), "the inventory has no antenna there")
	assert.Contains(t, get(sheetUnexplained, "A2"), "mean difference 3.5 dB")
	assert.Equal(t, "A1", get(sheetUnexplained, "E5"))
	// 3 dB and 4 dB are 5 dB together, expanded by 1.96 to 9.8 dB; the formulas
	// come to the stored numbers (to rounding).
	for cell, want := range map[string]string{"H7": "5", "H8": "9.8"} {
		v, err := f.CalcCellValue(sheetUncertainty, cell, excelize.Options{RawCellValue: true})
		require.NoError(t, err)
		assert.Equal(t, want, v, cell)
		stored, err := f.GetCellValue(sheetUncertainty, cell, excelize.Options{RawCellValue: true})
		require.NoError(t, err)
		assert.Equal(t, want, stored, cell)
	}
}

// Same survey, same bytes.
func TestReportWithReadingsIsReproducible(t *testing.T) {
	a := sample(4, 2)
	first, err := surveyWorkbook(a, nil, measured())
	require.NoError(t, err)
	second, err := surveyWorkbook(a, nil, measured())
	require.NoError(t, err)
	assert.True(t, bytes.Equal(first, second))
}
