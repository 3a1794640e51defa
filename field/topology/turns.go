package topology

import (
	"context"
	"math"
	"runtime"
	"sync"

	"shearprint/field"
	"shearprint/field/r3"
)

// turner measures how tau turns along edges.
type turner struct {
	f *field.Field
	// angle is the direction of tau in the chart of each vertex: the field's, but for stand-ins on rims.
	angle []float64
}

// antiparallel is how close to pi a rotation along an edge may come before its sign is taken for chance [rad]. Data in
// single precision direct their vectors to 6e-8.
const antiparallel = 1e-6

// turn returns the angle in [-pi, pi] by which tau turns along half-edge h, against parallel transport. It is computed
// from the half-edge with the lower vertex number first, so that the two half-edges of an edge give opposite numbers,
// to the last bit, and cancel in sums.
func (u *turner) turn(h int32) float64 {
	f := u.f
	a, b := f.Tail(h), f.Tip(h)
	if g := f.Twin[h]; g >= 0 && b < a {
		return -r3.Wrap(u.angle[a] - u.angle[b] - f.Transport(g))
	}
	return r3.Wrap(u.angle[b] - u.angle[a] - f.Transport(h))
}

// faceIndex returns the index of triangle t: the turns along its edges plus its curvature, over 2 pi. The residue is
// what rounding leaves of the sum.
func (u *turner) faceIndex(t int32) (index int, residue float64) {
	sum := (u.turn(3*t) + u.turn(3*t+1) + u.turn(3*t+2) + u.f.Curvature(t)) / (2 * math.Pi)
	n := math.Round(sum)
	return int(n), math.Abs(sum - n)
}

// least returns the least |tau| along half-edge h, where tau is linear between its ends in a frame carried along, as a
// share of scale.
func (u *turner) least(h int32, scale float64) float64 {
	a, b := u.f.Size(u.f.Tail(h))/scale, u.f.Size(u.f.Tip(h))/scale
	if a == 0 || b == 0 {
		return 0
	}
	s, c := r3.SinCos(u.turn(h))
	p := float64(float64(a*b) * c)
	aa, bb := float64(a*a), float64(b*b)
	switch {
	case aa <= p:
		return a
	case bb <= p:
		return b
	}
	// The height of the triangle that both vectors span, over their difference.
	return float64(float64(a*b)*math.Abs(s)) / math.Sqrt(aa+bb-float64(2*p))
}

// inBlocks runs work over [0, n) in blocks of the given size on all processors and stops between blocks once ctx is
// done. Blocks must not depend on one another.
func inBlocks(ctx context.Context, n, size int, work func(from, to int)) error {
	count := (n + size - 1) / size
	next := make(chan int)
	var wg sync.WaitGroup
	for range min(runtime.GOMAXPROCS(0), count) {
		wg.Go(func() {
			for b := range next {
				work(b*size, min(n, (b+1)*size))
			}
		})
	}
	for b := 0; b < count && ctx.Err() == nil; b++ {
		next <- b
	}
	close(next)
	wg.Wait()
	return ctx.Err()
}
