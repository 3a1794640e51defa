package topology

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// region finds what lies on the left of the loop and accounts for it.
func (s *Skeleton) region(l *Loop, legs []leg) {
	f := s.Field
	crossed := make([]bool, len(f.Twin)) // an odd number of times, per half-edge
	for _, g := range legs {
		if h := g.out.h; h >= 0 {
			crossed[h] = !crossed[h]
			crossed[f.Twin[h]] = crossed[h]
		}
	}
	in := make([]bool, len(f.Points))
	var stack []int32
	reach := func(v int32) {
		if !in[v] {
			in[v] = true
			stack = append(stack, v)
		}
	}
	// Facing out of a triangle across its half-edge, the half-edge's tip is on the left.
	for _, g := range legs {
		if h := g.out.h; h >= 0 && crossed[h] {
			reach(f.Tip(h))
		}
	}
	if len(stack) == 0 && s.clockwise(l) { // no vertex in the loop: it runs around a bit of an edge or a triangle
		for v := range in {
			in[v] = true
		}
	}
	for len(stack) > 0 {
		v := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		for h := range f.Fan(v) {
			if !crossed[h] {
				reach(f.Tip(h))
			}
			if p := field.Prev(h); f.Twin[p] < 0 {
				reach(f.Tail(p))
			}
		}
	}
	for _, g := range legs {
		if h := g.out.h; h >= 0 && crossed[h] && in[f.Tail(h)] {
			l.Note = "the loop crosses itself or runs around a handle of the surface: it bounds no region on its left"
			return
		}
	}
	l.Bounds = true
	s.account(l, legs, in)
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

// account sums curvature and points of the region whose vertices are in.
func (s *Skeleton) account(l *Loop, legs []leg, in []bool) {
	f := s.Field
	for v := range int32(len(f.Points)) {
		if !in[v] {
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
		if v := f.Tail(f.Rims[r.Rim].Edges[0]); in[v] {
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
		if in[v[0]] && in[v[1]] && in[v[2]] && cut[t] == nil {
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
		l.Note = "the points inside do not account for the index: the loop passes so close to a point that the mesh does " +
			"not tell its side, or points were cancelled by a floor of robustness"
	}
}

// contains tells whether the place is in the region: as its triangle's first corner is, but for the legs between them.
func (s *Skeleton) contains(at field.Loc, cut []leg, in []bool) bool {
	v := s.Field.Tris[at.Tri]
	if len(cut) == 0 {
		return in[v[0]]
	}
	flat := s.Field.Flat(at.Tri)
	side := in[v[0]]
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
