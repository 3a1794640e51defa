package topology_test

import (
	"fmt"
	"testing"

	"shearprint/field/topology"
)

// BenchmarkSkeleton times points, ledger, robustness and all lines.
func BenchmarkSkeleton(b *testing.B) {
	for _, n := range []int{250_000, 1_000_000} {
		f := caseNamed("stream-and-strain").Field(n)
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				find(b, f, topology.Options{Lines: true})
			}
		})
	}
}
