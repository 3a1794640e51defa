package topology

import (
	"context"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// ridgeCell is the piece of a ridge in one triangle: along the flow from edge in to edge out. Kind is NoKind where the
// triangle has none.
type ridgeCell struct {
	kind    Kind
	in, out int8
}

// The local criterion (Kenwright, Henze and Levit 1999, from memory): tau is parallel to an eigenvector of its own gradient,
// so that the streamline is straight, and neighbours come closer, or part, faster than the flow along it slows or grows.
const (
	// dominance is by which factor the rate across must exceed one along the line that has the same sign: where both are
	// alike, as at a star node, every streamline meets the criterion.
	dominance = 1.5
	// sharpness is the share of the change of turning across the line that the rates demand for a straight line which
	// collects its neighbours, across (across - along)/|tau|: less is noise of a turning that is nought all around.
	sharpness = 0.25
	// ridgeTilt is the cosine of the largest angle between a ridge and the flow on it, 40 degrees: a line that the flow
	// crosses collects nothing.
	ridgeTilt = 0.766
)

// findRidges applies the criterion to every triangle.
func (b *builder) findRidges(ctx context.Context) ([]ridgeCell, error) {
	cells := make([]ridgeCell, len(b.f.Tris))
	err := inBlocks(ctx, len(cells), faceBlock, func(from, to int) {
		for t := from; t < to; t++ {
			cells[t] = b.ridgeIn(int32(t))
		}
	})
	return cells, err
}

func (b *builder) ridgeIn(t int32) ridgeCell {
	v := b.f.Tris[t]
	var turn [3]float64
	for k := range v {
		turn[k] = b.rates.turn[v[k]]
		if b.f.IsZero(v[k]) {
			return ridgeCell{}
		}
	}
	var edges [2]int8
	n := 0
	for k := range 3 {
		if (turn[k] >= 0) != (turn[(k+1)%3] >= 0) && n < 2 {
			edges[n] = int8(k)
			n++
		}
	}
	if n < 2 {
		return ridgeCell{}
	}
	p, q := crossingAt(turn, edges[0]), crossingAt(turn, edges[1])
	mid := field.Loc{Tri: t}
	for k := range 3 {
		mid.Bary[k] = (p[k] + q[k]) / 2
	}
	across, along := b.rates.at(b.rates.across, mid), b.rates.at(b.rates.along, mid)
	var kind Kind
	switch {
	case across < math.Min(0, dominance*along):
		kind = SeparationLine
	case across > math.Max(0, dominance*along):
		kind = AttachmentLine
	default:
		return ridgeCell{}
	}
	// The slope of turning to the left of the flow, and the direction of the piece.
	corner := b.f.Flat(t)
	tau := b.f.At(mid).Tau
	size := tau.Norm()
	var slope, way r3.Vec2
	twice := corner[1].Sub(corner[0]).Cross(corner[2].Sub(corner[0]))
	for k := range 3 {
		slope = slope.AddScaled(turn[k]/twice, corner[(k+2)%3].Sub(corner[(k+1)%3]).Left())
		way = way.AddScaled(q[k]-p[k], corner[k])
	}
	if slope.Dot(tau.Left()) < float64(sharpness*across)*(across-along) || size == 0 {
		return ridgeCell{}
	}
	forward := way.Dot(tau)
	if math.Abs(forward) < float64(ridgeTilt*size)*way.Norm() {
		return ridgeCell{}
	}
	if forward < 0 {
		edges[0], edges[1] = edges[1], edges[0]
	}
	return ridgeCell{kind, edges[0], edges[1]}
}

// crossingAt returns the place on edge k at which x, given at the corners, is zero.
func crossingAt(x [3]float64, k int8) [3]float64 {
	a, c := x[k], x[(k+1)%3]
	return onEdge(int32(k), a/(a-c))
}

// ridge is a chain of pieces along the flow.
type ridge struct {
	kind     Kind
	tris     []int32
	length   float64
	exponent float64 // power of e by which neighbours come closer, or part, along it
}

// joinRidges joins the pieces of neighbouring triangles to chains, each along the flow, in the order of their first
// triangles' numbers.
func (b *builder) joinRidges(cells []ridgeCell) []ridge {
	f := b.f
	// next returns the triangle in which the piece of t goes on, before the one that goes on in t; -1 for none.
	next := func(t int32) int32 {
		g := f.Twin[3*t+int32(cells[t].out)]
		if g < 0 || cells[g/3].kind != cells[t].kind || int32(cells[g/3].in) != g%3 {
			return -1
		}
		return g / 3
	}
	before := func(t int32) int32 {
		g := f.Twin[3*t+int32(cells[t].in)]
		if g < 0 || cells[g/3].kind != cells[t].kind || int32(cells[g/3].out) != g%3 {
			return -1
		}
		return g / 3
	}
	done := make([]bool, len(cells))
	var out []ridge
	for t := range int32(len(cells)) {
		if done[t] || cells[t].kind == NoKind {
			continue
		}
		first := t
		for p := before(first); p >= 0 && p != t; p = before(first) {
			first = p
		}
		r := ridge{kind: cells[t].kind}
		for p := first; p >= 0 && !done[p]; p = next(p) {
			done[p] = true
			r.tris = append(r.tris, p)
			l := field.Loc{Tri: p, Bary: [3]float64{1. / 3, 1. / 3, 1. / 3}}
			c := f.Corner(p)
			ds := c.At(onEdge(int32(cells[p].in), 0.5)).Sub(c.At(onEdge(int32(cells[p].out), 0.5))).Norm()
			r.length += ds
			r.exponent += float64(math.Abs(b.rates.relative(l)) * ds)
		}
		out = append(out, r)
	}
	return out
}
