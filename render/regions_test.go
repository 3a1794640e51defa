package render

import (
	"context"
	"testing"

	"shearprint/field/exact"
)

// A sphere cut in two halves must show two colours, each on its own side, and a floor of lightness under both.
func TestRegionsHaveColoursOfTheirOwn(t *testing.T) {
	f := exact.Cases()[0].Field(2000)
	s := &Scene{Field: f, Quantity: Basins, Flow: NoFlow, Bare: true, Regions: make([]int32, len(f.Tris))}
	for i := range s.Regions {
		if f.Corner(int32(i)).At([3]float64{1. / 3, 1. / 3, 1. / 3}).Z > 0 {
			s.Regions[i] = 1
		}
	}
	r := NewRenderer()
	frame, err := r.Frame(context.Background(), s, NamedView("front", f), 160, 120, Still)
	if err != nil {
		t.Fatal(err)
	}
	seen := map[byte]int{}
	for y := range 120 {
		for x := range 160 {
			i := y*160 + x
			if frame.Layers.Mask[i] == 0 {
				continue
			}
			want := byte(1)
			if y < 50 {
				want = 2
			} else if y < 70 {
				continue // the triangles along the cut
			}
			if got := frame.Layers.Scalar[i]; got != want {
				t.Fatalf("pixel %d, %d: region byte %d, want %d", x, y, got, want)
			}
			seen[want]++
		}
	}
	if seen[1] < 500 || seen[2] < 500 {
		t.Fatalf("pixels per region: %v", seen)
	}
	for i := 1; i < 13; i++ {
		for j := 1; j < i; j++ {
			a, b := decode(frame.Layers.Table[i]).toLab(), decode(frame.Layers.Table[j]).toLab()
			if d := apart(a, b); d < 0.03 {
				t.Errorf("regions %d and %d are only %.3f apart", i, j, d)
			}
		}
	}
	s.Regions = nil
	if frame, err = r.Frame(context.Background(), s, NamedView("front", f), 160, 120, Still); err != nil {
		t.Fatal(err)
	}
	if got := frame.Layers.Scalar[60*160+80]; got != 0 {
		t.Errorf("without regions the scalar is %d, want none", got)
	}
}
