package format

import (
	"cmp"
	"math"
	"slices"

	"shearprint/field/r3"
)

// kdTree finds nearest points. The points stand in order so that the middle of every range splits it along one axis;
// the ranges end in leaves.
type kdTree struct {
	points []r3.Vec
	order  []int32
	axis   []uint8 // of the split at each middle
}

const kdLeaf = 8

// newKDTree makes the tree over the finite points.
func newKDTree(points []r3.Vec) *kdTree {
	t := &kdTree{points: points, order: make([]int32, 0, len(points)), axis: make([]uint8, len(points))}
	for i, p := range points {
		if p.Finite() {
			t.order = append(t.order, int32(i))
		}
	}
	t.split(0, len(t.order))
	return t
}

func along(p r3.Vec, axis uint8) float64 {
	switch axis {
	case 0:
		return p.X
	case 1:
		return p.Y
	}
	return p.Z
}

func (t *kdTree) split(from, to int) {
	for to-from > kdLeaf {
		box := r3.EmptyBox()
		for _, i := range t.order[from:to] {
			box = box.Include(t.points[i])
		}
		side := box.Max.Sub(box.Min)
		axis := uint8(0)
		if side.Y > side.X {
			axis = 1
		}
		if side.Z > math.Max(side.X, side.Y) {
			axis = 2
		}
		middle := (from + to) / 2
		t.selectNth(from, to, middle, axis)
		t.axis[middle] = axis
		t.split(from, middle)
		from = middle + 1
	}
}

// less orders points along an axis, equals by number.
func (t *kdTree) less(i, j int32, axis uint8) int {
	if c := cmp.Compare(along(t.points[i], axis), along(t.points[j], axis)); c != 0 {
		return c
	}
	return cmp.Compare(i, j)
}

// selectNth puts the element that sorting would put at n there, the smaller before and the larger after it: Hoare's
// quickselect; where its luck fails, the rest is sorted.
func (t *kdTree) selectNth(from, to, n int, axis uint8) {
	o := t.order
	const tries = 64 // each halves the range on average
	for range tries {
		if to-from < 3 {
			break
		}
		a, b, c := o[from], o[(from+to)/2], o[to-1]
		if t.less(a, b, axis) > 0 {
			a, b = b, a
		}
		if t.less(b, c, axis) > 0 {
			b = c
		}
		if t.less(a, b, axis) > 0 {
			b = a
		}
		i, j := from, to-1
		for i <= j {
			for t.less(o[i], b, axis) < 0 {
				i++
			}
			for t.less(o[j], b, axis) > 0 {
				j--
			}
			if i <= j {
				o[i], o[j] = o[j], o[i]
				i++
				j--
			}
		}
		switch {
		case n <= j:
			to = j + 1
		case n >= i:
			from = i
		default:
			return
		}
	}
	slices.SortFunc(o[from:to], func(i, j int32) int { return t.less(i, j, axis) })
}

// nearest returns the point nearest to p and its distance; -1 and infinity if there is none. Of equally near points,
// one is taken that depends on the points alone.
func (t *kdTree) nearest(p r3.Vec) (best int32, dist float64) {
	return t.nearestOf(p, math.Inf(1), func(int32) bool { return true })
}

// maxRefused ends a search whose nearest points are all refused: what lies farther away will not do better.
const maxRefused = 64

// nearestOf is nearest among the accepted points that are nearer than within; it gives up after maxRefused others.
func (t *kdTree) nearestOf(p r3.Vec, within float64, accept func(i int32) bool) (best int32, dist float64) {
	q := kdQuery{t: t, p: p, best: -1, least: float64(within * within), accept: accept, left: maxRefused}
	q.visit(0, len(t.order))
	return q.best, math.Sqrt(q.least)
}

type kdQuery struct {
	t      *kdTree
	p      r3.Vec
	best   int32
	least  float64
	accept func(i int32) bool
	left   int // how many points may yet be refused
}

func (q *kdQuery) try(i int32) {
	d := q.t.points[i].Sub(q.p)
	d2 := d.Dot(d)
	switch {
	case !(d2 < q.least):
	case q.accept(i):
		q.least, q.best = d2, i
	default:
		if q.left--; q.left == 0 {
			q.least = 0 // nothing is nearer
		}
	}
}

func (q *kdQuery) visit(from, to int) {
	t := q.t
	for to-from > kdLeaf {
		middle := (from + to) / 2
		axis := t.axis[middle]
		d := along(q.p, axis) - along(t.points[t.order[middle]], axis)
		q.try(t.order[middle])
		near, far := [2]int{from, middle}, [2]int{middle + 1, to}
		if d > 0 {
			near, far = far, near
		}
		q.visit(near[0], near[1])
		if float64(d*d) >= q.least {
			return
		}
		from, to = far[0], far[1]
	}
	for _, i := range t.order[from:to] {
		q.try(i)
	}
}
