package topology_test

import (
	"math"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

func onMesh(t *testing.T, raw field.Raw, tau func(r3.Vec) r3.Vec) *topology.Skeleton {
	t.Helper()
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = tau(p)
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	return find(t, f, topology.Options{})
}

// A stream along the axis of a pure strain on the unit sphere: pairs of points leave the stagnation points at the
// thresholds U = (10/3) |E1 - Ej|, here 4 and 6. (Stokes flow, formulas of Batchelor 1967; thresholds derived from
// them.)
func TestBifurcations(t *testing.T) {
	for _, c := range []struct {
		u      float64
		points int
	}{{2, 6}, {3.7, 6}, {4.3, 4}, {5.7, 4}, {6.3, 2}, {20, 2}} {
		tau, _ := exact.StokesSphere(r3.Vec{X: c.u}, r3.Vec{}, exact.Diagonal(1, -0.2, -0.8))
		s := onMesh(t, exact.Sphere(1, 20000), tau)
		if len(s.Points) != c.points || s.Ledger.IndexSum != 2 {
			t.Errorf("U = %g: %d points with sum %g, want %d with sum 2", c.u, len(s.Points), s.Ledger.IndexSum, c.points)
		}
	}
}

// A sphere that turns in fluid at rest: its poles are centres in creeping flow, and foci of attachment with the first
// effect of inertia, tau_theta = (Re/4) sin cos (Bickley 1938, from memory; re-derived symbolically): eigenvalues
// Re/4 +- 3i in units of mu Omega/a.
func TestTurningSphere(t *testing.T) {
	spin := func(re float64) func(r3.Vec) r3.Vec {
		return func(p r3.Vec) r3.Vec {
			n := p.Unit()
			s := math.Hypot(n.X, n.Y)
			around := r3.Vec{X: -n.Y, Y: n.X}.Scale(3)
			if s == 0 {
				return around
			}
			down := r3.Vec{X: n.X * n.Z / s, Y: n.Y * n.Z / s, Z: -s} // e_theta
			return around.AddScaled(re/4*s*n.Z, down)
		}
	}
	still := onMesh(t, exact.Sphere(1, 8000), spin(0))
	for _, p := range still.Points {
		if p.Type != topology.Degenerate || p.Sense != topology.Neutral || p.Index != 1 {
			t.Errorf("creeping flow: %s is %v of %v, index %d", p.ID, p.Type, p.Sense, p.Index)
		}
	}
	if len(still.Points) != 2 {
		t.Errorf("creeping flow: %d points", len(still.Points))
	}
	const re = 0.8
	inert := onMesh(t, exact.Sphere(1, 8000), spin(re))
	if l := inert.Ledger; l.Foci != 2 || len(inert.Points) != 2 {
		t.Fatalf("with inertia: %+v", l.Count)
	}
	for _, p := range inert.Points {
		// The divergence at a pole is 2 Re/4 > 0: fluid is drawn to the poles and thrown out at the equator.
		e := p.Eigenvalues[0]
		if p.Sense != topology.Attachment || math.Abs(e[0]-re/4) > 0.03*3 || math.Abs(e[1]-3) > 0.03*3 {
			t.Errorf("with inertia: %s is of %v, %g, want %g +- 3i", p.ID, p.Sense, p.Eigenvalues, re/4)
		}
	}
}

// A prolate spheroid (2:1) in creeping flow along its axis: tau is the tangential part of F h/(4 pi a b^2), h the
// distance of the tangent plane from the centre, and at both ends the Jacobian is F a/(4 pi b^4), a star. F from
// Chwang and Wu 1975; formula of the traction after Brenner 1964 (from memory, verified by integration of the
// singularities).
func TestSpheroid(t *testing.T) {
	const a, b, force = 2.0, 1.0, 22.693753013
	raw := exact.Sphere(1, 20000)
	for i, p := range raw.Points {
		raw.Points[i] = r3.Vec{X: a * p.X, Y: b * p.Y, Z: b * p.Z}
	}
	s := onMesh(t, raw, func(p r3.Vec) r3.Vec {
		g := r3.Vec{X: p.X / (a * a), Y: p.Y / (b * b), Z: p.Z / (b * b)}
		h := 1 / g.Norm()
		return r3.Vec{X: force * h / (4 * math.Pi * a * b * b)}.Reject(g.Unit())
	})
	if s.Ledger.Nodes != 2 || len(s.Points) != 2 {
		t.Fatalf("%+v", s.Ledger.Count)
	}
	for _, p := range s.Points {
		sign := -1.0
		if p.Sense == topology.Attachment {
			sign = 1
		}
		want := sign * force * a / (4 * math.Pi * b * b * b * b)
		if d := p.Position.Sub(r3.Vec{X: -sign * a}).Norm(); d > 0.1*p.Size {
			t.Errorf("%s is %g edges off", p.ID, d/p.Size)
		}
		for _, e := range p.Eigenvalues {
			if math.Abs(e[0]-want) > 0.03*math.Abs(want) || math.Abs(e[1]) > 0.03*math.Abs(want) {
				t.Errorf("%s: eigenvalue %g, want %g", p.ID, e, want)
			}
		}
	}
}

// A general linear field (I - nn) M n on the unit sphere: the points are at the real unit eigenvectors of M, with the
// eigenvalues' differences as the Jacobian's eigenvalues, whether M is symmetric or not.
func TestLinearFieldOnSphere(t *testing.T) {
	m := exact.Matrix{{1, 0.7, 0}, {0, -0.5, 0.4}, {0, 0, 2.2}} // triangular: eigenvalues on the diagonal
	s := onMesh(t, exact.Shake(exact.Sphere(1, 20000), 0.25, 2, exact.OntoSphere(1)), func(p r3.Vec) r3.Vec {
		n := p.Unit()
		return m.Times(n).Reject(n)
	})
	lambda := [3]float64{1, -0.5, 2.2}
	vectors := [3]r3.Vec{{X: 1}, r3.Vec{X: 0.7, Y: -1.5}.Unit(), {}}
	// (M - 2.2) v = 0 from below: z = 1, y = 0.4/2.7, x = 0.7 y/1.2.
	vectors[2] = r3.Vec{X: 0.7 * (0.4 / 2.7) / 1.2, Y: 0.4 / 2.7, Z: 1}.Unit()
	if len(s.Points) != 6 {
		t.Errorf("%d points, want 6", len(s.Points))
	}
	for i, v := range vectors {
		hi, lo := lambda[(i+1)%3]-lambda[i], lambda[(i+2)%3]-lambda[i]
		if hi < lo {
			hi, lo = lo, hi
		}
		want := exact.Point{Eigenvalues: [2]complex128{complex(hi, 0), complex(lo, 0)}}
		for _, side := range []float64{1, -1} {
			p := nearestPoint(s, v.Scale(side))
			if d := p.Position.Sub(v.Scale(side)).Norm(); d > 0.1*p.Size {
				t.Errorf("%s is %g edges off", p.ID, d/p.Size)
			}
			compareEigenvalues(t, p, want)
			if p.Sense != senseByTrace(want) || (p.Type == topology.Saddle) != (hi*lo < 0) {
				t.Errorf("%s is a %v of %v, eigenvalues should be %g and %g", p.ID, p.Type, p.Sense, hi, lo)
			}
		}
	}
}

// Face data of a half model point a little across the plane of symmetry once they are averaged to its vertices; the
// half points are found all the same.
func TestHalfModelFromFaceData(t *testing.T) {
	tau, _ := exact.StokesSphere(r3.Vec{}, r3.Vec{}, exact.Diagonal(0.8, 0.2, -1))
	raw := half(cubeSphere(16))
	raw.FaceTau = make([]r3.Vec, len(raw.Tris))
	for i, c := range raw.Tris {
		raw.FaceTau[i] = tau(raw.Points[c[0]].Add(raw.Points[c[1]]).Add(raw.Points[c[2]]).Scale(1. / 3))
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	s := find(t, f, topology.Options{})
	if l := s.Ledger; l.HalfNodes != 4 || l.Saddles != 1 || l.IndexSum != 1 || l.BoundaryTerm != 0 || !l.Balanced {
		t.Errorf("%+v", l.Count)
	}
	told := false
	for _, x := range s.Findings {
		told = told || x.Code == "symmetry-rim" && x.Count == 4
	}
	if !told {
		t.Errorf("the plane of symmetry is not told: %+v", s.Findings)
	}
}
