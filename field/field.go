package field

import (
	"math"

	"shearprint/field/r3"
)

// Field is a tangent vector field with its pressures on a mesh: what every computation here takes. It is immutable.
type Field struct {
	*Mesh
	Name string
	// Tau holds, per vertex, the wall shear stress in the vertex's polar chart (see Mesh.ChartAngle): Units.Tau.
	Tau []r3.Vec2
	// Tau3 holds the same vectors in space, tangent to Normals.
	Tau3 []r3.Vec
	// P and Cp are the pressure and the pressure coefficient per vertex; nil where the run has none. Never NaN.
	P, Cp    []float64
	Units    Units
	Findings []Finding
	// MaxTau is the largest |tau| over the vertices.
	MaxTau float64

	size, angle []float64 // Tau in polar form
}

// ZeroFraction is the share of the largest |tau| of the run below which a vertex counts as an exact zero: symmetric data
// carry rounding errors of 1e-16 where the true value is nought, and single-precision files are rounded at 6e-8, so that
// 1e-12 separates the first from the second.
const ZeroFraction = 1e-12

// IsZero tells whether tau vanishes at vertex v.
func (f *Field) IsZero(v int32) bool {
	return f.size[v] <= ZeroFraction*f.MaxTau
}

// Size returns |tau| at vertex v.
func (f *Field) Size(v int32) float64 { return f.size[v] }

// Angle returns the direction of tau in the chart of vertex v, in (-pi, pi]; 0 where tau is zero.
func (f *Field) Angle(v int32) float64 { return f.angle[v] }

// CornerTau returns tau at the three corners of triangle t in its flat frame (see Mesh.Flat). Between the corners tau is
// linear. The frames of neighbours agree along their common edge up to the angle defect of its ends.
func (f *Field) CornerTau(t int32) [3]r3.Vec2 {
	var c [3]r3.Vec2
	for k := int32(0); k < 3; k++ {
		v := f.Tris[t][k]
		c[k] = r3.Polar(f.size[v], f.FlatAngle(3*t+k, f.angle[v]))
	}
	return c
}

// Sample is what the run says at one place.
type Sample struct {
	Tau  r3.Vec2 // in the triangle's flat frame
	Tau3 r3.Vec  // in space, in the triangle's plane
	P    float64 // NaN where the run has none
	Cp   float64 // NaN where the run has none
}

// At returns the interpolated values at l.
func (f *Field) At(l Loc) Sample {
	c := f.CornerTau(l.Tri)
	var s Sample
	for k := range 3 {
		s.Tau = s.Tau.AddScaled(l.Bary[k], c[k])
	}
	s.Tau3 = f.Lift(l.Tri, s.Tau)
	s.P, s.Cp = f.scalar(f.P, l), f.scalar(f.Cp, l)
	return s
}

func (f *Field) scalar(x []float64, l Loc) float64 {
	if x == nil {
		return math.NaN()
	}
	var s float64
	for k, v := range f.Tris[l.Tri] {
		s += float64(l.Bary[k] * x[v])
	}
	return s
}
