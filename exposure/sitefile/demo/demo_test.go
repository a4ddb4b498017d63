package demo_test

import (
	"context"
	"io/fs"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/exposure"
	"example.org/standclear/exposure/sitefile"
	"example.org/standclear/exposure/sitefile/demo"
)

func load(t *testing.T) *exposure.Site {
	t.Helper()
	site, err := sitefile.LoadFS(demo.FS, sitefile.Options{})
	require.NoError(t, err)
	return site
}

// The demo shows what a real site has: many rows in shared housings, several
// operators, a shared signal, several classes, pattern files in each open form.
func TestDemoIsRich(t *testing.T) {
	site := load(t)
	assert.GreaterOrEqual(t, len(site.Sources), 24)
	housings, operators, signals, unconfirmed := map[string]int{}, map[string]bool{}, map[string]int{}, 0
	for _, s := range site.Sources {
		if s.Housing != "" {
			housings[s.Housing]++
		}
		operators[s.Operator] = true
		if s.Signal != "" {
			signals[s.Signal]++
		}
		if s.DataFrom == "" {
			unconfirmed++
		}
	}
	assert.GreaterOrEqual(t, len(housings), 9)
	assert.Len(t, operators, 5)
	assert.Equal(t, map[string]int{"FM 98.4": 2}, signals)
	assert.Positive(t, unconfirmed, "a row that nobody answers for is part of the lesson")
	assert.Len(t, site.Operators, 5)
	assert.Len(t, site.Surfaces, 4)
	assert.GreaterOrEqual(t, len(site.Places), 12)
	assert.Equal(t, []string{"public", "occupational"}, site.Limits.Classes())
	assert.False(t, site.Limits.Confirmed(), "the demo shows what an unchecked table looks like")
	assert.True(t, site.About.HasPosition)

	forms := map[string]bool{}
	require.NoError(t, fs.WalkDir(demo.FS, ".", func(name string, d fs.DirEntry, err error) error {
		if i := strings.LastIndexByte(name, '.'); err == nil && strings.HasPrefix(name, "panel-") {
			forms[name[i:]] = true
		}
		return err
	}))
	assert.Equal(t, map[string]bool{".csv": true, ".txt": true, ".json": true}, forms)
}

// Something on the demo site is above the limits supplied, something near them
// and something far below; each for the class that may be there.
func TestDemoHasEveryVerdict(t *testing.T) {
	site := load(t)
	model, err := exposure.New(site, exposure.Options{})
	require.NoError(t, err)
	points, err := model.Field(context.Background(), site.Places)
	require.NoError(t, err)
	above, near, far := 0, 0, 0
	for _, p := range points {
		for _, r := range p.Ratios {
			if r.Class != p.Class {
				continue
			}
			require.True(t, r.Covered, "%s: %s", p.ID, r.Reason)
			switch x := float64(r.ExposureRatio); {
			case x > 1:
				above++
				assert.Equal(t, exposure.Above, r.Verdict, p.ID)
			case x > 0.5:
				near++
			case x < 0.02:
				far++
			}
			t.Logf("%-20s %-13s %8.4f  %s", p.ID, r.Class, float64(r.ExposureRatio), r.Verdict)
		}
	}
	assert.Positive(t, above)
	assert.Positive(t, near)
	assert.Positive(t, far)
}
