package field

import (
	"cmp"
	"slices"

	"shearprint/field/r3"
)

// join finds each half-edge's twin by sorting the half-edges by their lower vertex. An edge with more than two triangles
// gets no twins at all: which sheets belong together cannot be known.
func (r *repair) join() {
	n := 3 * len(r.tris)
	r.twin = make([]int32, n)
	tail := func(h int32) int32 { return r.tris[h/3][h%3] }
	tip := func(h int32) int32 { return tail(Next(h)) }
	start, sorted := buckets(len(r.point), n, func(h int32) int32 { return min(tail(h), tip(h)) })
	high := func(h int32) int32 { return max(tail(h), tip(h)) }
	cut, where := 0, ""
	for v := range r.point {
		bucket := sorted[start[v]:start[v+1]]
		slices.SortFunc(bucket, func(h, g int32) int { return cmp.Or(cmp.Compare(high(h), high(g)), cmp.Compare(h, g)) })
		for len(bucket) > 0 {
			n := 1
			for n < len(bucket) && high(bucket[n]) == high(bucket[0]) {
				n++
			}
			edge := bucket[:n]
			bucket = bucket[n:]
			for _, h := range edge {
				r.twin[h] = -1
			}
			switch {
			case n == 2:
				r.twin[edge[0]], r.twin[edge[1]] = edge[1], edge[0]
			case n > 2:
				cut++
				if where == "" {
					where = place(r.pos(tail(edge[0])))
				}
			}
		}
	}
	if cut > 0 {
		r.find(Repaired, "cut-edges", cut, where, "%d edges with more than two triangles were cut apart", cut)
	}
}

// orient turns triangles so that neighbours agree, part by part, the larger area deciding. Where that is impossible (a
// one-sided surface) the edge is cut.
func (r *repair) orient() {
	turned := make([]int8, len(r.tris)) // 0 not reached, +1 as it is, -1 to be turned
	count, cuts, where := 0, 0, ""
	var stack, part []int32
	for seed := range r.tris {
		if turned[seed] != 0 {
			continue
		}
		turned[seed] = 1
		stack, part = append(stack[:0], int32(seed)), part[:0]
		var kept, other float64
		for len(stack) > 0 {
			t := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			part = append(part, t)
			c := r.tris[t]
			area := r3.Tri{r.pos(c[0]), r.pos(c[1]), r.pos(c[2])}.Area()
			if turned[t] > 0 {
				kept += area
			} else {
				other += area
			}
			for k := range int32(3) {
				h := 3*t + k
				g := r.twin[h]
				if g < 0 {
					continue
				}
				want := turned[t]
				if r.tris[g/3][g%3] == c[k] { // both run the same way: one of the two triangles is turned
					want = -want
				}
				switch turned[g/3] {
				case 0:
					turned[g/3] = want
					stack = append(stack, g/3)
				case -want:
					r.twin[h], r.twin[g] = -1, -1
					cuts++
					if where == "" {
						where = place(r.pos(c[k]))
					}
				}
			}
		}
		flip := int8(-1)
		if other > kept {
			flip = 1
		}
		for _, t := range part {
			if turned[t] == flip {
				r.turn(t)
				count++
			}
		}
	}
	if count > 0 {
		r.find(Repaired, "turned-faces", count, "", "%d triangles were wound against their neighbours and were turned", count)
	}
	if cuts > 0 {
		r.find(Doubtful, "one-sided", cuts, where, "the surface is one-sided; it was cut along %d edges", cuts)
	}
}

// turn reverses triangle t: corners 1 and 2 change places, and with them half-edges 0 and 2.
func (r *repair) turn(t int32) {
	c := &r.tris[t]
	c[1], c[2] = c[2], c[1]
	a, b := 3*t, 3*t+2
	ta, tb := r.twin[a], r.twin[b]
	r.twin[a], r.twin[b] = tb, ta
	if ta >= 0 {
		r.twin[ta] = b
	}
	if tb >= 0 {
		r.twin[tb] = a
	}
}

// splitFans gives every fan of triangles around a point a vertex of its own, and drops vertices without triangles.
func (r *repair) splitFans() {
	used := make([]bool, len(r.point))
	done := make([]bool, len(r.twin))
	var point []int32
	split, where := 0, ""
	tris := make([][3]int32, len(r.tris))
	for h0 := range int32(len(r.twin)) {
		if done[h0] {
			continue
		}
		old := r.tris[h0/3][h0%3]
		if used[old] {
			split++
			if where == "" {
				where = place(r.pos(old))
			}
		}
		used[old] = true
		v := int32(len(point))
		point = append(point, r.point[old])
		h := h0
		for r.twin[h] >= 0 { // clockwise to the fan's beginning
			h = Next(r.twin[h])
			if h == h0 {
				break
			}
		}
		for first := h; ; {
			done[h] = true
			tris[h/3][h%3] = v
			h = r.twin[Prev(h)]
			if h < 0 || h == first {
				break
			}
		}
	}
	unused := 0
	for _, u := range used {
		if !u {
			unused++
		}
	}
	r.tris, r.point = tris, point
	if split > 0 {
		r.find(Repaired, "cut-points", split, where, "%d points where separate sheets touch were doubled", split)
	}
	if unused > 0 {
		r.find(Note, "unused-points", unused, "", "%d points belong to no triangle and were left out", unused)
	}
}
