package r3_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field/r3"
)

// The reference is package math of the Go library.
func TestElementaryAgreesWithMath(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64Range(-1e6, 1e6).Draw(t, "x") + 0
		y := rapid.Float64Range(-1e6, 1e6).Draw(t, "y") + 0 // -0 becomes 0: see TestAtan2Edges
		e := rapid.Float64Range(-700, 700).Draw(t, "e")
		s, c := r3.SinCos(x)
		near(t, "sin", s, math.Sin(x), 4e-16)
		near(t, "cos", c, math.Cos(x), 4e-16)
		near(t, "atan2", r3.Atan2(y, x), math.Atan2(y, x), 1e-15)
		near(t, "hypot", r3.Hypot(x, y), math.Hypot(x, y), 4e-16*math.Hypot(x, y))
		near(t, "exp", r3.Exp(e), math.Exp(e), 2e-15*math.Exp(e))
		a := math.Max(math.Abs(x), 1e-300) // the library's assembly is off by 0.4 for subnormal numbers; see below
		near(t, "log", r3.Log(a), math.Log(a), 4e-16*math.Max(1, math.Abs(math.Log(a))))
	})
}

func near(t *rapid.T, name string, got, want, tol float64) {
	t.Helper()
	if got != want && !(math.Abs(got-want) <= tol) {
		t.Fatalf("%s: got %.17g, want %.17g (off by %g)", name, got, want, got-want)
	}
}

// ln(2^-1023) = -1023 ln 2: subnormal numbers have no separate rule here.
func TestLogOfSubnormal(t *testing.T) {
	if got, want := r3.Log(math.Ldexp(1, -1023)), -1023*math.Ln2; math.Abs(got-want) > 1e-12 {
		t.Errorf("Log(2^-1023) = %.15g, want %.15g", got, want)
	}
}

func TestWrapRange(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a := rapid.Float64Range(-1e4, 1e4).Draw(t, "a")
		w := r3.Wrap(a)
		if w <= -math.Pi || w > math.Pi {
			t.Fatalf("Wrap(%g) = %g is outside (-pi, pi]", a, w)
		}
		turns := (a - w) / (2 * math.Pi)
		near(t, "turns", turns, math.Round(turns), 1e-11)
	})
}

func TestAtan2Edges(t *testing.T) {
	for _, c := range []struct{ y, x, want float64 }{
		{0, 0, 0}, {0, -1, math.Pi}, {math.Copysign(0, -1), -1, math.Pi}, {1, 0, math.Pi / 2}, {-1, 0, -math.Pi / 2},
		{1, 1, math.Pi / 4}, {5e-324, -5e-324, 3 * math.Pi / 4},
	} {
		if got := r3.Atan2(c.y, c.x); math.Abs(got-c.want) > 1e-15 {
			t.Errorf("Atan2(%g, %g) = %.17g, want %.17g", c.y, c.x, got, c.want)
		}
	}
}

func TestNearestPointOfTriangle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := func(name string) r3.Vec {
			f := rapid.Float64Range(-1, 1)
			return r3.Vec{X: f.Draw(t, name), Y: f.Draw(t, name), Z: f.Draw(t, name)}
		}
		tri, p := r3.Tri{v("a"), v("b"), v("c")}, v("p")
		best := p.Sub(tri.At(tri.Nearest(p))).Norm()
		// A slow obvious answer: no sampled point of the triangle is nearer.
		for i := 0; i <= 20; i++ {
			for j := 0; j <= 20-i; j++ {
				b := [3]float64{float64(i) / 20, float64(j) / 20, float64(20-i-j) / 20}
				if d := p.Sub(tri.At(b)).Norm(); d < best-1e-9 {
					t.Fatalf("sample %v at %g is nearer than %g", b, d, best)
				}
			}
		}
	})
}

func TestRotateBetweenKeepsLengthAndMapsAxis(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f := rapid.Float64Range(-1, 1)
		v := func(name string) r3.Vec { return r3.Vec{X: f.Draw(t, name), Y: f.Draw(t, name), Z: f.Draw(t, name)} }
		from, to, a := v("from").Unit(), v("to").Unit(), v("a")
		if from == (r3.Vec{}) || to == (r3.Vec{}) || from.Dot(to) < -0.999 {
			t.Skip("no single smallest rotation")
		}
		near(t, "length", a.RotateBetween(from, to).Norm(), a.Norm(), 1e-11)
		near(t, "axis", from.RotateBetween(from, to).Sub(to).Norm(), 0, 1e-11)
	})
}
