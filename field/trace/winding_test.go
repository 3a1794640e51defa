package trace_test

import (
	"context"
	"testing"

	"shearprint/field/exact"
	"shearprint/field/trace"
)

// A spiral that hardly closes in would take ten thousand turns to its middle: it is given up after some hundreds, with
// the places of those only.
func TestSlowSpiralsEnd(t *testing.T) {
	const pitch = 1e-5
	f := flat(t, exact.Disk(1, 4000), func(x, y float64) (float64, float64) { return -y - pitch*x, x - pitch*y })
	for _, r := range []float64{0.004, 0.03, 0.3} {
		p := trace.New(f, nil, nil).Trace(context.Background(), at(f, r, 0), trace.Options{MaxLength: 1e6})
		if p.End == trace.Rim || p.End == trace.Captured || p.End == trace.Halted {
			t.Errorf("from %g: ends because %v", r, p.End)
		}
		if n := len(p.Locs); n > 200_000 {
			t.Errorf("from %g: %d places", r, n)
		}
	}
}
