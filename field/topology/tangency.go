package topology

import (
	"math"

	"shearprint/field/r3"
)

// tangencyBand is how far tau must turn beyond a tangent direction to count as having passed it [rad]: two degrees,
// which noise along a rim in the stream's direction stays within.
const tangencyBand = math.Pi / 90

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
