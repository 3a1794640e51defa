package format

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// matching says which row each target takes.
type matching struct {
	row       []int32 // per target; -1 for none
	rowUsed   []bool
	used      int
	matched   int
	firstHole int
	distances []float64 // of the matched, relative to the local size
}

// matchRows gives each row to its nearest target within matchWithin, and each target the nearest of its rows; of
// equally near rows the first.
func matchRows(rows []r3.Vec, t *targets) matching {
	m := matching{row: make([]int32, len(t.place)), rowUsed: make([]bool, len(rows)), firstHole: -1}
	best := make([]float64, len(t.place))
	for k := range m.row {
		m.row[k] = -1
	}
	for i, p := range rows {
		k, dist := t.tree.nearest(p)
		d := t.relative(k, dist)
		if d <= matchWithin && (m.row[k] < 0 || d < best[k]) {
			m.row[k], best[k] = int32(i), d
		}
	}
	m.count(best)
	return m
}

// count fills the sums; best holds the distance of each target's row.
func (m *matching) count(best []float64) {
	for k, row := range m.row {
		if row < 0 {
			if m.firstHole < 0 {
				m.firstHole = k
			}
			continue
		}
		m.matched++
		m.distances = append(m.distances, best[k])
		if !m.rowUsed[row] {
			m.rowUsed[row] = true
			m.used++
		}
	}
}

// share returns how many of the targets have a row.
func (m *matching) share() float64 {
	if len(m.row) == 0 {
		return 0
	}
	return float64(m.matched) / float64(len(m.row))
}

// Bounds of the looser match, over a triangle's longest edge. The centre of a quadrilateral is a sixth off the middle
// of its halves, and off their common edge by what it is warped.
const (
	offTriangle = 0.05 // of a row from the triangle
	offMiddle   = 0.5  // of a row from the triangle's middle
)

// rowsOnTriangles is for tables whose faces are not those of the surface file: centres of quadrilaterals of which the
// file has the halves. Each triangle takes, of the rows that lie on it, the one nearest to its middle.
func rowsOnTriangles(rows []r3.Vec, s *field.Raw) matching {
	m := matching{row: make([]int32, len(s.Tris)), rowUsed: make([]bool, len(rows)), firstHole: -1}
	best := make([]float64, len(s.Tris))
	tree := newKDTree(rows)
	for t, tri := range s.Tris {
		c := r3.Tri{s.Points[tri[0]], s.Points[tri[1]], s.Points[tri[2]]}
		longest := math.Max(c[1].Sub(c[0]).Norm(), math.Max(c[2].Sub(c[1]).Norm(), c[0].Sub(c[2]).Norm()))
		onIt := func(i int32) bool {
			return c.At(c.Nearest(rows[i])).Sub(rows[i]).Norm() <= float64(offTriangle*longest)
		}
		k, dist := tree.nearestOf(c.At([3]float64{1. / 3, 1. / 3, 1. / 3}), float64(offMiddle*longest), onIt)
		m.row[t] = k
		if k >= 0 {
			best[t] = dist / longest
		}
	}
	m.count(best)
	return m
}
