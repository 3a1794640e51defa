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

// meshes are surfaces of all kinds: genus 0, 1 and 2, smooth and sharp-edged, regular and shaken, with and without
// rims.
var meshes = []struct {
	name string
	raw  func() field.Raw
}{
	{"sphere", func() field.Raw { return exact.Sphere(1, 400) }},
	{"irregular sphere", func() field.Raw { return exact.Shake(exact.Sphere(1, 500), 0.3, 7, exact.OntoSphere(1)) }},
	{"torus", func() field.Raw { return exact.Torus(1, 0.4, 500) }},
	{"cube", func() field.Raw { return exact.Blocks(3, [3]int{}) }},
	{"genus 1 with edges", func() field.Raw { return exact.Ring(2) }},
	{"genus 2 with edges", func() field.Raw { return exact.Eight(1) }},
	{"disk", func() field.Raw { return exact.Disk(1, 300) }},
	{"irregular disk", func() field.Raw { return exact.Shake(exact.Disk(1, 300), 0.3, 3, exact.OntoPlane) }},
	{"annulus", func() field.Raw { return exact.Annulus(0.5, 2, 400) }},
	{"plate", func() field.Raw { return exact.Plate(2, 1, 300) }},
	{"plate with holes", func() field.Raw { return punch(exact.Plate(2, 1, 800), 3) }},
	{"cube with holes", func() field.Raw { return punch(exact.Blocks(4, [3]int{}), 4) }},
	{"genus 2 with holes", func() field.Raw { return punch(exact.Eight(2), 5) }},
}

// punch takes out every triangle around a few points.
func punch(raw field.Raw, holes int) field.Raw {
	gone := map[int32]bool{}
	for i := range holes {
		gone[int32((2*i+1)*len(raw.Points)/(2*holes))] = true
	}
	var kept [][3]int32
	for _, t := range raw.Tris {
		if !gone[t[0]] && !gone[t[1]] && !gone[t[2]] {
			kept = append(kept, t)
		}
	}
	raw.Tris = kept
	return raw
}

// fill gives every point a vector of one of the nastier kinds.
func fill(raw *field.Raw, seed uint64, kind int) {
	rng := rand.New(rand.NewPCG(seed, 2))
	random := func() r3.Vec { return r3.Vec{X: rng.NormFloat64(), Y: rng.NormFloat64(), Z: rng.NormFloat64()} }
	c, d := random(), random()
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		v := c.Add(d.Cross(p))
		switch kind {
		case 1:
			v = random()
		case 2: // zeros here and there
			if rng.IntN(4) > 0 {
				v = random()
			} else {
				v = r3.Vec{}
			}
		case 3: // a region of zeros
			if p.X > 0.3 {
				v = r3.Vec{}
			}
		case 4: // nothing at all
			v = r3.Vec{}
		case 5: // directions along the axes only: many opposite neighbours
			v = r3.Vec{X: float64(rng.IntN(3) - 1), Y: float64(rng.IntN(3) - 1)}
		case 6: // denormals
			v = random().Scale(1e-320)
		case 7: // huge values
			v = random().Scale(1e99)
		case 8: // all magnitudes
			v = random().Scale(math.Exp(200 * rng.NormFloat64()))
			if !(v.Norm() < 1e99) {
				v = random()
			}
		}
		raw.Tau[i] = v
	}
}

const kinds = 9

// The sum of the indices is the Euler characteristic of every closed part, and with rims the Euler characteristic plus
// half of (interior - exterior tangencies): Poincare 1885, Hopf 1926. It must hold for any field on any mesh, and at
// every floor of robustness.
func TestLedgerIsATheorem(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		mesh := rapid.SampledFrom(meshes).Draw(t, "mesh")
		raw := mesh.raw()
		kind := rapid.IntRange(0, kinds-1).Draw(t, "kind")
		fill(&raw, rapid.Uint64().Draw(t, "seed"), kind)
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		s := find(t, f, topology.Options{})
		checkLedger(t, s)
		for _, share := range []float64{1e-9, 0.01, 0.1, 0.5, 1} {
			floor := share * f.MaxTau
			l := s.LedgerAt(floor)
			if !l.Balanced {
				t.Fatalf("%s, kind %d: not balanced at floor %g: %+v", mesh.name, kind, floor, l)
			}
			again := find(t, f, topology.Options{MinRobustness: share, Relative: true})
			if again.Ledger.Count != l.Count || again.Cancelled != len(s.Points)-len(again.Points) {
				t.Fatalf("%s, kind %d: floor %g gives %+v, and cancelling afterwards %+v", mesh.name, kind, floor,
					again.Ledger.Count, l.Count)
			}
		}
	})
}

// The levels name every point that has a robustness once, in groups that sum to zero, and predict every ledger.
func TestLevels(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		mesh := rapid.SampledFrom(meshes).Draw(t, "mesh")
		raw := mesh.raw()
		fill(&raw, rapid.Uint64().Draw(t, "seed"), rapid.IntRange(0, kinds-1).Draw(t, "kind"))
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		s := find(t, f, topology.Options{})
		left := len(s.Points)
		seen := map[int]bool{}
		last := 0.0
		for _, l := range s.Levels() {
			sum := 0.0
			for _, i := range l.Points {
				p := s.Points[i]
				if seen[i] || p.Robustness != l.Robustness {
					t.Fatalf("%s, robustness %g, at level %g", p.ID, p.Robustness, l.Robustness)
				}
				seen[i] = true
				w := float64(p.Index)
				if p.Half {
					w /= 2
				}
				sum += w
			}
			if sum != 0 || l.Robustness < last {
				t.Fatalf("level %+v sums to %g, after level %g", l, sum, last)
			}
			last = l.Robustness
			left -= len(l.Points)
		}
		for i, p := range s.Points {
			if !seen[i] && !math.IsInf(p.Robustness, 1) {
				t.Fatalf("%s with robustness %g is on no level", p.ID, p.Robustness)
			}
		}
		l := s.LedgerAt(math.Inf(1))
		if n := l.Nodes + l.Foci + l.Saddles + l.Degenerate + l.HalfNodes + l.HalfSaddles + l.HalfDegenerate; n != left {
			t.Fatalf("%d points are left above all levels, want %d", n, left)
		}
	})
}

// checkLedger compares the ledger with the mesh's topology, and the term with the count of tangencies.
func checkLedger(t rapid.TB, s *topology.Skeleton) {
	t.Helper()
	if !s.Ledger.Balanced {
		t.Fatalf("not balanced: %+v", s.Ledger)
	}
	sums := make([]float64, len(s.Field.Parts))
	for _, p := range s.Points {
		w := float64(p.Index)
		if p.Half {
			w /= 2
		}
		sums[p.Part] += w
		for _, x := range []float64{p.Trace, p.Determinant, p.Confidence, p.Jacobian[0][0], p.Eigenvalues[0][0], p.Size} {
			if x-x != 0 {
				t.Fatalf("%s holds a number that is not finite: %+v", p.ID, p)
			}
		}
		if p.Robustness != p.Robustness || p.Confidence < 0 || p.Confidence > 1 {
			t.Fatalf("%s: robustness %g, confidence %g", p.ID, p.Robustness, p.Confidence)
		}
		if n := p.Frame[0].Cross(p.Frame[1]).Sub(p.Normal).Norm(); n > 1e-12 {
			t.Fatalf("%s: the frame is off its normal by %g", p.ID, n)
		}
	}
	for i, p := range s.Ledger.Parts {
		term := 0.0
		for _, r := range p.Rims {
			term += r.Term
			if 2*r.Term != float64(r.Interior-r.Exterior) && !r.Streamline {
				t.Fatalf("rim %d: term %g, but %d interior and %d exterior tangencies", r.Rim, r.Term, r.Interior, r.Exterior)
			}
		}
		if want := float64(s.Field.Parts[i].Euler) + term; sums[i] != want || p.Expected != want {
			t.Fatalf("part %d: indices sum to %g, expected %g, want %g", i, sums[i], p.Expected, want)
		}
	}
}

// The tangency counts of plane samples (Poincare's rule; see the list of samples in package exact).
func TestTangencies(t *testing.T) {
	for _, c := range []struct {
		name    string
		in, out int
	}{
		{"disk-uniform", 0, 2}, {"disk-saddle", 0, 4}, {"disk-dipole", 2, 0}, {"disk-shifted-turn", 1, 1},
		{"annulus-uniform", 2, 2},
	} {
		s := find(t, caseNamed(c.name).Field(5000), topology.Options{})
		in, out := 0, 0
		for _, r := range s.Ledger.Parts[0].Rims {
			in, out = in+r.Interior, out+r.Exterior
		}
		if in != c.in || out != c.out {
			t.Errorf("%s: %d interior and %d exterior tangencies, want %d and %d", c.name, in, out, c.in, c.out)
		}
	}
}

// The plate with two holes in a uniform stream: two interior tangencies more than exterior ones (four at round holes,
// two outside; holes with steps have more of both), sum 0.
func TestTangenciesAtHoles(t *testing.T) {
	raw := exact.Plate(2, 1, 4000)
	kept := raw.Tris[:0]
	for _, tri := range raw.Tris {
		c := raw.Points[tri[0]].Add(raw.Points[tri[1]]).Add(raw.Points[tri[2]]).Scale(1. / 3)
		if c.Sub(r3.Vec{X: 0.9}).Norm() > 0.3 && c.Sub(r3.Vec{X: -0.8, Y: 0.1}).Norm() > 0.4 {
			kept = append(kept, tri)
		}
	}
	raw.Tris = kept
	s := find(t, planeField(t, raw, func(x, y float64) (float64, float64) { return 1, 0.3 }), topology.Options{})
	in, out := 0, 0
	for _, r := range s.Ledger.Parts[0].Rims {
		in, out = in+r.Interior, out+r.Exterior
	}
	if l := s.Ledger; in-out != 2 || l.IndexSum != 0 || l.BoundaryTerm != 1 || l.Parts[0].Euler != -1 || !l.Balanced {
		t.Errorf("%d interior and %d exterior tangencies, ledger %+v", in, out, l.Count)
	}
}

func caseNamed(name string) exact.Case {
	for _, c := range exact.Cases() {
		if c.Name == name {
			return c
		}
	}
	panic("no case " + name)
}
