package field

import (
	"cmp"
	"fmt"
	"slices"

	"shearprint/field/r3"
)

// repair carries a surface from what the file gave to an oriented manifold. Points are never moved: a collapsed sliver
// uses another point of the file, a cut uses the same point twice.
type repair struct {
	raw      *Raw
	tris     [][3]int32 // corners as vertex numbers
	origin   []int32    // raw triangle of each triangle
	point    []int32    // raw point of each vertex
	twin     []int32
	findings []Finding
}

func newRepair(raw *Raw) *repair {
	r := &repair{raw: raw, tris: append([][3]int32(nil), raw.Tris...), origin: make([]int32, len(raw.Tris))}
	for i := range r.origin {
		r.origin[i] = int32(i)
	}
	r.point = make([]int32, len(raw.Points))
	for i := range r.point {
		r.point[i] = int32(i)
	}
	return r
}

func (r *repair) find(level Level, code string, count int, where, text string, args ...any) {
	r.findings = append(r.findings, Finding{
		Level: level, Code: code, Text: fmt.Sprintf(text, args...), Count: count, Where: where,
	})
}

func (r *repair) pos(v int32) r3.Vec { return r.raw.Points[r.point[v]] }

func place(p r3.Vec) string { return fmt.Sprintf("near (%.6g, %.6g, %.6g)", p.X, p.Y, p.Z) }

// keep removes the triangles for which drop answers true, and returns how many and the raw number of the first.
func (r *repair) keep(drop func(t int) bool) (count int, first int32) {
	n := 0
	for t := range r.tris {
		if drop(t) {
			if count == 0 {
				first = r.origin[t]
			}
			count++
			continue
		}
		r.tris[n], r.origin[n] = r.tris[t], r.origin[t]
		n++
	}
	r.tris, r.origin = r.tris[:n], r.origin[:n]
	return count, first
}

// dropHoles removes the triangles that have no place or no tau: a hole in the data is a hole in the surface.
func (r *repair) dropHoles() {
	raw := r.raw
	count, first := r.keep(func(t int) bool {
		if raw.FaceTau != nil && !raw.FaceTau[t].Finite() {
			return true
		}
		for _, v := range raw.Tris[t] {
			if !raw.Points[v].Finite() || raw.FaceTau == nil && !raw.Tau[v].Finite() {
				return true
			}
		}
		return false
	})
	if count > 0 {
		r.find(Doubtful, "holes", count, fmt.Sprintf("triangle %d", first),
			"%d triangles have no usable value (NaN or infinite) and were left out; the gaps are rims", count)
	}
}

// sliverRatio is the height of a triangle over its longest edge below which its normal is rounding error: coordinates in
// double precision carry 1e-16 of the body's size, faces are down to 1e-4 of it.
const sliverRatio = 1e-11

// collapseSlivers merges the ends of the shortest edge of every triangle without area, until none is left.
func (r *repair) collapseSlivers() {
	total := 0
	where := ""
	for range 8 { // each pass collapses all slivers there are; a new one seldom arises
		into := map[int32]int32{}
		root := func(v int32) int32 {
			for {
				w, ok := into[v]
				if !ok {
					return v
				}
				v = w
			}
		}
		count := 0
		for _, t := range r.tris {
			a, b, thin := r.sliver(t)
			if !thin {
				continue
			}
			if where == "" {
				where = place(r.pos(t[0]))
			}
			count++
			a, b = root(a), root(b)
			if a != b {
				into[max(a, b)] = min(a, b)
			}
		}
		if count == 0 {
			break
		}
		total += count
		for i := range r.tris {
			for k := range 3 {
				r.tris[i][k] = root(r.tris[i][k])
			}
		}
		r.keep(func(t int) bool {
			c := r.tris[t]
			return c[0] == c[1] || c[1] == c[2] || c[2] == c[0]
		})
	}
	if total > 0 {
		r.find(Repaired, "collapsed-slivers", total, where, "%d triangles without area were collapsed", total)
	}
}

// sliver tells whether the triangle has no area, and the ends of its shortest edge.
func (r *repair) sliver(t [3]int32) (a, b int32, thin bool) {
	tri := r3.Tri{r.pos(t[0]), r.pos(t[1]), r.pos(t[2])}
	longest, shortest, at := 0.0, 0.0, 0
	for k := range 3 {
		e := tri[(k+1)%3].Sub(tri[k]).Norm()
		longest = max(longest, e)
		if k == 0 || e < shortest {
			shortest, at = e, k
		}
	}
	thin = !(tri.Normal().Norm() > sliverRatio*float64(longest*longest))
	return t[at], t[(at+1)%3], thin
}

// dropDoubles removes triangles that have the same three corners as an earlier one, in whatever order.
func (r *repair) dropDoubles() {
	low := func(t int32) int32 { return min(r.tris[t][0], r.tris[t][1], r.tris[t][2]) }
	start, sorted := buckets(len(r.point), len(r.tris), low)
	double := make([]bool, len(r.tris))
	for v := range r.point {
		bucket := sorted[start[v]:start[v+1]]
		slices.SortFunc(bucket, func(t, u int32) int {
			a, b := r.tris[t], r.tris[u]
			return cmp.Or(cmp.Compare(max(a[0], a[1], a[2]), max(b[0], b[1], b[2])),
				cmp.Compare(middle(a), middle(b)), cmp.Compare(t, u))
		})
		for i := 1; i < len(bucket); i++ {
			a, b := r.tris[bucket[i-1]], r.tris[bucket[i]]
			double[bucket[i]] = max(a[0], a[1], a[2]) == max(b[0], b[1], b[2]) && middle(a) == middle(b)
		}
	}
	count, first := r.keep(func(t int) bool { return double[t] })
	if count > 0 {
		r.find(Repaired, "dropped-doubles", count, fmt.Sprintf("triangle %d", first),
			"%d triangles lay on top of others and were dropped", count)
	}
}

// middle returns the second largest of three numbers.
func middle(c [3]int32) int32 {
	return max(min(c[0], c[1]), min(max(c[0], c[1]), c[2]))
}

// buckets sorts the numbers 0..n-1 by key, which lies in [0, keys): those with key k are sorted[start[k]:start[k+1]], in
// ascending order.
func buckets(keys, n int, key func(i int32) int32) (start, sorted []int32) {
	start = make([]int32, keys+1)
	for i := range int32(n) {
		start[key(i)+1]++
	}
	for k := range keys {
		start[k+1] += start[k]
	}
	sorted = make([]int32, n)
	fill := append([]int32(nil), start...)
	for i := range int32(n) {
		k := key(i)
		sorted[fill[k]] = i
		fill[k]++
	}
	return start, sorted
}
