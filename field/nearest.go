package field

import (
	"math"
	"slices"
	"sync"

	"shearprint/field/r3"
)

// lazyTree is a box tree over the triangles, made at the first query: the triangles in the order of their centroids'
// Morton codes, in leaves of leafSize, and a complete binary tree of boxes over the leaves.
type lazyTree struct {
	once  sync.Once
	order []int32
	boxes []r3.Box // heap order: children of i are 2i+1 and 2i+2
	first int      // index of the first leaf in boxes
}

const leafSize = 8

// Nearest returns the place on the surface nearest to p and its distance. Of equally near places the one in the triangle
// with the lowest number is taken. It may be called by several goroutines at once.
func (m *Mesh) Nearest(p r3.Vec) (Loc, float64) {
	m.tree.once.Do(m.buildTree)
	q := nearestQuery{m: m, p: p, best: math.Inf(1), tri: -1}
	q.visit(0)
	return Loc{q.tri, q.bary}, math.Sqrt(q.best)
}

type nearestQuery struct {
	m    *Mesh
	p    r3.Vec
	best float64
	tri  int32
	bary [3]float64
}

func (q *nearestQuery) visit(node int) {
	t := &q.m.tree
	if node >= t.first {
		leaf := node - t.first
		for i := leaf * leafSize; i < min(len(t.order), (leaf+1)*leafSize); i++ {
			q.try(t.order[i])
		}
		return
	}
	a, b := 2*node+1, 2*node+2
	da, db := t.boxes[a].Distance2(q.p), t.boxes[b].Distance2(q.p)
	if db < da {
		a, b, da, db = b, a, db, da
	}
	if da <= q.best {
		q.visit(a)
	}
	if db <= q.best {
		q.visit(b)
	}
}

func (q *nearestQuery) try(tri int32) {
	c := q.m.Corner(tri)
	bary := c.Nearest(q.p)
	d := c.At(bary).Sub(q.p)
	dist := d.Dot(d)
	if dist < q.best || dist == q.best && tri < q.tri {
		q.best, q.tri, q.bary = dist, tri, bary
	}
}

func (m *Mesh) buildTree() {
	type coded struct {
		code uint64
		tri  int32
	}
	box := r3.BoxOf(m.Points)
	size := math.Max(box.Max.X-box.Min.X, math.Max(box.Max.Y-box.Min.Y, box.Max.Z-box.Min.Z))
	list := make([]coded, len(m.Tris))
	Parallel(len(list), func(from, to int) {
		for t := from; t < to; t++ {
			c := m.Corner(int32(t)).At([3]float64{1. / 3, 1. / 3, 1. / 3}).Sub(box.Min)
			list[t] = coded{morton(c.X/size) | morton(c.Y/size)<<1 | morton(c.Z/size)<<2, int32(t)}
		}
	})
	slices.SortFunc(list, func(a, b coded) int {
		switch {
		case a.code < b.code, a.code == b.code && a.tri < b.tri:
			return -1
		}
		return 1
	})
	t := &m.tree
	t.order = make([]int32, len(list))
	for i, c := range list {
		t.order[i] = c.tri
	}
	leaves := 1
	for leaves*leafSize < len(list) {
		leaves *= 2
	}
	t.first = leaves - 1
	t.boxes = make([]r3.Box, 2*leaves-1)
	for leaf := range leaves {
		b := r3.EmptyBox()
		for i := leaf * leafSize; i < min(len(list), (leaf+1)*leafSize); i++ {
			for _, p := range m.Corner(t.order[i]) {
				b = b.Include(p)
			}
		}
		t.boxes[t.first+leaf] = b
	}
	for i := t.first - 1; i >= 0; i-- {
		a, b := t.boxes[2*i+1], t.boxes[2*i+2]
		t.boxes[i] = r3.Box{
			Min: r3.Vec{X: math.Min(a.Min.X, b.Min.X), Y: math.Min(a.Min.Y, b.Min.Y), Z: math.Min(a.Min.Z, b.Min.Z)},
			Max: r3.Vec{X: math.Max(a.Max.X, b.Max.X), Y: math.Max(a.Max.Y, b.Max.Y), Z: math.Max(a.Max.Z, b.Max.Z)},
		}
	}
}

// mortonBits per coordinate: 2^20 cells along the longest side separate the triangles of any mesh that fits in memory.
const mortonBits = 20

// morton spreads the bits of x in [0, 1] so that two other coordinates fit between them.
func morton(x float64) uint64 {
	n := uint64(math.Min(math.Max(x, 0), 1) * (1<<mortonBits - 1))
	var out uint64
	for b := range mortonBits {
		out |= (n >> b & 1) << (3 * b)
	}
	return out
}
