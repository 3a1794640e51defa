package format

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// flatness is the thickness of a point set over its second-longest extent below which it counts as a patch that can be
// triangulated in its best plane: a sagitta of a twentieth tilts the faces by up to about 20 degrees.
const flatness = 0.05

// triangulate gives nearly planar points their Delaunay triangles in the best plane. Points of bodies are refused.
func triangulate(src source, raw *field.Raw) error {
	const remedy = "give the geometry with --surface"
	if len(raw.Points) < 3 {
		return src.fail("", remedy, "%d points make no surface", len(raw.Points))
	}
	if len(raw.Points) > maxTriangulated {
		return src.fail("", remedy, "%d points are too many to find their triangles", len(raw.Points))
	}
	u, v, thick := bestPlane(raw.Points)
	if !(thick < flatness) {
		return src.fail("", remedy, "a table has no triangles, its rows are no grid, and its points are not nearly planar "+
			"(thickness %.2g of the width)", thick)
	}
	center := boxOf(raw.Points).Center()
	flat := make([]r3.Vec2, len(raw.Points))
	for i, p := range raw.Points {
		d := p.Sub(center)
		flat[i] = r3.Vec2{X: d.Dot(u), Y: d.Dot(v)}
	}
	tris, err := delaunay(flat)
	if err != nil {
		return src.fail("", remedy, "the points cannot be triangulated: %v", err)
	}
	made := len(tris)
	kept := trimLong(tris, flat)
	if len(kept) == 0 {
		return src.fail("", remedy, "the points make no triangle")
	}
	raw.Tris = kept
	note(raw, field.Doubtful, "reconstructed", len(kept), "",
		"the table has no triangles: %d were made between its points in their best plane (Delaunay), %d long ones at rims "+
			"and gaps left out; holes and edges of the body may be bridged; give the geometry with --surface if there is one",
		len(kept), made-len(kept))
	return nil
}

// bestPlane returns two axes of the plane through the points' mean that is nearest to them (least squares), turned so
// that their normal has a positive z, y or x component, and the spread across it over the spread along the second axis.
func bestPlane(points []r3.Vec) (u, v r3.Vec, thick float64) {
	size := boxOf(points).Diagonal()
	if size == 0 || size-size != 0 {
		return u, v, 1
	}
	var mean r3.Vec
	for _, p := range points {
		mean = mean.AddScaled(1/float64(len(points)), p)
	}
	var m [3][3]float64
	for _, p := range points {
		d := p.Sub(mean).Scale(1 / size)
		x := [3]float64{d.X, d.Y, d.Z}
		for i := range 3 {
			for j := range 3 {
				m[i][j] += float64(x[i] * x[j])
			}
		}
	}
	value, axis := eigen3(m)
	n := axis[2]
	if n.Z < -1e-9 || math.Abs(n.Z) <= 1e-9 && (n.Y < -1e-9 || math.Abs(n.Y) <= 1e-9 && n.X < 0) {
		n = r3.Vec{}.Sub(n)
	}
	u = axis[0]
	v = n.Cross(u)
	if value[1] <= 1e-24*value[0] { // on a line
		return u, v, 1
	}
	return u, v, math.Sqrt(math.Max(0, value[2]) / value[1])
}

// eigen3 returns the eigenvalues of a symmetric matrix in falling order and their unit vectors, by Jacobi's rotations.
func eigen3(m [3][3]float64) (value [3]float64, axis [3]r3.Vec) {
	vec := [3][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}
	const sweeps = 30 // six are enough for double precision
	for range sweeps {
		if off := math.Abs(m[0][1]) + math.Abs(m[0][2]) + math.Abs(m[1][2]); off == 0 {
			break
		}
		for p := range 2 {
			for q := p + 1; q < 3; q++ {
				rotate(&m, &vec, p, q)
			}
		}
	}
	for k := range 3 {
		value[k] = m[k][k]
		axis[k] = r3.Vec{X: vec[0][k], Y: vec[1][k], Z: vec[2][k]}
	}
	for _, pair := range [3][2]int{{0, 1}, {1, 2}, {0, 1}} {
		if i, j := pair[0], pair[1]; value[i] < value[j] {
			value[i], value[j] = value[j], value[i]
			axis[i], axis[j] = axis[j], axis[i]
		}
	}
	return value, axis
}

// rotate makes m[p][q] zero by a rotation in the plane of p and q.
func rotate(m, vec *[3][3]float64, p, q int) {
	if m[p][q] == 0 {
		return
	}
	theta := (m[q][q] - m[p][p]) / (2 * m[p][q])
	t := 1 / (math.Abs(theta) + math.Sqrt(1+float64(theta*theta)))
	if theta < 0 {
		t = -t
	}
	c := 1 / math.Sqrt(1+float64(t*t))
	s := float64(t * c)
	for k := range 3 {
		a, b := m[k][p], m[k][q]
		m[k][p], m[k][q] = float64(c*a)-float64(s*b), float64(s*a)+float64(c*b)
	}
	for k := range 3 {
		a, b := m[p][k], m[q][k]
		m[p][k], m[q][k] = float64(c*a)-float64(s*b), float64(s*a)+float64(c*b)
		a, b = vec[k][p], vec[k][q]
		vec[k][p], vec[k][q] = float64(c*a)-float64(s*b), float64(s*a)+float64(c*b)
	}
}
