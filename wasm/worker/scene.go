//go:build js && wasm

package main

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/topology"
	"shearprint/render"
	"shearprint/wasm/session"
)

// sceneOf returns the scene of the present view. The page has a key of its own.
func (p *painter) sceneOf() *render.Scene {
	v := &p.view
	var points []*topology.Point
	if p.skeleton != nil && v.Points {
		points = p.visiblePoints()
	}
	s := v.Scene(p.field, p.skeleton, points)
	s.Scale, s.Bare = p.size.Ratio, true
	s.Animate = v.Motion && v.Flow == "texture"
	if v.Flow == "lines" {
		s.Streamlines = p.streamlines()
	}
	return s
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

// skeletonPoint returns the critical point at a place; nil for none.
func (p *painter) skeletonPoint(at r3.Vec) *topology.Point {
	if p.skeleton == nil {
		return nil
	}
	for i := range p.skeleton.Points {
		if session.Same(p.skeleton.Points[i].Position, at) {
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
