package render

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// regionColors is the number of colours that regions take turns in: as many as the bytes of the scalar plane tell apart.
const regionColors = 255

// regionValues returns the number of the region that each vertex belongs to: that of the first triangle of its fan that
// has one; NaN for none.
func regionValues(f *field.Field, regions []int32) []float64 {
	if len(regions) != len(f.Tris) {
		return nil
	}
	x := make([]float64, len(f.Points))
	for v := range x {
		x[v] = math.NaN()
		for h := range f.Fan(int32(v)) {
			if n := regions[h/3]; n >= 0 {
				x[v] = float64(n % regionColors)
				break
			}
		}
	}
	return x
}

// regionTable returns pale colours, so that texture and lines stay legible: the hues go round by the golden angle, which
// keeps any few that follow one another apart, and the lightness alternates for those who see few hues.
func regionTable(none rgb) *table {
	const golden = 2.399963229728653
	var t table
	t[0] = none
	for i := 1; i < len(t); i++ {
		sin, cos := r3.SinCos(0.9 + float64(golden*float64(i-1)))
		l := 0.90 - 0.075*float64((i-1)%3)
		t[i] = lab{l, float64(0.075 * cos), float64(0.075 * sin)}.rgb()
	}
	return &t
}
