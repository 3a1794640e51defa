package study

import (
	"context"
	"fmt"
	"io"
	"math"
	"slices"

	"shearprint/field"
	"shearprint/field/r3"
)

// Inspection is the health of mesh and field: "shearprint/inspect/1".
type Inspection struct {
	Schema  string  `json:"schema"`
	Run     Run     `json:"run"`
	Surface Surface `json:"surface"`
	Box     Box     `json:"box"`
	// MeanEdge is the mean length of the triangles' edges.
	MeanEdge Number `json:"mean_edge"`
	Rims     []Rim  `json:"rims"`
	Ranges   Ranges `json:"ranges"`
	// ZeroVertices is the number of vertices at which tau is exactly zero.
	ZeroVertices int `json:"zero_vertices"`
	// LargestJump is the largest difference of tau between the ends of an edge.
	LargestJump Jump `json:"largest_jump"`
	// SharpTurns is the number of edges along which tau turns by more than 45 degrees: where the mesh does not resolve
	// the field, or close to a critical point.
	SharpTurns int             `json:"sharp_turns"`
	Edges      int             `json:"edges"`
	Findings   []field.Finding `json:"findings"`
}

// Box is the box around the surface.
type Box struct {
	Min Vec `json:"min"`
	Max Vec `json:"max"`
}

// Rim is a boundary loop.
type Rim struct {
	Part   int    `json:"part"`
	Edges  int    `json:"edges"`
	Length Number `json:"length"`
}

// Ranges holds the least and the largest value of each quantity; null where the run has none.
type Ranges struct {
	Tau *[2]Number `json:"tau"` // of |tau|
	P   *[2]Number `json:"p"`
	Cp  *[2]Number `json:"cp"`
}

// Jump is a difference of tau between the ends of an edge.
type Jump struct {
	Share    Number `json:"share"`    // of the largest |tau|
	Degrees  Number `json:"degrees"`  // by which tau turns, measured in the surface
	Position Vec    `json:"position"` // of the middle of the edge
}

// sharpTurn [rad] is the turn of tau along an edge beyond which the linear field inside a triangle is a poor guess: the
// rotations along three edges stay unambiguous up to pi, and a field that a mesh resolves turns far less.
const sharpTurn = math.Pi / 4

// roughShare is the share of sharp turns from which the field as a whole is called rough. Smooth solutions turn sharply
// only next to their critical points, which are few.
const roughShare = 0.02

// Inspect tells the health of mesh and field.
func (s *Study) Inspect(ctx context.Context) (*Inspection, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	f := s.f
	box := r3.BoxOf(f.Points)
	out := &Inspection{
		Schema: "shearprint/inspect/1", Run: s.run(), Surface: s.surface(),
		Box: Box{vecOf(box.Min), vecOf(box.Max)}, MeanEdge: Number(f.MeanEdge()), Rims: []Rim{},
		Findings: append([]field.Finding{}, f.Findings...),
	}
	for _, rim := range f.Rims {
		length := 0.0
		for _, h := range rim.Edges {
			length += f.EdgeLength(h)
		}
		out.Rims = append(out.Rims, Rim{int(rim.Part), len(rim.Edges), Number(length)})
	}
	sizes := make([]float64, len(f.Points))
	for v := range int32(len(f.Points)) {
		sizes[v] = f.Size(v)
		if f.IsZero(v) {
			out.ZeroVertices++
		}
	}
	out.Ranges = Ranges{Tau: rangeOf(sizes), P: rangeOf(f.P), Cp: rangeOf(f.Cp)}
	out.SharpTurns, out.Edges = s.sharpTurns()
	s.largestJump(out)
	out.Findings = append(out.Findings, roughness(out.SharpTurns, out.Edges)...)
	return out, nil
}

func rangeOf(x []float64) *[2]Number {
	if len(x) == 0 {
		return nil
	}
	return &[2]Number{Number(slices.Min(x)), Number(slices.Max(x))}
}

// sharpTurns counts the edges, and those along which tau turns by more than sharpTurn.
func (s *Study) sharpTurns() (sharp, edges int) {
	f := s.f
	for h, twin := range f.Twin {
		h := int32(h)
		if h < twin { // the other half of the edge is looked at
			continue
		}
		edges++
		a, b := f.Tail(h), f.Tip(h)
		turn := r3.Wrap(f.Angle(b) - f.Angle(a) - f.Transport(h))
		if math.Abs(turn) > sharpTurn && !f.IsZero(a) && !f.IsZero(b) {
			sharp++
		}
	}
	return sharp, edges
}

// roughness returns the finding that the field is rough, if it is.
func roughness(sharp, edges int) []field.Finding {
	share := float64(sharp) / float64(max(1, edges))
	if share <= roughShare {
		return nil
	}
	return []field.Finding{{
		Level: field.Doubtful, Code: "rough-field", Count: sharp,
		Text: fmt.Sprintf("tau turns by more than 45 degrees along %.2g %% of the edges: the mesh is too coarse for the field, "+
			"or the solution is not converged; weak critical points are noise", 100*share),
	}}
}

// largestJump compares tau at the two ends of every edge, in the chart of the edge's tip.
func (s *Study) largestJump(out *Inspection) {
	f := s.f
	largest, at := -1.0, int32(-1)
	for h, twin := range f.Twin {
		h := int32(h)
		if h < twin {
			continue
		}
		a, b := f.Tail(h), f.Tip(h)
		if d := f.Tau[b].Sub(r3.Polar(f.Size(a), f.Angle(a)+f.Transport(h))).Norm(); d > largest {
			largest, at = d, h
		}
	}
	if at < 0 || f.MaxTau == 0 {
		return
	}
	a, b := f.Tail(at), f.Tip(at)
	turn := r3.Wrap(f.Angle(b) - f.Angle(a) - f.Transport(at))
	out.LargestJump = Jump{
		Share: Number(largest / f.MaxTau), Degrees: Number(degrees(math.Abs(turn))),
		Position: vecOf(f.Points[a].Lerp(f.Points[b], 0.5)),
	}
}

// WriteText writes the inspection as a report.
func (in *Inspection) WriteText(w io.Writer) error {
	s := &sheet{w: w}
	s.title("health of mesh and field", in.Run)
	s.line("")
	s.para("", in.verdict())
	in.writeSurface(s)
	in.writeField(s)
	s.findings("Doubtful", in.Findings, field.Doubtful)
	s.findings("Repaired", in.Findings, field.Repaired)
	s.findings("How the file was understood", in.Findings, field.Note)
	return s.err
}

func (in *Inspection) verdict() string {
	doubts, repairs := 0, 0
	for _, f := range in.Findings {
		switch f.Level {
		case field.Doubtful:
			doubts++
		case field.Repaired:
			repairs++
		}
	}
	words := "The surface can be read."
	if repairs > 0 {
		words += " " + count(repairs, "kind of fault was", "kinds of faults were") + " mended."
	}
	if doubts > 0 {
		words += " " + count(doubts, "matter is", "matters are") + " doubtful; what rests on that deserves a second look."
	}
	return words
}

func (in *Inspection) writeSurface(s *sheet) {
	u := in.Run.LengthUnit
	s.heading("Surface")
	s.line("  %d vertices, %d triangles, %d edges; area %s", in.Surface.Vertices, in.Surface.Triangles, in.Edges,
		with(in.Surface.Area, square(u)))
	s.line("  box from %s to %s; mean edge %s", place(in.Box.Min), place(in.Box.Max), with(in.MeanEdge, u))
	s.line("  Euler characteristic %d, %s, %s", in.Surface.Euler, count(in.Surface.Loops, "boundary loop", "boundary loops"),
		count(len(in.Surface.Parts), "part", "parts"))
	if len(in.Surface.Parts) > 1 {
		rows := [][]string{{"part", "triangles", "Euler", "loops", "genus", "area" + bracket(square(u))}}
		for i, p := range in.Surface.Parts {
			rows = append(rows, []string{
				fmt.Sprint(i), fmt.Sprint(p.Triangles), fmt.Sprint(p.Euler), fmt.Sprint(p.Loops), fmt.Sprint(p.Genus), num(p.Area),
			})
		}
		s.table(limited(rows))
	}
	if len(in.Rims) > 0 {
		rows := [][]string{{"loop", "part", "edges", "length" + bracket(u)}}
		for i, r := range in.Rims {
			rows = append(rows, []string{fmt.Sprint(i), fmt.Sprint(r.Part), fmt.Sprint(r.Edges), num(r.Length)})
		}
		s.table(limited(rows))
	}
}

func (in *Inspection) writeField(s *sheet) {
	s.heading("Field")
	for _, q := range []struct {
		name  string
		unit  Word
		value *[2]Number
	}{{"|tau|", in.Run.TauUnit, in.Ranges.Tau}, {"p", in.Run.PUnit, in.Ranges.P}, {"cp", "1", in.Ranges.Cp}} {
		if q.value == nil {
			s.line("  %-5s not in the run", q.name)
			continue
		}
		s.line("  %-5s from %s to %s", q.name, num(q.value[0]), with(q.value[1], q.unit))
	}
	s.line("  tau is exactly zero at %s", count(in.ZeroVertices, "vertex", "vertices"))
	s.para("  ", fmt.Sprintf("largest jump along an edge: %.1f %% of the largest |tau|, turning by %.0f degrees, near %s",
		100*in.LargestJump.Share, float64(in.LargestJump.Degrees), place(in.LargestJump.Position)))
	s.para("  ", fmt.Sprintf("tau turns by more than 45 degrees along %d of %d edges (%.2g %%): the mesh does not resolve the "+
		"field there, or a critical point is close", in.SharpTurns, in.Edges, 100*float64(in.SharpTurns)/float64(max(1, in.Edges))))
}

func square(unit Word) Word {
	if unit == "" {
		return ""
	}
	return unit + "^2"
}

// longestTable is the number of rows that a text report shows of what may be thousands; the JSON has them all.
const longestTable = 20

func limited(rows [][]string) [][]string {
	if len(rows) <= longestTable+1 {
		return rows
	}
	rest := make([]string, len(rows[0]))
	rest[0] = fmt.Sprintf("and %d more", len(rows)-1-longestTable)
	return append(rows[:longestTable+1:longestTable+1], rest)
}
