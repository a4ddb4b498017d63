package sitefile

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure"
	"example.org/standclear/exposure/survey"
	"example.org/standclear/exposure/units"
	"example.org/standclear/limits"
)

// Options say what Load cannot learn from the site itself.
type Options struct {
	LimitsFile  string // a limit table of its own, in place of the site's
	PatternsDir string // where pattern files are looked for besides the site folder
	OnlyOn      bool   // drop the rows on standby
	// Ground replaces the ground method of the site table; nil = as it says.
	// Figures left zero are taken from the site table.
	Ground      *exposure.Ground
	Windows1252 bool // CSV files that are not UTF-8 are Windows-1252
	UnitsRow    bool // the row below the header of readings and logs holds units
}

// Load reads a site: a folder of CSV files, or one workbook. The error is a
// Faults with everything that is wrong, or what kept a file from being read.
func Load(name string, o Options) (*exposure.Site, error) {
	l, err := open(name, o)
	if err != nil {
		return nil, err
	}
	return l.site()
}

// LoadFS reads a site folder of any file system, such as the embedded demo.
func LoadFS(fsys fs.FS, o Options) (*exposure.Site, error) {
	l := newLoader(fsys, o)
	l.folder()
	return l.site()
}

// LoadLimits reads a limit table of its own: a CSV file, a workbook with the
// sheet limits, or a site folder or workbook that holds one.
func LoadLimits(name string, o Options) (*limits.Table, exposure.Inputs, error) {
	l := newLoader(os.DirFS("."), o)
	if !l.limitsFile(name) {
		return nil, exposure.Inputs{}, l.fatal
	}
	l.bindAll()
	table := l.limits()
	if err := l.failed(); err != nil {
		return nil, exposure.Inputs{}, err
	}
	return table, l.inputs(), nil
}

// LoadPlaces reads points from a file with the columns of places: a CSV file, or
// a workbook with that sheet. Surfaces and classes are those of the site.
func LoadPlaces(name string, site *exposure.Site, o Options) ([]exposure.Place, error) {
	data, err := readInput(name)
	if err != nil {
		return nil, err
	}
	l := newLoader(os.DirFS("."), o)
	l.surfaces = site.Surfaces
	if site.Limits != nil {
		l.classes = site.Limits.Classes()
	}
	base := filepath.Base(name)
	if isWorkbook(base, data) {
		l.sheets(base, data, []string{"places"})
	} else {
		l.csv(base, "places", data)
	}
	l.bindAll()
	if l.tables["places"] == nil && len(l.faults) == 0 {
		l.faults = append(l.faults, Fault{File: base, Message: "there is no sheet places in it; name the sheet so"})
	}
	places := l.places()
	if err := l.failed(); err != nil {
		return nil, err
	}
	return places, nil
}

// loader reads the tables of one input and binds them.
type loader struct {
	binder
	fsys    fs.FS
	options Options
	grids   []*grid
	tables  map[string]*bound
	files   []exposure.InputFile
	book    string // the workbook that holds the site, "" for a folder
	fatal   error

	about    exposure.About
	surfaces []exposure.Surface
	outlines map[string]outline
	classes  []string
	patterns map[patternKey]*patternFile
	built    map[builtKey]antenna.Pattern
	survey   survey.Survey

	waypoints []waypoint
}

func newLoader(fsys fs.FS, o Options) *loader {
	return &loader{fsys: fsys, options: o, tables: map[string]*bound{}, outlines: map[string]outline{},
		patterns: map[patternKey]*patternFile{}, built: map[builtKey]antenna.Pattern{}}
}

// readInput reads a file that the user named.
func readInput(name string) ([]byte, error) {
	data, err := os.ReadFile(name)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, Faults{{File: name, Message: "there is no such file; check its name"}}
	}
	return data, err
}

func isWorkbook(name string, data []byte) bool {
	ext := strings.ToLower(filepath.Ext(name))
	return ext == ".xlsx" || ext == ".xlsm" || ext == ".xls" || ext != ".csv" && strings.HasPrefix(string(data), "PK\x03\x04")
}

// record notes a file that was read.
func (l *loader) record(name string, data []byte) {
	sum := sha256.Sum256(data)
	f := exposure.InputFile{Name: name, SHA256: hex.EncodeToString(sum[:]), Bytes: int64(len(data))}
	if !slices.Contains(l.files, f) {
		l.files = append(l.files, f)
	}
}

func (l *loader) csv(file, table string, data []byte) {
	l.record(file, data)
	l.rowsOf(file, table, data)
}

// rowsOf reads the text of a CSV file that is recorded already.
func (l *loader) rowsOf(file, table string, data []byte) {
	g, faults := readCSV(file, table, data, l.options.Windows1252)
	if len(faults) > 0 {
		l.faults = append(l.faults, faults...)
	}
	if len(g.rows) > 0 || len(faults) == 0 {
		l.grids = append(l.grids, g)
	}
}

// sheets reads the sheets of a workbook; tables, where not nil, are the only
// ones that are taken.
func (l *loader) sheets(file string, data []byte, tables []string) {
	l.record(file, data)
	grids, faults, warnings := readWorkbook(file, data, tableNames())
	l.faults = append(l.faults, faults...)
	for _, w := range warnings {
		own := func(table string) bool {
			return w.Place == placeOf(file, table, "", 0) || strings.HasPrefix(w.Place, placeOf(file, table, "", 0)+"!")
		}
		if tables == nil || slices.ContainsFunc(tables, own) {
			l.warnings = append(l.warnings, w)
		}
	}
	for _, g := range grids {
		if tables == nil || slices.Contains(tables, g.table) {
			l.grids = append(l.grids, g)
		}
	}
}

// workbook reads a site workbook that lies in l.fsys.
func (l *loader) workbook(name string, data []byte) {
	if data == nil {
		var err error
		if data, err = fs.ReadFile(l.fsys, name); err != nil {
			l.fatal = err
			return
		}
	}
	if !isWorkbook(name, data) {
		l.fatal = Faults{{File: name, Message: "this is neither a folder nor a workbook; give a site folder or an .xlsx file"}}
		return
	}
	l.book = name
	l.sheets(name, data, nil)
}

// folder reads the CSV files of a site folder.
func (l *loader) folder() {
	entries, err := fs.ReadDir(l.fsys, ".")
	if err != nil {
		l.fatal = err
		return
	}
	byTable := map[string]string{}
	var workbooks, gpx []string
	for _, e := range entries {
		ext := strings.ToLower(path.Ext(e.Name()))
		stem := strings.Join(strings.Fields(strings.ToLower(strings.TrimSuffix(e.Name(), path.Ext(e.Name())))), " ")
		switch {
		case e.IsDir() || strings.HasPrefix(e.Name(), "."):
		case ext == ".xlsx" && !strings.HasPrefix(e.Name(), "~"):
			workbooks = append(workbooks, e.Name())
		case ext == ".gpx":
			gpx = append(gpx, e.Name())
		case ext != ".csv":
		case tableSchema(stem) == nil:
			if near := units.NearName(stem, tableNames()); near != "" {
				l.warn(e.Name(), "", "the file is not read: no table has its name; if it is meant to be %s, name it %s.csv", near, near)
			}
		case byTable[stem] != "":
			l.faults = append(l.faults, Fault{File: e.Name(), Message: fmt.Sprintf("%s is the table %s as well; keep one", byTable[stem], stem)})
		default:
			byTable[stem] = e.Name()
		}
	}
	if byTable["antennas"] == "" && byTable["site"] == "" && len(workbooks) > 0 {
		l.fatal = Faults{{File: "antennas.csv", Message: fmt.Sprintf("the folder has no table antennas; to read the workbook in it, give %s by name", workbooks[0])}}
		return
	}
	for _, name := range gpx {
		data, err := fs.ReadFile(l.fsys, name)
		if err != nil {
			l.fatal = err
			return
		}
		l.gpx(name, data)
	}
	for _, t := range schema {
		name := byTable[t.Name]
		if name == "" {
			continue
		}
		if t.Name == "limits" && l.options.LimitsFile != "" {
			l.warn(name, "", "the file is not read: the limits come from %s", filepath.Base(l.options.LimitsFile))
			continue
		}
		if strings.HasPrefix(t.Name, "limits ") && l.options.LimitsFile != "" {
			continue
		}
		data, err := fs.ReadFile(l.fsys, name)
		if err != nil {
			l.fatal = err
			return
		}
		if t.Name == "readings" {
			l.record(name, data)
			l.rowsOf(name, t.Name, l.exported(name, data, byTable["columns"]))
			continue
		}
		l.csv(name, t.Name, data)
	}
}

// limitsFile reads the limit table that the user named.
func (l *loader) limitsFile(name string) bool {
	if info, err := os.Stat(name); err == nil && info.IsDir() {
		name = filepath.Join(name, "limits.csv")
	}
	data, err := readInput(name)
	if err != nil {
		l.fatal = err
		return false
	}
	base := filepath.Base(name)
	if isWorkbook(base, data) {
		l.sheets(base, data, []string{"limits", "limits about", "limits spots"})
		if len(l.grids) == 0 && len(l.faults) == 0 {
			l.faults = append(l.faults, Fault{File: base, Message: "there is no sheet limits in it; name the sheet so"})
		}
		return true
	}
	l.csv(base, "limits", data)
	return true
}

// bindAll understands headers and cells of every table.
func (l *loader) bindAll() {
	slices.SortStableFunc(l.grids, func(a, b *grid) int { return tableRank(a.table) - tableRank(b.table) })
	for _, g := range l.grids { // first, since it says how others are read
		if g.table == "columns" {
			l.bindColumns(g)
		}
	}
	for _, g := range l.grids {
		if g.table != "columns" {
			l.straighten(g)
			l.tables[g.table] = l.bind(g)
		}
	}
}

func tableRank(name string) int {
	return slices.IndexFunc(schema, func(t TableSchema) bool { return t.Name == name })
}

// bindColumns reads the mappings of headers.
func (l *loader) bindColumns(g *grid) {
	t := l.bind(g)
	l.tables["columns"] = t
	l.mappings = map[string]map[string]mapping{}
	for n := range t.records {
		r := &t.records[n]
		name := strings.ToLower(r.text("table"))
		s := tableSchema(name)
		if s == nil {
			if r.sound("table") && r.has("table") {
				l.fault(r, "table", "there is no table %q%s", name, didYouMean(name, tableNames()))
			}
			continue
		}
		if l.mappings[name] == nil {
			l.mappings[name] = map[string]mapping{}
		}
		from := strings.ToLower(r.text("from"))
		if _, twice := l.mappings[name][from]; twice {
			l.fault(r, "from", "%q is mapped twice; keep one row", r.text("from"))
			continue
		}
		l.mappings[name][from] = mapping{r.text("to"), l.mappedUnit(r)}
	}
}

// mappedUnit returns the unit of a mapped column, or the zone of its times.
func (l *loader) mappedUnit(r *record) string {
	text := r.text("unit")
	if text == "" {
		return ""
	}
	if strings.EqualFold(r.text("to"), "time") {
		if _, ok := parseZone(text); !ok {
			l.fault(r, "unit", "%q is not a zone of time; write its offset, such as +01:00 or UTC", text)
		}
		return text
	}
	u, ok := units.Lookup(text)
	if !ok {
		hint := "write a unit such as V/m, A/m, uT or W/m2"
		if near := units.Near(text); near != "" {
			hint = "did you mean " + near + "?"
		}
		l.fault(r, "unit", "%q is not a unit that can stand here; %s", text, hint)
		return ""
	}
	return u.Symbol
}

// didYouMean is the end of a message about an unknown name.
func didYouMean(name string, names []string) string {
	if near := units.NearName(name, names); near != "" {
		return fmt.Sprintf("; did you mean %q?", near)
	}
	if len(names) > 0 && len(names) <= 16 {
		return "; it may be one of " + strings.Join(names, ", ")
	}
	return ""
}

// rows returns the records of a table, none where the input has no such table.
func (l *loader) rows(table string) []record {
	if t := l.tables[table]; t != nil {
		return t.records
	}
	return nil
}

// failed returns the faults as an error, or nil.
func (l *loader) failed() error {
	if l.fatal != nil {
		return l.fatal
	}
	if len(l.faults) == 0 {
		return nil
	}
	rank := map[[2]string]int{}
	for _, g := range l.grids {
		rank[[2]string{g.file, g.sheet}] = tableRank(g.table) + 1
	}
	columns := map[[2]string]map[string]int{}
	for _, t := range l.tables {
		m := map[string]int{}
		for i, c := range t.input.Columns {
			m[c.Header] = i + 1
		}
		columns[[2]string{t.grid.file, t.grid.sheet}] = m
	}
	return l.faults.sorted(func(f Fault) (int, int) {
		k := [2]string{f.File, f.Sheet}
		table, ok := rank[k]
		if !ok {
			table = len(schema) + 1
			if f.Row == 0 && f.Sheet == "" {
				table = 0
			}
		}
		return table, columns[k][f.Column]
	})
}

// inputs returns what was read, as typed.
func (l *loader) inputs() exposure.Inputs {
	in := exposure.Inputs{Files: l.files, Warnings: l.warnings}
	for _, t := range schema {
		if b := l.tables[t.Name]; b != nil {
			in.Tables = append(in.Tables, b.input)
		}
	}
	return in
}

// site binds the tables of a site.
func (l *loader) site() (*exposure.Site, error) {
	if l.fatal == nil && l.options.LimitsFile != "" {
		l.grids = slices.DeleteFunc(l.grids, func(g *grid) bool {
			own := g.table == "limits" || strings.HasPrefix(g.table, "limits ")
			if own && g.table == "limits" {
				l.warn(g.place(0), "", "the table is not read: the limits come from %s", filepath.Base(l.options.LimitsFile))
			}
			return own
		})
		l.limitsFile(l.options.LimitsFile)
	}
	if l.fatal != nil {
		return nil, l.fatal
	}
	raw := l.untouched()
	l.bindAll()
	for _, t := range schema {
		if t.Required && l.tables[t.Name] == nil && !l.brokenFile(t.Name) {
			l.faults = append(l.faults, Fault{File: l.fileOf(t.Name), Sheet: l.sheetOf(t.Name), Message: "the table is missing; every site needs it: " + t.Help})
		}
	}
	s := &exposure.Site{OnlyOn: l.options.OnlyOn}
	s.About, s.Ground = l.siteTable()
	l.about = s.About
	s.Limits = l.limits()
	if s.Limits != nil {
		l.classes = s.Limits.Classes()
	} else if l.tables["limits"] == nil && !l.brokenFile("limits") {
		l.faults = append(l.faults, Fault{File: l.fileOf("limits"), Sheet: l.sheetOf("limits"), Message: "there is no limit table; put one there, or name one with --limits"})
	}
	s.Operators = l.operators()
	s.Surfaces = l.surfaceTable()
	s.Places = l.places()
	s.Places = append(s.Places, l.waypointPlaces(s.Places)...)
	s.Sources = l.antennas()
	l.surveyTables(s)
	s.Scenarios = l.scenarios(raw)
	if err := l.failed(); err != nil {
		return nil, err
	}
	l.warnSite(s)
	s.Inputs = l.inputs()
	return s, nil
}

func (l *loader) fileOf(table string) string {
	if l.book != "" {
		return l.book
	}
	return table + ".csv"
}

func (l *loader) sheetOf(table string) string {
	if l.book != "" {
		return table
	}
	return ""
}

// brokenFile reports whether the table's file could not be read at all, which
// is a fault already.
func (l *loader) brokenFile(table string) bool {
	return slices.ContainsFunc(l.faults, func(f Fault) bool {
		return f.File == l.fileOf(table) && f.Row == 0 && (f.Sheet == "" || f.Sheet == table)
	})
}
