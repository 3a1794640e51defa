package render

import (
	"shearprint/field"
	"shearprint/field/topology"
)

// SceneOf returns a scene with the skeleton's points as marks and its lines; the skeleton may be nil. Floor is the
// skeleton's noise floor: texture below it fades.
func SceneOf(f *field.Field, sk *topology.Skeleton) *Scene {
	s := &Scene{Field: f}
	if sk == nil {
		return s
	}
	s.Floor = sk.Floor
	s.Regions = sk.Basins
	for i := range sk.Points {
		s.Marks = append(s.Marks, MarkOf(&sk.Points[i]))
	}
	for i := range sk.Lines {
		s.Lines = append(s.Lines, LinesOf(&sk.Lines[i])...)
	}
	return s
}

// MarkOf returns the mark of a critical point, labelled with its id; a point that the mesh does not resolve is weak and
// its label ends in a question mark.
func MarkOf(p *topology.Point) Mark {
	m := Mark{Loc: p.Loc, Label: p.ID, Half: p.Half, Weak: !p.Resolved}
	m.Shape = [...]Shape{
		topology.Node: NodeMark, topology.Focus: FocusMark, topology.Saddle: SaddleMark, topology.Degenerate: DegenerateMark,
	}[min(p.Type, topology.Degenerate)]
	m.Sense = [...]Sense{
		topology.Neutral: NeutralSense, topology.Attachment: AttachmentSense, topology.Separation: SeparationSense,
	}[min(p.Sense, topology.Separation)]
	if m.Weak {
		m.Label += "?"
	}
	return m
}

// LinesOf returns the curve of a separatrix or of a separation or attachment line: one, as a rule; a separatrix without a
// kind on the whole is cut into its reaches.
func LinesOf(l *topology.Line) []Line {
	senses := [...]Sense{
		topology.NoKind: NeutralSense, topology.AttachmentLine: AttachmentSense, topology.SeparationLine: SeparationSense,
	}
	form := [...]Form{
		topology.Closed: ClosedForm, topology.Horn: HornForm, topology.Open: OpenForm, topology.Cycle: CycleForm,
	}[min(l.Type, topology.Cycle)]
	if l.Kind != topology.NoKind || len(l.Reaches) < 2 {
		return []Line{{Locs: l.Locs, Sense: senses[min(l.Kind, topology.SeparationLine)], Form: form}}
	}
	var out []Line
	for _, r := range l.Reaches {
		out = append(out, Line{Locs: l.Locs[r.First : r.Last+1], Sense: senses[min(r.Kind, topology.SeparationLine)], Form: form})
	}
	return out
}
