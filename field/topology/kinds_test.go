package topology_test

import (
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// What the linear part cannot decide is named and keeps its index, wherever the mesh has its vertices: on the zero (the
// disk's middle) or beside it.
func TestDegenerateKinds(t *testing.T) {
	re := func(f func(z complex128) complex128) func(x, y float64) (float64, float64) {
		return func(x, y float64) (float64, float64) {
			w := f(complex(x, y))
			return real(w), imag(w)
		}
	}
	conj := func(z complex128) complex128 { return complex(real(z), -imag(z)) }
	for _, c := range []struct {
		name   string
		tau    func(x, y float64) (float64, float64)
		index  int
		points int
		note   string
	}{
		{"centre", re(func(z complex128) complex128 { return 1i * z }), 1, 1, "centre"},
		{"monkey saddle", re(func(z complex128) complex128 { return conj(z * z) }), -2, 1, "more than a linear zero"},
		{"dipole", re(func(z complex128) complex128 { return z * z }), 2, 1, "more than a linear zero"},
		{"index -3", re(func(z complex128) complex128 { return conj(z * z * z) }), -3, 1, "more than a linear zero"},
		{"cusp, index 0", func(x, y float64) (float64, float64) { return y, x * x }, 0, 1, "exactly zero"},
		{"line of zeros", func(x, y float64) (float64, float64) { return x, 0 }, 1, 1, "several vertices"},
		{"region of zeros", func(x, y float64) (float64, float64) {
			r := math.Max(0, math.Hypot(x, y)-0.4)
			return r * x, -r * y
		}, -1, 1, "several vertices"},
		{"nothing but zeros", func(x, y float64) (float64, float64) { return 0, 0 }, 1, 1, "several vertices"},
	} {
		raw := exact.Plate(1, 1, 1152)
		if c.name == "centre" || c.name == "line of zeros" || strings.HasPrefix(c.name, "index") {
			raw = exact.Disk(1, 1152)
		}
		s := find(t, planeField(t, raw, c.tau), topology.Options{})
		checkLedger(t, s)
		if len(s.Points) != c.points {
			t.Errorf("%s: %d points, want %d: %+v", c.name, len(s.Points), c.points, s.Points)
			continue
		}
		p := s.Points[0]
		if p.Type != topology.Degenerate || p.Sense != topology.Neutral || p.Index != c.index ||
			!strings.Contains(p.Note, c.note) {
			t.Errorf("%s: %v of %v, index %d (%s), want index %d", c.name, p.Type, p.Sense, p.Index, p.Note, c.index)
		}
		if p.ID != "D1" {
			t.Errorf("%s is called %s", c.name, p.ID)
		}
	}
}

// Second-order zeros that lie in the middle of triangles are found as one point, at their place.
func TestKnots(t *testing.T) {
	for name, index := range map[string]int{"disk-monkey-saddle": -2, "disk-dipole": 2} {
		for _, n := range []int{800, 3000, 20000} {
			s := find(t, caseNamed(name).Field(n), topology.Options{})
			if len(s.Points) != 1 || s.Points[0].Index != index || s.Points[0].Type != topology.Degenerate {
				t.Errorf("%s, %d triangles: %+v", name, n, s.Points)
				continue
			}
			p := s.Points[0]
			if d := p.Position.Sub(r3.Vec{X: 0.0313, Y: -0.0171}).Norm(); d > 0.1*p.Size {
				t.Errorf("%s, %d triangles: %g edges off", name, n, d/p.Size)
			}
		}
	}
}

// A star node stays a node, and an improper node too, whatever rounding makes of them.
func TestBorderNodes(t *testing.T) {
	for name, tau := range map[string]func(x, y float64) (float64, float64){
		"star":     func(x, y float64) (float64, float64) { return x - 0.03, y + 0.01 },
		"improper": func(x, y float64) (float64, float64) { return x + y, y - 0.02 },
	} {
		s := find(t, planeField(t, exact.Shake(exact.Disk(1, 2000), 0.3, 1, exact.OntoPlane), tau), topology.Options{})
		if len(s.Points) != 1 || s.Points[0].Type != topology.Node || s.Points[0].Sense != topology.Attachment {
			t.Errorf("%s: %+v", name, s.Points)
		}
	}
}

// Eigenvalues, trace and determinant against gonum's, for any linear field.
func TestEigenvaluesAgreeWithGonum(t *testing.T) {
	raw := exact.Disk(1, 300)
	rapid.Check(t, func(t *rapid.T) {
		num := rapid.Float64Range(-3, 3)
		j := [2][2]float64{{num.Draw(t, "a"), num.Draw(t, "b")}, {num.Draw(t, "c"), num.Draw(t, "d")}}
		if math.Abs(j[0][0]*j[1][1]-j[0][1]*j[1][0]) < 0.01 {
			return // hardly a zero
		}
		f := planeField(t, raw, func(x, y float64) (float64, float64) {
			x, y = x-0.02, y+0.03
			return j[0][0]*x + j[0][1]*y, j[1][0]*x + j[1][1]*y
		})
		s := find(t, f, topology.Options{})
		if len(s.Points) != 1 {
			t.Fatalf("%d points", len(s.Points))
		}
		p := s.Points[0]
		var e mat.Eigen
		if !e.Factorize(mat.NewDense(2, 2, []float64{j[0][0], j[0][1], j[1][0], j[1][1]}), mat.EigenNone) {
			t.Fatal("gonum finds no eigenvalues")
		}
		want := e.Values(nil)
		slices.SortFunc(want, func(a, b complex128) int {
			if math.Abs(real(a)-real(b)) > 1e-9 {
				return int(math.Copysign(1, real(b)-real(a)))
			}
			return int(math.Copysign(1, imag(b)-imag(a)))
		})
		for i, w := range want {
			// Near a double eigenvalue, errors of the slopes enter by their square root.
			if d := math.Hypot(p.Eigenvalues[i][0]-real(w), p.Eigenvalues[i][1]-imag(w)); d > 1e-5 {
				t.Fatalf("eigenvalues %v, gonum %v", p.Eigenvalues, want)
			}
		}
		if math.Abs(p.Trace-real(want[0]+want[1])) > 1e-9 || math.Abs(p.Determinant-real(want[0]*want[1])) > 1e-9 {
			t.Fatalf("trace %g, determinant %g, gonum %v", p.Trace, p.Determinant, want)
		}
		for i := range 2 {
			for k := range 2 {
				if math.Abs(p.Jacobian[i][k]-j[i][k]) > 1e-9 {
					t.Fatalf("Jacobian %v, want %v", p.Jacobian, j)
				}
			}
		}
	})
}

// Place and eigenvalues converge: half the edge, a quarter of the error or better.
func TestFitConverges(t *testing.T) {
	c := caseNamed("stream-and-strain")
	var place, slope [2]float64
	for i, n := range []int{2000, 8000} {
		raw := exact.Shake(c.Raw(n), 0.25, 9, exact.OntoSphere(1))
		raw.Tau = make([]r3.Vec, len(raw.Points))
		for k, p := range raw.Points {
			raw.Tau[k] = c.Tau(p)
		}
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		s := find(t, f, topology.Options{})
		for _, want := range c.Points {
			p := nearestPoint(s, want.Position)
			place[i] = math.Max(place[i], p.Position.Sub(want.Position).Norm())
			for k, e := range want.Eigenvalues {
				slope[i] = math.Max(slope[i], math.Abs(p.Eigenvalues[k][0]-real(e))/10)
			}
		}
	}
	t.Logf("place off by %.2g, then %.2g; eigenvalues by %.2g, then %.2g", place[0], place[1], slope[0], slope[1])
	if place[1] > place[0]/3 || slope[1] > slope[0]/2.5 {
		t.Errorf("place off by %g, then %g; eigenvalues by %g, then %g", place[0], place[1], slope[0], slope[1])
	}
}

// The same field on structured, random and graded meshes has the same points.
func TestMeshIndependence(t *testing.T) {
	c := caseNamed("stream-and-strain")
	graded := exact.Sphere(1, 12000)
	for i, p := range graded.Points { // drawn together towards +x
		graded.Points[i] = r3.Vec{X: p.X + 0.5, Y: p.Y, Z: p.Z}.Unit()
	}
	for name, raw := range map[string]field.Raw{
		"structured": exact.Sphere(1, 8000), "cube": cubeSphere(30), "graded": graded,
		"random": exact.Shake(exact.Sphere(1, 8000), 0.35, 4, exact.OntoSphere(1)),
	} {
		raw.Tau = make([]r3.Vec, len(raw.Points))
		for i, p := range raw.Points {
			raw.Tau[i] = c.Tau(p)
		}
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		s := find(t, f, topology.Options{})
		if len(s.Points) != len(c.Points) {
			t.Errorf("%s: %d points, want %d", name, len(s.Points), len(c.Points))
		}
		for _, want := range c.Points {
			p := nearestPoint(s, want.Position)
			if p.Type.String() != want.Type || p.Position.Sub(want.Position).Norm() > 0.1*p.Size {
				t.Errorf("%s: %s is a %v, %g edges off", name, p.ID, p.Type, p.Position.Sub(want.Position).Norm()/p.Size)
			}
			compareEigenvalues(t, p, want)
		}
	}
}

// Two points nearer than three edges are told to be unresolved, far ones are not.
func TestResolution(t *testing.T) {
	for _, c := range []struct {
		half     float64 // distance of each from the middle, in edges
		resolved bool
	}{{0.8, false}, {4, true}} {
		raw := exact.Plate(1, 1, 2*40*40)
		const edge = 0.05
		f := planeField(t, raw, func(x, y float64) (float64, float64) {
			x, y = x-0.013, y-0.017
			return x*x - c.half*c.half*edge*edge, y
		})
		s := find(t, f, topology.Options{})
		if len(s.Points) != 2 {
			t.Fatalf("%d points", len(s.Points))
		}
		for _, p := range s.Points {
			if p.Resolved != c.resolved {
				t.Errorf("%s with its partner %g edges away: resolved %v (%s)", p.ID, 2*c.half, p.Resolved, p.Note)
			}
		}
		if (len(s.Findings) == 0) != c.resolved {
			t.Errorf("findings: %+v", s.Findings)
		}
	}
}

// Points on sharp edges keep their index and say that their place is doubtful.
func TestCreases(t *testing.T) {
	s := find(t, caseNamed("cube").Field(3000), topology.Options{})
	for _, p := range s.Points {
		if p.Confidence < 0 || p.Confidence > 1 || p.Note == "" && !p.Resolved {
			t.Errorf("%+v", p)
		}
	}
	if !s.Ledger.Balanced || s.Ledger.IndexSum != 2 {
		t.Errorf("ledger: %+v", s.Ledger.Count)
	}
}
