package session

import (
	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/topology"
	"shearprint/render"
)

// Words of the view in the renderer's terms.
var (
	quantities = map[string]render.Quantity{
		"cp": render.Cp, "p": render.Pressure, "tau": render.TauSize, "basins": render.Basins, "none": render.Plain,
	}
	sceneThemes = map[string]render.Theme{"light": render.Light, "dark": render.Dark}
	sceneFlows  = map[string]render.Flow{"texture": render.Texture, "lines": render.FlowLines, "none": render.NoFlow}
)

// isobarCount is about how many lines of equal pressure a picture bears beside its texture.
const isobarCount = 12

// Scene returns what the view shows of a run, in the page and in a picture made from a link. The skeleton may be nil; of
// its points, those listed are marked. Streamlines, where the view wants them, are for the caller to add.
func (v *View) Scene(f *field.Field, sk *topology.Skeleton, points []*topology.Point) *render.Scene {
	s := &render.Scene{Field: f, Quantity: quantities[v.Colour], Theme: sceneThemes[v.Theme], Flow: sceneFlows[v.Flow],
		Bare: !v.Legend}
	if v.Isobars {
		s.Isobars = isobarCount
	}
	if sk != nil {
		s.Regions, s.Floor = sk.Basins, sk.Floor
		v.addLines(s, sk)
	}
	if v.Points {
		for _, q := range points {
			m := render.MarkOf(q)
			m.Chosen = v.At != nil && Same(vec(*v.At), q.Position)
			s.Marks = append(s.Marks, m)
		}
	}
	if v.At != nil && !markChosen(s) {
		loc, _ := f.Nearest(vec(*v.At))
		s.Marks = append(s.Marks, render.Mark{Loc: loc, Shape: render.ProbeMark, Chosen: true})
	}
	return s
}

func markChosen(s *render.Scene) bool {
	for i := range s.Marks {
		if s.Marks[i].Chosen {
			return true
		}
	}
	return false
}

// Same tells whether two places are one, up to the digits of a link.
func Same(a, b r3.Vec) bool { return a.Sub(b).Norm() <= 1e-7*max(a.Norm(), b.Norm()) }

func (v *View) addLines(s *render.Scene, sk *topology.Skeleton) {
	kinds := map[topology.Kind]bool{
		topology.SeparationLine: v.Separation, topology.AttachmentLine: v.Attachment,
		topology.NoKind: v.Separation || v.Attachment,
	}
	types := map[topology.LineType]bool{
		topology.Closed: v.Closed, topology.Horn: v.Horn, topology.Open: v.Open, topology.Cycle: v.Cycle,
	}
	for i := range sk.Lines {
		l := &sk.Lines[i]
		if kinds[l.Kind] && types[l.Type] {
			s.Lines = append(s.Lines, render.LinesOf(l)...)
		}
	}
}
