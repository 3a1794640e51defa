// Package exact is a catalogue of wall-shear fields whose answers are known: closed-form surfaces and fields together
// with their critical points, eigenvalues, index sums and the source of each value. Tests of every package run over it,
// and samples are made from it.
package exact

import (
	"shearprint/field"
	"shearprint/field/r3"
)

// Case is a field with its answer.
type Case struct {
	Name   string
	Source string // where the answer is from; "derived" where it was worked out for this package
	Euler  int    // Euler characteristic of the surface
	// IndexSum is the sum of all indices; BoundaryTerm is (interior - exterior tangencies)/2 over all rims.
	IndexSum, BoundaryTerm int
	Points                 []Point // every critical point; nil where only the sum is known
	// Surface returns a mesh of about the given number of triangles, without values.
	Surface func(triangles int) field.Raw
	// Tau and P are the exact wall shear stress [Pa] and pressure [Pa] at a point of the surface; P is nil where unknown.
	Tau func(p r3.Vec) r3.Vec
	P   func(p r3.Vec) float64
}

// Point is a critical point as it must be found.
type Point struct {
	Position    r3.Vec
	Type        string // "node", "focus", "saddle", "degenerate"
	Sense       string // "attachment", "separation", "neutral"
	Index       int
	Eigenvalues [2]complex128 // of the Jacobian [Pa/m], the larger real part first; zero where not compared
}

// Raw returns the case on a mesh of about the given number of triangles, with values at the points.
func (c Case) Raw(triangles int) field.Raw {
	raw := c.Surface(triangles)
	raw.Name = c.Name
	raw.Units = field.Units{Length: "m", Tau: "Pa", P: "Pa"}
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = c.Tau(p)
	}
	if c.P != nil {
		raw.P = make([]float64, len(raw.Points))
		for i, p := range raw.Points {
			raw.P[i] = c.P(p)
		}
	}
	return raw
}

// Field returns the case as a field on a mesh of about the given number of triangles. It panics if the case is not a
// valid surface, which is an error in this package.
func (c Case) Field(triangles int) *field.Field {
	f, err := field.Build(c.Raw(triangles))
	if err != nil {
		panic("exact: " + c.Name + ": " + err.Error())
	}
	return f
}

// Cases returns the whole catalogue.
func Cases() []Case {
	var all []Case
	for _, group := range [][]Case{sphereCases(), wallCases(), closedCases(), planeCases()} {
		all = append(all, group...)
	}
	return all
}
