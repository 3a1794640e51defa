package topology

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/field/trace"
)

// halfPlace is where a half point is on the rim of a half model.
type halfPlace struct {
	rim, edge int     // number of the rim, and of the edge in it
	share     float64 // of the edge, from its tail
}

// findHalves finds the places of the half points on their rims; other points get none.
func (b *builder) findHalves() map[int]halfPlace {
	halves := map[int]halfPlace{} // for looking up only
	for i := range b.s.Points {
		p := &b.s.Points[i]
		if !p.Half {
			continue
		}
		least := math.Inf(1)
		for k := range b.s.count.rims {
			r := &b.s.count.rims[k]
			for e, h := range b.f.Rims[k].Edges {
				if r.plane[e] < 0 {
					continue
				}
				a := b.f.Points[b.f.Tail(h)]
				d := b.f.Points[b.f.Tip(h)].Sub(a)
				u := footShare(a, d, p.Position)
				if off := a.AddScaled(u, d).Sub(p.Position).Norm(); off < least {
					least, halves[i] = off, halfPlace{k, e, u}
				}
			}
		}
	}
	return halves
}

// atHalfSaddle returns the separatrices of half saddle i: two along the plane of symmetry, which a curve cannot follow
// since it would leave through the rim, and one across it. Tau runs away from the saddle along the rim to both sides, and
// across it towards the saddle, or the other way about.
func (b *builder) atHalfSaddle(i int, halves map[int]halfPlace) []start {
	p := &b.s.Points[i]
	at, ok := halves[i]
	if !ok {
		return nil
	}
	var out []start
	away := 0
	for _, step := range [2]int{1, -1} {
		path, with := b.alongRim(i, step, halves)
		if with {
			away++
		}
		if len(path.Locs) > 0 || path.Stop >= 0 {
			out = append(out, start{point: i, backward: !with, path: &path})
		}
	}
	h := b.f.Rims[at.rim].Edges[at.edge]
	if loc, ok := straight(b.f.Mesh, p.Loc, conormal(b.f.Mesh, h).Scale(-1), float64(startShare*p.Size)); ok && away != 1 {
		out = append(out, start{point: i, loc: loc, backward: away > 0})
	}
	return out
}

// alongRim follows the plane of symmetry from half point i, along the rim (step 1) or against it (step -1), to the next
// half point or to where the plane ends. With tells whether tau runs in that direction.
func (b *builder) alongRim(i, step int, halves map[int]halfPlace) (path trace.Path, with bool) {
	from := halves[i]
	edges, plane := b.f.Rims[from.rim].Edges, b.s.count.rims[from.rim].plane
	n := len(edges)
	path = trace.Path{Stop: -1, Loop: -1, End: trace.Rim}
	known := false
	for k, e, share := 0, from.edge, from.share; k <= n && plane[e] == plane[from.edge]; k++ {
		if next := b.nextHalf(i, step, halves, halfPlace{from.rim, e, share}); next >= 0 {
			path.End, path.Stop = trace.Captured, next
			break
		}
		h := edges[e]
		v, end := b.f.Tip(h), 1.0
		if step < 0 {
			v, end = b.f.Tail(h), 0
		}
		path.Locs = append(path.Locs, field.Loc{Tri: h / 3, Bary: onEdge(h, end)})
		if !known && !b.f.IsZero(v) {
			known = true
			_, c := r3.SinCos(b.f.Angle(v) - forward(b.f.Mesh, v))
			with = float64(step)*c > 0
		}
		e, share = (e+step+n)%n, 1-end
	}
	return path, with
}

// nextHalf returns the half point that is met first on the edge of the place, going on from there; -1 for none.
func (b *builder) nextHalf(besides, step int, halves map[int]halfPlace, at halfPlace) int {
	best, least := -1, math.Inf(1)
	for i := range b.s.Points {
		q, ok := halves[i]
		if !ok || i == besides || q.rim != at.rim || q.edge != at.edge {
			continue
		}
		if d := (q.share - at.share) * float64(step); d >= 0 && d < least {
			best, least = i, d
		}
	}
	return best
}
