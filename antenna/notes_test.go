package antenna

import (
	"go/ast"
	"go/parser"
	"go/token"
	"os"
	"regexp"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// Every citation in a doc comment has its row, every row is complete, and the
// check it names is a test of this package.
func TestMethodNotes(t *testing.T) {
	files, err := os.ReadDir(".")
	require.NoError(t, err)
	cites := regexp.MustCompile(`Source: \[([A-Z0-9-]+)\]\.`)
	tests, cited := map[string]bool{}, map[string]string{}
	for _, e := range files {
		if !strings.HasSuffix(e.Name(), ".go") {
			continue
		}
		file, err := parser.ParseFile(token.NewFileSet(), e.Name(), nil, parser.ParseComments)
		require.NoError(t, err)
		for _, d := range file.Decls {
			fn, ok := d.(*ast.FuncDecl)
			if !ok {
				continue
			}
			if strings.HasPrefix(fn.Name.Name, "Test") {
				tests[fn.Name.Name] = true
			}
			for _, m := range cites.FindAllStringSubmatch(strings.Join(strings.Fields(fn.Doc.Text()), " "), -1) {
				cited[m[1]] = fn.Name.Name
			}
		}
	}
	ids := map[string]bool{}
	for _, n := range Methods() {
		assert.False(t, ids[n.ID], "%s twice", n.ID)
		ids[n.ID] = true
		for _, s := range []string{n.ID, n.Name, n.Formula, n.Range, n.Errs, n.Source} {
			assert.NotEmpty(t, s, n.ID)
		}
		assert.True(t, tests[n.Check], "%s names the check %q, which is not a test here", n.ID, n.Check)
		if !strings.HasPrefix(n.ID, "FILE-") {
			assert.Contains(t, cited, n.ID, "no function cites it")
		}
	}
	for id, fn := range cited {
		assert.True(t, ids[id], "%s cites %s, which has no row", fn, id)
	}
}
