package topology

import (
	"context"
	"math"
)

// spring is the system of equations of angles at vertices that are held together by springs along edges: the angle x of each
// makes the sum over its edges of (x - x of the neighbour - turn) zero. Neighbours outside stay where they are.
type spring struct {
	vertices  []int32
	start     []int32 // per vertex, where its neighbours begin; one more at the end
	neighbour []int32 // their numbers; outer ones are left out
	diagonal  []float64
	rhs       []float64
	x         []float64
}

const (
	// mostRelaxations and mostWork bound the steps of the solution, and steps times vertices. Any angles will do, the
	// solution are the most even ones: after so many steps a region is even on the scale of as many edges.
	mostRelaxations = 400
	mostWork        = 1e8
	// relaxed is the sum of squares per vertex [rad2] that may be left of the equations.
	relaxed = 1e-12
)

func (s *spring) reset() {
	s.start, s.neighbour = append(s.start[:0], 0), s.neighbour[:0]
	s.diagonal, s.rhs = s.diagonal[:0], s.rhs[:0]
}

// add notes the next edge of the row at work: to the vertex with the number to, or to one outside (negative), along which
// tau turns.
func (s *spring) add(to int32, turn float64) {
	row := len(s.start) - 1
	if row == len(s.rhs) {
		s.diagonal, s.rhs = append(s.diagonal, 0), append(s.rhs, 0)
	}
	s.diagonal[row]++
	s.rhs[row] += turn
	if to >= 0 {
		s.neighbour = append(s.neighbour, to)
	}
}

func (s *spring) endRow() { s.start = append(s.start, int32(len(s.neighbour))) }

// solve finds x by conjugate gradients, with the diagonal as preconditioner (Hestenes and Stiefel 1952). It returns early, with
// angles less even, once ctx is done.
func (s *spring) solve(ctx context.Context) {
	n := len(s.rhs)
	buffer := make([]float64, 4*n)
	x, r, d, q := buffer[:n:n], buffer[n:2*n:2*n], buffer[2*n:3*n:3*n], buffer[3*n:]
	s.x = x
	copy(r, s.rhs)
	rho := 0.0
	for i := range r {
		d[i] = r[i] / s.diagonal[i]
		rho += float64(r[i] * d[i])
	}
	for range min(mostRelaxations, mostWork/max(n, 1)) {
		if !(rho > relaxed*float64(n)) || ctx.Err() != nil {
			return
		}
		curvature := 0.0
		for i := range q {
			y := float64(s.diagonal[i] * d[i])
			for _, k := range s.neighbour[s.start[i]:s.start[i+1]] {
				y -= d[k]
			}
			q[i] = y
			curvature += float64(d[i] * y)
		}
		if !(curvature > 0) { // nothing holds the angles from outside, and they are even
			return
		}
		a := rho / curvature
		next := 0.0
		for i := range x {
			x[i] += float64(a * d[i])
			r[i] -= float64(a * q[i])
			next += float64(r[i]*r[i]) / s.diagonal[i]
		}
		b := next / rho
		for i := range d {
			d[i] = r[i]/s.diagonal[i] + float64(b*d[i])
		}
		rho = next
		if math.IsInf(rho, 0) {
			return
		}
	}
}
