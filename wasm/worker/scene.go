//go:build js && wasm

package main

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/topology"
	"shearprint/render"
)

// Words of the view in the renderer's terms.
var (
	quantities = map[string]render.Quantity{
		"cp": render.Cp, "p": render.Pressure, "tau": render.TauSize, "basins": render.Basins,
		"none": render.Plain,
	}
	themes = map[string]render.Theme{"light": render.Light, "dark": render.Dark}
)

// isobarCount is about how many lines of equal pressure a picture bears beside its texture.
const isobarCount = 12

// sceneOf returns the scene of the present view.
func (p *painter) sceneOf() *render.Scene {
	v := &p.view
	s := &render.Scene{
		Field: p.field, Quantity: quantities[v.Colour], Theme: themes[v.Theme], Scale: p.size.Ratio, Bare: true, // the page has a key of its own
		Animate: v.Motion && v.Flow == "texture",
	}
	if v.Isobars {
		s.Isobars = isobarCount
	}
	switch v.Flow {
	case "texture":
		s.Flow = render.Texture
	case "lines":
		s.Flow, s.Streamlines = render.FlowLines, p.streamlines()
	default:
		s.Flow = render.NoFlow
	}
	if p.skeleton != nil {
		s.Regions = p.skeleton.Basins
		p.addLines(s)
		if v.Points {
			p.addMarks(s)
		}
	}
	if v.At != nil && !markChosen(s) {
		loc, _ := p.field.Nearest(vec(*v.At))
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

// visiblePoints returns the points above the view's noise floor. While the floor is moved, those that it would cancel are
// left out at once; points and lines are found anew when it rests.
func (p *painter) visiblePoints() []*topology.Point {
	sk := p.skeleton
	if sk.Floor > p.view.Floor && p.all != nil {
		sk = p.all
	}
	gone := map[int]bool{}
	for _, l := range sk.Levels() {
		if l.Robustness < p.view.Floor {
			for _, i := range l.Points {
				gone[i] = true
			}
		}
	}
	var out []*topology.Point
	for i := range sk.Points {
		if !gone[i] {
			out = append(out, &sk.Points[i])
		}
	}
	return out
}

func (p *painter) addMarks(s *render.Scene) {
	for _, q := range p.visiblePoints() {
		m := render.MarkOf(q)
		m.Chosen = p.view.At != nil && same(vec(*p.view.At), q.Position)
		s.Marks = append(s.Marks, m)
	}
}

// same tells whether two places are one, up to the digits of a link.
func same(a, b r3.Vec) bool { return a.Sub(b).Norm() <= 1e-7*max(a.Norm(), b.Norm()) }

func (p *painter) addLines(s *render.Scene) {
	v := &p.view
	kinds := map[topology.Kind]bool{
		topology.SeparationLine: v.Separation, topology.AttachmentLine: v.Attachment,
		topology.NoKind: v.Separation || v.Attachment,
	}
	types := map[topology.LineType]bool{
		topology.Closed: v.Closed, topology.Horn: v.Horn, topology.Open: v.Open, topology.Cycle: v.Cycle,
	}
	for i := range p.skeleton.Lines {
		l := &p.skeleton.Lines[i]
		if kinds[l.Kind] && types[l.Type] {
			s.Lines = append(s.Lines, render.LineOf(l))
		}
	}
}

// skeletonPoint returns the critical point at a place; nil for none.
func (p *painter) skeletonPoint(at r3.Vec) *topology.Point {
	if p.skeleton == nil {
		return nil
	}
	for i := range p.skeleton.Points {
		if same(p.skeleton.Points[i].Position, at) {
			return &p.skeleton.Points[i]
		}
	}
	return nil
}

// eigenvectors returns the real eigenvectors of tau's Jacobian at a place, as unit vectors in space: of the critical point
// there, or by the fit.
func eigenvectors(f *field.Field, q *topology.Point, loc field.Loc) []r3.Vec {
	var j, values [2][2]float64
	var frame [2]r3.Vec
	if q != nil {
		j, values, frame = q.Jacobian, q.Eigenvalues, q.Frame
	} else {
		s := topology.SlopeAt(f, loc)
		j, values, frame = s.Jacobian, s.Eigenvalues, s.Frame
	}
	var out []r3.Vec
	for _, value := range values {
		if value[1] != 0 {
			return nil
		}
		// A column of J - other eigenvalue is an eigenvector; the longer of the two rows' perpendiculars is the safe one.
		a := r3.Vec2{X: -j[0][1], Y: j[0][0] - value[0]}
		b := r3.Vec2{X: j[1][1] - value[0], Y: -j[1][0]}
		if math.Hypot(b.X, b.Y) > math.Hypot(a.X, a.Y) {
			a = b
		}
		if n := math.Hypot(a.X, a.Y); n > 0 {
			out = append(out, frame[0].Scale(a.X/n).AddScaled(a.Y/n, frame[1]))
		}
	}
	return out
}
