package topology

import (
	"context"
	"math"
	"slices"

	"shearprint/field"
)

// seed is a critical point before its place and kind are known: the triangles that share its index.
type seed struct {
	tris    []int32 // ascending
	index   int     // of the doubled surface for a half point
	half    bool
	zeros   []int32    // exact zero vertices, ascending
	rimEdge int32      // a half point's rim half-edge along which tau turns round; -1 where a zero vertex lies on the rim
	mirror  *stretch   // a half point's plane of symmetry
	knot    *field.Loc // the place of a zero of second order that the mesh took apart; nil for other points
	robust  float64    // as a share of MaxTau
	group   int32      // of the seeds that cancel together; -1 for none
}

// weight is the seed's share in sums, in halves.
func (s *seed) weight() int {
	if s.half {
		return s.index
	}
	return 2 * s.index
}

// count is the reading of all indices.
type count struct {
	turner
	rims    []rimReading
	seeds   []seed
	set     sets // patches of triangles; robustness joins them further
	residue float64
	sums    []int // per part, of the triangles' indices
}

// Flags of a triangle.
const (
	chanceEdge = 1 << iota // tau turns by half a turn along edge 0; by further bits along edges 1 and 2
	_
	_
	touchesZero // a corner is an exact zero
)

// faceBlock is the number of triangles that one goroutine takes at a time.
const faceBlock = 16384

// readIndices computes the indices of all triangles, merges those that share a zero, and lists the critical points.
func readIndices(ctx context.Context, f *field.Field) (*count, error) {
	c := &count{turner: turner{f: f, angle: make([]float64, len(f.Points))}, sums: make([]int, len(f.Parts))}
	for v := range c.angle {
		c.angle[v] = f.Angle(int32(v))
	}
	c.rims = c.readRims()
	n := len(f.Tris)
	index, flags := make([]int8, n), make([]uint8, n)
	residues := make([]float64, (n+faceBlock-1)/faceBlock)
	err := inBlocks(ctx, n, faceBlock, func(from, to int) {
		for t := int32(from); t < int32(to); t++ {
			i, residue := c.faceIndex(t)
			index[t] = int8(i)
			flags[t] = c.flags(t)
			residues[from/faceBlock] = math.Max(residues[from/faceBlock], residue)
		}
	})
	if err != nil {
		return nil, err
	}
	for _, r := range residues {
		c.residue = math.Max(c.residue, r)
	}
	for t, i := range index {
		c.sums[f.Part[t]] += int(i)
	}
	c.merge(flags)
	c.collect(index, flags)
	return c, ctx.Err()
}

func (c *count) flags(t int32) uint8 {
	var flag uint8
	for k := range int32(3) {
		h := 3*t + k
		if c.f.Twin[h] >= 0 && math.Abs(c.turn(h)) > math.Pi-antiparallel {
			flag |= chanceEdge << k
		}
		if c.f.IsZero(c.f.Tris[t][k]) {
			flag |= touchesZero
		}
	}
	return flag
}

// merge joins the triangles around each zero vertex, and the two triangles beside each edge whose turn is left to
// chance.
func (c *count) merge(flags []uint8) {
	f := c.f
	c.set = newSets(len(f.Tris))
	for t, flag := range flags {
		for k := range int32(3) {
			if flag&(chanceEdge<<k) != 0 {
				c.set.union(int32(t), f.Twin[3*int32(t)+k]/3)
			}
		}
		if flag&touchesZero == 0 {
			continue
		}
		for k := range int32(3) {
			// The edges that leave a zero vertex have a triangle of its fan on either side.
			h := 3*int32(t) + k
			if g := f.Twin[h]; g >= 0 && (f.IsZero(f.Tail(h)) || f.IsZero(f.Tip(h))) {
				c.set.union(int32(t), g/3)
			}
		}
	}
}

// collect lists the patches that have an index, a zero vertex or a half point, in the order of their first triangles.
func (c *count) collect(index []int8, flags []uint8) {
	f := c.f
	number := map[int32]int{} // of the patch by its root; for looking up only
	at := func(t int32) *seed {
		root := c.set.find(t)
		i, ok := number[root]
		if !ok {
			i = len(c.seeds)
			number[root] = i
			c.seeds = append(c.seeds, seed{rimEdge: -1})
		}
		return &c.seeds[i]
	}
	signs := map[int32][]reversal{} // by triangle; for looking up only
	mirrors := map[int32]*stretch{} // by rim half-edge; for looking up only
	for i := range c.rims {
		r := &c.rims[i]
		for _, rev := range r.reversals {
			signs[rev.h/3] = append(signs[rev.h/3], rev)
		}
		for k, h := range f.Rims[i].Edges {
			if p := r.plane[k]; p >= 0 {
				mirrors[h] = &r.stretches[p]
			}
		}
	}
	for t := range int32(len(index)) {
		turns := signs[t]
		if index[t] == 0 && len(turns) == 0 && flags[t]&touchesZero == 0 && c.set.size(t) == 1 {
			continue
		}
		s := at(t)
		s.tris = append(s.tris, t)
		s.index += 2 * int(index[t])
		for _, rev := range turns {
			s.half = true
			s.index -= rev.sign
			s.rimEdge = rev.h
			s.mirror = mirrors[rev.h]
		}
	}
	kept := c.seeds[:0]
	for i := range c.seeds {
		s := &c.seeds[i]
		c.findZeros(s, mirrors)
		if !s.half {
			s.index /= 2
		}
		if s.index != 0 || len(s.zeros) > 0 {
			kept = append(kept, *s)
		}
	}
	c.seeds = kept
}

// findZeros lists the exact zero vertices of the seed. One inside a symmetric stretch of a rim makes it a half point.
func (c *count) findZeros(s *seed, mirrors map[int32]*stretch) {
	f := c.f
	for _, t := range s.tris {
		for _, v := range f.Tris[t] {
			if f.IsZero(v) {
				s.zeros = append(s.zeros, v)
			}
		}
	}
	slices.Sort(s.zeros)
	s.zeros = slices.Compact(s.zeros)
	if s.half {
		return
	}
	for _, v := range s.zeros {
		if !f.OnRim(v) {
			continue
		}
		out := f.Out[v]
		in := out // the rim's half-edge that arrives at v ends the fan
		for h := range f.Fan(v) {
			in = field.Prev(h)
		}
		if m := mirrors[out]; m != nil && m == mirrors[in] {
			s.half, s.mirror = true, m
			return
		}
	}
}

// sets are disjoint sets of triangles, joined by size.
type sets struct {
	parent []int32 // of a root: minus the number of triangles
}

func newSets(n int) sets {
	s := sets{make([]int32, n)}
	for i := range s.parent {
		s.parent[i] = -1
	}
	return s
}

func (s sets) find(t int32) int32 {
	for s.parent[t] >= 0 {
		if up := s.parent[s.parent[t]]; up >= 0 {
			s.parent[t] = up // halve the path
		}
		t = s.parent[t]
	}
	return t
}

func (s sets) size(t int32) int32 { return -s.parent[s.find(t)] }

// union joins the sets of a and b and returns the root that stays and the one that goes; the same if they were one.
func (s sets) union(a, b int32) (stays, goes int32) {
	a, b = s.find(a), s.find(b)
	if a == b {
		return a, a
	}
	if s.parent[a] > s.parent[b] || s.parent[a] == s.parent[b] && b < a {
		a, b = b, a
	}
	s.parent[a] += s.parent[b]
	s.parent[b] = a
	return a, b
}
