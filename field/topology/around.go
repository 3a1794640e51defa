package topology

import (
	"iter"
	"slices"

	"shearprint/field"
	"shearprint/field/r3"
)

// Limits of the neighbourhood of a point.
const (
	fitRings   = 2             // vertices within two edges of the triangle's corners take part in the fit
	mostRings  = 4             // as far as the neighbourhood grows when there are too few samples
	fewSamples = 12            // twice the coefficients of a quadratic
	mostFaces  = 200           // enough for any decent mesh; a hub with thousands of triangles stops here
	mostNear   = 8 * mostFaces // names of triangles: each has three vertices, and comes up for each of them
	creaseTilt = 0.6           // angle between neighbouring triangles from which their edge is a crease [rad], about 35 degrees:
	// coarse spheres of 300 triangles stay at half of it, roofs and steps are above
)

// around collects what lies around a critical point. One belongs to one goroutine and serves many points.
type around struct {
	f        *field.Field
	stamp    int32
	distance []int32 // stamp*16 + edges from the base, per vertex
	seen     []int32 // stamp, per triangle
	creased  []int32 // stamp, per vertex

	faces    []int32 // of the patch, the base triangle first
	vertices []int32 // corners of faces
	crease   bool    // a crease runs through the patch
}

func newAround(f *field.Field) *around {
	return &around{f: f, distance: make([]int32, len(f.Points)), seen: make([]int32, len(f.Tris)),
		creased: make([]int32, len(f.Points))}
}

const distanceSteps = 16 // above mostRings

// gather collects the triangles within the given number of edges around the given ones that can be reached without
// crossing a crease, and their vertices.
func (a *around) gather(rings int32, tris ...int32) {
	f := a.f
	a.stamp++
	a.measure(tris, rings)
	a.faces = append(a.faces[:0], tris...)
	a.vertices = a.vertices[:0]
	a.crease = false
	for _, t := range tris {
		a.seen[t] = a.stamp
	}
	base := a.stamp * distanceSteps
	for i := 0; i < len(a.faces); i++ {
		n := f.Corner(a.faces[i]).Normal().Unit()
		for k := range int32(3) {
			h := 3*a.faces[i] + k
			g := f.Twin[h]
			if g < 0 {
				continue
			}
			if isCrease(n, f.Corner(g/3).Normal().Unit()) {
				a.crease = true
				a.creased[f.Tail(h)], a.creased[f.Tip(h)] = a.stamp, a.stamp
				continue
			}
			if a.seen[g/3] == a.stamp || len(a.faces) >= mostFaces {
				continue
			}
			// A triangle belongs to the patch if one of its corners is nearer than the outermost ring.
			for _, v := range f.Tris[g/3] {
				if d := a.distance[v] - base; d >= 0 && d < rings {
					a.seen[g/3] = a.stamp
					a.faces = append(a.faces, g/3)
					break
				}
			}
		}
	}
	for _, t := range a.faces {
		a.vertices = append(a.vertices, f.Tris[t][:]...)
	}
	slices.Sort(a.vertices)
	a.vertices = slices.Compact(a.vertices)
}

func isCrease(n, m r3.Vec) bool {
	_, c := r3.SinCos(creaseTilt)
	return n.Dot(m) < c
}

// near runs over the triangles that touch a vertex within the given number of edges of the corners of tris, nearer
// vertices first, and may name a triangle more than once. It crosses creases.
func (a *around) near(rings int32, tris ...int32) iter.Seq[int32] {
	return func(yield func(int32) bool) {
		a.stamp++
		left := mostNear
		for _, v := range a.measure(tris, rings) {
			for h := range a.f.Fan(v) {
				if left--; left < 0 || !yield(h/3) {
					return
				}
			}
		}
	}
}

// measure finds the vertices within the given number of edges of the corners of tris, nearer ones first.
func (a *around) measure(tris []int32, rings int32) []int32 {
	f := a.f
	base := a.stamp * distanceSteps
	var list []int32
	for _, t := range tris {
		for _, v := range f.Tris[t] {
			if a.distance[v] < base {
				a.distance[v] = base
				list = append(list, v)
			}
		}
	}
	for i := 0; i < len(list) && len(list) < mostFaces; i++ {
		v := list[i]
		d := a.distance[v] + 1
		if d-base > rings {
			break
		}
		reach := func(w int32) {
			if a.distance[w] < base && len(list) < mostFaces {
				a.distance[w] = d
				list = append(list, w)
			}
		}
		for h := range f.Fan(v) {
			if len(list) >= mostFaces {
				break
			}
			reach(f.Tip(h))
			reach(f.Tail(field.Prev(h)))
		}
	}
	return list
}

// clean lists the vertices of the patch that lie on no crease: the others mix the vectors of both sides.
func (a *around) clean() []int32 {
	out := a.vertices[:0:0]
	for _, v := range a.vertices {
		if a.creased[v] != a.stamp {
			out = append(out, v)
		}
	}
	return out
}

// meanEdge returns the mean length of the edges of triangle t and its neighbours.
func (a *around) meanEdge(t int32) float64 {
	sum, n := 0.0, 0
	add := func(t int32) {
		for k := range int32(3) {
			sum += a.f.EdgeLength(3*t + k)
			n++
		}
	}
	add(t)
	for k := range int32(3) {
		if g := a.f.Twin[3*t+k]; g >= 0 {
			add(g / 3)
		}
	}
	return sum / float64(n)
}
