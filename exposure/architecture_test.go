package exposure_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

const module = "example.org/standclear"

// root is the top of the module, seen from this package.
var root = ".."

// mayImport lists what each room may import of the project. A room is a folder
// with everything under it, the longest name that fits; every room may import
// from itself. Arrows run down only.
var mayImport = map[string][]string{
	"antenna":                {},
	"limits":                 {},
	"exposure/units":         {},
	"exposure/sitefile/demo": {},
	"exposure":               {"antenna", "limits"},
	"exposure/survey":        {"exposure", "exposure/units", "antenna", "limits"},
	"exposure/sitefile":      {"exposure/sitefile/demo", "exposure/survey", "exposure", "exposure/units", "antenna", "limits"},
	"reports":                {"exposure/survey", "exposure", "exposure/units", "antenna", "limits"},
	"cmd":                    {"reports", "exposure/sitefile", "exposure/sitefile/demo", "exposure/survey", "exposure", "exposure/units", "antenna", "limits"},
}

// mayOpenFiles lists the rooms that touch the file system; the others read from
// an io.Reader and write to an io.Writer.
var mayOpenFiles = []string{"exposure/sitefile", "reports", "cmd"}

// roomOf returns the room of a folder, "" where it is in none.
func roomOf(folder string) string {
	for ; folder != "."; folder = path.Dir(folder) {
		if _, ok := mayImport[folder]; ok {
			return folder
		}
	}
	return ""
}

// source is one Go file of the project.
type source struct {
	name   string // exposure/site.go
	folder string // exposure
	test   bool
	fset   *token.FileSet
	file   *ast.File
}

// readSources parses every Go file of the project, in order of name.
func readSources(t *testing.T) []source {
	t.Helper()
	var out []source
	err := filepath.WalkDir(root, func(name string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		rel, err := filepath.Rel(root, name)
		if err != nil {
			return err
		}
		rel = filepath.ToSlash(rel)
		if d.IsDir() {
			if rel != "." && (strings.HasPrefix(d.Name(), ".") || d.Name() == "testdata") {
				return fs.SkipDir
			}
			return nil
		}
		if !strings.HasSuffix(rel, ".go") {
			return nil
		}
		fset := token.NewFileSet()
		f, err := parser.ParseFile(fset, name, nil, parser.ParseComments)
		if err != nil {
			return err
		}
		out = append(out, source{rel, path.Dir(rel), strings.HasSuffix(rel, "_test.go"), fset, f})
		return nil
	})
	require.NoError(t, err)
	require.NotEmpty(t, out)
	return out
}

func importsOf(f *ast.File) []string {
	var out []string
	for _, i := range f.Imports {
		p, _ := strconv.Unquote(i.Path.Value)
		out = append(out, p)
	}
	return out
}

// arrowFaults returns what is wrong with the imports of a file in a folder.
func arrowFaults(folder string, imports []string) []string {
	var out []string
	room := roomOf(folder)
	if room == "" {
		return []string{folder + " belongs to no room"}
	}
	for _, p := range imports {
		if p == "os" && !slices.Contains(mayOpenFiles, room) {
			out = append(out, room+" must not touch files")
		}
		to, inside := strings.CutPrefix(p, module+"/")
		if !inside {
			continue
		}
		if r := roomOf(to); r != room && !slices.Contains(mayImport[room], r) {
			out = append(out, room+" must not import "+to)
		}
	}
	return out
}

func TestArrowsRunDown(t *testing.T) {
	for _, s := range readSources(t) {
		if s.test {
			continue // a test may look at the house from outside
		}
		for _, fault := range arrowFaults(s.folder, importsOf(s.file)) {
			t.Errorf("%s: %s", s.name, fault)
		}
	}
	// The check itself can fail.
	assert.Len(t, arrowFaults("antenna", []string{"math", module + "/limits"}), 1)
	assert.Len(t, arrowFaults("exposure", []string{"os", module + "/exposure/sitefile"}), 2)
	assert.Len(t, arrowFaults("reports/figure", []string{module + "/cmd/standclear"}), 1)
	assert.Len(t, arrowFaults("attic", nil), 1)
	assert.Empty(t, arrowFaults("reports", []string{"os", module + "/reports/figure", module + "/exposure"}))
}

// No result may depend on the clock: only the program itself may look at it.
func TestNoClockBelowTheProgram(t *testing.T) {
	for _, s := range readSources(t) {
		if s.test || roomOf(s.folder) == "cmd" {
			continue
		}
		ast.Inspect(s.file, func(n ast.Node) bool {
			if c, ok := n.(*ast.SelectorExpr); ok {
				if x, ok := c.X.(*ast.Ident); ok && x.Name == "time" && (c.Sel.Name == "Now" || c.Sel.Name == "Since") {
					t.Errorf("%s: time.%s", s.fset.Position(c.Pos()), c.Sel.Name)
				}
			}
			return true
		})
	}
}

func TestTopLevel(t *testing.T) {
	want := []string{"DEVELOPERS.md", "LICENSE", "README.md", "SAFETY.md", "antenna", "cmd", "exposure", "go.mod", "go.sum", "limits", "reports", "testdata"}
	ignored, err := os.ReadFile(filepath.Join(root, ".gitignore"))
	require.NoError(t, err)
	var got []string
	entries, err := os.ReadDir(root)
	require.NoError(t, err)
	for _, e := range entries {
		name := e.Name()
		leftover := slices.ContainsFunc(strings.Fields(string(ignored)), func(p string) bool {
			ok, _ := path.Match(strings.Trim(p, "/"), name)
			return ok
		})
		if !strings.HasPrefix(name, ".") && !leftover {
			got = append(got, name)
		}
	}
	assert.Equal(t, want, got)
}
