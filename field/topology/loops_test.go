package topology_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// circle returns n points around the axis through at, at the given distance from it, counter-clockwise seen from its
// tip.
func circle(at, axis r3.Vec, radius float64, n int) []r3.Vec {
	u := axis.Perpendicular()
	v := axis.Unit().Cross(u)
	var out []r3.Vec
	for i := range n {
		s, c := math.Sincos(2 * math.Pi * float64(i) / float64(n))
		out = append(out, at.AddScaled(radius*c, u).AddScaled(radius*s, v))
	}
	return out
}

func reversed(p []r3.Vec) []r3.Vec {
	out := make([]r3.Vec, len(p))
	for i := range p {
		out[len(p)-1-i] = p[i]
	}
	return out
}

// A loop around a point of the strained sphere has that point's index; the other way round it has what is left of the
// sphere's 2. (Poincare and Hopf.)
func TestLoopAroundEachPoint(t *testing.T) {
	for _, name := range []string{"strained-sphere", "stream-and-strain", "swirl-and-strain"} {
		c := caseNamed(name)
		s := find(t, c.Field(8000), topology.Options{})
		for _, want := range c.Points {
			// About 3 edges; a loop of many points and one of few.
			for _, n := range []int{3, 5, 40} {
				way := circle(want.Position, want.Position, 0.1, n)
				l, err := s.Loop(way)
				if err != nil {
					t.Fatal(err)
				}
				if !l.Bounds || l.Index != float64(want.Index) || !l.Accounts || len(l.Inside) != 1 {
					t.Errorf("%s: loop around %v: %g, bounds %v, inside %v, want %d", name, want.Position, l.Index, l.Bounds, l.Inside,
						want.Index)
				}
				if r := math.Abs(l.Turn+l.Curvature-2*math.Pi*l.Index) / (2 * math.Pi); r > 1e-9 {
					t.Errorf("%s: loop around %v is off an integer by %g", name, want.Position, r)
				}
				back, err := s.Loop(reversed(way))
				if err != nil {
					t.Fatal(err)
				}
				if back.Index != 2-float64(want.Index) || !back.Accounts {
					t.Errorf("%s: the loop backwards around %v has index %g", name, want.Position, back.Index)
				}
			}
		}
	}
}

// Loops of any size and place, on closed and open surfaces: the index is a whole number, and the points inside account
// for it.
func TestLoopsAccount(t *testing.T) {
	list := []*topology.Skeleton{}
	for _, name := range []string{
		"stream-and-strain", "disk-saddle", "annulus-uniform", "saddle-node-pair", "karman-disk",
	} {
		list = append(list, find(t, caseNamed(name).Field(3000), topology.Options{}))
	}
	missed := 0
	rapid.Check(t, func(t *rapid.T) {
		s := list[rapid.IntRange(0, len(list)-1).Draw(t, "case")]
		f := s.Field
		tri := int32(rapid.IntRange(0, len(f.Tris)-1).Draw(t, "tri"))
		at := f.Position(field.Loc{Tri: tri, Bary: [3]float64{0.3, 0.3, 0.4}})
		n := f.Normal(field.Loc{Tri: tri, Bary: [3]float64{0.3, 0.3, 0.4}})
		way := circle(at, n, rapid.Float64Range(0.001, 0.6).Draw(t, "radius"), rapid.IntRange(3, 30).Draw(t, "n"))
		l, err := s.Loop(way)
		if err != nil { // points snapped to a rim may have no way between them
			missed++
			return
		}
		if !l.Bounds {
			return // snapped to a rim, the way may cross itself
		}
		if r := (l.Turn + l.Curvature) / math.Pi; math.Abs(r-math.Round(r)) > 1e-9 {
			t.Fatalf("%s: turn and curvature give %g half turns", f.Name, r)
		}
		if !l.Accounts {
			t.Fatalf("%s: index %g, but the points inside sum to %g: %s", f.Name, l.Index, l.IndexSum, l.Note)
		}
		if last := l.Hodograph[len(l.Hodograph)-1]; math.Abs(last.S-l.Length) > 1e-12 {
			t.Fatalf("the hodograph ends at %g of %g", last.S, l.Length)
		}
	})
}

// Points beside the surface are moved to it, and far ones are told.
func TestLoopTellsMovedPoints(t *testing.T) {
	s := find(t, caseNamed("strained-sphere").Field(3000), topology.Options{})
	for _, c := range []struct {
		height float64
		told   bool
	}{{0.001, false}, {0.5, true}} {
		way := circle(r3.Vec{X: 1 + c.height}, r3.Vec{X: 1}, 0.2, 8)
		l, err := s.Loop(way)
		if err != nil {
			t.Fatal(err)
		}
		if (l.Note != "") != c.told || l.Index != 1 || c.told && math.Abs(l.Moved-c.height) > 0.05 {
			t.Errorf("%g above: moved by %g, index %g, note %q", c.height, l.Moved, l.Index, l.Note)
		}
	}
}

// A loop around the tube of the torus bounds nothing. Tau crosses it at right angles all along, and the loop is a
// geodesic, so that nothing turns, up to what the mesh of this size makes of both (0.1).
func TestLoopAroundHandle(t *testing.T) {
	s := find(t, caseNamed("torus-around").Field(4000), topology.Options{})
	l, err := s.Loop(circle(r3.Vec{X: 1}, r3.Vec{Z: 1}, 0.4, 12))
	if err != nil {
		t.Fatal(err)
	}
	if l.Bounds || math.Abs(l.Turn) > 0.2 {
		t.Errorf("bounds %v, turn %g", l.Bounds, l.Turn)
	}
}

func TestLoopErrors(t *testing.T) {
	s := find(t, caseNamed("annulus-uniform").Field(2000), topology.Options{})
	for name, way := range map[string][]r3.Vec{
		"too few":         {{X: 1}, {Y: 1}},
		"across the hole": {{X: 1}, {X: -1, Y: 0.01}, {Y: -1}},
		"not a place":     {{X: 1}, {Y: 1}, {X: math.NaN()}},
	} {
		if _, err := s.Loop(way); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// Any set of triangles of any field is balanced as long as no patch of zeros lies across its edge.
func TestRegionsBalance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		raw := rapid.SampledFrom(meshes).Draw(t, "mesh").raw()
		fill(&raw, rapid.Uint64().Draw(t, "seed"), rapid.IntRange(0, kinds-1).Draw(t, "kind"))
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		s := find(t, f, topology.Options{})
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "choice"), 0))
		in := make([]bool, len(f.Tris))
		for i := range in {
			in[i] = rng.IntN(3) > 0
		}
		r := s.RegionOf(func(t int32) bool { return in[t] })
		if !r.Balanced && len(r.Across) == 0 {
			t.Fatalf("%+v", r)
		}
		whole := s.RegionOf(s.InParts(0))
		if !whole.Balanced || whole.Euler != f.Parts[0].Euler || whole.IndexSum != s.Ledger.Parts[0].IndexSum {
			t.Fatalf("whole part: %+v, ledger %+v", whole, s.Ledger.Parts[0])
		}
	})
}

func TestRegionInBox(t *testing.T) {
	s := find(t, caseNamed("strained-sphere").Field(4000), topology.Options{})
	r := s.RegionOf(s.InBox(r3.Box{Min: r3.Vec{X: 0.5, Y: -1, Z: -1}, Max: r3.Vec{X: 1, Y: 1, Z: 1}}))
	if r.Nodes != 1 || r.Saddles != 0 || r.IndexSum != 1 || r.Euler != 1 || !r.Balanced {
		t.Errorf("the cap around a node: %+v", r)
	}
}
