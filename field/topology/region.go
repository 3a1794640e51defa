package topology

import (
	"math"
	"slices"

	"shearprint/field/r3"
)

// Region is the balance of a set of triangles.
type Region struct {
	Triangles int
	Count         // its BoundaryTerm is what tau turns against the region's edge, Expected adds the Euler characteristic
	Euler     int // vertices - edges + triangles
	// Inside holds the numbers in Skeleton.Points of the points whose triangles all lie in the region, Across those of
	// which only some do.
	Inside, Across []int
}

// InParts chooses the triangles of the given parts, for RegionOf.
func (s *Skeleton) InParts(parts ...int32) func(t int32) bool {
	return func(t int32) bool { return slices.Contains(parts, s.Field.Part[t]) }
}

// InBox chooses the triangles whose middles lie in the box, for RegionOf.
func (s *Skeleton) InBox(box r3.Box) func(t int32) bool {
	return func(t int32) bool {
		return box.Distance2(s.Field.Corner(t).At([3]float64{1. / 3, 1. / 3, 1. / 3})) == 0
	}
}

// InLoop chooses the triangles that lie in the loop's region as a whole, for RegionOf.
func (s *Skeleton) InLoop(l *Loop) func(t int32) bool {
	return func(t int32) bool {
		_, found := slices.BinarySearch(l.Tris, t)
		return found
	}
}

// RegionOf balances the chosen triangles: what tau turns along the edge of the region, with the curvature inside,
// against the points inside. A region of no triangles is balanced.
func (s *Skeleton) RegionOf(in func(t int32) bool) Region {
	f := s.Field
	r := Region{}
	chosen := make([]bool, len(f.Tris))
	seen := make([]bool, len(f.Points))
	vertices := 0
	edges := 0 // counted twice inside the region, once at its edge
	turned := 0.0
	for t := range int32(len(f.Tris)) {
		chosen[t] = in(t)
	}
	for t := range int32(len(f.Tris)) {
		if !chosen[t] {
			continue
		}
		r.Triangles++
		turned += f.Curvature(t)
		for k := range int32(3) {
			if v := f.Tris[t][k]; !seen[v] {
				seen[v] = true
				vertices++
			}
			h := 3*t + k
			if g := f.Twin[h]; g >= 0 && chosen[g/3] {
				edges++
				continue
			}
			edges += 2
			turned += s.count.turn(h)
		}
	}
	r.Euler = vertices - edges/2 + r.Triangles
	demand := math.Round(turned / (2 * math.Pi))
	for _, rim := range s.count.rims {
		for _, rev := range rim.reversals {
			if chosen[rev.h/3] { // a half turn that a half point accounts for
				demand -= float64(rev.sign) / 2
			}
		}
	}
	for i := range s.Points {
		p := &s.Points[i]
		n := 0
		for _, t := range p.Patch {
			if chosen[t] {
				n++
			}
		}
		switch n {
		case 0:
		case len(p.Patch):
			r.Inside = append(r.Inside, i)
			r.add(p)
		default:
			r.Across = append(r.Across, i)
		}
	}
	r.BoundaryTerm = demand - float64(r.Euler)
	r.close(r.Euler)
	return r
}
