package format

import (
	"shearprint/field"
)

// fan adds a polygon as a fan of triangles from its first corner and numbers them, and returns how many there were.
// Numbers are kept only once a polygon of more than three corners has come: before, every triangle is a face.
func fan(raw *field.Raw, number int, corners []int32) int {
	n := len(corners) - 2
	if n < 1 {
		return 0
	}
	before := len(raw.Tris)
	for k := 1; k <= n; k++ {
		raw.Tris = append(raw.Tris, [3]int32{corners[0], corners[k], corners[k+1]})
	}
	if raw.Face == nil && (n > 1 || number != before) {
		raw.Face = make([]int32, before, cap(raw.Tris))
		for t := range raw.Face {
			raw.Face[t] = int32(t)
		}
	}
	if raw.Face != nil {
		for range n {
			raw.Face = append(raw.Face, int32(number))
		}
	}
	return n
}
