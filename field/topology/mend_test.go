package topology_test

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// dangling lists the lines that end, or begin, at nothing: neither at a point nor at a rim nor on a closed orbit, nor, open ones,
// where their neighbours stop coming closer.
func dangling(s *topology.Skeleton) []string {
	var out []string
	for _, l := range s.Lines {
		if strings.Contains(l.Reason, "fades") || strings.Contains(l.Reason, "head-on") {
			out = append(out, l.ID+": "+l.Reason)
		}
	}
	return out
}

func told(s *topology.Skeleton, code string) int {
	for _, x := range s.Findings {
		if x.Code == code {
			return max(1, x.Count)
		}
	}
	return 0
}

// With any floor the lines of the computed runs end at points that are left, at rims or on cycles, and every group that
// is cancelled leaves a region across which they go on.
func TestFloorLeavesNoDanglingLines(t *testing.T) {
	for _, name := range []string{"radome.ply", "hut.ply", "pod.ply"} {
		f := load(t, name)
		for _, floor := range []float64{0, 0.001, 0.005, 0.01, 0.02, 0.05, 0.2, 1} {
			s := find(t, f, topology.Options{Lines: true, Relative: true, MinRobustness: floor})
			if d := dangling(s); len(d) > 0 {
				t.Errorf("%s, floor %g: %s", name, floor, strings.Join(d, "; "))
			}
			if n := told(s, "regions-not-mended"); n > 0 || told(s, "mended-regions") > 0 != (s.Cancelled > 0) {
				t.Errorf("%s, floor %g: %d points cancelled, findings %+v", name, floor, s.Cancelled, s.Findings)
			}
			checkLines(t, s)
		}
	}
}

// A saddle S1 at x = -1.5 sends a separatrix along the axis, on which there is a weak pair, a node of separation and
// a saddle at 0.5 -+ sqrt(e): tau = ((x + 1.5)((x - 0.5)^2 - e), -y). Half way between the two |tau| is 2e, their robustness
// but for the mesh. Without a floor the separatrix ends in the node; above that floor it runs on along the axis to the
// rim at x = 2.
func TestWeakPairIsCrossed(t *testing.T) {
	const e = 0.02
	raw := exact.Shake(exact.Plate(2, 2, 4000), 0.2, 4, exact.OntoPlane)
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = r3.Vec{X: (p.X + 1.5) * ((p.X-0.5)*(p.X-0.5) - e), Y: -p.Y}
	}
	f := build(t, raw)
	s := find(t, f, withLines)
	if len(s.Points) != 3 || s.Ledger.Nodes != 1 {
		t.Fatalf("%+v, want a node and two saddles", s.Ledger.Count)
	}
	for _, p := range s.Points {
		if p.Position.X > 0 && math.Abs(p.Robustness-2*e) > 0.3*2*e {
			t.Errorf("%s has robustness %g, want about %g", p.ID, p.Robustness, 2*e)
		}
	}
	ends := 0
	for _, floor := range []float64{0, 3 * e} {
		s := find(t, f, topology.Options{Lines: true, MinRobustness: floor})
		if d := dangling(s); len(d) > 0 {
			t.Errorf("floor %g: %v", floor, d)
		}
		if floor > 0 && (len(s.Points) != 1 || told(s, "mended-regions") != 1) {
			t.Fatalf("%d points left, findings %+v", len(s.Points), s.Findings)
		}
		for _, l := range s.Lines {
			if l.From < 0 || s.Points[l.From].Position.X > 0 || f.Position(l.Locs[len(l.Locs)/2]).X < -1.5 {
				continue
			}
			ends++
			last := f.Position(l.Locs[len(l.Locs)-1])
			want := r3.Vec{X: 0.5 - math.Sqrt(e)}
			if floor > 0 {
				want.X = 2
			}
			if last.Sub(want).Norm() > 0.02 || math.Abs(l.Length-want.X-1.5) > 0.02 || (l.To >= 0) != (floor == 0) {
				t.Errorf("floor %g: the line along the axis ends at %v after %g, want %v: %s", floor, last, l.Length, want, l.Reason)
			}
			for _, loc := range l.Locs {
				if p := f.Position(loc); math.Abs(p.Y) > 0.02 {
					t.Fatalf("floor %g: the line is %g off the axis at x = %g", floor, p.Y, p.X)
				}
			}
		}
	}
	if ends != 2 {
		t.Errorf("%d lines along the axis, want one for each floor", ends)
	}
}

// Noise on any surface with any floor: whatever is cancelled is mended, unless told, and no line ends in it.
func TestFloorsOnRandomFields(t *testing.T) {
	surfaces := []field.Raw{
		exact.Disk(1, 300), exact.Plate(1, 1, 300), exact.Sphere(1, 400), exact.Torus(1, 0.4, 500),
		exact.Shake(exact.Annulus(0.4, 1, 400), 0.3, 3, exact.OntoPlane),
	}
	rapid.Check(t, func(t *rapid.T) {
		raw := surfaces[rapid.IntRange(0, len(surfaces)-1).Draw(t, "surface")]
		v := rapid.Float64Range(-1, 1)
		vec := func(name string) r3.Vec { return r3.Vec{X: v.Draw(t, name), Y: v.Draw(t, name), Z: v.Draw(t, name)} }
		a, b, c := vec("a"), vec("b"), vec("c")
		rough := rapid.SampledFrom([]float64{0.1, 0.5, 3}).Draw(t, "rough")
		seed := rapid.IntRange(1, 1000).Draw(t, "seed")
		raw.Tau = make([]r3.Vec, len(raw.Points))
		for i, p := range raw.Points {
			n := float64(i*seed + i*i%977)
			raw.Tau[i] = a.Add(p.Cross(b)).AddScaled(p.X*p.Y, c).
				AddScaled(rough, r3.Vec{X: math.Sin(n), Y: math.Cos(1.3 * n), Z: math.Sin(2.1 * n)})
		}
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		floor := rapid.SampledFrom([]float64{0.01, 0.1, 0.3, 0.6, 1}).Draw(t, "floor")
		s := find(t, f, topology.Options{Lines: true, Relative: true, MinRobustness: floor})
		checkLines(t, s)
		if d := dangling(s); len(d) > 0 && told(s, "regions-not-mended") == 0 {
			t.Fatalf("floor %g: %s", floor, strings.Join(d, "; "))
		}
	})
}
