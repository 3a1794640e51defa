package field_test

import (
	"fmt"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
)

func BenchmarkBuild(b *testing.B) {
	for _, n := range []int{250_000, 1_000_000} {
		raw := exact.Cases()[1].Raw(n)
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := field.Build(raw); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkNearest(b *testing.B) {
	f := exact.Cases()[1].Field(1_000_000)
	f.Nearest(r3.Vec{X: 1})
	i := 0
	for b.Loop() {
		i++
		s, c := r3.SinCos(float64(i))
		f.Nearest(r3.Vec{X: c, Y: s, Z: 0.3})
	}
}
