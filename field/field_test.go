package field_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
)

// Gauss and Bonnet: the triangles' curvatures sum to 2 pi chi, less what the rims turn.
func TestCurvatureSumsToEuler(t *testing.T) {
	for _, c := range exact.Cases() {
		f := c.Field(1500)
		sum := 0.0
		for i := range int32(len(f.Tris)) {
			sum += f.Curvature(i)
		}
		for _, rim := range f.Rims {
			for _, h := range rim.Edges {
				sum += math.Pi - f.Total(f.Tail(h))
			}
		}
		if want := 2 * math.Pi * float64(c.Euler); math.Abs(sum-want) > 1e-8 {
			t.Errorf("%s: curvature sums to %.12g, want %.12g", c.Name, sum, want)
		}
	}
}

func TestTransportOfTwinIsOpposite(t *testing.T) {
	f := exact.Cases()[0].Field(500)
	for h, g := range f.Twin {
		if g < 0 {
			continue
		}
		if d := r3.Wrap(f.Transport(int32(h)) + f.Transport(g)); math.Abs(d) > 1e-12 {
			t.Fatalf("half-edge %d: transport there and back leaves %g", h, d)
		}
	}
}

// A vector in the tangent plane must come back from its chart, at every corner, as the same vector up to the triangle's
// tilt, which falls with the edge length.
func TestChartsKeepVectors(t *testing.T) {
	var errors [2]float64
	for i, n := range []int{2000, 8000} {
		c := exact.Cases()[1]
		f := c.Field(n)
		for tri := range int32(len(f.Tris)) {
			for k, v := range f.CornerTau(tri) {
				p := f.Points[f.Tris[tri][k]]
				errors[i] = math.Max(errors[i], f.Lift(tri, v).Sub(c.Tau(p)).Norm()/f.MaxTau)
			}
		}
	}
	if errors[0] > 0.1 || errors[1] > errors[0]/1.6 {
		t.Errorf("error of the corner vectors: %g, then %g with half the edge length", errors[0], errors[1])
	}
}

// Along an edge both triangles must see the same vector, relative to the edge.
func TestCornerTauContinuousAcrossEdges(t *testing.T) {
	f := exact.Cases()[1].Field(8000)
	worst := 0.0
	rel := func(h, at int32) r3.Vec2 {
		flat := f.Flat(h / 3)
		k := h % 3
		e := flat[(k+1)%3].Sub(flat[k]).Angle()
		return f.CornerTau(h / 3)[(k+at)%3].Turn(-e)
	}
	for h, g := range f.Twin {
		if g >= 0 {
			// The twin runs the other way: its tail is this tip, and its direction is turned by pi.
			worst = math.Max(worst, rel(int32(h), 0).Add(rel(g, 1)).Norm())
			worst = math.Max(worst, rel(int32(h), 1).Add(rel(g, 0)).Norm())
		}
	}
	if worst > 0.01*f.MaxTau {
		t.Errorf("vectors differ by %g of the largest across an edge", worst/f.MaxTau)
	}
}

func TestNearestAgreesWithScan(t *testing.T) {
	f := exact.Cases()[1].Field(600)
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64Range(-2, 2)
		p := r3.Vec{X: x.Draw(t, "x"), Y: x.Draw(t, "y"), Z: x.Draw(t, "z")}
		loc, dist := f.Nearest(p)
		best := math.Inf(1)
		for tri := range int32(len(f.Tris)) {
			c := f.Corner(tri)
			best = math.Min(best, c.At(c.Nearest(p)).Sub(p).Norm())
		}
		if dist != best || math.Abs(f.Position(loc).Sub(p).Norm()-dist) > 1e-12 {
			t.Fatalf("nearest to %v: %g at %v, scan says %g", p, dist, loc, best)
		}
	})
}

func TestPartsAndRims(t *testing.T) {
	raw := exact.Blocks(2, [3]int{})
	raw = merge(raw, exact.Disk(1, 100))
	raw.Tau = make([]r3.Vec, len(raw.Points))
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	if len(f.Parts) != 2 || f.Parts[0].Euler != 2 || f.Parts[1].Euler != 1 || f.Parts[1].Rims != 1 || f.Parts[0].Genus != 0 {
		t.Errorf("parts: %+v", f.Parts)
	}
	if math.Abs(f.Parts[0].Area-6) > 1e-12 {
		t.Errorf("area of the cube: %g", f.Parts[0].Area)
	}
	if g := exact.Eight(1); true {
		g.Tau = make([]r3.Vec, len(g.Points))
		if f, err := field.Build(g); err != nil || f.Parts[0].Genus != 2 {
			t.Errorf("the block with two holes: %v, %+v", err, f.Parts)
		}
	}
}

// merge puts b beside a.
func merge(a, b field.Raw) field.Raw {
	n := int32(len(a.Points))
	for _, p := range b.Points {
		a.Points = append(a.Points, p.Add(r3.Vec{X: 10}))
	}
	for _, t := range b.Tris {
		a.Tris = append(a.Tris, [3]int32{t[0] + n, t[1] + n, t[2] + n})
	}
	return a
}
