package format

import (
	"math"
	"slices"

	"shearprint/field"
	"shearprint/field/r3"
)

// targets are the elements of a surface that values can belong to: their places and the local size at each.
type targets struct {
	place []r3.Vec
	size  []float64
	tree  *kdTree
}

func vertexTargets(s *field.Raw) targets {
	t := targets{place: s.Points, size: make([]float64, len(s.Points))}
	count := make([]int32, len(s.Points))
	for _, tri := range s.Tris {
		for k := range 3 {
			a, b := tri[k], tri[(k+1)%3]
			d := s.Points[b].Sub(s.Points[a]).Norm()
			for _, v := range [2]int32{a, b} {
				t.size[v] += d
				count[v]++
			}
		}
	}
	for v, n := range count {
		if n > 0 {
			t.size[v] /= float64(n)
		}
	}
	t.tree = newKDTree(t.place)
	return t
}

// faceTargets are the file's polygons: the centroid of their triangles, as solvers' face centres are.
func faceTargets(s *field.Raw) targets {
	n := faceCount(s)
	t := targets{place: make([]r3.Vec, n), size: make([]float64, n)}
	corner := make([]r3.Vec, n) // a corner of each, for faces without area
	for i, tri := range s.Tris {
		f := faceOf(s, i)
		c := r3.Tri{s.Points[tri[0]], s.Points[tri[1]], s.Points[tri[2]]}
		area := c.Area()
		t.place[f] = t.place[f].AddScaled(area, c.At([3]float64{1. / 3, 1. / 3, 1. / 3}))
		t.size[f] += area
		corner[f] = c[0]
	}
	for f, area := range t.size {
		if area > 0 {
			t.place[f] = t.place[f].Scale(1 / area)
			t.size[f] = math.Sqrt(area)
		} else {
			t.place[f] = corner[f]
		}
	}
	t.tree = newKDTree(t.place)
	return t
}

func faceCount(s *field.Raw) int {
	if s.Face == nil {
		return len(s.Tris)
	}
	return int(s.Face[len(s.Face)-1]) + 1
}

func faceOf(s *field.Raw, t int) int {
	if s.Face == nil {
		return t
	}
	return int(s.Face[t])
}

// typicalDistance returns the median distance of some rows from their nearest target, over the local size.
func typicalDistance(rows []r3.Vec, t *targets) float64 {
	const sample = 500
	step := max(1, len(rows)/sample)
	var d []float64
	for i := 0; i < len(rows); i += step {
		k, dist := t.tree.nearest(rows[i])
		d = append(d, t.relative(k, dist))
	}
	return medianOf(d)
}

// relative returns a distance from target k over its size; infinity if there is no target (k < 0).
func (t *targets) relative(k int32, dist float64) float64 {
	switch {
	case k < 0:
		return math.Inf(1)
	case dist == 0:
		return 0
	}
	return dist / t.size[k]
}

func medianOf(x []float64) float64 {
	y := slices.Clone(x)
	slices.Sort(y)
	return y[len(y)/2]
}
