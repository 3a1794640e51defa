package topology

import (
	"fmt"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// crossing is where a walk on the surface leaves a triangle: at the share t along half-edge h of that triangle.
type crossing struct {
	h int32
	t float64
}

// leg is the straight way through one triangle.
type leg struct {
	tri      int32
	from, to [3]float64 // barycentric
	out      crossing   // where the leg leaves the triangle; h is -1 where it ends inside
}

// Tolerances of walks.
const (
	// keepInside moves a snapped place off the triangle's edges, as a share of the way to its middle: walks may then begin
	// and end anywhere without special cases, a thousandth of an edge beside the wish.
	keepInside = 1e-3
	// keepOff is the least share of an edge by which a crossing stays off the edge's ends.
	keepOff = 1e-6
)

// inside moves the place a little towards the middle of its triangle.
func inside(l field.Loc) field.Loc {
	for k := range l.Bary {
		l.Bary[k] = float64((1-keepInside)*l.Bary[k]) + keepInside/3
	}
	return l
}

// walk goes from a to b along the cut of the surface with the plane that holds both and their mean normal.
func walk(m *field.Mesh, a, b field.Loc) ([]leg, error) {
	if a.Tri == b.Tri {
		return []leg{{a.Tri, a.Bary, b.Bary, crossing{h: -1}}}, nil
	}
	p, q := m.Position(a), m.Position(b)
	plane := q.Sub(p).Cross(m.Normal(a).Add(m.Normal(b))).Unit()
	if plane == (r3.Vec{}) {
		plane = q.Sub(p).Cross(m.Normal(a)).Unit()
	}
	if plane == (r3.Vec{}) {
		return nil, fmt.Errorf("no way along the surface from %s to %s: they lie on opposite sides of the body; add points "+
			"between them", place(p), place(q))
	}
	w := walker{m: m, origin: p, plane: plane}
	// Both ways along the cut are tried, the one towards b first.
	exits := w.exits(a.Tri, -1)
	toward := func(c crossing) float64 { return w.at(c).Sub(p).Dot(q.Sub(p)) }
	if len(exits) == 2 && toward(exits[1]) > toward(exits[0]) {
		exits[0], exits[1] = exits[1], exits[0]
	}
	for _, c := range exits {
		if legs := w.follow(a, b, c); legs != nil {
			return legs, nil
		}
	}
	return nil, fmt.Errorf("no straight way along the surface from %s to %s: a rim or another part lies between; add "+
		"points between them", place(p), place(q))
}

func place(p r3.Vec) string { return fmt.Sprintf("(%.6g, %.6g, %.6g)", p.X, p.Y, p.Z) }

// walker follows the cut of the surface with a plane.
type walker struct {
	m             *field.Mesh
	origin, plane r3.Vec
}

// side returns the signed distance of a vertex from the plane.
func (w *walker) side(v int32) float64 { return w.m.Points[v].Sub(w.origin).Dot(w.plane) }

// exits lists where the plane crosses the edges of triangle t, but for half-edge in. A vertex in the plane counts as
// lying on its positive side, for all triangles alike, so that a triangle has two crossings or none.
func (w *walker) exits(t, in int32) []crossing {
	var out []crossing
	for h := 3 * t; h < 3*t+3; h++ {
		a, b := w.side(w.m.Tail(h)), w.side(w.m.Tip(h))
		if h == in || (a >= 0) == (b >= 0) {
			continue
		}
		out = append(out, crossing{h, math.Min(math.Max(a/(a-b), keepOff), 1-keepOff)})
	}
	return out
}

func (w *walker) at(c crossing) r3.Vec {
	return w.m.Points[w.m.Tail(c.h)].Lerp(w.m.Points[w.m.Tip(c.h)], c.t)
}

// follow walks from a out of crossing c until b's triangle; nil if it meets a rim or comes round again.
func (w *walker) follow(a, b field.Loc, c crossing) []leg {
	from := a.Bary
	t := a.Tri
	var legs []leg
	for range len(w.m.Tris) {
		legs = append(legs, leg{t, from, onEdge(c.h, c.t), c})
		g := w.m.Twin[c.h]
		if g < 0 || g/3 == a.Tri {
			return nil
		}
		t, from = g/3, onEdge(g, 1-c.t)
		if t == b.Tri {
			return append(legs, leg{t, from, b.Bary, crossing{h: -1}})
		}
		next := w.exits(t, g)
		if len(next) != 1 {
			return nil
		}
		c = next[0]
	}
	return nil
}

// onEdge returns the barycentric weights at the share t along half-edge h, in its triangle.
func onEdge(h int32, t float64) [3]float64 {
	var b [3]float64
	b[h%3], b[field.Next(h)%3] = 1-t, t
	return b
}
