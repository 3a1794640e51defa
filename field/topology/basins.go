package topology

import (
	"context"

	"shearprint/field"
	"shearprint/field/trace"
)

// Basin is a part of the surface whose streamlines come from one source and go to one sink.
type Basin struct {
	// Source and Sink are numbers in Skeleton.Points; -1 for a rim, a cycle, or what could not be followed.
	Source, Sink int
	Triangles    int
	Area         float64
}

// addBasins cuts the surface along the separatrices, the cycles and the streamlines that touch a rim from inside. Within
// each piece that is left all streamlines have the same source and sink: one curve through its middle tells them. Triangles
// on a cut belong to the piece that reaches them first, and pieces with the same ends that meet are one basin.
func (b *builder) addBasins(ctx context.Context) error {
	cut := b.cuts(ctx)
	if err := ctx.Err(); err != nil {
		return err
	}
	n := len(b.f.Tris)
	piece := make([]int32, n)
	for t := range piece {
		piece[t] = -1
	}
	var middles []int32 // per piece, the triangle reached last: the one deepest inside, in a sense
	for t := range int32(n) {
		if piece[t] < 0 && !cut[t] {
			middles = append(middles, b.flood(t, int32(len(middles)), cut, piece))
		}
	}
	ends := make([][2]int, len(middles))
	paths := make([]trace.Both, len(middles))
	if err := inBlocks(ctx, len(middles), 1, func(from, to int) {
		for i := from; i < to; i++ {
			l := field.Loc{Tri: middles[i], Bary: [3]float64{1. / 3, 1. / 3, 1. / 3}}
			paths[i] = b.t.Through(ctx, l, trace.Options{})
		}
	}); err != nil {
		return err
	}
	for i := range paths {
		ends[i] = b.endsOf(&paths[i])
		paths[i] = trace.Both{}
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	b.fill(piece)
	b.join(piece, ends)
	return nil
}

// cuts marks the triangles that separatrices, cycles and tangent streamlines run through.
func (b *builder) cuts(ctx context.Context) []bool {
	cut := make([]bool, len(b.f.Tris))
	around := func(t int32) {
		for _, v := range b.f.Tris[t] {
			for h := range b.f.Fan(v) {
				cut[h/3] = true
			}
		}
	}
	mark := func(locs []field.Loc) {
		for i, l := range locs {
			cut[l.Tri] = true
			if i > 0 && !b.adjacent(locs[i-1].Tri, l.Tri) { // past a vertex, or from a point to the curve's beginning
				around(locs[i-1].Tri)
				around(l.Tri)
			}
		}
	}
	for i := range b.s.Points {
		around(b.s.Points[i].Loc.Tri)
	}
	for i := range b.s.Lines {
		mark(b.s.Lines[i].Locs)
	}
	for _, l := range b.tangentPlaces() {
		both := b.t.Through(ctx, l, trace.Options{})
		mark(both.Locs)
	}
	return cut
}

// adjacent tells whether two triangles are one or have a common edge.
func (b *builder) adjacent(t, u int32) bool {
	if t == u {
		return true
	}
	for h := 3 * t; h < 3*t+3; h++ {
		if g := b.f.Twin[h]; g >= 0 && g/3 == u {
			return true
		}
	}
	return false
}

// mostTangent bounds the streamlines traced from tangencies: on a rim with noise every edge has one.
const mostTangent = 256

// tangentPlaces lists where tau changes between entering and leaving along a rim.
func (b *builder) tangentPlaces() []field.Loc {
	var out []field.Loc
	for _, r := range b.f.Rims {
		side := func(i int) bool {
			h := r.Edges[i%len(r.Edges)]
			return b.f.At(field.Loc{Tri: h / 3, Bary: onEdge(h, 0.5)}).Tau3.Dot(conormal(b.f.Mesh, h)) > 0
		}
		for i := range r.Edges {
			if side(i) != side(i+1) && len(out) < mostTangent {
				h := r.Edges[i]
				out = append(out, inside(field.Loc{Tri: h / 3, Bary: onEdge(h, 1-keepOff)}))
			}
		}
	}
	return out
}

// flood numbers the triangles that can be reached from t without meeting a cut, and returns the last one.
func (b *builder) flood(t, number int32, cut []bool, piece []int32) int32 {
	piece[t] = number
	queue := []int32{t}
	for i := 0; i < len(queue); i++ {
		t = queue[i]
		for h := 3 * t; h < 3*t+3; h++ {
			if g := b.f.Twin[h]; g >= 0 && piece[g/3] < 0 && !cut[g/3] {
				piece[g/3] = number
				queue = append(queue, g/3)
			}
		}
	}
	return queue[len(queue)/2]
}

// endsOf tells the source and the sink of a streamline.
func (b *builder) endsOf(p *trace.Both) [2]int {
	ends := [2]int{b.arrival(&p.Back), b.arrival(&p.Ahead)}
	for i, e := range ends {
		if e >= 0 && b.s.Points[e].Index < 0 { // a saddle takes single curves only, not a region
			ends[i] = -1
		}
	}
	return ends
}

// fill gives the triangles on cuts the piece of a neighbour, nearest first.
func (b *builder) fill(piece []int32) {
	var queue []int32
	for t := range piece {
		if piece[t] >= 0 {
			queue = append(queue, int32(t))
		}
	}
	for i := 0; i < len(queue); i++ {
		t := queue[i]
		for h := 3 * t; h < 3*t+3; h++ {
			if g := b.f.Twin[h]; g >= 0 && piece[g/3] < 0 {
				piece[g/3] = piece[t]
				queue = append(queue, g/3)
			}
		}
	}
}

// join makes basins of the pieces: those that touch and have the same ends are one.
func (b *builder) join(piece []int32, ends [][2]int) {
	set := newSets(len(ends))
	for h, g := range b.f.Twin {
		if g < 0 {
			continue
		}
		p, q := piece[h/3], piece[g/3]
		if p >= 0 && q >= 0 && p != q && ends[p] == ends[q] {
			set.union(p, q)
		}
	}
	number := make([]int32, len(ends))
	for i := range number {
		number[i] = -1
	}
	b.s.Basins = make([]int32, len(piece))
	for t, p := range piece {
		b.s.Basins[t] = -1
		if p < 0 {
			continue // no piece reaches it: the cuts cover its whole part
		}
		root := set.find(p)
		if number[root] < 0 {
			number[root] = int32(len(b.s.Regions))
			b.s.Regions = append(b.s.Regions, Basin{Source: ends[p][0], Sink: ends[p][1]})
		}
		r := &b.s.Regions[number[root]]
		r.Triangles++
		r.Area += b.f.Area(int32(t))
		b.s.Basins[t] = number[root]
	}
}
