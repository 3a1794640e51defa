package format

import (
	"errors"
	"math"
	"slices"

	"shearprint/field/r3"
)

// Delaunay triangulation by division and merging on a ring structure of directed edges (L. Guibas and J. Stolfi,
// Primitives for the manipulation of general subdivisions and the computation of Voronoi diagrams, ACM TOG 4(2), 1985,
// from memory). Points are first put on a grid of whole numbers, on which all decisions are exact: no tolerance, the
// same triangles on every machine.

// gridBits of a coordinate: the side of a square of points has 2^26 steps, 1.5e-8 of it each. Differences then have 27
// bits, an orientation 55 and an in-circle determinant 112, which fit two machine words.
const gridBits = 26

type gridPoint struct{ x, y int32 }

// divided is the state of the division: directed edges e and e^1 are the two ways along one edge.
type divided struct {
	p     []gridPoint // sorted by x, then y; no doubles
	org   []int32     // per directed edge, its start; -1 for a deleted edge
	onext []int32     // the next edge with the same start, counter-clockwise
	oprev []int32
	free  []int32
}

// delaunay returns the Delaunay triangles, counter-clockwise, as numbers of points, without the needles along the
// hull. Of points that fall on one place of the grid, the one of lowest number is used.
func delaunay(points []r3.Vec2) ([][3]int32, error) {
	number, grid, err := toGrid(points)
	if err != nil {
		return nil, err
	}
	d := &divided{p: grid}
	room := 6 * len(grid) // at most 3n edges
	d.org, d.onext, d.oprev = make([]int32, 0, room), make([]int32, 0, room), make([]int32, 0, room)
	d.divide(0, len(grid))
	tris := d.peeled()
	for i, t := range tris {
		for k, v := range t {
			tris[i][k] = number[v]
		}
	}
	return tris, nil
}

// toGrid puts the points on the grid, sorted; number holds what each was.
func toGrid(points []r3.Vec2) (number []int32, grid []gridPoint, err error) {
	lo, hi := r3.Vec2{X: math.Inf(1), Y: math.Inf(1)}, r3.Vec2{X: math.Inf(-1), Y: math.Inf(-1)}
	for _, p := range points {
		lo = r3.Vec2{X: math.Min(lo.X, p.X), Y: math.Min(lo.Y, p.Y)}
		hi = r3.Vec2{X: math.Max(hi.X, p.X), Y: math.Max(hi.Y, p.Y)}
	}
	size := math.Max(hi.X-lo.X, hi.Y-lo.Y)
	if !(size > 0) || math.IsInf(size, 0) {
		return nil, nil, errors.New("they all lie on one place")
	}
	all := make([]gridPoint, len(points))
	number = make([]int32, len(points))
	for i, p := range points {
		all[i] = gridPoint{
			int32(math.Floor((p.X - lo.X) / size * (1<<gridBits - 1))),
			int32(math.Floor((p.Y - lo.Y) / size * (1<<gridBits - 1))),
		}
		number[i] = int32(i)
	}
	slices.SortFunc(number, func(i, j int32) int {
		a, b := all[i], all[j]
		switch {
		case a.x != b.x:
			return int(a.x - b.x)
		case a.y != b.y:
			return int(a.y - b.y)
		}
		return int(i - j)
	})
	grid = make([]gridPoint, 0, len(points))
	n := 0
	for _, i := range number {
		if n > 0 && grid[n-1] == all[i] {
			continue
		}
		grid = append(grid, all[i])
		number[n] = i
		n++
	}
	if n < 3 {
		return nil, nil, errors.New("fewer than three of them differ")
	}
	return number[:n], grid, nil
}

func (d *divided) dest(e int32) int32  { return d.org[e^1] }
func (d *divided) lnext(e int32) int32 { return d.oprev[e^1] }

func (d *divided) edge(a, b int32) int32 {
	if n := len(d.free); n > 0 {
		e := d.free[n-1]
		d.free = d.free[:n-1]
		d.org[e], d.org[e^1] = a, b
		d.onext[e], d.onext[e^1], d.oprev[e], d.oprev[e^1] = e, e^1, e, e^1
		return e
	}
	e := int32(len(d.org))
	d.org = append(d.org, a, b)
	d.onext = append(d.onext, e, e^1)
	d.oprev = append(d.oprev, e, e^1)
	return e
}

// splice joins or parts the rings of edges around the starts of a and b.
func (d *divided) splice(a, b int32) {
	an, bn := d.onext[a], d.onext[b]
	d.onext[a], d.onext[b] = bn, an
	d.oprev[bn], d.oprev[an] = a, b
}

// connect adds the edge from the end of a to the start of b, which bound one face on their left.
func (d *divided) connect(a, b int32) int32 {
	e := d.edge(d.dest(a), d.org[b])
	d.splice(e, d.lnext(a))
	d.splice(e^1, b)
	return e
}

func (d *divided) remove(e int32) {
	d.splice(e, d.oprev[e])
	d.splice(e^1, d.oprev[e^1])
	d.org[e], d.org[e^1] = -1, -1
	d.free = append(d.free, e&^1)
}

// turn is positive where a, b, c run counter-clockwise, zero where they are in line.
func (d *divided) turn(a, b, c int32) int64 {
	p, q, r := d.p[a], d.p[b], d.p[c]
	return int64(q.x-p.x)*int64(r.y-p.y) - int64(q.y-p.y)*int64(r.x-p.x)
}

func (d *divided) leftOf(v, e int32) bool  { return d.turn(v, d.org[e], d.dest(e)) > 0 }
func (d *divided) rightOf(v, e int32) bool { return d.turn(v, d.dest(e), d.org[e]) > 0 }

// divide triangulates the points from (inclusive) to to (exclusive), and returns the counter-clockwise edge of the hull
// out of the leftmost point and the clockwise one out of the rightmost.
func (d *divided) divide(from, to int) (left, right int32) {
	s := int32(from)
	switch to - from {
	case 2:
		a := d.edge(s, s+1)
		return a, a ^ 1
	case 3:
		a, b := d.edge(s, s+1), d.edge(s+1, s+2)
		d.splice(a^1, b)
		switch turn := d.turn(s, s+1, s+2); {
		case turn > 0:
			d.connect(b, a)
		case turn < 0:
			c := d.connect(b, a)
			return c ^ 1, c
		}
		return a, b ^ 1
	}
	middle := (from + to) / 2
	lo, li := d.divide(from, middle)
	ri, ro := d.divide(middle, to)
	for { // down to the common tangent below both
		switch {
		case d.leftOf(d.org[ri], li):
			li = d.lnext(li)
			continue
		case d.rightOf(d.org[li], ri):
			ri = d.onext[ri^1]
			continue
		}
		break
	}
	base := d.connect(ri^1, li)
	if d.org[li] == d.org[lo] {
		lo = base ^ 1
	}
	if d.org[ri] == d.org[ro] {
		ro = base
	}
	d.merge(base)
	return lo, ro
}

// merge sews the two halves from the lower tangent upward.
func (d *divided) merge(base int32) {
	above := func(e int32) bool { return d.rightOf(d.dest(e), base) }
	for {
		l := d.onext[base^1]
		if above(l) {
			for d.inCircle(d.dest(base), d.org[base], d.dest(l), d.dest(d.onext[l])) {
				next := d.onext[l]
				d.remove(l)
				l = next
			}
		}
		r := d.oprev[base]
		if above(r) {
			for d.inCircle(d.dest(base), d.org[base], d.dest(r), d.dest(d.oprev[r])) {
				next := d.oprev[r]
				d.remove(r)
				r = next
			}
		}
		lup, rup := above(l), above(r)
		switch {
		case !lup && !rup:
			return
		case !lup || rup && d.inCircle(d.dest(l), d.org[l], d.org[r], d.dest(r)):
			base = d.connect(r, base^1)
		default:
			base = d.connect(base^1, l^1)
		}
	}
}
