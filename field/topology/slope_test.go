package topology_test

import (
	"math"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// On a plane with a quadratic field the fit must give the derivatives to rounding.
func TestSlopeOfAQuadraticField(t *testing.T) {
	raw := exact.Shake(exact.Disk(1, 800), 0.3, 5, exact.OntoPlane)
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = r3.Vec{X: 2 + 3*p.X - p.Y + p.X*p.Y, Y: 1 + p.X*p.X - 4*p.Y}
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range []r3.Vec{{}, {X: 0.3, Y: -0.2}, {X: -0.5, Y: 0.1}} {
		loc, _ := f.Nearest(p)
		got := topology.SlopeAt(f, loc)
		want := [2][2]float64{{3 + p.Y, -1 + p.X}, {2 * p.X, -4}}
		for i := range 2 {
			for k := range 2 {
				if math.Abs(got.Jacobian[i][k]-want[i][k]) > 1e-9 {
					t.Errorf("at %v: got %v, want %v", p, got.Jacobian, want)
				}
			}
		}
		if !got.Fitted || got.Normal.Sub(r3.Vec{Z: 1}).Norm() > 1e-12 {
			t.Errorf("at %v: fitted %v, normal %v", p, got.Fitted, got.Normal)
		}
	}
}

// At a critical point the slope is the point's own Jacobian, in any frame: trace and determinant do not depend on it.
func TestSlopeAgreesWithThePoint(t *testing.T) {
	for _, c := range exact.Cases() {
		if len(c.Points) == 0 {
			continue
		}
		f := c.Field(8000)
		for _, want := range c.Points {
			loc, _ := f.Nearest(want.Position)
			got := topology.SlopeAt(f, loc)
			trace := real(want.Eigenvalues[0] + want.Eigenvalues[1])
			det := real(want.Eigenvalues[0] * want.Eigenvalues[1])
			size := math.Max(math.Hypot(real(want.Eigenvalues[0]), imag(want.Eigenvalues[0])),
				math.Hypot(real(want.Eigenvalues[1]), imag(want.Eigenvalues[1])))
			if size == 0 { // not compared
				continue
			}
			if math.Abs(got.Trace-trace) > 0.06*size || math.Abs(got.Determinant-det) > 0.06*size*size {
				t.Errorf("%s at %v: trace %g, determinant %g; want %g and %g", c.Name, want.Position, got.Trace, got.Determinant,
					trace, det)
			}
		}
	}
}
