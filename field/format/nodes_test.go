package format_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field/format"
	"shearprint/field/r3"
)

// mat4 is a homogeneous matrix, row by row: the plain way to compose nodes, against which the reader's is held.
type mat4 [4][4]float64

func (a mat4) times(b mat4) (c mat4) {
	for i := range 4 {
		for j := range 4 {
			for k := range 4 {
				c[i][j] += a[i][k] * b[k][j]
			}
		}
	}
	return c
}

func (a mat4) point(p r3.Vec, w float64) r3.Vec {
	x := [4]float64{p.X, p.Y, p.Z, w}
	var y [3]float64
	for i := range 3 {
		for k := range 4 {
			y[i] += a[i][k] * x[k]
		}
	}
	return r3.Vec{X: y[0], Y: y[1], Z: y[2]}
}

func diagonal(x, y, z float64) mat4 { return mat4{{x}, {0, y}, {0, 0, z}, {0, 0, 0, 1}} }

func shift(x, y, z float64) mat4 {
	m := diagonal(1, 1, 1)
	m[0][3], m[1][3], m[2][3] = x, y, z
	return m
}

// turnAbout is the rotation by an angle about a unit axis, and its quaternion x y z w.
func turnAbout(u r3.Vec, angle float64) (mat4, []float64) {
	s, c := math.Sincos(angle)
	k := 1 - c
	h, w := math.Sincos(angle / 2)
	return mat4{
		{c + k*u.X*u.X, k*u.X*u.Y - s*u.Z, k*u.X*u.Z + s*u.Y},
		{k*u.X*u.Y + s*u.Z, c + k*u.Y*u.Y, k*u.Y*u.Z - s*u.X},
		{k*u.X*u.Z - s*u.Y, k*u.Y*u.Z + s*u.X, c + k*u.Z*u.Z},
		{0, 0, 0, 1},
	}, []float64{h * u.X, h * u.Y, h * u.Z, w}
}

// columns writes a matrix as glTF wants it.
func (a mat4) columns() (out []float64) {
	for j := range 4 {
		for i := range 4 {
			out = append(out, a[i][j])
		}
	}
	return out
}

// A chain of nodes with any translations, rotations and scales, as parts or as matrices: positions take the product of
// all, tau that of the rotations alone; a mirroring turns the triangles over.
func TestChainsOfNodes(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64Range(-3, 3)
		whole, turns := diagonal(1, 1, 1), diagonal(1, 1, 1)
		mirrored := false
		var nodes array
		n := rapid.IntRange(1, 4).Draw(t, "nodes")
		for k := range n {
			axis := r3.Vec{X: x.Draw(t, "ax"), Y: x.Draw(t, "ay"), Z: x.Draw(t, "az") + 4}.Unit()
			rot, q := turnAbout(axis, x.Draw(t, "angle"))
			// Without shear, the rotation in a matrix is unique: one scale for all axes.
			s := 0.2 + math.Abs(x.Draw(t, "scale"))
			sign := rapid.SampledFrom([]float64{1, -1}).Draw(t, "sign")
			move := shift(x.Draw(t, "mx"), x.Draw(t, "my"), x.Draw(t, "mz"))
			own := move.times(rot).times(diagonal(sign*s, s, s))
			whole = whole.times(own)
			turns = turns.times(rot).times(diagonal(sign, 1, 1))
			mirrored = mirrored != (sign < 0)
			node := object{"matrix": own.columns()}
			if rapid.Bool().Draw(t, "parts") {
				node = object{"translation": []float64{move[0][3], move[1][3], move[2][3]}, "rotation": q,
					"scale": []float64{sign * s, s, s}}
			}
			if k == n-1 {
				node["mesh"] = 0
			} else {
				node["children"] = []int{k + 1}
			}
			nodes = append(nodes, node)
		}
		raw, err := format.Read("n.gltf", gltfOf(object{"nodes": nodes}, cornerBytes, tauBytes, indexBytes), format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		points := []r3.Vec{{}, {X: 1}, {Y: 1}}
		taus := []r3.Vec{{X: 1, Y: 2}, {X: 3, Y: 4}, {X: 5, Y: 6}}
		for i := range points {
			p, v := whole.point(points[i], 1), turns.point(taus[i], 0)
			if raw.Points[i].Sub(p).Norm() > 1e-9*(1+p.Norm()) || raw.Tau[i].Sub(v).Norm() > 1e-9*(1+v.Norm()) {
				t.Fatalf("corner %d is at %v with %v, want %v with %v", i, raw.Points[i], raw.Tau[i], p, v)
			}
		}
		tri := raw.Tris[0]
		c := r3.Tri{raw.Points[tri[0]], raw.Points[tri[1]], raw.Points[tri[2]]}
		up := turns.point(r3.Vec{Z: 1}, 0) // the outside turns with the surface
		if c.Normal().Dot(up) < 0 {
			t.Fatalf("the triangle shows its back (mirrored %v)", mirrored)
		}
	})
}

// A scale that differs by axis bends angles, but tau keeps the node's rotation.
func TestUnevenScaleDoesNotTurnTau(t *testing.T) {
	rot, q := turnAbout(r3.Vec{Z: 1}, 0.7)
	node := object{"mesh": 0, "rotation": q, "scale": []float64{5, 0.5, 2}}
	raw := readDoc(t, "uneven", gltfOf(object{"nodes": array{node}}, cornerBytes, tauBytes, indexBytes), format.Options{})
	if want := rot.point(r3.Vec{X: 3, Y: 4}, 0); raw.Tau[1].Sub(want).Norm() > 1e-12 {
		t.Errorf("tau is %v, want %v", raw.Tau[1], want)
	}
	if want := rot.point(r3.Vec{X: 5}, 0); raw.Points[1].Sub(want).Norm() > 1e-12 {
		t.Errorf("the point is %v, want %v", raw.Points[1], want)
	}
}

// Three scalar attributes serve as a vector; primitives without tau are left out and told; coefficients are known.
func TestGLTFAttributeNames(t *testing.T) {
	scalarAcc := func(view int) object {
		return object{"bufferView": view, "componentType": 5126, "count": 3, "type": "SCALAR"}
	}
	column := func(a, b, c float32) []byte { return bytesOf([3]float32{a, b, c}) }
	doc := object{
		"accessors": array{
			object{"bufferView": 0, "componentType": 5126, "count": 3, "type": "VEC3"},
			object{"bufferView": 1, "componentType": 5126, "count": 3, "type": "VEC3"},
			scalarAcc(2), scalarAcc(3), scalarAcc(4), scalarAcc(5),
		},
	}
	views := [][]byte{cornerBytes, tauBytes, column(1, 2, 3), column(4, 5, 6), column(0, 0, 0), column(7, 8, 9)}
	for _, c := range []struct {
		name       string
		attributes object
		opt        format.Options
		tau        r3.Vec // at the second point
		unit       string
		cp         float64
	}{
		{"three scalars", object{"POSITION": 0, "_TAU_X": 2, "_TAU_Y": 3, "_TAU_Z": 4}, format.Options{}, r3.Vec{X: 2,
			Y: 5}, "Pa", 0},
		{"two scalars", object{"POSITION": 0, "_TAU_X": 2, "_TAU_Y": 3}, format.Options{}, r3.Vec{X: 2, Y: 5}, "Pa", 0},
		{"other spelling", object{"POSITION": 0, "_WallShearStress": 1, "_PRESSURE_COEFFICIENT": 5}, format.Options{},
			r3.Vec{X: 3, Y: 4}, "", 8},
		{"coefficient", object{"POSITION": 0, "_CF": 1, "_CP": 5}, format.Options{}, r3.Vec{X: 3, Y: 4}, "1", 8},
		{"by the user", object{"POSITION": 0, "_FLOW": 1, "_TAU": 0, "_Q": 5}, format.Options{Tau: "_FLOW", Cp: "_Q"},
			r3.Vec{X: 3, Y: 4}, "", 8},
		{"spelled by the user", object{"POSITION": 0, "_FLOW": 1}, format.Options{Tau: "flow"}, r3.Vec{X: 3, Y: 4}, "", 0},
	} {
		doc["meshes"] = array{object{"primitives": array{
			object{"attributes": c.attributes}, object{"attributes": object{"POSITION": 0, "NORMAL": 1}},
		}}}
		raw := readDoc(t, c.name, gltfOf(doc, views...), c.opt)
		if raw.Tau[1] != c.tau || raw.Units.Tau != c.unit || c.cp != 0 && raw.Cp[1] != c.cp {
			t.Errorf("%s: tau %v [%s], cp %v", c.name, raw.Tau, raw.Units.Tau, raw.Cp)
		}
		if len(raw.Tris) != 1 || !hasFinding(raw.Findings, "bare-primitives", 1) {
			t.Errorf("%s: %d triangles, %+v", c.name, len(raw.Tris), raw.Findings)
		}
	}
	if _, err := format.Read("x", gltfOf(doc, views...), format.Options{P: "_NONE"}); err == nil {
		t.Error("a name that no primitive has is no error")
	}
}
