package exact

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// Matrix is a 3x3 matrix by rows.
type Matrix [3][3]float64

// Times returns the product with a vector.
func (m Matrix) Times(v r3.Vec) r3.Vec {
	row := func(i int) float64 { return m[i][0]*v.X + m[i][1]*v.Y + m[i][2]*v.Z }
	return r3.Vec{X: row(0), Y: row(1), Z: row(2)}
}

// Diagonal returns the diagonal matrix.
func Diagonal(a, b, c float64) Matrix { return Matrix{{a}, {0, b}, {0, 0, c}} }

const stokesSource = "Stokes flow past a sphere: Batchelor, An Introduction to Fluid Dynamics, 1967, sect. 4.9, and Kim " +
	"& Karrila, Microhydrodynamics, 1991 (formulas from memory, checked against the full velocity field)"

func unitSphere(triangles int) field.Raw { return Sphere(1, triangles) }

// StokesSphere is the unit sphere in creeping flow with viscosity 1 Pa s: the ambient flow is U plus rotation Omega plus
// strain E (symmetric, without trace), tau = (I - nn).(3/2 U + 3 Omega x n + 5 E.n).
func StokesSphere(u, omega r3.Vec, e Matrix) (tau func(r3.Vec) r3.Vec, p func(r3.Vec) float64) {
	tau = func(x r3.Vec) r3.Vec {
		n := x.Unit()
		t := u.Scale(1.5).Add(omega.Cross(n).Scale(3)).Add(e.Times(n).Scale(5))
		return t.Reject(n)
	}
	p = func(x r3.Vec) float64 {
		n := x.Unit()
		return -1.5*n.Dot(u) - 5*n.Dot(e.Times(n))
	}
	return tau, p
}

func sphereCase(name string, u, omega r3.Vec, e Matrix, points []Point) Case {
	tau, p := StokesSphere(u, omega, e)
	return Case{
		Name: name, Source: stokesSource, Euler: 2, IndexSum: 2, Points: points, Surface: unitSphere, Tau: tau, P: p,
	}
}

func sphereCases() []Case {
	r5 := 1 / math.Sqrt(5)
	s3, s89 := math.Sqrt(3)/2, math.Sqrt(8)/3
	shear := []Point{
		{r3.Vec{X: 2 * r5, Y: r5}, "node", "separation", 1, [2]complex128{-2, -4}},
		{r3.Vec{X: -2 * r5, Y: -r5}, "node", "separation", 1, [2]complex128{-2, -4}},
		{r3.Vec{X: 2 * r5, Y: -r5}, "node", "attachment", 1, [2]complex128{4, 2}},
		{r3.Vec{X: -2 * r5, Y: r5}, "node", "attachment", 1, [2]complex128{4, 2}},
		{r3.Vec{Z: 1}, "saddle", "neutral", -1, [2]complex128{2, -2}},
		{r3.Vec{Z: -1}, "saddle", "neutral", -1, [2]complex128{2, -2}},
	}
	// The pure shear is the strain (xy + yx)/2 with the rotation that leaves tau = (I - nn) M n, M = [[0,4],[1,0]].
	shearE := Matrix{{0, 0.5, 0}, {0.5, 0, 0}, {}}
	six := []Point{
		{r3.Vec{X: 1}, "node", "separation", 1, [2]complex128{-9, -12}},
		{r3.Vec{X: -1}, "node", "separation", 1, [2]complex128{-3, -6}},
		{r3.Vec{X: -0.5, Y: s3}, "saddle", "attachment", -1, [2]complex128{4.5, -3}},
		{r3.Vec{X: -0.5, Y: -s3}, "saddle", "attachment", -1, [2]complex128{4.5, -3}},
		{r3.Vec{X: -1. / 3, Z: s89}, "node", "attachment", 1, [2]complex128{8, 3}},
		{r3.Vec{X: -1. / 3, Z: -s89}, "node", "attachment", 1, [2]complex128{8, 3}},
	}
	foci := []Point{
		{r3.Vec{Z: 1}, "focus", "separation", 1, [2]complex128{complex(-2.25, 3), complex(-2.25, -3)}},
		{r3.Vec{Z: -1}, "focus", "separation", 1, [2]complex128{complex(-2.25, 3), complex(-2.25, -3)}},
	}
	stokes := []Point{
		{r3.Vec{X: -1}, "node", "attachment", 1, [2]complex128{1.5, 1.5}},
		{r3.Vec{X: 1}, "node", "separation", 1, [2]complex128{-1.5, -1.5}},
	}
	return []Case{
		sphereCase("stokes-sphere", r3.Vec{X: 1}, r3.Vec{}, Matrix{}, stokes),
		sphereCase("strained-sphere", r3.Vec{}, r3.Vec{}, Diagonal(strain[0], strain[1], strain[2]), strainPoints()),
		sphereCase("sheared-sphere", r3.Vec{}, r3.Vec{Z: -0.5}, shearE, shear),
		sphereCase("stream-and-strain", r3.Vec{X: 2}, r3.Vec{}, Diagonal(1, -0.2, -0.8), six),
		sphereCase("swirl-and-strain", r3.Vec{}, r3.Vec{Z: 1}, Diagonal(-0.15, -0.15, 0.3), foci),
	}
}

// strain holds the rates of the pure strain along the axes.
var strain = [3]float64{0.8, 0.2, -1}

// strainPoints lists the points of the pure strain: both ends of each axis i, with eigenvalues 5 (E_j - E_i).
func strainPoints() []Point {
	kind := [3]Point{
		{Type: "node", Sense: "separation", Index: 1},
		{Type: "saddle", Sense: "separation", Index: -1},
		{Type: "node", Sense: "attachment", Index: 1},
	}
	axis := [3]r3.Vec{{X: 1}, {Y: 1}, {Z: 1}}
	var points []Point
	for i, p := range kind {
		a, b := 5*(strain[(i+1)%3]-strain[i]), 5*(strain[(i+2)%3]-strain[i])
		p.Eigenvalues = [2]complex128{complex(max(a, b), 0), complex(min(a, b), 0)}
		for _, side := range []float64{1, -1} {
			p.Position = axis[i].Scale(side)
			points = append(points, p)
		}
	}
	return points
}
