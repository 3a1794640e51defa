package topology

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// Tolerances of stretches.
const (
	// stretchBreak is the angle between the conormals of successive rim edges that ends a stretch [rad]. On a symmetry
	// plane the conormals differ by the tilt of the triangles only; corners of domains turn by far more.
	stretchBreak = math.Pi / 9
	// stretchPlanar is how far the vertices of a stretch may lie off its plane, as a share of its length: single
	// precision leaves 1e-7, mesh generators 1e-6.
	stretchPlanar = 1e-4
	// stretchAlong is the share of tau that may point across the plane of symmetry, in the mean square over the stretch.
	// Face data averaged to vertices carry v_y dy/3 there, one or two hundredths of |tau| on meshes of use.
	stretchAlong = 0.05
	// stretchEdges is the least number of edges of a stretch: fewer are in one plane by chance.
	stretchEdges = 4
)

// stretch is a run of rim edges in a symmetry plane.
type stretch struct {
	first, count int // edges of the rim, cyclic
	normal       r3.Vec
	origin       r3.Vec
}

// conormal returns the unit vector in the triangle's plane that points out of the surface across rim half-edge h.
func conormal(m *field.Mesh, h int32) r3.Vec {
	e := m.Points[m.Tip(h)].Sub(m.Points[m.Tail(h)])
	return e.Cross(m.Corner(h / 3).Normal().Unit()).Unit()
}

// findStretches cuts the rim where its conormal turns, and keeps the planar runs along which tau runs.
func (r *rimReading) findStretches(f *field.Field, edges []int32) {
	n := len(edges)
	r.plane = make([]int, n)
	nu := make([]r3.Vec, n)
	for i, h := range edges {
		r.plane[i] = -1
		nu[i] = conormal(f.Mesh, h)
	}
	_, limit := r3.SinCos(stretchBreak)
	breaks := func(i int) bool { return nu[i].Dot(nu[(i+n-1)%n]) < limit }
	start := 0
	for start < n && !breaks(start) {
		start++
	}
	if start == n { // a smooth loop: one stretch or none
		start = 0
	}
	for i := 0; i < n; {
		s := stretch{first: (start + i) % n, count: 1}
		for i+s.count < n && !breaks((start+i+s.count)%n) {
			s.count++
		}
		i += s.count
		if s.symmetric(f, edges, nu) {
			for k := range s.count {
				r.plane[(s.first+k)%n] = len(r.stretches)
			}
			r.stretches = append(r.stretches, s)
		}
	}
}

// symmetric finds the plane of the stretch and tells whether tau runs along it.
func (s *stretch) symmetric(f *field.Field, edges []int32, nu []r3.Vec) bool {
	n := len(edges)
	if s.count < stretchEdges {
		return false
	}
	var sum r3.Vec
	length := 0.0
	for k := range s.count {
		h := edges[(s.first+k)%n]
		e := f.EdgeLength(h)
		sum = sum.AddScaled(e, nu[(s.first+k)%n])
		length += e
	}
	_, limit := r3.SinCos(stretchBreak)
	if !(sum.Norm() >= float64(limit*length)) {
		return false
	}
	vertices := make([]int32, 0, s.count+1)
	for k := range s.count {
		vertices = append(vertices, f.Tail(edges[(s.first+k)%n]))
	}
	vertices = append(vertices, f.Tip(edges[(s.first+s.count-1)%n]))
	s.fitPlane(f, vertices, sum.Unit(), length)
	across, all := 0.0, 0.0
	for _, v := range vertices {
		if d := f.Points[v].Sub(s.origin).Dot(s.normal); math.Abs(d) > float64(stretchPlanar*length) {
			return false
		}
		if !f.IsZero(v) {
			w := f.Size(v) / f.MaxTau
			c := f.Tau3[v].Unit().Dot(s.normal)
			across += float64(float64(w*w) * float64(c*c))
			all += float64(w * w)
		}
	}
	return all > 0 && across <= float64(stretchAlong*stretchAlong*all)
}

// fitPlane lays the plane through the first vertex, the one farthest from it, and the one farthest from their line.
// Where the stretch is straight, the mean conormal nu decides.
func (s *stretch) fitPlane(f *field.Field, vertices []int32, nu r3.Vec, length float64) {
	s.origin = f.Points[vertices[0]]
	farthest := func(axis r3.Vec) (r3.Vec, float64) {
		var best r3.Vec
		most := -1.0
		for _, v := range vertices {
			d := f.Points[v].Sub(s.origin)
			if off := d.Reject(axis).Norm(); off > most {
				best, most = d, off
			}
		}
		return best, most
	}
	along, _ := farthest(r3.Vec{})
	along = along.Unit()
	const bent = 1e-2 // of the length: less does not define a plane against stretchPlanar
	s.normal = nu.Reject(along).Unit()
	if side, off := farthest(along); off > float64(bent*length) {
		n := along.Cross(side).Unit()
		if n.Dot(nu) < 0 {
			n = n.Scale(-1)
		}
		s.normal = n
	}
}
