package field_test

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
)

func withTau(raw field.Raw) field.Raw {
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = r3.Vec{X: 1 + p.Y, Y: p.Z, Z: -p.X}
	}
	return raw
}

func codes(f *field.Field) map[string]int {
	m := map[string]int{}
	for _, x := range f.Findings {
		m[x.Code] = x.Count
	}
	return m
}

func TestRepairs(t *testing.T) {
	cube := func() field.Raw { return withTau(exact.Blocks(2, [3]int{})) }
	for _, c := range []struct {
		name  string
		spoil func(raw *field.Raw)
		code  string
		count int
		euler int
		rims  int
	}{
		{"turned face", func(r *field.Raw) { r.Tris[5][0], r.Tris[5][1] = r.Tris[5][1], r.Tris[5][0] }, "turned-faces", 1, 2, 0},
		{"inside out", func(r *field.Raw) {
			for i := range r.Tris {
				r.Tris[i][0], r.Tris[i][1] = r.Tris[i][1], r.Tris[i][0]
			}
		}, "turned-part", 48, 2, 0},
		{"double", func(r *field.Raw) { r.Tris = append(r.Tris, r.Tris[3]) }, "dropped-doubles", 1, 2, 0},
		{"sliver with a repeated corner", func(r *field.Raw) {
			r.Tris = append(r.Tris, [3]int32{r.Tris[0][0], r.Tris[0][0], r.Tris[0][1]})
		}, "collapsed-slivers", 1, 2, 0},
		{"point without place", func(r *field.Raw) { r.Points[0].X = math.NaN() }, "holes", -1, 1, 1},
		{"point without value", func(r *field.Raw) { r.Tau[0].Y = math.Inf(1) }, "holes", -1, 1, 1},
		{"unused point", func(r *field.Raw) {
			r.Points = append(r.Points, r3.Vec{X: 9})
			r.Tau = append(r.Tau, r3.Vec{})
		}, "unused-points", 1, 2, 0},
		{"fin on an edge", func(r *field.Raw) {
			r.Points = append(r.Points, r3.Vec{X: -1, Y: -1, Z: 3})
			r.Tau = append(r.Tau, r3.Vec{})
			r.Tris = append(r.Tris, [3]int32{r.Tris[0][0], r.Tris[0][1], int32(len(r.Points) - 1)})
		}, "cut-edges", 1, 2, 2},
	} {
		raw := cube()
		c.spoil(&raw)
		f, err := field.Build(raw)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		count, ok := codes(f)[c.code]
		if !ok || c.count >= 0 && count != c.count || f.Euler() != c.euler || len(f.Rims) != c.rims {
			t.Errorf("%s: findings %+v, chi %d, rims %d; want %s x %d, chi %d, rims %d",
				c.name, f.Findings, f.Euler(), len(f.Rims), c.code, c.count, c.euler, c.rims)
		}
	}
}

// Two cubes that touch in a corner share no edge: the point is doubled, and each is a body of its own.
func TestTouchingBodiesAreSeparated(t *testing.T) {
	f, err := field.Build(withTau(exact.Blocks(1, [3]int{}, [3]int{1, 1, 1})))
	if err != nil {
		t.Fatal(err)
	}
	if len(f.Parts) != 2 || f.Euler() != 4 || codes(f)["cut-points"] != 1 {
		t.Errorf("parts %+v, findings %+v", f.Parts, f.Findings)
	}
}

func TestMoebiusStripIsCut(t *testing.T) {
	const n = 12
	var raw field.Raw
	for i := range n {
		a := 2 * math.Pi * float64(i) / n
		for _, s := range []float64{-0.3, 0.3} {
			r := 1 + s*math.Cos(a/2)
			raw.Points = append(raw.Points, r3.Vec{X: r * math.Cos(a), Y: r * math.Sin(a), Z: s * math.Sin(a/2)})
		}
	}
	for i := range int32(n) {
		a, b, c, d := 2*i, 2*i+1, 2*i+2, 2*i+3
		if i == n-1 {
			c, d = 1, 0
		}
		raw.Tris = append(raw.Tris, [3]int32{a, c, b}, [3]int32{b, c, d})
	}
	f, err := field.Build(withTau(raw))
	if err != nil {
		t.Fatal(err)
	}
	if codes(f)["one-sided"] != 1 || f.Euler() != 1 || len(f.Rims) != 1 {
		t.Errorf("chi %d, rims %d, findings %+v", f.Euler(), len(f.Rims), f.Findings)
	}
}

func TestUnusableDataIsRefused(t *testing.T) {
	for _, c := range []struct {
		name, want string
		spoil      func(raw *field.Raw)
	}{
		{"no triangles", "no triangles", func(r *field.Raw) { r.Tris = nil }},
		{"no tau", "no wall shear stress", func(r *field.Raw) { r.Tau = nil }},
		{"bad index", "names point 999", func(r *field.Raw) { r.Tris[2][1] = 999 }},
		{"short tau", "tau per point: 3 values", func(r *field.Raw) { r.Tau = r.Tau[:3] }},
		{"huge", "beyond", func(r *field.Raw) { r.Tau[1].X = 1e200 }},
		{"all NaN", "no usable triangle", func(r *field.Raw) {
			for i := range r.Tau {
				r.Tau[i].X = math.NaN()
			}
		}},
	} {
		raw := withTau(exact.Blocks(1, [3]int{}))
		c.spoil(&raw)
		if _, err := field.Build(raw); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: error %v, want one with %q", c.name, err, c.want)
		}
	}
}

func TestMissingPressureIsFilledAndTold(t *testing.T) {
	raw := withTau(exact.Sphere(1, 500))
	raw.P = make([]float64, len(raw.Points))
	for i := range raw.P {
		raw.P[i] = 7
	}
	raw.P[3], raw.P[40] = math.NaN(), math.Inf(1)
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	if codes(f)["filled-p"] != 2 {
		t.Errorf("findings: %+v", f.Findings)
	}
	for v, p := range f.P {
		if p != 7 {
			t.Errorf("p at vertex %d is %g, want 7", v, p)
		}
	}
}

// Any soup of triangles becomes an oriented manifold whose adjacency holds.
func TestAnySoupBecomesManifold(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(3, 12).Draw(t, "points")
		var raw field.Raw
		c := rapid.Float64Range(-1, 1)
		for range n {
			raw.Points = append(raw.Points, r3.Vec{X: c.Draw(t, "x"), Y: c.Draw(t, "y"), Z: c.Draw(t, "z")})
		}
		v := rapid.Int32Range(0, int32(n-1))
		for range rapid.IntRange(1, 30).Draw(t, "triangles") {
			raw.Tris = append(raw.Tris, [3]int32{v.Draw(t, "a"), v.Draw(t, "b"), v.Draw(t, "c")})
		}
		f, err := field.Build(withTau(raw))
		if err != nil {
			return // nothing usable
		}
		for h := range int32(len(f.Twin)) {
			if g := f.Twin[h]; g >= 0 && (f.Twin[g] != h || f.Tail(g) != f.Tip(h) || f.Tip(g) != f.Tail(h)) {
				t.Fatalf("half-edge %d and its twin %d do not match", h, g)
			}
		}
		corners := 0
		for v := range int32(len(f.Points)) {
			for h := range f.Fan(v) {
				if f.Tail(h) != v {
					t.Fatalf("the fan of %d contains half-edge %d", v, h)
				}
				corners++
			}
		}
		if corners != len(f.Twin) {
			t.Fatalf("the fans hold %d corners of %d", corners, len(f.Twin))
		}
		euler := 0
		for _, p := range f.Parts {
			euler += p.Euler
			if p.Genus < 0 || 2-2*p.Genus-p.Rims != p.Euler {
				t.Fatalf("part %+v", p)
			}
		}
	})
}

// A hub with very many triangles must not cost the square of their number: the test would take hours if it did.
func TestHubOfManyTriangles(t *testing.T) {
	const n = 300_000
	raw := field.Raw{Points: []r3.Vec{{Z: 1}}}
	for i := range n {
		s, c := r3.SinCos(2 * math.Pi * float64(i) / n)
		raw.Points = append(raw.Points, r3.Vec{X: c, Y: s})
		raw.Tris = append(raw.Tris, [3]int32{0, int32(1 + i), int32(1 + (i+1)%n)})
	}
	f, err := field.Build(withTau(raw))
	if err != nil || f.Euler() != 1 {
		t.Fatalf("%v, chi %d", err, f.Euler())
	}
}
