package exposure_test

import (
	"go/ast"
	"go/token"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// promise matches the words that a result must never use about people: the
// model is not the site.
var promise = regexp.MustCompile(`(?i)\b(safe|safely|unsafe|harmless|compliant|guaranteed?|proven)\b`)

func TestNoPromisesInProgramText(t *testing.T) {
	for _, s := range readSources(t) {
		if s.test {
			continue
		}
		hidden := map[ast.Node]bool{} // import paths, struct tags, panics
		ast.Inspect(s.file, func(n ast.Node) bool {
			switch n := n.(type) {
			case *ast.ImportSpec:
				return false
			case *ast.Field:
				if n.Tag != nil {
					hidden[n.Tag] = true
				}
			case *ast.BasicLit:
				if n.Kind != token.STRING || hidden[n] {
					return true
				}
				text, err := strconv.Unquote(n.Value)
				require.NoError(t, err)
				if w := promise.FindString(text); w != "" {
					t.Errorf("%s: a user reads %q: %.80q", s.fset.Position(n.Pos()), w, text)
				}
			}
			return true
		})
	}
	assert.True(t, promise.MatchString("This place is safe."))
	assert.False(t, promise.MatchString("Safety Code 6 (2015)"))
}

func TestNoPromisesInDocuments(t *testing.T) {
	files := []string{"README.md", "SAFETY.md", "DEVELOPERS.md"}
	demo := filepath.Join("exposure", "sitefile", "demo", "site")
	require.NoError(t, filepath.WalkDir(filepath.Join(root, demo), func(name string, d fs.DirEntry, err error) error {
		if err == nil && !d.IsDir() {
			files = append(files, filepath.Join(demo, d.Name()))
		}
		return err
	}))
	for _, name := range files {
		b, err := os.ReadFile(filepath.Join(root, name))
		require.NoError(t, err)
		for i, line := range strings.Split(string(b), "\n") {
			if w := promise.FindString(line); w != "" {
				t.Errorf("%s:%d: %q", name, i+1, w)
			}
		}
	}
}
