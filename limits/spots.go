package limits

import (
	"fmt"
	"math"
	"strings"
)

// spotFaults finds spot values that the table does not reproduce within half a
// unit of their last printed digit.
func (t *Table) spotFaults() []Problem {
	var list []Problem
	for _, s := range t.Spots {
		if p, bad := t.spotFault(s); bad {
			list = append(list, p)
		}
	}
	return list
}

func (t *Table) spotFault(s Spot) (Problem, bool) {
	fault := func(format string, args ...any) (Problem, bool) {
		return Problem{Line: s.Line, Column: "spot", Message: s.name() + fmt.Sprintf(format, args...)}, true
	}
	if !finite(s.FrequencyHz) || s.FrequencyHz <= 0 || !finite(s.Level) || s.Level <= 0 || !finite(s.HalfDigit) || s.HalfDigit < 0 {
		return fault(": write class, quantity, frequency and level, such as public, E, 900 MHz, 41.25 V/m")
	}
	rows := t.spotRows(s)
	if len(rows) == 0 {
		return fault(": the table has no %s level for %q at %s", s.Quantity, s.Class, Hz(s.FrequencyHz))
	}
	var got []string
	for _, i := range rows {
		if s.reproducedBy(t.Rows[i]) {
			return Problem{}, false
		}
		got = append(got, fmt.Sprintf("%s in %s", LevelText(s.Quantity, t.Rows[i].Level(s.FrequencyHz)), row(t.Rows[i])))
	}
	return fault(": the table gives %s; correct the row, or the spot value if it was misread", strings.Join(got, ", "))
}

// spotRows returns the rows with a level of the spot's class and quantity that
// hold at its frequency. A spot names no group: any may be the one it was read
// from.
func (t *Table) spotRows(s Spot) []int {
	var list []int
	for i, r := range t.Rows {
		if r.Class == s.Class && r.Quantity == s.Quantity && !r.None && r.Holds(s.FrequencyHz) {
			list = append(list, i)
		}
	}
	return list
}

func (s Spot) reproducedBy(r Row) bool {
	// The slack forgives the last bit of a figure that lies on the half digit.
	return math.Abs(r.Level(s.FrequencyHz)-s.Level) <= s.HalfDigit+1e-9*s.Level
}

func (s Spot) name() string {
	if s.Text != "" {
		return fmt.Sprintf("spot value %q", s.Text)
	}
	return fmt.Sprintf("spot value %s, %s, %s, %s", s.Class, s.Quantity, Hz(s.FrequencyHz), LevelText(s.Quantity, s.Level))
}

// unchecked returns the rows with a level that no spot value reproduces.
func (t *Table) unchecked() []int {
	done := make([]bool, len(t.Rows))
	for _, s := range t.Spots {
		for _, i := range t.spotRows(s) {
			if s.reproducedBy(t.Rows[i]) {
				done[i] = true
			}
		}
	}
	var list []int
	for i, r := range t.Rows {
		if !done[i] && !r.None {
			list = append(list, i)
		}
	}
	return list
}

// Confirmed reports whether somebody has confirmed the transcription: the table
// names who checked it, and each band with a level reproduces at least one spot
// value.
func (t *Table) Confirmed() bool { return t.Unconfirmed() == "" }

// Unconfirmed says why the transcription does not count as confirmed; it is
// empty where it does.
func (t *Table) Unconfirmed() string {
	if strings.TrimSpace(t.About.CheckedBy) == "" {
		return "nobody has confirmed this transcription of the limits"
	}
	open := t.unchecked()
	if len(open) == 0 {
		return ""
	}
	r := t.Rows[open[0]]
	which := fmt.Sprintf("%s, %s, %s", r.Class, r.Quantity, band(r))
	if r.Line > 0 {
		which = fmt.Sprintf("row %d: %s", r.Line, which)
	}
	if len(open) == 1 {
		return fmt.Sprintf("the limits name who checked them, but one band has no spot value (%s): the transcription does not count as confirmed", which)
	}
	return fmt.Sprintf("the limits name who checked them, but %d bands have no spot value (first %s): the transcription does not count as confirmed", len(open), which)
}
