package topology_test

import (
	"context"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// planeField returns a plane field on a plate or a disk.
func planeField(t rapid.TB, raw field.Raw, tau func(x, y float64) (u, v float64)) *field.Field {
	t.Helper()
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i].X, raw.Tau[i].Y = tau(p.X, p.Y)
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// The robustness of hand-computable pairs, by the merge of the sublevel sets of |tau| (Chazal, Skraba and Patel 2012;
// values derived by hand and checked on a grid of 881 x 881 points). The mesh interpolates |tau| with an error of the
// order of the second derivative times the squared edge.
func TestRobustnessOfPairs(t *testing.T) {
	const a = 1.2
	for _, c := range []struct {
		name string
		tau  func(x, y float64) (u, v float64)
		want []float64 // by ascending x
	}{
		{"pair", func(x, y float64) (float64, float64) { return x*x - a*a, y }, []float64{a * a, a * a}},
		{"three", func(x, y float64) (float64, float64) { return x*x*x - x + 0.2, y },
			[]float64{math.Inf(1), 0.1849001795, 0.1849001795}},
	} {
		f := planeField(t, exact.Shake(exact.Plate(2.5, 1.7, 60000), 0.3, 5, exact.OntoPlane), c.tau)
		s := find(t, f, topology.Options{})
		points := slices.Clone(s.Points)
		slices.SortFunc(points, func(a, b topology.Point) int { return int(math.Copysign(1, a.Position.X-b.Position.X)) })
		if len(points) != len(c.want) {
			t.Fatalf("%s: %d points", c.name, len(points))
		}
		for i, p := range points {
			if p.Robustness != c.want[i] && !(math.Abs(p.Robustness-c.want[i]) < 0.004) {
				t.Errorf("%s: %s at x = %g has robustness %g, want %g", c.name, p.ID, p.Position.X, p.Robustness, c.want[i])
			}
		}
	}
}

// What robustness means: a shift of the field by less than it leaves the pair, a shift by more removes it.
func TestShiftBeyondRobustnessRemovesPair(t *testing.T) {
	raw := exact.Plate(1, 0.8, 20000)
	for _, c := range []struct {
		shift float64
		want  int
	}{{0.9, 2}, {1.1, 0}} {
		f := planeField(t, raw, func(x, y float64) (float64, float64) { return x*x - 0.16 + c.shift*0.16, y })
		if s := find(t, f, topology.Options{}); len(s.Points) != c.want {
			t.Errorf("shift by %g of the robustness leaves %d points, want %d", c.shift, len(s.Points), c.want)
		}
	}
}

// slowRobustness computes the same by its definition: for every level in turn, components by flooding from triangle to
// triangle, and their sums. It is the oracle for Kruskal's method on small meshes.
func slowRobustness(s *topology.Skeleton) []float64 {
	f := s.Field
	least := func(h int32) float64 { return leastAlong(f, h) }
	var levels []float64
	for h, g := range f.Twin {
		if int32(h) < g {
			levels = append(levels, least(int32(h)))
		}
	}
	slices.Sort(levels)
	robust := make([]float64, len(s.Points))
	for i := range robust {
		robust[i] = math.Inf(1)
	}
	for _, r := range slices.Compact(levels) {
		component := make([]int, len(f.Tris))
		n := 0
		for seed := range f.Tris {
			if component[seed] > 0 {
				continue
			}
			n++
			component[seed] = n
			stack := []int32{int32(seed)}
			for len(stack) > 0 {
				t := stack[len(stack)-1]
				stack = stack[:len(stack)-1]
				for h := 3 * t; h < 3*t+3; h++ {
					if g := f.Twin[h]; g >= 0 && component[g/3] == 0 && least(h) <= r*(1+1e-12) {
						component[g/3] = n
						stack = append(stack, g/3)
					}
				}
			}
		}
		sum := make([]int, n+1)
		for i, p := range s.Points {
			if robust[i] > r {
				sum[component[p.Patch[0]]] += p.Index
			}
		}
		for i, p := range s.Points {
			if robust[i] > r && sum[component[p.Patch[0]]] == 0 {
				robust[i] = r
			}
		}
	}
	return robust
}

func TestRobustnessAgreesWithFlooding(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		raw := exact.Shake(exact.Sphere(1, 180), 0.3, rapid.Uint64().Draw(t, "mesh"), exact.OntoSphere(1))
		fill(&raw, rapid.Uint64().Draw(t, "seed"), rapid.IntRange(0, 1).Draw(t, "kind"))
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		s := find(t, f, topology.Options{})
		if slices.ContainsFunc(s.Points, func(p topology.Point) bool { return len(p.Patch) > 1 }) {
			return // joined from the beginning, which the oracle does not do
		}
		want := slowRobustness(s)
		for i, p := range s.Points {
			if p.Robustness != want[i] && !(math.Abs(p.Robustness-want[i]) <= 1e-9*f.MaxTau) {
				t.Fatalf("%s: robustness %g, by flooding %g", p.ID, p.Robustness, want[i])
			}
		}
	})
}

// noisy builds the field with white noise of the given standard deviation in each component.
func noisy(t *testing.T, raw field.Raw, sigma float64) *field.Field {
	t.Helper()
	rng := rand.New(rand.NewPCG(11, 12))
	for i := range raw.Tau {
		raw.Tau[i] = raw.Tau[i].Add(r3.Vec{X: rng.NormFloat64(), Y: rng.NormFloat64(), Z: rng.NormFloat64()}.Scale(sigma))
	}
	return build(t, raw)
}

// White noise of 1, 5 and 10 % of the largest |tau| makes many weak points; above the noise exactly the points of the
// clean field are left. Noise of standard deviation s in each component reaches 4 s somewhere.
func TestNoiseKeepsStrongPoints(t *testing.T) {
	for _, name := range []string{"strained-sphere", "sheared-sphere", "torus-stream"} {
		c := caseNamed(name)
		for _, share := range []float64{0.01, 0.05, 0.1} {
			raw := c.Raw(20000)
			clean := find(t, c.Field(20000), topology.Options{})
			sigma := share * clean.Field.MaxTau / 4
			f := noisy(t, raw, sigma)
			s := find(t, f, topology.Options{MinRobustness: 4 * sigma})
			if len(s.Points) != len(c.Points) || !s.Ledger.Balanced {
				t.Errorf("%s with %g noise: %d points of %d, want %d", name, share, len(s.Points), len(s.Points)+s.Cancelled,
					len(c.Points))
			}
			for _, want := range c.Points {
				// The nearest index of the same sign, within the distance over which tau grows out of the noise.
				p := nearestPoint(s, want.Position)
				if p == nil || p.Index != want.Index || p.Position.Sub(want.Position).Norm() > 3*share {
					t.Errorf("%s with %g noise: %+v for the point at %v", name, share, p, want.Position)
				}
			}
		}
	}
}

func TestFindStopsWithItsContext(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := topology.Find(ctx, caseNamed("strained-sphere").Field(500), topology.Options{}); err != context.Canceled {
		t.Errorf("error %v, want %v", err, context.Canceled)
	}
}
