package reports

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"example.org/standclear/exposure"
	"github.com/xuri/excelize/v2"
)

// The sheets of a work plan.
const (
	sheetPlan      = "Work plan"
	sheetSwitching = "Switching"
)

// WorkBook returns a workbook with the switching sheet of a piece of work, to be
// sent to the operators and signed, and the plan behind it.
func WorkBook(site *exposure.Site, program string, work *exposure.Work) ([]byte, error) {
	if site == nil || work == nil {
		return nil, errors.New("reports: a switching sheet needs its site and its plan")
	}
	a := &exposure.Assessment{Program: program, Site: site, SiteName: site.About.Name, Work: []exposure.Work{*work}}
	b := &book{f: excelize.NewFile(), a: a, styles: map[look]int{}}
	b.keep(b.f.SetDefaultFont(fontName))
	b.keep(b.f.SetSheetName("Sheet1", sheetSwitching))
	_, err := b.f.NewSheet(sheetPlan)
	b.keep(err)
	r := &report{book: b}
	r.switching()
	r.workPlans()
	b.properties()
	return b.bytes()
}

// workWhere says where a piece of work takes place.
func workWhere(w *exposure.Work) string {
	where := strings.Join(w.Places, ", ")
	if w.Surface != "" {
		where = strings.TrimPrefix(where+", any point of "+w.Surface, ", ")
	}
	return where
}

var switchColumns = []column{
	{head: "operator", width: 18}, {head: "contact", width: 19}, {head: "notice", width: 10}, {head: "operator's reference", width: 11},
	{head: "transmitter", width: 12}, {head: "antennas", width: 13},
	{head: "bearing", unit: "deg", width: 7, digits: whole, what: "direction in which the transmitter's antenna faces, clockwise from true north"},
	{head: "height", unit: "m", width: 7, digits: cents, what: "height of the centre of radiation above the site datum"},
	{head: "band", unit: "MHz", width: 8, digits: shortest, what: "frequency of the transmitter's first row"},
	{head: "action", width: 12},
	{head: "target power", unit: "W", width: 8, digits: figures, what: "power to set at the transmitter's output, one carrier, after the reduction rounded up to 0.1 dB", method: "PLAN-LEAST"},
	{head: "from", width: 11}, {head: "to", width: 11}, {head: "confirmed off or reduced by, at", width: 15}, {head: "restored by, at", width: 15},
}

// switching writes the sheet that operators act on.
func (r *report) switching() {
	r.write(page{
		name: sheetSwitching, title: "Switching sheet", landscape: true,
		intro: "What each operator is asked to do before work begins. Rows that can only be switched together are one transmitter. " +
			"The last two columns are filled in by hand: nobody starts until each line is confirmed by its operator's own lock-out and the field is measured at the place.",
		widths: widthsOf(switchColumns),
	}, func(s *sheet) {
		any := false
		for i := range r.a.Work {
			w := &r.a.Work[i]
			if len(w.Switching) == 0 {
				continue
			}
			any = true
			s.section(fmt.Sprintf("%s, by %s: plan %q", workWhere(w), w.Class, w.SwitchingPlan))
			s.table(switchColumns)
			for _, l := range w.Switching {
				s.line(l.Operator, l.Contact, l.Notice, l.Reference, l.Transmitter, strings.Join(l.Antennas, ", "),
					l.BearingDeg, l.HeightM, l.BandMHz, l.Action, l.TargetW, blankOr(l.From), blankOr(l.To), l.Confirmed, l.Restored)
			}
		}
		if !any {
			s.merged("No plan asks for a transmitter to be switched or reduced.", look{role: bodyPlain}, 0)
		}
		s.blank()
		for _, c := range exposure.WorkCautions() {
			s.merged(c, look{role: caution}, 0)
		}
	})
}

func blankOr(text string) any {
	if text == "" {
		return nil
	}
	return text
}

var planColumns = []column{
	{head: "plan", width: 18}, {head: "transmitter", width: 18}, {head: "action", width: 13},
	{head: "reduction", unit: "dB", width: 10, digits: tenths, what: "reduction of the transmitter's power", method: "PLAN-LEAST"},
	{head: "power left", unit: "%", width: 10, digits: tenths, what: "share of the transmitter's power that is left", method: "PLAN-LEAST"},
	{head: "ratio with the plan", unit: "1", width: 11, digits: figures, what: "largest total exposure ratio with the plan, asked of the engine again", method: "PLAN-CHECK"},
	{head: "given up", unit: "W", width: 10, digits: figures, what: "mean power given up at the antenna inputs", method: "PLAN-LEAST"},
	{head: "remark", width: 34},
}

var contributorColumns = []column{
	{head: "operator"}, {head: "antenna"}, {head: "transmitter"},
	{head: "frequency", unit: "MHz", digits: shortest, what: "frequency of the contributor"},
	{head: ""},
	{head: "own ratio", unit: "1", digits: figures, what: "exposure ratio of the antenna alone at the place where that is largest", method: "RATIO-1"},
	{head: ""}, {head: "place"},
}

// workPlans writes the plans, the stay and the contributors of each piece of
// work.
func (r *report) workPlans() {
	r.write(page{
		name: sheetPlan, title: "Work plan", landscape: true,
		intro: "Ways to bring each place or surface within the limits supplied, for the class named. Each ratio was computed again by the engine with the powers of the plan. " +
			"Contributors are the antennas whose own ratio reaches the share asked.",
		widths: widthsOf(planColumns),
	}, func(s *sheet) {
		for i := range r.a.Work {
			r.workPlan(s, &r.a.Work[i])
		}
		if len(r.a.Work) == 0 {
			s.merged("No place and no surface is above the limits supplied for the class that may be there.", look{role: bodyPlain}, 0)
		}
		s.blank()
		for _, c := range exposure.WorkCautions() {
			s.merged(c, look{role: caution}, 0)
		}
	})
}

func (r *report) workPlan(s *sheet, w *exposure.Work) {
	s.section(workWhere(w) + ", by " + w.Class)
	text := fmt.Sprintf("As it stands: %s, exposure ratio %s, governed by %s.", verdictFull(w.Verdict, w.Reason), ratioText(w.ExposureRatio), w.GovernedBy)
	s.merged(text, look{role: bodyPlain}, 0)
	s.merged("Stay as it stands: "+StayWords(w), look{role: bodyPlain}, 0)
	if len(w.Reductions) > 0 {
		s.table(planColumns)
	}
	for _, p := range w.Reductions {
		if len(p.Transmitters) == 0 {
			s.line(p.Plan, "none", "nothing to do", nil, nil, p.ExposureRatio, p.GivenUpW, p.Note)
		}
		for k, f := range p.Transmitters {
			name, total, given, note := any(p.Plan), any(p.ExposureRatio), any(p.GivenUpW), any(p.Note)
			if k > 0 {
				name, total, given, note = nil, nil, nil, nil
			}
			var db any
			action := "switch off"
			if f.Factor > 0 {
				action, db = "reduce", float64(f.ReductionDB)
			}
			s.line(name, f.Transmitter, action, db, 100*f.Factor, total, given, note)
		}
	}
	if len(w.Contributors) > 0 {
		s.blank()
		s.table(contributorColumns)
		for _, c := range w.Contributors {
			s.line(c.Operator, c.Antenna, c.Transmitter, c.FrequencyHz/1e6, nil, c.Ratio, nil, c.Place)
		}
	}
}

// StayWords says how long a stay may last before anything is switched.
func StayWords(w *exposure.Work) string {
	if w.StayMin == nil || *w.StayMin == 0 {
		return w.StayReason
	}
	text := fmt.Sprintf("up to %g min, %s", math.Floor(*w.StayMin*10)/10, w.StayReason)
	if w.StayAllowed && w.StayAskedMin > 0 {
		text = fmt.Sprintf("%g min fit, %s", w.StayAskedMin, text)
	}
	return text
}
