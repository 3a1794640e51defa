package format

import (
	"slices"

	"shearprint/field/r3"
)

// longRatio is how much longer than the usual triangles around its corners a triangle must be to bridge a gap: spacings
// of neighbouring points vary by less than two in any mesh that resolves a flow.
const longRatio = 4

// trimLong drops, in place, triangles that bridge bays of the outline and holes in the data: those whose longest edge
// exceeds longRatio times what is usual at two of their corners. Usual is the lower quartile over the triangles
// around a point.
func trimLong(tris [][3]int32, p []r3.Vec2) [][3]int32 {
	long := make([]float32, len(tris)) // single precision is enough to tell long from short
	start := make([]int32, len(p)+1)
	for t, c := range tris {
		for k := range 3 {
			long[t] = max(long[t], float32(p[c[(k+1)%3]].Sub(p[c[k]]).Norm()))
			start[c[k]+1]++
		}
	}
	for v := range p {
		start[v+1] += start[v]
	}
	around := make([]int32, 3*len(tris))
	fill := slices.Clone(start[:len(p)])
	for t, c := range tris {
		for _, v := range c {
			around[fill[v]] = int32(t)
			fill[v]++
		}
	}
	usual := make([]float32, len(p))
	var buf []float32
	for v := range p {
		buf = buf[:0]
		for _, t := range around[start[v]:start[v+1]] {
			buf = append(buf, long[t])
		}
		if len(buf) > 0 {
			slices.Sort(buf)
			usual[v] = buf[(len(buf)-1)/4]
		}
	}
	kept := tris[:0]
	for t, c := range tris {
		u := [3]float32{usual[c[0]], usual[c[1]], usual[c[2]]}
		slices.Sort(u[:])
		if long[t] <= longRatio*u[1] {
			kept = append(kept, c)
		}
	}
	return kept
}
