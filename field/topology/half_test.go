package topology_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// half keeps the triangles on the side y > 0 of a mesh whose edges lie along y = 0.
func half(raw field.Raw) field.Raw {
	var kept [][3]int32
	for _, t := range raw.Tris {
		low, sum := 0.0, 0.0
		for _, v := range t {
			low = math.Min(low, raw.Points[v].Y)
			sum += raw.Points[v].Y
		}
		if low > -1e-9 && sum > 1e-9 {
			kept = append(kept, t)
		}
	}
	raw.Tris = kept
	return raw
}

// cubeSphere is a sphere made from a cube, with edges along y = 0 for even n.
func cubeSphere(n int) field.Raw {
	raw := exact.Blocks(n, [3]int{})
	for i, p := range raw.Points {
		raw.Points[i] = p.Sub(r3.Vec{X: 0.5, Y: 0.5, Z: 0.5}).Unit()
	}
	return raw
}

// mirrored completes a half mesh: the points with y > 0 and their images, one of each pair of points on the plane.
func mirrored(raw field.Raw) field.Raw {
	n := int32(len(raw.Points))
	image := make([]int32, n)
	out := field.Raw{Points: append([]r3.Vec{}, raw.Points...), Tau: append([]r3.Vec{}, raw.Tau...),
		Tris: append([][3]int32{}, raw.Tris...)}
	for i, p := range raw.Points {
		if math.Abs(p.Y) < 1e-9 {
			image[i] = int32(i)
			continue
		}
		image[i] = int32(len(out.Points))
		tau := raw.Tau[i]
		out.Points = append(out.Points, r3.Vec{X: p.X, Y: -p.Y, Z: p.Z})
		out.Tau = append(out.Tau, r3.Vec{X: tau.X, Y: -tau.Y, Z: tau.Z})
	}
	for _, t := range raw.Tris {
		out.Tris = append(out.Tris, [3]int32{image[t[0]], image[t[2]], image[t[1]]})
	}
	return out
}

// halves are meshes of half bodies, cut along y = 0: closed bodies whose whole rim lies in the plane, one with a hole
// in it, and patches that have other rims too.
var halves = []struct {
	name   string
	raw    func() field.Raw
	normal func(p r3.Vec) r3.Vec
	closed bool // once completed
}{
	{"half sphere", func() field.Raw { return half(cubeSphere(8)) }, r3.Vec.Unit, true},
	{"half torus", func() field.Raw { return half(exact.Torus(1, 0.4, 720)) }, func(p r3.Vec) r3.Vec {
		return p.Sub(r3.Vec{X: p.X, Z: p.Z}.Unit()).Unit()
	}, true},
	{"half plate", func() field.Raw { return half(exact.Plate(2, 1, 16*16)) }, upward, false},
	{"half disk", func() field.Raw { return half(exact.Disk(1, 400)) }, upward, false},
	{"half torus, the other way", func() field.Raw {
		raw := exact.Torus(1, 0.4, 720)
		for i, p := range raw.Points {
			raw.Points[i] = r3.Vec{X: p.Y, Y: p.Z, Z: p.X}
		}
		return half(raw)
	}, func(p r3.Vec) r3.Vec { return p.Sub(r3.Vec{Y: p.Y, Z: p.Z}.Unit()).Unit() }, true},
}

func upward(r3.Vec) r3.Vec { return r3.Vec{Z: 1} }

// symmetric gives the points a field that is symmetric about y = 0, of the given kind.
func symmetric(raw *field.Raw, normal func(r3.Vec) r3.Vec, seed uint64, kind int) {
	rng := rand.New(rand.NewPCG(seed, 5))
	a := [6]float64{}
	for i := range a {
		a[i] = rng.NormFloat64()
	}
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		v := r3.Vec{X: a[0] + a[1]*p.X + a[2]*p.Z, Y: a[3] * p.Y, Z: a[4] + a[5]*p.X}
		v = v.Reject(normal(p))
		if kind == 1 { // smooth along the plane, noise elsewhere
			if p.Y > 1e-9 {
				v = r3.Vec{X: rng.NormFloat64(), Y: rng.NormFloat64(), Z: rng.NormFloat64()}
			}
		}
		if kind == 2 && rng.IntN(5) == 0 {
			v = r3.Vec{}
		}
		if math.Abs(p.Y) < 1e-9 {
			v.Y = 0
		}
		raw.Tau[i] = v
	}
}

// A half model's ledger must be half of the ledger of the completed model, whose rims and points are counted without
// any knowledge of symmetry.
func TestHalfModelAgreesWithWhole(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		mesh := rapid.SampledFrom(halves).Draw(t, "mesh")
		raw := mesh.raw()
		kind := rapid.IntRange(0, 2).Draw(t, "kind")
		if !mesh.closed {
			kind = 1 // a smooth field might run along another rim of the patch, by chance
		}
		symmetric(&raw, mesh.normal, rapid.Uint64().Draw(t, "seed"), kind)
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		g, err := field.Build(mirrored(raw))
		if err != nil {
			t.Fatal(err)
		}
		part, whole := find(t, f, topology.Options{}), find(t, g, topology.Options{})
		checkLedger(t, part)
		checkLedger(t, whole)
		if 2*part.Ledger.IndexSum != whole.Ledger.IndexSum {
			t.Fatalf("%s: half sums to %g, whole to %g", mesh.name, part.Ledger.IndexSum, whole.Ledger.IndexSum)
		}
	})
}

// With well separated points, those of the half model must be those of the whole: half points in the plane, the others
// once.
func TestHalfPointsAreThePointsInThePlane(t *testing.T) {
	strained, _ := exact.StokesSphere(r3.Vec{}, r3.Vec{}, exact.Diagonal(0.8, 0.2, -1))
	driven, _ := exact.StokesSphere(r3.Vec{X: 2}, r3.Vec{}, exact.Diagonal(1, -0.2, -0.8))
	along := func(p r3.Vec) r3.Vec { return r3.Vec{X: 1}.Reject(halves[1].normal(p)) }
	for _, c := range []struct {
		name        string
		raw         field.Raw
		tau         func(r3.Vec) r3.Vec
		nodes       int // half points
		saddles     int
		off, inside int // points of index +1 and -1 beside the plane
	}{
		{"strained sphere", half(cubeSphere(24)), strained, 4, 0, 0, 1}, // the saddles are at the ends of the y axis
		{"stream and strain", half(cubeSphere(24)), driven, 4, 0, 0, 1},
		{"torus", half(exact.Torus(1, 0.4, 4*720)), along, 2, 2, 0, 0},
		{"plate", half(exact.Plate(2, 1, 64*32)), func(p r3.Vec) r3.Vec {
			return r3.Vec{X: p.X*p.X - 0.4, Y: p.Y * (p.Y*p.Y - 0.17)}
		}, 1, 1, 1, 1},
	} {
		c.raw.Tau = make([]r3.Vec, len(c.raw.Points))
		for i, p := range c.raw.Points {
			c.raw.Tau[i] = c.tau(p)
		}
		f, err := field.Build(c.raw)
		if err != nil {
			t.Fatal(err)
		}
		g, err := field.Build(mirrored(c.raw))
		if err != nil {
			t.Fatal(err)
		}
		part, whole := find(t, f, topology.Options{}), find(t, g, topology.Options{})
		l := part.Ledger
		if l.HalfNodes != c.nodes || l.HalfSaddles != c.saddles || l.Nodes+l.Foci != c.off || l.Saddles != c.inside {
			t.Errorf("%s: %+v", c.name, l.Count)
		}
		if len(whole.Points) != c.nodes+c.saddles+2*(c.off+c.inside) {
			t.Errorf("%s: the whole has %d points", c.name, len(whole.Points))
		}
		for _, p := range part.Points {
			q := nearestPoint(whole, p.Position)
			if q == nil || q.Position.Sub(p.Position).Norm() > 0.1*p.Size || q.Type != p.Type || q.Index != p.Index ||
				q.Sense != p.Sense {
				t.Errorf("%s: %s, a %v of %v at %v, is in the whole %+v", c.name, p.ID, p.Type, p.Sense, p.Position, q)
			}
			if p.Half != (math.Abs(p.Position.Y) < 1e-9) {
				t.Errorf("%s: %s at %v: half %v", c.name, p.ID, p.Position, p.Half)
			}
		}
	}
}

// Half of a Stokes sphere: two half nodes, and the rim, along which tau runs, has no tangency.
func TestHalfStokesSphere(t *testing.T) {
	raw := half(cubeSphere(24))
	tau, _ := exact.StokesSphere(r3.Vec{X: 0.8, Z: 0.6}, r3.Vec{}, exact.Matrix{})
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = tau(p)
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	s := find(t, f, topology.Options{})
	l := s.Ledger
	if l.HalfNodes != 2 || l.IndexSum != 1 || l.BoundaryTerm != 0 || !l.Balanced || len(s.Points) != 2 {
		t.Fatalf("ledger: %+v", l)
	}
	for _, p := range s.Points {
		sign := 1.0
		if p.Sense == topology.Attachment {
			sign = -1
		}
		if d := p.Position.Sub(r3.Vec{X: 0.8, Z: 0.6}.Scale(sign)).Norm(); d > 0.1*p.Size {
			t.Errorf("%s is %g edges off", p.ID, d/p.Size)
		}
		for _, e := range p.Eigenvalues {
			if math.Abs(e[0]+1.5*sign) > 0.03*1.5 || math.Abs(e[1]) > 0.03*1.5 {
				t.Errorf("%s: eigenvalue %g, want %g", p.ID, e, -1.5*sign)
			}
		}
	}
}
