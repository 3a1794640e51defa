package topology_test

import (
	"slices"
	"testing"

	"shearprint/field/r3"
	"shearprint/field/topology"
)

// Above the noise not only the points are those of the clean field, but also who is connected to whom: lines run on across
// what was cancelled.
func TestNoiseKeepsTheGraph(t *testing.T) {
	for name, most := range map[string]float64{
		"strained-sphere": 0.1, "sheared-sphere": 0.1, "stream-and-strain": 0.05, // a tenth makes pairs as strong as its own
	} {
		c := caseNamed(name)
		clean := find(t, c.Field(20000), withLines)
		var places []r3.Vec
		for _, p := range clean.Points {
			places = append(places, p.Position)
		}
		want := graphOf(t, clean, places, 0.01)
		for _, share := range []float64{0.01, 0.05, 0.1} {
			if share > most {
				continue
			}
			raw := c.Raw(20000)
			sigma := share * clean.Field.MaxTau / 4
			f := noisy(t, raw, sigma)
			s := find(t, f, topology.Options{Lines: true, MinRobustness: 4 * sigma})
			if d := dangling(s); len(d) > 0 {
				t.Errorf("%s with %g noise: %v", name, share, d)
			}
			if got := graphOf(t, s, places, 3*share+0.1); !slices.Equal(got, want) {
				t.Errorf("%s with %g noise: graph %v, want %v", name, share, got, want)
			}
		}
	}
}
