package topology

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// Tolerances of rims.
const (
	// tangencyBand is how far tau must turn beyond a tangent direction to count as having passed it [rad]: two degrees,
	// which noise along a rim in the stream's direction stays within.
	tangencyBand = math.Pi / 90
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

// reversal is a rim edge in a symmetry plane along which tau turns round: its half-edge and the sign of the half turn.
type reversal struct {
	h    int32
	sign int
}

// rimReading is what one rim says.
type rimReading struct {
	RimLedger
	// reversals along the rim's symmetric stretches, in the order of its edges.
	reversals []reversal
	// plane tells, per edge of the rim, its stretch in stretches; -1 for none.
	plane     []int
	stretches []stretch
}

// stretch is a run of rim edges in a symmetry plane.
type stretch struct {
	first, count int // edges of the rim, cyclic
	normal       r3.Vec
	origin       r3.Vec
}

// readRims finds the symmetric stretches of all rims, gives the vertices there the direction along the rim and the zero
// vertices of rims a stand-in, and then counts.
func (u *turner) readRims() []rimReading {
	readings := make([]rimReading, len(u.f.Rims))
	for i := range readings {
		r := &readings[i]
		r.Rim = i
		r.findStretches(u.f, u.f.Rims[i].Edges)
	}
	for i := range readings {
		u.standIns(&readings[i], u.f.Rims[i].Edges)
	}
	for i := range readings {
		u.countRim(&readings[i], u.f.Rims[i].Edges)
	}
	return readings
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

// forward returns the direction along the rim at its vertex v, halfway between the two edges there, in v's chart.
func forward(m *field.Mesh, v int32) float64 { return (m.Total(v) - math.Pi) / 2 }

// ahead tells whether tau at rim vertex v points along the rim rather than against it.
func (u *turner) ahead(v int32) bool {
	_, c := r3.SinCos(u.angle[v] - forward(u.f.Mesh, v))
	return c >= 0
}

// standIns directs tau along the rim on symmetric stretches, and gives zero vertices a direction: on a stretch that of
// the vertex before, elsewhere the mean of what the neighbours bring, and the rim's own where they bring none.
func (u *turner) standIns(r *rimReading, edges []int32) {
	f, n := u.f, len(edges)
	for i, h := range edges {
		if v := f.Tail(h); f.IsZero(v) && (r.plane[i] < 0 || r.plane[(i+n-1)%n] != r.plane[i]) {
			u.angle[v] = u.meanAround(v)
		}
	}
	for id, s := range r.stretches {
		known := -1 // the first vertex of the stretch that is not zero
		for k := range s.count {
			if !f.IsZero(f.Tail(edges[(s.first+k)%n])) {
				known = k
				break
			}
		}
		if known < 0 {
			continue
		}
		last := u.ahead(f.Tail(edges[(s.first+known)%n]))
		for k := range s.count {
			i := (s.first + k) % n
			v := f.Tail(edges[i])
			if !f.IsZero(v) {
				last = u.ahead(v)
			}
			if r.plane[(i+n-1)%n] != id { // the corner at which the stretch begins keeps its own direction
				continue
			}
			u.angle[v] = forward(f.Mesh, v)
			if !last {
				u.angle[v] += math.Pi
			}
		}
	}
}

// meanAround returns the direction that the non-zero neighbours of zero vertex v bring to it along the edges. Where they
// cancel, tau turns round along the rim, and it does so over the side to which it points at the neighbours on the rim: it
// keeps crossing the rim. Where nothing is brought the rim's own direction has to do.
func (u *turner) meanAround(v int32) float64 {
	f := u.f
	var sum r3.Vec2
	inward := 0.0
	add := func(w int32, angle float64) {
		if f.IsZero(w) {
			return
		}
		sum = sum.Add(r3.Polar(1, angle))
		if f.OnRim(w) {
			s, _ := r3.SinCos(u.angle[w] - forward(f.Mesh, w))
			inward += s
		}
	}
	for h := range f.Fan(v) {
		add(f.Tip(h), u.angle[f.Tip(h)]-f.Transport(h))
		if p := field.Prev(h); f.Twin[p] < 0 { // the last edge of the fan has only this half-edge
			add(f.Tail(p), u.angle[f.Tail(p)]+f.Transport(p))
		}
	}
	const cancelled = 1e-9 // of unit vectors: what rounding leaves of a sum that is zero
	switch {
	case sum.Norm() > cancelled:
		return sum.Angle()
	case inward > cancelled:
		return forward(f.Mesh, v) + math.Pi/2
	case inward < -cancelled:
		return forward(f.Mesh, v) - math.Pi/2
	}
	return forward(f.Mesh, v)
}

// countRim finds the reversals, the exact term and the tangencies of one rim.
//
// With theta the angle of tau from the rim's direction, the term is the turn of theta around the whole rim over 2 pi.
// Theta grows through a multiple of pi where the streamline touches the rim from inside, and falls through one where it
// touches from outside. A reversal on a symmetry plane turns theta by half a turn, to a side that chance decides; it is
// counted by its half point instead and taken out here.
func (u *turner) countRim(r *rimReading, edges []int32) {
	f, n := u.f, len(edges)
	theta := make([]float64, 0, 2*n+1) // after each corner and each edge
	x := r3.Wrap(u.angle[f.Tail(edges[0])])
	theta = append(theta, x)
	turned := 0.0 // sum of the turns less the corners
	for i, h := range edges {
		w := u.turn(h)
		if sign := u.reverses(r, edges, i, w); sign != 0 {
			r.reversals = append(r.reversals, reversal{h, sign})
			w -= float64(float64(sign) * math.Pi)
		}
		corner := math.Pi - f.Total(f.Tip(h))
		x += w
		theta = append(theta, x)
		x -= corner
		theta = append(theta, x)
		turned += w - corner
	}
	r.Reversals = len(r.reversals)
	r.Term = math.Round(turned/math.Pi) / 2 // a whole number of half turns
	r.countTangencies(theta)
	long := 0.0
	all := 0.0
	for i, h := range edges {
		e := f.EdgeLength(h)
		all += e
		if r.plane[i] >= 0 {
			long += e
		}
	}
	r.Symmetric = long / all
}

// reverses returns the sign of the half turn that tau makes along edge i of the rim, in a symmetric stretch; 0 if it
// makes none.
func (u *turner) reverses(r *rimReading, edges []int32, i int, w float64) int {
	if r.plane[i] < 0 {
		return 0
	}
	h := edges[i]
	a := u.angle[u.f.Tail(h)]                   // from the edge's own direction, chart angle 0 here
	b := u.angle[u.f.Tip(h)] - u.f.Transport(h) // and 0 here too, after transport
	_, ca := r3.SinCos(a)
	_, cb := r3.SinCos(b)
	switch {
	case (ca >= 0) == (cb >= 0):
		return 0
	case w < 0:
		return -1
	}
	return 1
}

// countTangencies follows theta around the rim and counts the multiples of pi that it passes, beginning where tau is
// farthest from tangent.
func (r *rimReading) countTangencies(theta []float64) {
	n := len(theta) - 1 // the last is the first again, up to whole turns
	start, best := 0, -1.0
	for i := range n {
		s, _ := r3.SinCos(theta[i])
		if s = math.Abs(s); s > best {
			start, best = i, s
		}
	}
	band, _ := r3.SinCos(tangencyBand)
	if best <= band {
		r.Streamline = true
		return
	}
	region := math.Floor(theta[start] / math.Pi)
	for k := 1; k <= n; k++ {
		i := start + k
		x := 0.0
		if i > n {
			x = theta[n] - theta[0]
			i -= n
		}
		x += theta[i]
		in := math.Floor(x / math.Pi)
		if d := x - float64(in*math.Pi); d < tangencyBand || d > math.Pi-tangencyBand {
			continue
		}
		if in > region {
			r.Interior += int(in - region)
		} else {
			r.Exterior += int(region - in)
		}
		region = in
	}
}
