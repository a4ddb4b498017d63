package exposure_test

import (
	"go/ast"
	"reflect"
	"regexp"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/antenna"
	"example.org/standclear/exposure/survey"
)

var sourceMark = regexp.MustCompile(`Source:\s+\[([A-Za-z0-9-]+)\]`)

// isFormula is the rule for what must name its source: an exported function,
// not a method, that takes numbers only and returns numbers only (an error or a
// bool may follow them).
func isFormula(f *ast.FuncDecl) bool {
	if f.Recv != nil || !f.Name.IsExported() || f.Type.Results == nil || len(f.Type.Params.List) == 0 {
		return false
	}
	for _, p := range f.Type.Params.List {
		if !isNumber(p.Type) {
			return false
		}
	}
	numbers := 0
	for i, r := range f.Type.Results.List {
		id, ok := r.Type.(*ast.Ident)
		switch {
		case !ok:
			return false
		case id.Name == "float64" || id.Name == "complex128":
			numbers++
		case (id.Name == "error" || id.Name == "bool") && i == len(f.Type.Results.List)-1:
		default:
			return false
		}
	}
	return numbers > 0
}

func isNumber(e ast.Expr) bool {
	switch e := e.(type) {
	case *ast.Ident:
		return e.Name == "float64" || e.Name == "complex128" || e.Name == "int" || e.Name == "Gain"
	case *ast.SelectorExpr:
		return e.Sel.Name == "Gain"
	case *ast.ArrayType:
		return isNumber(e.Elt)
	case *ast.Ellipsis:
		return isNumber(e.Elt)
	}
	return false
}

func TestFormulasNameTheirSource(t *testing.T) {
	known := map[string]bool{}
	for _, m := range survey.Methods() {
		known[m.ID] = true
	}
	formulas := 0
	for _, s := range readSources(t) {
		room := roomOf(s.folder)
		if s.test {
			continue
		}
		for _, c := range s.file.Comments {
			for _, m := range sourceMark.FindAllStringSubmatch(c.Text(), -1) {
				if m[1] != "ID" && !known[m[1]] {
					t.Errorf("%s: [%s] is in no table of methods", s.fset.Position(c.Pos()), m[1])
				}
			}
		}
		if room != "antenna" && room != "limits" && room != "exposure" && room != "exposure/survey" {
			continue
		}
		for _, d := range s.file.Decls {
			f, ok := d.(*ast.FuncDecl)
			if !ok || !isFormula(f) {
				continue
			}
			formulas++
			if !sourceMark.MatchString(f.Doc.Text()) {
				t.Errorf("%s: formula %s does not say \"Source: [ID].\"", s.fset.Position(f.Pos()), f.Name.Name)
			}
		}
	}
	assert.Greater(t, formulas, 20, "the rule has stopped finding formulas")
}

func TestMethodsAreCompleteAndChecked(t *testing.T) {
	tests := map[string]bool{}
	for _, s := range readSources(t) {
		if !s.test {
			continue
		}
		for _, d := range s.file.Decls {
			if f, ok := d.(*ast.FuncDecl); ok && f.Recv == nil && strings.HasPrefix(f.Name.Name, "Test") {
				tests[f.Name.Name] = true
			}
		}
	}
	seen := map[string]bool{}
	for _, m := range survey.Methods() {
		assert.False(t, seen[m.ID], "[%s] stands twice", m.ID)
		seen[m.ID] = true
		v := reflect.ValueOf(m)
		for i := range v.NumField() {
			if v.Field(i).Kind() == reflect.String {
				assert.NotEmpty(t, v.Field(i).String(), "[%s] has no %s", m.ID, v.Type().Field(i).Name)
			}
		}
		assert.True(t, tests[m.Check], "[%s] is held by %s, which is no test", m.ID, m.Check)
		assert.Regexp(t, `^[A-Za-z0-9-]+$`, m.ID)
	}
}

// Methods hands out copies: nobody can change the table behind its back.
func TestMethodsAreCopied(t *testing.T) {
	a := survey.Methods()
	require.NotEmpty(t, a)
	a[0] = antenna.MethodNote{}
	assert.NotEmpty(t, survey.Methods()[0].ID)
}
