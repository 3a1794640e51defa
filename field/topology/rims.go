package topology

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
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

// meanAround returns the direction that the non-zero neighbours of zero vertex v bring to it along the edges. Where
// they cancel, tau turns round along the rim, and it does so over the side to which it points at the neighbours on the
// rim: it keeps crossing the rim. Where nothing is brought the rim's own direction has to do.
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
