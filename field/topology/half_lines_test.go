package topology_test

import (
	"math"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// The separatrices of a half model are those of the whole: the lines in the plane of symmetry, and one of every two that
// mirror one another. The whole is traced without any knowledge of symmetry. On the torus the lines in the plane
// run from saddle to saddle, which tracing beside them misses: there the whole is left out.
func TestHalfLinesAreTheLinesOfTheWhole(t *testing.T) {
	strained := func(e [3]float64) func(r3.Vec) r3.Vec {
		tau, _ := exact.StokesSphere(r3.Vec{}, r3.Vec{}, exact.Diagonal(e[0], e[1], e[2]))
		return tau
	}
	driven, _ := exact.StokesSphere(r3.Vec{X: 2}, r3.Vec{}, exact.Diagonal(1, -0.2, -0.8))
	along := func(p r3.Vec) r3.Vec { return r3.Vec{X: 1}.Reject(halves[1].normal(p)) }
	for _, c := range []struct {
		name         string
		raw          field.Raw
		tau          func(r3.Vec) r3.Vec
		plane, other int // separatrices in the plane, and on the side of it that is kept
		whole        bool
	}{
		{"saddles off the plane", half(cubeSphere(24)), strained([3]float64{0.8, 0.2, -1}), 0, 4, true},
		{"saddles in the plane", half(cubeSphere(24)), strained([3]float64{0.1, 0.9, -1}), 4, 2, true},
		{"flow into the saddles in the plane", half(cubeSphere(24)), strained([3]float64{0.1, -1, 0.9}), 4, 2, true},
		{"stream and strain", half(cubeSphere(24)), driven, 0, 4, true},
		{"torus", half(exact.Torus(1, 0.4, 4*720)), along, 2, 2, false},
		{"plate", half(exact.Plate(2, 1, 64*32)), func(p r3.Vec) r3.Vec {
			return r3.Vec{X: p.X*p.X - 0.4, Y: p.Y * (p.Y*p.Y - 0.17)}
		}, 2, 5, true},
	} {
		c.raw.Tau = make([]r3.Vec, len(c.raw.Points))
		for i, p := range c.raw.Points {
			c.raw.Tau[i] = c.tau(p)
		}
		part := find(t, build(t, c.raw), withLines)
		checkLines(t, part)
		whole := find(t, build(t, mirrored(c.raw)), withLines)
		plane := 0
		for _, l := range part.Lines {
			if inPlane(part, &l) {
				plane++
			}
			if c.whole && !hasLine(whole, part, &l) {
				t.Errorf("%s: the whole has no line like %s: %s, %g long", c.name, l.ID, l.Reason, l.Length)
			}
		}
		if plane != c.plane || len(part.Lines)-plane != c.other {
			t.Errorf("%s: %d lines, %d in the plane; want %d and %d", c.name, len(part.Lines), plane, c.plane+c.other, c.plane)
		}
		if c.whole && len(whole.Lines) != c.plane+2*c.other {
			t.Errorf("%s: the whole has %d lines, want %d", c.name, len(whole.Lines), c.plane+2*c.other)
		}
	}
}

func inPlane(s *topology.Skeleton, l *topology.Line) bool {
	for _, loc := range l.Locs {
		if math.Abs(s.Field.Position(loc).Y) > 1e-9 {
			return false
		}
	}
	return true
}

// hasLine tells whether a skeleton has a line with the ends, the type and, to one in a hundred, the length of another's.
func hasLine(s, of *topology.Skeleton, l *topology.Line) bool {
	ends := func(s *topology.Skeleton, l *topology.Line) (a, b r3.Vec) {
		return s.Field.Position(l.Locs[0]), s.Field.Position(l.Locs[len(l.Locs)-1])
	}
	a, b := ends(of, l)
	for i := range s.Lines {
		k := &s.Lines[i]
		c, d := ends(s, k)
		if k.Type == l.Type && math.Abs(k.Length-l.Length) < 0.01*l.Length &&
			math.Max(c.Sub(a).Norm(), d.Sub(b).Norm()) < 2*s.Field.MeanEdge() {
			return true
		}
	}
	return false
}

// Two half points of a plane of symmetry that cancel one another leave no line: above their robustness tau runs one way along
// the whole rim.
func TestHalfPairIsCancelled(t *testing.T) {
	raw := half(exact.Plate(2, 1, 64*32))
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = r3.Vec{X: p.X*p.X - 0.04, Y: p.Y}
	}
	f := build(t, raw)
	s := find(t, f, withLines)
	if l := s.Ledger; l.HalfNodes != 1 || l.HalfSaddles != 1 || len(s.Points) != 2 || len(s.Lines) != 3 {
		t.Fatalf("%+v with %d lines", l.Count, len(s.Lines))
	}
	s = find(t, f, topology.Options{Lines: true, MinRobustness: 0.08})
	if d := dangling(s); len(s.Points) != 0 || len(d) > 0 || told(s, "mended-regions") != 1 || told(s, "regions-not-mended") != 0 {
		t.Errorf("%d points, findings %+v, %v", len(s.Points), s.Findings, d)
	}
	for _, l := range s.Lines {
		if l.Type != topology.Open {
			t.Errorf("%s: %s", l.ID, l.Reason)
		}
	}
}
