package r3

import "math"

// Tri is a triangle; seen from the side that its normal points to, its corners run counter-clockwise.
type Tri [3]Vec

// Normal returns the normal whose length is twice the area; zero for a sliver.
func (t Tri) Normal() Vec { return t[1].Sub(t[0]).Cross(t[2].Sub(t[0])) }

// Area returns the area.
func (t Tri) Area() float64 { return t.Normal().Norm() / 2 }

// At returns the point with the barycentric weights b.
func (t Tri) At(b [3]float64) Vec {
	return t[0].Scale(b[0]).AddScaled(b[1], t[1]).AddScaled(b[2], t[2])
}

// Nearest returns the barycentric weights of the triangle's point nearest to p. The weights are within [0,1] and sum to
// one. The foot of the perpendicular, where it is inside, and the nearest point of each edge are compared by distance, so
// that a needle, whose normal is rounding error, still gives the right place.
func (t Tri) Nearest(p Vec) [3]float64 {
	if b, ok := t.foot(p); ok {
		// Inside a triangle of sound shape nothing on the edges can be nearer.
		n := t.Normal()
		if e := t[1].Sub(t[0]); n.Dot(n) > soundShape*float64(e.Dot(e)*e.Dot(e)) {
			return b
		}
		return t.nearer(p, b, t.onEdges(p))
	}
	return t.onEdges(p)
}

// soundShape is the square of twice the area over the square of the first edge's square below which a triangle is
// a needle, whose perpendicular foot is not to be relied on.
const soundShape = 1e-12

func (t Tri) nearer(p Vec, a, b [3]float64) [3]float64 {
	da, db := t.At(a).Sub(p), t.At(b).Sub(p)
	if db.Dot(db) < da.Dot(da) {
		return b
	}
	return a
}

// foot returns the weights of the foot of the perpendicular from p, and whether it is inside.
func (t Tri) foot(p Vec) ([3]float64, bool) {
	n := t.Normal()
	nn := n.Dot(n)
	if nn == 0 {
		return [3]float64{}, false
	}
	var b [3]float64
	for k := range 3 {
		u, v := t[(k+1)%3], t[(k+2)%3]
		b[k] = v.Sub(u).Cross(p.Sub(u)).Dot(n) / nn
		if !(b[k] >= 0) {
			return b, false
		}
	}
	sum := b[0] + b[1] + b[2]
	return [3]float64{b[0] / sum, b[1] / sum, b[2] / sum}, true
}

// onEdges returns the weights of the nearest point of the three edges.
func (t Tri) onEdges(p Vec) [3]float64 {
	var best [3]float64
	least := math.Inf(1)
	for k := range 3 {
		a, e := t[k], t[(k+1)%3].Sub(t[k])
		u := 0.0
		if ee := e.Dot(e); ee > 0 {
			u = math.Min(1, math.Max(0, p.Sub(a).Dot(e)/ee))
		}
		d := a.AddScaled(u, e).Sub(p)
		if dd := d.Dot(d); dd < least {
			least = dd
			best = [3]float64{}
			best[k], best[(k+1)%3] = 1-u, u
		}
	}
	return best
}

// Box is an axis-parallel box; an empty one has Min above Max.
type Box struct{ Min, Max Vec }

// EmptyBox returns the box that contains nothing.
func EmptyBox() Box {
	i := math.Inf(1)
	return Box{Vec{i, i, i}, Vec{-i, -i, -i}}
}

// Include returns the smallest box that contains b and p.
func (b Box) Include(p Vec) Box {
	return Box{
		Vec{math.Min(b.Min.X, p.X), math.Min(b.Min.Y, p.Y), math.Min(b.Min.Z, p.Z)},
		Vec{math.Max(b.Max.X, p.X), math.Max(b.Max.Y, p.Y), math.Max(b.Max.Z, p.Z)},
	}
}

// BoxOf returns the smallest box around the points.
func BoxOf(points []Vec) Box {
	b := EmptyBox()
	for _, p := range points {
		b = b.Include(p)
	}
	return b
}

// Empty tells whether the box contains nothing.
func (b Box) Empty() bool { return !(b.Min.X <= b.Max.X) }

// Diagonal returns the length of the box's diagonal; 0 for an empty box.
func (b Box) Diagonal() float64 {
	if b.Empty() {
		return 0
	}
	return b.Max.Sub(b.Min).Norm()
}

// Center returns the middle of the box.
func (b Box) Center() Vec { return b.Min.Lerp(b.Max, 0.5) }

// Distance2 returns the square of the distance from p to the box; 0 inside.
func (b Box) Distance2(p Vec) float64 {
	d := Vec{outside(p.X, b.Min.X, b.Max.X), outside(p.Y, b.Min.Y, b.Max.Y), outside(p.Z, b.Min.Z, b.Max.Z)}
	return d.Dot(d)
}

func outside(x, lo, hi float64) float64 {
	switch {
	case x < lo:
		return lo - x
	case x > hi:
		return x - hi
	}
	return 0
}
