package format

import (
	"math"

	"shearprint/field/r3"
)

// matrix holds the columns of a linear map.
type matrix [3]r3.Vec

var identity = matrix{{X: 1}, {Y: 1}, {Z: 1}}

func (m matrix) apply(v r3.Vec) r3.Vec {
	return m[0].Scale(v.X).AddScaled(v.Y, m[1]).AddScaled(v.Z, m[2])
}

// then returns the map that applies n first and m after it.
func (m matrix) times(n matrix) matrix { return matrix{m.apply(n[0]), m.apply(n[1]), m.apply(n[2])} }

func (m matrix) det() float64 { return m[0].Dot(m[1].Cross(m[2])) }

func (m matrix) size() float64 {
	return math.Max(m[0].Norm(), math.Max(m[1].Norm(), m[2].Norm()))
}

// flatRatio is the volume of the images of the axes over the cube of the longest below which a map has lost a
// dimension: matrices in single precision carry errors of 1e-7.
const flatRatio = 1e-9

// singular tells whether the map squashes space flat, or holds no usable numbers.
func (m matrix) singular() bool {
	s := m.size()
	return !(s > 1e-30 && s < 1e30) || !(math.Abs(m.det()) > flatRatio*float64(s*float64(s*s)))
}

// orthogonal returns the rotation, with a reflection where m mirrors, that is nearest to m: the orthogonal factor of
// the polar decomposition, by Newton's iteration Q <- (Q + Q^-T)/2 (N. J. Higham, Computing the polar decomposition,
// 1986, from memory). It converges quadratically from any regular matrix.
func (m matrix) orthogonal() matrix {
	s := m.size()
	q := matrix{m[0].Scale(1 / s), m[1].Scale(1 / s), m[2].Scale(1 / s)}
	const most = 60 // flatRatio needs about 35 halvings before the quadratic phase
	for range most {
		d := q.det()
		t := matrix{q[1].Cross(q[2]).Scale(1 / d), q[2].Cross(q[0]).Scale(1 / d), q[0].Cross(q[1]).Scale(1 / d)}
		change := 0.0
		for k := range q {
			next := q[k].Add(t[k]).Scale(0.5)
			change = math.Max(change, next.Sub(q[k]).Norm())
			q[k] = next
		}
		if change < 1e-15 {
			break
		}
	}
	return q
}

// rotationOf returns the rotation of a quaternion x y z w, which need not have unit length.
func rotationOf(x, y, z, w float64) (matrix, bool) {
	n := math.Sqrt(float64(x*x) + float64(y*y) + float64(z*z) + float64(w*w))
	if !(n > 1e-30 && n < 1e30) {
		return identity, false
	}
	u := r3.Vec{X: x / n, Y: y / n, Z: z / n}
	w /= n
	turn := func(v r3.Vec) r3.Vec { // v + 2 u x (u x v + w v)
		return v.AddScaled(2, u.Cross(u.Cross(v).AddScaled(w, v)))
	}
	return matrix{turn(identity[0]), turn(identity[1]), turn(identity[2])}, true
}
