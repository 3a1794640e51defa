package topology

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// maxStraight bounds the triangles that a straight walk crosses: walks go a few edges.
const maxStraight = 1000

// straight walks from a place in the direction d of space, as straight as the surface allows, and returns where it is
// after the length, or, with false, where it meets a rim.
func straight(m *field.Mesh, from field.Loc, d r3.Vec, length float64) (field.Loc, bool) {
	from = inside(from)
	t, p := from.Tri, m.Position(from)
	d = d.Reject(m.Corner(t).Normal().Unit()).Unit()
	for range maxStraight {
		c := m.Corner(t)
		n := c.Normal().Unit()
		k, u := exitOf(c, n, p, d)
		if k < 0 || u >= length {
			return field.Loc{Tri: t, Bary: c.Nearest(p.AddScaled(length, d))}, k >= 0
		}
		p = p.AddScaled(u, d)
		length -= u
		g := m.Twin[3*t+k]
		if g < 0 {
			return field.Loc{Tri: t, Bary: c.Nearest(p)}, false
		}
		// Unfold: the part along the edge stays, the part across it turns into the neighbour's plane.
		e := c[(k+1)%3].Sub(c[k]).Unit()
		t = g / 3
		d = e.Scale(d.Dot(e)).AddScaled(d.Dot(n.Cross(e)), m.Corner(t).Normal().Unit().Cross(e)).Unit()
	}
	return field.Loc{Tri: t, Bary: m.Corner(t).Nearest(p)}, false
}

// exitOf returns the edge through which the ray from p along d leaves triangle c, and the distance to it; -1 if there is no
// ray.
func exitOf(c r3.Tri, n, p, d r3.Vec) (edge int32, distance float64) {
	edge, distance = -1, math.Inf(1)
	for k := range int32(3) {
		in := n.Cross(c[(k+1)%3].Sub(c[k]).Unit())
		if speed := d.Dot(in); speed < 0 {
			if u := math.Max(0, p.Sub(c[k]).Dot(in)) / -speed; u < distance {
				edge, distance = k, u
			}
		}
	}
	return edge, distance
}
