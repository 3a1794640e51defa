package study

import (
	"context"

	"shearprint/field"
	"shearprint/field/topology"
)

// Topology is the reading of the surface pattern: "shearprint/topology/1".
type Topology struct {
	Schema  string  `json:"schema"`
	Run     Run     `json:"run"`
	Surface Surface `json:"surface"`
	// Floor is the robustness [unit of tau] below which points were cancelled in pairs, and CancelledPoints how many.
	Floor           Number          `json:"min_robustness"`
	CancelledPoints int             `json:"cancelled_points"`
	Points          []Point         `json:"points"`
	Lines           []Line          `json:"lines"`
	Basins          []Basin         `json:"basins"`
	Ledger          Ledger          `json:"ledger"`
	Findings        []field.Finding `json:"findings"` // what is doubtful, of the run and of the reading

	maxTau float64
}

// Point is a critical point.
type Point struct {
	ID          string         `json:"id"`
	Type        topology.Type  `json:"type"`
	Sense       topology.Sense `json:"sense"`
	Index       int            `json:"index"`
	Half        bool           `json:"half"`
	Part        int            `json:"part"`
	Position    Vec            `json:"position"`
	Normal      Vec            `json:"normal"`
	Frame       [2]Vec         `json:"frame"`
	Jacobian    [2][2]Number   `json:"jacobian"`
	Eigenvalues [2][2]Number   `json:"eigenvalues"`
	Trace       Number         `json:"trace"`
	Determinant Number         `json:"determinant"`
	Robustness  Number         `json:"robustness"`
	Confidence  Number         `json:"confidence"`
	Resolved    bool           `json:"resolved"`
	Note        string         `json:"note"`
}

// Line is a separatrix, a cycle, or an open separation or attachment line.
type Line struct {
	ID       string            `json:"id"`
	Kind     topology.Kind     `json:"kind"`
	Type     topology.LineType `json:"type"`
	From     Word              `json:"from"`
	To       Word              `json:"to"`
	Length   Number            `json:"length"`
	Strength Number            `json:"strength"`
	Reason   string            `json:"reason"`
	// Reaches are the parts of the line that have one kind each, from its beginning to its end.
	Reaches []Reach `json:"reaches"`
	// Angle is the angle between separation surface and wall at each point [degrees]; null where it is not known.
	Angle  []Number `json:"angle"`
	Stable *bool    `json:"stable"` // of a cycle, whether its neighbours approach it; null for other lines
	Points []Vec    `json:"points"`
}

// Reach is a part of a line.
type Reach struct {
	Kind     topology.Kind `json:"kind"`
	Begin    Number        `json:"begin"` // arc length along the line
	End      Number        `json:"end"`
	Strength Number        `json:"strength"`
}

// Basin is a region of the surface whose streamlines come from one point and go to one.
type Basin struct {
	Source    Word   `json:"source"` // a point's id; null for a rim, a cycle, or what could not be followed
	Sink      Word   `json:"sink"`
	Triangles int    `json:"triangles"`
	Area      Number `json:"area"`
}

// Ledger is the balance of the points against what the topology of the surface demands.
type Ledger struct {
	Count
	Rule  string       `json:"rule"`
	Parts []PartLedger `json:"parts"`
}

// Count holds the numbers of a balance. Nodes, foci and saddles are without half points.
type Count struct {
	Nodes          int    `json:"nodes"`
	Foci           int    `json:"foci"`
	Saddles        int    `json:"saddles"`
	HalfNodes      int    `json:"half_nodes"`
	HalfSaddles    int    `json:"half_saddles"`
	Degenerate     int    `json:"degenerate"`
	HalfDegenerate int    `json:"half_degenerate"`
	IndexSum       Number `json:"index_sum"`
	BoundaryTerm   Number `json:"boundary_term"`
	Expected       Number `json:"expected"`
	Balanced       bool   `json:"balanced"`
}

// PartLedger is the balance of one part.
type PartLedger struct {
	Part int `json:"part"`
	Count
	Euler int         `json:"euler_characteristic"`
	Rule  string      `json:"rule"`
	Rims  []RimLedger `json:"rims"`
}

// RimLedger tells how tau meets one boundary loop.
type RimLedger struct {
	Interior   int    `json:"interior_tangencies"`
	Exterior   int    `json:"exterior_tangencies"`
	Term       Number `json:"term"`
	HalfPoints int    `json:"half_points"`
	Streamline bool   `json:"streamline"`
	Symmetric  Number `json:"symmetric_share"`
}

// Topology reads the pattern. Options are those of topology.Find.
func (s *Study) Topology(ctx context.Context, opt topology.Options) (*Topology, error) {
	sk, err := topology.Find(ctx, s.f, opt)
	if err != nil {
		return nil, err
	}
	out := &Topology{
		Schema: "shearprint/topology/1", Run: s.run(), Surface: s.surface(),
		Floor: Number(sk.Floor), CancelledPoints: sk.Cancelled,
		Points: []Point{}, Lines: []Line{}, Basins: []Basin{}, Ledger: ledgerOf(sk.Ledger),
		Findings: []field.Finding{}, maxTau: s.f.MaxTau,
	}
	for _, list := range [][]field.Finding{s.f.Findings, roughness(s.sharpTurns()), sk.Findings} {
		for _, f := range list {
			if f.Level == field.Doubtful {
				out.Findings = append(out.Findings, f)
			}
		}
	}
	for i := range sk.Points {
		out.Points = append(out.Points, pointOf(&sk.Points[i]))
	}
	for i := range sk.Lines {
		out.Lines = append(out.Lines, s.lineOf(sk, &sk.Lines[i]))
	}
	for _, b := range sk.Regions {
		out.Basins = append(out.Basins, Basin{idOf(sk, b.Source), idOf(sk, b.Sink), b.Triangles, Number(b.Area)})
	}
	return out, nil
}

func pointOf(p *topology.Point) Point {
	return Point{
		ID: p.ID, Type: p.Type, Sense: p.Sense, Index: p.Index, Half: p.Half, Part: int(p.Part),
		Position: vecOf(p.Position), Normal: vecOf(p.Normal), Frame: [2]Vec{vecOf(p.Frame[0]), vecOf(p.Frame[1])},
		Jacobian: matrixOf(p.Jacobian), Eigenvalues: matrixOf(p.Eigenvalues),
		Trace: Number(p.Trace), Determinant: Number(p.Determinant),
		Robustness: Number(p.Robustness), Confidence: Number(p.Confidence), Resolved: p.Resolved, Note: p.Note,
	}
}

func matrixOf(m [2][2]float64) [2][2]Number {
	return [2][2]Number{{Number(m[0][0]), Number(m[0][1])}, {Number(m[1][0]), Number(m[1][1])}}
}

// idOf returns the id of a point of the skeleton, "" for -1.
func idOf(sk *topology.Skeleton, i int) Word {
	if i < 0 {
		return ""
	}
	return Word(sk.Points[i].ID)
}

func (s *Study) lineOf(sk *topology.Skeleton, l *topology.Line) Line {
	out := Line{
		ID: l.ID, Kind: l.Kind, Type: l.Type, From: idOf(sk, l.From), To: idOf(sk, l.To),
		Length: Number(l.Length), Strength: Number(l.Strength), Reason: l.Reason,
		Points: make([]Vec, len(l.Locs)), Reaches: []Reach{},
	}
	if l.Type == topology.Cycle {
		out.Stable = &l.Stable
	}
	at := make([]float64, len(l.Locs)) // arc length
	for i, loc := range l.Locs {
		p := s.f.Position(loc)
		out.Points[i] = vecOf(p)
		if i > 0 {
			at[i] = at[i-1] + p.Sub(s.f.Position(l.Locs[i-1])).Norm()
		}
	}
	for _, r := range l.Reaches {
		out.Reaches = append(out.Reaches, Reach{r.Kind, Number(at[r.First]), Number(at[r.Last]), Number(r.Strength)})
	}
	if l.Angle != nil {
		out.Angle = make([]Number, len(l.Angle))
		for i, a := range l.Angle {
			out.Angle[i] = Number(degrees(a))
		}
	}
	return out
}

func ledgerOf(l topology.Ledger) Ledger {
	out := Ledger{Count: countOf(l.Count), Rule: l.Rule, Parts: []PartLedger{}}
	for _, p := range l.Parts {
		part := PartLedger{Part: int(p.Part), Count: countOf(p.Count), Euler: p.Euler, Rule: p.Rule, Rims: []RimLedger{}}
		for _, r := range p.Rims {
			part.Rims = append(part.Rims, RimLedger{
				r.Interior, r.Exterior, Number(r.Term), r.Reversals, r.Streamline, Number(r.Symmetric),
			})
		}
		out.Parts = append(out.Parts, part)
	}
	return out
}

func countOf(c topology.Count) Count {
	return Count{
		c.Nodes, c.Foci, c.Saddles, c.HalfNodes, c.HalfSaddles, c.Degenerate, c.HalfDegenerate,
		Number(c.IndexSum), Number(c.BoundaryTerm), Number(c.Expected), c.Balanced,
	}
}
