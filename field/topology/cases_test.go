package topology_test

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

func find(t rapid.TB, f *field.Field, opt topology.Options) *topology.Skeleton {
	t.Helper()
	s, err := topology.Find(context.Background(), f, opt)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Every case of the catalogue must give its index sum, its boundary term, a balanced ledger, and the points that it
// lists: type, sense, index, place within a tenth of an edge, eigenvalues within 3 %. Sources: see exact.Case.Source.
func TestCatalogue(t *testing.T) {
	for _, c := range exact.Cases() {
		t.Run(c.Name, func(t *testing.T) {
			f := c.Field(20000)
			s := find(t, f, topology.Options{})
			l := s.Ledger
			if !l.Balanced || l.IndexSum != float64(c.IndexSum) || l.BoundaryTerm != float64(c.BoundaryTerm) {
				t.Errorf("index sum %g, term %g, balanced %v, want %d, %d", l.IndexSum, l.BoundaryTerm, l.Balanced, c.IndexSum,
					c.BoundaryTerm)
			}
			if c.Points == nil {
				return
			}
			if len(s.Points) != len(c.Points) {
				t.Errorf("%d points, want %d", len(s.Points), len(c.Points))
			}
			for _, want := range c.Points {
				p := nearestPoint(s, want.Position)
				if p == nil {
					t.Errorf("no point near %v", want.Position)
					continue
				}
				if p.Type.String() != want.Type || p.Sense != senseByTrace(want) || p.Index != want.Index {
					t.Errorf("%s at %v is %v of %v, index %d; want %s of %s, %d", p.ID, p.Position, p.Type, p.Sense, p.Index,
						want.Type, senseByTrace(want), want.Index)
				}
				if d := p.Position.Sub(want.Position).Norm() / p.Size; d > 0.1 {
					t.Errorf("%s is %g edges off", p.ID, d)
				}
				compareEigenvalues(t, p, want)
				if !p.Resolved {
					t.Errorf("%s: not resolved: %s", p.ID, p.Note)
				}
			}
		})
	}
}

// senseByTrace is the definition of the sense: the sign of the sum of the eigenvalues.
func senseByTrace(p exact.Point) topology.Sense {
	switch tr := real(p.Eigenvalues[0] + p.Eigenvalues[1]); {
	case tr > 0:
		return topology.Attachment
	case tr < 0:
		return topology.Separation
	}
	return topology.Neutral
}

func nearestPoint(s *topology.Skeleton, at r3.Vec) *topology.Point {
	var best *topology.Point
	least := math.Inf(1)
	for i := range s.Points {
		if d := s.Points[i].Position.Sub(at).Norm(); d < least {
			best, least = &s.Points[i], d
		}
	}
	return best
}

func compareEigenvalues(t *testing.T, p *topology.Point, want exact.Point) {
	t.Helper()
	scale := 0.0
	for _, e := range want.Eigenvalues {
		scale = math.Max(scale, math.Hypot(real(e), imag(e)))
	}
	if scale == 0 {
		return
	}
	for i, e := range want.Eigenvalues {
		got := p.Eigenvalues[i]
		if d := math.Hypot(got[0]-real(e), got[1]-imag(e)); d > 0.03*scale {
			t.Errorf("%s: eigenvalue %d is %g, want %g", p.ID, i, got, e)
		}
	}
}
