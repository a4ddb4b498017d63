package figure

import (
	"testing"

	"github.com/stretchr/testify/require"
)

func TestPlanOfTheSample(t *testing.T) {
	f, err := Plan(samplePlan())
	require.NoError(t, err)
	show(t, "plan", f)
	d := samplePlan()
	d.Grid = nil
	f, err = Plan(d)
	require.NoError(t, err)
	show(t, "plan-nogrid", f)
}
