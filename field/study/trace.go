package study

import (
	"context"
	"io"

	"shearprint/field/r3"
	"shearprint/field/topology"
	"shearprint/field/trace"
)

// Trace is the limiting streamline through a point, along the flow: "shearprint/trace/1". The lists have one value per
// point of the line; P and Cp are null where the run has none.
type Trace struct {
	Schema     string   `json:"schema"`
	Run        Run      `json:"run"`
	At         Vec      `json:"at"`       // the point that was given
	Position   Vec      `json:"position"` // the surface point nearest to it
	Distance   Number   `json:"distance"`
	Length     Number   `json:"length"`
	Upstream   End      `json:"upstream"`
	Downstream End      `json:"downstream"`
	Start      int      `json:"start"` // number of the element of Points at Position
	S          []Number `json:"s"`     // arc length from Position, negative upstream
	Points     []Vec    `json:"points"`
	Tau        []Vec    `json:"tau"`
	P          []Number `json:"p"`
	Cp         []Number `json:"cp"`
}

// End tells why one end of a line is an end.
type End struct {
	Point  Word   `json:"point"`  // id of the critical point that took the line, or null
	Reason string `json:"reason"` // in words
}

// Capture discs of critical points, as a share of the length of the edges around them. A line that comes within half an
// edge of a node or focus goes there, as far as the mesh can tell; a saddle takes only the lines that run into it, and
// those that pass it by must pass.
const (
	captureShare       = 0.5
	saddleCaptureShare = 0.01
)

// traceWith returns the tracer that ends lines at the critical points.
func (s *Study) traceWith(sk *topology.Skeleton) *trace.Tracer {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.tracer == nil {
		stops := make([]trace.Stop, len(sk.Points))
		for i, p := range sk.Points {
			share := captureShare
			if p.Type == topology.Saddle {
				share = saddleCaptureShare
			}
			stops[i] = trace.Stop{ID: i, Loc: p.Loc, Radius: float64(share * p.Size)}
		}
		s.tracer = trace.New(s.f, stops, nil)
	}
	return s.tracer
}

// Trace follows the limiting streamline through the surface point nearest to p, both ways. It fails with a *PlaceError
// where p is far from the surface.
func (s *Study) Trace(ctx context.Context, p r3.Vec) (*Trace, error) {
	loc, distance, err := s.nearest(p)
	if err != nil {
		return nil, err
	}
	sk, err := s.allPoints(ctx)
	if err != nil {
		return nil, err
	}
	line := s.traceWith(sk).Through(ctx, loc, trace.Options{})
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	out := &Trace{
		Schema: "shearprint/trace/1", Run: s.run(),
		At: vecOf(p), Position: vecOf(s.f.Position(loc)), Distance: Number(distance),
		Length:   Number(line.Back.Length() + line.Ahead.Length()),
		Upstream: endOf(sk, &line.Back), Downstream: endOf(sk, &line.Ahead), Start: line.Start,
		S: make([]Number, len(line.S)), Points: make([]Vec, len(line.Locs)), Tau: make([]Vec, len(line.Locs)),
	}
	if s.f.P != nil {
		out.P = make([]Number, len(line.Locs))
	}
	if s.f.Cp != nil {
		out.Cp = make([]Number, len(line.Locs))
	}
	for i, l := range line.Locs {
		here := s.f.At(l)
		out.S[i], out.Points[i], out.Tau[i] = Number(line.S[i]), vecOf(s.f.Position(l)), vecOf(here.Tau3)
		if out.P != nil {
			out.P[i] = Number(here.P)
		}
		if out.Cp != nil {
			out.Cp[i] = Number(here.Cp)
		}
	}
	return out, nil
}

func endOf(sk *topology.Skeleton, p *trace.Path) End {
	e := End{Reason: p.End.String()}
	if p.End == trace.Captured {
		e.Point = Word(sk.Points[p.Stop].ID)
	}
	return e
}

// WriteCSV writes a row per point of the line; comments tell the ends.
func (t *Trace) WriteCSV(w io.Writer) error {
	c := newTable(w)
	u := t.Run.LengthUnit
	c.comment("limiting streamline of %s, along the flow, %s long", t.Run.Name, with(t.Length, u))
	c.comment("it passes %s at s = 0, %s from the given point", place(t.Position), with(t.Distance, u))
	c.comment("upstream end: %s", t.Upstream)
	c.comment("downstream end: %s", t.Downstream)
	head := units([]string{"x", "y", "z", "s"}, u)
	head = append(head, units([]string{"tau_x", "tau_y", "tau_z", "|tau|"}, t.Run.TauUnit)...)
	head = append(head, "p"+bracket(t.Run.PUnit), "cp"+bracket("1"))
	c.row(head...)
	for i, p := range t.Points {
		tau := t.Tau[i]
		size := r3.Vec{X: float64(tau[0]), Y: float64(tau[1]), Z: float64(tau[2])}.Norm()
		row := []string{cell(p[0]), cell(p[1]), cell(p[2]), cell(t.S[i]), cell(tau[0]), cell(tau[1]), cell(tau[2]), cell(size)}
		c.row(append(row, cellAt(t.P, i), cellAt(t.Cp, i))...)
	}
	return c.flush()
}

// cellAt prints element i, or nothing where the run has no such quantity.
func cellAt(x []Number, i int) string {
	if x == nil {
		return ""
	}
	return cell(x[i])
}

// String tells the end in words.
func (e End) String() string {
	if e.Point != "" {
		return e.Reason + " (" + string(e.Point) + ")"
	}
	return e.Reason
}
