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
// one. Method: Voronoi regions of the corners and edges (Ericson, Real-Time Collision Detection, 2005, ch. 5.1.5, from
// memory).
func (t Tri) Nearest(p Vec) [3]float64 {
	ab, ac, ap := t[1].Sub(t[0]), t[2].Sub(t[0]), p.Sub(t[0])
	d1, d2 := ab.Dot(ap), ac.Dot(ap)
	if d1 <= 0 && d2 <= 0 {
		return [3]float64{1, 0, 0}
	}
	bp := p.Sub(t[1])
	d3, d4 := ab.Dot(bp), ac.Dot(bp)
	if d3 >= 0 && d4 <= d3 {
		return [3]float64{0, 1, 0}
	}
	vc := float64(d1*d4) - float64(d3*d2)
	if vc <= 0 && d1 >= 0 && d3 <= 0 {
		v := ratio(d1, d1-d3)
		return [3]float64{1 - v, v, 0}
	}
	cp := p.Sub(t[2])
	d5, d6 := ab.Dot(cp), ac.Dot(cp)
	if d6 >= 0 && d5 <= d6 {
		return [3]float64{0, 0, 1}
	}
	vb := float64(d5*d2) - float64(d1*d6)
	if vb <= 0 && d2 >= 0 && d6 <= 0 {
		w := ratio(d2, d2-d6)
		return [3]float64{1 - w, 0, w}
	}
	va := float64(d3*d6) - float64(d5*d4)
	if va <= 0 && d4-d3 >= 0 && d5-d6 >= 0 {
		w := ratio(d4-d3, (d4-d3)+(d5-d6))
		return [3]float64{0, 1 - w, w}
	}
	s := va + vb + vc
	v, w := ratio(vb, s), ratio(vc, s)
	return [3]float64{1 - v - w, v, w}
}

func ratio(a, b float64) float64 {
	if b == 0 {
		return 0
	}
	return a / b
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
