package sitefile

import (
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"net/url"
	"path"
	"strings"
)

// workbookScan is what the parts of a workbook hold, read on its own before the
// spreadsheet library reads the cells.
type workbookScan struct {
	date1904 bool
	formats  []numberFormat // by cell style
	texts    []string       // that cells refer to by number
	sheets   []sheetScan    // in the order of the workbook
}

// sheetScan is the structure of one sheet.
type sheetScan struct {
	name          string
	hidden        bool
	rows          []rowScan
	merged        []cellRange
	hiddenColumns [][2]int
}

type rowScan struct {
	number int
	hidden bool
	cells  []cellScan
}

// cellScan is one cell as stored.
type cellScan struct {
	column  int    // from 1
	kind    string // the stored type; "" and n are numbers
	style   int
	formula bool
	stored  bool // there is a stored value, though it may be empty
	value   string
}

// cellRange is a rectangle of cells, both corners included, counted from 1.
type cellRange struct{ row1, col1, row2, col2 int }

// scanParts checks all parts of a workbook and how they hang together.
func scanParts(parts []part) (*workbookScan, error) {
	p := packageParts{byName: map[string]part{}}
	for _, one := range parts {
		p.byName[strings.ToLower(one.name)] = one
	}
	if err := p.checkKind(parts); err != nil {
		return nil, err
	}
	for _, one := range parts {
		name := strings.ToLower(one.name)
		if strings.HasPrefix(name, "xl/worksheets/sheet") {
			continue // each is walked to its end, or refused since it belongs to no sheet
		}
		if strings.HasSuffix(name, ".xml") || strings.HasSuffix(name, ".rels") {
			if err := checkXML(one); err != nil {
				return nil, err
			}
		}
	}
	for _, one := range parts {
		if strings.HasSuffix(strings.ToLower(one.name), ".rels") {
			if err := p.checkTargets(one); err != nil {
				return nil, err
			}
		}
	}
	return p.scan(parts)
}

// packageParts finds parts by name; the names do not regard case.
type packageParts struct{ byName map[string]part }

// checkKind tells a workbook without macros from all else that is a zip archive.
func (p packageParts) checkKind(parts []part) error {
	if m, ok := p.byName["mimetype"]; ok && bytes.Contains(m.data, []byte("opendocument")) {
		return errors.New("this is an OpenDocument file; save it as .xlsx")
	}
	types, ok := p.byName["[content_types].xml"]
	if !ok {
		return errors.New("this is a zip archive but not a workbook; if it is a packed folder of .csv files, unpack it")
	}
	for _, one := range parts {
		name := strings.ToLower(one.name)
		switch {
		case strings.HasSuffix(name, "vbaproject.bin"), strings.HasPrefix(name, "xl/macrosheets/"):
			return errors.New("the workbook carries macros; save it as .xlsx, which has none")
		case name == "xl/workbook.bin":
			return errors.New("this is a binary workbook (.xlsb); save it as .xlsx")
		}
	}
	if bytes.Contains(types.data, []byte("macroEnabled")) {
		return errors.New("the workbook carries macros; save it as .xlsx, which has none")
	}
	return nil
}

// checkXML runs a part through an XML decoder to its end.
func checkXML(one part) error {
	d := xml.NewDecoder(bytes.NewReader(one.data))
	elements := 0
	for {
		token, err := d.Token()
		if err == io.EOF && elements > 0 {
			return nil
		}
		if err == io.EOF {
			return damaged("part %s is empty", one.name)
		}
		if err != nil {
			return damaged("part %s: %v", one.name, err)
		}
		switch token.(type) {
		case xml.StartElement:
			elements++
		case xml.Directive:
			return damaged("part %s declares a document type, which a workbook does not", one.name)
		}
	}
}

type relationship struct {
	ID     string `xml:"Id,attr"`
	Type   string `xml:"Type,attr"`
	Target string `xml:"Target,attr"`
	Mode   string `xml:"TargetMode,attr"`
}

// relationships returns those of the named part, with targets as part names.
func (p packageParts) relationships(of string) ([]relationship, error) {
	dir, base := path.Split(of)
	one, ok := p.byName[strings.ToLower(dir+"_rels/"+base+".rels")]
	if !ok {
		return nil, nil
	}
	var doc struct {
		Relationship []relationship
	}
	if err := xml.Unmarshal(one.data, &doc); err != nil {
		return nil, damaged("part %s: %v", one.name, err)
	}
	var out []relationship
	seen := map[string]bool{}
	for _, r := range doc.Relationship {
		if seen[r.ID] {
			return nil, damaged("part %s uses the mark %q twice", one.name, r.ID)
		}
		seen[r.ID] = true
		if r.Mode == "External" || strings.HasPrefix(r.Target, "#") {
			continue
		}
		if t, err := url.PathUnescape(r.Target); err == nil {
			r.Target = t
		}
		if strings.HasPrefix(r.Target, "/") {
			r.Target = path.Clean(r.Target)[1:]
		} else {
			r.Target = path.Join(dir, r.Target)
		}
		out = append(out, r)
	}
	return out, nil
}

// checkTargets demands that all a relationship part points to is there.
func (p packageParts) checkTargets(rels part) error {
	dir, base := path.Split(rels.name)
	of := path.Join(path.Dir(strings.TrimSuffix(dir, "/")), base[:len(base)-len(".rels")])
	if of != "" && of != "." {
		if _, ok := p.byName[strings.ToLower(of)]; !ok && base != ".rels" {
			return damaged("part %s is missing", of)
		}
	} else {
		of = ""
	}
	list, err := p.relationships(of)
	if err != nil {
		return err
	}
	for _, r := range list {
		if _, ok := p.byName[strings.ToLower(r.Target)]; !ok {
			return damaged("part %s is missing", r.Target)
		}
	}
	return nil
}

// follow returns the target of the first relationship whose type ends so.
func follow(list []relationship, kind string) string {
	for _, r := range list {
		if strings.HasSuffix(r.Type, "/"+kind) {
			return r.Target
		}
	}
	return ""
}

// scan walks the workbook part, the shared strings, the styles and each sheet.
func (p packageParts) scan(parts []part) (*workbookScan, error) {
	root, err := p.relationships("")
	if err != nil {
		return nil, err
	}
	main := follow(root, "officeDocument")
	if main == "" || !strings.HasPrefix(strings.ToLower(main), "xl/") {
		return nil, errors.New("this is an office document but not a workbook; save the tables as .xlsx")
	}
	rels, err := p.relationships(main)
	if err != nil {
		return nil, err
	}
	var book struct {
		Properties struct {
			Date1904 string `xml:"date1904,attr"`
		} `xml:"workbookPr"`
		Sheets []struct {
			Name  string     `xml:"name,attr"`
			State string     `xml:"state,attr"`
			Attrs []xml.Attr `xml:",any,attr"`
		} `xml:"sheets>sheet"`
	}
	if err := xml.Unmarshal(p.byName[strings.ToLower(main)].data, &book); err != nil {
		return nil, damaged("part %s: %v", main, err)
	}
	scan := &workbookScan{date1904: truth(book.Properties.Date1904)}
	if scan.formats, err = p.styles(follow(rels, "styles")); err != nil {
		return nil, err
	}
	if scan.texts, err = p.sharedStrings(follow(rels, "sharedStrings")); err != nil {
		return nil, err
	}
	used, names := map[string]bool{}, map[string]bool{}
	for _, s := range book.Sheets {
		if names[strings.ToLower(s.Name)] || s.Name == "" {
			return nil, damaged("two sheets are named %q", s.Name)
		}
		names[strings.ToLower(s.Name)] = true
		target := ""
		for _, r := range rels {
			if r.ID == relationshipID(s.Attrs) {
				if !strings.HasSuffix(r.Type, "/worksheet") {
					target = "-" // a sheet that is one chart holds no cells
				} else {
					target = r.Target
				}
			}
		}
		switch {
		case target == "":
			return nil, damaged("the sheet %q is missing", s.Name)
		case target == "-":
			continue
		case used[strings.ToLower(target)]:
			return nil, damaged("two sheets share part %s", target)
		}
		used[strings.ToLower(target)] = true
		sheet, err := scanSheet(p.byName[strings.ToLower(target)], sheetLimits{name: s.Name, styles: len(scan.formats)})
		if err != nil {
			return nil, err
		}
		if err := sheet.check(len(scan.texts)); err != nil {
			return nil, err
		}
		sheet.hidden = s.State != "" && s.State != "visible"
		scan.sheets = append(scan.sheets, *sheet)
	}
	for _, one := range parts {
		name := strings.ToLower(one.name)
		if strings.HasPrefix(name, "xl/worksheets/") && strings.HasSuffix(name, ".xml") && !used[name] {
			return nil, damaged("part %s belongs to no sheet", one.name)
		}
	}
	if len(scan.sheets) == 0 {
		return nil, errors.New("the workbook has no sheet with cells")
	}
	return scan, nil
}

// relationshipID returns the r:id attribute of a sheet, whatever its prefix.
func relationshipID(attrs []xml.Attr) string {
	for _, a := range attrs {
		if a.Name.Local == "id" && a.Name.Space != "" {
			return a.Value
		}
	}
	return ""
}

func truth(s string) bool { return s == "1" || strings.EqualFold(s, "true") }

// sharedStrings returns the texts that cells refer to by number.
func (p packageParts) sharedStrings(name string) ([]string, error) {
	if name == "" {
		return nil, nil
	}
	if !strings.EqualFold(name, "xl/sharedStrings.xml") {
		return nil, fmt.Errorf("the workbook keeps its texts in %s, which is not read; open it in a spreadsheet program and save it again", name)
	}
	one := p.byName[strings.ToLower(name)]
	var doc struct {
		Items []struct {
			Text []string `xml:"t"`
			Runs []string `xml:"r>t"`
		} `xml:"si"`
	}
	if err := xml.Unmarshal(one.data, &doc); err != nil {
		return nil, damaged("part %s: %v", one.name, err)
	}
	texts := make([]string, len(doc.Items))
	for i, item := range doc.Items {
		texts[i] = strings.Join(item.Text, "") + strings.Join(item.Runs, "")
	}
	return texts, nil
}
