// Package field holds what everything else computes on: a triangulated wall surface with its intrinsic geometry, a
// tangent vector field on it (the wall shear stress), and places on the surface.
//
// # Geometry
//
// Vectors at a vertex live in the vertex's own polar chart: the corner angles around the vertex are scaled so that they
// sum to 2 pi (at a rim vertex they keep their own total). An edge carries the parallel transport between the charts of
// its ends, and a triangle's curvature is what transport around it leaves. With these, the sum of the field's rotations
// around a triangle plus its curvature is an integer times 2 pi, and over a closed surface these integers add up to the
// Euler characteristic, whatever the field and the mesh (Knoeppel, Crane, Pinkall and Schroeder, Globally optimal
// direction fields, ACM TOG 32(4), 2013, from memory; Poincare and Hopf for the theorem).
//
// # Orientation
//
// Triangles are wound counter-clockwise seen from the fluid: normals point from the wall into the fluid.
package field

import (
	"shearprint/field/r3"
)

// Mesh is an oriented triangulated surface, possibly in several parts and with rims. It is immutable.
//
// Half-edge h = 3*t+k runs from corner k of triangle t to corner k+1. Every edge has one or two half-edges, every vertex
// one fan of triangles.
type Mesh struct {
	Points []r3.Vec
	Tris   [][3]int32
	// Twin holds, per half-edge, the half-edge that runs the other way in the neighbouring triangle; -1 on a rim.
	Twin []int32
	// Out holds, per vertex, the half-edge with which its fan begins, counter-clockwise; on a rim the fan begins with the
	// rim's own half-edge. -1 for a vertex without triangles.
	Out []int32
	// Normals holds the unit normals of the vertices (mean of the faces', weighted by corner angle); zero for a vertex
	// without triangles.
	Normals []r3.Vec
	// Part holds the number of the connected part of each triangle; Parts describes them.
	Part  []int32
	Parts []Part
	// Rims lists the boundary loops, each as its half-edges in order, the surface on their left.
	Rims []Rim

	polar []float64 // chart angle of each half-edge at its tail
	scale []float64 // chart angle per true angle of each vertex
	total []float64 // angle of each vertex's whole chart
	tree  lazyTree
}

// Part is a connected part of a mesh.
type Part struct {
	Triangles int
	Vertices  int
	Euler     int // vertices - edges + triangles
	Rims      int
	Genus     int // (2 - Rims - Euler)/2
	Area      float64
}

// Rim is a boundary loop.
type Rim struct {
	Part  int32
	Edges []int32 // half-edges, head to tail
}

// Loc is a place on the surface: a triangle and barycentric weights that sum to one.
type Loc struct {
	Tri  int32
	Bary [3]float64
}

// Next returns the half-edge that follows h around its triangle.
func Next(h int32) int32 {
	if h%3 == 2 {
		return h - 2
	}
	return h + 1
}

// Prev returns the half-edge that precedes h around its triangle.
func Prev(h int32) int32 {
	if h%3 == 0 {
		return h + 2
	}
	return h - 1
}

// Tail returns the vertex at which h begins.
func (m *Mesh) Tail(h int32) int32 { return m.Tris[h/3][h%3] }

// Tip returns the vertex at which h ends.
func (m *Mesh) Tip(h int32) int32 { return m.Tail(Next(h)) }

// Corner returns the triangle's corners in space.
func (m *Mesh) Corner(t int32) r3.Tri {
	v := m.Tris[t]
	return r3.Tri{m.Points[v[0]], m.Points[v[1]], m.Points[v[2]]}
}

// Position returns the place in space.
func (m *Mesh) Position(l Loc) r3.Vec { return m.Corner(l.Tri).At(l.Bary) }

// Normal returns the unit normal at l, interpolated between the vertices' normals.
func (m *Mesh) Normal(l Loc) r3.Vec {
	v := m.Tris[l.Tri]
	return r3.Tri{m.Normals[v[0]], m.Normals[v[1]], m.Normals[v[2]]}.At(l.Bary).Unit()
}

// Frame returns the axes of triangle t's flat frame in space: ex along its first half-edge, n its normal, ey = n x ex.
func (m *Mesh) Frame(t int32) (ex, ey, n r3.Vec) {
	c := m.Corner(t)
	ex = c[1].Sub(c[0]).Unit()
	n = c.Normal().Unit()
	return ex, n.Cross(ex), n
}

// Flat returns the corners of triangle t in its flat frame: the first at the origin, the second on the positive x axis.
func (m *Mesh) Flat(t int32) [3]r3.Vec2 {
	c := m.Corner(t)
	ex, ey, _ := m.Frame(t)
	a, b := c[1].Sub(c[0]), c[2].Sub(c[0])
	return [3]r3.Vec2{{}, {X: a.Norm()}, {X: b.Dot(ex), Y: b.Dot(ey)}}
}

// Lift returns the vector v of triangle t's flat frame in space.
func (m *Mesh) Lift(t int32, v r3.Vec2) r3.Vec {
	ex, ey, _ := m.Frame(t)
	return ex.Scale(v.X).AddScaled(v.Y, ey)
}

// Drop returns the part of v in triangle t's plane, in its flat frame.
func (m *Mesh) Drop(t int32, v r3.Vec) r3.Vec2 {
	ex, ey, _ := m.Frame(t)
	return r3.Vec2{X: v.Dot(ex), Y: v.Dot(ey)}
}

// Area returns the area of triangle t.
func (m *Mesh) Area(t int32) float64 { return m.Corner(t).Area() }

// Diagonal returns the diagonal of the box around the points.
func (m *Mesh) Diagonal() float64 { return r3.BoxOf(m.Points).Diagonal() }

// Euler returns the Euler characteristic of all parts together.
func (m *Mesh) Euler() int {
	sum := 0
	for _, p := range m.Parts {
		sum += p.Euler
	}
	return sum
}

// MeanEdge returns the mean length of the triangles' edges.
func (m *Mesh) MeanEdge() float64 {
	sum := 0.0
	for h := range int32(len(m.Twin)) {
		sum += m.EdgeLength(h)
	}
	return sum / float64(len(m.Twin))
}

// EdgeLength returns the length of the half-edge.
func (m *Mesh) EdgeLength(h int32) float64 {
	return m.Points[m.Tip(h)].Sub(m.Points[m.Tail(h)]).Norm()
}
