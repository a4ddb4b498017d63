package sitefile

import (
	"bytes"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func fillInBytes(t testing.TB) []byte {
	t.Helper()
	var b bytes.Buffer
	require.NoError(t, writeFillIn(&b))
	return b.Bytes()
}

// TestFillInWorkbookReadsAsEmptyTables: the workbook as written is every table
// with its header and nothing under it; the example row is not read.
func TestFillInWorkbookReadsAsEmptyTables(t *testing.T) {
	grids, faults, warnings := readWorkbook("site.xlsx", fillInBytes(t), tableNames())
	require.Empty(t, faults)
	require.Empty(t, warnings)
	var names []string
	for _, g := range grids {
		names = append(names, g.table)
		assert.Empty(t, g.warnings, g.table)
		schema := tableSchema(g.table)
		require.NotEmpty(t, g.rows, g.table)
		if schema.Vertical {
			assert.Len(t, g.rows, 1+len(schema.Columns), g.table)
			continue
		}
		assert.Len(t, g.rows, 1, g.table)
		assert.Len(t, g.rows[0].cells, len(schema.Columns), g.table)
		for _, c := range schema.Columns {
			assert.Contains(t, g.rows[0].cells, c.Header(), g.table)
		}
	}
	assert.Equal(t, tableNames(), names)
}

// TestSameWorkbookSameBytes: 20 builds, one result.
func TestSameWorkbookSameBytes(t *testing.T) {
	first := fillInBytes(t)
	builds := 20
	if testing.Short() {
		builds = 4
	}
	for range builds - 1 {
		require.True(t, bytes.Equal(first, fillInBytes(t)))
	}
}
