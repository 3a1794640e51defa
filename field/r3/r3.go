// Package r3 holds vectors in space and in a flat frame.
//
// It is the only home of raw coordinate arithmetic. Every product that is added to something is wrapped in float64(...),
// which forbids the compiler to fuse it into a multiply-add: results are then the same bytes on every processor and in
// the browser. For the same reason the elementary functions here (Atan2, SinCos, Exp, Log, Hypot) replace those of
// package math, whose assembly differs between targets.
//
// Values are never changed in place. The unit vector of a zero vector is zero, not NaN: stagnation is the subject.
package r3

import "math"

// Vec is a point or a vector in space.
type Vec struct{ X, Y, Z float64 }

// Add returns a + b.
func (a Vec) Add(b Vec) Vec { return Vec{a.X + b.X, a.Y + b.Y, a.Z + b.Z} }

// Sub returns a - b.
func (a Vec) Sub(b Vec) Vec { return Vec{a.X - b.X, a.Y - b.Y, a.Z - b.Z} }

// Scale returns s a.
func (a Vec) Scale(s float64) Vec { return Vec{float64(s * a.X), float64(s * a.Y), float64(s * a.Z)} }

// AddScaled returns a + s b.
func (a Vec) AddScaled(s float64, b Vec) Vec {
	return Vec{a.X + float64(s*b.X), a.Y + float64(s*b.Y), a.Z + float64(s*b.Z)}
}

// Dot returns the scalar product.
func (a Vec) Dot(b Vec) float64 { return float64(a.X*b.X) + float64(a.Y*b.Y) + float64(a.Z*b.Z) }

// Cross returns the vector product a x b.
func (a Vec) Cross(b Vec) Vec {
	return Vec{
		float64(a.Y*b.Z) - float64(a.Z*b.Y),
		float64(a.Z*b.X) - float64(a.X*b.Z),
		float64(a.X*b.Y) - float64(a.Y*b.X),
	}
}

// Norm returns the length. It may overflow for components above 1e154; readers refuse such data.
func (a Vec) Norm() float64 { return math.Sqrt(a.Dot(a)) }

// Unit returns the vector of length 1 along a, or zero for a zero vector.
func (a Vec) Unit() Vec {
	m := math.Max(math.Abs(a.X), math.Max(math.Abs(a.Y), math.Abs(a.Z)))
	if m == 0 || math.IsInf(m, 1) || m != m {
		return Vec{}
	}
	// Division first, so that neither tiny nor huge vectors lose their direction.
	b := Vec{a.X / m, a.Y / m, a.Z / m}
	n := b.Norm()
	return Vec{b.X / n, b.Y / n, b.Z / n}
}

// Reject returns the part of a that is perpendicular to the unit vector n.
func (a Vec) Reject(n Vec) Vec { return a.AddScaled(-a.Dot(n), n) }

// Lerp returns a + t (b - a).
func (a Vec) Lerp(b Vec, t float64) Vec { return a.AddScaled(t, b.Sub(a)) }

// Finite tells whether no component is NaN or infinite.
func (a Vec) Finite() bool { return finite(a.X) && finite(a.Y) && finite(a.Z) }

func finite(x float64) bool { return x-x == 0 }

// Perpendicular returns a unit vector perpendicular to a; for a zero vector, the x axis.
func (a Vec) Perpendicular() Vec {
	x, y, z := math.Abs(a.X), math.Abs(a.Y), math.Abs(a.Z)
	switch {
	case x == 0 && y == 0 && z == 0:
		return Vec{1, 0, 0}
	case x <= y && x <= z:
		return a.Cross(Vec{1, 0, 0}).Unit()
	case y <= z:
		return a.Cross(Vec{0, 1, 0}).Unit()
	}
	return a.Cross(Vec{0, 0, 1}).Unit()
}

// RotateBetween turns a by the smallest rotation that takes the unit vector from into the unit vector to.
// For opposite vectors, where the smallest rotation is not unique, it turns about from.Perpendicular().
func (a Vec) RotateBetween(from, to Vec) Vec {
	axis := from.Cross(to)
	c := from.Dot(to)
	if c < -1+1e-12 {
		k := from.Perpendicular()
		return k.Scale(2 * k.Dot(a)).Sub(a)
	}
	// Rodrigues' formula with sin and cos taken from the two vectors: R a = c a + axis x a + axis (axis . a)/(1+c).
	return a.Scale(c).Add(axis.Cross(a)).AddScaled(axis.Dot(a)/(1+c), axis)
}

// Vec2 is a vector in a flat frame: a triangle's plane or a vertex's polar chart.
type Vec2 struct{ X, Y float64 }

// Polar returns the vector of length r at the angle phi [rad] from the x axis.
func Polar(r, phi float64) Vec2 {
	s, c := SinCos(phi)
	return Vec2{float64(r * c), float64(r * s)}
}

// Add returns a + b.
func (a Vec2) Add(b Vec2) Vec2 { return Vec2{a.X + b.X, a.Y + b.Y} }

// Sub returns a - b.
func (a Vec2) Sub(b Vec2) Vec2 { return Vec2{a.X - b.X, a.Y - b.Y} }

// Scale returns s a.
func (a Vec2) Scale(s float64) Vec2 { return Vec2{float64(s * a.X), float64(s * a.Y)} }

// AddScaled returns a + s b.
func (a Vec2) AddScaled(s float64, b Vec2) Vec2 {
	return Vec2{a.X + float64(s*b.X), a.Y + float64(s*b.Y)}
}

// Dot returns the scalar product.
func (a Vec2) Dot(b Vec2) float64 { return float64(a.X*b.X) + float64(a.Y*b.Y) }

// Cross returns a.X b.Y - a.Y b.X: positive where b lies counter-clockwise of a.
func (a Vec2) Cross(b Vec2) float64 { return float64(a.X*b.Y) - float64(a.Y*b.X) }

// Norm returns the length.
func (a Vec2) Norm() float64 { return Hypot(a.X, a.Y) }

// Unit returns the vector of length 1 along a, or zero for a zero vector.
func (a Vec2) Unit() Vec2 {
	u := Vec{a.X, a.Y, 0}.Unit()
	return Vec2{u.X, u.Y}
}

// Left returns a turned by a right angle counter-clockwise.
func (a Vec2) Left() Vec2 { return Vec2{-a.Y, a.X} }

// Angle returns the angle of a from the x axis in (-pi, pi]; zero for a zero vector.
func (a Vec2) Angle() float64 { return Atan2(a.Y, a.X) }

// Turn returns a turned counter-clockwise by phi [rad].
func (a Vec2) Turn(phi float64) Vec2 {
	s, c := SinCos(phi)
	return Vec2{float64(c*a.X) - float64(s*a.Y), float64(s*a.X) + float64(c*a.Y)}
}

// Lerp returns a + t (b - a).
func (a Vec2) Lerp(b Vec2, t float64) Vec2 { return a.AddScaled(t, b.Sub(a)) }
