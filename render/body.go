package render

import (
	"math"
	"slices"

	"shearprint/field"
	"shearprint/field/r3"
)

// body is a field prepared for drawing. Its coordinates are turned against the field's by a fixed rotation about the
// middle of the box, so that no plane or axis of the model runs along the lattice of the noise.
type body struct {
	field   *field.Field
	center  r3.Vec
	turn    [3]r3.Vec // rows of the rotation
	radius  float64   // of a ball around the center that holds the surface
	pos     []r3.Vec
	normal  [][4]float32 // the fourth is 1 on a sharp edge, where the normal does not serve the triangles, else 0
	fine    level        // all triangles
	creases []int32      // half-edges of rims and sharp edges
	coarse  level        // fewer triangles of some of the vertices, for moving frames; for small meshes fine
}

// level is a set of triangles between vertices of a body.
type level struct {
	tris [][3]int32
	tau  [][9]float32 // tau at the three corners, in the triangle's plane, in body coordinates
	cull []bool       // the back is never seen: the triangle's part has no rim
	used []int32      // the vertices; nil for all
}

// creaseCos is the cosine of the angle between a triangle and its vertex normal above which the vertex is taken to lie
// on an edge and lit flat: 30 degrees each side of an edge of 60; smooth meshes that are worth showing bend less.
const creaseCos = 0.866

func newBody(f *field.Field) *body {
	box := r3.BoxOf(f.Points)
	b := &body{field: f, center: box.Center(), radius: box.Diagonal() / 2, turn: latticeTurn()}
	b.pos = make([]r3.Vec, len(f.Points))
	b.normal = make([][4]float32, len(f.Points))
	field.Parallel(len(f.Points), func(from, to int) {
		for v := from; v < to; v++ {
			b.pos[v] = b.point(f.Points[v])
			n := single(b.vector(f.Normals[v]))
			copy(b.normal[v][:], n[:])
			if f.Out[v] < 0 {
				continue
			}
			for h := range f.Fan(int32(v)) {
				if f.Corner(h/3).Normal().Unit().Dot(f.Normals[v]) < creaseCos {
					b.normal[v][3] = 1
				}
			}
		}
	})
	n := len(f.Tris)
	b.fine = level{tris: f.Tris, tau: make([][9]float32, n), cull: make([]bool, n)}
	field.Parallel(n, func(from, to int) {
		for t := from; t < to; t++ {
			b.fine.cull[t] = f.Parts[f.Part[t]].Rims == 0
			ex, ey, _ := f.Frame(int32(t))
			ex, ey = b.vector(ex), b.vector(ey)
			for k, tau := range f.CornerTau(int32(t)) {
				w := single(ex.Scale(tau.X).AddScaled(tau.Y, ey))
				copy(b.fine.tau[t][3*k:], w[:])
			}
		}
	})
	b.coarse = b.cluster()
	b.creases = creasesOf(b)
	return b
}

// latticeTurn returns a rotation by 0.5 rad about each axis in turn: no small angle to any axis, diagonal or plane.
func latticeTurn() [3]r3.Vec {
	rows := [3]r3.Vec{{X: 1}, {Y: 1}, {Z: 1}}
	s, c := r3.SinCos(0.5)
	for i := range rows {
		v := rows[i]
		v.X, v.Y = float64(c*v.X)-float64(s*v.Y), float64(s*v.X)+float64(c*v.Y)
		v.Y, v.Z = float64(c*v.Y)-float64(s*v.Z), float64(s*v.Y)+float64(c*v.Z)
		v.Z, v.X = float64(c*v.Z)-float64(s*v.X), float64(s*v.Z)+float64(c*v.X)
		rows[i] = v
	}
	return rows
}

// point takes a point of the field into body coordinates, vector a direction.
func (b *body) point(p r3.Vec) r3.Vec { return b.vector(p.Sub(b.center)) }

func (b *body) vector(v r3.Vec) r3.Vec {
	return r3.Vec{X: b.turn[0].Dot(v), Y: b.turn[1].Dot(v), Z: b.turn[2].Dot(v)}
}

// lens turns the lens into body coordinates.
func (b *body) lens(l Lens) Lens {
	l.right, l.up, l.forward = b.vector(l.right), b.vector(l.up), b.vector(l.forward)
	l.eye = b.point(l.eye)
	return l
}

func single(v r3.Vec) [3]float32 { return [3]float32{float32(v.X), float32(v.Y), float32(v.Z)} }

// coarseTriangles is the size above which moving frames take a coarser mesh, and about the size of that mesh: what one
// thread in a browser transforms and rasters in under 10 ms.
const coarseTriangles = 60_000

// cluster returns a coarser level: vertices in the same cell of a grid, facing the same octant, become the one of them
// that lies nearest to their mean.
func (b *body) cluster() level {
	f := b.field
	if len(f.Tris) <= coarseTriangles*3/2 {
		return b.fine
	}
	area := 0.0
	for _, p := range f.Parts {
		area += p.Area
	}
	cell := math.Sqrt(2 * area / coarseTriangles)
	type key struct {
		x, y, z int32
		octant  uint8
	}
	number := make(map[key]int32, coarseTriangles)
	of := make([]int32, len(b.pos))
	var mean []r3.Vec
	var count []float64
	for v, p := range b.pos {
		k := key{int32(math.Floor(p.X / cell)), int32(math.Floor(p.Y / cell)), int32(math.Floor(p.Z / cell)), 0}
		for i, x := range b.normal[v][:3] {
			if x < 0 {
				k.octant |= 1 << i
			}
		}
		c, ok := number[k]
		if !ok {
			c = int32(len(mean))
			number[k] = c
			mean, count = append(mean, r3.Vec{}), append(count, 0)
		}
		of[v] = c
		mean[c] = mean[c].Add(p)
		count[c]++
	}
	chosen := make([]int32, len(mean))
	best := make([]float64, len(mean))
	for c := range chosen {
		chosen[c] = -1
		mean[c] = mean[c].Scale(1 / count[c])
	}
	for v, p := range b.pos {
		c := of[v]
		if d := p.Sub(mean[c]).Norm(); f.Out[v] >= 0 && (chosen[c] < 0 || d < best[c]) {
			chosen[c], best[c] = int32(v), d
		}
	}
	var l level
	for t, tri := range f.Tris {
		i, j, k := of[tri[0]], of[tri[1]], of[tri[2]]
		if i == j || j == k || k == i {
			continue
		}
		tri = [3]int32{chosen[i], chosen[j], chosen[k]}
		l.tris = append(l.tris, tri)
		l.cull = append(l.cull, b.fine.cull[t])
		var tau [9]float32
		for c, v := range tri {
			w := single(b.vector(f.Tau3[v]))
			copy(tau[3*c:], w[:])
		}
		l.tau = append(l.tau, tau)
	}
	for _, v := range chosen {
		if v >= 0 {
			l.used = append(l.used, v)
		}
	}
	slices.Sort(l.used)
	return l
}
