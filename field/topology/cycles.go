package topology

import (
	"context"
	"fmt"
	"math"

	"shearprint/field"
	"shearprint/field/trace"
)

const (
	// bandExponent is the power of e by which one turn must change the distance of neighbours for a closed orbit to be
	// a cycle: below, it is one of a band of closed orbits as far as the mesh can tell, as around a centre.
	bandExponent = 0.02
	// sameShare is the distance on a common edge, as a share of it, below which two orbits are one.
	sameShare = 0.05
	// beside is how many edges beside a cycle its neighbours are followed, to find what lies behind them.
	beside = 1.5
	// leastTurn is the length in mean edges that a closed orbit must have: shorter ones run around a zero.
	leastTurn = 6
	// mostSeeds bounds the curves that are traced in search of cycles; an ordinary run needs a few dozen.
	mostSeeds = 4096
	// rimSeeds is the number of curves that are started along one rim.
	rimSeeds = 8
)

// seedCurve is a curve to be traced in search of cycles.
type seedCurve struct {
	loc      field.Loc
	backward bool
}

// winding is a separatrix that ends on a closed orbit.
type winding struct {
	path     trace.Path
	backward bool
}

// orbits collects cycles. Every edge that a cycle crosses remembers where; a second orbit there is the same one.
type orbits struct {
	b       *builder
	crossed map[int32][]float64 // shares, per the lower half-edge of an edge; for looking up only
	lines   []Line
}

// addCycles finds the closed orbits: the curves that start at points, that cross rims, and that leave cycles already found
// to either side are followed until they end; those that end on closed orbits are cycles if neighbours approach or leave.
func (b *builder) addCycles(ctx context.Context) error {
	o := orbits{b: b, crossed: map[int32][]float64{}}
	queue := append(b.seedsAtPoints(), b.seedsAtRims()...)
	queue = append(queue, b.seedsInBareParts()...)
	for _, w := range b.winding {
		if l, ok := o.take(&w.path, w.backward); ok {
			queue = append(queue, o.sides(l)...)
		}
	}
	b.winding = nil
	for n := 0; len(queue) > 0 && n < mostSeeds; {
		batch := queue[:min(len(queue), mostSeeds-n)]
		n += len(batch)
		paths := make([]trace.Path, len(batch))
		if err := inBlocks(ctx, len(batch), 1, func(from, to int) {
			for i := from; i < to; i++ {
				paths[i] = b.t.Trace(ctx, batch[i].loc, trace.Options{Backward: batch[i].backward})
			}
		}); err != nil {
			return err
		}
		queue = nil
		for i := range paths {
			if l, ok := o.take(&paths[i], batch[i].backward); ok {
				queue = append(queue, o.sides(l)...)
			}
		}
	}
	b.s.Lines = append(b.s.Lines, o.lines...)
	return nil
}

// seedsAtPoints starts beside every node, focus and centre, and follows the curve away from it.
func (b *builder) seedsAtPoints() []seedCurve {
	var out []seedCurve
	for i := range b.s.Points {
		p := &b.s.Points[i]
		if p.Index < 0 {
			continue // its separatrices were traced
		}
		loc, ok := straight(b.f.Mesh, p.Loc, p.Frame[0], float64(startShare*p.Size))
		if !ok {
			loc, ok = straight(b.f.Mesh, p.Loc, p.Frame[0].Scale(-1), float64(startShare*p.Size))
		}
		if !ok {
			continue
		}
		switch {
		case p.Trace > 0:
			out = append(out, seedCurve{loc, false})
		default:
			out = append(out, seedCurve{loc, true})
		}
	}
	return out
}

// seedsAtRims starts at places spread along every rim, into the surface.
func (b *builder) seedsAtRims() []seedCurve {
	var out []seedCurve
	for _, r := range b.f.Rims {
		for i := range min(rimSeeds, len(r.Edges)) {
			h := r.Edges[i*len(r.Edges)/min(rimSeeds, len(r.Edges))]
			l := field.Loc{Tri: h / 3, Bary: onEdge(h, 0.5)}
			out = append(out, seedCurve{l, b.f.At(l).Tau3.Dot(conormal(b.f.Mesh, h)) > 0})
		}
	}
	return out
}

// seedsInBareParts starts both ways in the first triangle of every part without points.
func (b *builder) seedsInBareParts() []seedCurve {
	seen := make([]bool, len(b.f.Parts))
	for i := range b.s.Points {
		seen[b.s.Points[i].Part] = true
	}
	var out []seedCurve
	for t, p := range b.f.Part {
		if !seen[p] {
			seen[p] = true
			l := field.Loc{Tri: int32(t), Bary: [3]float64{1. / 3, 1. / 3, 1. / 3}}
			out = append(out, seedCurve{l, false}, seedCurve{l, true})
		}
	}
	return out
}

// take notes the orbit that the path ends on, if it is a cycle and new.
func (o *orbits) take(p *trace.Path, backward bool) (Line, bool) {
	if p.End != trace.Cycle || p.Loop < 0 {
		return Line{}, false
	}
	turn := trace.Path{Locs: append(append([]field.Loc{}, p.Locs[p.Loop:]...), p.Locs[p.Loop])}
	l := Line{Type: Cycle, From: -1, To: -1, Locs: ahead(&turn, backward)}
	l.Length = lengthOf(o.b.f, l.Locs)
	if l.Length < float64(leastTurn*o.b.edge) || !o.isNew(l.Locs) {
		return Line{}, false
	}
	e := o.b.rates.exponents(l.Locs)
	total := e[len(e)-1]
	if math.Abs(total) < bandExponent {
		o.b.bands++
		return Line{}, false
	}
	l.Stable = total < 0
	l.Kind, l.Strength = AttachmentLine, math.Min(math.Abs(total), mostExponent)
	what := "part from it, going forward"
	if l.Stable {
		l.Kind = SeparationLine
		what = "approach it"
	}
	l.Reason = fmt.Sprintf("cycle: a closed streamline; its neighbours %s, %s in a turn", what, fold(l.Strength))
	o.lines = append(o.lines, l)
	return l, true
}

// isNew tells whether no orbit taken before crosses an edge at the same place, and notes where this one does.
func (o *orbits) isNew(locs []field.Loc) bool {
	f := o.b.f
	type mark struct {
		h     int32
		share float64
	}
	var marks []mark
	for i := 1; i < len(locs); i++ {
		a, c := locs[i-1], locs[i]
		if a.Tri == c.Tri {
			continue
		}
		for h := 3 * a.Tri; h < 3*a.Tri+3; h++ {
			g := f.Twin[h]
			if g < 0 || g/3 != c.Tri {
				continue
			}
			// The curve crosses near both places; the one with the smaller weight off the edge is on it.
			share := a.Bary[field.Next(h)%3]
			if c.Bary[field.Prev(g)%3] < a.Bary[field.Prev(h)%3] {
				share = 1 - c.Bary[field.Next(g)%3]
			}
			if g < h {
				h, share = g, 1-share
			}
			marks = append(marks, mark{h, share})
			break
		}
	}
	for _, m := range marks {
		for _, s := range o.crossed[m.h] {
			if math.Abs(s-m.share) < sameShare {
				return false
			}
		}
	}
	for _, m := range marks {
		o.crossed[m.h] = append(o.crossed[m.h], m.share)
	}
	return true
}

// sides starts beside the cycle, left and right, in the direction in which neighbours leave it.
func (o *orbits) sides(l Line) []seedCurve {
	var out []seedCurve
	f := o.b.f
	at := l.Locs[len(l.Locs)/2]
	tau := f.At(at).Tau
	for _, sign := range [2]float64{1, -1} {
		d := f.Lift(at.Tri, tau.Left().Scale(sign))
		if loc, ok := straight(f.Mesh, at, d, float64(beside*o.b.edge)); ok {
			out = append(out, seedCurve{loc, l.Stable})
		}
	}
	return out
}
