package sitefile

import (
	"bytes"
	"io/fs"
	"strings"
	"time"

	"example.org/standclear/exposure/units"
)

// exportLead marks the lines that an instrument writes before the header of its
// export as comments, so that the table is read as it is: the header is the
// first line of which two cells or more are names of the readings table, or
// names that the columns table maps. Lines keep their numbers.
func exportLead(data []byte, names map[string]bool) (out []byte, lead int) {
	if bytes.HasPrefix(data, []byte("\xff\xfe")) || bytes.HasPrefix(data, []byte("\xfe\xff")) || bytes.HasPrefix(data, []byte("PK")) {
		return data, 0
	}
	rest := bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	var starts []int
	at := len(data) - len(rest)
	for range leadLines {
		if len(rest) == 0 {
			return data, 0
		}
		line := rest
		if i := bytes.IndexByte(rest, '\n'); i >= 0 {
			line = rest[:i+1]
		}
		text := strings.TrimSpace(string(line))
		switch {
		case text == "" || strings.HasPrefix(text, "#") || strings.HasPrefix(text, "sep="):
		case isHeader(text, names):
			if len(starts) == 0 {
				return data, 0
			}
			var b bytes.Buffer
			from := 0
			for _, s := range starts {
				b.Write(data[from:s])
				b.WriteString("# ")
				from = s
			}
			b.Write(data[from:])
			return b.Bytes(), len(starts)
		default:
			starts = append(starts, at)
		}
		at += len(line)
		rest = rest[len(line):]
	}
	return data, 0
}

func isHeader(line string, names map[string]bool) bool {
	for _, comma := range []string{",", ";", "\t"} {
		known := 0
		for _, c := range strings.Split(line, comma) {
			c = strings.ToLower(strings.TrimSpace(strings.Trim(strings.TrimSpace(c), `"`)))
			name, _, _ := splitHeader(c)
			if names[c] || names[name] {
				known++
			}
		}
		if known >= 2 {
			return true
		}
	}
	return false
}

// exported is exportLead for a file of the site folder.
func (l *loader) exported(name string, data []byte, columnsFile string) []byte {
	out, lead := exportLead(data, l.headerNames(columnsFile))
	if lead > 0 {
		l.warn(name, "", "%s before the header and not read", linesStand(lead))
	}
	return out
}

// headerNames are the names by which a header of the readings table is known:
// its columns and what the columns table maps to them, in lower case.
func (l *loader) headerNames(columnsFile string) map[string]bool {
	names := map[string]bool{}
	for _, c := range readingsTable.Columns {
		names[strings.ToLower(c.Name)] = true
	}
	if columnsFile == "" {
		return names
	}
	data, err := fs.ReadFile(l.fsys, columnsFile)
	if err != nil {
		return names
	}
	g, _ := readCSV(columnsFile, "columns", data, l.options.Windows1252)
	if len(g.rows) == 0 {
		return names
	}
	for i, h := range g.rows[0].cells {
		if strings.EqualFold(h, "from") {
			for _, r := range g.rows[1:] {
				names[strings.ToLower(r.cell(i))] = true
			}
		}
	}
	return names
}

// isUnitsRow reports whether a row holds units, and zones of time, and nothing
// else. A site's own readings beside exports have no such row.
func isUnitsRow(r gridRow) bool {
	known := 0
	for _, c := range r.cells {
		c = strings.Trim(c, "[]() ")
		if c == "" {
			continue
		}
		if _, ok := units.Lookup(c); !ok {
			if _, ok := parseZone(c); !ok {
				return false
			}
		}
		known++
	}
	return known > 0
}

// straighten makes an export of the readings table one like any other: the row
// of units joins the header, and local times take their stated zone.
func (l *loader) straighten(g *grid) {
	if g.table != "readings" || len(g.rows) == 0 {
		return
	}
	header := &g.rows[0]
	if l.options.UnitsRow && len(g.rows) > 1 && isUnitsRow(g.rows[1]) {
		below := g.rows[1]
		header.cells = append([]string(nil), header.cells...)
		for i, h := range header.cells {
			unit := strings.Trim(below.cell(i), "[]() ")
			if _, _, has := splitHeader(h); unit != "" && h != "" && !has {
				if m, ok := l.mappings[g.table][strings.ToLower(h)]; ok {
					// The mapping goes by the header as the export has it.
					l.mappings[g.table][strings.ToLower(h+" ["+unit+"]")] = mapping{m.to, unit}
				}
				header.cells[i] = h + " [" + unit + "]"
			}
		}
		g.rows = append([]gridRow{*header}, g.rows[2:]...)
		header = &g.rows[0]
	}
	for i, h := range header.cells {
		name, unit, hasUnit := splitHeader(h)
		m, isMapped := l.mappings[g.table][strings.ToLower(h)]
		if isMapped {
			name, unit, hasUnit = m.to, m.unit, m.unit != ""
		}
		if !strings.EqualFold(name, "time") || !hasUnit {
			continue
		}
		z, ok := parseZone(unit)
		if !ok {
			l.faults = append(l.faults, g.fault(*header, i, h, "%q is not a zone of time; write its offset, such as +01:00 or UTC", unit))
			z = zone{known: true}
		}
		if isMapped {
			l.mappings[g.table][strings.ToLower(h)] = mapping{to: m.to}
		} else {
			header.cells = append([]string(nil), header.cells...)
			header.cells[i] = name
		}
		c := clock{zone: z}
		for n := range g.rows[1:] {
			row := &g.rows[n+1]
			text := row.cell(i)
			ns, problem := c.parse([]byte(text))
			if text == "" || problem != "" {
				continue // the column's own check says what is wrong
			}
			row.cells = append([]string(nil), row.cells...)
			row.cells[i] = time.Unix(0, ns).In(time.FixedZone("", c.offsetS)).Format(time.RFC3339Nano)
		}
	}
}
