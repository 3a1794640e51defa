// Package study is the facade behind the command line and the page's calls: every result that leaves Shearprint is made
// here, once, so that the two cannot disagree. A Study takes a field and answers with results; each result is the JSON
// of one schema, and prints as text that an engineer can file, some as CSV too.
//
// Results carry the units of the run. Where a file does not tell its unit of length, the field is null and the numbers
// are the file's own.
package study

import (
	"context"
	"sync"

	"shearprint/field"
	"shearprint/field/topology"
	"shearprint/field/trace"
)

// Study answers questions about one field. It may be used by several goroutines at once.
type Study struct {
	f *field.Field

	mu     sync.Mutex         // guards what follows
	tracer *trace.Tracer      // made at the first trace
	points *topology.Skeleton // all points, without lines; nil until asked for
}

// New returns a study of the field.
func New(f *field.Field) *Study { return &Study{f: f} }

// Field returns the field under study.
func (s *Study) Field() *field.Field { return s.f }

// allPoints returns the skeleton without lines and without a floor, found at the first call that is not cancelled.
func (s *Study) allPoints(ctx context.Context) (*topology.Skeleton, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	if s.points != nil {
		return s.points, nil
	}
	sk, err := topology.Find(ctx, s.f, topology.Options{})
	if err != nil {
		return nil, err
	}
	s.points = sk
	return sk, nil
}

// Run names the run and its units in every result.
type Run struct {
	Name       string `json:"name"`
	LengthUnit Word   `json:"length_unit"` // "m", or null where nobody told
	TauUnit    Word   `json:"tau_unit"`    // "Pa", "1" for a coefficient, or null
	PUnit      Word   `json:"p_unit"`      // of the pressure; null where there is none or nobody told
}

func (s *Study) run() Run {
	u := s.f.Units
	r := Run{Name: s.f.Name, LengthUnit: Word(u.Length), TauUnit: Word(u.Tau)}
	if s.f.P != nil {
		r.PUnit = Word(u.P)
	}
	return r
}

// Surface holds the counts of the mesh after repair.
type Surface struct {
	Vertices  int    `json:"vertices"`
	Triangles int    `json:"triangles"`
	Area      Number `json:"area"`
	Euler     int    `json:"euler_characteristic"`
	Loops     int    `json:"boundary_loops"`
	Parts     []Part `json:"parts"`
}

// Part holds the counts of one connected part.
type Part struct {
	Triangles int    `json:"triangles"`
	Euler     int    `json:"euler_characteristic"`
	Loops     int    `json:"boundary_loops"`
	Genus     int    `json:"genus"`
	Vertices  int    `json:"vertices"`
	Area      Number `json:"area"`
}

func (s *Study) surface() Surface {
	out := Surface{Triangles: len(s.f.Tris), Euler: s.f.Euler(), Loops: len(s.f.Rims), Parts: []Part{}}
	area := 0.0
	for _, p := range s.f.Parts {
		out.Vertices += p.Vertices
		area += p.Area
		out.Parts = append(out.Parts, Part{
			Triangles: p.Triangles, Euler: p.Euler, Loops: p.Rims, Genus: p.Genus, Vertices: p.Vertices,
			Area: Number(p.Area),
		})
	}
	out.Area = Number(area)
	return out
}
