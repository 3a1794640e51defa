package format_test

import (
	"bytes"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// The fast ways are held against slow, obvious ones here.

// Welding joins a point to the first one within the distance that was not joined itself: by comparing all pairs.
func TestWeldingAgainstAllPairs(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		// Points in clumps around few places, a few weld distances wide; the box is one wide by the two corners.
		const distance = 1e-9 * 1.7320508
		points := []r3.Vec{{}, {X: 1, Y: 1, Z: 1}}
		step := rapid.IntRange(-5, 5)
		for range rapid.IntRange(1, 40).Draw(t, "points") {
			at := r3.Vec{X: float64(rapid.IntRange(0, 2).Draw(t, "clump")) / 2}
			points = append(points, at.Add(r3.Vec{
				X: 0.7 * distance * float64(step.Draw(t, "x")), Y: 0.7 * distance * float64(step.Draw(t, "y")),
				Z: 0.5 * distance * float64(step.Draw(t, "z")),
			}))
		}
		var kept []r3.Vec
		d := points[1].Norm() * 1e-9
		for _, p := range points {
			if !slices.ContainsFunc(kept, func(q r3.Vec) bool { return q.Sub(p).Norm() <= d }) {
				kept = append(kept, p)
			}
		}
		raw := field.Raw{Points: points, Tau: make([]r3.Vec, len(points))}
		for i := range int32(len(points) - 2) {
			raw.Tris = append(raw.Tris, [3]int32{0, 1, i + 2})
		}
		var b bytes.Buffer
		if err := format.WriteRawPLY(&b, raw); err != nil {
			t.Fatal(err)
		}
		got, err := format.Prepare("weld.ply", b.Bytes(), format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		if fmt.Sprint(got.Points) != fmt.Sprint(kept) {
			t.Fatalf("%d points are left, want %d:\n%v\n%v", len(got.Points), len(kept), got.Points, kept)
		}
	})
}

// Rows in any order, moved by less than they may be, find the vertex that a search through all vertices finds.
func TestMatchingAgainstAllVertices(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	for round := range 6 {
		raw := sphereRaw(100 + 150*round)
		for i, p := range raw.Points { // graded: the spacing differs by ten from one pole to the other
			raw.Points[i] = p.Scale(math.Exp(1.2 * p.Z))
			raw.Tau[i] = r3.Vec{X: float64(i), Y: 1, Z: 0}
		}
		raw.P = nil
		edge := shortestEdge(raw)
		var b bytes.Buffer
		b.WriteString("x y z tau_x tau_y tau_z\n")
		want := make([]float64, len(raw.Points))
		for i := range want {
			want[i] = math.NaN()
		}
		best := make([]float64, len(raw.Points))
		for _, i := range r.Perm(len(raw.Points))[:len(raw.Points)*9/10] {
			p := raw.Points[i].Add(r3.Vec{X: r.NormFloat64(), Y: r.NormFloat64(),
				Z: r.NormFloat64()}.Unit().Scale(0.2 * edge * r.Float64()))
			fmt.Fprintf(&b, "%.17g %.17g %.17g %d 1 0\n", p.X, p.Y, p.Z, i)
			near, at := math.Inf(1), 0
			for k, q := range raw.Points {
				if d := q.Sub(p).Norm(); d < near {
					near, at = d, k
				}
			}
			if want[at] != want[at] || near < best[at] {
				want[at], best[at] = float64(i), near
			}
		}
		got, err := format.Read("t", b.Bytes(), format.Options{Surface: plyOf(t, raw)})
		if err != nil {
			t.Fatal(err)
		}
		for i, w := range want {
			if g := got.Tau[i].X; g != w && !(g != g && w != w) {
				t.Fatalf("round %d: vertex %d took row %v, want %v", round, i, g, w)
			}
		}
	}
}

func shortestEdge(raw field.Raw) float64 {
	edge := math.Inf(1)
	for _, tri := range raw.Tris {
		for k := range 3 {
			edge = math.Min(edge, raw.Points[tri[k]].Sub(raw.Points[tri[(k+1)%3]]).Norm())
		}
	}
	return edge
}

// The number of Delaunay triangles is 2n - 2 - h, h points being on the hull (Euler's relation); the hull is found by
// the slow way of asking for every pair of points whether all others lie on one side.
func TestNumberOfDelaunayTriangles(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	for n := 4; n < 60; n += 5 {
		var points []r3.Vec2
		for range n {
			points = append(points, r3.Polar(math.Sqrt(r.Float64()), 2*math.Pi*r.Float64())) // even in a disc: no long rims
		}
		hull := 0
		for i, a := range points {
			for j, b := range points {
				left := i != j
				for k, c := range points {
					left = left && (k == i || k == j || b.Sub(a).Cross(c.Sub(a)) > 0)
				}
				if left {
					hull++
				}
			}
		}
		raw, err := format.Read("t", tableOf(points), format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		told, _ := finding(raw.Findings, "reconstructed")
		var made, dropped int
		if _, err := fmt.Sscanf(told.Text, "the table has no triangles: %d were made between its points in their best "+
			"plane (Delaunay), %d long",
			&made, &dropped); err != nil {
			t.Fatal(err)
		}
		if made != len(raw.Tris) || made+dropped != 2*n-2-hull {
			t.Errorf("%d points, %d on the hull: %d triangles and %d dropped, want %d", n, hull, made, dropped, 2*n-2-hull)
		}
	}
}

// A mirrored half is the whole: the same points with the same values as the run that was cut in two, whatever the axis.
func TestMirrorGivesTheWhole(t *testing.T) {
	for axis, name := range []string{"x", "y", "z"} {
		swap := func(v r3.Vec) r3.Vec {
			c := [3]float64{v.X, v.Y, v.Z}
			c[1], c[axis] = c[axis], c[1]
			return r3.Vec{X: c[0], Y: c[1], Z: c[2]}
		}
		half := halfSphere(0, 0)
		for i := range half.Points {
			half.Points[i], half.Tau[i] = swap(half.Points[i]), swap(half.Tau[i])
		}
		whole, err := format.Prepare("h.ply", plyOf(t, half), format.Options{Mirror: name})
		if err != nil {
			t.Fatal(err)
		}
		at := map[string]r3.Vec{}
		key := func(p r3.Vec) string { return fmt.Sprintf("%.9f %.9f %.9f", p.X+2, p.Y+2, p.Z+2) } // +2: no -0
		for i, p := range whole.Points {
			at[key(p)] = whole.Tau[i]
		}
		for i, p := range half.Points {
			q, v := swap(p), swap(half.Tau[i])
			q.Y, v.Y = -q.Y, -v.Y
			if math.Abs(q.Y) < 1e-9 {
				v.Y = 0
			}
			image, ok := at[key(swap(q))]
			if !ok || image.Sub(swap(v)).Norm() > 1e-6 {
				t.Fatalf("%s: the image of %v has %v (%v), want %v", name, p, image, ok, swap(v))
			}
		}
		if len(at) != len(whole.Points) {
			t.Errorf("%s: %d points on %d places", name, len(whole.Points), len(at))
		}
	}
}

// The field itself can be written: WritePLY holds what WriteGLB holds.
func TestWritersOfFields(t *testing.T) {
	f := load(t, "pod.ply", runFile(t, "pod.ply"), format.Options{})
	var ply, glb bytes.Buffer
	if err := format.WritePLY(&ply, f); err != nil {
		t.Fatal(err)
	}
	if err := format.WriteGLB(&glb, f); err != nil {
		t.Fatal(err)
	}
	a, b := load(t, "a", ply.Bytes(), format.Options{}), load(t, "b", glb.Bytes(), format.Options{})
	if a.Name != "pod" || a.Units != f.Units || len(a.Points) != len(b.Points) || len(a.Tris) != len(b.Tris) ||
		a.Euler() != 2 {
		t.Errorf("%s %+v: %d and %d points", a.Name, a.Units, len(a.Points), len(b.Points))
	}
	for v := range a.Points {
		if a.P[v] != b.P[v] || a.Cp[v] != b.Cp[v] || a.Tau3[v].Sub(b.Tau3[v]).Norm() > 1e-4*f.MaxTau {
			t.Fatalf("vertex %d: %v and %v", v, a.Tau3[v], b.Tau3[v])
		}
	}
	for _, raw := range []field.Raw{{}, {Points: a.Points}, {Tris: a.Tris}} {
		if err := format.WriteRawGLB(&glb, raw); err == nil {
			t.Error("an empty GLB was written")
		}
	}
}
