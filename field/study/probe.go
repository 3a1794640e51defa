package study

import (
	"context"
	"fmt"
	"io"
	"math"

	"shearprint/field/r3"
	"shearprint/field/topology"
)

// Probe is what is known at one surface point: "shearprint/probe/1".
type Probe struct {
	Schema   string    `json:"schema"`
	Run      Run       `json:"run"`
	At       Vec       `json:"at"`       // the point that was given
	Position Vec       `json:"position"` // the surface point nearest to it
	Distance Number    `json:"distance"` // between them
	Triangle int       `json:"triangle"`
	Weights  [3]Number `json:"barycentric"`
	Part     int       `json:"part"`
	Normal   Vec       `json:"normal"`
	Tau      Vec       `json:"tau"`
	TauSize  Number    `json:"tau_magnitude"`
	P        Number    `json:"p"`  // null where the run has none
	Cp       Number    `json:"cp"` // null where the run has none

	// The Jacobian of tau in Frame, by the fit that places critical points; Fitted is false where only the triangle's own
	// slopes could be had, and Note tells why.
	Frame       [2]Vec       `json:"frame"`
	Jacobian    [2][2]Number `json:"jacobian"`
	Eigenvalues [2][2]Number `json:"eigenvalues"`
	Trace       Number       `json:"trace"`
	Determinant Number       `json:"determinant"`
	Fitted      bool         `json:"fitted"`
	Note        string       `json:"note"`

	Nearest *Nearby `json:"nearest_point"` // null where the run has no critical point
}

// Nearby is a critical point seen from elsewhere.
type Nearby struct {
	ID       string         `json:"id"`
	Type     topology.Type  `json:"type"`
	Sense    topology.Sense `json:"sense"`
	Distance Number         `json:"distance"` // in a straight line
	Position Vec            `json:"position"`
}

// Probe tells what is known at the surface point nearest to p. It fails with a *PlaceError where p is far from the
// surface.
func (s *Study) Probe(ctx context.Context, p r3.Vec) (*Probe, error) {
	loc, distance, err := s.nearest(p)
	if err != nil {
		return nil, err
	}
	sk, err := s.allPoints(ctx)
	if err != nil {
		return nil, err
	}
	at, here, slope := s.f.Position(loc), s.f.At(loc), topology.SlopeAt(s.f, loc)
	out := &Probe{
		Schema: "shearprint/probe/1", Run: s.run(),
		At: vecOf(p), Position: vecOf(at), Distance: Number(distance),
		Triangle: int(loc.Tri), Part: int(s.f.Part[loc.Tri]),
		Normal: vecOf(slope.Normal), Tau: vecOf(here.Tau3), TauSize: Number(here.Tau.Norm()),
		P: Number(here.P), Cp: Number(here.Cp),
		Frame: [2]Vec{vecOf(slope.Frame[0]), vecOf(slope.Frame[1])}, Jacobian: matrixOf(slope.Jacobian),
		Eigenvalues: matrixOf(slope.Eigenvalues), Trace: Number(slope.Trace), Determinant: Number(slope.Determinant),
		Fitted: slope.Fitted, Note: slope.Note,
	}
	for k, w := range loc.Bary {
		out.Weights[k] = Number(w)
	}
	best := math.Inf(1)
	for i := range sk.Points {
		q := &sk.Points[i]
		if d := q.Position.Sub(at).Norm(); d < best {
			best = d
			out.Nearest = &Nearby{q.ID, q.Type, q.Sense, Number(d), vecOf(q.Position)}
		}
	}
	return out, nil
}

// WriteText writes the probe as a card.
func (p *Probe) WriteText(w io.Writer) error {
	s := &sheet{w: w}
	u, tau := p.Run.LengthUnit, p.Run.TauUnit
	slope := per(tau, u)
	s.title("one surface point", p.Run)
	s.line("")
	size := r3.Vec{X: float64(p.Position[0]), Y: float64(p.Position[1]), Z: float64(p.Position[2])}.Norm()
	s.line("  position     %s, %s from the given point", place(p.Position), with(tidy(p.Distance, size), u))
	s.line("  triangle     %d, barycentric %s %s %s", p.Triangle, num(tidy(p.Weights[0], 1)), num(tidy(p.Weights[1], 1)),
		num(tidy(p.Weights[2], 1)))
	s.line("  normal       %s", place(p.Normal))
	s.line("  tau          %s, |tau| = %s", place(p.Tau), with(p.TauSize, tau))
	s.line("  p            %s", known(p.P, p.Run.PUnit))
	s.line("  cp           %s", known(p.Cp, "1"))
	s.line("  frame        %s, %s", place(p.Frame[0]), place(p.Frame[1]))
	s.line("  Jacobian     [%s %s; %s %s]%s", num(p.Jacobian[0][0]), num(p.Jacobian[0][1]), num(p.Jacobian[1][0]),
		num(p.Jacobian[1][1]), bracket(slope))
	s.line("  eigenvalues  %s, %s%s", complexNumber(p.Eigenvalues[0]), complexNumber(p.Eigenvalues[1]), bracket(slope))
	s.line("  trace        %s, determinant %s", with(p.Trace, slope), with(p.Determinant, square(parens(slope))))
	if p.Note != "" {
		s.para("  ?            ", p.Note)
	}
	if n := p.Nearest; n != nil {
		s.line("  nearest      %s (%s, %s) at %s, %s away", n.ID, n.Type, n.Sense, place(n.Position), with(n.Distance, u))
	} else {
		s.line("  nearest      the run has no critical point")
	}
	return s.err
}

// known prints a quantity that the run may lack.
func known(x Number, unit Word) string {
	if math.IsNaN(float64(x)) {
		return "not in the run"
	}
	return with(x, unit)
}

func complexNumber(x [2]Number) string {
	switch im := float64(x[1]); {
	case im == 0:
		return num(x[0])
	case im < 0:
		return fmt.Sprintf("%s - %si", num(x[0]), num(-im))
	}
	return fmt.Sprintf("%s + %si", num(x[0]), num(x[1]))
}
