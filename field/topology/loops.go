package topology

import (
	"errors"
	"fmt"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// Loop is the reading of tau along a closed way on the surface.
type Loop struct {
	Locs   []field.Loc // the way, from the first point to itself: the given points and the crossings of edges
	Length float64
	// Turn is the angle by which tau turns along the loop against the parallel transport along it [rad]; Curvature what
	// the surface on the left of the loop turns a transported vector by, rims in it included.
	Turn, Curvature float64
	// Index is (Turn + Curvature)/2 pi where the loop bounds a region on its left: the sum of the indices in there.
	Index float64
	// Bounds tells whether the loop bounds a region on its left. It does not if it crosses itself or runs once around a
	// handle; then only Turn has a meaning.
	Bounds bool
	// Inside holds the numbers in Skeleton.Points of the points in the region, IndexSum the sum of their indices, half
	// points counted one half.
	Inside   []int
	IndexSum float64
	// Accounts tells whether the points inside account for the index.
	Accounts bool
	// Hodograph holds tau along the loop.
	Hodograph []Hodograph
	// Tris lists the triangles that lie in the region as a whole, ascending.
	Tris []int32
	// Moved is the largest distance by which a given point was moved to the surface.
	Moved float64
	Note  string // what is doubtful about the reading
}

// Hodograph is tau at one place of a loop.
type Hodograph struct {
	S     float64 // arc length from the loop's first point
	Angle float64 // of tau from its direction at the first point, against parallel transport, continuous [rad]
	Size  float64 // |tau|
}

// farOff is the distance of a loop's point from the surface, as a share of the run's diagonal, that is worth a word:
// points read off a drawing are nearer.
const farOff = 0.01

// Loop walks from point to point, along the surface and back to the first, and reads how tau turns. The points are
// moved to the nearest places of the surface. Counter-clockwise loops, seen from the fluid, have their region on the
// left. The error says why there is no such loop.
func (s *Skeleton) Loop(through []r3.Vec) (*Loop, error) {
	if len(through) < 3 {
		return nil, errors.New("a loop takes at least three points")
	}
	l := &Loop{}
	places := make([]field.Loc, len(through))
	for i, p := range through {
		if !p.Finite() {
			return nil, fmt.Errorf("point %d of the loop is not a place", i+1)
		}
		loc, distance := s.Field.Nearest(p)
		places[i] = inside(loc)
		l.Moved = math.Max(l.Moved, distance)
	}
	var legs []leg
	for i, a := range places {
		way, err := walk(s.Field.Mesh, a, places[(i+1)%len(places)])
		if err != nil {
			return nil, err
		}
		legs = append(legs, way...)
	}
	s.hodograph(l, legs)
	s.region(l, legs)
	if l.Note == "" && l.Moved > float64(farOff*s.Field.Diagonal()) {
		l.Note = fmt.Sprintf("a point of the loop was %.3g away from the surface", l.Moved)
	}
	return l, nil
}

// hodograph follows tau along the legs.
func (s *Skeleton) hodograph(l *Loop, legs []leg) {
	f := s.Field
	angle, length := 0.0, 0.0
	add := func(g leg, bary [3]float64, tau r3.Vec2) {
		l.Locs = append(l.Locs, field.Loc{Tri: g.tri, Bary: bary})
		l.Hodograph = append(l.Hodograph, Hodograph{S: length, Angle: angle, Size: tau.Norm()})
	}
	zero := false
	for i, g := range legs {
		corners, flat := f.CornerTau(g.tri), f.Flat(g.tri)
		a, b := mix(corners, g.from), mix(corners, g.to)
		if i == 0 {
			add(g, g.from, a)
		}
		zero = zero || a == (r3.Vec2{}) || b == (r3.Vec2{})
		// Along a straight leg a linear field turns by less than pi.
		angle += r3.Wrap(b.Angle() - a.Angle())
		length += mix(flat, g.to).Sub(mix(flat, g.from)).Norm()
		if h := g.out.h; h >= 0 {
			// The triangle beyond an edge sees the same vector up to the angle defect of the edge's ends, which must not be
			// lost: directions are compared with the edge's own.
			twin := f.Twin[h]
			beyond := mix(f.CornerTau(twin/3), onEdge(twin, 1-g.out.t))
			here, there := b.Angle()-edgeAngle(flat, h), beyond.Angle()-edgeAngle(f.Flat(twin/3), twin)-math.Pi
			angle += r3.Wrap(there - here)
		}
		add(g, g.to, b)
	}
	l.Turn, l.Length = angle, length
	if zero {
		l.Note = "the loop runs through a zero of tau, where no direction can be followed; move it"
	}
}

// mix returns the weighted mean of a triangle's three vectors.
func mix(v [3]r3.Vec2, bary [3]float64) r3.Vec2 {
	return v[0].Scale(bary[0]).AddScaled(bary[1], v[1]).AddScaled(bary[2], v[2])
}

// edgeAngle returns the direction of half-edge h in its triangle's flat frame.
func edgeAngle(flat [3]r3.Vec2, h int32) float64 {
	return flat[field.Next(h)%3].Sub(flat[h%3]).Angle()
}
