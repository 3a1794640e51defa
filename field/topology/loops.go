package topology

import (
	"errors"
	"fmt"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// Loop is the reading of tau along a closed way on the surface.
type Loop struct {
	Locs   []field.Loc // the way, from the first point to itself: the given points and the crossings of edges
	Length float64
	// Turn is the angle by which tau turns along the loop against the parallel transport along it [rad]; Curvature what
	// the surface on the left of the loop turns a transported vector by, rims in it included.
	Turn, Curvature float64
	// Index is (Turn + Curvature)/2 pi where the loop bounds a region on its left: the sum of the indices in there.
	Index float64
	// Bounds tells whether the loop bounds a region on its left. It does not if it crosses itself or runs once around a
	// handle; then only Turn has a meaning.
	Bounds bool
	// Inside holds the numbers in Skeleton.Points of the points in the region, IndexSum the sum of their indices, half
	// points counted one half.
	Inside   []int
	IndexSum float64
	// Accounts tells whether the points inside account for the index.
	Accounts bool
	// Hodograph holds tau along the loop.
	Hodograph []Hodograph
	// Tris lists the triangles that lie in the region as a whole, ascending.
	Tris []int32
	Note string // what is doubtful about the reading
}

// Hodograph is tau at one place of a loop.
type Hodograph struct {
	S     float64 // arc length from the loop's first point
	Angle float64 // of tau from its direction at the first point, against parallel transport, continuous [rad]
	Size  float64 // |tau|
}

// Loop walks from point to point, along the surface and back to the first, and reads how tau turns. The points are moved
// to the nearest places of the surface. Counter-clockwise loops, seen from the fluid, have their region on the left. The
// error says why there is no such loop.
func (s *Skeleton) Loop(through []r3.Vec) (*Loop, error) {
	if len(through) < 3 {
		return nil, errors.New("a loop takes at least three points")
	}
	places := make([]field.Loc, len(through))
	for i, p := range through {
		if !p.Finite() {
			return nil, fmt.Errorf("point %d of the loop is not a place", i+1)
		}
		loc, _ := s.Field.Nearest(p)
		places[i] = inside(loc)
	}
	var legs []leg
	for i, a := range places {
		way, err := walk(s.Field.Mesh, a, places[(i+1)%len(places)])
		if err != nil {
			return nil, err
		}
		legs = append(legs, way...)
	}
	l := &Loop{}
	s.hodograph(l, legs)
	s.region(l, legs)
	return l, nil
}

// hodograph follows tau along the legs.
func (s *Skeleton) hodograph(l *Loop, legs []leg) {
	f := s.Field
	angle, length := 0.0, 0.0
	add := func(g leg, bary [3]float64, tau r3.Vec2) {
		l.Locs = append(l.Locs, field.Loc{Tri: g.tri, Bary: bary})
		l.Hodograph = append(l.Hodograph, Hodograph{S: length, Angle: angle, Size: tau.Norm()})
	}
	zero := false
	for i, g := range legs {
		corners, flat := f.CornerTau(g.tri), f.Flat(g.tri)
		a, b := mix(corners, g.from), mix(corners, g.to)
		if i == 0 {
			add(g, g.from, a)
		}
		zero = zero || a == (r3.Vec2{}) || b == (r3.Vec2{})
		// Along a straight leg a linear field turns by less than pi.
		angle += r3.Wrap(b.Angle() - a.Angle())
		length += mix(flat, g.to).Sub(mix(flat, g.from)).Norm()
		if h := g.out.h; h >= 0 {
			// The triangle beyond an edge sees the same vector up to the angle defect of the edge's ends, which must not be
			// lost: directions are compared with the edge's own.
			twin := f.Twin[h]
			beyond := mix(f.CornerTau(twin/3), onEdge(twin, 1-g.out.t))
			here, there := b.Angle()-edgeAngle(flat, h), beyond.Angle()-edgeAngle(f.Flat(twin/3), twin)-math.Pi
			angle += r3.Wrap(there - here)
		}
		add(g, g.to, b)
	}
	l.Turn, l.Length = angle, length
	if zero {
		l.Note = "the loop runs through a zero of tau, where no direction can be followed; move it"
	}
}

// mix returns the weighted mean of a triangle's three vectors.
func mix(v [3]r3.Vec2, bary [3]float64) r3.Vec2 {
	return v[0].Scale(bary[0]).AddScaled(bary[1], v[1]).AddScaled(bary[2], v[2])
}

// edgeAngle returns the direction of half-edge h in its triangle's flat frame.
func edgeAngle(flat [3]r3.Vec2, h int32) float64 {
	return flat[field.Next(h)%3].Sub(flat[h%3]).Angle()
}

// region finds what lies on the left of the loop and accounts for it.
func (s *Skeleton) region(l *Loop, legs []leg) {
	f := s.Field
	crossed := map[int32]int{} // how often, by the edge's lower half-edge; for looking up only
	for _, g := range legs {
		if g.out.h >= 0 {
			crossed[edgeOf(f.Mesh, g.out.h)]++
		}
	}
	in := map[int32]bool{}
	var stack []int32
	reach := func(v int32) {
		if !in[v] {
			in[v] = true
			stack = append(stack, v)
		}
	}
	// Facing out of a triangle across its half-edge, the half-edge's tip is on the left.
	for _, g := range legs {
		if h := g.out.h; h >= 0 && crossed[edgeOf(f.Mesh, h)]%2 == 1 {
			reach(f.Tip(h))
		}
	}
	l.Bounds = true
	if len(stack) == 0 && s.clockwise(l) { // no vertex in the loop: it runs around a bit of an edge or a triangle
		for v := range int32(len(f.Points)) {
			in[v] = true
		}
	}
	for len(stack) > 0 {
		v := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for h := range f.Fan(v) {
			if crossed[edgeOf(f.Mesh, h)]%2 == 0 {
				reach(f.Tip(h))
			}
			if p := field.Prev(h); f.Twin[p] < 0 && crossed[edgeOf(f.Mesh, p)]%2 == 0 {
				reach(f.Tail(p))
			}
		}
	}
	for _, g := range legs {
		if h := g.out.h; h >= 0 && crossed[edgeOf(f.Mesh, h)]%2 == 1 && in[f.Tail(h)] {
			l.Bounds = false
		}
	}
	if !l.Bounds {
		l.Note = "the loop crosses itself or runs around a handle of the surface: it bounds no region on its left"
		return
	}
	s.account(l, legs, func(v int32) bool { return in[v] })
}

// clockwise tells whether the loop, if it is small, runs clockwise seen from the fluid.
func (s *Skeleton) clockwise(l *Loop) bool {
	f := s.Field
	origin, n := f.Position(l.Locs[0]), f.Normal(l.Locs[0])
	area := 0.0
	for i := 1; i < len(l.Locs); i++ {
		a, b := f.Position(l.Locs[i-1]).Sub(origin), f.Position(l.Locs[i]).Sub(origin)
		area += a.Cross(b).Dot(n)
	}
	return area < 0
}

// edgeOf returns one number for both half-edges of an edge.
func edgeOf(m *field.Mesh, h int32) int32 {
	if g := m.Twin[h]; g >= 0 && g < h {
		return g
	}
	return h
}

// account sums curvature and points of the region whose vertices are in.
func (s *Skeleton) account(l *Loop, legs []leg, in func(v int32) bool) {
	f := s.Field
	for v := range int32(len(f.Points)) {
		if !in(v) {
			continue
		}
		sum := 0.0
		for h := range f.Fan(v) {
			sum += f.CornerAngle(h)
		}
		if f.OnRim(v) {
			l.Curvature += math.Pi - sum
			continue
		}
		l.Curvature += 2*math.Pi - sum
	}
	for _, r := range s.count.rims {
		if v := f.Tail(f.Rims[r.Rim].Edges[0]); in(v) {
			l.Curvature += float64(2 * math.Pi * r.Term)
		}
	}
	// Half points count one half: the index is a whole number of halves.
	l.Index = math.Round((l.Turn+l.Curvature)/math.Pi) / 2
	cut := map[int32][]leg{} // for looking up only
	for _, g := range legs {
		cut[g.tri] = append(cut[g.tri], g)
	}
	for t := range int32(len(f.Tris)) {
		v := f.Tris[t]
		if cut[t] == nil && in(v[0]) && in(v[1]) && in(v[2]) {
			l.Tris = append(l.Tris, t)
		}
	}
	for i := range s.Points {
		p := &s.Points[i]
		if !s.contains(p.Loc, cut[p.Loc.Tri], in) {
			continue
		}
		l.Inside = append(l.Inside, i)
		w := float64(p.Index)
		if p.Half {
			w /= 2
		}
		l.IndexSum += w
	}
	l.Accounts = l.IndexSum == l.Index
	if !l.Accounts && l.Note == "" {
		l.Note = "the points inside do not account for the index: the loop passes so close to a point that the mesh does not " +
			"tell its side, or points were cancelled by a floor of robustness"
	}
}

// contains tells whether the place is in the region: as its triangle's first corner is, but for the legs between them.
func (s *Skeleton) contains(at field.Loc, cut []leg, in func(v int32) bool) bool {
	v := s.Field.Tris[at.Tri]
	if len(cut) == 0 {
		return in(v[0])
	}
	flat := s.Field.Flat(at.Tri)
	side := in(v[0])
	p, q := mix(flat, inside(at).Bary), flat[0]
	for _, g := range cut {
		if segmentsCross(p, q, mix(flat, g.from), mix(flat, g.to)) {
			side = !side
		}
	}
	return side
}

// segmentsCross tells whether the segments pq and ab cross; a touching end counts on one side only.
func segmentsCross(p, q, a, b r3.Vec2) bool {
	d, e := q.Sub(p), b.Sub(a)
	sideA, sideB := d.Cross(a.Sub(p)) >= 0, d.Cross(b.Sub(p)) >= 0
	sideP, sideQ := e.Cross(p.Sub(a)) >= 0, e.Cross(q.Sub(a)) >= 0
	return sideA != sideB && sideP != sideQ
}
