package format

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// weldFraction of the diagonal of the box: points nearer than this are one. Double precision carries 1e-16 of a body's
// size, formats that repeat points repeat them exactly.
const weldFraction = 1e-9

// boxOf returns the box around the finite points.
func boxOf(points []r3.Vec) r3.Box {
	b := r3.EmptyBox()
	for _, p := range points {
		if p.Finite() {
			b = b.Include(p)
		}
	}
	return b
}

// weld joins points that lie within weldFraction of the size of one another. Where their values differ the mean is
// taken and told.
func weld(_ source, raw *field.Raw, _ Options) error {
	d := boxOf(raw.Points).Diagonal()
	if d-d != 0 {
		return nil // overflow: numbers that Build refuses
	}
	joinPoints(raw, coincident(raw.Points, weldFraction*d))
	return nil
}

// joinPoints merges every point into[i] != i into its representative, of lower number.
func joinPoints(raw *field.Raw, into []int32) {
	count, first := 0, -1
	for i, r := range into {
		if int(r) != i {
			count++
			if first < 0 {
				first = i
			}
		}
	}
	if count == 0 {
		return
	}
	number := make([]int32, len(into))
	n := int32(0)
	for i, r := range into {
		if int(r) == i {
			number[i] = n
			n++
		} else {
			number[i] = number[r]
		}
	}
	where := pointPlace(raw.Points[first])
	differ := meanTau(raw, number, int(n))
	raw.P, raw.Cp = meanScalar(raw.P, number, int(n)), meanScalar(raw.Cp, number, int(n))
	for i, r := range into {
		if int(r) == i {
			raw.Points[number[i]] = raw.Points[i] // number[i] <= i: written after it was read
		}
	}
	raw.Points = raw.Points[:n]
	for t := range raw.Tris {
		for k := range 3 {
			raw.Tris[t][k] = number[raw.Tris[t][k]]
		}
	}
	note(raw, field.Repaired, "welded", count, where, "%d points lay on others and were welded to them", count)
	if differ > 0 {
		note(raw, field.Doubtful, "welded-values-differ", differ, where,
			"at %d of the welded points tau differed from one copy to the next; the mean was taken", differ)
	}
}

func meanTau(raw *field.Raw, number []int32, n int) (differ int) {
	if raw.Tau == nil {
		return 0
	}
	mean := make([]r3.Vec, n)
	copies := make([]int32, n)
	odd := make([]bool, n)
	first := make([]r3.Vec, n)
	for i, v := range raw.Tau {
		k := number[i]
		if copies[k] == 0 {
			first[k] = v
		}
		odd[k] = odd[k] || v != first[k]
		mean[k] = mean[k].Add(v)
		copies[k]++
	}
	for k := range mean {
		if odd[k] {
			differ++
			mean[k] = mean[k].Scale(1 / float64(copies[k]))
		} else {
			mean[k] = first[k] // the mean of equal numbers may be off in the last digit
		}
	}
	raw.Tau = mean
	return differ
}

func meanScalar(x []float64, number []int32, n int) []float64 {
	if x == nil {
		return nil
	}
	mean := make([]float64, n)
	copies := make([]int32, n)
	odd := make([]bool, n)
	first := make([]float64, n)
	for i, v := range x {
		k := number[i]
		if copies[k] == 0 {
			first[k] = v
		}
		odd[k] = odd[k] || v != first[k]
		mean[k] += v
		copies[k]++
	}
	for k := range mean {
		if odd[k] {
			mean[k] /= float64(copies[k])
		} else {
			mean[k] = first[k]
		}
	}
	return mean
}

// coincident returns, per point, the lowest-numbered representative within the distance, itself where there is none.
// Points without a place are never joined.
//
// Representatives are kept in a hash grid whose cells are larger than the distance, so that most points ask one cell
// and only those near a cell's border ask its neighbours too; but not so large that a hostile file could fill one
// with more than some thousand points that lie apart.
func coincident(points []r3.Vec, distance float64) []int32 {
	const cellsPerDistance = 16
	g := newPointGrid(len(points), math.Max(cellsPerDistance*distance, math.SmallestNonzeroFloat64), boxOf(points).Min)
	into := make([]int32, len(points))
	for i, p := range points {
		into[i] = int32(i)
		if !p.Finite() {
			continue
		}
		if r := g.near(points, p, distance); r >= 0 {
			into[i] = r
			continue
		}
		g.add(p, int32(i))
	}
	return into
}

// pointGrid is a hash table of points by cell, chained through next.
type pointGrid struct {
	origin r3.Vec
	cell   float64
	head   []int32
	next   []int32
	mask   uint64
}

func newPointGrid(n int, cell float64, origin r3.Vec) *pointGrid {
	size := 16
	for size < n {
		size *= 2
	}
	g := &pointGrid{origin: origin, cell: cell, head: make([]int32, size), next: make([]int32, n), mask: uint64(size - 1)}
	for i := range g.head {
		g.head[i] = -1
	}
	return g
}

// cellOf returns the cell's number along one axis. Numbers beyond 2^62 fall into one cell, which is only slower.
func (g *pointGrid) cellOf(x float64) int64 {
	c := math.Floor(x / g.cell)
	return int64(math.Max(-1<<62, math.Min(c, 1<<62)))
}

func (g *pointGrid) slot(x, y, z int64) uint64 {
	h := uint64(x)*0x9e3779b97f4a7c15 ^ uint64(y)*0xc2b2ae3d27d4eb4f ^ uint64(z)*0x165667b19e3779f9
	h ^= h >> 29
	h *= 0xbf58476d1ce4e5b9
	return (h ^ h>>32) & g.mask
}

func (g *pointGrid) add(p r3.Vec, i int32) {
	p = p.Sub(g.origin)
	s := g.slot(g.cellOf(p.X), g.cellOf(p.Y), g.cellOf(p.Z))
	g.next[i] = g.head[s]
	g.head[s] = i
}

// near returns the lowest-numbered point of the grid within the distance of p, or -1.
func (g *pointGrid) near(points []r3.Vec, p r3.Vec, distance float64) int32 {
	q := p.Sub(g.origin)
	best := int32(-1)
	for x := g.cellOf(q.X - distance); x <= g.cellOf(q.X+distance); x++ {
		for y := g.cellOf(q.Y - distance); y <= g.cellOf(q.Y+distance); y++ {
			for z := g.cellOf(q.Z - distance); z <= g.cellOf(q.Z+distance); z++ {
				for i := g.head[g.slot(x, y, z)]; i >= 0; i = g.next[i] {
					if (best < 0 || i < best) && points[i].Sub(p).Norm() <= distance {
						best = i
					}
				}
			}
		}
	}
	return best
}
