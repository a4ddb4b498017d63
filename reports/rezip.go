package reports

import (
	"archive/zip"
	"bytes"
	"fmt"
	"io"
	"regexp"
	"slices"
	"strings"
)

// rezip writes a workbook's parts again so that the same sheets give the same
// bytes: the parts in the order of their names, and the content types, which
// the writer lists in no fixed order, sorted. Two things that the writer cannot
// say are put in on the way: a logarithmic x axis, and that the sheets of input
// tables hold numbers as text on purpose.
func rezip(raw []byte, b *book) ([]byte, error) {
	in, err := zip.NewReader(bytes.NewReader(raw), int64(len(raw)))
	if err != nil {
		return nil, err
	}
	typed, err := sheetParts(in, b)
	if err != nil {
		return nil, err
	}
	slices.SortFunc(in.File, func(a, b *zip.File) int { return strings.Compare(a.Name, b.Name) })
	var out bytes.Buffer
	w := zip.NewWriter(&out)
	for _, part := range in.File {
		var change func([]byte) []byte
		switch {
		case part.Name == "[Content_Types].xml":
			change = sortDefaults
		case isLogChart(part.Name, b.logCharts):
			change = logX
		case typed[part.Name]:
			change = ignoreTextNumbers
		}
		if change == nil {
			if err := w.Copy(part); err != nil {
				return nil, err
			}
			continue
		}
		text, err := readPart(part)
		if err != nil {
			return nil, err
		}
		to, err := w.Create(part.Name)
		if err != nil {
			return nil, err
		}
		if _, err := to.Write(change(text)); err != nil {
			return nil, err
		}
	}
	if err := w.Close(); err != nil {
		return nil, err
	}
	return out.Bytes(), nil
}

func readPart(part *zip.File) ([]byte, error) {
	r, err := part.Open()
	if err != nil {
		return nil, err
	}
	defer r.Close()
	return io.ReadAll(r)
}

var defaultElement = regexp.MustCompile(`<Default [^>]*>(</Default>)?`)

// sortDefaults puts the Default elements of the content types in order.
func sortDefaults(text []byte) []byte {
	all := defaultElement.FindAll(text, -1)
	if len(all) == 0 {
		return text
	}
	sorted := slices.Clone(all)
	slices.SortFunc(sorted, bytes.Compare)
	i := 0
	return defaultElement.ReplaceAllFunc(text, func([]byte) []byte {
		i++
		return sorted[i-1]
	})
}

func isLogChart(name string, n int) bool {
	for i := 1; i <= n; i++ {
		if name == fmt.Sprintf("xl/charts/chart%d.xml", i) {
			return true
		}
	}
	return false
}

// logX makes the first value axis of a scatter chart, the x axis, logarithmic.
func logX(text []byte) []byte {
	axis := bytes.Index(text, []byte("<c:valAx>"))
	tag := []byte("<c:scaling>")
	if axis < 0 {
		axis, tag = bytes.Index(text, []byte("<valAx>")), []byte("<scaling>")
	}
	if axis < 0 {
		return text
	}
	at := bytes.Index(text[axis:], tag)
	if at < 0 {
		return text
	}
	at += axis + len(tag)
	prefix := "<"
	if bytes.HasPrefix(tag, []byte("<c:")) {
		prefix = "<c:"
	}
	return slices.Concat(text[:at], []byte(prefix+`logBase val="10"/>`), text[at:])
}

// sheetParts returns the parts of the sheets that hold input tables as typed.
func sheetParts(in *zip.Reader, b *book) (map[string]bool, error) {
	parts := map[string]bool{}
	for _, name := range b.asTyped {
		i, err := b.f.GetSheetIndex(name)
		if err != nil {
			return nil, err
		}
		parts[fmt.Sprintf("xl/worksheets/sheet%d.xml", i+1)] = true
	}
	return parts, nil
}

// ignoreTextNumbers tells the spreadsheet program not to flag numbers that are
// stored as text.
func ignoreTextNumbers(text []byte) []byte {
	end := []byte("</headerFooter>")
	mark := []byte(`<ignoredErrors><ignoredError sqref="A1:XFD1048576" numberStoredAsText="1"/></ignoredErrors>`)
	return bytes.Replace(text, end, slices.Concat(end, mark), 1)
}
