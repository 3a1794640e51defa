package topology_test

import (
	"math"
	"testing"

	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// On the axis of tau = (x, -4 y cos 2x) neighbours of the separatrix that leaves the saddle close in while cos 2x > 0,
// and part faster than the flow grows while -4 cos 2x > 1: it separates up to pi/4 and attaches from acos(-1/4)/2 on.
func TestReachesOfALine(t *testing.T) {
	raw := exact.Shake(exact.Plate(1.5, 1.5, 40_000), 0.2, 4, exact.OntoPlane)
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = r3.Vec{X: p.X, Y: -4 * p.Y * math.Cos(2*p.X)}
	}
	s := find(t, build(t, raw), withLines)
	edge := s.Field.MeanEdge()
	checked := 0
	for _, l := range s.Lines {
		if l.From < 0 || s.Points[l.From].Position.Norm() > edge || l.To >= 0 {
			continue
		}
		var kinds []topology.Kind
		for _, r := range l.Reaches {
			kinds = append(kinds, r.Kind)
		}
		if len(kinds) != 4 || kinds[1] != topology.SeparationLine || kinds[3] != topology.AttachmentLine {
			t.Fatalf("%s has the reaches %v", l.ID, kinds)
		}
		at := func(i int) float64 { return s.Field.Position(l.Locs[i]).Norm() }
		for _, c := range []struct{ got, want float64 }{
			{at(l.Reaches[1].First), 2 * edge}, // nearer to the saddle nothing counts
			{at(l.Reaches[1].Last), math.Pi / 4},
			{at(l.Reaches[3].First), math.Acos(-0.25) / 2},
		} {
			if math.Abs(c.got-c.want) > 2*edge {
				t.Errorf("%s: a reach ends at %g, want %g +- %g", l.ID, c.got, c.want, 2*edge)
			}
		}
		checked++
	}
	if checked != 2 {
		t.Errorf("%d lines leave the saddle, want 2", checked)
	}
}
