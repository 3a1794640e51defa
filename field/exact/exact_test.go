package exact_test

import (
	"testing"

	"shearprint/field/exact"
)

// Every case must be a valid surface of the Euler characteristic that it claims, its points must be zeros of its own
// tau, and their indices must add up to its own sum.
func TestCasesAreConsistent(t *testing.T) {
	for _, c := range exact.Cases() {
		f := c.Field(2000)
		if got := f.Euler(); got != c.Euler {
			t.Errorf("%s: Euler characteristic %d, want %d", c.Name, got, c.Euler)
		}
		if len(f.Findings) > 0 {
			t.Errorf("%s: the mesh needed repair: %+v", c.Name, f.Findings)
		}
		if c.Euler+c.BoundaryTerm != c.IndexSum {
			t.Errorf("%s: chi %d + term %d is not the sum %d", c.Name, c.Euler, c.BoundaryTerm, c.IndexSum)
		}
		if c.Points == nil {
			continue
		}
		sum := 0
		for _, p := range c.Points {
			sum += p.Index
			if tau := c.Tau(p.Position).Norm(); tau > 1e-12 {
				t.Errorf("%s: tau is %g at the point %v", c.Name, tau, p.Position)
			}
		}
		if sum != c.IndexSum {
			t.Errorf("%s: indices of the points sum to %d, want %d", c.Name, sum, c.IndexSum)
		}
	}
}
