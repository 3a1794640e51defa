package topology

import (
	"context"
	"math"
)

// findRobustness gives every seed its robustness: the level r at which the component of {|tau| <= r} that holds it
// reaches the index sum zero. (Chazal, Skraba and Patel 2012; Wang, Rosen, Skraba, Bhatia and Pascucci, Computer
// Graphics Forum 32(3), 2013; from memory.)
//
// Components grow by Kruskal's method over the triangles: two neighbours join at the least |tau| along their common
// edge. That is right for a field that is linear in each triangle, where the part of a triangle below a level is
// convex. The rim takes no part: a point is cancelled by other points only.
func (c *count) findRobustness(ctx context.Context) error {
	for i := range c.seeds {
		c.seeds[i].robust, c.seeds[i].group = math.Inf(1), -1
	}
	g := newGroups(c)
	if g.open == 0 {
		return ctx.Err()
	}
	edges, err := c.edgesByLeast(ctx)
	if err != nil {
		return err
	}
	for i, check := 0, 0; i < len(edges); {
		if i >= check {
			if ctx.Err() != nil {
				return ctx.Err()
			}
			check = i + faceBlock
		}
		// A vertex with less |tau| than its neighbours joins several triangles at one level: all of them before sums are
		// looked at.
		key := edges[i].key
		for ; i < len(edges) && edges[i].key == key; i++ {
			h := edges[i].half
			if a, b := c.set.union(h/3, c.f.Twin[h]/3); a != b {
				g.join(a, b)
			}
		}
		if g.settle(math.Float64frombits(key)) {
			break
		}
	}
	return ctx.Err()
}

// edgesByLeast lists the inner edges in the order of the least |tau| along them, as a share of MaxTau.
func (c *count) edgesByLeast(ctx context.Context) ([]keyed, error) {
	f := c.f
	inner := 0
	for _, g := range f.Twin {
		if g >= 0 {
			inner++
		}
	}
	edges := make([]keyed, 0, inner/2)
	for h, g := range f.Twin {
		if int32(h) < g {
			edges = append(edges, keyed{half: int32(h)})
		}
	}
	scale := f.MaxTau
	if scale == 0 {
		scale = 1
	}
	err := inBlocks(ctx, len(edges), faceBlock, func(from, to int) {
		for i := from; i < to; i++ {
			edges[i].key = math.Float64bits(c.least(edges[i].half, scale))
		}
	})
	if err != nil {
		return nil, err
	}
	return sortByKey(edges), ctx.Err()
}

// groups are the components of triangles that hold points not yet cancelled.
type groups struct {
	c     *count
	of    []int32 // group of the component with this root; -1 for none
	sum   []int   // in halves
	first []int32 // seeds of the group, linked
	last  []int32
	next  []int32 // the seed that follows in its group; -1 at the end
	alive []int   // number of groups per part
	grown []int32 // roots of the components whose groups were joined at this level
	open  int     // merges that may still cancel something: groups less one, over all parts
}

func newGroups(c *count) *groups {
	n := len(c.seeds)
	g := &groups{c: c, of: make([]int32, len(c.f.Tris)), sum: make([]int, n), first: make([]int32, n),
		last: make([]int32, n), next: make([]int32, n), alive: make([]int, len(c.f.Parts))}
	for t := range g.of {
		g.of[t] = -1
	}
	for i := range c.seeds {
		s := &c.seeds[i]
		g.sum[i], g.first[i], g.last[i], g.next[i] = s.weight(), int32(i), int32(i), -1
		if s.index == 0 { // any disturbance, however small, removes it
			s.robust = 0
			continue
		}
		g.of[c.set.find(s.tris[0])] = int32(i)
		g.alive[c.f.Part[s.tris[0]]]++
	}
	for _, n := range g.alive {
		g.open += max(0, n-1)
	}
	return g
}

// join joins the groups of the components a (whose root stays) and b.
func (g *groups) join(a, b int32) {
	i, j := g.of[a], g.of[b]
	switch {
	case j < 0:
		return
	case i < 0:
		g.of[a] = j
		return
	}
	g.drop(a)
	g.sum[i] += g.sum[j]
	g.next[g.last[i]] = g.first[j]
	g.last[i] = g.last[j]
	g.grown = append(g.grown, a)
}

// settle cancels the groups that were joined at this level and sum to zero, and tells whether nothing can be cancelled
// any more.
func (g *groups) settle(level float64) (done bool) {
	for _, t := range g.grown {
		root := g.c.set.find(t)
		i := g.of[root]
		if i < 0 || g.sum[i] != 0 {
			continue
		}
		for s := g.first[i]; s >= 0; s = g.next[s] {
			g.c.seeds[s].robust, g.c.seeds[s].group = level, i
		}
		g.of[root] = -1
		g.drop(root)
	}
	g.grown = g.grown[:0]
	return g.open == 0
}

// drop takes one group out of the count of the part that triangle t belongs to.
func (g *groups) drop(t int32) {
	alive := &g.alive[g.c.f.Part[t]]
	if *alive > 1 {
		g.open--
	}
	*alive--
}

// level returns a robustness in the unit of tau, from its share of MaxTau.
func (c *count) level(share float64) float64 {
	if math.IsInf(share, 1) {
		return share // MaxTau may be zero
	}
	return float64(share * c.f.MaxTau)
}
