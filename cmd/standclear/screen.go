package main

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
	"os"
	"strconv"
	"strings"
	"unicode/utf8"

	"golang.org/x/term"

	"example.org/standclear/exposure"
)

// printJSON writes one object on standard output.
func printJSON(std streams, v any) error {
	out := json.NewEncoder(std.out)
	out.SetEscapeHTML(false)
	out.SetIndent("", "  ")
	return out.Encode(v)
}

// table is a plain aligned table. A header that starts with ">" is of a column
// of numbers, which stands to the right.
type table struct {
	header []string
	rows   [][]string
}

func newTable(header ...string) *table { return &table{header: header} }

func (t *table) add(cells ...string) { t.rows = append(t.rows, cells) }

// print writes the table, with verdicts other than "within" in bold where the
// stream is a terminal that takes it.
func (t *table) print(w io.Writer) error {
	right := make([]bool, len(t.header))
	head := make([]string, len(t.header))
	width := make([]int, len(t.header))
	for i, h := range t.header {
		head[i], right[i] = strings.CutPrefix(h, ">")
		width[i] = utf8.RuneCountInString(head[i])
		for _, r := range t.rows {
			width[i] = max(width[i], utf8.RuneCountInString(r[i]))
		}
	}
	bold := boldOn(w)
	for n, r := range append([][]string{head}, t.rows...) {
		var b strings.Builder
		for i, cell := range r {
			pad := strings.Repeat(" ", width[i]-utf8.RuneCountInString(cell))
			if bold && (n == 0 || cell == string(exposure.Above) || cell == string(exposure.NotAssessed)) {
				cell = "\x1b[1m" + cell + "\x1b[0m"
			}
			if i > 0 {
				b.WriteString("  ")
			}
			if right[i] {
				b.WriteString(pad + cell)
			} else {
				b.WriteString(cell + pad)
			}
		}
		if _, err := fmt.Fprintln(w, strings.TrimRight(b.String(), " ")); err != nil {
			return err
		}
	}
	return nil
}

// boldOn reports whether the stream is a terminal that may be sent control
// sequences.
func boldOn(w io.Writer) bool {
	return os.Getenv("NO_COLOR") == "" && os.Getenv("TERM") != "dumb" && isTerminal(w)
}

func isTerminal(w io.Writer) bool {
	f, ok := w.(*os.File)
	return ok && term.IsTerminal(int(f.Fd()))
}

// sig prints a number to four significant digits.
func sig(v float64) string {
	switch {
	case math.IsInf(v, 0):
		return "unbounded"
	case v == 0:
		return "0"
	}
	a := math.Abs(v)
	if a < 1e-4 || a >= 1e7 {
		return strconv.FormatFloat(v, 'g', 4, 64)
	}
	decimals := 3 - int(math.Floor(math.Log10(a)))
	return strconv.FormatFloat(v, 'f', max(decimals, 0), 64)
}

// ratio prints an exposure ratio; rounding never carries it over 1.
func ratio(n exposure.Number) string {
	v, text := float64(n), sig(float64(n))
	if shown, err := strconv.ParseFloat(text, 64); err == nil {
		switch {
		case v < 1 && shown >= 1:
			return "<1"
		case v > 1 && shown <= 1:
			return ">1"
		}
	}
	return text
}

// metres prints a distance that people keep, rounded up to the centimetre.
func metres(v float64) string {
	if math.IsInf(v, 0) {
		return "unbounded"
	}
	return strconv.FormatFloat(math.Ceil(v*100-1e-6)/100, 'f', 2, 64)
}

// position prints a coordinate.
func position(v float64) string { return strconv.FormatFloat(v, 'f', 2, 64) }

// megahertz prints a frequency in MHz with the digits it has.
func megahertz(hz float64) string { return strconv.FormatFloat(hz/1e6, 'f', -1, 64) }

// plain prints a number with all the digits it has, none invented.
func plain(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// quoted puts a path in quotes where a shell would split it.
func quoted(path string) string {
	if strings.ContainsAny(path, " '\"$&()") {
		return "'" + strings.ReplaceAll(path, "'", `'\''`) + "'"
	}
	return path
}
