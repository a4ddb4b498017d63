package sitefile

import (
	"errors"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/standclear/exposure"
)

// small is a site without faults on which each test changes one thing.
func small() map[string]string {
	return map[string]string{
		"site.csv": "item,value\nname,Mill Lane\nlatitude [deg],49.5\nlongitude [deg],66.5\n",
		"antennas.csv": "id,operator,housing,x [m],y [m],z [m],azimuth [deg],pattern,frequency [MHz],power [W],loss [dB],data from,data date\n" +
			"A1,Op,,10,5,6,120,isotropic,900,40,1,me,2026-01-01\n" +
			"A2,Op,,12,5,6,120,isotropic,1800,20,1,me,2026-01-01\n",
		"surfaces.csv": "id,outline,z [m],class\nroof,\"POLYGON((0 0, 30 0, 30 20, 0 20, 0 0))\",0,public\n",
		"places.csv":   "id,x [m],y [m],z [m],to [m],class\ndoor,2,3,0,2,public\n",
		"limits.csv":   "class,quantity,from [MHz],to [MHz],coefficient,unit,average [min],source\npublic,S,30,300000,10,W/m2,6,made up\n",
	}
}

// with returns the small site with files replaced.
func with(changes ...string) map[string]string {
	files := small()
	for i := 0; i < len(changes); i += 2 {
		files[changes[i]] = changes[i+1]
	}
	return files
}

// none leaves a column out.
const none = "-"

// antennaRow returns the small site whose antennas table is one row of the
// columns and cells given, beside a sound set of the others.
func antennaRow(pairs ...string) map[string]string {
	columns := []string{"id", "x [m]", "y [m]", "z [m]", "azimuth [deg]", "pattern", "frequency [MHz]", "power [W]", "data from", "data date"}
	cells := map[string]string{"id": "A1", "x [m]": "10", "y [m]": "5", "z [m]": "6", "azimuth [deg]": "120", "pattern": "isotropic", "frequency [MHz]": "900", "power [W]": "40", "data from": "me", "data date": "2026"}
	for i := 0; i < len(pairs); i += 2 {
		if _, known := cells[pairs[i]]; !known {
			columns = append(columns, pairs[i])
		}
		cells[pairs[i]] = pairs[i+1]
	}
	var header, row []string
	for _, c := range columns {
		if cells[c] != none {
			header, row = append(header, c), append(row, cells[c])
		}
	}
	return with("antennas.csv", strings.Join(header, ",")+"\n"+strings.Join(row, ",")+"\n")
}

func loadFiles(files map[string]string, o Options) (*exposure.Site, error) {
	fsys := fstest.MapFS{}
	for name, text := range files {
		if text != "" {
			fsys[name] = &fstest.MapFile{Data: []byte(text)}
		}
	}
	return LoadFS(fsys, o)
}

func mustLoad(t *testing.T, files map[string]string) *exposure.Site {
	t.Helper()
	s, err := loadFiles(files, Options{})
	require.NoError(t, err)
	return s
}

// faultLines returns the faults of a site, one a line.
func faultLines(t *testing.T, files map[string]string) []string {
	t.Helper()
	_, err := loadFiles(files, Options{})
	require.Error(t, err)
	var faults Faults
	require.True(t, errors.As(err, &faults), "%v", err)
	lines := make([]string, len(faults))
	for i, f := range faults {
		lines[i] = f.Error()
		assert.NotEmpty(t, f.File, lines[i])
	}
	return lines
}

func warningLines(s *exposure.Site) []string {
	var lines []string
	for _, w := range s.Inputs.Warnings {
		line := w.Place + ": "
		if w.Column != "" {
			line += w.Column + ": "
		}
		lines = append(lines, line+w.Message)
	}
	return lines
}
