package format_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// tableOf writes points in a plane that is tilted in space.
func tableOf(points []r3.Vec2) []byte {
	u, v := r3.Vec{X: 0.6, Z: 0.8}, r3.Vec{Y: 1}
	var b strings.Builder
	b.WriteString("x,y,z,tau_x,tau_y,tau_z\n")
	for _, p := range points {
		q := u.Scale(p.X).AddScaled(p.Y, v)
		fmt.Fprintf(&b, "%.15g,%.15g,%.15g,%g,%g,%g\n", q.X, q.Y, q.Z, u.X, u.Y, u.Z)
	}
	return []byte(b.String())
}

// inCircle is the slow oracle: positive where d is within the circle through a, b, c (counter-clockwise).
func inCircle(a, b, c, d r3.Vec2) float64 {
	a, b, c = a.Sub(d), b.Sub(d), c.Sub(d)
	return a.Dot(a)*b.Cross(c) + b.Dot(b)*c.Cross(a) + c.Dot(c)*a.Cross(b)
}

// No point lies within the circle of any triangle; a convex set is covered wholly.
func TestScatteredPlaneIsDelaunay(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	var points []r3.Vec2
	for len(points) < 400 {
		points = append(points, r3.Vec2{X: r.Float64(), Y: r.Float64()})
	}
	raw, err := format.Read("t.csv", tableOf(points), format.Options{})
	if err != nil {
		t.Fatal(err)
	}
	for _, tri := range raw.Tris {
		a, b, c := points[tri[0]], points[tri[1]], points[tri[2]]
		if s := b.Sub(a).Cross(c.Sub(a)); s < 0 {
			b, c = c, b
		}
		for _, d := range points {
			if inCircle(a, b, c, d) > 1e-9 {
				t.Fatalf("%v lies within the circle of %v %v %v", d, a, b, c)
			}
		}
	}
	if note, ok := finding(raw.Findings, "reconstructed"); !ok || note.Level != field.Doubtful {
		t.Errorf("not told: %+v", raw.Findings)
	}
	area := 0.0
	for _, tri := range raw.Tris {
		area += r3.Tri{raw.Points[tri[0]], raw.Points[tri[1]], raw.Points[tri[2]]}.Area()
	}
	if area < 0.9 || area > 1 {
		t.Errorf("area %g of the unit square", area)
	}
}

// Points on a lattice, where every circle passes through four of them, and on few places.
func TestDegeneratePlanes(t *testing.T) {
	lattice := func(n int) (p []r3.Vec2) {
		for _, k := range rand.New(rand.NewPCG(7, 8)).Perm(n * n) {
			p = append(p, r3.Vec2{X: float64(k % n), Y: float64(k / n)})
		}
		return p
	}
	f := load(t, "lattice.csv", tableOf(lattice(25)), format.Options{})
	if len(f.Tris) != 2*24*24 || f.Euler() != 1 || len(f.Rims) != 1 {
		t.Errorf("lattice: %d triangles, chi %d", len(f.Tris), f.Euler())
	}
	var ring []r3.Vec2 // all on one circle
	for i := range 60 {
		a := 2 * math.Pi * float64((7*i)%60) / 60
		ring = append(ring, r3.Vec2{X: math.Cos(a), Y: math.Sin(a)})
	}
	raw, err := format.Read("ring.csv", tableOf(append(ring, r3.Vec2{})), format.Options{})
	if err != nil || len(raw.Tris) != 60 {
		t.Errorf("ring with its centre: %d triangles, %v", len(raw.Tris), err)
	}
	doubles := append(lattice(6), lattice(6)...)
	if f := load(t, "doubles.csv", tableOf(doubles), format.Options{}); len(f.Tris) != 50 || f.Euler() != 1 {
		t.Errorf("doubles: %d triangles, chi %d", len(f.Tris), f.Euler())
	}
	for name, p := range map[string][]r3.Vec2{
		"line":     {{X: 0}, {X: 1}, {X: 2}, {X: 4}, {X: 3}},
		"place":    {{X: 1}, {X: 1}, {X: 1}, {X: 1}},
		"two":      {{X: 0}, {X: 1}},
		"nothing":  {},
		"skewline": {{X: 0, Y: 0}, {X: 1, Y: 1}, {X: 3, Y: 3}, {X: 2, Y: 2}},
	} {
		if _, err := format.Read(name, tableOf(p), format.Options{}); err == nil || !strings.HasPrefix(err.Error(),
			name+": ") {
			t.Errorf("%s: error %v", name, err)
		}
	}
}

// A hole in the data, as of a body that stands on the plate, and a bay of the outline stay open.
func TestGapsStayOpen(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	var points []r3.Vec2
	for i := range 60 {
		for j := range 60 {
			p := r3.Vec2{X: float64(i) + 0.3*r.Float64(), Y: float64(j) + 0.3*r.Float64()}
			inHole := p.Sub(r3.Vec2{X: 20, Y: 30}).Norm() < 8
			inBay := p.X > 40 && p.Y > 20 && p.Y < 40
			if !inHole && !inBay {
				points = append(points, p)
			}
		}
	}
	r.Shuffle(len(points), func(i, j int) { points[i], points[j] = points[j], points[i] })
	f := load(t, "plate.csv", tableOf(points), format.Options{})
	if f.Euler() != 0 || len(f.Rims) != 2 || len(f.Parts) != 1 {
		t.Errorf("chi %d, %d rims, %d parts", f.Euler(), len(f.Rims), len(f.Parts))
	}
}

// Any points in a plane give a valid triangulation or a clear refusal: triangles do not overlap, so their area is at
// most that of the box, and Euler's relation of a planar graph bounds their number.
func TestAnyPlanarPoints(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(3, 60).Draw(t, "n")
		step := rapid.SampledFrom([]float64{1, 0.25, 1e-3, 1e-7}).Draw(t, "step")
		var points []r3.Vec2
		for range n {
			x, y := rapid.IntRange(-6, 6).Draw(t, "x"), rapid.IntRange(-6, 6).Draw(t, "y")
			points = append(points, r3.Vec2{X: float64(x), Y: float64(y)}.Add(r3.Vec2{X: step * float64(y),
				Y: step * float64(x*x)}))
		}
		raw, err := format.Read("t.csv", tableOf(points), format.Options{})
		if err != nil {
			return
		}
		if len(raw.Tris) > 2*n {
			t.Fatalf("%d triangles of %d points", len(raw.Tris), n)
		}
		area := 0.0
		for _, tri := range raw.Tris {
			area += r3.Tri{raw.Points[tri[0]], raw.Points[tri[1]], raw.Points[tri[2]]}.Area()
		}
		lo, hi := points[0], points[0]
		for _, p := range points {
			lo = r3.Vec2{X: math.Min(lo.X, p.X), Y: math.Min(lo.Y, p.Y)}
			hi = r3.Vec2{X: math.Max(hi.X, p.X), Y: math.Max(hi.Y, p.Y)}
		}
		if box := (hi.X - lo.X) * (hi.Y - lo.Y); area > box*(1+1e-6) {
			t.Fatalf("area %g in a box of %g", area, box)
		}
	})
}
