package reports

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"example.org/standclear/exposure"
)

// footerCaution stands at the foot of every page.
const footerCaution = "A prediction from the data supplied, for a licensed assessor to check. No permit to enter."

// Cautions are the limits of validity that open the report.
var Cautions = []string{
	"This report is a prediction. It rests on the antenna data, positions, powers and limit table that were supplied, and it is as good as they are. It is no permit to enter any area, and it does not replace the judgement of a licensed assessor or the local rules, which govern.",
	"Only the sources in the inventory are counted. A transmitter that nobody listed, a changed tilt, a new feeder or a faulty pattern file changes the result, and the report cannot know of it.",
	"\"Within\" and \"above\" mean within and above the limits supplied, at the place and for the class of people named. \"Not assessed\" is not \"within\": it means that the data or the methods do not reach, and that measurement or better data are needed.",
	"A keep-out line encloses the model's boundary, as closely as is printed with it. The model is not the site: metal structures, reflections that were not modelled, and people carrying long conducting objects can raise fields beyond it.",
	"Contact currents, induced currents in structures, effects on implanted devices, on fuel vapours and on electrically fired devices are not covered. Wearers of implants need advice of their own.",
	"Close to an antenna, within its reactive region, fields are not predicted. Nobody should touch or pass in front of a transmitting antenna, whatever a line on a plan says.",
	"A switched-off transmitter counts as off only while its operator holds it off. The report does not know the state of any transmitter on the day.",
}

// verdictWords returns a verdict as a sentence's end.
func verdictWords(v exposure.Verdict) string {
	switch v {
	case exposure.Within:
		return "within the limits supplied"
	case exposure.WithinGuardBand:
		return "within the limits supplied, inside the guard band"
	case exposure.Above:
		return "above the limits supplied"
	}
	return "not assessed"
}

// verdictFull adds the reason to a verdict that is no answer.
func verdictFull(v exposure.Verdict, reason string) string {
	if v != exposure.Above && reason != "" {
		return verdictWords(v) + ": " + reason
	}
	return verdictWords(v)
}

// ratioText prints an exposure ratio with three significant figures at most.
func ratioText(n exposure.Number) string {
	v := float64(n)
	switch {
	case math.IsInf(v, 0):
		return "no bound"
	case v == 0:
		return "0"
	case v < 0.001:
		return "below 0.001"
	}
	switch {
	case v > 1 && v < 1.00005:
		return "just above 1" // the verdict turns here: no rounding may hide it
	case v > 1 && v < 1.01:
		return significant(v, 5)
	case v >= 0.9995 && v < 1:
		return "just below 1"
	}
	return significant(v, 3)
}

// significant prints v with n significant figures, never in exponent form.
func significant(v float64, n int) string {
	if v == 0 || math.IsInf(v, 0) || math.IsNaN(v) {
		return strconv.FormatFloat(v, 'g', -1, 64)
	}
	places := n - 1 - int(math.Floor(math.Log10(math.Abs(v))))
	if places < 0 {
		scale := math.Pow(10, float64(-places))
		return strconv.FormatFloat(math.Round(v/scale)*scale, 'f', 0, 64)
	}
	return strconv.FormatFloat(v, 'f', places, 64)
}

// metres prints a distance outward: rounded up to the decimetre from 10 m, to
// the centimetre below.
func metres(v float64) string {
	if math.IsInf(v, 0) {
		return "no bound"
	}
	scale, places := 100.0, 2
	if v >= 10 {
		scale, places = 10, 1
	}
	return strconv.FormatFloat(math.Ceil(v*scale-1e-6)/scale, 'f', places, 64) + " m"
}

// count joins a number and a noun.
func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	if stem, ok := strings.CutSuffix(noun, "y"); ok {
		return fmt.Sprintf("%d %sies", n, stem)
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

// list joins the first few texts and says how many are left out.
func list(texts []string, most int) string {
	if len(texts) > most {
		return strings.Join(texts[:most], ", ") + fmt.Sprintf(" and %d more", len(texts)-most)
	}
	return strings.Join(texts, ", ")
}

// reportDate is the only date a report bears: the one the site states.
func reportDate(a *exposure.Assessment) string {
	if a.Site == nil {
		return ""
	}
	return a.Site.About.ReportDate
}

// rowName points back to a row as typed: "antennas.csv:7" or, in a workbook,
// "antennas row 7".
func rowName(r *exposure.InputRow) string {
	if r == nil || r.Table == nil {
		return ""
	}
	if r.Table.Sheet != "" {
		return fmt.Sprintf("%s row %d", r.Table.Sheet, r.Row)
	}
	return fmt.Sprintf("%s:%d", r.Table.File, r.Row)
}
