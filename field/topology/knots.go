package topology

import (
	"context"
	"math"
	"slices"
	"sync"

	"shearprint/field"
	"shearprint/field/r3"
)

// Tolerances of knots.
const (
	// mostKnot is the largest number of points that a zero of second order is taken apart into: the linear field makes two
	// of it, or three and one more to balance. Noise makes many.
	mostKnot = 6
	// knotShare is the slope, and the value, that may be left at a zero of second order, as a share of what the second
	// derivatives add over one edge: two zeros of a quadratic field closer than an edge leave this much.
	knotShare = 0.25
)

// knot is a possible zero of second order.
type knot struct {
	members []int32 // seeds
	tris    []int32
	index   int
	loc     field.Loc
}

// joinKnots joins points with an index sum of +2 or -2 (or beyond) within an edge of one another to one point, where a
// fit has a place without slope and value: a monkey saddle or a dipole, which the linear field in triangles can show
// only as several points with arbitrary slopes.
func (c *count) joinKnots(ctx context.Context) error {
	owner := make([]int32, len(c.f.Tris)) // seed of each triangle, from 1; 0 for those that take no part
	for i, s := range c.seeds {
		if len(s.tris) == 1 && !s.half {
			owner[s.tris[0]] = int32(i + 1)
		}
	}
	knots := make([]*knot, len(c.seeds))
	pool := sync.Pool{New: func() any { return c.placer(nil) }}
	err := inBlocks(ctx, len(c.seeds), pointBlock, func(from, to int) {
		p := pool.Get().(*placer)
		for i := from; i < to; i++ {
			knots[i] = p.knotAround(int32(i), owner)
		}
		pool.Put(p)
	})
	if err != nil {
		return err
	}
	gone := make([]bool, len(c.seeds))
	for i, k := range knots {
		if k == nil || slices.ContainsFunc(k.members, func(m int32) bool { return gone[m] }) {
			continue
		}
		for _, m := range k.members {
			gone[m] = true
			c.set.union(k.tris[0], c.seeds[m].tris[0])
		}
		gone[i] = false
		c.seeds[i] = seed{tris: k.tris, index: k.index, rimEdge: -1, knot: &k.loc}
	}
	kept := c.seeds[:0]
	for i, s := range c.seeds {
		if !gone[i] {
			kept = append(kept, s)
		}
	}
	c.seeds = kept
	return nil
}

// knotAround returns the knot that seed i is part of; nil if there is none.
func (p *placer) knotAround(i int32, owner []int32) *knot {
	seeds := p.c.seeds
	if owner[seeds[i].tris[0]] == 0 {
		return nil
	}
	k := &knot{}
	for t := range p.near(1, seeds[i].tris...) {
		m := owner[t] - 1
		if m < 0 || slices.Contains(k.members, m) {
			continue
		}
		if len(k.members) == mostKnot {
			return nil
		}
		k.members = append(k.members, m)
		k.tris = append(k.tris, seeds[m].tris...)
		k.index += seeds[m].index
	}
	if k.index > -2 && k.index < 2 {
		return nil
	}
	slices.Sort(k.tris)
	loc, ok := p.knotAt(k.tris)
	if !ok {
		return nil
	}
	k.loc = loc
	return k
}

// knotAt looks for a place near the triangles where both tau and its slopes vanish.
func (p *placer) knotAt(tris []int32) (field.Loc, bool) {
	f := p.c.f
	p.gather(fitRings, tris...)
	clean := p.clean()
	if len(clean) < fewSamples {
		return field.Loc{}, false
	}
	s := &seed{tris: tris, rimEdge: -1}
	start := field.Loc{Tri: tris[0], Bary: [3]float64{1. / 3, 1. / 3, 1. / 3}}
	b := p.baseAt(s, start)
	samples, weight := p.samples(s, &b, clean)
	if b.tau == 0 {
		return field.Loc{}, false
	}
	q, ok := fit(samples, weight)
	if !ok {
		return field.Loc{}, false
	}
	// The slopes are linear in the place: least squares for the place where they vanish.
	var xx, xy, yy, x1, y1, curve float64
	for _, w := range [2]*[terms]float64{&q.u, &q.v} {
		for _, row := range [2][3]float64{{2 * w[3], w[4], w[1]}, {w[4], 2 * w[5], w[2]}} {
			xx += float64(row[0] * row[0])
			xy += float64(row[0] * row[1])
			yy += float64(row[1] * row[1])
			x1 += float64(row[0] * row[2])
			y1 += float64(row[1] * row[2])
			curve += float64(row[0]*row[0]) + float64(row[1]*row[1])
		}
	}
	d := float64(xx*yy) - float64(xy*xy)
	if !(d > 0) {
		return field.Loc{}, false
	}
	at0 := r3.Vec2{X: (float64(xy*y1) - float64(yy*x1)) / d, Y: (float64(xy*x1) - float64(xx*y1)) / d}
	edge := p.meanEdge(tris[0]) / b.length
	curve = math.Sqrt(curve)
	allow := float64(float64(knotShare*curve) * edge)
	value := r3.Hypot(at(&q.u, at0), at(&q.v, at0))
	noise := math.Sqrt(q.noise[0][0] + q.noise[1][1])
	if !(at0.Norm() <= 2*edge) || norm(q.jacobian(at0)) > allow || math.Max(value, noise) > float64(allow*edge) {
		return field.Loc{}, false
	}
	spot := b.lift(at0, at(&q.z, at0))
	if f.Corner(tris[0]).At(f.Corner(tris[0]).Nearest(spot)).Sub(spot).Norm() > 2*p.meanEdge(tris[0]) {
		return field.Loc{}, false
	}
	return p.nearest(spot), true
}
